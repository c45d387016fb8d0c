"""What around a block the closed form does not know: sides of the grid, unequal neighbours."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.space.grid import AXES, SIDES, TensorGrid

Array = np.ndarray[Any, Any]

#: Neighbours whose width differs by more than this factor are unequal.
_EQUAL = 1.05


def surroundings(
    midpoints: Array, cells: Array, grid: TensorGrid, directions: list[str], placement: str
) -> list[str]:
    """Return one note per block that a well crosses; empty where all is as assumed."""
    named = [side for name in AXES for side in SIDES[name] if placement in (side, "corner")]
    closed = {side: ~off_side(midpoints, cells, grid, side) for side in named}
    return [
        "; ".join(_of_block(tuple(cell), grid, direction, {s for s in named if closed[s][row]}))
        for row, (cell, direction) in enumerate(zip(cells.tolist(), directions, strict=True))
    ]


def _of_block(
    cell: tuple[int, ...], grid: TensorGrid, direction: str, closed: set[str]
) -> list[str]:
    """Say what is not as assumed around one block, but for the sides that nothing crosses."""
    ends: list[str] = []
    uneven: list[str] = []
    for axis, name in enumerate(AXES):
        if name == direction:
            continue
        own = grid.widths(axis)[cell[axis]]
        worst = 1.0
        for side, step in zip(SIDES[name], (-1, 1), strict=True):
            if side in closed:
                continue
            beside = [*cell]
            beside[axis] += step
            if not grid.has(tuple(beside)):
                ends.append(side)
                continue
            ratio = grid.widths(axis)[beside[axis]] / own
            worst = max(worst, ratio, 1.0 / ratio)
        if worst > _EQUAL:
            uneven.append(f"d{name} of a neighbour differs by a factor of {worst:.3g}")
    notes = [f"no block to the {' and '.join(ends)}: the formula assumes one"] if ends else []
    if uneven:
        notes.append(f"{' and '.join(uneven)}: the formula assumes equal blocks")
    return notes


def off_side(midpoints: Array, cells: Array, grid: TensorGrid, side: str) -> Array:
    """Return which rows do not run on the named side of their block, (n,)."""
    axis = next(a for a, name in enumerate(AXES) if side in SIDES[name])
    faces = grid.edges()[axis]
    number = cells[:, axis] + SIDES[AXES[axis]].index(side)
    slack = 1e-6 * grid.widths(axis)[cells[:, axis]]
    off: Array = np.abs(midpoints[:, axis] - faces[number]) > slack
    return off
