"""Tie a well to every block that its open intervals cross."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from wellindex.couplings import Couplings, Rows
from wellindex.errors import AssumptionWarning, DomainError, ShapeError
from wellindex.index import Invalid, Placement, flow_resistance, side_axis
from wellindex.radius.crossed_block import Crossed, along_axis, projected
from wellindex.rock import Permeability
from wellindex.space import crossing
from wellindex.space.crossing import Grid
from wellindex.space.grid import AXES, SIDES, TensorGrid
from wellindex.space.hexahedral import HexahedralGrid
from wellindex.space.intervals import open_intervals
from wellindex.space.path import Path
from wellindex.space.tensor_crossing import onto_faces
from wellindex.surroundings import off_side, surroundings
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.checks import Tally, warn

Array = np.ndarray[Any, Any]

_TIGHT = "no permeability across the well: index 0"


def _per_interval(name: str, value: Any, count: int) -> Array:
    array = np.asarray(value, dtype=float)
    if array.shape not in ((), (count,)):
        raise ShapeError(
            f"couple(): {name} is one value, or one per interval ({count}); got {array.shape}"
        )
    return np.broadcast_to(array, (count,))


def _joined(intervals: Array, rw: Array, skin: Array) -> tuple[Array, Array, Array]:
    """Join intervals that touch and are alike, so that splitting one changes nothing."""
    keep = [0]
    ends = [intervals[0, 1]]
    for n in range(1, len(intervals)):
        touches = intervals[n, 0] - ends[-1] <= 1e-12 * abs(ends[-1])
        if touches and rw[n] == rw[keep[-1]] and skin[n] == skin[keep[-1]]:
            ends[-1] = intervals[n, 1]
        else:
            keep.append(n)
            ends.append(intervals[n, 1])
    return np.column_stack((intervals[keep, 0], ends)), rw[keep], skin[keep]


def _check_inside(found: crossing.Rows, intervals: Array, given: bool) -> None:
    """Refuse an interval with nothing in the grid; say where a part lies outside."""
    inside = np.bincount(found.interval, weights=found.length, minlength=len(intervals))
    for length, ends in zip(inside, intervals, strict=True):
        size = float(ends[1] - ends[0])
        if length >= (1.0 - 1e-9) * size > 0.0:
            continue
        top, bottom = (as_quantity(kinds.COORDINATE, float(end)) for end in ends)
        opened = f"the open interval from {top} to {bottom} in measured depth"
        if length == 0.0:
            raise DomainError(
                f"couple(): {opened} crosses no block of the grid: check x, y and depth of the "
                "path against the grid's origin and size"
            )
        if given:
            lost = as_quantity(kinds.LENGTH, size - float(length))
            warn(f"{lost} of {opened} lies outside the grid", AssumptionWarning)


def _caution_sides(found: crossing.Rows, grid: Grid, crossed: Crossed) -> None:
    """Warn where a path runs on an outer side of the grid and is counted as a full circle."""
    if not isinstance(grid, TensorGrid):
        return
    for axis, name in enumerate(AXES):
        edges = grid.edges()[axis]
        along = crossed.components[:, axis] == 0.0
        places = onto_faces(found.midpoint[along, axis], edges)
        for side, edge in zip(SIDES[name], (edges[0], edges[-1]), strict=True):
            if np.any(places == edge):
                warn(
                    f"the path runs on the {side} side of the grid and is counted as a full "
                    f'circle; if nothing flows across that side, give placement="{side}"',
                    AssumptionWarning,
                )


def _check_placement(found: crossing.Rows, grid: Grid, crossed: Crossed) -> None:
    """Refuse a path that is not where the placement says it is."""
    if not isinstance(grid, TensorGrid):
        return
    axes = {AXES[axis] for axis in crossed.dominant}
    for direction in axes:
        side_axis(direction, crossed.placement)
    pairs = [SIDES[name] for name in AXES if name not in axes]
    for sides in pairs if crossed.placement == "corner" else [(crossed.placement,)]:
        off = np.all([off_side(found.midpoint, found.cell, grid, s) for s in sides], axis=0)
        if np.any(off):
            block = tuple(found.cell[int(np.argmax(off))].tolist())
            raise DomainError(
                f"couple(): placement {crossed.placement!r} says that the well stands on the "
                f"{' or '.join(sides)} side of its blocks, but the path does not run there in "
                f"block {block}: move the path onto the side, or leave the placement out"
            )


@reads
def couple(
    path: Path,
    grid: TensorGrid | HexahedralGrid,
    permeability: Permeability,
    *,
    rw: kinds.Length,
    skin: kinds.Skin = 0.0,
    intervals: kinds.Coordinate | None = None,
    method: Literal["projection", "axis"] = "projection",
    net_to_gross: kinds.Fraction = 1.0,
    placement: Placement = "centre",
    invalid: Invalid = "raise",
) -> Couplings:
    r"""Tie a well to every block of a grid that its open intervals cross.

    .. math:: WI = \frac{2\pi\,\mathrm{sector}\,k_\mathrm{normal}\,L\,\mathrm{scale}}
                        {\ln(r_0/r_w) + \mathrm{skin}}

    Parameters
    ----------
    path : Path
        The well's path; of a `Survey`, ``survey.path``.
    grid : TensorGrid or HexahedralGrid
        The blocks.
    permeability : Permeability
        Along the axes of the grid; scalars, or one value per block.
    rw : Quantity or str, length, scalar or one per interval
        Wellbore radius; positive.
    skin : float, or one per interval
        Local skin of the open length. Partial opening is geometry and must not be in it.
    intervals : list of pairs or Quantity, length, (m, 2), optional
        Open intervals in measured depth along the path, in order; default all of the path that
        lies in the grid. An
        interval is open over its whole length: shot density is part of the skin.
    method : {"projection", "axis"}
        "projection": the indices of a well along each axis, each with its own part of the length,
        added as vectors (Shu 2005). "axis": Peaceman's formula in the plane normal to the axis
        that the well runs along most. The two are the same for a well along an axis.
    net_to_gross : float or array (nx, ny, nz)
        Multiplies kx and ky, nothing else: between 0 and 1.
    placement : {"centre", "corner", "west", "east", "south", "north", "top", "bottom"}
        A side or a corner says that the path runs ON that side of its blocks, and that nothing
        flows across the side; see `well_index`. A place off centre inside a block changes
        nothing: the grid cannot tell.
    invalid : {"raise", "nan"}
        Whether one unusable row raises or gets an index of NaN with one warning.

    Returns
    -------
    Couplings
        One row per visit of a block and interval, in order along the path. A point on a face
        between two blocks belongs to the block on its east, north or lower side.

    Raises
    ------
    DomainError
        A placement for an oblique path or not where the path runs, an interval outside the path
        or the grid, intervals that overlap, ln(r0/rw) below 0.5, ln(r0/rw) + skin not positive.
    UnitsError, ShapeError
        A missing or wrong unit; an array that does not fit the grid or the intervals.

    Warns
    -----
    AssumptionWarning
        A part of an interval outside the grid; a path on an outer side of the grid;
        ln(r0/rw) below 1 or ln(r0/rw) + skin below 0.5.

    Notes
    -----
    The closed form holds for equal blocks all around the well's own. Where the grid has none beside
    it, or one of another width, ``Couplings.notes`` says so, without a warning: the index may then
    be off by tens of per cent, above all for a horizontal well in a thin layer.

    References
    ----------
    .. [1] D. W. Peaceman, SPE Journal 23(3), 531-543 (1983), eqs. 14 and 16 (from memory
       of the source); doi:10.2118/10528-PA.

    Examples
    --------
    >>> from wellindex import Path, Permeability, TensorGrid, couple
    >>> grid = TensorGrid(["150 ft"] * 3, ["150 ft"] * 3, ["20 ft", "30 ft"])
    >>> well = Path([("225 ft", "225 ft", "0 ft"), ("225 ft", "225 ft", "50 ft")])
    >>> rows = couple(well, grid, Permeability("120 mD", "120 mD", "12 mD"), rw="0.354 ft",
    ...               intervals=[("5 ft", "20 ft"), ("20 ft", "40 ft")])
    >>> print(f"{rows.length.to('ft'):.1f}")
    [15.0 20.0] ft
    """
    opened = open_intervals(path, intervals)
    count = len(opened)
    opened, radii, skins = _joined(
        opened, _per_interval("rw", rw, count), _per_interval("skin", skin, count)
    )
    crossed_grid = crossing.crossings(path, grid, opened)
    found = crossed_grid.in_si()
    _check_inside(found, opened, intervals is not None)
    crossed = Crossed(
        found.components,
        grid.sizes(found.cell),
        _net_permeability(permeability, grid, found.cell, net_to_gross),
        placement,
    )
    if placement == "centre":
        _caution_sides(found, grid, crossed)
    elif np.all(crossed.aligned):
        _check_placement(found, grid, crossed)
    tally = Tally(keep_going=invalid == "nan")
    tally.start(0, found.md_in.shape, found.md_in.size)
    rows = _rows(tally, found, grid, crossed, method, radii[found.interval], skins[found.interval])
    tally.report()
    notes = _notes(rows, crossed, grid, crossed_grid)
    return Couplings(rows, crossed=crossed, method=method, notes=notes)


def _notes(rows: Rows, crossed: Crossed, grid: Grid, found: crossing.Crossings) -> list[str]:
    """Say what a row's reader must know: tight rock, surroundings, another cell's claim."""
    around = [""] * len(rows.length)
    if isinstance(grid, TensorGrid):
        directions = [AXES[axis] for axis in crossed.dominant]
        around = surroundings(
            found.in_si().midpoint, rows.cell, grid, directions, crossed.placement
        )
    notes = [
        [_TIGHT] if k == 0.0 else [note] if note else []
        for k, note in zip(rows.k_normal, around, strict=True)
    ]
    for top, bottom, cell in found.overlaps_in_si():
        middle = 0.5 * (top + bottom)
        for n in np.flatnonzero((rows.md_in <= middle) & (middle <= rows.md_out)):
            notes[n].append(f"cell {cell} claims a part of this length too")
    return ["; ".join(parts) for parts in notes]


def _net_permeability(
    permeability: Permeability, grid: Grid, cells: Array, net_to_gross: Any
) -> Array:
    """Return kx, ky, kz of the crossed blocks, (3, n), with net-to-gross on kx and ky."""
    if permeability.shape not in ((), grid.shape):
        raise ShapeError(
            f"couple(): permeability has the shape {permeability.shape}, the grid {grid.shape}"
        )
    if np.shape(net_to_gross) not in ((), grid.shape):
        raise ShapeError(
            f"couple(): net_to_gross has the shape {np.shape(net_to_gross)}, the grid {grid.shape}"
        )
    k = permeability.at(cells)
    net = net_to_gross[tuple(cells.T)] if np.ndim(net_to_gross) else net_to_gross
    return np.stack((k[0] * net, k[1] * net, k[2]))


def _rows(
    check: Tally,
    found: crossing.Rows,
    grid: Grid,
    crossed: Crossed,
    method: str,
    rw: Array,
    skin: Array,
) -> Rows:
    length = found.length
    by_method = along_axis(crossed) if method == "axis" else projected(check, crossed, length, rw)
    check.refuse(
        np.isnan(by_method.k_normal),
        'invalid="nan" keeps the other rows: a block on the path has no valid permeability',
    )
    flow_resistance(check, by_method.r0, rw, skin, by_method.k_normal)
    lost = False if check.lost is None else check.lost
    return Rows(
        cell=found.cell,
        md_in=found.md_in,
        md_out=found.md_out,
        depth=found.midpoint[:, 2],
        block_depth=grid.centres(found.cell)[:, 2],
        length=length,
        k_normal=by_method.k_normal,
        r0=np.where(lost, np.nan, by_method.r0),
        rw=rw,
        skin=skin,
        sector=by_method.sector,
        scale=np.ones(len(length)),
    )
