"""What a number in another code's printout is, and why two tables differ by a factor."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from itertools import product
from typing import Any, NamedTuple

import numpy as np

from wellindex.convention import Convention
from wellindex.couplings import Couplings
from wellindex.errors import DomainError, ShapeError, UnitsError
from wellindex.index import Direction, geometric_index
from wellindex.radius.closed_form import centred_radius
from wellindex.radius.crossed_block import PLANES
from wellindex.space.grid import AXES
from wellindex.units import kinds
from wellindex.units.boundary import reads
from wellindex.units.registry import Quantity, ureg

Array = np.ndarray[Any, Any]

#: Units in which a number of each content is commonly printed.
_UNITS = {
    "plain": ("cP*rb/day/psi", "cP*m**3/day/bar", "mD*ft", "mD*m", "m**3", "cP*m**3/day/kPa"),
    "viscosity": ("rb/day/psi", "m**3/day/bar", "m**3/s/Pa", "m**3/day/kPa"),
    "surface": ("stb/day/psi", "sm3/day/bar", "sm3/s/Pa", "sm3/day/kPa"),
    "mass": ("kg/s/bar", "kg/s/Pa", "kg/day/bar"),
    "head": ("m**2/day", "m**2/s", "ft**2/day"),
}
_FACTORS = {
    "2 pi": 2.0 * math.pi,
    "half a circle": 2.0,
    "a quarter of a circle": 4.0,
}
_UNIT_PAIRS = (
    ("m", "ft"),
    ("m**3", "rb"),
    ("bar", "psi"),
    ("bar", "kPa"),
    ("psi", "kPa"),
    ("bar", "atm"),
    ("D", "mD"),
    ("day", "hour"),
    ("mD*ft", "cP*rb/day/psi"),
    ("mD*m", "cP*m**3/day/bar"),
)


class Match(NamedTuple):
    """One reading of a number: what it contains, how it was made, and how near it comes.

    Examples
    --------
    >>> from wellindex import recognise
    >>> found = recognise("495.3", dx="100 ft", dy="100 ft", dz="20 ft", kx="100 mD",
    ...                   ky="100 mD", kz="10 mD", rw="0.35 ft")
    >>> abs(found[0].difference) < 1e-3
    True
    """

    convention: Convention
    words: str
    value: float
    difference: float


class _Recipe(NamedTuple):
    """How a well index may have been made: its words, its value in SI, how unusual it is."""

    words: str
    wi: float
    length: float
    unusual: int


def _radius_rules() -> dict[str, Callable[[float, float, float, float], float]]:
    return {
        "exact r0": lambda d1, d2, k1, k2: float(
            centred_radius(d1, d2, math.sqrt(k1), math.sqrt(k2))
        ),
        "r0 with 0.28": lambda d1, d2, k1, k2: (
            0.28 * math.sqrt(k2 * d1**2 + k1 * d2**2) / (math.sqrt(k1) + math.sqrt(k2))
        ),
        "r0 = 0.14 sqrt(d1^2 + d2^2)": lambda d1, d2, k1, k2: 0.14 * math.hypot(d1, d2),
        "r0 = 0.2 d": lambda d1, d2, k1, k2: 0.2 * math.sqrt(d1 * d2),
        "r0 = 0.198 d": lambda d1, d2, k1, k2: 0.198 * math.sqrt(d1 * d2),
        "r0 = 0.2079 d (Voronoi square)": lambda d1, d2, k1, k2: (
            math.exp(-math.pi / 2.0) * math.sqrt(d1 * d2)
        ),
    }


def _recipes(
    plane: tuple[float, float, float, float, float], rw: float, skin: float, length: float | None
) -> Iterator[_Recipe]:
    d1, d2, d3, k1, k2 = plane
    lengths = {"whole block": d3} if length is None else {"open length": length, "whole block": d3}
    skins = {"no skin": 0.0} if skin == 0.0 else {"with skin": skin, "without skin": 0.0}
    rules = _radius_rules()
    for (rule, radius), (l_words, size), (s_words, s) in product(
        rules.items(), lengths.items(), skins.items()
    ):
        resistance = math.log(radius(d1, d2, k1, k2) / rw) + s
        if resistance <= 0.0:
            continue
        wi = geometric_index(math.sqrt(k1 * k2), size, 1.0, resistance)
        unusual = list(rules).index(rule) + 2 * (l_words == "whole block" and length is not None)
        unusual += 2 * (s_words == "without skin")
        yield _Recipe(f"{rule}, {l_words}, {s_words}", wi, size, unusual)


def _conventions(data: dict[str, Any]) -> Iterator[Convention]:
    """Yield every content that the data allow, in common units, with and without 2 pi."""
    contents: list[tuple[str, dict[str, Any]]] = [("plain", {})]
    if "viscosity" in data:
        contents.append(("viscosity", {"viscosity": True}))
        if "formation_volume_factor" in data:
            contents.append(("surface", {"viscosity": True, "formation_volume_factor": True}))
        if "density" in data:
            contents.append(("mass", {"viscosity": True, "mass": True}))
            contents.append(("head", {"viscosity": True, "head": True}))
    for name, flags in contents:
        for unit, two_pi in product(_UNITS[name], (True, False)):
            yield Convention(unit, two_pi=two_pi, **flags)


def _constants(convention: Convention) -> Iterator[tuple[str, float, int]]:
    """Yield the Darcy constant of a unit, exact and as people round it, over the exact one."""
    yield "exact constant", 1.0, 0
    unit = convention.unit.replace("stb", "rb").replace("sm3", "m**3")
    if convention.mass or convention.head or not unit.endswith(("/psi", "/bar", "/kPa")):
        return
    length = "ft" if unit.endswith("psi") else "m"
    product_unit = f"mD*{length}/cP" if convention.viscosity else f"mD*{length}"
    exact = float(ureg.Quantity(1.0, product_unit).m_as(unit))
    for factor, digits in product((1.0, 2.0 * math.pi), (4, 3)):
        rounded = float(f"{exact * factor:.{digits - 1}e}")
        if convention.two_pi or factor == 1.0:
            yield f"constant {rounded:g}", rounded / (exact * factor), 5 - digits


def _printed(number: Any) -> tuple[float, float]:
    """Return a number and half a unit of its last printed digit."""
    text = number.strip() if isinstance(number, str) else repr(number)
    try:
        value = float(text)
    except ValueError:
        raise DomainError(f"recognise(): {number!r} is not a number as printed") from None
    if isinstance(number, bool) or not math.isfinite(value) or value <= 0.0:
        raise DomainError(f"recognise(): a well index is a positive number; got {number!r}")
    mantissa, _, exponent = text.lower().partition("e")
    digits = len(mantissa.partition(".")[2])
    return value, 0.5 * 10.0 ** (int(exponent or 0) - digits)


@reads
def recognise(
    number: str | float | int,
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
    viscosity: kinds.Viscosity | None = None,
    formation_volume_factor: kinds.LiquidVolumeFactor | None = None,
    density: kinds.Density | None = None,
) -> list[Match]:
    """Find out what a number in another code's printout contains.

    Every combination of content (2 pi, viscosity, volume factor, mass, head), unit, Darcy
    constant (exact or rounded), open length or whole block, rule for r0 and skin is tried that
    the data given allow.

    Parameters
    ----------
    number : str or float
        The number, as text with the digits printed ("12.34"), or a float.
    dx, dy, dz, kx, ky, kz, rw, skin, direction, length
        The block and the well, as for `well_index`.
    viscosity, formation_volume_factor, density : Quantity or str, optional
        What the number may contain besides.

    Returns
    -------
    list of Match
        The readings that reproduce the printed digits, the plainest first; empty where none does.

    Raises
    ------
    UnitsError, DomainError
        A missing or wrong unit; a number that is none, or not positive.

    Examples
    --------
    >>> from wellindex import recognise
    >>> found = recognise("495.3", dx="100 ft", dy="100 ft", dz="20 ft", kx="100 mD",
    ...                   ky="100 mD", kz="10 mD", rw="0.35 ft")
    >>> print(found[0].words.partition(", no 2 pi")[0])
    exact r0, whole block, no skin, exact constant
    >>> found[0].convention.unit, found[0].convention.two_pi
    ('mD*ft', False)
    """
    value, half = _printed(number)
    given = {
        "viscosity": viscosity,
        "formation_volume_factor": formation_volume_factor,
        "density": density,
    }
    data = {name: v for name, v in given.items() if v is not None}
    axis = AXES.index(direction)
    first, second = PLANES[axis]
    sizes, k = (dx, dy, dz), (kx, ky, kz)
    plane = sizes[first], sizes[second], sizes[axis], k[first], k[second]
    if min(plane[3], plane[4]) <= 0.0:
        raise DomainError("recognise(): the index of tight rock is zero in every convention")
    matches: list[tuple[int, Match]] = []
    conventions = list(_conventions(data))
    for recipe in _recipes(plane, rw, skin, length):
        for convention in conventions:
            base = recipe.wi * convention.per_index(data, recipe.length)
            for words, factor, unusual in _constants(convention):
                made = base * factor
                if abs(made - value) <= half * (1.0 + 1e-9):
                    text = f"{recipe.words}, {words}, {convention.words()}, {convention.unit}"
                    match = Match(convention, text, made, made / value - 1.0)
                    matches.append((recipe.unusual + unusual, match))
    matches.sort(key=lambda ranked: (ranked[0], abs(ranked[1].difference)))
    return [match for _rank, match in matches]


class Comparison(NamedTuple):
    """Two tables side by side: the ratio of each row, a common factor, its likely causes.

    Examples
    --------
    >>> from wellindex import compare, ureg
    >>> a, b = ureg.Quantity([2.0, 4.0], "m**3"), ureg.Quantity([1.0, 2.0], "m**3")
    >>> compare(a, b).causes
    ['half a circle']
    """

    ratio: Array
    common_factor: float | None
    causes: list[str]

    def __str__(self) -> str:
        rows = ", ".join(f"{ratio:.6g}" for ratio in self.ratio)
        if self.common_factor is None:
            return f"ratios {rows}: no common factor"
        causes = "; ".join(self.causes) or "no known cause"
        return f"common factor {self.common_factor:.6g}: {causes}"


def _indices(table: Any, name: str) -> Array:
    if isinstance(table, Couplings):
        return table.in_si().wi
    if isinstance(table, Quantity):
        if table.check("[length]**3"):
            return np.atleast_1d(np.asarray(table.m_as("m**3"), dtype=float))
        raise UnitsError(f"compare(): {name} is no well index: {table.units}")
    raise UnitsError(f"compare(): {name} is a Couplings or a quantity, not {type(table).__name__}")


def compare(
    a: Couplings | Quantity, b: Couplings | Quantity, *, within: float = 1e-3
) -> Comparison:
    """Compare two tables of indices row by row, and name what a common factor comes from.

    Parameters
    ----------
    a, b : Couplings or Quantity, (n,)
        The tables, in the same order.
    within : float
        Ratios that differ by less than this part are a common factor.

    Returns
    -------
    Comparison
        Ratios a/b (1 where both are zero), the common factor or None, and its likely causes.

    Raises
    ------
    ShapeError
        Tables of different length.
    UnitsError
        What is no table of indices.

    Examples
    --------
    >>> from wellindex import compare, ureg
    >>> a = ureg.Quantity([6.2832, 12.566], "mD*ft")
    >>> b = ureg.Quantity([1.0, 2.0], "mD*ft")
    >>> print(compare(a, b))
    common factor 6.2831: 2 pi
    """
    one, other = _indices(a, "a"), _indices(b, "b")
    if one.shape != other.shape:
        raise ShapeError(f"compare(): tables of {len(one)} and {len(other)} rows")
    both = (one == 0.0) & (other == 0.0)
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(both, 1.0, one / other)
    telling = ratio[~both]
    if not telling.size or not np.all(np.isfinite(telling)) or telling.min() <= 0.0:
        return Comparison(ratio, None, [])
    common = float(np.median(telling))
    if np.ptp(telling) > within * common:
        return Comparison(ratio, None, [])
    causes = ["the same"] if abs(common - 1.0) <= within else _causes(common, within)
    return Comparison(ratio, common, causes)


def _causes(factor: float, within: float) -> list[str]:
    """Return what a factor may come from: one known factor first, then two together."""
    known = dict(_FACTORS)
    for one, other in _UNIT_PAIRS:
        known[f"{one} for {other}"] = abs(float(ureg.Quantity(1.0, one).m_as(other)))
    signed = {}
    for words, value in known.items():
        signed[words] = value
        signed[f"1 over ({words})"] = 1.0 / value
    single = [w for w, v in signed.items() if abs(v / factor - 1.0) <= within]
    if single:
        return single
    names = list(signed)
    return [
        f"{one} and {other}"
        for n, one in enumerate(names)
        for other in names[n + 1 :]
        if abs(signed[one] * signed[other] / factor - 1.0) <= within
    ]
