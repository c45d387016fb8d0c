"""Small formulas of every kind, for the tests of the boundary: most return what they are given."""

from typing import Any, Literal

from wellindex.units import kinds
from wellindex.units.boundary import quantities, reads
from wellindex.units.checks import Checks

LONGEST = 100.0


@quantities
def length(check: Checks, *, d: kinds.Length) -> kinds.Length:
    """A length."""
    return d


@quantities
def between(
    check: Checks, *, a: kinds.Length, b: kinds.Length, share: kinds.Fraction = 0.5
) -> kinds.Length:
    """The length at a share of the way from a to b."""
    return a + share * (b - a)


@quantities
def position(check: Checks, *, at: kinds.Coordinate = (0.0, 0.0, 0.0)) -> kinds.Coordinate:
    """A position."""
    return at


@quantities
def permeability(check: Checks, *, k: kinds.Permeability) -> kinds.Permeability:
    """A permeability."""
    return k


@quantities
def viscosity(check: Checks, *, mu: kinds.Viscosity) -> kinds.Viscosity:
    """A viscosity."""
    return mu


@quantities
def pressure(check: Checks, *, p: kinds.Pressure) -> kinds.Pressure:
    """An absolute pressure."""
    return p


@quantities
def difference(check: Checks, *, dp: kinds.PressureDifference) -> kinds.PressureDifference:
    """A pressure difference."""
    return dp


@quantities
def temperature(check: Checks, *, t: kinds.Temperature) -> kinds.Temperature:
    """A temperature."""
    return t


@quantities
def duration(check: Checks, *, t: kinds.Time) -> kinds.Time:
    """A time."""
    return t


@quantities
def rate(check: Checks, *, q: kinds.ReservoirRate) -> kinds.ReservoirRate:
    """A reservoir rate."""
    return q


@quantities
def surface_rate(
    check: Checks, *, q: kinds.ReservoirRate, factor: kinds.LiquidVolumeFactor = 1.0
) -> kinds.SurfaceRate:
    """The surface rate of a reservoir rate."""
    return q / factor


@quantities
def gas_factor(check: Checks, *, factor: kinds.VolumeFactor) -> kinds.VolumeFactor:
    """A gas volume factor."""
    return factor


@quantities
def compressibility(check: Checks, *, c: kinds.Compressibility) -> kinds.Compressibility:
    """A compressibility."""
    return c


@quantities
def plain(check: Checks, *, skin: kinds.Skin, rw: kinds.Length = 0.1) -> kinds.Skin:
    """A plain number, and a length that does not matter."""
    return skin


@quantities
def short(
    check: Checks,
    *,
    d: kinds.Length,
    skin: kinds.Skin = 0.0,
    invalid: Literal["raise", "nan"] = "raise",
) -> kinds.Length:
    """A length up to 100 m, doubtful from 50 m."""
    check.refuse(d > LONGEST, "d is too long", d)
    check.caution((d > 0.5 * LONGEST) & (d <= LONGEST), "d is doubtful", d)
    return d + skin


@reads
def sums(a: kinds.Length, b: kinds.Length = 1.0, *, name: str = "") -> Any:
    """Lengths in SI, by position or name."""
    return a + b, name


@reads
def lengths(
    *, a: kinds.Length, b: kinds.Skin = 0.0, invalid: Literal["raise", "nan"] = "raise"
) -> Any:
    """Lengths and numbers in SI, bad elements NaN on demand."""
    return a, b


class Holder:
    """A constructor, and a method, that take quantities."""

    @reads
    def __init__(self, d: kinds.Length, *, mode: Literal["one", "two"] = "one") -> None:
        self.d = d
        self.mode = mode

    @reads
    def rate(self, *, q: kinds.Rate | None = None) -> Any:
        """A reservoir or surface rate."""
        return q
