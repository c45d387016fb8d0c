"""The index of a block that a well crosses in any direction, from the axes' closed forms."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from wellindex.errors import DomainError
from wellindex.index import Placement, flow_resistance, side_axis
from wellindex.radius.closed_form import centred_radius, placed_radius
from wellindex.space.grid import AXES
from wellindex.units.checks import Checks

Array = np.ndarray[Any, Any]

#: The two axes normal to x, y and z.
PLANES = ((1, 2), (0, 2), (0, 1))
#: A component below this part of the length is rounding: the well runs along an axis.
_STRAIGHT = 1e-9


class Crossed(NamedTuple):
    """How a well crosses its blocks, in SI: lengths along the axes (n, 3), sizes and k (3, n)."""

    components: Array
    sizes: Array
    k: Array
    placement: Placement

    @property
    def dominant(self) -> Array:
        """The axis with the largest component, (n,)."""
        dominant: Array = np.argmax(self.components, axis=1)
        return dominant

    @property
    def aligned(self) -> Array:
        """Whether the well runs along one axis, (n,)."""
        largest = self.components.max(axis=1)
        aligned: Array = self.components.sum(axis=1) - largest <= _STRAIGHT * largest
        return aligned

    def across(self, axis: int) -> Array:
        """Return the permeability across a well along one axis, (n,)."""
        first, second = PLANES[axis]
        across: Array = np.sqrt(self.k[first]) * np.sqrt(self.k[second])
        return across

    def radius(self, axis: int) -> Array:
        """Return Peaceman's radius for a well along one axis in the block's centre, (n,)."""
        first, second = PLANES[axis]
        roots = np.sqrt(self.k[first]), np.sqrt(self.k[second])
        radius: Array = centred_radius(self.sizes[first], self.sizes[second], *roots)
        return radius


class Found(NamedTuple):
    """What a method finds of each block, in SI, (n,)."""

    k_normal: Array
    r0: Array
    sector: Array


def along_axis(crossed: Crossed) -> Found:
    """Peaceman's formula (1983) in the plane normal to each row's dominant axis."""
    count = len(crossed.components)
    k_normal, r0, sector = np.empty(count), np.empty(count), np.empty(count)
    for axis, name in enumerate(AXES):
        rows = crossed.dominant == axis
        if not np.any(rows):
            continue
        first, second = PLANES[axis]
        placed = placed_radius(
            crossed.sizes[first][rows],
            crossed.sizes[second][rows],
            np.sqrt(crossed.k[first][rows]),
            np.sqrt(crossed.k[second][rows]),
            crossed.placement,
            side_axis(name, crossed.placement),
        )
        k_normal[rows], r0[rows], sector[rows] = crossed.across(axis)[rows], *placed
    return Found(k_normal, r0, sector)


def projected(check: Checks, crossed: Crossed, length: Array, rw: Array) -> Found:
    """Add the indices of the three axes as vectors, at zero skin (Shu 2005).

    The radius reported is the one that gives this index in the identity of every row, so that a
    skin can be put in later. A well along an axis has that axis's own radius.
    """
    if crossed.placement != "centre":
        if not np.all(crossed.aligned):
            raise DomainError(
                f"couple(): placement {crossed.placement!r} is for a well along one axis of the "
                "grid; this one is oblique"
            )
        return along_axis(crossed)
    squares = np.zeros(len(length))
    effective = np.zeros(len(length))
    for axis in range(3):
        part = crossed.components[:, axis]
        flow = np.where(crossed.aligned, 0.0, crossed.across(axis) * part)
        resistance = flow_resistance(check, crossed.radius(axis), rw, 0.0, flow)
        squares += (flow / resistance) ** 2
        effective += flow**2
    extent = np.linalg.norm(crossed.components, axis=1)
    k_normal = np.sqrt(effective) / extent
    straight = along_axis(crossed)
    flows = squares > 0.0
    logarithm = k_normal * length / np.sqrt(np.where(flows, squares, 1.0))
    r0 = np.where(crossed.aligned | ~flows, straight.r0, rw * np.exp(logarithm))
    return Found(np.where(crossed.aligned, straight.k_normal, k_normal), r0, np.ones(len(length)))
