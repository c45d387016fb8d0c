"""The index of an oblique well from those of the axes, at 50 digits, with wells in mind alone.

Shu, "Comparison of various techniques for computing well index", M.Sc. report, Stanford University
(2005), the projection method: the well is projected on the block's axes; each projection has
Peaceman's index of a well along that axis; the index is the square root of the sum of their
squares (from memory of the source).
"""

from collections.abc import Sequence
from typing import NamedTuple

from mpmath import mp, mpf  # type: ignore[import-untyped]

from tests.oracles.closed_form import DIGITS, equivalent_radius

#: The two axes normal to each: (y, z), (x, z), (x, y).
ACROSS = ((1, 2), (0, 2), (0, 1))


class Oblique(NamedTuple):
    """Index at zero skin, permeability across the well, radius in the identity; SI."""

    wi: mpf
    k_normal: mpf
    r0: mpf


def projected(
    parts: Sequence[float], sizes: Sequence[float], k: Sequence[float], rw: float, length: float
) -> Oblique:
    """Index of a well of ``length`` whose lengths along the axes are ``parts``."""
    with mp.workdps(DIGITS):
        squares, crossing = mpf(0), mpf(0)
        for axis, (a, b) in enumerate(ACROSS):
            if parts[axis] == 0 or k[a] == 0 or k[b] == 0:
                continue
            r0 = equivalent_radius(dx=sizes[a], dy=sizes[b], kx=k[a], ky=k[b])
            plane = mp.sqrt(mpf(k[a]) * mpf(k[b]))
            squares += (2 * mp.pi * plane * mpf(parts[axis]) / mp.log(r0 / mpf(rw))) ** 2
            crossing += mpf(k[a]) * mpf(k[b]) * mpf(parts[axis]) ** 2
        extent = mp.sqrt(mp.fsum(mpf(p) ** 2 for p in parts))
        if squares == 0:
            return Oblique(mpf(0), mpf(0), mpf(0))
        k_normal = mp.sqrt(crossing) / extent
        wi = mp.sqrt(squares)
        return Oblique(wi, k_normal, mpf(rw) * mp.exp(2 * mp.pi * k_normal * mpf(length) / wi))


def with_skin(oblique: Oblique, length: float, rw: float, skin: float) -> mpf:
    """Index when a skin is put in later: 2 pi k L / (ln(r0/rw) + skin)."""
    with mp.workdps(DIGITS):
        if oblique.wi == 0:
            return mpf(0)
        resistance = mp.log(oblique.r0 / mpf(rw)) + mpf(skin)
        return 2 * mp.pi * oblique.k_normal * mpf(length) / resistance
