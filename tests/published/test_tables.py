"""The published tables: printed against computed, and computed against exact arithmetic."""

from functools import partial
from operator import attrgetter

import pytest
from mpmath import mp, mpf  # type: ignore[import-untyped]

from tests.oracles import closed_form
from tests.oracles.closed_form import arguments, in_si, si
from tests.published import tables
from tests.published.tables import Check

ALL = [check for subject in tables.subjects() for check in tables.load(subject)]
CONSTANTS = [check for check in ALL if check.quantity in ("unit", "trade constant", "constant")]

close = partial(pytest.approx, abs=0)


@pytest.mark.parametrize("check", ALL, ids=attrgetter("id"))
def test_printed_agrees_with_computed(check: Check) -> None:
    assert check.computed > 0
    if check.printed is not None:
        assert check.printed == close(check.computed, rel=check.tolerance)


@pytest.mark.parametrize("check", CONSTANTS, ids=attrgetter("id"))
def test_trade_constants_emerge_from_exact_definitions(check: Check) -> None:
    value = mpf(check.factor_value)
    for term in check.terms:
        ratio = in_si(term.of) / in_si(term.unit)
        value *= (mpf(ratio.numerator) / ratio.denominator) ** mpf(term.power)
    assert float(value) == close(check.computed, rel=1e-14)


def test_a_factor_is_the_expression_that_names_it() -> None:
    names = {"pi": mp.pi, "gamma": mp.euler, "exp": mp.exp, "ln": mp.log, "sqrt": mp.sqrt}
    for name, value in tables.FACTORS.items():
        exact = eval(name, {"__builtins__": {}}, names)
        assert value == close(float(exact), rel=1e-15)


@pytest.mark.parametrize(
    ("text", "value"),
    [("2 ft", 0.6096), ("cm**3/s*cP/cm**2/darcy*cm/atm", 1.0), ("1e-5 psi**-1", 1.450377377e-9)],
)
def test_exact_units(text: str, value: float) -> None:
    # 1 psi = 6894.757293168 Pa, NIST SP 811 (2008) appendix B; darcy by its definition.
    assert float(in_si(text)) == close(value, rel=1e-9)


RADIAL = ("k", "h", "re", "rw", "mu", "formation_volume_factor", "skin")


def radial_index(check: Check, **changed: float) -> mpf:
    regime, against = str(check.inputs["regime"]), str(check.inputs["against"])
    values = arguments(check.inputs, *RADIAL) | changed
    return closed_form.radial_productivity_index(**values, regime=regime, against=against)


def productivity(check: Check) -> mpf:
    """Recompute a row of the table of productivities, SI."""
    inputs = check.inputs
    match check.quantity:
        case "productivity_index":
            return radial_index(check)
        case "rate":
            return radial_index(check) * si(inputs["drawdown"])
        case "vogel_part":
            return radial_index(check) * si(inputs["p_bubble"]) / mpf("1.8")
        case "drainage_radius":
            return mp.sqrt(si(inputs["area"]) / mp.pi)
        case "productivity_index_from_rate":
            return mpf(si(inputs["rate"])) / si(inputs["drawdown"])
        case "permeability_from_productivity":
            return si(inputs["productivity_index"]) / radial_index(check, k=1.0)
        case "skin_from_productivity":
            ideal = radial_index(check)
            resistance = mp.log(si(inputs["re"]) / mpf(si(inputs["rw"]))) - mpf("0.75")
            return (ideal / si(inputs["productivity_index"]) - 1) * resistance
        case "pressure_transient":
            return transient(check)
    raise AssertionError(check.quantity)


def transient(check: Check) -> mpf:
    known = {name: mpf(si(value)) for name, value in check.inputs.items()}
    storage = known["porosity"] * known["mu"] * known["total_compressibility"]
    argument = storage * known["r"] ** 2 / (4 * known["k"] * known["time"])
    rate = known["rate"] * known["formation_volume_factor"]
    slope = rate * known["mu"] / (4 * mp.pi * known["k"] * known["h"])
    return known["initial_pressure"] - slope * mp.e1(argument)


@pytest.mark.parametrize("check", tables.load("productivity"), ids=attrgetter("id"))
def test_productivity_table(check: Check) -> None:
    assert float(productivity(check)) / si(check.unit) == close(check.computed, rel=1e-12)


@pytest.mark.parametrize(
    "check", tables.load("groundwater", "permeability_from_conductivity"), ids=attrgetter("id")
)
def test_conductivity_table(check: Check) -> None:
    k = closed_form.permeability_from_conductivity(
        **arguments(check.inputs, "conductivity", "mu", "rho")
    )
    assert float(k) / si(check.unit) == close(check.computed, rel=1e-14)


@pytest.mark.parametrize(
    ("row", "message"),
    [
        ({"status": "sure"}, "unknown status"),
        ({"factor": "3*pi"}, "unknown factor"),
        ({"printed": None}, "own-reference"),
        ({"colour": "red"}, "colour"),
    ],
)
def test_a_malformed_row_is_refused(
    row: dict[str, object], message: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    table = tables._table("unit_constants")
    table["rows"][0] |= row
    monkeypatch.setattr(tables, "_table", lambda subject: table)
    with pytest.raises(ValueError, match=message):
        tables.load("unit_constants")


def test_an_id_stands_once(monkeypatch: pytest.MonkeyPatch) -> None:
    table = tables._table("unit_constants")
    table["rows"].append(table["rows"][0])
    monkeypatch.setattr(tables, "_table", lambda subject: table)
    with pytest.raises(ValueError, match="stand twice"):
        tables.load("unit_constants")


def test_a_quantity_that_is_not_there_is_refused() -> None:
    with pytest.raises(ValueError, match="torque"):
        tables.load("unit_constants", "torque")


def test_every_table_says_what_it_holds() -> None:
    assert all(tables.about(subject) for subject in tables.subjects())
    assert tables.given("comparison_1981")["blocks"] == [10, 10, 3]
    assert tables.given("unit_constants") == {}
