"""Survey calculations at 50 digits, each from its own geometry: nothing shared with the library.

A leg is (length, inclination, azimuth, inclination, azimuth), SI and radians. Directions and moves
are (north, east, down).
"""

from collections.abc import Sequence
from typing import Final

from mpmath import matrix, mp, mpf  # type: ignore[import-untyped]

DIGITS: Final = 50

Leg = Sequence[float]


def direction(inclination: float, azimuth: float) -> matrix:
    """Unit vector (north, east, down)."""
    i, a = mpf(inclination), mpf(azimuth)
    return matrix([mp.sin(i) * mp.cos(a), mp.sin(i) * mp.sin(a), mp.cos(i)])


def _dot(a: matrix, b: matrix) -> mpf:
    return mp.fsum(x * y for x, y in zip(a, b, strict=True))


def dogleg(leg: Leg) -> mpf:
    """Angle between the directions at both ends: 2 asin(half their distance)."""
    _length, *angles = leg
    with mp.workdps(DIGITS):
        apart = direction(*angles[2:]) - direction(*angles[:2])
        return 2 * mp.asin(mp.norm(apart) / 2)


def along_arc(leg: Leg, part: float) -> tuple[matrix, matrix]:
    """Position from the leg's start and direction at a part of its length.

    The direction turns evenly in the plane of both (slerp); the position is its integral,
    s = integral of t, in closed form. A leg of no dogleg is straight.
    """
    length, *angles = leg
    with mp.workdps(2 * DIGITS):
        first, second = direction(*angles[:2]), direction(*angles[2:])
        turn = 2 * mp.asin(mp.norm(second - first) / 2)
        p, size = mpf(part), mpf(length)
        if turn == 0:
            return size * p * first, first
        across = second - _dot(first, second) * first
        across = across / mp.norm(across)
        at = p * turn
        towards = mp.cos(at) * first + mp.sin(at) * across
        radius = size / turn
        return radius * (mp.sin(at) * first + (1 - mp.cos(at)) * across), towards


def minimum_curvature(leg: Leg) -> matrix:
    """Move over a leg along the circular arc (Taylor & Mason 1972)."""
    return along_arc(leg, 1)[0]


def radius_of_curvature(leg: Leg) -> matrix:
    """Move over a leg whose inclination and azimuth change evenly with depth and on a cylinder.

    As textbooks print it (Wilson 1968): down = L (sin i2 - sin i1)/(i2 - i1), and so on.
    """
    with mp.workdps(DIGITS):
        length, i1, a1, i2, a2 = map(mpf, leg)
        down = length * (mp.sin(i2) - mp.sin(i1)) / (i2 - i1)
        level = length * (mp.cos(i1) - mp.cos(i2)) / (i2 - i1)
        north = level * (mp.sin(a2) - mp.sin(a1)) / (a2 - a1)
        east = level * (mp.cos(a1) - mp.cos(a2)) / (a2 - a1)
        return matrix([north, east, down])


def angle_averaging(leg: Leg) -> matrix:
    """Move over a straight leg at the means of both inclinations and azimuths."""
    with mp.workdps(DIGITS):
        length, i1, a1, i2, a2 = map(mpf, leg)
        return length * direction((i1 + i2) / 2, (a1 + a2) / 2)


def tangential(leg: Leg) -> matrix:
    """Move over a straight leg at the angles of its lower end."""
    with mp.workdps(DIGITS):
        length, _i1, _a1, i2, a2 = map(mpf, leg)
        return length * direction(i2, a2)
