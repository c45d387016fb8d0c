"""What readers remember of units: never a wrong factor, never an error, at any size of memory."""

import sys
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from functools import partial
from typing import Any

import numpy as np
import pint
import pytest

from tests.units import sample_formulas as sample
from wellindex import define_units, equivalent_radius, ureg, well_index
from wellindex.units import reading

close = partial(pytest.approx, abs=0, rel=1e-14)

THEIRS = pint.UnitRegistry()
TAUGHT = pint.UnitRegistry()
define_units(TAUGHT)
REGISTRIES = {"ours": ureg, "theirs": THEIRS, "taught": TAUGHT}
#: SI values by definition (international foot 1959: 0.3048 m).
LENGTHS = {"m": 1.0, "ft": 0.3048, "cm": 0.01, "inch": 0.0254, "km": 1000.0, "mile": 1609.344}


@pytest.fixture
def _hardly_any_memory(monkeypatch: pytest.MonkeyPatch) -> Iterator[None]:
    """Remember one unit at a time, and let threads change places at every step."""
    monkeypatch.setattr(reading, "_REMEMBERED", 1)
    interval = sys.getswitchinterval()
    sys.setswitchinterval(1e-6)
    yield
    sys.setswitchinterval(interval)


def fresh(number: Any, unit: str, registry: Any) -> Any:
    """A quantity whose unit is an object of its own, made by arithmetic."""
    return number * getattr(registry, unit)


@pytest.mark.parametrize("registry", REGISTRIES.values(), ids=REGISTRIES.keys())
@pytest.mark.parametrize("unit", LENGTHS)
def test_units_made_afresh_are_worth_the_same(registry: Any, unit: str) -> None:
    reused = registry.Quantity(2.5, unit)
    expected = sample.length(d=reused).m_as("m")
    assert float(expected) == close(2.5 * LENGTHS[unit])
    for _again in range(3):
        one = fresh(2.5, unit, registry)
        assert one._units is not reused._units
        assert sample.length(d=one).m_as("m") == expected
        assert sample.length(d=2.5 * one / 2.5).m_as("m") == close(expected)
        many = fresh(np.array([2.5, 2.5]), unit, registry)
        assert sample.length(d=many).m_as("m").tolist() == [expected, expected]


@pytest.mark.parametrize("registry", REGISTRIES.values(), ids=REGISTRIES.keys())
def test_a_formula_of_units_made_afresh(registry: Any) -> None:
    def block(make: Any) -> dict[str, Any]:
        return {
            **{name: make(150.0, "ft") for name in ("dx", "dy")},
            **{name: make(120.0, "millidarcy") for name in ("kx", "ky", "kz")},
            "dz": make(20.0, "ft"),
            "rw": make(0.354, "ft"),
        }

    expected = well_index(**block(registry.Quantity))
    for _again in range(3):
        answer = well_index(**block(partial(fresh, registry=registry)))
        assert type(answer) is type(expected)
        assert answer.magnitude == expected.magnitude
        assert answer.units == expected.units


@pytest.mark.parametrize("registry", REGISTRIES.values(), ids=REGISTRIES.keys())
def test_equal_names_of_two_registries_stay_apart(registry: Any) -> None:
    other = pint.UnitRegistry(on_redefinition="ignore")
    other.define("foot = 0.5 * metre = ft")
    for _again in range(3):
        assert float(sample.length(d=fresh(1.0, "foot", other)).m_as("m")) == close(0.5)
        assert float(sample.length(d=fresh(1.0, "foot", registry)).m_as("m")) == close(0.3048)


@pytest.mark.usefixtures("_hardly_any_memory")
def test_a_tiny_memory_forgets_but_never_mistakes() -> None:
    for _again in range(3):
        for unit, metre in LENGTHS.items():
            for registry in REGISTRIES.values():
                for make in (partial(fresh, registry=registry), registry.Quantity):
                    assert float(sample.length(d=make(3.0, unit)).m_as("m")) == close(3.0 * metre)


@pytest.mark.usefixtures("_hardly_any_memory")
def test_threads_with_a_tiny_memory() -> None:
    units = list(LENGTHS)

    def visit(number: int) -> tuple[float, float]:
        unit = units[number % len(units)]
        registry = list(REGISTRIES.values())[number // len(units) % 3]
        make = fresh if number % 2 else lambda n, u, r: r.Quantity(n, u)
        d = make(1.0 + number, unit, registry)
        radius = equivalent_radius(dx=d, dy=d, kx="9 mD", ky="9 mD")
        return float(sample.length(d=d).m_as("m")), float(radius.m_as("m"))

    with ThreadPoolExecutor(12) as pool:
        found = list(pool.map(visit, range(2400)))
    for number, (length, radius) in enumerate(found):
        expected = (1.0 + number) * LENGTHS[units[number % len(units)]]
        assert length == close(expected)
        # Square blocks of isotropic rock: exp(-gamma)/sqrt(8) of the width (Peaceman 1983).
        assert radius == pytest.approx(np.exp(-np.euler_gamma) / np.sqrt(8.0) * expected, rel=1e-12)
