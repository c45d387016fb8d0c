"""One guard for every unit string: length, characters, grammar and names, before pint parses it."""

from __future__ import annotations

import re
from collections.abc import Callable, Collection

from wellindex.errors import UnitsError
from wellindex.units.definitions import REFUSED

LONGEST = 100
DEEPEST = 3
LARGEST_EXPONENT = 12

_NUMBER = r"(?:\d{1,25}(?:\.\d{0,25})?|\.\d{1,25})(?:[eE][+-]?\d{1,3})?"
_TOKEN = re.compile(
    rf"\s*(?:(?P<number>{_NUMBER})|(?P<name>[A-Za-z][A-Za-z0-9_]*)"
    r"|(?P<power>\*\*|\^)|(?P<operator>[*/])|(?P<open>\()|(?P<close>\))|(?P<sign>[+-]))",
    re.ASCII,
)
_LEADING = re.compile(rf"\s*(?P<number>[+-]?{_NUMBER})(?![0-9.])\s*(?P<unit>.*)", re.ASCII)
_DIMENSIONS = re.compile(
    r"\[[a-z_]{1,30}\](?: ?(?:\*\*|[*/^]) ?(?:\[[a-z_]{1,30}\]|-?\d{1,2})){0,10}", re.ASCII
)
_POWERED = re.compile(r"(?P<base>km|cm|mm|m|ft|in)(?P<power>[23])")
_WRITTEN_OTHERWISE = {
    "²": "**2",
    "³": "**3",
    "·": "*",
    "×": "*",
    "°": "deg",
    "µ": "u",
    "μ": "u",
    "−": "-",
    "%": " percent ",
}
_REWRITE = str.maketrans(_WRITTEN_OTHERWISE)
_FACTOR_ENDS = ("name", "number", "close", "exponent")


def _refuse(text: str, why: str) -> UnitsError:
    shown = text if len(text) <= LONGEST else text[:40] + "..."
    return UnitsError(f"cannot read {shown!r} as a quantity or unit: {why}")


def nearest(name: str, known: Collection[str]) -> str:
    """Return "; did you mean ...?" with the known name most like `name`, or nothing."""
    from difflib import get_close_matches

    close = get_close_matches(name, known, n=1, cutoff=0.6)
    return f"; did you mean {close[0]!r}?" if close else ""


def _check_name(name: str, text: str, known: Callable[[], Collection[str]]) -> str:
    if name in REFUSED:
        raise _refuse(text, f"{name!r}: {REFUSED[name]}")
    if name in known():
        return name
    powered = _POWERED.fullmatch(name)
    if powered:
        return f"({powered['base']}**{powered['power']})"
    raise _refuse(text, f"unknown unit {name!r}{nearest(name, known())}")


class _Grammar:
    """A factor is a name, a number or a bracket, with at most one literal exponent."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.depth = 0
        self.before = "start"

    def take(self, kind: str, value: str) -> None:
        if self.before in ("power", "power sign"):
            self.before = self._exponent(kind, value)
            return
        if self.before == "one" and value != "/":
            raise _refuse(self.text, "a number follows a number (no thousands separators)")
        self.before = getattr(self, f"_{kind}")(value)

    def _exponent(self, kind: str, value: str) -> str:
        if kind == "sign" and self.before == "power":
            return "power sign"
        if kind != "number" or not 0.0 < float(value) <= LARGEST_EXPONENT:
            raise _refuse(
                self.text, f"an exponent must be a plain number, not 0, up to {LARGEST_EXPONENT}"
            )
        return "exponent"

    def _name(self, value: str) -> str:
        return "name"

    def _number(self, value: str) -> str:
        if float(value) == float("inf"):
            raise _refuse(self.text, "the number is too large")
        if self.before in ("start", "sign"):
            return "number"
        if self.before in ("operator", "open"):
            if value != "1":
                raise _refuse(self.text, "a number other than 1 stands within the unit")
            return "number"
        if value == "1" and self.before == "number":
            return "one"
        raise _refuse(self.text, "a number follows a number or a unit (no thousands separators)")

    def _power(self, value: str) -> str:
        if self.before not in ("name", "close"):
            raise _refuse(self.text, "a power needs a unit before it")
        return "power"

    def _sign(self, value: str) -> str:
        if self.before != "start":
            raise _refuse(self.text, "a sign may only lead the number")
        return "sign"

    def _operator(self, value: str) -> str:
        if self.before in ("start", "operator", "open", "sign"):
            raise _refuse(self.text, f"nothing stands before {value!r}")
        return "operator"

    def _open(self, value: str) -> str:
        self.depth += 1
        if self.depth > DEEPEST:
            raise _refuse(self.text, f"brackets more than {DEEPEST} deep")
        return "open"

    def _close(self, value: str) -> str:
        self.depth -= 1
        if self.depth < 0 or self.before in ("open", "operator"):
            raise _refuse(self.text, "brackets do not match")
        return "close"

    def finish(self) -> None:
        if self.depth or self.before in ("operator", "open", "sign", "power", "power sign", "one"):
            raise _refuse(self.text, "the expression is not finished")


def guard(text: str, known: Callable[[], Collection[str]]) -> str:
    """Return `text` in a spelling that is safe to parse, or raise `UnitsError`."""
    if len(text) > LONGEST:
        raise _refuse(text, f"longer than {LONGEST} characters")
    if _DIMENSIONS.fullmatch(text):
        return text
    if not text.isprintable():
        raise _refuse(text, "it holds a control character")
    plain = text.translate(_REWRITE).strip()
    if not plain:
        raise _refuse(text, "it is empty")
    if "," in plain:
        raise _refuse(text, "write a decimal point, and no thousands separators")
    grammar = _Grammar(text)
    parts: list[str] = []
    at = 0
    while at < len(plain):
        token = _TOKEN.match(plain, at)
        if token is None:
            raise _refuse(text, f"unexpected {plain[at:].lstrip()[:1]!r}")
        kind = str(token.lastgroup)
        value = "**" if kind == "power" else token[kind]
        if kind == "name":
            value = _check_name(value, text, known)
        elif value.isdigit():
            value = str(int(value))  # pint splits a number with leading zeros into two
        if kind in ("name", "number", "open") and grammar.before in _FACTOR_ENDS:
            parts.append("*")  # pint reads "5 (m)**2" as (5 m)**2
        grammar.take(kind, value)
        parts.append(value)
        at = token.end()
    grammar.finish()
    return "".join(parts)


def split_number(text: str) -> tuple[float, str]:
    """Split "150 ft" into 150.0 and "ft"; the unit of a bare number is empty."""
    leading = _LEADING.fullmatch(text.translate(_REWRITE))
    if leading is None:
        raise _refuse(text, "it does not start with a number")
    unit = leading["unit"].strip()
    if unit.startswith("/"):
        unit = "1" + unit
    return float(leading["number"]), unit
