"""The unit system in force: four of them, nested, in threads and tasks, and the site's air."""

import asyncio
import inspect
import threading
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from functools import partial
from typing import Annotated, Any, get_origin

import numpy as np
import pint
import pytest

from tests.oracles.closed_form import in_si
from tests.units import sample_formulas as sample
from wellindex import (
    DomainError,
    UnitsError,
    define_units,
    set_unit_system,
    unit_system,
    ureg,
    well_index,
)
from wellindex.units import kinds
from wellindex.units.answers import as_quantity, number_in
from wellindex.units.systems import SYSTEMS, current

close = partial(pytest.approx, abs=0, rel=1e-14)

BLOCK = {
    "dx": "100 m",
    "dy": "80 m",
    "dz": "10 m",
    "kx": "100 mD",
    "ky": "50 mD",
    "kz": "10 mD",
    "rw": "0.1 m",
}
KINDS = [
    kind
    for mark in vars(kinds).values()
    if get_origin(mark) is Annotated and isinstance(kind := mark.__metadata__[0], kinds.Kind)
]

# The unit of each answer in each system, as the conventions of the package promise them.
UNITS: dict[str, tuple[Callable[..., Any], dict[str, Any], dict[str, str]]] = {
    "length": (
        sample.length,
        {"d": "5 ft"},
        {"metric": "m", "oilfield": "ft", "si": "m", "darcy": "cm"},
    ),
    "permeability": (
        sample.permeability,
        {"k": "5 mD"},
        {"metric": "mD", "oilfield": "mD", "si": "m**2", "darcy": "D"},
    ),
    "viscosity": (
        sample.viscosity,
        {"mu": "5 cP"},
        {"metric": "cP", "oilfield": "cP", "si": "Pa*s", "darcy": "cP"},
    ),
    "pressure": (
        sample.pressure,
        {"p": "5 bar"},
        {"metric": "bar", "oilfield": "psi", "si": "Pa", "darcy": "atm"},
    ),
    "difference": (
        sample.difference,
        {"dp": "-5 bar"},
        {"metric": "bar", "oilfield": "psi", "si": "Pa", "darcy": "atm"},
    ),
    "reservoir rate": (
        sample.rate,
        {"q": "5 rb/day"},
        {"metric": "m**3/day", "oilfield": "rb/day", "si": "m**3/s", "darcy": "cm**3/s"},
    ),
    "surface rate": (
        sample.surface_rate,
        {"q": "5 rb/day", "factor": 1.25},
        {"metric": "sm3/day", "oilfield": "stb/day", "si": "sm3/s", "darcy": "scm3/s"},
    ),
    "well index": (
        well_index,
        BLOCK,
        {
            "metric": "cP*m**3/day/bar",
            "oilfield": "cP*rb/day/psi",
            "si": "m**3",
            "darcy": "cP*cm**3/s/atm",
        },
    ),
}


@pytest.mark.parametrize("system", SYSTEMS)
@pytest.mark.parametrize(("formula", "given", "units"), UNITS.values(), ids=UNITS.keys())
def test_the_unit_of_an_answer(
    formula: Callable[..., Any], given: dict[str, Any], units: dict[str, str], system: str
) -> None:
    with unit_system(system):
        answer = formula(**given)
    one = ureg.Quantity(1.0, units[system])
    assert answer.dimensionality == one.dimensionality
    assert ureg.Quantity(1.0, answer.units).m_as(units[system]) == close(1.0)
    with unit_system("si"):
        assert formula(**given).m_as(units[system]) == close(answer.magnitude)


@pytest.mark.parametrize("system", SYSTEMS)
@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.name)
def test_every_kind_has_a_unit_of_its_dimension(kind: kinds.Kind, system: Any) -> None:
    unit = ureg.Unit(kind.unit(system))
    assert dict(unit.dimensionality) == kind.dimension
    assert ureg.Quantity(1.0, kind.si).to_base_units().magnitude == 1.0
    array = as_quantity(kind, np.array([300.0, 400.0]), system)
    assert array.units == unit
    np.testing.assert_allclose(array.m_as(kind.si), [300.0, 400.0], rtol=1e-14)
    number, text = number_in(kind, 300.0, system)
    assert ureg.Quantity(number, text).m_as(kind.si) == close(300.0)


def test_darcy_s_units_make_darcy_s_law_of_ones() -> None:
    # 1 cP, 1 cm3/s through 1 cm2 under 1 atm/cm is what one darcy means.
    with unit_system("darcy"):
        answer = sample.permeability(k="1 cP*cm**3/s*cm/atm/cm**2")
    assert answer.magnitude == close(1.0)


def unit_now() -> str:
    return f"{sample.length(d='1 m').units:~}"


def test_metric_unless_told_otherwise() -> None:
    assert current().name == "metric"
    assert unit_now() == "m"


def test_systems_nest() -> None:
    with unit_system("oilfield"):
        assert unit_now() == "ft"
        with unit_system("darcy"):
            assert unit_now() == "cm"
            with unit_system("si"):
                assert unit_now() == "m"
            assert unit_now() == "cm"
        assert unit_now() == "ft"
    assert unit_now() == "m"


def test_an_error_inside_ends_the_block() -> None:
    with pytest.raises(UnitsError), unit_system("oilfield"):
        sample.length(d=1.0)
    assert unit_now() == "m"


def test_as_a_decorator() -> None:
    @unit_system("oilfield")
    def inside() -> str:
        return unit_now()

    assert [inside(), inside(), unit_now()] == ["ft", "ft", "m"]


def test_the_block_knows_its_system() -> None:
    with unit_system("darcy") as system:
        assert system.name == "darcy"
        assert system == current()


def test_a_notebook_s_choice() -> None:
    set_unit_system("oilfield")
    assert unit_now() == "ft"
    with unit_system("darcy"):
        assert unit_now() == "cm"
        set_unit_system("si")
        assert unit_now() == "cm"
    assert unit_now() == "m"
    assert current().name == "si"


def test_a_notebook_s_choice_is_seen_from_new_threads() -> None:
    set_unit_system("oilfield")
    with ThreadPoolExecutor(1) as pool:
        assert pool.submit(unit_now).result() == "ft"
        set_unit_system("darcy")
        assert pool.submit(unit_now).result() == "cm"


def test_a_block_is_not_seen_from_other_threads() -> None:
    with unit_system("oilfield"), ThreadPoolExecutor(1) as pool:
        assert pool.submit(unit_now).result() == "m"


def test_threads_do_not_disturb_each_other() -> None:
    meet = threading.Barrier(4)
    expected = {"metric": "m", "oilfield": "ft", "si": "m", "darcy": "cm"}

    def work(system: str) -> list[str]:
        found = []
        for _again in range(20):
            with unit_system(system):
                meet.wait(timeout=10)
                found.append(unit_now())
        return found

    with ThreadPoolExecutor(4) as pool:
        results = {system: pool.submit(work, system) for system in SYSTEMS}
        for system, result in results.items():
            assert result.result() == [expected[system]] * 20


def test_tasks_do_not_disturb_each_other() -> None:
    async def work(system: str) -> list[str]:
        found = []
        with unit_system(system):
            for _again in range(5):
                await asyncio.sleep(0)
                found.append(unit_now())
        return found

    async def together() -> list[list[str]]:
        return list(await asyncio.gather(work("oilfield"), work("darcy"), work("metric")))

    assert asyncio.run(together()) == [["ft"] * 5, ["cm"] * 5, ["m"] * 5]
    assert unit_now() == "m"


@pytest.mark.parametrize("choose", [set_unit_system, lambda name: unit_system(name).__enter__()])
@pytest.mark.parametrize("name", ["field", "Metric", "SI", "", None, 3])
def test_an_unknown_system(choose: Callable[[Any], Any], name: Any) -> None:
    words = f"unknown unit system {name!r}; one of metric, oilfield, si, darcy"
    with pytest.raises(DomainError, match=words):
        choose(name)
    assert current().name == "metric"


@pytest.mark.parametrize(
    ("site", "pascal"),
    [
        ("0.85 bar", 85_000.0),
        ("12.5 psia", 12.5 * float(in_si("1 psi"))),
        (ureg.Quantity(90.0, "kPa"), 90_000.0),
        (ureg.Quantity(1, "atm"), 101_325.0),
        (None, 101_325.0),
    ],
)
def test_the_site_s_air_pressure(site: Any, pascal: float) -> None:
    with unit_system("si", site_pressure=site):
        assert sample.pressure(p="0 psig").magnitude == close(pascal)
        with unit_system("si"):
            assert sample.pressure(p="0 psig").magnitude == close(pascal)
            with unit_system("metric", site_pressure="0.7 bar"):
                assert sample.pressure(p="0 psig").m_as("bar") == close(0.7)
            assert sample.pressure(p="0 psig").magnitude == close(pascal)
        assert sample.pressure(p="0 barg").magnitude == close(pascal)
    assert sample.pressure(p="0 barg").m_as("Pa") == close(101_325.0)
    set_unit_system("si", site_pressure=site)
    assert sample.pressure(p="0 barg").magnitude == close(pascal)
    with unit_system("oilfield"):
        assert sample.pressure(p="0 barg").m_as("Pa") == close(pascal)
    set_unit_system("si")
    assert sample.pressure(p="0 barg").magnitude == close(101_325.0)


def test_the_site_s_air_counts_in_a_registry_that_was_taught_ours() -> None:
    registry = pint.UnitRegistry()
    define_units(registry)
    gauge = registry.Quantity(10.0, "barg")
    assert sample.pressure(p=gauge).m_as("bar") == close(11.01325)
    with unit_system("metric", site_pressure="0.85 bar"):
        assert sample.pressure(p=gauge).m_as("bar") == close(10.85)


@pytest.mark.parametrize(
    ("site", "error"),
    [
        ("1 ft", UnitsError),
        ("0 psig", UnitsError),
        (ureg.Quantity(0.0, "barg"), UnitsError),
        ("0.9", UnitsError),
        ("", UnitsError),
        ("9**9**9**9 bar", UnitsError),
        ("1 bar/0", UnitsError),
        (0.9, UnitsError),
        (True, UnitsError),
        (pint.UnitRegistry().Quantity(0.9, "bar"), UnitsError),
        (ureg.Quantity(np.array([0.9, 0.8]), "bar"), UnitsError),
        ("850 bar", DomainError),
        ("0 bar", DomainError),
        ("-1 bar", DomainError),
        (ureg.Quantity(float("nan"), "bar"), DomainError),
    ],
)
def test_a_site_pressure_that_no_air_has(site: Any, error: type[Exception]) -> None:
    for choose in (set_unit_system, lambda name, **site: unit_system(name, **site).__enter__()):
        with pytest.raises(error):
            choose("oilfield", site_pressure=site)
    assert current() == ("metric", 101_325.0)


def test_the_names_are_those_of_the_signature() -> None:
    assert SYSTEMS == ("metric", "oilfield", "si", "darcy")
    for function in (unit_system, set_unit_system):
        assert list(inspect.signature(function).parameters) == ["name", "site_pressure"]
