"""A grid cut along a well, and its columns seen from above; plain arrays in SI."""

from __future__ import annotations

from collections import Counter
from typing import Any, NamedTuple

import numpy as np

from wellindex.couplings import Couplings
from wellindex.space.crossing import Grid, crossings
from wellindex.space.grid import TensorGrid
from wellindex.space.path import Path
from wellindex.units import kinds
from wellindex.units.answers import as_quantity

Array = np.ndarray[Any, Any]
Cell = tuple[int, ...]

#: Upright strips that the section is cut into, and cells in all strips together.
_STRIPS = 240
_FEWEST_STRIPS = 24
_MOST_PIECES = 60_000
_MOST_COLUMNS = 4_000
#: Columns shown around those that the well crosses.
_AROUND = 2
#: The corners of a cell around its top face; those of its bottom face follow 4 later.
_AROUND_FACE = np.array([0, 1, 3, 2])


class Outline(NamedTuple):
    """A cell and its outline, (m, 2)."""

    cell: Cell
    corners: Array


class Section(NamedTuple):
    """The grid along a well: distance along its trace and depth, (m, 2)."""

    outlines: list[Outline]
    path: Array
    measured_depth: Array
    across: tuple[float, float]
    depths: tuple[float, float]


class Plan(NamedTuple):
    """Columns of the grid from above: east and north, (m, 2)."""

    outlines: list[Outline]
    path: Array
    east: tuple[float, float]
    north: tuple[float, float]


def section(path: Path, couplings: Couplings, grid: Grid) -> Section:
    """Cut a grid along the upright curtain that a well hangs in.

    Parameters
    ----------
    path : Path
        The well's path.
    couplings : Couplings
        Of the well; the section shows their surroundings.
    grid : TensorGrid or HexahedralGrid
        The blocks.

    Returns
    -------
    Section
        Distances are horizontal, along the well's trace from its first point; beyond the ends
        the trace goes on straight, and east where the well is vertical.
    """
    points, depths = path.in_si()
    trace = np.concatenate(([0.0], np.cumsum(np.hypot(*np.diff(points[:, :2], axis=0).T))))
    cells = couplings.cell
    ends = np.interp([couplings.md_in.m_as("m")[0], couplings.md_out.m_as("m")[-1]], depths, trace)
    width = float(np.max(grid.sizes(cells)[:2]))
    margin = max(0.15 * (ends[1] - ends[0]), 1.2 * width)
    across = float(ends[0] - margin), float(ends[1] + margin)
    top, bottom = _depths_of(grid, cells)
    slack = max(0.15 * (bottom - top), 0.6 * float(np.max(grid.sizes(cells)[2])))
    window = top - slack, bottom + slack
    middle = float(np.mean(ends))
    in_middle = len(_upright(grid, _on_trace(points, trace, np.array([middle]))[0], window)[0])
    strips = int(np.clip(_MOST_PIECES // max(in_middle, 1), _FEWEST_STRIPS, _STRIPS))
    borders = np.linspace(*across, strips + 1)
    places = 0.5 * (borders[1:] + borders[:-1])
    found: dict[Cell, list[tuple[int, float, float]]] = {}
    for n, place in enumerate(_on_trace(points, trace, places)):
        for cell, upper, lower in zip(*_upright(grid, place, window), strict=True):
            found.setdefault(tuple(cell), []).append((n, upper, lower))
    outlines = [
        Outline(cell, _ring(run, borders)) for cell, rows in found.items() for run in _runs(rows)
    ]
    line = np.column_stack((trace, points[:, 2]))
    return Section(outlines, line, depths, across, window)


def _depths_of(grid: Grid, cells: Array) -> tuple[float, float]:
    """Return the depths that some cells reach from and to."""
    if isinstance(grid, TensorGrid):
        edges = grid.edges()[2]
        return float(edges[cells[:, 2]].min()), float(edges[cells[:, 2] + 1].max())
    depths = grid.corners(cells)[:, :, 2]
    return float(depths.min()), float(depths.max())


def _on_trace(points: Array, trace: Array, places: Array) -> Array:
    """Return east and north at distances along the trace, (n, 2)."""
    moves = np.diff(points[:, :2], axis=0)
    lengths = np.diff(trace)
    moving = np.flatnonzero(lengths > 1e-9 * max(trace[-1], 1.0))
    first, last = (moving[0], moving[-1]) if moving.size else (0, 0)
    towards = moves / np.where(lengths > 0.0, lengths, 1.0)[:, np.newaxis]
    if not moving.size:
        towards = np.array([[1.0, 0.0]])
    inside = np.stack([np.interp(places, trace, points[:, axis]) for axis in (0, 1)], axis=1)
    before = np.minimum(places, 0.0)[:, np.newaxis] * towards[first]
    beyond = np.maximum(places - trace[-1], 0.0)[:, np.newaxis] * towards[last]
    place: Array = inside + before + beyond
    return place


def _upright(
    grid: Grid, place: Array, window: tuple[float, float]
) -> tuple[list[list[int]], list[float], list[float]]:
    """Return the cells on a vertical line, and the depths where it enters and leaves them."""
    ends = np.array([[*place, window[0]], [*place, window[1]]])
    line = Path(
        as_quantity(kinds.COORDINATE, ends, "si"),
        measured_depth=as_quantity(kinds.COORDINATE, np.array(window), "si"),
    )
    rows = crossings(line, grid, np.array([window])).in_si()
    return rows.cell.tolist(), rows.md_in.tolist(), rows.md_out.tolist()


def _runs(rows: list[tuple[int, float, float]]) -> list[list[tuple[int, float, float]]]:
    """Split the strips of a cell where they do not follow one another."""
    runs = [[rows[0]]]
    for row in rows[1:]:
        if row[0] == runs[-1][-1][0] + 1:
            runs[-1].append(row)
        else:
            runs.append([row])
    return runs


def _ring(run: list[tuple[int, float, float]], borders: Array) -> Array:
    """Return the outline of a cell in the strips of one run."""
    numbers = np.array([n for n, _upper, _lower in run])
    upper, lower = (np.array([row[which] for row in run]) for which in (1, 2))
    middles = 0.5 * (borders[numbers] + borders[numbers + 1])
    places = np.concatenate(([borders[numbers[0]]], middles, [borders[numbers[-1] + 1]]))
    sides = [np.concatenate(([side[0]], side, [side[-1]])) for side in (upper, lower)]
    return np.column_stack(
        (np.concatenate((places, places[::-1])), np.concatenate((sides[0], sides[1][::-1])))
    )


def plan(path: Path, couplings: Couplings, grid: Grid) -> Plan:
    """Look at the columns around a well from above.

    Parameters
    ----------
    path : Path
        The well's path.
    couplings : Couplings
        Of the well.
    grid : TensorGrid or HexahedralGrid
        The blocks.

    Returns
    -------
    Plan
        A column that the well crosses is outlined at half the height of the crossed cell with
        the largest index, the others in the layer with most couplings.
    """
    strongest = strongest_of_columns(couplings)
    (layer, _count), *_ = Counter(couplings.cell[:, 2].tolist()).most_common(1)
    columns = np.array(list(strongest))
    low = np.maximum(columns.min(axis=0) - _AROUND, 0)
    high = np.minimum(columns.max(axis=0) + _AROUND + 1, grid.shape[:2])
    shown = {(i, j): int(k) for (i, j), (k, _wi) in strongest.items()}
    if np.prod(high - low) <= _MOST_COLUMNS:
        for column in np.argwhere(np.ones(high - low, dtype=bool)) + low:
            shown.setdefault((int(column[0]), int(column[1])), int(layer))
    cells = np.array([(*column, k) for column, k in shown.items()])
    cells = cells[grid.exists(cells)]
    rings = _from_above(grid, cells)
    near = np.array([tuple(cell[:2]) in strongest for cell in cells.tolist()])
    extent = rings[near].reshape(-1, 2)
    margin = 0.75 * float(np.max(grid.sizes(couplings.cell)[:2]))
    (west, south), (east, north) = extent.min(axis=0) - margin, extent.max(axis=0) + margin
    points, _depths = path.in_si()
    outlines = [
        Outline(tuple(cell), ring) for cell, ring in zip(cells.tolist(), rings, strict=True)
    ]
    return Plan(outlines, points[:, :2], (float(west), float(east)), (float(south), float(north)))


def strongest_of_columns(couplings: Couplings) -> dict[Cell, tuple[int, float]]:
    """Return, for each column that a well crosses, the layer and size of its largest index."""
    found: dict[Cell, tuple[int, float]] = {}
    for (i, j, k), wi in zip(couplings.cell.tolist(), couplings.in_si().wi.tolist(), strict=True):
        if (i, j) not in found or wi > found[i, j][1]:
            found[i, j] = k, wi
    return found


def _from_above(grid: Grid, cells: Array) -> Array:
    """Return the outlines of cells from above, (n, 4, 2)."""
    if isinstance(grid, TensorGrid):
        i, j, _k = cells.T
        (x, y, _z) = grid.edges()
        west, east, south, north = x[i], x[i + 1], y[j], y[j + 1]
        round_about = [(west, south), (east, south), (east, north), (west, north)]
        return np.stack([np.stack(corner, axis=1) for corner in round_about], axis=1)
    corners = grid.corners(cells)[:, :, :2]
    rings: Array = 0.5 * (corners[:, _AROUND_FACE] + corners[:, _AROUND_FACE + 4])
    return rings
