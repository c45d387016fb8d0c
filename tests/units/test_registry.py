"""The registry: every constant of the trade emerges from it, and it survives pickle and process."""

import contextlib
import copy
import multiprocessing
import pickle
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from functools import partial
from operator import attrgetter
from typing import Any

import numpy as np
import pint
import pytest

from tests.oracles.closed_form import in_si
from tests.published import tables
from tests.published.tables import Check
from wellindex import Quantity, UnitsError, ureg

CONSTANTS = [
    check
    for subject in ("unit_constants", "trade_constants", "groundwater")
    for check in tables.load(subject)
    if check.quantity in ("unit", "trade constant")
]
NAMED = ["5 stb", "42 rb", "1.5 mD", "10 psig", "60 degF", "2 cP*rb/day/psi", "3 %"]

close = partial(pytest.approx, abs=0)


def of_registry(check: Check) -> float:
    """The row's constant as the registry makes it: no digit of it is typed here."""
    value = check.factor_value
    for term in check.terms:
        value *= ureg.Quantity(term.of).to(term.unit).magnitude ** term.power
    return float(value)


@pytest.mark.parametrize("check", CONSTANTS, ids=attrgetter("id"))
def test_a_published_constant_emerges(check: Check) -> None:
    value = of_registry(check)
    assert value == close(check.computed, rel=1e-12)
    assert value == close(check.printed, rel=check.tolerance)


@pytest.mark.parametrize(
    "unit",
    [
        *("m", "cm", "ft", "acre", "gallon", "s", "min", "hour", "day", "kg", "lbm", "lbf"),
        *("Pa", "bar", "atm", "psi", "cP", "darcy", "mD", "rb"),
    ],
)
def test_a_unit_has_its_legal_definition(unit: str) -> None:
    value = ureg.Quantity(1.0, unit).to_base_units().magnitude
    assert value == close(float(in_si(unit)), rel=1e-15)


# Defining relations: NIST SP 811 (2008), appendix B, and the meaning of the trade's symbols.
@pytest.mark.parametrize(
    ("one", "same"),
    [
        ("rb", "42 gallon"),
        ("Mscf", "1000 scf"),
        ("MMscf", "1e6 scf"),
        ("Mstb", "1000 stb"),
        ("sm3", "1e6 scm3"),
        ("rm3", "1 m**3"),
        ("D", "1000 md"),
        ("mD", "1 millidarcy"),
        ("D", "1e9 nD"),
        ("cp", "0.01 poise"),
        ("cP", "1 mPa*s"),
        ("psia", "1 lbf/in**2"),
        ("bara", "100 kPa"),
        ("atm", "101325 N/m**2"),
        ("acre_ft", "43560 ft**3"),
        ("ha", "1e4 m2"),
        ("lbf", "32.17404855643044 lbm*ft/s**2"),
        ("mi", "5280 ft"),
        ("ft3", "1728 in**3"),
        ("year", "365.25 day"),
        ("tonne", "1000 kg"),
        ("MPa", "1e6 N/m2"),
        ("kW", "1000 J/s"),
        ("degree", "0.017453292519943295 rad"),
    ],
)
def test_a_symbol_means_what_the_trade_means(one: str, same: str) -> None:
    expected = ureg.Quantity(same)
    assert ureg.Quantity(1.0, one).m_as(expected.units) == close(expected.magnitude, rel=1e-14)


def test_a_surface_foot_is_a_foot() -> None:
    # 1 scf = 1 ft3 exactly: a standard volume is a size, its state is the fluid's.
    cubic_foot = ureg.Quantity(1.0, "ft**3").m_as("m**3")
    assert ureg.Quantity(1.0, "scf").m_as("sm3") == close(cubic_foot, rel=1e-15)
    assert ureg.Quantity(1.0, "stb").m_as("scf") == close(5.614583333333333, rel=1e-15)


def test_the_foreign_barrel_is_another_one() -> None:
    theirs = pint.UnitRegistry()
    assert theirs.Quantity(1, "bbl").m_as("gallon") == close(31.5, rel=1e-12)
    assert ureg.Quantity(1, "rb").m_as("gallon") == close(42, rel=1e-12)
    remedy = r"write rb \(reservoir barrel\) or stb \(stock-tank barrel\)"
    for name in ("bbl", "bbls", "barrel", "barrels"):
        for text in (name, f"{name}/day", f"cP*{name}/day/psi"):
            with pytest.raises(UnitsError, match=f"'{name}': {remedy}"):
                ureg.Quantity(1, text)
        with pytest.raises(UnitsError, match=f"'{name}': {remedy}"):
            ureg.Quantity(f"5 {name}")
        assert not hasattr(ureg, name)


@pytest.mark.parametrize(
    ("temperature", "kelvin"),
    [("32 degF", 273.15), ("212 degF", 373.15), ("60 degF", 288.705555555), ("15 °C", 288.15)],
)
def test_temperature(temperature: str, kelvin: float) -> None:
    assert ureg.Quantity(temperature).to("K").magnitude == close(kelvin, rel=1e-11)


def test_gauge_pressure_starts_at_one_atmosphere() -> None:
    assert ureg.Quantity(0.0, "psig").m_as("atm") == close(1.0, rel=1e-15)
    assert ureg.Quantity("10 psig").m_as("psia") == close(24.69594878, rel=1e-9)
    assert ureg.Quantity(1.0, "barg").m_as("bara") == close(2.01325, rel=1e-15)


@pytest.mark.parametrize("pair", [("stb/day", "rb/day"), ("sm3", "m**3"), ("scf", "ft**3")])
def test_surface_and_reservoir_volumes_do_not_mix(pair: tuple[str, str]) -> None:
    surface, reservoir = (ureg.Quantity(1.0, unit) for unit in pair)
    assert surface != reservoir
    with pytest.raises(pint.DimensionalityError):
        surface + reservoir
    with pytest.raises(pint.DimensionalityError):
        surface.to(pair[1])


def test_a_volume_factor_joins_them() -> None:
    rate = ureg.Quantity(100.0, "stb/day") * ureg.Quantity(1.2, "rb/stb")
    assert rate.m_as("rb/day") == close(120.0, rel=1e-14)


@pytest.mark.parametrize(
    "unit",
    [
        *("kft", "Mbbl", "kbar", "cft", "kpsi", "kD", "mft", "kcP", "megapascals", "kiloday"),
        *("mbbl", "ksm3", "krb", "Gscf", "dm", "hPa", "millidays", "microfoot"),
    ],
)
def test_there_are_no_prefixes(unit: str) -> None:
    with pytest.raises(UnitsError, match="unknown unit"):
        ureg.Unit(unit)


@pytest.mark.parametrize(
    ("unit", "remedy"),
    [
        ("Nm3", "at 0 degC; convert it to sm3"),
        ("Msm3", "M is a thousand to some and a million to others: write 1e3 sm3 or 1e6 sm3"),
        ("MSm3/day", "write 1e3 sm3"),
        ("Mcf/day", "write Mscf"),
        ("M", "M alone is no unit"),
        ("bpd", "rb/day"),
        ("F", "write degF"),
        ("dacy", "did you mean 'darcy'"),
    ],
)
def test_a_refused_name_says_the_remedy(unit: str, remedy: str) -> None:
    for make in (ureg.Unit, partial(ureg.Quantity, 1.0), ureg.Quantity(1.0, "m").to):
        with pytest.raises(UnitsError) as caught:
            make(unit)
        assert remedy in str(caught.value)


def test_names_are_plain_attributes() -> None:
    assert (3 * ureg.ft).m_as("inch") == close(36.0, rel=1e-14)
    assert not hasattr(ureg, "shape")
    with pytest.raises(AttributeError, match="0 degC"):
        _ = ureg.Nm3
    with pytest.raises(UnitsError, match="0 degC"):
        _ = ureg.Nm3


def test_a_unit_of_your_own() -> None:
    with contextlib.suppress(pint.RedefinitionError):  # a second run in one process
        ureg.define("furlong_of_a_test = 660 * foot")
    assert ureg.Quantity("1 furlong_of_a_test").m_as("mi") == close(0.125, rel=1e-14)
    with pytest.raises(pint.RedefinitionError):
        ureg.define("foot = 0.3 * metre")


def test_the_public_class_makes_our_quantities() -> None:
    assert isinstance(ureg.Quantity(1, "m"), Quantity)
    barrel = Quantity(1, "rb")
    assert type(barrel) is ureg.Quantity
    assert barrel.m_as("gallon") == close(42, rel=1e-12)


def test_dimensions_as_text() -> None:
    assert ureg.Quantity(1, "mD").check("[length]**2")
    assert ureg.Quantity(1, "stb/day").check("[standard_volume]/[time]")
    assert not ureg.Quantity(1, "rb").check("[standard_volume]")
    with pytest.raises(UnitsError):
        ureg.Quantity("5 [length]")


@pytest.mark.parametrize(
    ("spec", "shown"),
    [
        ("", "2.64243 cP*rb/day/psi"),
        (".3f", "2.642 cP*rb/day/psi"),
        (".1e", "2.6e+00 cP*rb/day/psi"),
        (".2f~C", "2.64 cP*rb/day/psi"),
        (".2f~", "2.64 cP * rb / day / psi"),
        ("~", "2.64243 cP * rb / day / psi"),
    ],
)
def test_a_quantity_shows_symbols(spec: str, shown: str) -> None:
    assert format(ureg.Quantity(2.642428, "cP*rb/day/psi"), spec) == shown


def same(ours: Any, other: Any) -> bool:
    return (
        type(other) is ureg.Quantity
        and other.units == ours.units
        and np.array_equal(other.magnitude, ours.magnitude)
    )


def copies(value: Any) -> Iterator[Any]:
    for protocol in range(2, pickle.HIGHEST_PROTOCOL + 1):
        yield pickle.loads(pickle.dumps(value, protocol))
    yield copy.copy(value)
    yield copy.deepcopy(value)


@pytest.mark.parametrize("text", NAMED)
def test_copies_of_a_quantity_are_ours(text: str) -> None:
    value = ureg.Quantity(text)
    array = ureg.Quantity(np.arange(3.0), value.units)
    assert all(same(value, other) for other in copies(value))
    assert all(same(array, other) for other in copies(array))
    assert all(other == value.units for other in copies(value.units))


def test_there_is_one_registry() -> None:
    assert all(other is ureg for other in copies(ureg))


def test_a_deep_copy_shares_no_memory() -> None:
    value = ureg.Quantity(np.arange(3.0), "ft")
    assert not np.shares_memory(copy.deepcopy(value).magnitude, value.magnitude)


def visit(value: Any) -> tuple[bool, float, Any]:
    """Runs in another process: is it ours, what is it in SI, and back again."""
    return type(value) is ureg.Quantity, float(value.to_base_units().magnitude), value


# From Python 3.12 a fork warns where numpy's thread pool runs; the fork is what is tested here.
@pytest.mark.filterwarnings("ignore:This process:DeprecationWarning")
@pytest.mark.parametrize("method", ["fork", "spawn"])
def test_quantities_cross_processes(method: str) -> None:
    values = [ureg.Quantity(text) for text in NAMED]
    with multiprocessing.get_context(method).Pool(1) as pool:
        results = pool.map_async(visit, values).get(timeout=60)
    for value, (ours, si, back) in zip(values, results, strict=True):
        assert ours
        assert si == value.to_base_units().magnitude
        assert same(value, back)


def test_pint_s_own_registry_is_left_alone() -> None:
    pickle.loads(pickle.dumps(ureg.Quantity(1, "rb")))
    assert pint.get_application_registry() is not ureg
    assert pint.application_registry.get() is not ureg
    assert pint.Quantity(1, "barrel").m_as("gallon") == close(31.5, rel=1e-12)


def test_threads_share_the_registry() -> None:
    def convert(number: int) -> float:
        return float(ureg.Quantity(f"{number} m{number % 2 + 2}").to_base_units().magnitude)

    with ThreadPoolExecutor(8) as pool:
        found = list(pool.map(convert, range(1, 401)))
    assert found == list(range(1, 401))


def test_no_unit_at_all_is_the_unit_of_a_ratio() -> None:
    assert (ureg.Quantity(3.0, "km") / ureg.Quantity(1500.0, "m")).to("").magnitude == 2.0
    for make in (ureg.Quantity, Quantity):
        plain = make(2.5, "")
        assert type(plain) is ureg.Quantity
        assert plain.magnitude == 2.5
        assert plain.dimensionless
    with pytest.raises(pint.DimensionalityError):
        make(2.5, "").to("m")
