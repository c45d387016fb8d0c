"""Columns of numbers from CSV whose header carries the units."""

from __future__ import annotations

import csv
import math
from array import array
from collections.abc import Collection, Iterable, Iterator, Mapping
from typing import Any

import numpy as np

from wellindex.errors import DomainError, UnitsError
from wellindex.units.reading import parse_unit
from wellindex.units.registry import ureg


def read_columns(
    lines: Iterable[str],
    name: str,
    wanted: Mapping[str, str],
    optional: Collection[str] = (),
) -> dict[str, Any]:
    """Read some columns of a CSV; others are passed over.

    Parameters
    ----------
    lines : iterable of str
        The text; its first row that is not empty is the header, ``name [unit]`` each.
    name : str
        Of the file, for messages.
    wanted : mapping of str to str
        The columns, each with a unit such as it may have; "" for a column of plain numbers.
    optional : collection of str
        Columns that may be missing.

    Returns
    -------
    dict
        A quantity per column, or a plain array for a column of plain numbers.

    Raises
    ------
    UnitsError
        A column without its unit, or with one where plain numbers are needed.
    DomainError
        No row, a missing column or one that stands twice, a value that is no finite number; the
        row is named.
    """
    rows = _rows(lines, name)
    _line, titles = next(rows, (0, []))
    if not titles:
        raise DomainError(f"{name}: the file is empty")
    places = {}
    for column, example in wanted.items():
        place = _place(titles, column, name)
        if place is not None:
            places[column] = place, _unit(titles[place], column, example, name)
        elif column not in optional:
            found = ", ".join(repr(title.strip()) for title in titles[:20])
            raise DomainError(f"{name}: no column {column!r} in the header; it has {found}")
    values = {column: array("d") for column in places}
    for line, row in rows:
        for column, (place, _found) in places.items():
            values[column].append(_number(row, place, column, line, name))
    return {
        column: _with_unit(np.array(values[column]), unit)
        for column, (_place_of, unit) in places.items()
    }


def _rows(lines: Iterable[str], name: str) -> Iterator[tuple[int, list[str]]]:
    """Give the rows that are not empty, each with its line in the file."""
    reader = csv.reader(lines)
    try:
        for row in reader:
            if any(cell.strip() for cell in row):
                yield reader.line_num, row
    except (UnicodeDecodeError, csv.Error) as error:
        raise DomainError(f"{name}: the file is no CSV text in UTF-8: {error}") from None


def _place(titles: list[str], column: str, name: str) -> int | None:
    places = [n for n, title in enumerate(titles) if title.partition("[")[0].strip() == column]
    if len(places) > 1:
        raise DomainError(f"{name}: column {column!r} stands twice in the header")
    return places[0] if places else None


def _unit(title: str, column: str, example: str, name: str) -> Any:
    """Return the unit in a header, or None where plain numbers are meant."""
    _name, bracket, rest = title.strip().partition("[")
    given = bool(bracket) and rest.endswith("]")
    if not example:
        if bracket:
            raise UnitsError(f"{name}: column {column!r} holds plain numbers, without a unit")
        return None
    if not given:
        raise UnitsError(
            f"{name}: column {column!r} has no unit; write it in the header, such as "
            f"'{column} [{example}]'"
        )
    try:
        return parse_unit(rest[:-1])
    except UnitsError as error:
        raise UnitsError(f"{name}: column {column!r}: {error}") from None


def _number(row: list[str], place: int, column: str, line: int, name: str) -> float:
    text = row[place].strip() if place < len(row) else ""
    try:
        number = float(text) if text.isascii() and "_" not in text else math.nan
    except ValueError:
        number = math.nan
    if not math.isfinite(number):
        raise DomainError(f"{name}, row {line}: {column} is no number: {text[:40]!r}")
    return number


def _with_unit(values: Any, unit: Any) -> Any:
    return values if unit is None else ureg.Quantity(values, unit)
