"""Corners of hexahedral grids from the nodes of a lattice, and volumes by quadrature."""

from collections.abc import Callable, Sequence
from itertools import product
from typing import Any

import numpy as np

from tests.builders import metres
from wellindex import HexahedralGrid

Array = np.ndarray[Any, Any]
Move = Callable[[Array], Array]

#: Corner number = i + 2 j + 4 k: west before east, south before north, top before bottom.
OFFSETS = [(0, 0, 0), (1, 0, 0), (0, 1, 0), (1, 1, 0), (0, 0, 1), (1, 0, 1), (0, 1, 1), (1, 1, 1)]


def lattice(x: Sequence[float], y: Sequence[float], z: Sequence[float]) -> Array:
    """Nodes at all x, y, z, (nx + 1, ny + 1, nz + 1, 3)."""
    return np.stack(np.meshgrid(x, y, z, indexing="ij"), axis=-1).astype(float)


def corners_of(nodes: Array) -> Array:
    """Corners of the cells between nodes, (nx, ny, nz, 8, 3)."""
    counts = [n - 1 for n in nodes.shape[:3]]
    parts = [
        nodes[tuple(slice(s, s + n) for s, n in zip(shift, counts, strict=True))]
        for shift in OFFSETS
    ]
    return np.stack(parts, axis=3)


def grid_of(corners: Array, **others: Any) -> HexahedralGrid:
    """The grid of corners in m."""
    return HexahedralGrid(metres(corners), **others)


def cut(
    x: Sequence[float], y: Sequence[float], z: Sequence[float], **others: Any
) -> HexahedralGrid:
    """The hexahedra of a tensor grid with these faces."""
    return grid_of(corners_of(lattice(x, y, z)), **others)


def warped(shape: tuple[int, int, int], seed: int, strength: float = 0.2) -> Array:
    """Corners of cells of about 10 x 12 x 4 m whose shared nodes have moved at random."""
    spread = np.random.default_rng(seed)
    nodes = lattice(*(np.arange(n + 1.0) for n in shape))
    nodes += spread.uniform(-strength, strength, nodes.shape)
    return corners_of(nodes * np.array([10.0, 12.0, 4.0]))


def point_in(corners: Array, u: float, v: float, w: float) -> Array:
    """The point of a cell at parts u, v, w of its way east, north and down, as printed:
    the sum of the corners times (1 - u) or u, (1 - v) or v, (1 - w) or w."""
    weights = [
        (u if i else 1 - u) * (v if j else 1 - v) * (w if k else 1 - w) for i, j, k in OFFSETS
    ]
    return np.einsum("c,ca->a", np.array(weights), corners)


def volume_by_flux(corners: Array, points: int = 8) -> float:
    """Volume of a cell as the flux of r/3 out of its six bilinear faces (divergence theorem),
    by Gauss-Legendre quadrature."""
    nodes, weights = np.polynomial.legendre.leggauss(points)
    nodes, weights = 0.5 * (nodes + 1.0), 0.5 * weights
    total = 0.0
    for axis, side in product(range(3), (0, 1)):
        face = [corners[c] for c in range(8) if OFFSETS[c][axis] == side]
        outwards = (1.0 if side else -1.0) * (-1.0 if axis == 1 else 1.0)
        p00, p10, p01, p11 = face
        for (u, a), (v, b) in product(zip(nodes, weights, strict=True), repeat=2):
            place = (1 - u) * (1 - v) * p00 + u * (1 - v) * p10 + (1 - u) * v * p01 + u * v * p11
            along_u = (1 - v) * (p10 - p00) + v * (p11 - p01)
            along_v = (1 - u) * (p01 - p00) + u * (p11 - p10)
            total += outwards * a * b * float(place @ np.cross(along_u, along_v)) / 3.0
    return total
