"""What an argument may look like, what it means in SI, and what is refused."""

import re
from collections.abc import Callable
from decimal import Decimal
from fractions import Fraction
from functools import partial
from typing import Any

import numpy as np
import pint
import pytest

from tests.oracles.closed_form import in_si
from tests.units import sample_formulas as sample
from wellindex import (
    DomainError,
    ShapeError,
    UnitsError,
    set_unit_system,
    unit_system,
    ureg,
    well_index,
)
from wellindex.units.kinds import RESERVOIR_RATE, SURFACE_RATE

close = partial(pytest.approx, abs=0, rel=1e-14)

THEIRS = pint.UnitRegistry()
DECIMAL = pint.UnitRegistry(non_int_type=Decimal)
ARRAYS = pint.UnitRegistry(force_ndarray_like=True)
FOOT = 0.3048


def in_feet(value: Any, registry: Any = ureg) -> Any:
    return registry.Quantity(value, "ft")


def si(answer: Any) -> Any:
    return answer.to_base_units().magnitude


SCALARS = {
    "text": "2.5 ft",
    "numpy text": np.str_("2.5 ft"),
    "float": in_feet(2.5),
    "fraction": in_feet(Fraction(5, 2)),
    "decimal": in_feet(Decimal("2.5")),
    "float32": in_feet(np.float32(2.5)),
    "float64": in_feet(np.float64(2.5)),
    "0-d array": in_feet(np.array(2.5)),
    "0-d float32 array": in_feet(np.array(2.5, dtype=np.float32)),
    "other registry": in_feet(2.5, THEIRS),
    "application registry": pint.Quantity(2.5, "ft"),
    "lazy registry": in_feet(2.5, pint.LazyRegistry()),
    "decimal registry": in_feet(Decimal("2.5"), DECIMAL),
    "array registry": in_feet(2.5, ARRAYS),
}


@pytest.mark.parametrize("value", SCALARS.values(), ids=SCALARS.keys())
def test_a_scalar_in_any_form(value: Any) -> None:
    for _again in range(2):  # the second call goes by the remembered factor
        answer = sample.length(d=value)
        assert np.ndim(answer.magnitude) == 0
        assert float(si(answer)) == close(2.5 * FOOT)


@pytest.mark.parametrize("whole", [3, np.int8(3), np.uint16(3), np.int64(3)])
def test_whole_numbers(whole: Any) -> None:
    for registry in (ureg, THEIRS):
        assert float(si(sample.length(d=in_feet(whole, registry)))) == close(3 * FOOT)


VALUES = np.array([[1.0, 2.0, 3.0], [4.0, 5.0, 6.0]])
TALL = np.arange(1.0, 13.0).reshape(4, 3)
SEQUENCES = {
    "list of text": (["1 ft", "2 ft"], [1, 2]),
    "tuple of text": (("1 ft", "12 in"), [1, 1]),
    "list of quantities": ([in_feet(1), in_feet(2.0)], [1, 2]),
    "mixed list": (["1 ft", in_feet(2.0), in_feet(3, THEIRS)], [1, 2, 3]),
    "nested list": ([["1 ft", "2 ft"], ["3 ft", "4 ft"]], [[1, 2], [3, 4]]),
    "list of arrays": ([in_feet(VALUES[0]), in_feet(VALUES[1])], VALUES),
    "one text": (["7 ft"], [7]),
    "float array": (in_feet(VALUES), VALUES),
    "integer array": (in_feet(VALUES.astype(np.int32)), VALUES),
    "unsigned array": (in_feet(VALUES.astype(np.uint8)), VALUES),
    "float32 array": (in_feet(VALUES.astype(np.float32)), VALUES),
    "float16 array": (in_feet(VALUES.astype(np.float16)), VALUES),
    "other byte order": (in_feet(VALUES.astype(">f8")), VALUES),
    "Fortran order": (in_feet(np.asfortranarray(VALUES)), VALUES),
    "every other": (in_feet(TALL[::2, ::-1]), TALL[::2, ::-1]),
    "read-only": (in_feet(np.broadcast_to(VALUES[0], (2, 3))), [VALUES[0], VALUES[0]]),
    "one element": (in_feet(np.array([7.0])), [7]),
    "other registry's array": (in_feet(VALUES, THEIRS), VALUES),
    "other registry's integers": (in_feet(VALUES.astype(int), THEIRS), VALUES),
    "empty": (in_feet(np.array([])), []),
    "empty integers": (in_feet(np.array([], dtype=int)), []),
    "empty rows": (in_feet(np.empty((0, 3))), np.empty((0, 3))),
}


@pytest.mark.parametrize(("value", "feet"), SEQUENCES.values(), ids=SEQUENCES.keys())
def test_an_array_in_any_form(value: Any, feet: Any) -> None:
    for _again in range(2):
        answer = np.asarray(si(sample.length(d=value)))
        assert answer.shape == np.shape(feet)
        np.testing.assert_allclose(answer, np.multiply(feet, FOOT), rtol=1e-14)


@pytest.mark.parametrize(("value", "feet"), SEQUENCES.values(), ids=SEQUENCES.keys())
def test_what_is_given_is_neither_changed_nor_shared(value: Any, feet: Any) -> None:
    for system in ("metric", "oilfield", "si"):
        with unit_system(system):
            answer = sample.length(d=value).magnitude
        if isinstance(value, pint.Quantity):
            np.testing.assert_array_equal(value.magnitude, feet)
            assert not np.shares_memory(answer, value.magnitude)


@pytest.mark.parametrize("size", [3, 20_000])
@pytest.mark.parametrize("rw", ["1 m", THEIRS.Quantity(1.0, "m")])
def test_a_plain_array_is_not_shared_either(size: int, rw: Any) -> None:
    numbers = np.linspace(-1.0, 1.0, size)
    kept = numbers.copy()
    answer = sample.plain(skin=numbers, rw=rw).magnitude
    np.testing.assert_array_equal(answer, kept)
    assert not np.shares_memory(answer, numbers)
    answer[:] = 7.0
    np.testing.assert_array_equal(numbers, kept)


def test_an_array_in_si_units_is_not_shared() -> None:
    set_unit_system("si")
    for registry in (ureg, THEIRS):
        metres = np.array([1.0, 2.0])
        answer = sample.length(d=registry.Quantity(metres, "m")).magnitude
        answer[:] = 7.0
        np.testing.assert_array_equal(metres, [1.0, 2.0])


PLAIN = {
    "int": (2, 2),
    "float": (2.5, 2.5),
    "negative": (-4.0, -4),
    "decimal": (Decimal("2.5"), 2.5),
    "fraction": (Fraction(5, 2), 2.5),
    "numpy int": (np.int16(2), 2),
    "numpy float32": (np.float32(2.5), 2.5),
    "list": ([1, 2.5], [1, 2.5]),
    "tuple": ((1, 2), [1, 2]),
    "array": (np.array([1, 2]), [1, 2]),
    "0-d array": (np.array(2.5), 2.5),
    "text": ("2.5", 2.5),
    "text with a sign": ("-2.5", -2.5),
    "per cent": ("250 %", 2.5),
    "quantity": (ureg.Quantity(2.5, "dimensionless"), 2.5),
    "ratio": (ureg.Quantity(2.5, "ft/ft"), 2.5),
    "other registry": (THEIRS.Quantity(2.5, "dimensionless"), 2.5),
    "other registry's per cent": (THEIRS.Quantity(250, "percent"), 2.5),
    "volume factor like": (ureg.Quantity(2500.0, "mm/m"), 2.5),
}


@pytest.mark.parametrize(("value", "number"), PLAIN.values(), ids=PLAIN.keys())
def test_plain_numbers_where_they_are_allowed(value: Any, number: Any) -> None:
    np.testing.assert_allclose(si(sample.plain(skin=value)), number, rtol=1e-15)


# Values by the units' legal definitions (tests/oracles/closed_form.py).
@pytest.mark.parametrize(
    ("formula", "name", "text"),
    [
        (sample.permeability, "k", "50 mD"),
        (sample.viscosity, "mu", "0.5 cP"),
        (sample.pressure, "p", "3000 psi"),
        (sample.difference, "dp", "-15 psi"),
        (sample.duration, "t", "2 day"),
        (sample.rate, "q", "-100 rb/day"),
        (sample.compressibility, "c", "1e-5 psi**-1"),
        (sample.position, "at", "-5 ft"),
    ],
)
@pytest.mark.parametrize("system", ["metric", "oilfield", "si", "darcy"])
def test_each_kind_in_si(formula: Any, name: str, text: str, system: str) -> None:
    expected = float(in_si(text))
    quantity = ureg.Quantity(text)
    with unit_system(system):
        for value in (text, quantity, quantity.to_base_units()):
            assert float(si(formula(**{name: value}))) == close(expected)
        assert float(formula.si(**{name: expected})) == expected


def test_a_surface_rate_has_its_own_dimension() -> None:
    answer = sample.surface_rate(q="120 rb/day", factor="1.2 rb/stb")
    assert answer.check("[standard_volume]/[time]")
    assert answer.m_as("stb/day") == close(100.0)
    assert sample.surface_rate(q="120 m**3/day", factor=1.2).m_as("sm3/day") == close(100.0)


def test_a_position_is_a_tuple_or_one_quantity() -> None:
    for at in (("1 m", "2 m", "-3 m"), ureg.Quantity([1.0, 2.0, -3.0], "m")):
        np.testing.assert_allclose(si(sample.position(at=at)), [1.0, 2.0, -3.0], rtol=1e-15)
    np.testing.assert_array_equal(si(sample.position()), [0.0, 0.0, 0.0])
    with pytest.raises(UnitsError, match="at: needs a position; got 1"):
        sample.position(at=(1.0, 2.0, 3.0))


def test_a_liquid_factor_may_be_plain_a_gas_factor_may_not() -> None:
    for number in (0.5, 1, 10.0, "1.2"):
        sample.surface_rate(q="1 rb/day", factor=number)
    for number in (0.49, 10.1, 0, -1.2, "0.005"):
        with pytest.raises(DomainError, match=r"between 0\.5 and 10; otherwise give its unit"):
            sample.surface_rate(q="1 rb/day", factor=number)
    assert sample.gas_factor(factor="0.9 rb/Mscf").m_as("rm3/sm3") == close(
        float(in_si("0.9 rb") / in_si("1000 ft**3"))
    )
    for number in (0.9, "0.9", 1):
        with pytest.raises(UnitsError, match="give a quantity or text with its unit"):
            sample.gas_factor(factor=number)


FAHRENHEIT = [("32 degF", 273.15), ("0 degC", 273.15), ("491.67 degR", 273.15), ("300 K", 300.0)]


@pytest.mark.parametrize(("text", "kelvin"), FAHRENHEIT)
def test_temperatures(text: str, kelvin: float) -> None:
    assert sample.temperature(t=text).m_as("K") == close(kelvin)
    array = sample.temperature(t=[text, text])
    np.testing.assert_allclose(array.m_as("K"), [kelvin, kelvin], rtol=1e-14)
    with unit_system("oilfield"):
        assert sample.temperature(t=text).units == ureg.degF
        assert sample.temperature(t=text).m_as("K") == close(kelvin)


def test_a_foreign_temperature() -> None:
    answer = sample.temperature(t=THEIRS.Quantity(60.0, "degF"))
    assert answer.m_as("kelvin") == close(288.7055555555555)
    assert answer.m_as("degF") == pytest.approx(60.0, rel=1e-12)


ATMOSPHERE = 101325.0
PSI = float(in_si("1 psi"))


@pytest.mark.parametrize(
    ("text", "pascal"),
    [("10 psig", 10 * PSI + ATMOSPHERE), ("2 barg", 2e5 + ATMOSPHERE), ("0 psig", ATMOSPHERE)],
)
def test_gauge_pressure_from_one_standard_atmosphere(text: str, pascal: float) -> None:
    quantity = ureg.Quantity(text)
    array = ureg.Quantity(np.full(3, quantity.magnitude), quantity.units)
    for value in (text, quantity):
        assert float(si(sample.pressure(p=value))) == close(pascal)
    np.testing.assert_allclose(si(sample.pressure(p=array)), np.full(3, pascal), rtol=1e-14)


def test_gauge_pressure_from_the_site_s_air() -> None:
    site = 0.85e5
    with unit_system("metric", site_pressure="0.85 bar"):
        assert float(si(sample.pressure(p="10 psig"))) == close(10 * PSI + site)
        assert float(si(sample.pressure(p="2 barg"))) == close(2e5 + site)
        assert float(si(sample.pressure(p="2 bara"))) == close(2e5)
        array = ureg.Quantity(np.array([0.0, 2.0]), "barg")
        np.testing.assert_allclose(si(sample.pressure(p=array)), [site, 2e5 + site], rtol=1e-14)
    assert float(si(sample.pressure(p="2 barg"))) == close(2e5 + ATMOSPHERE)


def test_no_pressure_below_vacuum() -> None:
    with pytest.raises(DomainError, match="p: needs an absolute or gauge pressure, zero or posi"):
        sample.pressure(p="-15 psig")


NAN, INF = float("nan"), float("inf")
MASKED = np.ma.masked_array([1.0, 2.0], mask=[False, True])


def q(value: Any, unit: str) -> Any:
    return ureg.Quantity(value, unit)


def foreign(value: Any, unit: str) -> Any:
    return THEIRS.Quantity(value, unit)


Refusal = tuple[Callable[..., Any], dict[str, Any], type[Exception], str]
REFUSED: dict[str, Refusal] = {
    "missing unit": (
        sample.length,
        {"d": 5.0},
        UnitsError,
        "d: needs a length; got 5.0; give a quantity or text with its unit, such as '... m'",
    ),
    "missing unit, text": (sample.length, {"d": "5"}, UnitsError, "got '5'; give a quantity"),
    "missing unit, int": (sample.length, {"d": 5}, UnitsError, "give a quantity or text"),
    "missing unit, array": (sample.length, {"d": np.ones(3)}, UnitsError, "such as '... m'"),
    "missing unit, list": (sample.length, {"d": [1.0, 2.0]}, UnitsError, "such as '... m'"),
    "missing unit in a list": (sample.length, {"d": ["1 m", 2.0]}, UnitsError, "got 2.0"),
    "dimensionless": (
        sample.length,
        {"d": q(1.0, "dimensionless")},
        UnitsError,
        "use a unit such as m or ft",
    ),
    "wrong dimension": (
        sample.permeability,
        {"k": "3 ft"},
        UnitsError,
        "k: needs a permeability; got '3 ft'; use a unit such as mD",
    ),
    "wrong dimension, ours": (sample.length, {"d": q(1.0, "day")}, UnitsError, "such as m or ft"),
    "wrong dimension, array": (sample.length, {"d": q(np.ones(3), "s")}, UnitsError, "m or ft"),
    "wrong dimension, theirs": (sample.length, {"d": foreign(1, "s")}, UnitsError, "m or ft"),
    "wrong dimension, plain": (sample.plain, {"skin": "1 m"}, UnitsError, "needs a skin"),
    "None": (sample.length, {"d": None}, UnitsError, "got None; give a quantity"),
    "bytes": (sample.length, {"d": b"1 m"}, UnitsError, "got b'1 m'"),
    "dict": (sample.length, {"d": {"1 m": 1}}, UnitsError, "give a quantity"),
    "set": (sample.length, {"d": {"1 m"}}, UnitsError, "give a quantity"),
    "object": (sample.length, {"d": object()}, UnitsError, "real numbers"),
    "empty text": (sample.length, {"d": ""}, UnitsError, "it is empty"),
    "blank text": (sample.length, {"d": "  "}, UnitsError, "it is empty"),
    "garbage": (sample.length, {"d": "long"}, UnitsError, "d: needs a length; got 'long'"),
    "unknown unit": (sample.length, {"d": "5 foots"}, UnitsError, "did you mean 'foot'?"),
    "empty list": (sample.length, {"d": []}, ShapeError, "an empty sequence"),
    "ragged list": (sample.length, {"d": [["1 m"], "2 m"]}, ShapeError, "differ in shape"),
    "NaN": (sample.length, {"d": q(NAN, "m")}, DomainError, "positive and finite; got 'nan m'"),
    "NaN, theirs": (sample.length, {"d": foreign(NAN, "m")}, DomainError, "got 'nan meter'"),
    "NaN, position": (sample.position, {"at": q(NAN, "m")}, DomainError, "a position, finite"),
    "NaN, plain": (sample.plain, {"skin": NAN}, DomainError, "finite; got nan"),
    "NaN, decimal": (sample.plain, {"skin": Decimal("NaN")}, DomainError, "got nan"),
    "infinity": (sample.length, {"d": q(INF, "m")}, DomainError, "and finite; got 'inf m'"),
    "minus infinity": (sample.position, {"at": q(-INF, "m")}, DomainError, "got '-inf m'"),
    "infinity, plain": (sample.plain, {"skin": INF}, DomainError, "got inf"),
    "infinity, positive": (sample.length, {"d": q(INF, "m")}, DomainError, "a length, positive"),
    "infinite in metres": (sample.length, {"d": q(1e308, "km")}, DomainError, "got '1e+308 km'"),
    "a very large integer": (sample.length, {"d": q(10**400, "m")}, UnitsError, "is too large"),
    "a very large number": (sample.plain, {"skin": 10**400}, UnitsError, "is too large"),
    "zero": (sample.length, {"d": "0 m"}, DomainError, "positive and finite; got '0 m'"),
    "negative": (sample.length, {"d": "-1 m"}, DomainError, "positive and finite; got '-1 m'"),
    "negative rock": (sample.permeability, {"k": "-1 mD"}, DomainError, "zero or positive"),
    "zero viscosity": (sample.viscosity, {"mu": "0 cP"}, DomainError, "a viscosity, positive"),
    "fraction above one": (
        sample.between,
        {"a": "1 m", "b": "2 m", "share": 1.01},
        DomainError,
        "share: needs a fraction, between 0 and 1; got 1.01",
    ),
    "negative fraction": (
        sample.between,
        {"a": "1 m", "b": "2 m", "share": "-1 %"},
        DomainError,
        "share: needs a fraction, between 0 and 1; got '-1 %'",
    ),
    "boolean": (sample.plain, {"skin": True}, UnitsError, "got True; a boolean is no quantity"),
    "numpy boolean": (sample.plain, {"skin": np.True_}, UnitsError, "a boolean is no quantity"),
    "boolean array": (sample.plain, {"skin": np.array([True])}, UnitsError, "not of bool"),
    "boolean in a list": (sample.plain, {"skin": [1.0, True]}, UnitsError, "a boolean is no"),
    "boolean length": (sample.length, {"d": q(np.array([True]), "m")}, UnitsError, "not of bool"),
    "complex": (sample.plain, {"skin": 1 + 2j}, UnitsError, "got (1+2j)"),
    "complex length": (sample.length, {"d": q(1 + 2j, "m")}, UnitsError, "got '(1+2j) m"),
    "complex array": (sample.length, {"d": q(np.ones(2) * 1j, "m")}, UnitsError, "of complex128"),
    "text array": (sample.plain, {"skin": np.array(["1"])}, UnitsError, "not of <U1"),
    "object array": (
        sample.length,
        {"d": q(np.array([Decimal(1)]), "m")},
        UnitsError,
        "not of object",
    ),
    "dates": (sample.plain, {"skin": np.array(["2001-01-01"], "M8[D]")}, UnitsError, "datetime64"),
    "masked array": (sample.length, {"d": q(MASKED, "m")}, UnitsError, "fill the masked elements"),
    "masked, plain": (sample.plain, {"skin": MASKED}, UnitsError, "a mask would be lost"),
    "masked, theirs": (sample.length, {"d": foreign(MASKED, "m")}, UnitsError, "fill the masked"),
    "nothing masked": (sample.plain, {"skin": np.ma.masked_array([1.0])}, UnitsError, "fill the"),
    "delta temperature": (
        sample.temperature,
        {"t": q(5.0, "delta_degree_Celsius")},
        UnitsError,
        "this is a difference of two, not a value",
    ),
    "delta temperature, text": (sample.temperature, {"t": "5 delta_degC"}, UnitsError, "delta_"),
    "delta temperature, theirs": (
        sample.temperature,
        {"t": foreign(5.0, "delta_degF")},
        UnitsError,
        "this is a difference of two, not a value",
    ),
    "gauge difference": (
        sample.difference,
        {"dp": "10 psig"},
        UnitsError,
        "dp: needs a pressure difference; got '10 psig'; a difference has no gauge: write psi",
    ),
    "gauge difference, ours": (sample.difference, {"dp": q(1.0, "barg")}, UnitsError, "no gauge"),
    "gauge difference, array": (
        sample.difference,
        {"dp": q(np.ones(3), "psig")},
        UnitsError,
        "a difference has no gauge",
    ),
    "difference as pressure": (
        sample.pressure,
        {"p": q(1.0, "delta_psi_gauge")},
        UnitsError,
        "this is a difference of two",
    ),
    "per gauge": (sample.compressibility, {"c": "1 1/psig"}, UnitsError, "c: needs a compress"),
    "day as darcy": (
        sample.rate,
        {"q": "5 m**3/D"},
        UnitsError,
        "D is darcy here; write 'day' for a day",
    ),
    "surface for reservoir": (
        sample.rate,
        {"q": "5 stb/day"},
        UnitsError,
        "a formation volume factor turns surface into reservoir volumes",
    ),
    "normal cubic metre": (sample.rate, {"q": "5 Nm3/day"}, UnitsError, "convert it to sm3"),
    "million or thousand": (sample.rate, {"q": "5 Msm3/day"}, UnitsError, "to some and a million"),
    "milliday": (
        sample.permeability,
        {"k": foreign(5.0, "md")},
        UnitsError,
        "'md' is read as milliday there; write 'millidarcy'",
    ),
    "milliday as a time": (sample.duration, {"t": foreign(5.0, "md")}, UnitsError, "milliday"),
    "millidebye": (
        sample.permeability,
        {"k": foreign(5.0, "mD")},
        UnitsError,
        "'mD' is read as millidebye there; write 'millidarcy'",
    ),
    "debye": (sample.permeability, {"k": foreign(5.0, "D")}, UnitsError, "write 'darcy'"),
    "rontobarn": (sample.rate, {"q": foreign(5.0, "rb/day")}, UnitsError, "ronto-barn there"),
    "rontobarn as rock": (sample.permeability, {"k": foreign(5.0, "rb")}, UnitsError, "ronto-barn"),
    "cup": (
        sample.viscosity,
        {"mu": foreign(5.0, "cp")},
        UnitsError,
        "'cp' is read as cup there; write 'centipoise'",
    ),
    "cups a day": (sample.rate, {"q": foreign(5.0, "cup/day")}, UnitsError, "cup"),
    "their barrel": (
        sample.rate,
        {"q": foreign(5.0, "barrel/day")},
        UnitsError,
        "that registry's barrel holds 0.11924 m3; the trade's holds 42 gallons",
    ),
    "their bbl": (sample.rate, {"q": foreign(5.0, "bbl/hour")}, UnitsError, "write 'oil_barrel'"),
    "their kilobarrel": (sample.rate, {"q": foreign(5.0, "kbbl/day")}, UnitsError, "42 gallons"),
    "their barrels, array": (sample.rate, {"q": foreign(np.ones(3), "bbl/day")}, UnitsError, "42"),
    "their barrel, over": (
        sample.length,
        {"d": foreign(1.0, "barrel/ft**2")},
        UnitsError,
        "42 gallons",
    ),
}


@pytest.mark.parametrize(
    ("formula", "given", "error", "words"), REFUSED.values(), ids=REFUSED.keys()
)
def test_refused(
    formula: Callable[..., Any], given: dict[str, Any], error: type[Exception], words: str
) -> None:
    for _again in range(2):
        with pytest.raises(error, match=re.escape(words)) as caught:
            formula(**given)
        (name,) = [name for name in given if f"  {name}: needs " in str(caught.value)]
        assert str(caught.value).startswith(f"{formula.__name__}(): 1 argument is wrong\n  {name}")


def test_the_hint_follows_the_unit_system() -> None:
    with (
        unit_system("oilfield"),
        pytest.raises(UnitsError, match=re.escape("such as '... ft'")),
    ):
        sample.length(d=5.0)


def test_their_oil_barrel_is_ours() -> None:
    answer = sample.rate(q=foreign(1.0, "oil_barrel/day"))
    assert float(answer.m_as("m**3/s")) == close(float(in_si("1 rb/day")))


def test_a_redefined_barrel_is_its_owner_s() -> None:
    theirs = pint.UnitRegistry(on_redefinition="ignore")
    theirs.define("barrel = 42 * gallon = bbl")
    answer = sample.rate(q=theirs.Quantity(1.0, "bbl/day"))
    assert float(answer.m_as("m**3/s")) == close(float(in_si("1 rb/day")))


def test_their_own_gauge_is_no_difference() -> None:
    theirs = pint.UnitRegistry()
    theirs.define("well_gauge = psi; offset: 90000")
    with pytest.raises(UnitsError, match="its unit has a zero of its own"):
        sample.difference(dp=theirs.Quantity(1.0, "well_gauge"))


def test_each_registry_counts_by_its_own_definition() -> None:
    short, long = pint.UnitRegistry(), pint.UnitRegistry()
    short.define("pace = 0.5 * metre")
    long.define("pace = 0.8 * metre")
    for _again in range(2):
        assert float(sample.length(d=short.Quantity(1.0, "pace")).m_as("m")) == close(0.5)
        assert float(sample.length(d=long.Quantity(1.0, "pace")).m_as("m")) == close(0.8)
    units = short.UnitsContainer({"pace": 1})
    for registry, size in [(short, 0.5), (long, 0.8), (short, 0.5)]:
        assert float(sample.length(d=registry.Quantity(1.0, units)).m_as("m")) == close(size)


@pytest.mark.parametrize("registry", [THEIRS, ureg], ids=["theirs", "ours"])
def test_an_active_context_does_not_leak(registry: Any) -> None:
    lets_pass = pint.Context()
    lets_pass.add_transformation("[length]", "[length]**2", lambda registry, x: x * x)
    lets_pass.add_transformation("[time]", "[length]", lambda registry, x: x)
    with registry.context(lets_pass):
        assert registry.Quantity(3.0, "m").to("m**2").magnitude == close(9.0)
        for _again in range(2):
            with pytest.raises(UnitsError, match="k: needs a permeability"):
                sample.permeability(k=registry.Quantity(3.0, "m"))
        with pytest.raises(UnitsError, match="d: needs a length"):
            sample.length(d=registry.Quantity(np.ones(3), "s"))


def test_a_rate_is_of_one_kind_or_the_other() -> None:
    holder = sample.Holder("1 m")
    reservoir, surface = holder.rate(q="2 rb/day"), holder.rate(q="2 stb/day")
    assert (reservoir.kind, surface.kind) == (RESERVOIR_RATE, SURFACE_RATE)
    assert reservoir.value == surface.value == close(float(in_si("2 rb/day")))
    many = ureg.Quantity(np.full(20_000, 2.0), "stb/day")
    assert holder.rate(q=many).value.shape == (20_000,)
    assert holder.rate() is None
    with pytest.raises(UnitsError, match=r"q: needs a reservoir rate .* or a surface rate"):
        holder.rate(q="2 ft")
    with pytest.raises(DomainError, match="q: needs a reservoir rate"):
        holder.rate(q=ureg.Quantity(NAN, "rb/day"))


def test_an_angle_is_no_skin() -> None:
    with pytest.raises(UnitsError, match=r"skin: needs a skin .*; an angle is not what is meant"):
        well_index(
            dx="100 m", dy="100 m", dz="10 m", kx="1 mD", ky="1 mD", kz="1 mD", rw="0.1 m",
            skin="30 degree",
        )  # fmt: skip
