"""The well index of one block, and the productivity index that follows from it."""

from __future__ import annotations

import math
from typing import Any, Literal

from wellindex.errors import DomainError
from wellindex.radius.closed_form import centred_radius, placed_radius
from wellindex.units import kinds
from wellindex.units.boundary import quantities
from wellindex.units.checks import Checks
from wellindex.units.elementwise import least, log, sqrt, where

Direction = Literal["x", "y", "z"]
Placement = Literal["centre", "corner", "west", "east", "south", "north", "top", "bottom"]
Invalid = Literal["raise", "nan"]
Against = Literal["block", "boundary", "average"]

TWO_PI = 2.0 * math.pi
SMALLEST_LOGARITHM = 0.5
DOUBTFUL_LOGARITHM = 1.0
DOUBTFUL_SUM = 0.5

_SIDES = {"west": "x", "east": "x", "south": "y", "north": "y", "top": "z", "bottom": "z"}
_PLANES = {"x": ("y", "z"), "y": ("x", "z"), "z": ("x", "y")}

_TOO_SMALL = (
    "ln(r0/rw) is below 0.5: the block is too small for any well index; use larger blocks, or "
    "take the block's pressure as the well's"
)
_SMALL = (
    "ln(r0/rw) is below 1: the block is hardly wider than the wellbore and the index depends on "
    "the grid; use larger blocks"
)
_STIMULATED = (
    "ln(r0/rw) + skin is zero or negative: the stimulated radius passes the equivalent radius of "
    "the block; use larger blocks, or spread the stimulation over the blocks it reaches"
)
_BARELY = (
    "ln(r0/rw) + skin is below 0.5: a small change of skin changes the index greatly; use larger "
    "blocks, or spread the stimulation over the blocks it reaches"
)


def side_axis(direction: str, placement: str) -> int | None:
    """Return which of the two axes normal to the well a side is normal to (None: no side)."""
    if placement in ("centre", "corner"):
        return None
    axis = _SIDES[placement]
    if axis == direction:
        raise DomainError(
            f"placement {placement!r} is a side that a well along {direction} crosses; a side "
            f"along the well is needed: {', '.join(s for s, a in _SIDES.items() if a != direction)}"
        )
    return _PLANES[direction].index(axis)


def flow_resistance(check: Checks, r0: Any, rw: Any, skin: Any, k_normal: Any) -> Any:
    """Return ln(r0/rw) + skin; refuse and caution as the docs of `well_index` say.

    Tight rock is not judged: its index is zero whatever its radius.
    """
    logarithm = log(r0 / rw)
    total = logarithm + skin
    if total.__class__ is float:
        if logarithm >= DOUBTFUL_LOGARITHM and total >= DOUBTFUL_SUM:
            return total
    elif least(logarithm) >= DOUBTFUL_LOGARITHM and least(total) >= DOUBTFUL_SUM:
        return total
    flows = k_normal > 0.0
    check.refuse(flows & (logarithm < SMALLEST_LOGARITHM), _TOO_SMALL, logarithm)
    check.refuse(flows & (total <= 0.0), _STIMULATED, total)
    check.caution(
        flows & (logarithm < DOUBTFUL_LOGARITHM) & (logarithm >= SMALLEST_LOGARITHM),
        _SMALL,
        logarithm,
    )
    check.caution(flows & (total < DOUBTFUL_SUM) & (total > 0.0), _BARELY, total)
    return where(flows, total, 1.0)


def geometric_index(k_normal: Any, length: Any, sector: Any, resistance: Any) -> Any:
    """Return 2 pi sector k L / (ln(r0/rw) + skin): the one identity behind every well index."""
    return TWO_PI * sector * k_normal * length / resistance


@quantities
def well_index(
    check: Checks,
    *,
    dx: kinds.Length,
    dy: kinds.Length,
    dz: kinds.Length,
    kx: kinds.Permeability,
    ky: kinds.Permeability,
    kz: kinds.Permeability,
    rw: kinds.Length,
    skin: kinds.Skin = 0.0,
    direction: Direction = "z",
    length: kinds.Length | None = None,
    placement: Placement = "centre",
    equivalent_radius: kinds.Length | None = None,
    sector: kinds.Sector = 1.0,
    invalid: Invalid = "raise",
) -> kinds.WellIndex:
    r"""Well index of a block: reservoir rate per drawdown at unit mobility.

    .. math:: WI = \frac{2\pi\,\mathrm{sector}\,\sqrt{k_1 k_2}\,L}{\ln(r_0/r_w) + \mathrm{skin}},
              \qquad q_\mathrm{reservoir} = WI\,\frac{k_r}{\mu}\,(p_\mathrm{block} - p_{wf})

    It contains 2 pi and the skin; it contains neither viscosity, relative permeability nor
    formation volume factor. ``.to("cP*rb/day/psi")`` or ``.to("mD*ft")`` only change its unit.

    Parameters
    ----------
    dx, dy, dz : Quantity or str, length, any shape
        Size of the block; positive.
    kx, ky, kz : Quantity or str, permeability, any shape
        Permeability along the axes of the grid; zero is tight rock and gives an index of zero.
    rw : Quantity or str, length, any shape
        Wellbore radius; positive.
    skin : float or array
        Local skin of the block's open length (damage, perforations, gravel pack). Partial opening
        and slant do not belong here.
    direction : {"x", "y", "z"}
        Axis along which the well runs.
    length : Quantity or str, length, any shape, optional
        Open length in the block; default the block's size along the well.
    placement : {"centre", "corner", "west", "east", "south", "north", "top", "bottom"}
        Where in its block the well stands: its centre, ON a no-flow side, or where two no-flow
        sides meet. It sets the equivalent radius and the sector together.
    equivalent_radius : Quantity or str, length, any shape, optional
        Equivalent radius of your own instead of the closed form, to be used with the true rw.
    sector : float or array
        Fraction of the full circle that flows, above 0 and at most 1; only together with
        `equivalent_radius`, because each sector has its own.
    invalid : {"raise", "nan"}
        What one unusable element of an array does: raise, naming its index, or become NaN with
        one warning that counts all of them and says why.

    Returns
    -------
    Quantity, length**3
        Metric cP m3/day/bar, oilfield cP rb/day/psi, si m3, darcy cP cm3/s/atm.

    Raises
    ------
    UnitsError
        A missing or wrong unit.
    DomainError
        A length or radius that is not positive, a negative permeability, ln(r0/rw) below 0.5,
        ln(r0/rw) + skin not positive, a side that the well crosses, or a sector without its
        equivalent radius.
    ShapeError
        Shapes that do not broadcast.

    Warns
    -----
    AssumptionWarning
        ln(r0/rw) below 1, or ln(r0/rw) + skin below 0.5.

    Notes
    -----
    Valid under the assumptions of `equivalent_radius`: equal blocks around the well's own, no
    other well or boundary within a few blocks (but for `placement`), the five-point scheme,
    permeability along the grid's axes. A screening value: measured productivity overrules it.

    References
    ----------
    .. [1] D. W. Peaceman, "Interpretation of Well-Block Pressures in Numerical Reservoir
       Simulation", SPE Journal 18(3), 183-194 (1978), eq. 20 (from memory of the source);
       doi:10.2118/6893-PA.
    .. [2] D. W. Peaceman, SPE Journal 23(3), 531-543 (1983), eqs. 14 and 16 (from memory
       of the source); doi:10.2118/10528-PA.

    Examples
    --------
    >>> from wellindex import well_index
    >>> wi = well_index(dx="150 ft", dy="150 ft", dz="20 ft", kx="120 mD", ky="120 mD",
    ...                 kz="12 mD", rw="0.354 ft", skin=2)
    >>> print(f"{wi.to('cP*rb/day/psi'):.3f}")
    2.642 cP*rb/day/psi
    """
    if direction == "z":
        d1, d2, d3, k1, k2 = dx, dy, dz, kx, ky
    elif direction == "x":
        d1, d2, d3, k1, k2 = dy, dz, dx, ky, kz
    else:
        d1, d2, d3, k1, k2 = dx, dz, dy, kx, kz
    root_k1, root_k2 = sqrt(k1), sqrt(k2)
    if equivalent_radius is not None:
        if placement != "centre":
            raise DomainError(
                "well_index(): give either placement or an equivalent radius with its sector"
            )
        r0 = equivalent_radius
    elif sector.__class__ is not float or sector != 1.0:
        raise DomainError(
            "well_index(): a sector has an equivalent radius of its own; give both, or say where "
            "the well stands with placement="
        )
    elif placement == "centre":
        r0 = centred_radius(d1, d2, root_k1, root_k2)
    else:
        axis = side_axis(direction, placement)
        r0, sector = placed_radius(d1, d2, root_k1, root_k2, placement, axis)
    k_normal = root_k1 * root_k2
    resistance = flow_resistance(check, r0, rw, skin, k_normal)
    return geometric_index(k_normal, d3 if length is None else length, sector, resistance)


@quantities
def productivity_index(
    check: Checks,
    *,
    against: Against,
    viscosity: kinds.Viscosity,
    formation_volume_factor: kinds.LiquidVolumeFactor,
    relative_permeability: kinds.Fraction = 1.0,
    wi: kinds.WellIndex | None = None,
    k: kinds.Permeability | None = None,
    h: kinds.Length | None = None,
    re: kinds.Length | None = None,
    rw: kinds.Length | None = None,
    skin: kinds.Skin = 0.0,
) -> kinds.ProductivityIndex:
    r"""Surface rate per drawdown, against a pressure that is always named.

    .. math::

        J = \frac{k_r}{\mu B}
            \begin{cases}
            WI & \text{against "block"} \\
            2\pi k h / (\ln(r_e/r_w) + \mathrm{skin}) & \text{against "boundary"} \\
            2\pi k h / (\ln(r_e/r_w) - 3/4 + \mathrm{skin}) & \text{against "average"}
            \end{cases}

    Parameters
    ----------
    against : {"block", "boundary", "average"}
        The pressure that the drawdown counts from: the block's, the constant pressure at the
        outer boundary (steady state), or the average of a closed circle (pseudo-steady state).
    viscosity : Quantity or str
        Of the flowing fluid at reservoir conditions; positive.
    formation_volume_factor : Quantity, str or float
        rm3/sm3, rb/stb, or a plain number between 0.5 and 10 for a liquid.
    relative_permeability : float or array
        Of the flowing fluid, between 0 and 1.
    wi : Quantity, well index, any shape
        Against "block": the index of the coupling; nothing else of the geometry.
    k, h, re, rw : Quantity or str, any shape
        Against "boundary" or "average": permeability, thickness, outer (drainage) radius and
        wellbore radius.
    skin : float or array
        Against "boundary" or "average": the skin of the whole well.

    Returns
    -------
    Quantity, surface volume/time/pressure
        Metric sm3/day/bar, oilfield stb/day/psi, si sm3/s/Pa, darcy scm3/s/atm.

    Raises
    ------
    UnitsError
        A missing or wrong unit.
    DomainError
        Geometry that does not belong to `against`, `re` not beyond `rw`, or a flow resistance
        that is not positive.

    References
    ----------
    .. [1] L. P. Dake, "Fundamentals of Reservoir Engineering", Elsevier (1978), table 6.1
       (from memory of the source).
    .. [2] J. Lee, "Well Testing", SPE Textbook Series 1 (1982), eq. 1.19 (from memory of the
       source).

    Examples
    --------
    >>> from wellindex import productivity_index, unit_system
    >>> with unit_system("oilfield"):
    ...     J = productivity_index(against="average", k="8.2 mD", h="53 ft", re="2980 ft",
    ...                            rw="0.328 ft", viscosity="1.7 cP",
    ...                            formation_volume_factor="1.1 rb/stb")
    >>> print(f"{J:.4f}")
    0.1968 stb/day/psi
    """
    mobility = relative_permeability / (viscosity * formation_volume_factor)
    radial = {"k": k, "h": h, "re": re, "rw": rw}
    if against == "block":
        (index,) = _needed("block", {"wi": wi}, radial)
        return index * mobility
    k, h, outer, inner = _needed(against, radial, {"wi": wi})
    check.refuse(outer <= inner, "the outer radius must be larger than the wellbore radius", outer)
    resistance = log(outer / inner) + skin - (0.75 if against == "average" else 0.0)
    check.refuse(resistance <= 0.0, "ln(re/rw) and skin leave no flow resistance", resistance)
    return geometric_index(k, h, 1.0, resistance) * mobility


def _needed(against: str, needed: dict[str, Any], unwanted: dict[str, Any]) -> list[Any]:
    """Return what the chosen pressure needs; refuse what is missing or does not belong."""
    missing = [name for name, value in needed.items() if value is None]
    given = [name for name, value in unwanted.items() if value is not None]
    if missing or given:
        parts = [f"needs {', '.join(missing)}"] if missing else []
        parts += [f"takes no {', '.join(given)}"] if given else []
        raise DomainError(f"productivity_index(): against={against!r} {' and '.join(parts)}")
    return list(needed.values())
