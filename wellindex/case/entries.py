"""Read the values of a case one by one; every problem is kept with its place, none is raised."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any

from wellindex.errors import CaseError, UnitsError, WellIndexError
from wellindex.units.answers import as_quantity
from wellindex.units.kinds import Either, Given, Kind
from wellindex.units.reading import EitherReader, KindReader, Problem
from wellindex.units.registry import read_text

_SHOWN = 70
_MOST_SHOWN = 50
_LARGEST_WHOLE = 10**15
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]{1,40}")


class _Unusable:
    """What stands for a value that could not be read; its problem is already noted."""


UNUSABLE: Any = _Unusable()
Reader = Callable[["Entry"], Any]


class Problems:
    """Everything that is wrong with a case, each with its place in the file."""

    def __init__(self) -> None:
        self._lines: list[str] = []

    def add(self, where: str, words: str) -> None:
        """Note one problem."""
        self._lines.append(f"  {where}: {words}")

    def raise_any(self) -> None:
        """Raise one `CaseError` that lists all problems; nothing where there are none."""
        if not self._lines:
            return
        count = len(self._lines)
        shown = self._lines[:_MOST_SHOWN]
        if count > len(shown):
            shown.append(f"  and {count - len(shown)} more")
        noun = "1 problem" if count == 1 else f"{count} problems"
        raise CaseError("\n".join([noun, *shown]))


def shown_key(key: str) -> str:
    """Write a key as TOML would, shortened."""
    return key if _BARE_KEY.fullmatch(key) else _shortened(repr(key[:_SHOWN]))


def described(value: Any) -> str:
    """Say in a few words what stands in the file."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, int) and abs(value) > _LARGEST_WHOLE:
        return "a whole number beyond 1e15"
    if isinstance(value, (int, float)):
        return repr(value)
    if isinstance(value, str):
        return _shortened(repr(value[: 2 * _SHOWN]))
    if isinstance(value, list):
        return f"a list of {len(value)}"
    if isinstance(value, dict):
        return "a table"
    return f"the date or time {value}"


def _shortened(text: str) -> str:
    return text if len(text) <= _SHOWN else text[: _SHOWN - 3] + "..."


def is_number(value: Any) -> bool:
    """Tell whether a value of the file is a number of a size that fits one."""
    if isinstance(value, bool):
        return False
    return isinstance(value, float) or (isinstance(value, int) and abs(value) <= _LARGEST_WHOLE)


@dataclass(frozen=True)
class Entry:
    """One value of the file, with its place."""

    value: Any
    where: str
    problems: Problems

    def refuse(self, needed: str, remedy: str = "") -> Any:
        """Note that the value is not what is needed."""
        words = f"needs {needed}; got {described(self.value)}"
        self.problems.add(self.where, f"{words}; {remedy}" if remedy else words)
        return UNUSABLE

    def items(self, needed: str, most: int) -> list[Entry] | None:
        """Return the items of a list that is not empty, or None."""
        if not isinstance(self.value, list) or not self.value:
            self.refuse(needed)
            return None
        if len(self.value) > most:
            self.refuse(f"a list of at most {most}", "combine or leave out some")
            return None
        return [
            Entry(item, f"{self.where}[{number}]", self.problems)
            for number, item in enumerate(self.value)
        ]

    def table(self, required: Sequence[str], optional: Sequence[str] = ()) -> Table | None:
        """Return a table with these keys; a missing or unknown key is noted. Or None."""
        if not isinstance(self.value, dict):
            self.refuse("a table with the keys " + ", ".join((*required, *optional)))
            return None
        return Table(self, self.value, required, optional)


class Table:
    """A table of the file whose keys are known."""

    def __init__(
        self,
        entry: Entry,
        values: Mapping[str, Any],
        required: Sequence[str],
        optional: Sequence[str],
    ) -> None:
        self.where = entry.where
        self.problems = entry.problems
        self._values = values
        known = (*required, *optional)
        for key in values:
            if key not in known:
                self._unknown(key, known)
        for key in required:
            if key not in values:
                place = f"the table {self.where}" if self.where else "the file"
                self.problems.add(self._place(key), f"missing; {place} needs it")

    def _place(self, key: str) -> str:
        return f"{self.where}.{shown_key(key)}" if self.where else shown_key(key)

    def _unknown(self, key: str, known: Sequence[str]) -> None:
        close = get_close_matches(key[:_SHOWN].lower(), known, n=1)
        hint = f"did you mean {close[0]!r}?" if close else "known here: " + ", ".join(known)
        self.problems.add(self._place(key), f"unknown key; {hint}")

    def __contains__(self, key: str) -> bool:
        return key in self._values

    def entry(self, key: str) -> Entry:
        """Return the value of a key that is there."""
        return Entry(self._values[key], self._place(key), self.problems)

    def form(self, *forms: tuple[tuple[str, ...], tuple[str, ...]]) -> int | None:
        """Return which of several forms the table has: required and optional keys of each.

        None, with a note, where it has none, a mixture, or one without all its required keys.
        """
        names = " or ".join(", ".join(required) for required, _optional in forms)
        begun = [
            number
            for number, (required, optional) in enumerate(forms)
            if any(key in self for key in (*required, *optional))
        ]
        if len(begun) != 1:
            got = "keys of both" if begun else "neither"
            self.problems.add(self.where, f"give either {names}; got {got}")
            return None
        missing = [key for key in forms[begun[0]][0] if key not in self]
        for key in missing:
            self.problems.add(self._place(key), f"missing; the table {self.where} needs it")
        return None if missing else begun[0]

    def read(self, key: str, reader: Reader, default: Any = UNUSABLE) -> Any:
        """Return what `reader` makes of a key's value; `default` where the key is not there."""
        return reader(self.entry(key)) if key in self else default

    def build(self, make: Callable[..., Any], *args: Any, key: str = "", **given: Any) -> Any:
        """Return ``make(*args, **given)`` where all of them are usable; note its errors."""
        if any(value is UNUSABLE for value in (*args, *given.values())):
            return UNUSABLE
        try:
            return make(*args, **given)
        except WellIndexError as error:
            self.problems.add(self._place(key) if key else self.where, plain_words(error))
        except ArithmeticError:
            self.problems.add(self._place(key) if key else self.where, TOO_FAR_APART)
        return UNUSABLE


TOO_FAR_APART = "the numbers are too large, or too far apart in size, to calculate with"

_CODE_WORDS = (
    (re.compile(r"^\w+\(\): "), ""),
    (re.compile(r"give Liquid\(density=\.\.\.\)"), "give the fluid a density"),
    (re.compile(r"\s*\n\s*"), "; "),
)


def plain_words(error: Exception) -> str:
    """Return an error's message in one line, without the names of functions."""
    words = str(error)
    for pattern, instead in _CODE_WORDS:
        words = pattern.sub(instead, words)
    return words


def all_or_nothing(values: Sequence[Any]) -> Any:
    """Return a list whose items are all usable; else the mark that it is not."""
    return UNUSABLE if any(value is UNUSABLE for value in values) else list(values)


def quantity(kind: Kind | Either, example: str) -> Reader:
    """Return a reader of one text with its unit; it gives a quantity in SI."""
    reader = EitherReader(kind) if isinstance(kind, Either) else KindReader(kind)
    plain = reader.kind.plain is not None
    remedy = f"give a text with its unit, such as {example!r}"

    def read(entry: Entry) -> Any:
        value = entry.value
        if not isinstance(value, str) and not (plain and is_number(value)):
            return entry.refuse(reader.kind.name, remedy)
        try:
            si = reader.read(value)
        except Problem as problem:
            return entry.refuse(problem.needed, remedy if _lacks_unit(value) else problem.remedy)
        if reader.check(si) is not None:
            return entry.refuse(f"{reader.kind.name}, {reader.kind.range.words}")
        if isinstance(si, Given):
            return as_quantity(si.kind, si.value, "si")
        return as_quantity(reader.kind, si, "si")

    return read


def _lacks_unit(value: Any) -> bool:
    try:
        return isinstance(value, str) and read_text(value)[1] is None
    except UnitsError:
        return False


def number(kind: Kind, example: str) -> Reader:
    """Return a reader of one plain number."""
    reader = KindReader(kind)

    def read(entry: Entry) -> Any:
        if not is_number(entry.value):
            return entry.refuse(kind.name, f"give a number without quotes, such as {example}")
        if reader.check(float(entry.value)) is not None:
            return entry.refuse(f"{kind.name}, {kind.range.words}")
        return float(entry.value)

    return read


def choice(*choices: str) -> Reader:
    """Return a reader of one of some words."""

    def read(entry: Entry) -> Any:
        if isinstance(entry.value, str) and entry.value in choices:
            return entry.value
        word = entry.value[:_SHOWN].lower() if isinstance(entry.value, str) else ""
        close = get_close_matches(word, choices, n=1)
        remedy = f"did you mean {close[0]!r}?" if close else ""
        return entry.refuse("one of " + ", ".join(map(repr, choices)), remedy)

    return read


def line(most: int) -> Reader:
    """Return a reader of one line of text."""

    def read(entry: Entry) -> Any:
        value = entry.value
        if isinstance(value, str) and 0 < len(value.strip()) <= len(value) <= most:
            if value.isprintable():
                return value.strip()
            return entry.refuse("a text without control characters or line breaks")
        return entry.refuse(f"a text of 1 to {most} characters")

    return read


def whole(most: int) -> Reader:
    """Return a reader of one whole number from 1 to `most`."""

    def read(entry: Entry) -> Any:
        value = entry.value
        if isinstance(value, int) and not isinstance(value, bool) and 1 <= value <= most:
            return value
        return entry.refuse(f"a whole number from 1 to {most}")

    return read
