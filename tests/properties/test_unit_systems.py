"""The same answer whatever units go in, whatever unit system it comes out in."""

from functools import partial
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.oracles import closed_form
from wellindex import equivalent_radius, unit_system, ureg, well_index
from wellindex.units.systems import SYSTEMS

close = partial(pytest.approx, rel=1e-12, abs=0)

LENGTHS = ["m", "ft", "cm", "in", "km", "mm"]
ROCKS = ["m**2", "mD", "D", "cm**2", "nD"]
PLANE = {"d1": "dx", "d2": "dy", "k1": "kx", "k2": "ky"}


@st.composite
def dressed(draw: st.DrawFn, values: dict[str, Any]) -> dict[str, Any]:
    """SI values as quantities, or as text, each in a unit of its own."""
    given_as: dict[str, Any] = {}
    for name, value in values.items():
        if name in ("skin", "direction", "placement"):
            given_as[name] = value
            continue
        unit = draw(st.sampled_from(ROCKS if name.startswith("k") else LENGTHS))
        number = value / float(closed_form.in_si(UNIT_TEXT[unit]))
        text = f"{number!r} {unit}"
        given_as[name] = draw(st.sampled_from([ureg.Quantity(number, unit), text]))
    return given_as


# Sizes of the units by their definitions, apart from the registry.
UNIT_TEXT = {
    "m": "1 m",
    "ft": "1 ft",
    "cm": "1 cm",
    "in": "0.0254 m",
    "km": "1000 m",
    "mm": "0.001 m",
    "m**2": "1 m**2",
    "mD": "1 mD",
    "D": "1 darcy",
    "cm**2": "1 cm**2",
    "nD": "1e-9 darcy",
}


@given(st.data(), strategies.blocks(zero_permeability=True))
def test_well_index(data: st.DataObject, block: strategies.Block) -> None:
    values = block.arguments
    placement = data.draw(strategies.placements(block.direction))
    expected = float(closed_form.well_index(**values, placement=placement))
    for system in SYSTEMS:
        arguments = data.draw(dressed(values | {"placement": placement}))
        with unit_system(system):
            answer = well_index(**arguments)
        assert answer.m_as("m**3") == close(expected)


@given(st.data(), strategies.blocks(direction="z"))
def test_equivalent_radius(data: st.DataObject, block: strategies.Block) -> None:
    values = {name: getattr(block, name) for name in ("dx", "dy", "kx", "ky")}
    expected = float(closed_form.equivalent_radius(**values))
    for system in SYSTEMS:
        with unit_system(system):
            answer = equivalent_radius(**data.draw(dressed(values)))
        assert answer.m_as("m") == close(expected)


@given(strategies.blocks())
def test_the_number_follows_the_unit(block: strategies.Block) -> None:
    answers = {}
    for system in SYSTEMS:
        with unit_system(system):
            answers[system] = well_index(
                **{
                    name: value
                    if name in ("skin", "direction")
                    else ureg.Quantity(value, "m**2" if name.startswith("k") else "m")
                    for name, value in block.arguments.items()
                }
            )
    for system, unit in [
        ("oilfield", "cP*rb/psi/day"),
        ("metric", "cP*m**3/bar/day"),
        ("darcy", "cP*cm**3/atm/s"),
    ]:
        factor = float(closed_form.in_si(unit.replace("*rb/psi/day", "*rb/day/psi")))
        assert answers[system].magnitude * factor == close(answers["si"].magnitude)
