"""Fluids that flow between block and well."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from wellindex.errors import ShapeError
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.registry import Quantity


class LiquidInSI(NamedTuple):
    """What a well needs of a liquid, in SI."""

    viscosity: float
    volume_factor: float
    density: float | None


class Liquid:
    """Oil, water or brine with constant properties.

    Parameters
    ----------
    viscosity : Quantity or str
        At reservoir conditions; positive.
    formation_volume_factor : Quantity, str or float
        Reservoir volume per surface volume: rm3/sm3, rb/stb, or a plain number between 0.5 and
        10. For water whose rates are all counted at reservoir conditions it is 1.
    density : Quantity or str, optional
        At reservoir conditions; positive. Needed where depths differ.
    compressibility : Quantity or str, optional
        At reservoir conditions; zero or positive.

    Raises
    ------
    UnitsError, DomainError
        A missing or wrong unit; a value out of range.

    Examples
    --------
    >>> from wellindex import Liquid
    >>> oil = Liquid(viscosity="0.9 cP", formation_volume_factor="1.25 rb/stb",
    ...              density="48 lbm/ft**3")
    >>> print(f"{oil.viscosity:.2f}")
    0.90 cP
    """

    @reads
    def __init__(
        self,
        *,
        viscosity: kinds.Viscosity,
        formation_volume_factor: kinds.LiquidVolumeFactor,
        density: kinds.Density | None = None,
        compressibility: kinds.Compressibility | None = None,
    ) -> None:
        for name, value in (
            ("viscosity", viscosity),
            ("formation_volume_factor", formation_volume_factor),
            ("density", density),
            ("compressibility", compressibility),
        ):
            if isinstance(value, np.ndarray):
                raise ShapeError(f"Liquid(): {name} is one value; got shape {value.shape}")
        self._viscosity = viscosity
        self._volume_factor = formation_volume_factor
        self._density = density
        self._compressibility = compressibility

    @property
    def viscosity(self) -> Quantity:
        """Viscosity at reservoir conditions."""
        return as_quantity(kinds.VISCOSITY, self._viscosity)

    @property
    def formation_volume_factor(self) -> Quantity:
        """Reservoir volume per surface volume."""
        return as_quantity(kinds.VOLUME_FACTOR, self._volume_factor)

    @property
    def density(self) -> Quantity | None:
        """Density at reservoir conditions, or None."""
        return None if self._density is None else as_quantity(kinds.DENSITY, self._density)

    @property
    def compressibility(self) -> Quantity | None:
        """Compressibility at reservoir conditions, or None."""
        if self._compressibility is None:
            return None
        return as_quantity(kinds.COMPRESSIBILITY, self._compressibility)

    def in_si(self) -> LiquidInSI:
        """Return what a well needs, as plain numbers in SI."""
        return LiquidInSI(self._viscosity, self._volume_factor, self._density)

    def __repr__(self) -> str:
        density = "" if self._density is None else f", density={self.density}"
        return f"Liquid({self.viscosity}, {self.formation_volume_factor}{density})"
