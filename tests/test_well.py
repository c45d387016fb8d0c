"""Wells: rate and bottom-hole pressure, head by hand, second methods, refusals."""

import math
import warnings
from fractions import Fraction
from functools import partial
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from tests import strategies
from tests.builders import (
    BASE,
    GRAVITY,
    LAYER_K,
    LAYERS,
    TOP,
    blocks_of,
    brine,
    by_hand,
    layered_couplings,
    layered_well,
    pascals,
    rock,
    route,
)
from wellindex import (
    AssumptionWarning,
    BackflowWarning,
    Couplings,
    DomainError,
    Liquid,
    Well,
    WellState,
    couple,
    unit_system,
    ureg,
)

close = partial(pytest.approx, abs=0)

WELL = layered_well()
ROWS = WELL.couplings
OIL = Liquid(viscosity="0.9 cP", formation_volume_factor=1.25)
BLOCKS = pascals([2.0e7, 2.1e7, 2.05e7, 2.2e7])


def one_layer() -> Couplings:
    """One coupling at the depth of its block."""
    grid = blocks_of([100.0], [100.0], [10.0], origin=ureg.Quantity([0.0, 0.0, 2000.0], "m"))
    path = route((50.0, 50.0, 2000.0), (50.0, 50.0, 2010.0))
    return couple(path, grid, rock(1e-13, 1e-13, 1e-14), rw="0.1 m")


@given(
    pwf=st.floats(3e6, 1e7),
    blocks=st.lists(st.floats(1.6e7, 3e7), min_size=5, max_size=5),
    reference=st.floats(1200.0, 1700.0),
)
def test_rates_at_a_pressure_one_by_one(pwf: float, blocks: list[float], reference: float) -> None:
    opened = layered_couplings(intervals=[("1 m", "6 m"), ("9 m", "17 m")])
    well = Well(opened, brine(), reference_depth=ureg.Quantity(reference, "m"))
    state = well.at_pressure(pascals(pwf), block_pressure=pascals(blocks))
    expected = by_hand(well, pwf, blocks, density=950.0, mu=5e-4)
    assert state.coupling_rate.m_as("m**3/s") == close(np.array(expected), rel=1e-9)
    assert state.reservoir_rate.m_as("m**3/s") == close(math.fsum(expected), rel=1e-9)
    assert state.rate.m_as("sm3/s") == close(math.fsum(expected) / 1.2, rel=1e-9)


@given(
    rate=st.floats(0.0, 5e-3),
    blocks=st.lists(st.floats(1.6e7, 1.65e7), min_size=4, max_size=4),
    surface=st.booleans(),
)
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_pressure_at_a_rate_by_root_finding(
    rate: float, blocks: list[float], surface: bool
) -> None:
    unit = "sm3/s" if surface else "m**3/s"
    state = WELL.at_rate(ureg.Quantity(rate, unit), block_pressure=pascals(blocks))

    def excess(pwf: float) -> float:
        at = WELL.at_pressure(pascals(pwf), block_pressure=pascals(blocks))
        return float((at.rate if surface else at.reservoir_rate).m_as(unit)) - rate

    expected = brentq(excess, 0.0, 3e7, xtol=1e-6)
    assert state.pwf.m_as("Pa") == pytest.approx(expected, abs=1e-3)


@given(rate=st.floats(1e-5, 5e-3), role=st.sampled_from(["producer", "injector"]))
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_rate_to_pressure_to_rate(rate: float, role: str) -> None:
    signed = rate if role == "producer" else -rate
    well = layered_well(role=role)
    there = well.at_rate(ureg.Quantity(signed, "m**3/s"), block_pressure=BLOCKS)
    back = well.at_pressure(there.pwf, block_pressure=BLOCKS)
    # The error of a rate is that of a pressure of 2e7 Pa in floats times sum(wi)/mu.
    floor = float(ROWS.wi.m_as("m**3").sum()) / 5e-4 * 2e7 * 1e-15
    assert back.reservoir_rate.m_as("m**3/s") == pytest.approx(signed, rel=1e-12, abs=8 * floor)
    assert there.reservoir_rate.m_as("m**3/s") == pytest.approx(signed, rel=1e-12, abs=8 * floor)
    assert there.rate.m_as("sm3/s") == pytest.approx(signed / 1.2, rel=1e-12, abs=8 * floor)


def test_round_trip_to_a_part_in_1e12() -> None:
    for rate in ("50 sm3/day", "150 sm3/day"):
        there = WELL.at_rate(rate, block_pressure="200 bar")
        back = WELL.at_pressure(there.pwf, block_pressure="200 bar")
        assert back.rate.m == close(there.rate.m, rel=1e-12)
        assert there.rate.m_as("sm3/day") == close(float(rate.split()[0]), rel=1e-12)


@given(
    first=st.floats(1e6, 1.5e7),
    second=st.floats(1e6, 1.5e7),
    share=st.floats(0.0, 1.0),
)
def test_rates_are_linear_in_pressure(first: float, second: float, share: float) -> None:
    between = share * first + (1 - share) * second
    rates = [
        WELL.at_pressure(pascals(p), block_pressure=BLOCKS).coupling_rate.m_as("m**3/s")
        for p in (first, second, between)
    ]
    mixed = share * rates[0] + (1 - share) * rates[1]
    assert rates[2] == pytest.approx(mixed, rel=1e-10, abs=1e-12 * float(np.max(rates)))


@given(pwf=st.floats(1e5, 4e7), blocks=st.lists(st.floats(1e7, 3e7), min_size=4, max_size=4))
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_couplings_add_up_to_the_well(pwf: float, blocks: list[float]) -> None:
    state = WELL.at_pressure(pascals(pwf), block_pressure=pascals(blocks))
    scale = float(np.abs(state.coupling_rate.m).sum())
    assert state.reservoir_rate.m == pytest.approx(
        math.fsum(state.coupling_rate.m), abs=1e-14 * scale
    )
    assert state.rate.m == pytest.approx(
        math.fsum(state.coupling_surface_rate.m), abs=1e-14 * scale
    )
    assert state.coupling_rate.m == close(1.2 * state.coupling_surface_rate.m, rel=1e-14)


def test_head_in_exact_fractions() -> None:
    # Density 950 kg/m3, g = 9.80665 m/s2; depths of the layers' middles and the reference 1490 m.
    well = layered_well(reference_depth="1490 m")
    state = well.at_pressure("150 bar", block_pressure="200 bar")
    gradient = Fraction(950) * Fraction("9.80665")
    top = Fraction(1500)
    for n, thickness in enumerate(Fraction(str(layer)) for layer in LAYERS):
        middle = top + thickness / 2
        expected = Fraction(150 * 10**5) + gradient * (middle - 1490)
        assert state.coupling_pressure[n].m_as("Pa") == close(float(expected), rel=1e-12)
        drawdown = Fraction(200 * 10**5) - expected
        assert state.coupling_drawdown[n].m_as("Pa") == close(float(drawdown), rel=1e-11)
        top += thickness
    assert state.reference_depth.m_as("m") == close(1490.0, rel=1e-14)


def test_block_pressure_is_carried_from_the_centre_of_the_block() -> None:
    # Opened from 0.5 m to 1.5 m of a layer 4 m thick: the coupling is 1 m above the centre.
    rows = layered_couplings(intervals=[("0.5 m", "1.5 m")])
    state = Well(rows, brine()).at_pressure("150 bar", block_pressure="200 bar")
    expected = Fraction(50 * 10**5) - Fraction(950) * Fraction("9.80665")
    assert state.coupling_drawdown[0].m_as("Pa") == close(float(expected), rel=1e-11)
    assert state.block_pressure[0].m_as("bar") == close(200.0, rel=1e-14)


def test_the_reference_is_the_shallowest_coupling_by_default() -> None:
    assert WELL.reference_depth.m_as("m") == close(TOP + LAYERS[0] / 2, rel=1e-13)
    up = couple(
        route((120.0, 180.0, BASE), (120.0, 180.0, TOP)),
        blocks_of([80.0] * 3, [120.0] * 3, LAYERS, origin=ureg.Quantity([0, 0, TOP], "m")),
        rock(1e-13, 1e-13, 1e-14),
        rw="0.1 m",
    )
    assert Well(up, brine()).reference_depth.m_as("m") == close(TOP + LAYERS[0] / 2, rel=1e-13)


@pytest.mark.parametrize("reference", [None, "1400 m", "1600 m"])
def test_the_reference_depth_moves_pwf_alone(reference: str | None) -> None:
    there = WELL.at_pressure("150 bar", block_pressure=BLOCKS)
    well = layered_well() if reference is None else layered_well(reference_depth=reference)
    state = well.at_rate(there.rate, block_pressure=BLOCKS)
    moved = 950 * GRAVITY * (well.reference_depth - WELL.reference_depth).m_as("m")
    assert (state.pwf - there.pwf).m_as("Pa") == pytest.approx(moved, abs=1e-6)
    assert state.coupling_rate.m == close(there.coupling_rate.m, rel=1e-9)


def test_depths_that_differ_need_a_density() -> None:
    for rows in (layered_couplings(), layered_couplings(intervals=[("0 m", "1 m")])):
        with pytest.raises(DomainError, match=r"give Liquid\(density=\.\.\.\)"):
            Well(rows, OIL)
    with pytest.raises(DomainError, match="depths of couplings, block centres and reference"):
        Well(one_layer(), OIL, reference_depth="1900 m")


def test_equal_depths_need_no_density() -> None:
    state = Well(one_layer(), OIL).at_pressure("150 bar", block_pressure="200 bar")
    expected = one_layer().wi.m_as("m**3")[0] / 9e-4 * 50e5
    assert state.reservoir_rate.m_as("m**3/s") == close(expected, rel=1e-12)
    assert Well(one_layer(), OIL, reference_depth="2005 m").reference_depth.m_as("m") == 2005.0


def test_tight_couplings_need_no_density() -> None:
    k = np.array([[[1e-13, 0.0]]])
    grid = blocks_of([100.0], [100.0], [10.0, 10.0])
    rows = couple(route((50.0, 50.0, 0.0), (50.0, 50.0, 20.0)), grid, rock(k, k, k), rw="0.1 m")
    state = Well(rows, OIL).at_pressure("150 bar", block_pressure="200 bar")
    assert state.coupling_rate.m[1] == 0.0
    assert not state.backflow.any()


@pytest.mark.parametrize("role", ["producer", "injector"])
@given(pwf=st.floats(1e5, 4e7), blocks=st.lists(st.floats(1e7, 3e7), min_size=4, max_size=4))
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_backflow_is_exactly_what_the_sign_says(role: str, pwf: float, blocks: list[float]) -> None:
    well = layered_well(role=role)
    state = well.at_pressure(pascals(pwf), block_pressure=pascals(blocks))
    expected = by_hand(well, pwf, blocks, density=950.0, mu=5e-4)
    floor = 1e-13 * max(map(abs, expected))
    against = -1.0 if role == "producer" else 1.0
    for rate, backflow in zip(expected, state.backflow, strict=True):
        if abs(rate) > floor:
            assert backflow == (rate * against > 0.0)
    total = math.fsum(expected)
    if abs(total) > 4 * floor:
        assert state.well_backflow is (total * against > 0.0)


def test_a_producer_above_its_block_s_pressure_injects() -> None:
    with pytest.warns(BackflowWarning, match="the producer takes in fluid as a whole well") as w:
        state = WELL.at_pressure("250 bar", block_pressure="200 bar")
    assert len(w) == 1
    assert state.well_backflow is True
    assert state.backflow.all()
    assert state.rate.m < 0.0
    said = str(w[0].message)
    for n, rate in enumerate(state.coupling_rate):
        assert f"coupling {n} in block (1, 1, {n}) ({rate}, " in said
    assert "rm3/day" in said
    assert "sm3/day" in said


def test_one_coupling_against_the_role() -> None:
    blocks = pascals([2.0e7, 1.0e7, 2.0e7, 2.0e7])
    with pytest.warns(BackflowWarning, match="through part of its couplings: coupling 1 in"):
        state = WELL.at_pressure("150 bar", block_pressure=blocks)
    assert state.backflow.tolist() == [False, True, False, False]
    assert state.well_backflow is False
    assert state.rate.m > 0.0


def test_an_injector_below_its_block_s_pressure_produces() -> None:
    well = layered_well(role="injector")
    with pytest.warns(BackflowWarning, match="the injector gives out fluid as a whole well"):
        state = well.at_pressure("150 bar", block_pressure="200 bar")
    assert state.rate.m > 0.0
    assert state.backflow.all()


def test_roles_and_the_sign_of_rates() -> None:
    injector = layered_well(role="injector")
    state = injector.at_rate("-100 sm3/day", block_pressure="200 bar")
    assert state.role == "injector"
    assert not state.backflow.any()
    assert state.pwf.m_as("bar") > 200.0
    assert state.rate.m_as("sm3/day") == close(-100.0, rel=1e-12)
    with pytest.raises(DomainError, match=r"negative into the ground; the rate given is posit"):
        injector.at_rate("100 sm3/day", block_pressure="200 bar")
    with pytest.raises(DomainError, match=r"a producer's rate is positive out of the ground"):
        WELL.at_rate("-100 rm3/day", block_pressure="200 bar")
    with pytest.raises(DomainError, match="the rate given is negative"):
        WELL.at_rate(ureg.Quantity([1.0, -1.0], "sm3/day"), block_pressure="200 bar")
    with pytest.raises(DomainError, match="one of 'producer', 'injector'"):
        layered_well(role="observer")


@pytest.mark.parametrize("role", ["producer", "injector"])
def test_a_shut_well_with_one_pressure_flows_nowhere(role: str) -> None:
    # Blocks in equilibrium with the fluid: no coupling flows, and nothing is backflow.
    centres = ROWS.block_depth.m_as("m")
    blocks = pascals(2e7 + 950.0 * GRAVITY * (centres - centres[0]))
    state = layered_well(role=role).at_rate("0 sm3/day", block_pressure=blocks)
    assert not state.backflow.any()
    assert state.pwf.m_as("Pa") == close(2e7, rel=1e-14)


def test_a_shut_well_lets_its_couplings_flow_into_one_another() -> None:
    with pytest.warns(BackflowWarning, match="through part of its couplings"):
        state = WELL.at_rate("0 sm3/day", block_pressure=BLOCKS)
    assert state.backflow.any()
    assert not state.backflow.all()
    assert state.reservoir_rate.m == 0.0
    assert state.rate.m == 0.0
    assert state.well_backflow is False


@pytest.mark.parametrize("role", ["producer", "injector"])
@given(
    blocks=st.lists(st.floats(5e6, 6e7), min_size=4, max_size=4),
    unit=st.sampled_from(["sm3/day", "stb/day", "m**3/s", "rb/day"]),
)
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_crossflow_of_a_shut_well_is_no_backflow_of_the_well(
    role: str, blocks: list[float], unit: str
) -> None:
    well = layered_well(role=role)
    state = well.at_rate(ureg.Quantity(0.0, unit), block_pressure=pascals(blocks))
    assert state.rate.m == state.reservoir_rate.m == 0.0
    assert state.well_backflow is False
    expected = by_hand(well, state.pwf.m_as("Pa"), blocks, density=950.0, mu=5e-4)
    floor = 1e-12 * float(ROWS.wi.m_as("m**3").max()) / 5e-4 * max(blocks)
    against = -1.0 if role == "producer" else 1.0
    for rate, backflow in zip(expected, state.backflow, strict=True):
        if abs(rate) > floor:
            assert backflow == (rate * against > 0.0)
    assert "as a whole well" not in state.backflow_words()


@given(blocks=st.lists(st.floats(5e6, 6e7), min_size=24, max_size=24))
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_crossflow_of_shut_wells_in_a_batch(blocks: list[float]) -> None:
    pressures = pascals(np.reshape(blocks, (2, 3, 4)))
    state = WELL.at_rate("0 stb/day", block_pressure=pressures)
    assert state.rate.m.tolist() == state.reservoir_rate.m.tolist() == [[0.0] * 3] * 2
    assert state.well_backflow.tolist() == [[False] * 3] * 2
    assert "in 0 as a whole well" in state.backflow_words() or not state.backflow.any()


@given(rate=st.floats(0.0, 5e-3), blocks=st.lists(st.floats(2e7, 3e7), min_size=4, max_size=4))
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_a_rate_that_was_given_is_the_rate(rate: float, blocks: list[float]) -> None:
    with unit_system("si"):
        state = WELL.at_rate(ureg.Quantity(rate, "m**3/s"), block_pressure=pascals(blocks))
        assert state.reservoir_rate.m == rate
        surface = WELL.at_rate(ureg.Quantity(rate, "sm3/s"), block_pressure=pascals(blocks))
        # Through the volume factor and back: two roundings of 2**-53 each.
        assert surface.rate.m == pytest.approx(rate, rel=2.0**-52, abs=0.0)


@given(
    k=strategies.permeabilities(),
    drops=st.lists(st.integers(-40_000, 40_000), min_size=4, max_size=4),
    extra=st.sampled_from([0, -3, 3]),
)
@pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
def test_a_sum_that_is_rounding_only_is_zero(k: float, drops: list[int], extra: int) -> None:
    # Five equal blocks at one depth: rates are in proportion to whole numbers of pascal.
    grid = blocks_of([64.0] * 5, [64.0], [16.0])
    rows = couple(route((0.0, 32.0, 8.0), (320.0, 32.0, 8.0)), grid, rock(k, k, k), rw="0.1 m")
    five = [*drops, extra - sum(drops)]
    blocks = pascals([300_000.0 + drop for drop in five])
    state = Well(rows, OIL).at_pressure("3 bar", block_pressure=blocks)
    assert (state.coupling_drawdown.m_as("Pa").round(6) == five).all()
    if extra == 0:
        assert state.rate.m == state.reservoir_rate.m == 0.0
        assert state.well_backflow is False
    else:
        wi = float(rows.wi.m_as("m**3")[0])
        assert state.reservoir_rate.m_as("m**3/s") == close(extra * wi / 9e-4, rel=1e-6)
        assert state.well_backflow is (extra < 0)


def test_surface_and_reservoir_rates_differ_by_the_volume_factor() -> None:
    surface = WELL.at_rate("100 sm3/day", block_pressure="200 bar")
    reservoir = WELL.at_rate("120 rm3/day", block_pressure="200 bar")
    assert surface.pwf.m == close(reservoir.pwf.m, rel=1e-13)
    assert WELL.at_rate("120 m**3/day", block_pressure="200 bar").pwf.m == close(
        reservoir.pwf.m, rel=1e-14
    )


def test_gauge_pressures_count_from_the_site_s_air() -> None:
    state = WELL.at_pressure("150 barg", block_pressure="200 barg")
    assert state.pwf.m_as("bar") == close(151.01325, rel=1e-14)
    with unit_system("metric", site_pressure="0.85 bar"):
        high = WELL.at_pressure("150 barg", block_pressure="200 barg")
    assert high.pwf.m_as("bar") == close(150.85, rel=1e-14)
    assert high.rate.m == close(state.rate.m, rel=1e-12)


@pytest.mark.parametrize("kr", [0.3, np.array([0.1, 0.2, 0.3, 0.0])])
def test_relative_permeability_scales_each_coupling(kr: Any) -> None:
    full = WELL.at_pressure("150 bar", block_pressure=BLOCKS)
    part = layered_well(relative_permeability=kr).at_pressure("150 bar", block_pressure=BLOCKS)
    assert part.coupling_rate.m == close(full.coupling_rate.m * kr, rel=1e-13)


def test_nothing_that_flows_is_refused() -> None:
    with pytest.raises(DomainError, match="no coupling can flow"):
        layered_well(relative_permeability=0.0)
    grid = blocks_of([50.0], [50.0], [5.0])
    rows = couple(route((25, 25, 0), (25, 25, 5)), grid, rock(0.0, 1e-13, 1e-13), rw="0.1 m")
    with pytest.raises(DomainError, match="no coupling can flow"):
        Well(rows, brine())


def states_one_by_one(pressures: Any, blocks: Any) -> list[WellState]:
    """The states of a batch, one call each."""
    return [
        WELL.at_pressure(pascals(float(p)), block_pressure=pascals(b))
        for p, b in zip(pressures, blocks, strict=True)
    ]


def test_batches_of_block_pressures() -> None:
    blocks = np.linspace(1.8e7, 2.4e7, 24).reshape(2, 3, 4)
    pressures = np.array([[1e7, 1.1e7, 1.2e7], [1.3e7, 1.4e7, 1.5e7]])
    state = WELL.at_pressure(pascals(pressures), block_pressure=pascals(blocks))
    assert state.rate.shape == (2, 3)
    assert state.coupling_rate.shape == (2, 3, 4)
    alone = states_one_by_one(pressures.ravel(), blocks.reshape(6, 4))
    assert state.rate.m.ravel() == close(np.array([s.rate.m for s in alone]), rel=1e-14)
    assert state.coupling_drawdown.m.reshape(6, 4) == close(
        np.array([s.coupling_drawdown.m for s in alone]), rel=1e-14
    )
    again = WELL.at_rate(state.rate, block_pressure=pascals(blocks))
    assert again.pwf.m_as("Pa") == close(pressures, rel=1e-12)
    assert state.well_backflow.tolist() == [[False] * 3] * 2


def test_one_pressure_for_many_block_pressures_and_the_reverse() -> None:
    blocks = pascals(np.linspace(1.8e7, 2.4e7, 12).reshape(3, 4))
    state = WELL.at_pressure("100 bar", block_pressure=blocks)
    assert state.pwf.shape == state.rate.shape == (3,)
    spread = WELL.at_pressure(pascals([1e7, 1.2e7]), block_pressure="200 bar")
    assert spread.coupling_rate.shape == (2, 4)
    each = WELL.at_pressure("100 bar", block_pressure=pascals([[1.8e7], [2.0e7]]))
    assert each.coupling_rate.shape == (2, 4)
    assert each.block_pressure.m_as("Pa") == close(np.array([[1.8e7] * 4, [2.0e7] * 4]), rel=1e-13)


def test_backflow_of_a_batch_is_counted() -> None:
    with pytest.warns(
        BackflowWarning, match="in 2 of 3 states through at least one coupling, in 1 as a whole"
    ):
        state = WELL.at_pressure(
            pascals([1e7, 1.99e7, 2.5e7]), block_pressure=pascals([2.2e7, 1.98e7, 2e7, 2e7])
        )
    assert state.well_backflow.tolist() == [False, False, True]


def test_repr_and_thickness_average() -> None:
    # With one drawdown for all, a vertical well flows by sum(k h): rates split in that ratio.
    assert repr(WELL) == "Well(producer, 4 couplings)"
    centres = ROWS.block_depth.m_as("m")
    blocks = pascals(2e7 + 950.0 * GRAVITY * (centres - centres[0]))
    rates = WELL.at_pressure("150 bar", block_pressure=blocks).coupling_rate.m
    kh = np.array(LAYER_K) * np.array(LAYERS)
    assert rates / rates.sum() == close(kh / kh.sum(), rel=1e-11)


def test_a_rate_that_is_not_a_number_can_be_marked() -> None:
    rates = ureg.Quantity([100.0, np.nan], "sm3/day")
    with pytest.warns(AssumptionWarning, match="1 element is not a number: 1 x rate must be"):
        state = layered_well().at_rate(rates, block_pressure="200 bar", invalid="nan")
    assert np.isnan(state.pwf.magnitude).tolist() == [False, True]


@given(data=st.data())
def test_a_well_shut_by_its_pressure_has_no_rate(data: st.DataObject) -> None:
    # The pressure at which nothing flows out, put in again: what is left is rounding.
    well = layered_well()
    pressures = [data.draw(st.floats(1e7, 4e7)) for _ in range(len(well.couplings))]
    blocks = ureg.Quantity(pressures, "Pa")
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", BackflowWarning)
        shut = well.at_rate("0 m**3/day", block_pressure=blocks)
        again = well.at_pressure(shut.pwf, block_pressure=blocks)
    assert (
        abs(again.rate.m_as("sm3/day"))
        < 1e-9 * abs(again.coupling_surface_rate).max().m_as("sm3/day") + 1e-9
    )
    assert not shut.well_backflow


@pytest.mark.parametrize(("drawdown", "flows"), [(0.0, False), (1e-7, False), (1e-2, True)])
def test_pressures_that_differ_by_rounding_only_are_the_same(drawdown: float, flows: bool) -> None:
    # 16 roundings (2**-52) of both pressures, 2e7 Pa each, are 1.4e-7 Pa.
    grid = blocks_of([100.0] * 3, [100.0] * 3, [10.0])
    rows = couple(
        route((150.0, 150.0, 0.0), (150.0, 150.0, 10.0)), grid, rock(1e-13, 1e-13, 1e-13),
        rw="0.1 m",
    )  # fmt: skip
    well = Well(rows, Liquid(viscosity="1 cP", formation_volume_factor=1.0))
    state = well.at_pressure(pascals(2e7 - drawdown), block_pressure=pascals(2e7))
    assert bool(state.coupling_rate.magnitude[0] != 0.0) is flows
    assert bool(state.rate.magnitude != 0.0) is flows
