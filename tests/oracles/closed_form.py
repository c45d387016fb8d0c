"""Closed forms of the radial well problem at 50 digits, each as its source prints it.

A second route for every number the library computes: plain SI floats in, ``mpmath.mpf`` out,
nothing shared with the library and nothing rearranged for speed. Where a permeability is zero the
limit is taken numerically, by evaluating the printed formula at a ratio of 1e-400.

Axis 1 and axis 2 are the two axes of the plane normal to the well: (y, z) for a well along x,
(x, z) along y, (x, y) along z.
"""

from collections.abc import Callable, Mapping
from fractions import Fraction
from functools import wraps
from math import prod
from typing import Any, Final, NamedTuple, ParamSpec, TypeVar

from mpmath import mp, mpf  # type: ignore[import-untyped]

P = ParamSpec("P")
R = TypeVar("R")

DIGITS: Final = 50
STANDARD_GRAVITY: Final = 9.80665
PLANE: Final = {"x": ("y", "z"), "y": ("x", "z"), "z": ("x", "y")}
SIDE_AXIS: Final = {
    "west": "x",
    "east": "x",
    "south": "y",
    "north": "y",
    "top": "z",
    "bottom": "z",
}


class Placed(NamedTuple):
    """Where a well stands in its block: the flowing fraction of the circle, and its radius."""

    sector: mpf
    r0: mpf


def _at_50_digits(function: Callable[P, R]) -> Callable[P, R]:
    @wraps(function)
    def at_50_digits(*args: P.args, **kwargs: P.kwargs) -> R:
        with mp.workdps(DIGITS):
            return function(*args, **kwargs)

    return at_50_digits


def _permeabilities(k1: float, k2: float) -> tuple[mpf, mpf]:
    if k1 < 0 or k2 < 0 or k1 == k2 == 0:
        raise ValueError("permeabilities are not negative and not both zero")
    least = mpf(max(k1, k2)) * mpf("1e-400")
    return max(mpf(k1), least), max(mpf(k2), least)


@_at_50_digits
def equivalent_radius(*, dx: float, dy: float, kx: float, ky: float) -> mpf:
    """Radius at which the steady pressure equals the well block's, isolated well, m.

    Peaceman, SPEJ, June 1983, 531-543: r0 = 0.28 [(ky/kx)**(1/2) dx**2 + (kx/ky)**(1/2) dy**2]
    **(1/2) / [(ky/kx)**(1/4) + (kx/ky)**(1/4)], with the exact exp(-gamma)/2 for the printed 0.28.
    """
    k1, k2 = _permeabilities(kx, ky)
    d1, d2 = mpf(dx), mpf(dy)
    numerator = ((k2 / k1) ** mpf("0.5") * d1**2 + (k1 / k2) ** mpf("0.5") * d2**2) ** mpf("0.5")
    denominator = (k2 / k1) ** mpf("0.25") + (k1 / k2) ** mpf("0.25")
    return mp.exp(-mp.euler) / 2 * numerator / denominator


@_at_50_digits
def equivalent_wellbore_radius(*, rw: float, k1: float, k2: float) -> mpf:
    """Radius of the circle equivalent to the stretched wellbore, m.

    rw/2 ((k2/k1)**(1/4) + (k1/k2)**(1/4)): half the sum of the ellipse's half-axes (Peaceman 1983).
    """
    a, b = _permeabilities(k1, k2)
    return mpf(rw) / 2 * ((b / a) ** mpf("0.25") + (a / b) ** mpf("0.25"))


@_at_50_digits
def stretched_radius(*, x: float, y: float, kx: float, ky: float) -> mpf:
    """Distance from the well in stretched coordinates, scaled so that it reads against rw, m.

    The stretch is x (ky/kx)**(1/4), y (kx/ky)**(1/4); the scale is rw over the equivalent
    wellbore radius, so that the steady pressure is linear in ln(radius/rw).
    """
    k1, k2 = _permeabilities(kx, ky)
    along, across = (k2 / k1) ** mpf("0.25"), (k1 / k2) ** mpf("0.25")
    return mp.hypot(mpf(x) * along, mpf(y) * across) * 2 / (along + across)


@_at_50_digits
def placed(*, d1: float, d2: float, k1: float, k2: float, closed: tuple[int, ...] = ()) -> Placed:
    """Sector and equivalent radius of a well on the closed sides normal to the axes in ``closed``.

    ``closed`` is (), (1,), (2,) or (1, 2); () is the centre of the block. With the stretched widths
    d1, d2: on a side normal to axis 1, r0 exp((d1/d2) atan(d2/d1)) and a half circle; on the corner
    of two, r0 exp(((d1/d2) atan(d2/d1) + (d2/d1) atan(d1/d2) + 1)/2) and a quarter. They follow
    from the five-point lattice's resistances; ``lattice`` derives them by quadrature.
    """
    centred = equivalent_radius(dx=d1, dy=d2, kx=k1, ky=k2)
    a, b = _permeabilities(k1, k2)
    ratio = mpf(d1) * (b / a) ** mpf("0.25") / (mpf(d2) * (a / b) ** mpf("0.25"))
    first, second = ratio * mp.atan(1 / ratio), mp.atan(ratio) / ratio
    exponents = {(): mpf(0), (1,): first, (2,): second, (1, 2): (first + second + 1) / 2}
    return Placed(mpf(1) / 2 ** len(closed), centred * mp.exp(exponents[closed]))


def _closed_axes(direction: str, placement: str) -> tuple[int, ...]:
    if placement == "centre":
        return ()
    if placement == "corner":
        return (1, 2)
    return (PLANE[direction].index(SIDE_AXIS[placement]) + 1,)


@_at_50_digits
def well_index(
    *,
    dx: float,
    dy: float,
    dz: float,
    kx: float,
    ky: float,
    kz: float,
    rw: float,
    skin: float = 0,
    direction: str = "z",
    length: float | None = None,
    placement: str = "centre",
    equivalent_radius: float | None = None,
    sector: float = 1,
) -> mpf:
    """2 pi sector (k1 k2)**(1/2) L / (ln(r0/rw) + skin), m3 (Peaceman 1983).

    ``placement`` is "centre", "corner" or the name of a closed side; ``sector`` counts only with an
    equivalent radius of the caller's. A well in rock of zero k1 or k2 has the index 0.
    """
    size = {"x": dx, "y": dy, "z": dz}
    permeability = {"x": kx, "y": ky, "z": kz}
    first, second = PLANE[direction]
    k1, k2 = permeability[first], permeability[second]
    if k1 * k2 == 0:
        return mpf(0)
    if equivalent_radius is None:
        found = placed(
            d1=size[first],
            d2=size[second],
            k1=k1,
            k2=k2,
            closed=_closed_axes(direction, placement),
        )
    else:
        found = Placed(mpf(sector), mpf(equivalent_radius))
    flow_length = mpf(size[direction] if length is None else length)
    resistance = mp.log(found.r0 / mpf(rw)) + mpf(skin)
    return 2 * mp.pi * found.sector * (mpf(k1) * mpf(k2)) ** mpf("0.5") * flow_length / resistance


@_at_50_digits
def block_productivity_index(
    *, wi: mpf | float, mu: float, formation_volume_factor: float, kr: float = 1
) -> mpf:
    """Surface rate per drawdown against the block pressure: wi kr / (mu B), sm3/(s Pa)."""
    return mpf(wi) * mpf(kr) / (mpf(mu) * mpf(formation_volume_factor))


@_at_50_digits
def radial_productivity_index(
    *,
    k: float,
    h: float,
    re: float,
    rw: float,
    mu: float,
    formation_volume_factor: float,
    skin: float = 0,
    regime: str = "steady",
    against: str = "outer_boundary",
) -> mpf:
    """2 pi k h / (mu B (ln(re/rw) - c + skin)) in a circle of radius re, sm3/(s Pa).

    c is 0 (steady, against the outer boundary), 1/2 (steady, average; pseudo-steady, outer
    boundary) or 3/4 (pseudo-steady, average): Dake 1978, chapter 6; re >> rw.
    """
    constant = {
        ("steady", "outer_boundary"): mpf(0),
        ("steady", "average"): mpf("0.5"),
        ("pseudo_steady", "outer_boundary"): mpf("0.5"),
        ("pseudo_steady", "average"): mpf("0.75"),
    }[regime, against]
    resistance = mp.log(mpf(re) / mpf(rw)) - constant + mpf(skin)
    return 2 * mp.pi * mpf(k) * mpf(h) / (mpf(mu) * mpf(formation_volume_factor) * resistance)


@_at_50_digits
def radial_pressure(
    *, r: mpf | float, pwf: float, p_block: float, r0: mpf | float, rw: float, skin: float = 0
) -> mpf:
    """Steady pressure at radius r between a well at pwf and its block at p_block, Pa.

    pwf + (p_block - pwf) (ln(r/rw) + skin)/(ln(r0/rw) + skin); at r = rw it is the pressure behind
    the skin, at r = r0 the block's. r is a ``stretched_radius`` where kx and ky differ.
    """
    share = (mp.log(mpf(r) / mpf(rw)) + mpf(skin)) / (mp.log(mpf(r0) / mpf(rw)) + mpf(skin))
    return mpf(pwf) + (mpf(p_block) - mpf(pwf)) * share


@_at_50_digits
def radial_pressure_at_rate(
    *,
    r: mpf | float,
    pwf: float,
    rate: float,
    k: float,
    h: float,
    mu: float,
    rw: float,
    skin: float = 0,
    sector: float = 1,
) -> mpf:
    """pwf + q mu (ln(r/rw) + skin)/(2 pi sector k h), q at reservoir conditions, Pa."""
    slope = mpf(rate) * mpf(mu) / (2 * mp.pi * mpf(sector) * mpf(k) * mpf(h))
    return mpf(pwf) + slope * (mp.log(mpf(r) / mpf(rw)) + mpf(skin))


@_at_50_digits
def permeability_from_conductivity(
    *, conductivity: float, mu: float, rho: float, g: float = STANDARD_GRAVITY
) -> mpf:
    """k = K mu/(rho g), m2 (Freeze & Cherry 1979, chapter 2)."""
    return mpf(conductivity) * mpf(mu) / (mpf(rho) * mpf(g))


_FOOT = Fraction("0.3048")
_GALLON = 231 * Fraction("0.0254") ** 3
_BARREL = 42 * _GALLON
_POUND = Fraction("0.45359237")
_PSI = _POUND * Fraction("9.80665") / Fraction("0.0254") ** 2
_DARCY = Fraction(1, 10**7 * 101325)
_EXACT: Final = {
    "dimensionless": Fraction(1),
    "m": Fraction(1),
    "cm": Fraction(1, 100),
    "ft": _FOOT,
    "acre": 43560 * _FOOT**2,
    "gallon": _GALLON,
    "rb": _BARREL,
    "stb": _BARREL,
    "sm3": Fraction(1),
    "s": Fraction(1),
    "min": Fraction(60),
    "hour": Fraction(3600),
    "day": Fraction(86400),
    "kg": Fraction(1),
    "lbm": _POUND,
    "lbf": _POUND * Fraction("9.80665"),
    "Pa": Fraction(1),
    "bar": Fraction(10**5),
    "atm": Fraction(101325),
    "psi": _PSI,
    "cP": Fraction(1, 1000),
    "darcy": _DARCY,
    "mD": _DARCY / 1000,
    "degR": Fraction(5, 9),
}


def in_si(text: str) -> Fraction:
    """Exact SI value of a quantity such as "141.2 mD*ft/cP", by the units' legal definitions.

    Numbers, the symbols of the tables, ``*``, ``/`` and whole powers, from left to right; darcy is
    1 cP cm3/s over 1 cm2 and 1 atm/cm, gallons and barrels are United States liquid measure.
    """
    head, _, tail = text.partition(" ")
    number, units = (Fraction(head), tail) if tail or head[0].isdigit() else (Fraction(1), head)
    above, *below = units.replace("**", "^").split("/")
    factors = [(factor, 1) for factor in above.split("*") if factor]
    for part in below:
        divisor, *rest = part.split("*")
        factors += [(divisor, -1), *((factor, 1) for factor in rest)]
    return number * prod((_factor(*each) for each in factors), start=Fraction(1))


def si(value: str | float) -> float:
    """SI value of a table's entry: text with a unit, or a plain number."""
    return float(in_si(value)) if isinstance(value, str) else float(value)


def arguments(inputs: Mapping[str, str | float], *names: str) -> dict[str, Any]:
    """Those of the names that a table's row has, as SI floats."""
    return {name: si(inputs[name]) for name in names if name in inputs}


def _factor(text: str, sign: int) -> Fraction:
    symbol, _, power = text.partition("^")
    return _EXACT[symbol] ** (sign * int(power or 1))
