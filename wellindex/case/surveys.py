"""The survey of a well in a case: lists, rows of stations, or a CSV beside the case."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.case.beside import Beside
from wellindex.case.entries import UNUSABLE, Entry, Reader, Table, all_or_nothing, quantity
from wellindex.case.reservoir import position, read_point
from wellindex.errors import CaseError
from wellindex.space.path import Path
from wellindex.space.survey import Survey
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.kinds import Kind

#: Stations of a survey, or points of a path.
MOST_STATIONS = 10_000
#: Chords that follow the arcs of one survey.
MOST_CHORDS = 50_000

_inclination = quantity(kinds.INCLINATION, "35 degree")
_azimuth = quantity(kinds.ANGLE, "140 degree")
_COLUMNS = {
    "measured_depth": (position, kinds.COORDINATE),
    "inclination": (_inclination, kinds.INCLINATION),
    "azimuth": (_azimuth, kinds.ANGLE),
}
_NORTH = as_quantity(kinds.ANGLE, 0.0, "si")


def read_survey(entry: Entry, beside: Beside) -> Any:
    """Read a survey; give the `Path` of its chords."""
    table = entry.table(("head",), (*_COLUMNS, "stations", "file", "azimuth_offset"))
    if table is None:
        return UNUSABLE
    options = {
        "head": table.read("head", read_point),
        "azimuth_offset": table.read("azimuth_offset", _azimuth, _NORTH),
    }
    form = table.form((tuple(_COLUMNS), ()), (("stations",), ()), (("file",), ()))
    if form is None or any(value is UNUSABLE for value in options.values()):
        return UNUSABLE
    if form == 2:

        def made(lines: Any, name: str) -> Path:
            return _path(Survey.from_lines(lines, name, **options))

        return beside.read_text(table.entry("file"), made)
    columns = _from_stations(table) if form == 1 else _from_lists(table)
    return table.build(_path, table.build(Survey, *columns, **options))


def _path(survey: Survey) -> Path:
    if survey.measured_depth.size > MOST_STATIONS:
        raise CaseError(f"the survey has more than {MOST_STATIONS} stations: leave some out")
    if survey.chords.sum() > MOST_CHORDS:
        raise CaseError(
            f"the arcs between the stations need more than {MOST_CHORDS} chords: check the units "
            "of measured depth and angles"
        )
    return survey.path


def _from_lists(table: Table) -> list[Any]:
    return [table.read(key, _list(reader, kind)) for key, (reader, kind) in _COLUMNS.items()]


def _list(reader: Reader, kind: Kind) -> Reader:
    def read(entry: Entry) -> Any:
        items = entry.items("a list of texts, one per station", MOST_STATIONS)
        values = UNUSABLE if items is None else all_or_nothing([reader(item) for item in items])
        if values is UNUSABLE:
            return UNUSABLE
        return as_quantity(kind, np.array([value.magnitude for value in values]), "si")

    return read


def _from_stations(table: Table) -> list[Any]:
    entry = table.entry("stations")
    items = entry.items("a list of stations", MOST_STATIONS)
    rows = UNUSABLE if items is None else all_or_nothing([_station(item) for item in items])
    if rows is UNUSABLE:
        return [UNUSABLE] * len(_COLUMNS)
    return [
        as_quantity(kind, np.array(column), "si")
        for (_reader, kind), column in zip(_COLUMNS.values(), zip(*rows, strict=True), strict=True)
    ]


def _station(entry: Entry) -> Any:
    """Read one station; give its three values in SI."""
    items = entry.items("", 3) if isinstance(entry.value, list) and len(entry.value) == 3 else None
    if items is None:
        return entry.refuse(
            "a station of three texts: measured depth, inclination and azimuth, such as "
            "['8200 ft', '35 degree', '140 degree']"
        )
    readers = [reader for reader, _kind in _COLUMNS.values()]
    values = all_or_nothing([read(item) for read, item in zip(readers, items, strict=True)])
    return values if values is UNUSABLE else tuple(value.magnitude for value in values)
