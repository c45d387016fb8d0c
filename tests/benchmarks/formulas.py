"""The well index written the ways that people write it without this package."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

CONSTANT = 0.28072974178344257
SIDES = {"west": "x", "east": "x", "south": "y", "north": "y", "top": "z", "bottom": "z"}


def plain_pint(dx: Any, dy: Any, dz: Any, kx: Any, ky: Any, kz: Any, rw: Any, skin: Any) -> Any:
    """Peaceman's formula in pint arithmetic, as printed (1983, eq. 14)."""
    del kz
    numerator = ((ky / kx) ** 0.5 * dx**2 + (kx / ky) ** 0.5 * dy**2) ** 0.5
    r0 = CONSTANT * numerator / ((ky / kx) ** 0.25 + (kx / ky) ** 0.25)
    return 2 * math.pi * (kx * ky) ** 0.5 * dz / (np.log((r0 / rw).m_as("")) + skin)


def bare_numpy(dx: Any, dy: Any, dz: Any, kx: Any, ky: Any, kz: Any, rw: Any, skin: Any) -> Any:
    """Peaceman's formula on arrays without units, as printed (1983, eq. 14)."""
    del kz
    numerator = np.sqrt(np.sqrt(ky / kx) * dx**2 + np.sqrt(kx / ky) * dy**2)
    r0 = CONSTANT * numerator / ((ky / kx) ** 0.25 + (kx / ky) ** 0.25)
    return 2 * math.pi * np.sqrt(kx * ky) * dz / (np.log(r0 / rw) + skin)


def _length(value: float) -> bool:
    return value.__class__ is float and 0.0 < value < math.inf


def by_hand(
    *,
    dx: float,
    dy: float,
    dz: float,
    kx: float,
    ky: float,
    kz: float,
    rw: float,
    skin: float = 0.0,
    direction: str = "z",
    length: float | None = None,
    placement: str = "centre",
    equivalent_radius: float | None = None,
    sector: float = 1.0,
    invalid: str = "raise",
) -> float:
    """The same signature, checks and rules as ``well_index.si``, for floats only, by hand."""
    inf = math.inf
    if not (
        (dx.__class__ is float and 0.0 < dx < inf)
        and (dy.__class__ is float and 0.0 < dy < inf)
        and (dz.__class__ is float and 0.0 < dz < inf)
        and (kx.__class__ is float and 0.0 <= kx < inf)
        and (ky.__class__ is float and 0.0 <= ky < inf)
        and (kz.__class__ is float and 0.0 <= kz < inf)
        and (rw.__class__ is float and 0.0 < rw < inf)
        and (skin.__class__ is float and -inf < skin < inf)
        and direction in ("x", "y", "z")
        and (length is None or _length(length))
        and placement in ("centre", "corner", *SIDES)
        and (equivalent_radius is None or _length(equivalent_radius))
        and (sector.__class__ is float and 0.0 < sector <= 1.0)
        and invalid in ("raise", "nan")
    ):
        raise ValueError("an argument is out of range")
    if direction == "z":
        d1, d2, d3, k1, k2 = dx, dy, dz, kx, ky
    elif direction == "x":
        d1, d2, d3, k1, k2 = dy, dz, dx, ky, kz
    else:
        d1, d2, d3, k1, k2 = dx, dz, dy, kx, kz
    root1, root2 = math.sqrt(k1), math.sqrt(k2)
    both = root1 + root2
    if both == 0.0:
        return 0.0
    if equivalent_radius is None:
        if sector != 1.0:
            raise ValueError("a sector needs its equivalent radius")
        r0 = CONSTANT * math.sqrt((root2 * d1) ** 2 + (root1 * d2) ** 2) / both
        if placement != "centre":
            raise NotImplementedError("a side or a corner: not timed")
    elif placement != "centre":
        raise ValueError("a placement or a radius, not both")
    else:
        r0 = equivalent_radius
    logarithm = math.log(r0 / rw)
    total = logarithm + skin
    if logarithm < 1.0 or total < 0.5:
        raise ValueError("too small a block, or too negative a skin: not timed")
    along = d3 if length is None else length
    return 2 * math.pi * sector * root1 * root2 * along / total
