"""A well's survey and its path by minimum curvature."""

from __future__ import annotations

import math
import os
from collections.abc import Iterable
from pathlib import Path as FilePath
from typing import Any, NamedTuple

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.space.path import Path
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.columns import read_columns
from wellindex.units.registry import Quantity

Array = np.ndarray[Any, Any]

#: Largest distance between the arc of a leg and the chords that follow it, in metres.
CHORD_TOLERANCE = 0.01
#: A dogleg this near to 180 degrees has no plane to turn in.
_NO_PLANE = 1e-6
#: A measured depth beyond the ends by this part of it is at the end, in other units.
_ROUNDING = 1e-12
_COLUMNS = {"measured_depth": "ft", "inclination": "degree", "azimuth": "degree"}


def _sine_ratio(part: Array, angle: Array) -> Array:
    """Return sin(part angle)/sin(angle), also where the angle vanishes."""
    ratio: Array = part * np.sinc(part * angle / np.pi) / np.sinc(angle / np.pi)
    return ratio


def _tangent_ratio(angle: Array) -> Array:
    """Return tan(angle/2)/(angle/2), also where the angle vanishes."""
    half = 0.5 * angle
    small = np.abs(half) < 1e-4
    ratio: Array = np.where(
        small, 1.0 + half * half / 3.0, np.tan(half) / np.where(small, 1.0, half)
    )
    return ratio


class _Leg(NamedTuple):
    """Arcs between stations, one row each; SI."""

    start: Array
    first: Array
    second: Array
    length: Array
    angle: Array

    def at(self, n: Array, part: Array) -> tuple[Array, Array]:
        """Return position and direction at a part of legs `n`."""
        angle = self.angle[n]
        towards = _sine_ratio(1.0 - part, angle)[..., None] * self.first[n]
        towards = towards + _sine_ratio(part, angle)[..., None] * self.second[n]
        towards = towards / np.linalg.norm(towards, axis=-1, keepdims=True)
        reach = 0.5 * part * self.length[n] * _tangent_ratio(part * angle)
        return self.start[n] + reach[..., None] * (self.first[n] + towards), towards


class Survey:
    """Stations along a well, joined by minimum curvature.

    Between two stations the well follows the circular arc that is tangent to both directions.

    Parameters
    ----------
    measured_depth : Quantity, length, (n,)
        Increasing; the first need not be zero. At least two stations.
    inclination : Quantity, angle, (n,)
        From the vertical, 0 to 180 degrees.
    azimuth : Quantity, angle, (n,)
        Clockwise from north.
    head : Quantity or tuple of three, length
        Position (x east, y north, z down) at the first station; default zero.
    azimuth_offset : Quantity or str, angle
        Added to every azimuth: the angle from grid north to the north of the survey (true or
        magnetic), clockwise; default zero.
    chord_tolerance : Quantity or str, length
        Largest distance between arc and chords in `path`; default 1 cm.

    Raises
    ------
    UnitsError, ShapeError
        A missing or wrong unit; rows of different length.
    DomainError
        Fewer than two stations, measured depth that does not increase (the station is named),
        inclination outside 0 to 180 degrees, a leg that turns straight back.

    References
    ----------
    .. [1] H. L. Taylor and C. M. Mason, "A Systematic Approach to Well Surveying Calculations",
       SPE Journal 12(6), 474-488 (1972); doi:10.2118/3362-PA (from memory of the source).
    .. [2] S. J. Sawaryn and J. L. Thorogood, "A Compendium of Directional Calculations Based on
       the Minimum Curvature Method", SPE Drilling & Completion 20(1), 24-36 (2005);
       doi:10.2118/84246-PA (from memory of the source).

    Examples
    --------
    >>> from wellindex import Survey
    >>> survey = Survey(["3500 ft", "3600 ft"], ["15 degree", "25 degree"],
    ...                 ["20 degree", "45 degree"])
    >>> print(f"{survey.position('3600 ft')[2].to('ft'):.2f}")
    94.01 ft
    """

    @reads
    def __init__(
        self,
        measured_depth: kinds.Coordinate,
        inclination: kinds.Inclination,
        azimuth: kinds.Angle,
        *,
        head: kinds.Coordinate = (0.0, 0.0, 0.0),
        azimuth_offset: kinds.Angle = 0.0,
        chord_tolerance: kinds.Length = CHORD_TOLERANCE,
    ) -> None:
        rows = {"measured_depth": measured_depth, "inclination": inclination, "azimuth": azimuth}
        shapes = {name: np.shape(row) for name, row in rows.items()}
        if len(set(shapes.values())) > 1 or len(shapes["azimuth"]) != 1:
            given = ", ".join(f"{name} {shape}" for name, shape in shapes.items())
            raise ShapeError(f"Survey(): one value per station is needed in each row; got {given}")
        if len(measured_depth) < 2:
            raise DomainError("Survey(): a survey has at least two stations")
        if np.shape(head) != (3,):
            raise ShapeError("Survey(): head is one point (x, y, z)")
        if np.ndim(azimuth_offset) or np.ndim(chord_tolerance):
            raise ShapeError("Survey(): azimuth_offset is one angle, chord_tolerance one length")
        steps = np.diff(measured_depth)
        wrong = np.flatnonzero(steps <= 0.0)
        if wrong.size:
            n = int(wrong[0])
            depths = as_quantity(kinds.COORDINATE, measured_depth[n : n + 2])
            raise DomainError(
                f"Survey(): measured depth must increase; stations {n} and {n + 1} have {depths}"
            )
        self._md = measured_depth
        self._inclination = inclination
        self._azimuth = azimuth + azimuth_offset
        self._tolerance = chord_tolerance
        self._directions = np.stack(
            (
                np.sin(inclination) * np.sin(self._azimuth),
                np.sin(inclination) * np.cos(self._azimuth),
                np.cos(inclination),
            ),
            axis=-1,
        )
        self._legs, self._points = self._follow(np.asarray(head, dtype=float), steps)

    def _follow(self, head: Array, steps: Array) -> tuple[_Leg, Array]:
        first, second = self._directions[:-1], self._directions[1:]
        sine = np.linalg.norm(np.cross(first, second), axis=1)
        angle = np.arctan2(sine, np.sum(first * second, axis=1))
        back = np.flatnonzero(angle > math.pi - _NO_PLANE)
        if back.size:
            n = int(back[0])
            raise DomainError(
                f"Survey(): the well turns straight back between stations {n}, {n + 1}"
            )
        reach = 0.5 * steps * _tangent_ratio(angle)
        moves = reach[:, np.newaxis] * (first + second)
        points = head + np.concatenate((np.zeros((1, 3)), np.cumsum(moves, axis=0)))
        return _Leg(points[:-1], first, second, steps, angle), points

    @classmethod
    def from_csv(cls, path: str | os.PathLike[str], **options: Any) -> Survey:
        """Read a survey from CSV whose header carries the units.

        Parameters
        ----------
        path : str or path
            A file with the columns measured_depth, inclination and azimuth, in any order, each
            header with its unit in brackets: ``measured_depth [ft], inclination [degree],
            azimuth [degree]``. Other columns are passed over.
        **options
            head, azimuth_offset and chord_tolerance of `Survey`.

        Returns
        -------
        Survey

        Raises
        ------
        UnitsError
            A column without its unit.
        DomainError
            A missing column, or a value that is no number; the row is named.

        Examples
        --------
        >>> import os, tempfile
        >>> from wellindex import Survey
        >>> text = "measured_depth [ft],inclination [degree],azimuth [degree]\\n0,0,0\\n90,3,45\\n"
        >>> with tempfile.TemporaryDirectory() as folder:
        ...     path = os.path.join(folder, "survey.csv")
        ...     with open(path, "w") as file:
        ...         _ = file.write(text)
        ...     Survey.from_csv(path)
        Survey(2 stations)
        """
        with open(path, encoding="utf-8-sig", newline="") as file:
            return cls.from_lines(file, FilePath(path).name, **options)

    @classmethod
    def from_lines(cls, lines: Iterable[str], name: str, **options: Any) -> Survey:
        """Read a survey from the lines of such a file; `name` is for messages."""
        return cls(**read_columns(lines, name, _COLUMNS), **options)

    @property
    def measured_depth(self) -> Quantity:
        """Measured depth of the stations, (n,)."""
        return as_quantity(kinds.COORDINATE, self._md)

    @property
    def points(self) -> Quantity:
        """Positions of the stations, (n, 3)."""
        return as_quantity(kinds.COORDINATE, self._points)

    @property
    def dogleg(self) -> Quantity:
        """Angle turned in each leg, (n - 1,)."""
        return as_quantity(kinds.ANGLE, self._legs.angle)

    @property
    def dogleg_severity(self) -> Quantity:
        """Angle turned per length in each leg, (n - 1,)."""
        return as_quantity(kinds.CURVATURE, self._legs.angle / self._legs.length)

    @property
    def path(self) -> Path:
        """The path as chords that stay within the chord tolerance of the arcs."""
        depths, points = [self._md[:1]], [self._points[:1]]
        for n, (count, length) in enumerate(zip(self.chords, self._legs.length, strict=True)):
            parts = np.arange(1, int(count) + 1) / count
            position, _direction = self._legs.at(np.full(len(parts), n), parts)
            depth = self._md[n] + parts * length
            position[-1], depth[-1] = self._points[n + 1], self._md[n + 1]
            points.append(position)
            depths.append(depth)
        return Path(
            as_quantity(kinds.COORDINATE, np.concatenate(points), "si"),
            measured_depth=as_quantity(kinds.COORDINATE, np.concatenate(depths), "si"),
        )

    @property
    def chords(self) -> Array:
        """How many chords `path` has in each leg, (n - 1,): sagitta = length angle / 8 n^2."""
        sagitta = self._legs.length * self._legs.angle / (8.0 * self._tolerance)
        counts: Array = np.maximum(np.ceil(np.sqrt(sagitta)), 1.0)
        return counts

    def position(self, measured_depth: Quantity | str) -> Quantity:
        """Return the position (x, y, z) at any measured depth.

        Parameters
        ----------
        measured_depth : Quantity or str, length, any shape
            Within the survey.

        Returns
        -------
        Quantity, length, (..., 3)

        Raises
        ------
        DomainError
            A measured depth outside the survey.

        Examples
        --------
        >>> from wellindex import Survey
        >>> survey = Survey(["0 m", "100 m"], ["0 degree", "0 degree"], ["0 degree", "0 degree"])
        >>> print(f"{survey.position('50 m'):.1f}")
        [0.0 0.0 50.0] m
        """
        return as_quantity(kinds.COORDINATE, self._at(measured_depth=measured_depth)[0])

    def direction(self, measured_depth: Quantity | str) -> Array:
        """Return the unit direction (east, north, down) at any measured depth.

        Parameters
        ----------
        measured_depth : Quantity or str, length, any shape
            Within the survey.

        Returns
        -------
        array, (..., 3)

        Raises
        ------
        DomainError
            A measured depth outside the survey.

        Examples
        --------
        >>> from wellindex import Survey
        >>> survey = Survey(["0 m", "100 m"], ["0 degree", "0 degree"], ["0 degree", "0 degree"])
        >>> survey.direction("50 m").tolist()
        [0.0, 0.0, 1.0]
        """
        return self._at(measured_depth=measured_depth)[1]

    @reads
    def _at(self, *, measured_depth: kinds.Coordinate) -> tuple[Array, Array]:
        first, last = self._md[0], self._md[-1]
        slack = _ROUNDING * max(abs(first), abs(last))
        if np.any((measured_depth < first - slack) | (measured_depth > last + slack)):
            ends = as_quantity(kinds.COORDINATE, self._md[[0, -1]])
            raise DomainError(f"Survey: a measured depth lies outside the survey, {ends}")
        depth = np.clip(measured_depth, first, last)
        n = np.clip(np.searchsorted(self._md, depth, side="right") - 1, 0, len(self._md) - 2)
        return self._legs.at(n, (depth - self._md[n]) / self._legs.length[n])

    def __repr__(self) -> str:
        return f"Survey({len(self._md)} stations)"
