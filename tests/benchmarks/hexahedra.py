"""Grids of hexahedra, wells through them, and the search for crossed cells written plainly."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex import HexahedralGrid, Path, Survey, ureg

Array = np.ndarray[Any, Any]
Box = tuple[float, float, float, float, float, float]

#: Width and depth of the grids, whatever the number of their cells, m.
WIDTH, THICKNESS = 2000.0, 400.0
#: Dip to the east and to the north.
DIPS = (0.02, 0.01)


def corners(n: int) -> Array:
    """Corners of n x n x n tilted cells in m, written without a copy."""
    found = np.empty((n, n, n, 8, 3))
    steps = np.arange(n)[:, np.newaxis]
    east, north, down = (steps + [c >> axis & 1 for c in range(8)] for axis in range(3))
    found[..., 0] = (WIDTH / n * east)[:, np.newaxis, np.newaxis, :]
    found[..., 1] = (WIDTH / n * north)[np.newaxis, :, np.newaxis, :]
    found[..., 2] = (THICKNESS / n * down)[np.newaxis, np.newaxis, :, :]
    for axis, dip in enumerate(DIPS):
        found[..., 2] += dip * found[..., axis]
    return found


def grid(n: int) -> HexahedralGrid:
    """The grid of those cells."""
    return HexahedralGrid(ureg.Quantity(corners(n), "m"))


def straight_well() -> Path:
    """One leg from the top in the west to the bottom in the east."""
    ends = [[31.0, 57.0, 5.0], [1963.0, 1811.0, 447.0]]
    return Path(ureg.Quantity(np.array(ends), "m"))


def deviated_well(seed: int, stations: int = 200) -> Path:
    """A well that builds to level inside the grid, with the wobble of a real one."""
    spread = np.random.default_rng(seed)
    depth = np.linspace(0.0, 900.0, stations)
    inclination = np.clip(np.linspace(0.0, 3.6, stations), 0.0, 1.5)
    inclination += spread.uniform(0.0, 0.01, stations)
    azimuth = spread.uniform(0.0, 6.0) + np.cumsum(spread.uniform(-0.01, 0.01, stations))
    head = np.array([*spread.uniform(950.0, 1050.0, 2), 40.0])
    return Survey(
        ureg.Quantity(depth, "m"),
        ureg.Quantity(inclination, "radian"),
        ureg.Quantity(azimuth, "radian"),
        head=ureg.Quantity(head, "m"),
    ).path


def boxes(some: Array) -> list[Box]:
    """Bounding boxes of cells (n, 8, 3) as plain numbers: the loop does not pay for them."""
    both = np.concatenate((some.min(axis=1), some.max(axis=1)), axis=1)
    return [tuple(row) for row in both.tolist()]


def plain_loop(start: list[float], stop: list[float], all_boxes: list[Box]) -> list[int]:
    """Cells whose box a leg meets, by a look at each; cutting them is not counted."""
    met = []
    for number, box in enumerate(all_boxes):
        into, out = 0.0, 1.0
        for axis in range(3):
            a, along = start[axis], stop[axis] - start[axis]
            low, high = box[axis], box[axis + 3]
            if along == 0.0:
                if a < low or a > high:
                    break
                continue
            one, other = (low - a) / along, (high - a) / along
            if one > other:
                one, other = other, one
            into, out = max(into, one), min(out, other)
            if into > out:
                break
        else:
            met.append(number)
    return met
