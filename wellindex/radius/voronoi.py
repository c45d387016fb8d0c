"""The equivalent radius of a Voronoi cell."""

from __future__ import annotations

import math

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.registry import Quantity


@reads
def voronoi_equivalent_radius(
    *, sides: kinds.Length, distances: kinds.Length, angle: kinds.Angle = 2.0 * math.pi
) -> Quantity:
    r"""Equivalent radius of a well at the centre of a Voronoi cell in isotropic rock.

    .. math:: r_0 = \exp\frac{\sum_j (b_j/d_j) \ln d_j - \theta}{\sum_j b_j/d_j}

    Parameters
    ----------
    sides : Quantity, length, (n,)
        Lengths b of the cell's sides, seen along the well; positive.
    distances : Quantity, length, (n,)
        Distances d from the cell's centre to the centres of the neighbours across these sides;
        positive.
    angle : Quantity or str, angle
        Angle theta that is open to flow: the full circle by default, less where the well stands
        on a no-flow side.

    Returns
    -------
    Quantity, length

    Raises
    ------
    UnitsError, DomainError, ShapeError
        A missing or wrong unit; a length that is not positive; rows of different length; an angle
        that is no part of a circle.

    Notes
    -----
    It takes the pressures of the neighbours to be those of radial flow, at their centres. On a
    square lattice this gives exp(-pi/2) dx = 0.2079 dx, while the exact value is 0.1985 dx: the
    neighbours' own discrete pressures are a little off the logarithm.

    References
    ----------
    .. [1] C. L. Palagi and K. Aziz, "Use of Voronoi Grid in Reservoir Simulation", SPE Advanced
       Technology Series 2(2), 69-77 (1994); doi:10.2118/22889-PA (from memory of the source).

    Examples
    --------
    >>> from wellindex import voronoi_equivalent_radius
    >>> r0 = voronoi_equivalent_radius(sides=["100 m"] * 4, distances=["100 m"] * 4)
    >>> print(f"{r0:.3f}")
    20.788 m
    """
    b, d = np.asarray(sides), np.asarray(distances)
    if b.ndim != 1 or b.shape != d.shape:
        raise ShapeError(
            f"voronoi_equivalent_radius(): one distance per side is needed; got {b.shape} sides "
            f"and {d.shape} distances"
        )
    if not 0.0 < angle <= 2.0 * math.pi * (1.0 + 1e-12):
        raise DomainError("voronoi_equivalent_radius(): the angle is a part of the full circle")
    shares = b / d
    logarithm = (np.sum(shares * np.log(d)) - angle) / np.sum(shares)
    return as_quantity(kinds.LENGTH, math.exp(logarithm))
