"""The state of a well: what it holds, and what its printed form says."""

import re
from functools import partial
from typing import Any

import numpy as np
import pytest

from tests.builders import LAYERS, TOP, layered_well, pascals
from wellindex import BackflowWarning, ShapeError, WellState, unit_system, ureg

RATES = {
    "metric": ("sm3/day", "rm3/day"),
    "oilfield": ("stb/day", "rb/day"),
    "si": ("sm3/s", "m**3/s"),
    "darcy": ("scm3/s", "cm**3/s"),
}
PRESSURES = {"metric": "bar", "oilfield": "psi", "si": "Pa", "darcy": "atm"}

close = partial(pytest.approx, abs=0)


def producing() -> WellState:
    """A producer with all couplings flowing out."""
    return layered_well().at_pressure("150 bar", block_pressure=pascals([2e7, 2.1e7, 2e7, 2.2e7]))


def printed(text: str, label: str) -> Any:
    """Read a value printed behind its label."""
    match = re.search(rf"{label}\s+(\S+ \S+)", text)
    assert match is not None, text
    return ureg.Quantity(match[1])


@pytest.mark.parametrize("system", RATES)
def test_both_rates_are_printed_with_units_of_their_own(system: str) -> None:
    state = producing()
    with unit_system(system):
        text = str(state)
    surface, reservoir = (printed(text, f"{kind} rate") for kind in ("surface", "reservoir"))
    assert surface.units == ureg.Unit(RATES[system][0])
    assert reservoir.units == ureg.Unit(RATES[system][1])
    assert surface.dimensionality != reservoir.dimensionality
    assert surface.m == pytest.approx(state.rate.m_as(surface.units), rel=5e-6)
    assert reservoir.m == pytest.approx(state.reservoir_rate.m_as(reservoir.units), rel=5e-6)
    pressure = printed(text, "bottom-hole pressure")
    assert pressure.units == ureg.Unit(PRESSURES[system])
    assert pressure.m_as("bar") == pytest.approx(150.0, rel=5e-6)
    depth = re.search(r"at (\S+ \S+) depth", text)
    assert depth is not None
    assert ureg.Quantity(depth[1]).m_as("m") == pytest.approx(TOP + LAYERS[0] / 2, rel=5e-6)


@pytest.mark.parametrize("system", RATES)
def test_the_table_of_couplings(system: str) -> None:
    state = producing()
    with unit_system(system):
        columns = {column.name: column for column in state.columns()}
        lines = str(state).split("\n\n")[1].splitlines()
    expected = {
        "depth": state.couplings.depth,
        "wellbore_pressure": state.coupling_pressure,
        "drawdown": state.coupling_drawdown,
        "reservoir_rate": state.coupling_rate,
        "surface_rate": state.coupling_surface_rate,
    }
    for name, values in expected.items():
        found = ureg.Quantity(np.array(columns[name].values), columns[name].unit)
        assert found.m_as(values.units) == close(values.m, rel=1e-13)
    assert ureg.Unit(columns["surface_rate"].unit) == ureg.Unit(RATES[system][0])
    assert ureg.Unit(columns["reservoir_rate"].unit) == ureg.Unit(RATES[system][1])
    assert lines[0].split() == ["i", "j", "k", *expected, "backflow"]
    assert [line.split()[-1] for line in lines[3:]] == ["no"] * 4


def test_backflow_is_printed() -> None:
    with pytest.warns(BackflowWarning):
        state = layered_well().at_pressure(
            "150 bar", block_pressure=pascals([2e7, 1.2e7, 2e7, 2e7])
        )
    text = str(state)
    assert f"BACKFLOW: {state.backflow_words()}" in text
    assert [line.split()[-1] for line in text.splitlines()[-4:]] == ["no", "yes", "no", "no"]
    assert "BACKFLOW" not in str(producing())
    assert producing().backflow_words() == ""


def test_values_follow_the_unit_system() -> None:
    state = producing()
    metric = state.rate.m
    with unit_system("oilfield"):
        assert state.rate.units == ureg.Unit("stb/day")
        assert state.coupling_surface_rate.units == ureg.Unit("stb/day")
        assert state.rate.m_as("sm3/day") == close(metric, rel=1e-14)
        assert state.pwf.units == ureg.Unit("psi")
        assert state.reference_depth.units == ureg.Unit("ft")


def test_types_of_one_state() -> None:
    state = producing()
    for value in (state.pwf, state.rate, state.reservoir_rate):
        assert isinstance(value.m, float)
    assert isinstance(state.well_backflow, bool)
    assert state.backflow.dtype == np.bool_
    assert state.coupling_rate.shape == state.backflow.shape == (4,)


def test_many_states_print_as_a_summary() -> None:
    state = layered_well().at_pressure(pascals([1e7, 1.2e7]), block_pressure="200 bar")
    assert str(state) == state.summary() == "producer in 2 states of shape (2,)"
    with pytest.raises(ValueError, match="a table shows one state"):
        state.columns()


def test_block_pressure_is_the_one_given() -> None:
    given_ = pascals([2e7, 2.1e7, 2e7, 2.2e7])
    assert producing().block_pressure.m_as("Pa") == close(given_.m, rel=1e-14)


def test_repr_says_what_it_is() -> None:
    state = layered_well().at_rate("100 sm3/day", block_pressure="200 bar")
    assert repr(state) == f"WellState(producer, {state.pwf}, 100 sm3/day, 120 rm3/day)"
    many = layered_well().at_pressure(pascals([[1e7, 1.2e7]]), block_pressure="200 bar")
    assert repr(many) == "WellState(producer, 2 states of shape (1, 2))"


def test_many_states_make_no_table() -> None:
    many = layered_well().at_pressure(pascals([1e7, 1.2e7]), block_pressure="200 bar")
    with pytest.raises(ShapeError, match="a table shows one state; this holds many"):
        many.columns()
