"""Text with a unit: hostile text is refused at once, accepted text means what arithmetic says."""

import re
import time
from collections import Counter
from dataclasses import dataclass, field

import pytest
from hypothesis import assume, example, given
from hypothesis import strategies as st

from wellindex import UnitsError, equivalent_radius, ureg
from wellindex.units.registry import read_text
from wellindex.units.text import guard

AT_ONCE = 1.0  # seconds of processor: far above the guard's need, far below a hang

HOSTILE = {
    "power tower": "9**9**9**9 m",
    "tower of units": "m**9**9**9**9",
    "a million letters": "m" * 1_000_000,
    "a million digits": "9" * 1_000_000 + " m",
    "underscores": "_" * 100_000,
    "digits with underscores": "1_000 m",
    "many prefixes": "k" * 20_000 + "m",
    "deep brackets": "(" * 5_000 + "m" + ")" * 5_000,
    "brackets four deep": "1 ((((m))))",
    "brackets open": "1 (m",
    "brackets closed": "1 m)",
    "empty brackets": "1 ()",
    "too large": "1e9999 m",
    "overflow": "1e400 m",
    "nan": "nan m",
    "inf": "inf m",
    "minus inf": "-inf m",
    "infinity": "infinity m",
    "huge exponent": "1 m**99999999",
    "huge float exponent": "1 m**1e9",
    "zero exponent": "1 m**0",
    "named exponent": "1 m**s",
    "bracketed exponent": "1 m**(2)",
    "two exponents": "1 m**2**3",
    "power of a number": "2**3 m",
    "division by zero": "1 m/0",
    "zero in brackets": "1 m/(0)",
    "number over zero": "1/0",
    "inner number": "5 m*2",
    "product of numbers": "1e300*1e300 m",
    "emoji": "1 m 😀",
    "NUL": "1 m\0",
    "NUL inside": "1 \0m",
    "semicolon": "1 m; import os",
    "comment": "1 m # foot",
    "newline": "1 m\n",
    "newline inside": "1\nm",
    "tab": "1\tm",
    "no-break space": "1\u00a0m",
    "right-to-left mark": "1 m\u200f",
    "Arabic digit": "١ m",
    "full-width digit": "１ m",
    "Cyrillic letter": "1 м",
    "decimal comma": "1,5 m",
    "thousands comma": "1,500 m",
    "thousands space": "1 500 m",
    "thousands dot": "1.500.000 m",
    "apostrophe": "1'500 m",
    "call": "__import__('os').system('true')",
    "function call": "abs(m)",
    "attribute": "m.__class__",
    "lambda": "lambda: m",
    "index": "m[0]",
    "dimension": "1 [length]",
    "quotes": "'1 m'",
    "braces": "{1} m",
    "backslash": "1 m\\",
    "formula sign": "=1 m",
    "assignment": "m = 2",
    "hexadecimal": "0x10 m",
    "complex": "1j m",
    "sum": "1 m + 1 m",
    "difference": "2 m - 1 m",
    "two signs": "--1 m",
    "modulo": "5 m // s",
    "double slash": "1 m//s",
    "operator at the end": "1 m*",
    "operator at the start": "*1 m",
    "per nothing": "1 m/",
    "empty": "",
    "blank": "   ",
    "sign only": "-",
    "dot only": ". m",
    "uncertainty": "1 +/- 0.1 m",
    "plus or minus": "1±0.1 m",
    "percent percent": "5 %%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%%% ** m",
    "superscript alone": "5 ²",
    "superscript twice": "5 m²²",
}


def at_once(text: str) -> str:
    """The guard's answer; its error, if any; and not after a while."""
    start = time.process_time()
    try:
        return guard(text, ureg.names)
    finally:
        assert time.process_time() - start < AT_ONCE


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE.keys())
def test_hostile_text_is_refused_at_once(text: str) -> None:
    with pytest.raises(UnitsError) as caught:
        at_once(text)
    assert str(caught.value).startswith("cannot read ")
    assert len(str(caught.value)) < 400


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE.keys())
def test_no_door_is_open_to_hostile_text(text: str) -> None:
    doors = [
        ureg.Quantity,
        ureg.Unit,
        ureg.parse_units,
        ureg.parse_expression,
        ureg.Quantity(1.0, "m").to,
        ureg.Quantity(1.0, "m").m_as,
        read_text,
    ]
    if text:  # to pint no text at all is "dimensionless"
        for door in doors:
            with pytest.raises(UnitsError):
                door(text)
    with pytest.raises(UnitsError, match="dx: needs a length"):
        equivalent_radius(dx=text, dy="1 m", kx="1 mD", ky="1 mD")


@pytest.mark.parametrize(
    ("text", "why"),
    [
        ("1 500 m", "no thousands separators"),
        ("1 1 m", "no thousands separators"),
        ("1 m 5", "no thousands separators"),
        ("1 m**+-2", "an exponent must be a plain number"),
        ("1 m**", "the expression is not finished"),
        ("1 (/m)", "nothing stands before '/'"),
        ("1 m-1", "a sign may only lead the number"),
        ("1,5 m", "write a decimal point"),
        ("m" * 101, "longer than 100 characters"),
        ("1 m**13", "an exponent must be a plain number, not 0, up to 12"),
        ("1 ((((m))))", "brackets more than 3 deep"),
        ("1 (m", "the expression is not finished"),
        ("1 m)", "brackets do not match"),
        ("1 m\n", "it holds a control character"),
        ("", "it is empty"),
        ("1 m/2", "a number other than 1 stands within the unit"),
        ("1 m $", "unexpected '$'"),
        ("2 foto", "unknown unit 'foto'; did you mean 'foot'?"),
    ],
)
def test_a_refusal_says_why(text: str, why: str) -> None:
    with pytest.raises(UnitsError, match=re.escape(why)):
        at_once(text)


def test_a_unit_alone_is_no_value() -> None:
    with pytest.raises(UnitsError, match="it does not start with a number"):
        read_text("ft")


@pytest.mark.parametrize(
    ("text", "plain"),
    [
        ("150 ft", "150 ft"),
        ("  150ft  ", "150 ft"),
        ("+1.5e3 m", "1500 m"),
        (".5 m", "0.5 m"),
        ("5. m", "5 m"),
        ("-3 m", "-3 m"),
        ("−3 m", "-3 m"),
        ("007 m", "7 m"),
        ("0010.50 m", "10.5 m"),
        ("2 m3/day", "2 m**3/day"),
        ("2 m³/day", "2 m**3/day"),
        ("2 m^3/day", "2 m**3/day"),
        ("2 m3**2", "2 m**6"),
        ("2 ft2**3", "2 ft**6"),
        ("5 (m)**2", "5 m**2"),
        ("5 (m/s)**2", "5 m**2/s**2"),
        ("2 mD·ft", "2 mD*ft"),
        ("2 mD × ft", "2 mD*ft"),
        ("2 mD ft", "2 mD*ft"),
        ("2 kg/(m s)", "2 kg/m/s"),
        ("2 1/psi", "2 psi**-1"),
        ("2/psi", "2 psi**-1"),
        ("2 µm", "2 micrometre"),
        ("5 %", "5 percent"),
        ("5 %/day", "5 percent/day"),
        ("30°", "30 degree"),
        ("60 °F", "60 degF"),
        ("2 m**1.5*m**0.5", "2 m**2"),
        ("1 rb/day psi", "1 rb*psi/day"),
    ],
)
def test_the_trade_s_spellings(text: str, plain: str) -> None:
    found, meant = ureg.Quantity(text), ureg.Quantity(plain)
    assert found.magnitude == pytest.approx(meant.magnitude, rel=1e-15, abs=0)
    assert found.units == meant.units
    number, units = read_text(text)
    assert number == found.magnitude
    assert dict(units) == dict(found.unit_items())


CANONICAL = {
    "m": "metre",
    "ft": "foot",
    "s": "second",
    "day": "day",
    "psi": "psi",
    "cP": "centipoise",
    "mD": "millidarcy",
    "stb": "stock_tank_barrel",
    "rb": "reservoir_barrel",
}
SPELLED = {"²": "**2", "³": "**3", "^": "**", "·": "*", "m3": "(m**3)", "ft2": "(ft**2)"}
TOKEN = re.compile(r"\*\*[+-]?[\d.]+|(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?|[A-Za-z]+|\S")


@dataclass
class Product:
    """A number times powers of names, for Python's own arithmetic to work on."""

    number: float
    powers: Counter[str] = field(default_factory=Counter)

    def __mul__(self, other: "Product") -> "Product":
        powers = self.powers.copy()
        powers.update(other.powers)
        return Product(self.number * other.number, powers)

    def __truediv__(self, other: "Product") -> "Product":
        return self * other**-1

    def __pow__(self, power: float) -> "Product":
        powers = Counter({name: value * power for name, value in self.powers.items()})
        return Product(self.number**power, powers)

    def __neg__(self) -> "Product":
        return Product(-self.number, self.powers)

    def __pos__(self) -> "Product":
        return self


def by_python(text: str) -> Product:
    """What the text means where a blank multiplies, by Python's parser and `Product`."""
    for spelling, plain in SPELLED.items():
        text = text.replace(spelling, plain)
    code: list[str] = []
    for token in TOKEN.findall(text):
        operand = token[0].isalnum() or token[0] in ".("
        if operand and code and (code[-1][-1] in ")" or code[-1][-1].isalnum()):
            code.append("*")
        if token.isalpha():
            assume(token in CANONICAL)  # two pieces may meet in another unit's name
            token = f"name({CANONICAL[token]!r})"
        elif token[0].isdigit() or (token[0] == "." and len(token) > 1):
            token = f"number({float(token)!r})"
        code.append(token)
    names = {"name": lambda name: Product(1.0, Counter({name: 1})), "number": Product}
    found = eval("".join(code), {"__builtins__": {}}, names)
    assert isinstance(found, Product)
    return found


def agrees(text: str) -> None:
    meant, found = by_python(text), ureg.Quantity(text)
    assert found.magnitude == pytest.approx(meant.number, rel=1e-12, abs=0)
    exponents = {name: power for name, power in meant.powers.items() if abs(power) > 1e-9}
    assert dict(found.unit_items()) == pytest.approx(exponents)


TOKENS = [*CANONICAL, "m3", "ft2", " ", " ", "*", "/", "/", "(", ")", "²", "³", "·"]
POWERS = ["**2", "**-1", "^3", "**0.5", "**+2", "**"]
NUMBERS = ["1", "1", "5", "007", "2.5", ".5", "1e3", "0", "-", "+"]


@st.composite
def expressions(draw: st.DrawFn) -> str:
    """A number and a unit in a spelling that the grammar allows."""
    blank = st.sampled_from(["", " "])
    number = draw(st.sampled_from(["1", "-2.5", "+3e2", "007", ".5", "1200", "1.e-3"]))
    text = number + draw(st.sampled_from([" ", "  ", "/", " / ", " 1/", "*"]))
    for at in range(draw(st.integers(1, 5))):
        if at:
            text += draw(st.sampled_from([" ", "*", "/", " * ", " / ", "·"]))
        factor = draw(st.sampled_from([*CANONICAL, "m3", "ft2"]))
        if draw(st.booleans()):
            other = draw(st.sampled_from([*CANONICAL]))
            factor = f"({factor}{draw(st.sampled_from([' ', '*', '/']))}{other})"
        text += factor + draw(blank) + draw(st.sampled_from(["", "", *POWERS[:-1]]))
    return text


@given(expressions())
@example("5 m3**2")
@example("5 (m)**2")
@example("5 (m/s)**2 (day)")
@example("007 m")
def test_an_expression_means_what_arithmetic_says(text: str) -> None:
    at_once(text)
    agrees(text)


@given(st.lists(st.sampled_from([*TOKENS, *POWERS, *NUMBERS]), max_size=12).map("".join))
def test_shuffled_pieces_are_refused_or_mean_what_arithmetic_says(text: str) -> None:
    try:
        at_once(text)
    except UnitsError:
        with pytest.raises(UnitsError):
            read_text(text)
        return
    agrees(text)


@given(st.text(max_size=150) | st.text("0123456789.eE+-*/^() _,;#kmMDdftpsibr²³%°", max_size=110))
@example("9**9**9**9")
def test_any_text_is_refused_or_a_quantity(text: str) -> None:
    try:
        at_once(text)
    except UnitsError:
        return
    ureg.Quantity(text)


@given(st.integers(100, 1_000_000), st.sampled_from([*"m9_(*/. %²+-"]))
def test_length_costs_nothing(count: int, character: str) -> None:
    with pytest.raises(UnitsError):
        at_once(character * (count + 1))
