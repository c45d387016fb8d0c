"""Hypothesis strategies in physical ranges, plain SI floats."""

from dataclasses import dataclass
from math import e, log
from typing import Final

from hypothesis import strategies as st

# Peaceman's r0 (June 1983) is at least exp(-gamma)/sqrt(8) times the block's lesser width across
# the well, at any ratio of permeabilities; on a closed side or a corner it is larger.
LEAST_RADIUS_OVER_WIDTH: Final = 0.1985
LEAST_LOG_RADIUS: Final = 1.0
LEAST_RESISTANCE: Final = 0.5
PLANE: Final = {"x": ("dy", "dz"), "y": ("dx", "dz"), "z": ("dx", "dy")}


def logarithmic(least: float, most: float) -> st.SearchStrategy[float]:
    """Floats from least to most, spread evenly over their decades."""
    exponents = st.floats(log(least), log(most))
    return exponents.map(lambda exponent: min(max(e**exponent, least), most))


def block_sizes() -> st.SearchStrategy[float]:
    """Horizontal widths of blocks, m."""
    return logarithmic(1.0, 2000.0)


def thicknesses() -> st.SearchStrategy[float]:
    """Thicknesses of layers, m; thick enough for a horizontal well's index."""
    return logarithmic(0.5, 200.0)


def permeabilities(*, zero: bool = False) -> st.SearchStrategy[float]:
    """Permeabilities from 1 microdarcy (tight rock) to 1000 darcy (gravel), m2; zero if asked."""
    rock = logarithmic(1e-18, 1e-9)
    return st.just(0.0) | rock if zero else rock


def wellbore_radii(most: float = 0.5) -> st.SearchStrategy[float]:
    """Wellbore radii, m."""
    return st.floats(0.03, max(0.03, min(0.5, most)))


def skins(least: float = -5.0) -> st.SearchStrategy[float]:
    """Skins from stimulated to badly damaged, not below ``least``."""
    return st.floats(max(-5.0, least), 50.0)


def viscosities() -> st.SearchStrategy[float]:
    """Viscosities from a gas's to a heavy oil's, Pa s."""
    return logarithmic(1e-5, 10.0)


def volume_factors() -> st.SearchStrategy[float]:
    """Formation volume factors of liquids, rm3/sm3."""
    return st.floats(0.9, 3.0)


def densities() -> st.SearchStrategy[float]:
    """Densities of liquids and dense carbon dioxide at reservoir conditions, kg/m3."""
    return st.floats(400.0, 1300.0)


def pressures() -> st.SearchStrategy[float]:
    """Absolute pressures from shallow aquifers to deep reservoirs, Pa."""
    return st.floats(2e5, 1.2e8)


def relative_permeabilities(*, zero: bool = False) -> st.SearchStrategy[float]:
    """Relative permeabilities; zero if asked."""
    return st.floats(0.0 if zero else 1e-3, 1.0)


def net_to_gross() -> st.SearchStrategy[float]:
    """Net-to-gross ratios above zero."""
    return st.floats(0.05, 1.0)


def directions() -> st.SearchStrategy[str]:
    """Axes a well may follow."""
    return st.sampled_from(["x", "y", "z"])


def placements(direction: str) -> st.SearchStrategy[str]:
    """Places in its block open to a well along ``direction``."""
    sides = {"x": ("west", "east"), "y": ("south", "north"), "z": ("top", "bottom")}
    names = [side for axis, pair in sides.items() if axis != direction for side in pair]
    return st.sampled_from(["centre", "corner", *names])


@dataclass(frozen=True, slots=True)
class Block:
    """A block and the well through it, SI: all that a well index takes."""

    dx: float
    dy: float
    dz: float
    kx: float
    ky: float
    kz: float
    rw: float
    skin: float
    direction: str

    @property
    def arguments(self) -> dict[str, float | str]:
        """Everything, as keyword arguments."""
        return {name: getattr(self, name) for name in self.__slots__}


@st.composite
def blocks(
    draw: st.DrawFn, *, zero_permeability: bool = False, direction: str | None = None
) -> Block:
    """Blocks large enough for an index: ln(r0/rw) > 1 and ln(r0/rw) + skin > 0.5, everywhere in it.

    ``zero_permeability`` lets some of kx, ky, kz be zero (even all); ``direction`` fixes the axis.
    """
    size = {"dx": draw(block_sizes()), "dy": draw(block_sizes()), "dz": draw(thicknesses())}
    axis = direction or draw(directions())
    r0_bound = LEAST_RADIUS_OVER_WIDTH * min(size[name] for name in PLANE[axis])
    rw = draw(wellbore_radii(most=0.999 * r0_bound / e**LEAST_LOG_RADIUS))
    skin = draw(skins(least=LEAST_RESISTANCE + 1e-3 - log(r0_bound / rw)))
    rock = permeabilities(zero=zero_permeability)
    return Block(
        **size, kx=draw(rock), ky=draw(rock), kz=draw(rock), rw=rw, skin=skin, direction=axis
    )
