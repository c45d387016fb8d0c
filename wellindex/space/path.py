"""The path of a well in space."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.elementwise import frozen
from wellindex.units.registry import Quantity


class Path:
    """Straight legs from point to point along a well.

    Parameters
    ----------
    points : Quantity, length, (n, 3), or a list of points
        x east, y north, z down; at least two points, in order along the well. A point is a tuple
        of three quantities or texts.
    measured_depth : Quantity or str, length, scalar or (n,)
        Measured depth at the first point (default zero), the others following along the legs; or
        at every point, increasing, where the legs stand for arcs.

    Raises
    ------
    UnitsError, ShapeError
        A missing or wrong unit; points that are not (n, 3); more than one measured depth.
    DomainError
        Fewer than two points, or two points in a row that are the same.

    Examples
    --------
    >>> from wellindex import Path
    >>> path = Path([("500 ft", "500 ft", "8000 ft"), ("500 ft", "500 ft", "8120 ft")])
    >>> print(f"{path.length.to('ft'):.0f}")
    120 ft
    """

    @reads
    def __init__(self, points: kinds.Coordinate, *, measured_depth: kinds.Coordinate = 0.0) -> None:
        points = np.asarray(points)
        if points.ndim != 2 or points.shape[1] != 3:
            raise ShapeError(f"Path(): points have the shape (n, 3); got {points.shape}")
        if len(points) < 2:
            raise DomainError("Path(): a path has at least two points")
        legs = np.sqrt(np.sum(np.diff(points, axis=0) ** 2, axis=1))
        same = np.flatnonzero(legs == 0.0)
        if same.size:
            raise DomainError(f"Path(): points {same[0]} and {same[0] + 1} are the same")
        self._points = frozen(points)
        if np.ndim(measured_depth):
            self._md = frozen(self._given_depths(measured_depth))
        else:
            self._md = frozen(measured_depth + np.concatenate(([0.0], np.cumsum(legs))))

    def _given_depths(self, depths: np.ndarray[Any, Any]) -> np.ndarray[Any, Any]:
        if depths.shape != (len(self._points),):
            raise ShapeError(
                f"Path(): measured_depth is one value, or one per point ({len(self._points)}); "
                f"got {depths.shape}"
            )
        wrong = np.flatnonzero(np.diff(depths) <= 0.0)
        if wrong.size:
            raise DomainError(
                f"Path(): measured depth must increase; points {wrong[0]} and {wrong[0] + 1} do not"
            )
        return depths

    @property
    def points(self) -> Quantity:
        """The points, (n, 3)."""
        return as_quantity(kinds.COORDINATE, self._points)

    @property
    def measured_depth(self) -> Quantity:
        """Measured depth at each point, (n,)."""
        return as_quantity(kinds.COORDINATE, self._md)

    @property
    def length(self) -> Quantity:
        """Length of the path."""
        return as_quantity(kinds.LENGTH, float(self._md[-1] - self._md[0]))

    def in_si(self) -> tuple[np.ndarray[Any, Any], np.ndarray[Any, Any]]:
        """Return points (n, 3) and measured depths (n,) in SI."""
        return self._points, self._md

    def at(self, depths: np.ndarray[Any, Any]) -> np.ndarray[Any, Any]:
        """Return the points at measured depths (n,) in SI, (n, 3)."""
        return np.stack([np.interp(depths, self._md, x) for x in self._points.T], axis=1)

    def __repr__(self) -> str:
        return f"Path({len(self._points)} points, {self.length})"
