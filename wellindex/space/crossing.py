"""Which blocks the open intervals of a path cross, and how far."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Any, NamedTuple

import numpy as np

from wellindex.space.grid import TensorGrid
from wellindex.space.hexahedral import HexahedralGrid
from wellindex.space.hexahedral_crossing import hexahedral_pieces
from wellindex.space.intervals import open_intervals
from wellindex.space.path import Path
from wellindex.space.pieces import SLIVER, Pieces
from wellindex.space.tensor_crossing import onto_all_faces, tensor_pieces
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.registry import Quantity

Array = np.ndarray[Any, Any]
Grid = TensorGrid | HexahedralGrid


class Rows(NamedTuple):
    """One row per visit of a block by one interval, in order along the path; SI."""

    cell: Array
    interval: Array
    md_in: Array
    md_out: Array
    entry: Array
    exit: Array
    components: Array
    midpoint: Array

    @property
    def length(self) -> Array:
        """Length of each visit along the path."""
        length: Array = self.md_out - self.md_in
        return length


class Crossings:
    """The blocks that the open intervals of a path cross, in order along it.

    `cross` makes them. Lengths are measured along the path (along the arcs of a survey).

    Attributes
    ----------
    cell : array of int, (n, 3)
        Block indices (i, j, k) from 0; one row per visit and interval.
    interval : array of int, (n,)
        The interval that the row belongs to, from 0.
    overlaps : list of tuple
        Where cells overlap (faults), (measured depth from, to, the other cell): the length counts
        once, for the row's cell.

    Examples
    --------
    >>> from wellindex import Path, TensorGrid, cross
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, ["5 m", "8 m"])
    >>> found = cross(Path([("50 m", "50 m", "0 m"), ("50 m", "50 m", "10 m")]), grid)
    >>> print(f"{found.length:.1f}")
    [5.0 5.0] m
    """

    def __init__(
        self,
        rows: Rows,
        gaps: list[tuple[float, float]],
        overlaps: list[tuple[float, float, tuple[int, ...]]],
    ) -> None:
        self._rows = rows
        self._gaps = gaps
        self._overlaps = overlaps

    def __len__(self) -> int:
        return len(self._rows.md_in)

    @property
    def cell(self) -> Array:
        """Block indices (i, j, k) from 0, (n, 3)."""
        return self._rows.cell.copy()

    @property
    def interval(self) -> Array:
        """The interval that each row belongs to, from 0, (n,)."""
        return self._rows.interval.copy()

    @property
    def md_in(self) -> Quantity:
        """Measured depth where the path enters the block, (n,)."""
        return as_quantity(kinds.COORDINATE, self._rows.md_in)

    @property
    def md_out(self) -> Quantity:
        """Measured depth where the path leaves the block, (n,)."""
        return as_quantity(kinds.COORDINATE, self._rows.md_out)

    @property
    def length(self) -> Quantity:
        """Length along the path in the block, (n,)."""
        return as_quantity(kinds.LENGTH, self._rows.length)

    @property
    def entry(self) -> Quantity:
        """Point where the path enters the block, (n, 3)."""
        return as_quantity(kinds.COORDINATE, self._rows.entry)

    @property
    def exit(self) -> Quantity:
        """Point where the path leaves the block, (n, 3)."""
        return as_quantity(kinds.COORDINATE, self._rows.exit)

    @property
    def vector(self) -> Quantity:
        """From entry to exit, (n, 3)."""
        return as_quantity(kinds.COORDINATE, self._rows.exit - self._rows.entry)

    @property
    def gaps(self) -> Quantity:
        """Stretches between two visits that lie in no cell (faults, absent cells), (m, 2)."""
        return as_quantity(kinds.COORDINATE, np.array(self._gaps).reshape(-1, 2))

    @property
    def overlaps(self) -> list[tuple[Quantity, Quantity, tuple[int, ...]]]:
        """Stretches that another cell claims too: measured depth from, to, that cell."""
        return [
            (as_quantity(kinds.COORDINATE, a), as_quantity(kinds.COORDINATE, b), cell)
            for a, b, cell in self._overlaps
        ]

    def overlaps_in_si(self) -> list[tuple[float, float, tuple[int, ...]]]:
        """Return the overlaps with plain measured depths in SI."""
        return self._overlaps

    def in_si(self) -> Rows:
        """Return the rows as plain arrays in SI."""
        return self._rows

    def __repr__(self) -> str:
        return (
            f"Crossings({len(self)} rows, {len(self._gaps)} gaps, {len(self._overlaps)} overlaps)"
        )


@dataclass
class _Visit:
    """An unbroken stretch of one interval in one block; its middle is moment over length."""

    cell: tuple[int, ...]
    interval: int
    md_in: float
    md_out: float
    entry: Array
    exit: Array
    components: Array
    moment: Array

    def continues(self, later: _Visit) -> bool:
        """Tell whether `later` is the same stretch, cut at a point of the path."""
        gap = later.md_in - self.md_out
        alike = (self.cell, self.interval) == (later.cell, later.interval)
        return alike and gap <= _same(self.md_out)

    def extend(self, later: _Visit) -> None:
        """Take in a stretch that continues this one."""
        self.md_out = later.md_out
        self.exit = later.exit
        self.components += later.components
        self.moment += later.moment


def _same(md: float) -> float:
    return SLIVER * max(abs(md), 1.0)


@dataclass
class _Followed:
    """What following the intervals has found so far."""

    visits: list[_Visit] = field(default_factory=list)
    overlaps: list[tuple[float, float, tuple[int, ...]]] = field(default_factory=list)
    latest: dict[tuple[int, ...], int] = field(default_factory=dict)

    def add(self, visit: _Visit) -> None:
        """Add a stretch, or lengthen the last one by it."""
        if self.visits and self.visits[-1].continues(visit):
            self.visits[-1].extend(visit)
        else:
            self.visits.append(visit)

    def claim(self, md_in: float, md_out: float, cell: tuple[int, ...]) -> None:
        """Add another cell's claim to a stretch, or lengthen its last one by it."""
        last = self.latest.get(cell)
        if last is not None and md_in - self.overlaps[last][1] <= _same(md_in):
            self.overlaps[last] = (self.overlaps[last][0], md_out, cell)
        else:
            self.latest[cell] = len(self.overlaps)
            self.overlaps.append((md_in, md_out, cell))

    def gaps(self) -> list[tuple[float, float]]:
        """Return the stretches of an interval between visits that lie in no cell."""
        return [
            (one.md_out, other.md_in)
            for one, other in pairwise(self.visits)
            if one.interval == other.interval and other.md_in - one.md_out > _same(one.md_out)
        ]


def _pieces_of(grid: Grid, start: Array, stop: Array) -> Pieces:
    if isinstance(grid, TensorGrid):
        return tensor_pieces(start, stop, grid)
    return hexahedral_pieces(start, stop, grid)


def crossings(path: Path, grid: Grid, intervals: Array) -> Crossings:
    """Follow the open intervals of a path, in SI and in order, through a grid."""
    _points, depths = path.in_si()
    found = _Followed()
    for number, (top, bottom) in enumerate(intervals):
        if not top < bottom:
            continue
        stations = np.concatenate(([top], depths[(depths > top) & (depths < bottom)], [bottom]))
        places = path.at(stations)
        if isinstance(grid, TensorGrid):
            places = onto_all_faces(places, grid)
        legs = zip(pairwise(stations.tolist()), pairwise(places), strict=True)
        for (md_a, md_b), (start, stop) in legs:
            pieces = _pieces_of(grid, start, stop)
            size = md_b - md_a
            for visit in _visits(pieces, grid, number, md_a, size, start, stop):
                found.add(visit)
            for into, out, cell in pieces.also:
                found.claim(md_a + into * size, md_a + out * size, cell)
    return Crossings(_rows(found.visits), found.gaps(), found.overlaps)


def _visits(
    pieces: Pieces,
    grid: Grid,
    number: int,
    md: float,
    size: float,
    start: Array,
    stop: Array,
) -> Iterator[_Visit]:
    into, out = pieces.into[:, np.newaxis], pieces.out[:, np.newaxis]
    entry, leave = start + into * (stop - start), start + out * (stop - start)
    components = grid.components(pieces.cell, leave - entry)
    for n, cell in enumerate(pieces.cell.tolist()):
        md_in, md_out = md + pieces.into[n] * size, md + pieces.out[n] * size
        yield _Visit(
            cell=tuple(cell),
            interval=number,
            md_in=md_in,
            md_out=md_out,
            entry=entry[n],
            exit=leave[n],
            components=components[n],
            moment=0.5 * (md_out - md_in) * (entry[n] + leave[n]),
        )


def _rows(visits: list[_Visit]) -> Rows:
    def column(name: str, *shape: int) -> Array:
        values = [getattr(visit, name) for visit in visits]
        return np.array(values, dtype=float).reshape(len(visits), *shape)

    md_in, md_out = column("md_in"), column("md_out")
    return Rows(
        cell=column("cell", 3).astype(np.int64),
        interval=column("interval").astype(np.int64),
        md_in=md_in,
        md_out=md_out,
        entry=column("entry", 3),
        exit=column("exit", 3),
        components=column("components", 3),
        midpoint=column("moment", 3) / (md_out - md_in)[:, np.newaxis],
    )


@reads
def cross(
    path: Path,
    grid: TensorGrid | HexahedralGrid,
    intervals: kinds.Coordinate | None = None,
) -> Crossings:
    """Find every block that the open intervals of a path cross.

    Parameters
    ----------
    path : Path
        The well's path; of a `Survey`, ``survey.path``.
    grid : TensorGrid or HexahedralGrid
        The blocks.
    intervals : list of pairs or Quantity, length, (m, 2), optional
        Open intervals in measured depth, in order along the path; default the whole path.

    Returns
    -------
    Crossings
        One row per visit of a block and interval. A path on a face or an edge counts once: for
        the block on its east, north or lower side.

    Raises
    ------
    UnitsError, ShapeError
        A missing or wrong unit; intervals that are no pairs.
    DomainError
        An interval outside the path, one that does not run downwards along it, or two that
        overlap.

    Examples
    --------
    >>> from wellindex import Path, TensorGrid, cross
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, ["5 m", "8 m"])
    >>> found = cross(Path([("50 m", "50 m", "0 m"), ("150 m", "50 m", "10 m")]), grid)
    >>> found.cell.tolist()
    [[0, 0, 0], [1, 0, 1]]
    """
    return crossings(path, grid, open_intervals(path, intervals))
