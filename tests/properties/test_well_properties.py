"""What a well must obey whatever the numbers, in every system of units."""

import math
from functools import partial
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import LAYERS, TOP, brine, layered_couplings, layered_well, metres, pascals
from wellindex import (
    Liquid,
    Path,
    Permeability,
    TensorGrid,
    Well,
    WellState,
    couple,
    unit_system,
    ureg,
)

GIVEN_IN = {
    "metric": {"m": "m", "m**2": "mD", "Pa": "bar", "Pa*s": "cP", "kg/m**3": "kg/m**3"},
    "oilfield": {"m": "ft", "m**2": "mD", "Pa": "psi", "Pa*s": "cP", "kg/m**3": "lbm/ft**3"},
    "si": {"m": "m", "m**2": "m**2", "Pa": "Pa", "Pa*s": "Pa*s", "kg/m**3": "kg/m**3"},
    "darcy": {"m": "cm", "m**2": "D", "Pa": "atm", "Pa*s": "cP", "kg/m**3": "g/cm**3"},
}
ANSWERS = {
    "pwf": "Pa",
    "rate": "sm3/s",
    "reservoir_rate": "m**3/s",
    "coupling_rate": "m**3/s",
    "coupling_surface_rate": "sm3/s",
    "coupling_pressure": "Pa",
    "coupling_drawdown": "Pa",
}

pytestmark = pytest.mark.filterwarnings("ignore::wellindex.BackflowWarning")
close = partial(pytest.approx, abs=0)
block_pressures = st.lists(st.floats(1e7, 3e7), min_size=4, max_size=4)


def solved(system: str, blocks: list[float], pwf: float, mu: float, factor: float) -> WellState:
    """One problem with every input in the units of one system, solved in that system."""

    def q(value: Any, si: str) -> Any:
        values = np.asarray(value, dtype=float) if np.ndim(value) else float(value)
        return ureg.Quantity(values, si).to(GIVEN_IN[system][si])

    with unit_system(system):
        grid = TensorGrid(
            q([80.0] * 3, "m"), q([120.0] * 3, "m"), q(LAYERS, "m"), origin=q([0, 0, TOP], "m")
        )
        path = Path(q([[120.0, 180.0, TOP], [120.0, 180.0, TOP + sum(LAYERS)]], "m"))
        k = np.arange(1.0, 37.0).reshape(3, 3, 4) * 1e-14
        rock = Permeability(q(k, "m**2"), q(k / 3, "m**2"), q(k / 10, "m**2"))
        rows = couple(
            path,
            grid,
            rock,
            rw=q(0.1, "m"),
            skin=1.5,
            intervals=q([[0.5, 9.0], [12.0, 19.0]], "m"),
            net_to_gross=0.8,
        )
        fluid = Liquid(
            viscosity=q(mu, "Pa*s"), formation_volume_factor=factor, density=q(950.0, "kg/m**3")
        )
        well = Well(rows, fluid, reference_depth=q(1495.0, "m"))
        values = np.array([*blocks, blocks[-1]])[: len(rows)]
        return well.at_pressure(q(pwf, "Pa"), block_pressure=q(values, "Pa"))


@given(
    blocks=st.lists(st.floats(2e7, 3e7), min_size=4, max_size=4),
    pwf=st.floats(1e6, 1.4e7),
    mu=strategies.viscosities(),
    factor=strategies.volume_factors(),
)
def test_the_answer_is_the_same_in_every_system(
    blocks: list[float], pwf: float, mu: float, factor: float
) -> None:
    expected = solved("si", blocks, pwf, mu, factor)
    for system in ("metric", "oilfield", "darcy"):
        state = solved(system, blocks, pwf, mu, factor)
        assert state.couplings.cell.tolist() == expected.couplings.cell.tolist()
        # Open lengths are differences of measured depths: their rounding is in the index.
        assert state.couplings.wi.m_as("m**3") == close(
            expected.couplings.wi.m_as("m**3"), rel=1e-12
        )
        for name, unit in ANSWERS.items():
            found, same = (getattr(s, name).m_as(unit) for s in (state, expected))
            assert found == close(same, rel=2e-12)


@given(pwf=st.floats(1e5, 4e7), blocks=block_pressures, shift=st.floats(0.0, 1e7))
def test_only_differences_of_pressure_count(pwf: float, blocks: list[float], shift: float) -> None:
    there = layered_well().at_pressure(pascals(pwf), block_pressure=pascals(blocks))
    moved = layered_well().at_pressure(
        pascals(pwf + shift), block_pressure=pascals([b + shift for b in blocks])
    )
    scale = float(np.abs(there.coupling_rate.m).max())
    floor = float(there.couplings.wi.m_as("m**3").max()) / 5e-4 * 1e-7 * 86400
    assert moved.coupling_rate.m == pytest.approx(there.coupling_rate.m, abs=1e-12 * scale + floor)


@given(
    pwf=st.floats(1e5, 1.5e7),
    blocks=block_pressures,
    thicker=strategies.logarithmic(0.01, 100.0),
)
def test_rates_are_inverse_to_viscosity(pwf: float, blocks: list[float], thicker: float) -> None:
    rows = layered_couplings()
    thin = Well(rows, brine()).at_pressure(pascals(pwf), block_pressure=pascals(blocks))
    thick = Well(rows, brine(viscosity=ureg.Quantity(0.5 * thicker, "cP"))).at_pressure(
        pascals(pwf), block_pressure=pascals(blocks)
    )
    assert thick.coupling_rate.m * thicker == close(thin.coupling_rate.m, rel=1e-12)


@given(pwf=st.floats(1e5, 4e7), blocks=block_pressures)
def test_roles_flow_alike_and_judge_in_opposite_ways(pwf: float, blocks: list[float]) -> None:
    states = [
        layered_well(role=role).at_pressure(pascals(pwf), block_pressure=pascals(blocks))
        for role in ("producer", "injector")
    ]
    assert states[0].coupling_rate.m.tolist() == states[1].coupling_rate.m.tolist()
    flowing = states[0].coupling_rate.m != 0.0
    assert (states[0].backflow ^ states[1].backflow).tolist() == flowing.tolist()


@given(pwf=st.floats(1e6, 3e7), lower=st.floats(1.0, 1e6), blocks=block_pressures)
def test_rates_rise_as_the_bottom_hole_pressure_falls(
    pwf: float, lower: float, blocks: list[float]
) -> None:
    high, low = (
        layered_well().at_pressure(pascals(p), block_pressure=pascals(blocks))
        for p in (pwf, pwf - lower)
    )
    assert low.rate > high.rate
    assert np.all(low.coupling_rate.m > high.coupling_rate.m)


@given(
    rates=st.lists(st.floats(0.0, 100.0), min_size=2, max_size=2),
    blocks=st.lists(st.floats(2e7, 2.1e7), min_size=4, max_size=4),
)
def test_pressure_is_linear_in_rate(rates: list[float], blocks: list[float]) -> None:
    low, high, middle = (
        layered_well()
        .at_rate(ureg.Quantity(rate, "sm3/day"), block_pressure=pascals(blocks))
        .pwf.m_as("Pa")
        for rate in (*rates, sum(rates) / 2)
    )
    assert middle == close((low + high) / 2, rel=1e-12)


@given(
    rate=st.floats(1.0, 500.0),
    blocks=st.lists(st.floats(2e7, 2.1e7), min_size=4, max_size=4),
    order=st.permutations(range(4)),
)
def test_the_order_of_a_batch_is_free(rate: float, blocks: list[float], order: list[int]) -> None:
    batch = np.array([np.roll(blocks, n) for n in range(4)])
    well = layered_well()
    q = ureg.Quantity(rate, "sm3/day")
    there = well.at_rate(q, block_pressure=pascals(batch)).pwf.m
    moved = well.at_rate(q, block_pressure=pascals(batch[order])).pwf.m
    assert moved.tolist() == there[order].tolist()


@given(depth=st.floats(0.0, 5000.0), pwf=st.floats(6e7, 9e7))
def test_a_column_of_fluid_between_reference_depths(depth: float, pwf: float) -> None:
    # The same state seen from another depth: pwf moves by density g (depth - depth).
    shallow = layered_well()
    deep = layered_well(reference_depth=metres(depth))
    state = shallow.at_pressure(pascals(pwf), block_pressure="200 bar")
    head = 950.0 * 9.80665 * (depth - shallow.reference_depth.m_as("m"))
    again = deep.at_pressure(pascals(pwf + head), block_pressure="200 bar")
    assert again.rate.m == close(state.rate.m, rel=1e-11)


@given(pwf=st.floats(1e6, 1.2e7), blocks=st.floats(1.5e7, 3e7))
def test_the_well_is_the_sum_of_its_indices_where_all_drawdowns_are_alike(
    pwf: float, blocks: float
) -> None:
    well = layered_well()
    centres = well.couplings.block_depth.m_as("m")
    hung = blocks + 950.0 * 9.80665 * (centres - centres[0])
    state = well.at_pressure(pascals(pwf), block_pressure=pascals(hung))
    total = math.fsum(well.couplings.wi.m_as("m**3")) / 5e-4 * (blocks - pwf)
    assert state.reservoir_rate.m_as("m**3/s") == close(total, rel=1e-11)
