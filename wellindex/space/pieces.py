"""Pieces of a straight leg in the cells of a grid."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

Array = np.ndarray[Any, Any]

#: Pieces shorter than this part of a leg are rounding.
SLIVER = 1e-12


class Pieces(NamedTuple):
    """Cells (n, 3) in order along a leg, fractions in and out, and who else claims a piece."""

    cell: Array
    into: Array
    out: Array
    also: list[tuple[float, float, tuple[int, ...]]]


def sorted_cuts(fractions: Array) -> Array:
    """Return the distinct fractions of a leg inside (0, 1), with 0 and 1, in order."""
    inside = fractions[(fractions > 0.0) & (fractions < 1.0)]
    cuts = np.unique(np.concatenate(([0.0, 1.0], inside)))
    cuts = cuts[np.concatenate(([True], np.diff(cuts) > SLIVER))]
    cuts[-1] = 1.0
    return cuts
