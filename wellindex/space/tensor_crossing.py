"""Where a straight leg passes through the blocks of a tensor grid."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.space.grid import TensorGrid
from wellindex.space.pieces import Pieces, sorted_cuts

Array = np.ndarray[Any, Any]

#: A coordinate nearer to a face than this part of the grid's largest is on the face.
_ON_FACE = 1e-12


def onto_faces(x: Array, faces: Array) -> Array:
    """Move coordinates that miss a face of the grid by rounding alone onto it."""
    right = np.clip(np.searchsorted(faces, x), 1, len(faces) - 1)
    left, right = faces[right - 1], faces[right]
    nearest = np.where(x - left < right - x, left, right)
    return np.where(np.abs(x - nearest) <= _ON_FACE * np.abs(faces).max(), nearest, x)


def onto_all_faces(points: Array, grid: TensorGrid) -> Array:
    """Move points (n, 3) that miss faces of the grid by rounding alone onto them."""
    columns = [onto_faces(x, faces) for x, faces in zip(points.T, grid.edges(), strict=True)]
    return np.column_stack(columns)


def _cuts(start: Array, stop: Array, edges: tuple[Array, ...]) -> Array:
    """Return the fractions along a leg at which it passes a face of the grid, with 0 and 1."""
    fractions = [np.empty(0)]
    for a, b, faces in zip(start, stop, edges, strict=True):
        if a != b:
            first, last = np.searchsorted(faces, (min(a, b), max(a, b)))
            fractions.append((faces[first:last] - a) / (b - a))
    return sorted_cuts(np.concatenate(fractions))


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


def tensor_pieces(start: Array, stop: Array, grid: TensorGrid) -> Pieces:
    """Return the pieces of one leg that lie in blocks."""
    cuts = _cuts(start, stop, grid.edges())
    middle = 0.5 * (cuts[1:] + cuts[:-1])
    # A coordinate that does not change is taken as it is: rounding must not move it off a face.
    points = np.where(start == stop, start, start + middle[:, np.newaxis] * (stop - start))
    cells = _cells(points, grid.edges())
    inside = np.all(cells >= 0, axis=1)
    inside[inside] = grid.exists(cells[inside])
    return Pieces(cells[inside], cuts[:-1][inside], cuts[1:][inside], [])
