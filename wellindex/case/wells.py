"""The tables of a case that describe its wells."""

from __future__ import annotations

from itertools import pairwise
from typing import Any, Literal, NamedTuple, get_args

import numpy as np

from wellindex.case.beside import Beside
from wellindex.case.entries import (
    UNUSABLE,
    Entry,
    Reader,
    Table,
    all_or_nothing,
    choice,
    line,
    number,
    quantity,
)
from wellindex.case.reservoir import (
    Spread,
    fraction,
    position,
    read_fluid,
    read_point,
    read_spread,
)
from wellindex.case.surveys import MOST_STATIONS, read_survey
from wellindex.fluid import Liquid
from wellindex.index import Placement
from wellindex.space.grid import TensorGrid
from wellindex.space.hexahedral import HexahedralGrid
from wellindex.space.path import Path
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.well import Role

MOST_WELLS = 1_000
MOST_INTERVALS = 1_000
#: Faces of blocks that all paths together may pass: each costs memory and time.
MOST_CROSSINGS = 50_000

_radius = quantity(kinds.LENGTH, "0.354 ft")
_pressure = quantity(kinds.PRESSURE, "3900 psia")
_rate = quantity(kinds.Rate.__metadata__[0], "850 stb/day")
_skin = number(kinds.Skin.__metadata__[0], "2.5")

_WELL_REQUIRED = ("name", "role", "wellbore_radius", "block_pressure")
_WELL_OPTIONAL = (
    "path",
    "survey",
    "method",
    "at_rate",
    "at_pressure",
    "open",
    "skin",
    "placement",
    "measured_depth_at_start",
    "reference_depth",
    "relative_permeability",
    "fluid",
)


def _name(entry: Entry) -> Any:
    name = line(60)(entry)
    if name is UNUSABLE or name[0].isalnum():
        return name
    return entry.refuse("a name that starts with a letter or a digit")


class WellCase(NamedTuple):
    """One well of a case; `where` is its place in the file."""

    where: str
    name: str
    role: Role
    fluid: Liquid
    path: Path
    rw: Any
    skin: Any
    intervals: Any
    method: Literal["projection", "axis"]
    placement: Placement
    reference_depth: Any
    relative_permeability: Spread
    block_pressure: Spread
    at_rate: Any
    at_pressure: Any


def read_wells(entry: Entry, grid: Any, fluid: Any, beside: Beside) -> Any:
    """Read all wells; give a list of `WellCase`."""
    items = entry.items("a list of tables: write [[wells]] above each well", MOST_WELLS)
    if items is None:
        return UNUSABLE
    wells = all_or_nothing([_well(item, grid, fluid, beside) for item in items])
    if wells is UNUSABLE or grid is UNUSABLE:
        return UNUSABLE
    names = [well.name for well in wells]
    for well, name in zip(wells, names, strict=True):
        if names.count(name) > 1:
            entry.problems.add(f"{well.where}.name", f"{name!r} stands twice: one name per well")
    crossings = 0
    for well in wells:
        crossings += _faces_passed(well.path, grid, MOST_CROSSINGS - crossings)
        if crossings > MOST_CROSSINGS:
            entry.problems.add(
                entry.where,
                f"the paths pass more than {MOST_CROSSINGS} points and faces of blocks: give "
                "fewer points or fewer wells",
            )
            return UNUSABLE
    return wells


def _faces_passed(path: Path, grid: TensorGrid | HexahedralGrid, most: int) -> int:
    """Count the faces that a path passes, or the cells near it; counting stops beyond `most`."""
    points, _depths = path.in_si()
    if isinstance(grid, TensorGrid):
        passed = [
            np.abs(np.diff(np.searchsorted(edges, points[:, axis]))).sum()
            for axis, edges in enumerate(grid.edges())
        ]
        return len(points) + int(np.sum(passed))
    count = len(points)
    for start, stop in pairwise(points):
        if count > most:
            break
        count += len(grid.tree().near(start, stop, 0.0))
    return count


def _well(entry: Entry, grid: Any, fluid: Any, beside: Beside) -> Any:
    table = entry.table(_WELL_REQUIRED, _WELL_OPTIONAL)
    if table is None:
        return UNUSABLE

    def spread(key: str, reader: Reader, default: Any) -> Any:
        return table.read(key, lambda e: read_spread(e, reader, grid, by_coupling=True), default)

    radius = table.read("wellbore_radius", _radius)
    skin = table.read("skin", _skin, 0.0)
    intervals, radii, skins = _open(table, radius, skin)
    everywhere = Spread("all", 1.0, f"{entry.where}.relative_permeability")
    return table.build(
        WellCase,
        where=entry.where,
        name=table.read("name", _name),
        role=table.read("role", choice(*get_args(Role))),
        fluid=_fluid_of_well(table, fluid),
        path=_path(table, beside),
        rw=radii,
        skin=skins,
        intervals=intervals,
        method=table.read("method", choice("projection", "axis"), "projection"),
        placement=table.read("placement", choice(*get_args(Placement)), "centre"),
        reference_depth=table.read("reference_depth", position, None),
        relative_permeability=spread("relative_permeability", fraction, everywhere),
        block_pressure=spread("block_pressure", _pressure, UNUSABLE),
        **_held(table),
    )


def _fluid_of_well(table: Table, fluid: Any) -> Any:
    found = table.read("fluid", read_fluid, fluid)
    if found is None:
        table.problems.add(f"{table.where}.fluid", "missing; give [fluid] for all wells, or this")
        return UNUSABLE
    return found


def _path(table: Table, beside: Beside) -> Any:
    form = table.form((("path",), ("measured_depth_at_start",)), (("survey",), ()))
    if form is None:
        return UNUSABLE
    if form == 1:
        return table.read("survey", lambda entry: read_survey(entry, beside))
    start = table.read(
        "measured_depth_at_start", position, as_quantity(kinds.COORDINATE, 0.0, "si")
    )
    points = table.read("path", _points)
    return table.build(Path, points, measured_depth=start, key="path")


def _points(entry: Entry) -> Any:
    items = entry.items("a list of points (x, y, z) along the well", MOST_STATIONS)
    points = UNUSABLE if items is None else all_or_nothing([read_point(item) for item in items])
    if points is UNUSABLE:
        return UNUSABLE
    rows = np.array([point.magnitude for point in points])
    return as_quantity(kinds.COORDINATE, rows, "si")


def _held(table: Table) -> dict[str, Any]:
    """Read what the well is held at: a rate or a bottom-hole pressure."""
    held = {
        "at_rate": table.read("at_rate", _rate, None),
        "at_pressure": table.read("at_pressure", _pressure, None),
    }
    given = [key for key in held if key in table]
    if len(given) != 1:
        table.problems.add(
            table.where,
            f"give exactly one of at_rate and at_pressure; got {'both' if given else 'neither'}",
        )
    return held


def _open(table: Table, radius: Any, skin: Any) -> tuple[Any, Any, Any]:
    """Read the open intervals: measured depths, and radius and skin of each."""
    if "open" not in table:
        return None, radius, skin
    entry = table.entry("open")
    items = entry.items("a list of tables: write [[wells.open]] above each", MOST_INTERVALS)
    if items is None:
        return UNUSABLE, radius, skin
    rows = [_interval(item, radius, skin) for item in items]
    if any(value is UNUSABLE for row in rows for value in row):
        return UNUSABLE, UNUSABLE, UNUSABLE
    depths = np.array([(top.magnitude, bottom.magnitude) for top, bottom, _rw, _s in rows])
    return (
        as_quantity(kinds.COORDINATE, depths, "si"),
        as_quantity(kinds.LENGTH, np.array([rw.magnitude for _t, _b, rw, _s in rows]), "si"),
        np.array([each for _top, _bottom, _rw, each in rows]),
    )


def _interval(entry: Entry, radius: Any, skin: Any) -> tuple[Any, ...]:
    table = entry.table(("from", "to"), ("skin", "wellbore_radius"))
    if table is None:
        return (UNUSABLE,)
    return (
        table.read("from", position),
        table.read("to", position),
        table.read("wellbore_radius", _radius, radius),
        table.read("skin", _skin, skin),
    )
