"""Conventions: what a number contains, by arithmetic written out here, for every combination."""

import math
from dataclasses import FrozenInstanceError, fields
from functools import cache, partial
from itertools import product
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import GRAVITY
from tests.oracles.closed_form import in_si
from wellindex import (
    Convention,
    DomainError,
    UnitsError,
    permeability_from_conductivity,
    productivity_index,
    ureg,
    well_index,
)

FIELDS = [f.name for f in fields(Convention) if f.type == "bool" and f.name != "skin_inside"]
FACTORS = {
    "viscosity": "/(Pa*s)",
    "formation_volume_factor": "*sm3/m**3",
    "mass": "*kg/m**3",
    "head": "*kg/m**3*m/s**2",
    "per_length": "/m",
}
CHOICES = [
    dict(zip(FIELDS, values, strict=True)) for values in product((False, True), repeat=len(FIELDS))
]
ALLOWED = [c for c in CHOICES if not (c["mass"] and c["formation_volume_factor"])]
CONTAINS = {
    "viscosity": "viscosity",
    "formation_volume_factor": "formation_volume_factor",
    "mass": "density",
    "head": "density",
    "per_length": "length",
}

close = partial(pytest.approx, abs=0)


@cache
def convention(**choice: bool) -> Convention:
    """The convention with these contents, in coherent SI units."""
    return Convention(
        "m**3" + "".join(FACTORS[n] for n, yes in choice.items() if yes and n in FACTORS), **choice
    )


@st.composite
def states(draw: st.DrawFn) -> dict[str, float]:
    """What the numbers may contain, SI."""
    return {
        "viscosity": draw(strategies.viscosities()),
        "relative_permeability": draw(strategies.relative_permeabilities()),
        "formation_volume_factor": draw(strategies.volume_factors()),
        "density": draw(strategies.densities()),
        "length": draw(strategies.thicknesses()),
    }


def with_units(state: dict[str, float]) -> dict[str, Any]:
    """The same with units."""
    units = {"viscosity": "Pa*s", "density": "kg/m**3", "length": "m"}
    return {n: ureg.Quantity(v, units[n]) if n in units else v for n, v in state.items()}


def expected_number(wi: float, choice: dict[str, bool], state: dict[str, float]) -> float:
    """The number that a convention makes of an index, SI."""
    number = wi if choice["two_pi"] else wi / (2 * math.pi)
    if choice["viscosity"]:
        number *= state["relative_permeability"] / state["viscosity"]
    if choice["formation_volume_factor"]:
        number /= state["formation_volume_factor"]
    if choice["mass"]:
        number *= state["density"]
    if choice["head"]:
        number *= state["density"] * GRAVITY
    if choice["per_length"]:
        number /= state["length"]
    return number


@given(wi=strategies.logarithmic(1e-18, 1e-8), state=states())
def test_number_and_back_for_every_combination(wi: float, state: dict[str, float]) -> None:
    known = with_units(state)
    assert len(ALLOWED) == 48
    for choice in ALLOWED:
        code = convention(**choice)
        number = code.number(ureg.Quantity(wi, "m**3"), **known)
        assert number == close(expected_number(wi, choice, state), rel=1e-12), choice
        assert code.well_index(number, **known).m_as("m**3") == close(wi, rel=1e-12), choice


@given(wi=strategies.logarithmic(1e-18, 1e-8), state=states())
def test_conversion_between_every_two(wi: float, state: dict[str, float]) -> None:
    known = with_units(state)
    numbers = [(convention(**c), expected_number(wi, c, state)) for c in ALLOWED[::5]]
    for (here, given_), (there, expected) in product(numbers, repeat=2):
        assert here.convert(given_, there, **known) == close(expected, rel=1e-12)


@pytest.mark.parametrize("choice", ALLOWED, ids=lambda c: "+".join(n for n in c if c[n]) or "bare")
def test_what_is_missing_is_named(choice: dict[str, bool]) -> None:
    code = convention(**choice)
    needed = {CONTAINS[n] for n, yes in choice.items() if yes and n in CONTAINS}
    if not needed:
        assert code.number("1 m**3") > 0.0
        return
    for call in (partial(code.number, "1 m**3"), partial(code.well_index, 1.0)):
        with pytest.raises(UnitsError, match="cannot be converted without") as caught:
            call()
        named = {name for name in set(CONTAINS.values()) if f"{name}=" in str(caught.value)}
        assert named == needed


@pytest.mark.parametrize("choice", ALLOWED[::3])
@pytest.mark.parametrize("name", CONTAINS)
def test_what_both_contain_need_not_be_known(choice: dict[str, bool], name: str) -> None:
    if name in ("mass", "formation_volume_factor"):
        choice = choice | {"mass": False, "formation_volume_factor": False}
    choice = choice | {name: True}
    here = convention(**choice)
    there = convention(**(choice | {"two_pi": not choice["two_pi"]}))
    factor = 1 / (2 * math.pi) if choice["two_pi"] else 2 * math.pi
    assert here.convert(3.0, there) == close(3.0 * factor, rel=1e-14)
    assert here.convert(3.0, here) == 3.0


def test_mass_and_head_both_hold_the_density() -> None:
    mass, head = convention(mass=True, viscosity=True), convention(head=True, viscosity=True)
    assert mass.convert(2.0, head) == close(2.0 * GRAVITY, rel=1e-14)


def test_units_alone_are_conversions_too() -> None:
    field = Convention("cP*rb/day/psi")
    ours = Convention("m**3")
    exact = float(in_si("1 cP*rb/day/psi"))
    assert field.convert(1.0, ours) == close(exact, rel=1e-13)
    assert field.well_index(2.5).m_as("m**3") == close(2.5 * exact, rel=1e-13)


def test_conductance_of_a_well_in_an_aquifer() -> None:
    # Thiem (1906): Q = 2 pi K b (h_r - h_w)/ln(r/rw); the conductance is 2 pi K b / ln(r0/rw).
    water = {"viscosity": "1.14 cP", "density": "999 kg/m**3"}
    k = permeability_from_conductivity(conductivity="5 m/day", **water)
    wi = well_index(
        dx="1 m", dy="1 m", dz="20 m", kx=k, ky=k, kz=k, rw="0.25 m",
        equivalent_radius=ureg.Quantity(0.25 * math.exp(4.0), "m"),
    )  # fmt: skip
    conductance = Convention("m**2/day", viscosity=True, head=True)
    assert conductance.number(wi, **water) == close(2 * math.pi * 5 * 20 / 4, rel=1e-13)


def test_mass_rate_of_a_geothermal_well() -> None:
    # 1e-12 m3 * 900 kg/m3 / 1e-4 Pa s = 9e-6 kg/s/Pa = 0.9 kg/s/bar.
    code = Convention("kg/s/bar", viscosity=True, mass=True)
    fluid = {"viscosity": "0.1 mPa*s", "density": "900 kg/m**3"}
    assert code.number("1e-12 m**3", **fluid) == close(0.9, rel=1e-13)
    assert code.well_index(0.9, **fluid).m_as("m**3") == close(1e-12, rel=1e-13)


def test_a_surface_rate_per_drawdown_is_the_productivity_index() -> None:
    fluid = {"viscosity": "0.8 cP", "formation_volume_factor": 1.3, "relative_permeability": 0.4}
    code = Convention("stb/day/psi", viscosity=True, formation_volume_factor=True)
    J = productivity_index(against="block", wi="7 cP*rb/day/psi", **fluid)
    assert code.number("7 cP*rb/day/psi", **fluid) == close(J.m_as("stb/day/psi"), rel=1e-13)
    assert J.m_as("stb/day/psi") == close(7 * 0.4 / (0.8 * 1.3), rel=1e-13)


def test_permeability_thickness_without_two_pi() -> None:
    # k h / ln(r0/rw): 100 mD, 20 ft, ln(r0/rw) = 5 are 400 mD ft.
    wi = well_index(
        dx="1 m", dy="1 m", dz="20 ft", kx="100 mD", ky="100 mD", kz="1 mD", rw="1 ft",
        equivalent_radius=ureg.Quantity(math.exp(5.0), "ft"),
    )  # fmt: skip
    assert Convention("mD*ft", two_pi=False).number(wi) == close(400.0, rel=1e-13)
    per = Convention("mD", two_pi=False, per_length=True)
    assert per.number(wi, length="20 ft") == close(20.0, rel=1e-13)


def test_arrays() -> None:
    code = Convention("kg/s/bar", viscosity=True, mass=True)
    fluid = {"viscosity": ureg.Quantity([0.1, 0.2], "cP"), "density": "900 kg/m**3"}
    wi = ureg.Quantity([1e-12, 4e-12], "m**3")
    numbers = code.number(wi, **fluid)
    assert numbers == close(np.array([0.9, 1.8]), rel=1e-13)
    assert code.well_index(numbers, **fluid).m_as("m**3") == close(wi.m, rel=1e-13)


@pytest.mark.parametrize(
    ("arguments", "error", "words"),
    [
        ({"unit": "stb/day/psi"}, UnitsError, "contains 2 pi, no viscosity, the whole open length"),
        ({"unit": "mD*ft", "viscosity": True}, UnitsError, "1/viscosity"),
        ({"unit": "rb/day/psi", "viscosity": True, "head": True}, UnitsError, "head"),
        ({"unit": "mD*ft", "per_length": True}, UnitsError, "per length"),
        ({"unit": "kg/s/bar", "viscosity": True}, UnitsError, "dimension"),
        ({"unit": "furlong"}, UnitsError, "unknown unit 'furlong'"),
        ({"unit": "2 mD*ft"}, UnitsError, "cannot read|not a unit"),
        ({"unit": 3}, UnitsError, "a unit is a text"),
        (
            {"unit": "kg/s/bar", "mass": True, "formation_volume_factor": True},
            DomainError,
            "per surface volume or per mass",
        ),
    ],
)
def test_bad_conventions(arguments: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Convention(**arguments)


def test_bad_numbers() -> None:
    code = Convention("rb/day/psi", viscosity=True)
    with pytest.raises(DomainError, match="relative_permeability is zero"):
        code.well_index(1.0, viscosity="1 cP", relative_permeability=0.0)
    assert code.number("1 mD*ft", viscosity="1 cP", relative_permeability=0.0) == 0.0
    with pytest.raises(DomainError, match="viscosity: "):
        code.number("1 mD*ft", viscosity="0 cP")
    with pytest.raises(UnitsError, match="wi: needs a well index"):
        code.number(1.0, viscosity="1 cP")
    with pytest.raises(UnitsError, match=r"number: needs a plain number"):
        code.well_index("1 mD*ft", viscosity="1 cP")
    with pytest.raises(UnitsError, match="to is a Convention, not str"):
        code.convert(1.0, "mD*ft")


def test_a_convention_is_frozen_and_says_what_it_contains() -> None:
    code = Convention("kg/s/bar", viscosity=True, mass=True)
    assert code.words() == "2 pi, 1/viscosity, density, the whole open length"
    with pytest.raises(FrozenInstanceError):
        code.unit = "mD*ft"  # type: ignore[misc]


FLAGS = [name for name in FIELDS if name != "unit"]


@pytest.mark.parametrize("flag", FLAGS)
@pytest.mark.parametrize("value", [1, 0, "yes", None, 1.0, np.True_, [True]])
def test_a_flag_is_true_or_false(flag: str, value: Any) -> None:
    with pytest.raises(UnitsError, match=rf"^Convention\(\): {flag} is True or False$"):
        Convention("mD*ft", **{flag: value})


@pytest.mark.parametrize("unit", ["cP*rb/day/psig", "cP*m**3/day/barg", "mD*ft*psig/psi"])
def test_a_gauge_unit_is_refused_at_construction(unit: str) -> None:
    with pytest.raises(
        UnitsError, match=r"^Convention\(\): .* holds a unit with a zero of its own"
    ):
        Convention(unit)


@pytest.mark.parametrize("number", [-1.0, -1e-30, np.array([1.0, -2.0]), math.nan, math.inf])
def test_a_negative_or_infinite_number_is_refused(number: Any) -> None:
    code, other = Convention("mD*ft"), Convention("cP*rb/day/psi")
    for call in (partial(code.well_index, number), partial(code.convert, number, other)):
        with pytest.raises(DomainError, match=r"^Convention\(\): 1 argument is wrong\n  number: "):
            call()
    with pytest.raises(DomainError, match=r"^Convention\(\): 1 argument is wrong\n  wi: "):
        code.number(ureg.Quantity(number, "m**3"))


def test_zero_is_the_index_of_tight_rock() -> None:
    code, other = Convention("mD*ft"), Convention("cP*rb/day/psi")
    assert code.well_index(0.0).m == code.convert(0.0, other) == code.number("0 m**3") == 0.0
