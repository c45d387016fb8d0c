"""Where a straight leg passes through hexahedra with bilinear faces.

The leg is cut at every face it meets; who owns a piece is decided at its middle, moved a hair to
the east, north and down, so that a leg on a face or an edge has exactly one owner. Both cells of
a shared face compute the same cuts from the same four corners.
"""

from __future__ import annotations

from itertools import product
from typing import Any

import numpy as np

from wellindex.space.hexahedral import CORNERS, HexahedralGrid, shape_derivatives, shape_weights
from wellindex.space.pieces import Pieces, sorted_cuts

Array = np.ndarray[Any, Any]

#: How far beyond its edges a face is met, as a part of the face: a cut too many does no harm.
_BEYOND = 1e-6
#: The hair, as a part of the size of the cells.
_HAIR = 1e-9
_NEWTON_STEPS = 25
_FACES = [[c for c in range(8) if CORNERS[c, axis] == side] for axis in range(3) for side in (0, 1)]
_SIGNS = np.array(sorted(product((1.0, -1.0), repeat=3), reverse=True))


def hexahedral_pieces(start: Array, stop: Array, grid: HexahedralGrid) -> Pieces:
    """Return the pieces of a straight leg in the cells of a grid, in order along it."""
    scale = float(np.abs(np.concatenate((start, stop))).max()) + float(np.linalg.norm(stop - start))
    cells = grid.tree().near(start, stop, _HAIR * scale)
    if not len(cells):
        return Pieces(np.empty((0, 3), dtype=np.int64), np.empty(0), np.empty(0), [])
    order = np.argsort(grid.number(cells))
    cells = cells[order]
    # Seen from the leg: coordinates far from zero (a map's) would cost digits.
    corners = grid.corners(cells) - start
    start, stop = np.zeros(3), stop - start
    cuts = _cuts(start, stop, corners)
    middles = start + (0.5 * (cuts[1:] + cuts[:-1]))[:, np.newaxis] * (stop - start)
    owners, also = _owners(middles, corners)
    owned = owners >= 0
    claims = [
        (float(cuts[n]), float(cuts[n + 1]), tuple(cells[other].tolist())) for n, other in also
    ]
    return Pieces(cells[owners[owned]], cuts[:-1][owned], cuts[1:][owned], claims)


def _cuts(start: Array, stop: Array, corners: Array) -> Array:
    """Return the sorted fractions at which the leg meets faces of the cells, with 0 and 1."""
    faces = corners[:, _FACES].reshape(-1, 4, 3)
    return sorted_cuts(_meets(start, stop - start, faces))


def _meets(start: Array, along: Array, faces: Array) -> Array:
    """Return the fractions at which a line meets bilinear faces (n, 4, 3).

    With the face p00 + u e1 + v e2 + u v e3 seen along the line, u follows from v, and v from a
    quadratic (Ramsey, Potter & Hansen 2004).
    """
    p00, p10, p01, p11 = np.moveaxis(faces, 1, 0)
    e1, e2, e3 = p10 - p00, p01 - p00, p11 - p10 - p01 + p00
    w = start - p00
    size = float(np.linalg.norm(along))

    def turn(a: Array, b: Array) -> Array:
        return np.cross(a, b) @ (along / size)

    a, b, c = -turn(e2, e3), turn(w, e3) - turn(e2, e1), turn(w, e1)
    root = np.sqrt(np.maximum(b * b - 4.0 * a * c, 0.0))
    q = -0.5 * (b + np.where(b < 0.0, -root, root))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        v = np.concatenate((q / a, c / q))
    e1, e2, e3, w, p00 = (np.concatenate((x, x)) for x in (e1, e2, e3, w, p00))
    usable = np.isfinite(v) & (v >= -_BEYOND) & (v <= 1.0 + _BEYOND)
    e1, e2, e3, w, p00, v = (x[usable] for x in (e1, e2, e3, w, p00, v))
    across = np.eye(3) - np.outer(along, along) / size**2
    below, above = (e1 + v[:, None] * e3) @ across, (w - v[:, None] * e2) @ across
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        u = np.sum(above * below, axis=1) / np.sum(below * below, axis=1)
    on = np.isfinite(u) & (u >= -_BEYOND) & (u <= 1.0 + _BEYOND)
    u, v = u[on, None], v[on, None]
    points = p00[on] + u * e1[on] + v * e2[on] + u * v * e3[on]
    fractions: Array = (points - start) @ along / size**2
    return fractions


def _owners(points: Array, corners: Array) -> tuple[Array, list[tuple[int, int]]]:
    """Return the first cell that holds each point (-1: none), and every further claim."""
    owners = np.full(len(points), -1)
    also: list[tuple[int, int]] = []
    low, high = corners.min(axis=1), corners.max(axis=1)
    hair = _HAIR * float((high - low).max())
    for sign in _SIGNS:
        open_points = np.flatnonzero(owners < 0)
        if not open_points.size:
            break
        moved = points[open_points] + hair * sign
        boxed = np.all((moved[:, None] >= low) & (moved[:, None] <= high), axis=2)
        which, cell = np.nonzero(boxed)
        inside = _inside(moved[which], corners[cell])
        for n, c in zip(open_points[which[inside]], cell[inside], strict=True):
            if owners[n] < 0:
                owners[n] = c
            else:
                also.append((int(n), int(c)))
    return owners, also


def _inside(points: Array, corners: Array) -> Array:
    """Return which points lie in their cell: Newton's method on the trilinear map."""
    at = np.full((len(points), 3), 0.5)
    if not len(points):
        return np.zeros(0, dtype=bool)
    size = np.ptp(corners, axis=1).max(axis=1)
    for _ in range(_NEWTON_STEPS):
        miss = points - np.einsum("nc,nca->na", shape_weights(at), corners)
        if np.all(np.abs(miss).max(axis=1) < 1e-14 * size):
            break
        jacobian = np.einsum("nca,ncb->nab", corners, shape_derivatives(at))
        at = np.clip(at + _solved(jacobian, miss), -1.0, 2.0)
    miss = points - np.einsum("nc,nca->na", shape_weights(at), corners)
    inside: Array = np.all((at >= 0.0) & (at <= 1.0), axis=1) & (
        np.abs(miss).max(axis=1) < 1e-10 * size
    )
    return inside


def _solved(matrices: Array, rights: Array) -> Array:
    """Solve many 3 x 3 systems by the adjugate; a singular one takes no step."""
    a, b, c = matrices[..., 0], matrices[..., 1], matrices[..., 2]
    bc, ca, ab = np.cross(b, c), np.cross(c, a), np.cross(a, b)
    determinant = np.sum(a * bc, axis=1)
    safe = np.where(determinant == 0.0, np.inf, determinant)
    steps = np.stack([np.sum(x * rights, axis=1) for x in (bc, ca, ab)], axis=1)
    return steps / safe[:, np.newaxis]
