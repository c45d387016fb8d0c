"""``define_units``: another registry learns the surface volumes and the trade's pressures."""

import re
from functools import partial
from typing import Any

import pint
import pytest

from tests.units import sample_formulas as sample
from wellindex import UnitsError, define_units, ureg

close = partial(pytest.approx, abs=0, rel=1e-14)

NAMES = [
    *("sm3", "scm3", "scf", "Mscf", "MMscf", "stb", "Mstb", "MMstb", "rb", "rm3"),
    *("psia", "bara", "standard_cubic_metre", "stock_tank_barrel", "reservoir_barrel"),
]


@pytest.fixture(scope="module")
def taught() -> Any:
    registry = pint.UnitRegistry()
    define_units(registry)
    return registry


@pytest.mark.parametrize("name", NAMES)
def test_a_name_is_worth_the_same(taught: Any, name: str) -> None:
    ours, theirs = ureg.Quantity(1.0, name), taught.Quantity(1.0, name)
    assert dict(ours.dimensionality) == dict(theirs.dimensionality)
    assert theirs.to_base_units().magnitude == close(ours.to_base_units().magnitude)


@pytest.mark.parametrize("gauge", ["psig", "barg"])
def test_gauge_units(taught: Any, gauge: str) -> None:
    for value in (0.0, 10.0):
        expected = ureg.Quantity(value, gauge).m_as("Pa")
        assert taught.Quantity(value, gauge).m_as("Pa") == close(expected)
        assert sample.pressure(p=taught.Quantity(value, gauge)).m_as("Pa") == close(expected)
        with pytest.raises(UnitsError, match="a difference has no gauge"):
            sample.difference(dp=taught.Quantity(value, gauge))


def test_surface_volumes_are_apart_there_too(taught: Any) -> None:
    with pytest.raises(pint.DimensionalityError):
        taught.Quantity(1.0, "stb").to("rb")
    assert taught.Quantity(1.2, "rb/stb").m_as("rm3/sm3") == close(1.2)


def test_the_rest_of_it_is_left_alone(taught: Any) -> None:
    assert taught.Quantity(1.0, "barrel").m_as("gallon") == close(31.5)
    assert taught.Quantity(1.0, "md").m_as("day") == close(1e-3)
    untaught = pint.UnitRegistry()
    with pytest.raises(pint.UndefinedUnitError):
        untaught.Quantity(1.0, "stb")


def test_quantities_of_it_are_read(taught: Any) -> None:
    answer = sample.surface_rate(q=taught.Quantity(120.0, "rb/day"), factor="1.2 rb/stb")
    assert isinstance(answer, taught.Quantity)
    assert answer.m_as("stb/day") == close(100.0)


def test_twice_is_once(taught: Any) -> None:
    define_units(taught)
    assert taught.Quantity(1.0, "stb").m_as("sm3") == close(0.158987294928)


def test_a_lazy_registry() -> None:
    registry = pint.LazyRegistry()
    define_units(registry)
    assert registry.Quantity(1.0, "Mscf").m_as("scf") == close(1000.0)


def test_pint_s_application_registry(monkeypatch: pytest.MonkeyPatch) -> None:
    own = pint.UnitRegistry()
    monkeypatch.setattr(pint.application_registry, "_registry", own)
    define_units(pint.application_registry)
    assert pint.Quantity(1.0, "stb").m_as("sm3") == close(0.158987294928)
    assert own.Quantity(1.0, "stb").check("[standard_volume]")


def test_a_subclass_of_a_registry() -> None:
    class Mine(pint.UnitRegistry[Any]):
        """Someone's own."""

    registry = Mine()
    define_units(registry)
    assert registry.Quantity(1.0, "rb").m_as("m**3") == close(0.158987294928)


def test_what_is_defined_alike_is_kept() -> None:
    registry = pint.UnitRegistry()
    registry.define("standard_cubic_metre = [standard_volume] = sm3")
    registry.define("reservoir_barrel = oil_barrel = rb")
    define_units(registry)
    assert registry.Quantity(1.0, "stb").m_as("sm3") == close(0.158987294928)


@pytest.mark.parametrize(
    ("definition", "name"),
    [("stb = 1 * metre ** 3", "stb"), ("scf = 1 * foot ** 3", "scf"), ("psia = 7000 * Pa", "psia")],
)
def test_another_meaning_is_said(definition: str, name: str) -> None:
    registry = pint.UnitRegistry()
    registry.define(definition)
    with pytest.raises(UnitsError, match=f"this registry gives {name}.* another value than the"):
        define_units(registry)


def test_too_late_is_said() -> None:
    registry = pint.UnitRegistry()
    assert registry.Quantity(1.0, "rb").check("[length]**2")  # ronto-barn
    with pytest.raises(UnitsError, match=re.escape("call define_units before these names are us")):
        define_units(registry)


@pytest.mark.parametrize("thing", [None, pint, "registry", pint.UnitRegistry, {}])
def test_only_a_registry(thing: Any) -> None:
    with pytest.raises(UnitsError, match=r"define_units needs a pint\.UnitRegistry, not "):
        define_units(thing)


PLAIN_VOLUMES = {
    "stb": "stb = 0.158987294928 * metre ** 3",
    "scf": "scf = 0.028316846592 * metre ** 3",
    "Mscf": "Mscf = 28.316846592 * metre ** 3",
    "sm3": "sm3 = metre ** 3",
}


@pytest.mark.parametrize("name", PLAIN_VOLUMES)
def test_a_surface_volume_that_is_a_plain_one_there(name: str) -> None:
    registry = pint.UnitRegistry()
    registry.define(PLAIN_VOLUMES[name])
    rate = registry.Quantity(5.0, f"{name}/day")
    words = re.escape(f"that registry makes {name!r} a volume at reservoir conditions")
    for _again in range(2):
        with pytest.raises(UnitsError, match=f"{words}.*call wellindex.define_units"):
            sample.rate(q=rate)
    with pytest.raises(UnitsError, match=name):
        define_units(registry)


@pytest.mark.parametrize("name", PLAIN_VOLUMES)
def test_a_registry_that_is_refused_is_left_as_it_was(name: str) -> None:
    registry = pint.UnitRegistry()
    registry.define(PLAIN_VOLUMES[name])
    before = set(registry)
    with pytest.raises(UnitsError, match=f"this registry gives {name} another value"):
        define_units(registry)
    assert set(registry) == before
    with pytest.raises(pint.UndefinedUnitError):
        registry.Quantity(1.0, "psig")


def test_foreign_barrels_by_their_short_name() -> None:
    registry = pint.UnitRegistry()
    with pytest.raises(UnitsError, match=r"holds 0\.11924 m3; the trade's holds 42 gallons"):
        sample.rate(q=registry.Quantity(1.0, "bbl/day"))
