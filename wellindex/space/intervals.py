"""Open intervals in measured depth: checked, in order, inside the path."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.space.path import Path
from wellindex.units import kinds
from wellindex.units.answers import as_quantity

Array = np.ndarray[Any, Any]


def open_intervals(path: Path, intervals: Any) -> Array:
    """Return intervals in SI, (n, 2): checked, in order, inside the path."""
    _points, depths = path.in_si()
    if intervals is None:
        return np.array([[depths[0], depths[-1]]])
    intervals = np.asarray(intervals)
    if intervals.ndim != 2 or intervals.shape[1] != 2:
        raise ShapeError(f"intervals are pairs (from, to) of measured depth; got {intervals.shape}")
    slack = 1e-9 * max(abs(depths[0]), abs(depths[-1]), 1.0)
    for number, (top, bottom) in enumerate(intervals):
        if not top < bottom:
            raise DomainError(f"interval {number} does not run forwards along the path")
        if top < depths[0] - slack or bottom > depths[-1] + slack:
            first, last = (as_quantity(kinds.COORDINATE, float(d)) for d in (depths[0], depths[-1]))
            raise DomainError(
                f"interval {number} leaves the path, which runs from {first} to {last} "
                "in measured depth"
            )
        if number and top < intervals[number - 1, 1] - slack:
            raise DomainError(
                f"interval {number} overlaps or precedes interval {number - 1}: list "
                "intervals in order along the path"
            )
    inside: Array = np.clip(intervals, depths[0], depths[-1])
    return inside
