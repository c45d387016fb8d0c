"""Which blocks the open intervals of a path cross, and how far."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import pairwise
from typing import Any, NamedTuple

import numpy as np

from wellindex.space.grid import TensorGrid
from wellindex.space.path import Path

Array = np.ndarray[Any, Any]

#: Pieces shorter than this part of a leg are rounding at an edge of the grid.
_SLIVER = 1e-12
#: A coordinate nearer to a face than this part of the grid's largest is on the face.
_ON_FACE = 1e-12


class Crossings(NamedTuple):
    """One row per visit of a block by one interval, in order along the path; SI."""

    cell: Array
    interval: Array
    md_in: Array
    md_out: Array
    length: Array
    components: Array
    midpoint: Array


def onto_faces(x: Array, faces: Array) -> Array:
    """Move coordinates that miss a face of the grid by rounding alone onto it."""
    right = np.clip(np.searchsorted(faces, x), 1, len(faces) - 1)
    left, right = faces[right - 1], faces[right]
    nearest = np.where(x - left < right - x, left, right)
    return np.where(np.abs(x - nearest) <= _ON_FACE * np.abs(faces).max(), nearest, x)


def _pieces(start: Array, stop: Array, edges: tuple[Array, ...]) -> Array:
    """Return the fractions along a leg at which it passes a face of the grid, with 0 and 1."""
    fractions = [np.array([0.0, 1.0])]
    for a, b, faces in zip(start, stop, edges, strict=True):
        if a != b:
            first, last = np.searchsorted(faces, (min(a, b), max(a, b)))
            fractions.append((faces[first:last] - a) / (b - a))
    cuts = np.unique(np.clip(np.concatenate(fractions), 0.0, 1.0))
    keep = np.concatenate(([True], np.diff(cuts) > _SLIVER))
    cuts = cuts[keep]
    cuts[-1] = 1.0
    return cuts


def _cells(points: Array, edges: tuple[Array, ...]) -> Array:
    """Return the block of each point, (n, 3); -1 outside.

    A point on a face belongs to the block on its east, north or lower side; on the last face of
    the grid, to the last block.
    """
    cells = np.empty(points.shape, dtype=np.int64)
    for axis, faces in enumerate(edges):
        x = points[:, axis]
        index = np.searchsorted(faces, x, side="right") - 1
        index[x == faces[-1]] = len(faces) - 2
        index[(x < faces[0]) | (x > faces[-1])] = -1
        cells[:, axis] = index
    return cells


def _leg_rows(start: Array, stop: Array, grid: TensorGrid) -> tuple[Array, Array, Array]:
    """Return cell, and fractions in and out, of the pieces of one leg that lie in blocks."""
    cuts = _pieces(start, stop, grid.edges())
    middle = 0.5 * (cuts[1:] + cuts[:-1])
    # A coordinate that does not change is taken as it is: rounding must not move it off a face.
    points = np.where(start == stop, start, start + middle[:, np.newaxis] * (stop - start))
    cells = _cells(points, grid.edges())
    inside = np.all(cells >= 0, axis=1)
    inside[inside] = grid.exists(cells[inside])
    return cells[inside], cuts[:-1][inside], cuts[1:][inside]


@dataclass
class _Visit:
    """An unbroken stretch of one interval in one block; its middle is moment over length."""

    cell: tuple[int, ...]
    interval: int
    md_in: float
    md_out: float
    length: float
    components: Array
    moment: Array

    def continues(self, later: _Visit) -> bool:
        """Tell whether `later` is the same stretch, cut at a point of the path."""
        gap = later.md_in - self.md_out
        alike = (self.cell, self.interval) == (later.cell, later.interval)
        return alike and gap <= _SLIVER * max(abs(self.md_out), 1.0)

    def extend(self, later: _Visit) -> None:
        """Take in a stretch that continues this one."""
        self.md_out = later.md_out
        self.length += later.length
        self.components += later.components
        self.moment += later.moment


def crossings(path: Path, grid: TensorGrid, intervals: Array) -> Crossings:
    """Follow the open intervals of a path through a tensor grid.

    `intervals` holds measured depths in SI, (n, 2), in order. Pieces of one interval in one block
    are one row as long as the path does not leave the block between them.
    """
    visits: list[_Visit] = []
    for number, (top, bottom) in enumerate(intervals):
        if not top < bottom:
            continue
        for visit in _interval_visits(path, grid, number, top, bottom):
            if visits and visits[-1].continues(visit):
                visits[-1].extend(visit)
            else:
                visits.append(visit)
    return _collect(visits)


def _interval_visits(
    path: Path, grid: TensorGrid, number: int, top: float, bottom: float
) -> Iterator[_Visit]:
    points, depths = path.in_si()
    first, last = np.searchsorted(depths, (top, bottom), side="right")
    stations = np.concatenate(([top], depths[first:last], [bottom]))
    stations = stations[np.concatenate(([True], np.diff(stations) > 0.0))]
    places = np.column_stack(
        [
            onto_faces(np.interp(stations, depths, x), faces)
            for x, faces in zip(points.T, grid.edges(), strict=True)
        ]
    )
    for n, (md_a, md_b) in enumerate(pairwise(stations.tolist())):
        start, stop, size = places[n], places[n + 1], md_b - md_a
        for cell, into, out in zip(*_leg_rows(start, stop, grid), strict=True):
            length = (out - into) * size
            yield _Visit(
                cell=tuple(cell.tolist()),
                interval=number,
                md_in=md_a + into * size,
                md_out=md_a + out * size,
                length=length,
                components=np.abs(stop - start) * (out - into),
                moment=length * (start + 0.5 * (into + out) * (stop - start)),
            )


def _collect(visits: list[_Visit]) -> Crossings:
    def column(name: str, *shape: int) -> Array:
        values = [getattr(visit, name) for visit in visits]
        return np.array(values, dtype=float).reshape(len(visits), *shape)

    length = column("length")
    return Crossings(
        cell=column("cell", 3).astype(np.int64),
        interval=column("interval").astype(np.int64),
        md_in=column("md_in"),
        md_out=column("md_out"),
        length=length,
        components=column("components", 3),
        midpoint=column("moment", 3) / length[:, np.newaxis],
    )
