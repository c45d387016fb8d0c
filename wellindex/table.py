"""Tables whose header names each column and its unit: aligned text, CSV, JSON."""

from __future__ import annotations

import csv
import io
import json
import math
import os
from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np

from wellindex.units.answers import number_in
from wellindex.units.kinds import Kind


class Column(NamedTuple):
    """One column: its name, its unit ("" for none) and one value per row."""

    name: str
    unit: str
    values: Sequence[Any]


class Table:
    """Columns that print aligned and write as CSV or JSON.

    Attributes
    ----------
    columns : tuple of Column
        Name, unit and values of each column.
    """

    def __init__(self, columns: Sequence[Column]) -> None:
        self.columns = tuple(columns)

    def to_csv(self, path: str | os.PathLike[str]) -> None:
        """Write the columns as CSV; the header carries the units. A file there is replaced."""
        with open(path, "w", encoding="utf-8", newline="") as file:
            file.write(as_csv(self.columns))

    def to_json(self, path: str | os.PathLike[str]) -> None:
        """Write the columns as JSON: per column, unit and values. A file there is replaced."""
        with open(path, "w", encoding="utf-8") as file:
            file.write(as_json(self.columns))

    def __getitem__(self, name: str) -> list[Any]:
        for column in self.columns:
            if column.name == name:
                return list(column.values)
        raise KeyError(name)

    def __str__(self) -> str:
        return aligned(self.columns)


def measured(name: str, kind: Kind, values: np.ndarray[Any, Any]) -> Column:
    """Return SI values as a column in the unit system in force."""
    numbers, unit = number_in(kind, values)
    return Column(name, unit, numbers.tolist())


def cell_text(value: Any) -> str:
    """Write one value: six digits for numbers, words as they are."""
    if isinstance(value, (bool, str)):
        return {True: "yes", False: "no"}[value] if isinstance(value, bool) else value
    if isinstance(value, int):
        return str(value)
    return f"{value + 0.0:.6g}"  # no minus before a zero


def header(column: Column) -> str:
    """Write a column's name with its unit: "length [ft]"."""
    return f"{column.name} [{column.unit}]" if column.unit else column.name


def aligned(columns: Sequence[Column]) -> str:
    """Return columns as text: names, units, then rows; numbers to the right, words to the left."""
    units = [f"[{column.unit}]" if column.unit else "" for column in columns]
    body = [[cell_text(value) for value in column.values] for column in columns]
    worded = [any(isinstance(v, str) for v in column.values) for column in columns]
    widths = [
        max(len(text) for text in (column.name, unit, *cells))
        for column, unit, cells in zip(columns, units, body, strict=True)
    ]

    def line(parts: Sequence[str]) -> str:
        padded = [
            part.ljust(width) if words else part.rjust(width)
            for part, width, words in zip(parts, widths, worded, strict=True)
        ]
        return "  ".join(padded).rstrip()

    lines = [line([column.name for column in columns])]
    if any(units):
        lines.append(line(units))
    lines.append("  ".join("-" * width for width in widths))
    lines.extend(line(row) for row in zip(*body, strict=True))
    return "\n".join(lines)


def as_csv(columns: Sequence[Column]) -> str:
    """Return columns as CSV with full digits; the header carries the units."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow([header(column) for column in columns])
    writer.writerows(zip(*(column.values for column in columns), strict=True))
    return text.getvalue()


def as_plain(columns: Sequence[Column]) -> dict[str, Any]:
    """Return columns as a dictionary ready for JSON; a value that is not a number becomes null."""
    return {
        column.name: {"unit": column.unit or None, "values": [_finite(v) for v in column.values]}
        for column in columns
    }


def as_json(columns: Sequence[Column]) -> str:
    """Return columns as JSON with full digits."""
    return json.dumps(as_plain(columns), indent=2, allow_nan=False) + "\n"


def _finite(value: Any) -> Any:
    return None if isinstance(value, float) and not math.isfinite(value) else value
