"""What a well refuses or marks: pressures below zero, bad input, shapes that do not fit."""

import math
from functools import partial
from typing import Any

import numpy as np
import pytest
from scipy.optimize import brentq

from tests.builders import GRAVITY, LAYERS, TOP, brine, by_hand, layered_well, pascals
from wellindex import (
    AssumptionWarning,
    DomainError,
    ShapeError,
    UnitsError,
    Well,
    ureg,
)

close = partial(pytest.approx, abs=0)

WELL = layered_well()
ROWS = WELL.couplings
BLOCKS = pascals([2.0e7, 2.1e7, 2.05e7, 2.2e7])


def largest_rate(well: Well, blocks: Any, *, density: float, mu: float) -> float:
    """The rate when the lowest pressure in the wellbore is zero, by root finding, SI."""
    depths = np.append(well.couplings.depth.m_as("m"), well.reference_depth.m_as("m"))
    heads = density * GRAVITY * (depths - well.reference_depth.m_as("m"))
    pwf = brentq(lambda p: float(np.min(p + heads)), -1e9, 1e9, xtol=1e-9)
    return math.fsum(by_hand(well, pwf, blocks, density=density, mu=mu))


@pytest.mark.parametrize("reference", ["1000 m", "1502 m", "4000 m"])
def test_a_pressure_below_zero_is_refused_with_the_largest_rate(reference: str) -> None:
    well = layered_well(reference_depth=reference)
    largest = largest_rate(well, BLOCKS.m_as("Pa"), density=950.0, mu=5e-4)
    with pytest.raises(DomainError, match="none is below zero") as caught:
        well.at_rate(ureg.Quantity(1.0001 * largest, "m**3/s"), block_pressure=BLOCKS)
    surface = ureg.Quantity(largest / 1.2, "sm3/s").m_as("sm3/day")
    reservoir = ureg.Quantity(largest, "m**3/s").m_as("m**3/day")
    said = str(caught.value)
    assert f"the largest rate, at zero pressure, is {surface:.6g} sm3/day" in said
    assert f"({reservoir:.6g} rm3/day)" in said
    fits = well.at_rate(ureg.Quantity(0.9999 * largest, "m**3/s"), block_pressure=BLOCKS)
    assert min(fits.pwf.m, *fits.coupling_pressure.m) >= 0.0


def test_a_deep_reference_pressure_below_the_column_is_refused() -> None:
    # 950 kg/m3 * 9.80665 m/s2 * 2498 m is 232.7 bar.
    well = layered_well(reference_depth="4000 m")
    column = 950 * GRAVITY * (4000.0 - (TOP + LAYERS[0] / 2)) / 1e5
    with pytest.raises(DomainError, match=rf"needs a pressure of {100.0 - column:.6g} bar in the"):
        well.at_pressure("100 bar", block_pressure="200 bar")


@pytest.mark.parametrize(("role", "count"), [("injector", 1), ("producer", 2)])
def test_a_largest_rate_belongs_to_one_state_of_a_producer(role: str, count: int) -> None:
    well = layered_well(reference_depth="4000 m", role=role)
    blocks = pascals(np.full((count, 4) if count > 1 else 4, 2e7))
    with pytest.raises(DomainError, match=r"in the wellbore, and none is below zero$"):
        well.at_pressure("100 bar", block_pressure=blocks)


def test_a_dead_well_is_told_so() -> None:
    well = layered_well(reference_depth="4000 m")
    with pytest.raises(DomainError, match="at no bottom-hole pressure does this well produce"):
        well.at_rate("1000 sm3/day", block_pressure="0 bar")


@pytest.mark.parametrize(
    ("call", "error", "words"),
    [
        ({"block_pressure": pascals([2e7, 2e7])}, ShapeError, "2 values in its last axis; the w"),
        ({"block_pressure": pascals(np.ones((4, 2)))}, ShapeError, "the well has 4 couplings"),
        (
            {"pwf": pascals([1e7] * 3), "block_pressure": pascals(np.full((2, 4), 2e7))},
            ShapeError,
            r"pwf of shape \(3,\) does not fit block_pressure, which has the shape \(2, 4\)",
        ),
        ({"pwf": "-1 bar"}, DomainError, "pwf: needs an absolute or gauge pressure, zero or pos"),
        ({"block_pressure": "-1 bar"}, DomainError, "block_pressure: "),
        ({"pwf": 150.0}, UnitsError, "pwf: needs an absolute or gauge pressure"),
        ({"pwf": "150 m"}, UnitsError, "pwf: needs an absolute or gauge pressure"),
        ({"pwf": ureg.Quantity(math.nan, "bar")}, DomainError, "pwf: "),
        ({"pwf": ureg.Quantity(150.0, "delta_bar_gauge")}, UnitsError, "a difference of two"),
        ({"invalid": "skip"}, DomainError, "one of 'raise', 'nan'"),
    ],
)
def test_bad_pressures(call: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        WELL.at_pressure(**({"pwf": "150 bar", "block_pressure": "200 bar"} | call))


@pytest.mark.parametrize(
    ("call", "error", "words"),
    [
        ({"rate": "100 bar"}, UnitsError, "rate: needs a reservoir rate .* or a surface rate"),
        ({"rate": 100.0}, UnitsError, "rate: "),
        ({"rate": "100 kg/s"}, UnitsError, "rate: "),
        ({"rate": ureg.Quantity(math.inf, "sm3/day")}, DomainError, "rate: "),
        (
            {
                "rate": ureg.Quantity([1.0, 2.0, 3.0], "sm3/day"),
                "block_pressure": pascals(np.full((2, 4), 2e7)),
            },
            ShapeError,
            r"rate of shape \(3,\) does not fit",
        ),
    ],
)
def test_bad_rates(call: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        WELL.at_rate(**({"rate": "100 sm3/day", "block_pressure": "200 bar"} | call))


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"couplings": [1, 2]}, UnitsError, "couplings: needs Couplings"),
        ({"fluid": "water"}, UnitsError, "fluid: needs Liquid"),
        ({"reference_depth": 1500.0}, UnitsError, "reference_depth: needs a position"),
        (
            {"reference_depth": ureg.Quantity([1500.0, 1501.0], "m")},
            ShapeError,
            "reference_depth is one value",
        ),
        ({"relative_permeability": 1.5}, DomainError, "relative_permeability: needs a fraction"),
        (
            {"relative_permeability": [0.1, 0.2]},
            ShapeError,
            r"one value, or one per coupling \(4\); got \(2,\)",
        ),
    ],
)
def test_bad_wells(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Well(**({"couplings": ROWS, "fluid": brine()} | changed))


def test_invalid_nan_keeps_the_other_pressures() -> None:
    pwf = ureg.Quantity([150.0, math.nan, -5.0, 100.0], "bar")
    with pytest.raises(DomainError, match=r"pwf: .*\[1\]"):
        WELL.at_pressure(pwf, block_pressure="200 bar")
    with pytest.warns(AssumptionWarning, match="2 x pwf must be zero or positive") as caught:
        state = WELL.at_pressure(pwf, block_pressure="200 bar", invalid="nan")
    assert len(caught) == 1
    assert np.isnan(state.rate.m).tolist() == [False, True, True, False]
    assert np.isnan(state.coupling_rate.m).all(axis=-1).tolist() == [False, True, True, False]
    sound = WELL.at_pressure(pascals([1.5e7, 1e7]), block_pressure="200 bar")
    assert state.rate.m[[0, 3]] == close(sound.rate.m, rel=1e-14)
    assert state.well_backflow.tolist() == [False] * 4


def test_invalid_nan_keeps_the_other_block_pressures() -> None:
    blocks = np.full((3, 4), 200.0)
    blocks[1, 2] = math.inf
    with pytest.warns(AssumptionWarning, match="1 x block_pressure must be zero or positive"):
        state = WELL.at_pressure(
            "150 bar", block_pressure=ureg.Quantity(blocks, "bar"), invalid="nan"
        )
    assert np.isnan(state.rate.m).tolist() == [False, True, False]
    assert np.isnan(state.coupling_rate.m[1]).tolist() == [False, False, True, False]


def test_invalid_nan_keeps_the_other_rates() -> None:
    rate = ureg.Quantity([100.0, -1.0, 1e9], "sm3/day")
    with pytest.warns(AssumptionWarning) as caught:
        state = WELL.at_rate(rate, block_pressure="200 bar", invalid="nan")
    said = [str(w.message) for w in caught]
    assert any("1 x a producer's rate is positive" in words for words in said)
    assert any("1 x a bottom-hole pressure below zero" in words for words in said)
    assert np.isnan(state.pwf.m).tolist() == [False, True, True]
    assert state.pwf.m[0] == close(
        WELL.at_rate("100 sm3/day", block_pressure="200 bar").pwf.m, rel=1e-14
    )
