"""The steady pressure around a well, from the wellbore to its block."""

from __future__ import annotations

import math
from typing import Any, Literal

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.index import flow_resistance
from wellindex.radius.closed_form import centred_radius, stretched_wellbore
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.checks import AT_ONCE
from wellindex.units.registry import Quantity

_POINTS = 121


class RadialProfile:
    """Pressure over radius around a well, and where it equals the block's.

    `radial_profile` makes it.

    Examples
    --------
    >>> from wellindex import radial_profile
    >>> profile = radial_profile(dx="100 m", dy="100 m", kx="160 mD", ky="10 mD", rw="0.1 m",
    ...                          pwf="150 bar", p_block="200 bar", radius=["1 m", "10 m"])
    >>> profile.coordinates
    'stretched'
    >>> print(f"{profile.pressure:.2f}")
    [169.10 190.24] bar
    """

    def __init__(
        self,
        radius: np.ndarray[Any, Any],
        pressure: np.ndarray[Any, Any],
        r0: float,
        rw: float,
        coordinates: Literal["true", "stretched"],
    ) -> None:
        self._radius = radius
        self._pressure = pressure
        self._r0 = r0
        self._rw = rw
        self._coordinates = coordinates

    @property
    def coordinates(self) -> Literal["true", "stretched"]:
        """Which coordinates all radii here are in, "true" or "stretched".

        In anisotropic rock the pressure depends on a radius only in stretched coordinates,
        x (ky/kx)**(1/4) and y (kx/ky)**(1/4).
        """
        return self._coordinates

    @property
    def radius(self) -> Quantity:
        """Radii, (n,)."""
        return as_quantity(kinds.LENGTH, self._radius)

    @property
    def pressure(self) -> Quantity:
        """Pressure in the rock at these radii, (n,)."""
        return as_quantity(kinds.PRESSURE, self._pressure)

    @property
    def r0(self) -> Quantity:
        """Radius at which the pressure equals the block pressure."""
        return as_quantity(kinds.LENGTH, self._r0)

    @property
    def rw(self) -> Quantity:
        """Wellbore radius (of the equivalent circle, in stretched coordinates)."""
        return as_quantity(kinds.LENGTH, self._rw)

    def __repr__(self) -> str:
        return f"RadialProfile({len(self._radius)} radii, {self.coordinates} coordinates)"


@reads
def radial_profile(
    *,
    dx: kinds.Length,
    dy: kinds.Length,
    kx: kinds.Permeability,
    ky: kinds.Permeability,
    rw: kinds.Length,
    pwf: kinds.Pressure,
    p_block: kinds.Pressure,
    skin: kinds.Skin = 0.0,
    radius: kinds.Length | None = None,
) -> RadialProfile:
    r"""Steady pressure between the wellbore and the block, in the plane normal to the well.

    .. math:: p(r) = p_{wf} + (p_\mathrm{block} - p_{wf})
                     \frac{\ln(r/r_w) + \mathrm{skin}}{\ln(r_0/r_w) + \mathrm{skin}}

    Parameters
    ----------
    dx, dy : Quantity or str, length
        Widths of the block normal to the well; positive.
    kx, ky : Quantity or str, permeability
        Along `dx` and `dy`; positive. Where they differ, radii are in stretched coordinates.
    rw : Quantity or str, length
        True wellbore radius; positive.
    pwf, p_block : Quantity or str, pressure
        In the wellbore and in the block.
    skin : float
        Local skin; its pressure drop lies at the wellbore, so p(rw) differs from `pwf`. With a
        negative skin the profile begins at the effective radius rw exp(-skin), where p is `pwf`.
    radius : Quantity, length, (n,), optional
        Radii, none below the wellbore's or the effective radius; default 121 from there to the
        block's far side.

    Returns
    -------
    RadialProfile

    Raises
    ------
    UnitsError, DomainError, ShapeError
        A missing or wrong unit; permeability zero; a radius inside the wellbore; an argument
        that is not one value; ln(r0/rw) as for `well_index`.

    Notes
    -----
    Steady, incompressible flow of one liquid to an isolated well. It is not the pressure of the
    blocks around: they only lie near it.

    References
    ----------
    .. [1] D. W. Peaceman, SPE Journal 18(3), 183-194 (1978), fig. 3 (from memory of the
       source); doi:10.2118/6893-PA.
    .. [2] D. W. Peaceman, SPE Journal 23(3), 531-543 (1983); doi:10.2118/10528-PA.

    Examples
    --------
    >>> from wellindex import radial_profile
    >>> profile = radial_profile(dx="100 m", dy="100 m", kx="50 mD", ky="50 mD", rw="0.1 m",
    ...                          pwf="150 bar", p_block="200 bar")
    >>> print(f"{profile.r0:.2f}")
    19.85 m
    """
    given = {"dx": dx, "dy": dy, "kx": kx, "ky": ky, "rw": rw, "skin": skin}
    for name, value in {**given, "pwf": pwf, "p_block": p_block}.items():
        if np.ndim(value):
            raise ShapeError(f"radial_profile(): {name} is one value; got {np.shape(value)}")
    if kx == 0.0 or ky == 0.0:
        raise DomainError("radial_profile(): no radius exists where kx or ky is zero")
    root_kx, root_ky = np.sqrt(kx), np.sqrt(ky)
    true_r0 = float(centred_radius(dx, dy, root_kx, root_ky))
    resistance = flow_resistance(AT_ONCE, true_r0, rw, skin, float(root_kx * root_ky))
    wellbore = float(stretched_wellbore(rw, kx, ky))
    r0 = true_r0 * wellbore / rw
    # Inside the effective radius of a negative skin the logarithm stands for no pressure.
    inner = wellbore * math.exp(max(0.0, -skin))
    if radius is None:
        stretch = np.sqrt(root_ky / root_kx)
        radius = np.geomspace(inner, max(0.5 * max(dx * stretch, dy / stretch), r0), _POINTS)
        radius[0] = inner
    radius = np.atleast_1d(radius)
    if np.any(radius < inner):
        inside = as_quantity(kinds.LENGTH, inner)
        what = "the wellbore" if inner == wellbore else "the effective radius rw exp(-skin)"
        raise DomainError(f"radial_profile(): a radius lies inside {what} of {inside}")
    pressure = pwf + (p_block - pwf) * (np.log(radius / wellbore) + skin) / resistance
    return RadialProfile(radius, pressure, r0, wellbore, "true" if kx == ky else "stretched")
