"""Equivalent radii in closed form: uniform blocks, an isolated well, the five-point scheme."""

from __future__ import annotations

from typing import Any, Literal, NamedTuple

from wellindex.units import kinds
from wellindex.units.boundary import quantities
from wellindex.units.checks import Checks
from wellindex.units.elementwise import arctan2, exp, least, sqrt, where

#: exp(-gamma)/2, gamma = 0.5772156649... (Euler); Peaceman (1983) prints 0.28.
HALF_EXP_MINUS_GAMMA = 0.28072974178344257

PlanePlacement = Literal["centre", "corner", "west", "east", "south", "north"]

_FIRST_AXIS = ("west", "east")


class Placed(NamedTuple):
    """An equivalent radius and the sector that belongs to it."""

    r0: Any
    sector: float


def centred_radius(d1: Any, d2: Any, root_k1: Any, root_k2: Any) -> Any:
    """Peaceman's radius (1983, eq. 14) from widths and roots of permeabilities, in SI.

    Written without quotients of permeabilities, so that it holds where one of them is zero; where
    both are, it is that of isotropic rock (the index is zero all the same).
    """
    both = root_k1 + root_k2
    if (both if both.__class__ is float else least(both)) == 0.0:
        tight = where(both == 0.0, 1.0, 0.0)
        root_k1, root_k2 = root_k1 + tight, root_k2 + tight
        both = root_k1 + root_k2
    across, along = root_k2 * d1, root_k1 * d2
    return HALF_EXP_MINUS_GAMMA * sqrt(across * across + along * along) / both


def _side_exponent(across: Any, along: Any) -> Any:
    """(across/along) atan(along/across), and its limit 1 for along -> 0."""
    narrow = along == 0.0
    return where(narrow, 1.0, across / where(narrow, 1.0, along) * arctan2(along, across))


def placed_radius(
    d1: Any, d2: Any, root_k1: Any, root_k2: Any, placement: str, axis: int | None
) -> Placed:
    """Return r0 and sector of a well in the centre, on a side normal to `axis`, or in a corner.

    The two factors follow from the resistances of the five-point lattice with its mirror images:
    the mean over an edge of the lattice's Fourier symbol has a closed form (an arctangent).
    """
    r0 = centred_radius(d1, d2, root_k1, root_k2)
    if placement == "centre":
        return Placed(r0, 1.0)
    s1, s2 = d1 * root_k2, d2 * root_k1
    if placement == "corner":
        both = _side_exponent(s1, s2) + _side_exponent(s2, s1) + 1.0
        return Placed(r0 * exp(0.5 * both), 0.25)
    across, along = (s1, s2) if axis == 0 else (s2, s1)
    return Placed(r0 * exp(_side_exponent(across, along)), 0.5)


def stretched_wellbore(rw: Any, k1: Any, k2: Any) -> Any:
    """Return the radius of the circle that stands for the stretched wellbore's ellipse, in SI."""
    ratio = sqrt(sqrt(k2 / k1))
    return 0.5 * rw * (ratio + 1.0 / ratio)


@quantities
def equivalent_radius(
    check: Checks,
    *,
    dx: kinds.Length,
    dy: kinds.Length,
    kx: kinds.Permeability,
    ky: kinds.Permeability,
    placement: PlanePlacement = "centre",
) -> kinds.Length:
    r"""Radius at which the steady pressure around a well equals the pressure of its block.

    .. math::

        r_0 = \frac{e^{-\gamma}}{2}
              \frac{\sqrt{\sqrt{k_y/k_x}\,\Delta x^2 + \sqrt{k_x/k_y}\,\Delta y^2}}
                   {(k_y/k_x)^{1/4} + (k_x/k_y)^{1/4}}

    Parameters
    ----------
    dx, dy : Quantity or str, length, any shape
        Widths of the block in the plane normal to the well; positive.
    kx, ky : Quantity or str, permeability, any shape
        Permeabilities along `dx` and `dy`; one of the two may be zero.
    placement : {"centre", "corner", "west", "east", "south", "north"}
        Where in its block the well stands. A side or a corner means ON a no-flow side, or where
        two meet; the radius then belongs to a sector of 1/2 or 1/4. West and east are the sides
        normal to `dx`, south and north those normal to `dy`.

    Returns
    -------
    Quantity, length
        The equivalent radius, to be used with the true wellbore radius: the stretching of
        anisotropic rock is in it.

    Raises
    ------
    UnitsError
        A length or permeability without its unit, or with a wrong one.
    DomainError
        A width that is not positive, a negative permeability, or both permeabilities zero.
    ShapeError
        Shapes that do not broadcast.

    Notes
    -----
    Valid for blocks of equal size around the block of the well, one isolated well, the
    five-point scheme and permeability along the axes of the grid. The exact constant
    exp(-gamma)/2 = 0.28073 is used; the printed 0.28 is 0.26 % lower. With d1, d2 the widths in
    stretched coordinates, a well on a side normal to axis 1 has
    r0 exp((d1/d2) atan(d2/d1)); in a corner
    r0 exp(((d1/d2) atan(d2/d1) + (d2/d1) atan(d1/d2) + 1)/2).

    References
    ----------
    .. [1] D. W. Peaceman, "Interpretation of Well-Block Pressures in Numerical Reservoir
       Simulation With Nonsquare Grid Blocks and Anisotropic Permeability", SPE Journal 23(3),
       531-543 (1983), eq. 14 (from memory of the source); doi:10.2118/10528-PA.

    Examples
    --------
    >>> from wellindex import equivalent_radius
    >>> r0 = equivalent_radius(dx="100 m", dy="100 m", kx="50 mD", ky="50 mD")
    >>> print(f"{r0:.4f}")
    19.8506 m
    >>> r0 = equivalent_radius(dx="100 m", dy="50 m", kx="90 mD", ky="10 mD", placement="corner")
    >>> print(f"{r0:.3f}")
    44.990 m
    """
    root_kx, root_ky = sqrt(kx), sqrt(ky)
    check.refuse(
        root_kx + root_ky == 0.0,
        "kx and ky are both zero: nothing flows to the well, so no radius exists",
    )
    axis = 0 if placement in _FIRST_AXIS else 1
    return placed_radius(dx, dy, root_kx, root_ky, placement, axis).r0


@quantities
def equivalent_wellbore_radius(
    check: Checks, *, rw: kinds.Length, kx: kinds.Permeability, ky: kinds.Permeability
) -> kinds.Length:
    r"""Radius of the circle that flows like the wellbore's ellipse in stretched coordinates.

    .. math:: \bar r_w = \frac{r_w}{2}\left[(k_y/k_x)^{1/4} + (k_x/k_y)^{1/4}\right]

    Parameters
    ----------
    rw : Quantity or str, length, any shape
        True radius of the wellbore; positive.
    kx, ky : Quantity or str, permeability, any shape
        Permeabilities along the two axes normal to the well; positive.

    Returns
    -------
    Quantity, length
        Radius in the coordinates x (ky/kx)**(1/4), y (kx/ky)**(1/4), in which the rock is
        isotropic. `equivalent_radius` already contains it: never use both.

    Raises
    ------
    UnitsError
        A missing or wrong unit.
    DomainError
        A radius or a permeability that is not positive.

    References
    ----------
    .. [1] D. W. Peaceman, SPE Journal 23(3), 531-543 (1983), eq. 18 (from memory of the
       source); doi:10.2118/10528-PA.

    Examples
    --------
    >>> from wellindex import equivalent_wellbore_radius
    >>> rw = equivalent_wellbore_radius(rw="0.1 m", kx="160 mD", ky="10 mD")
    >>> print(f"{rw:.4f}")
    0.1250 m
    """
    check.refuse(kx * ky == 0.0, "the ellipse has no radius where kx or ky is zero")
    return stretched_wellbore(rw, kx, ky)
