"""Permeability of the blocks of a grid, also from hydraulic conductivity."""

from __future__ import annotations

import math
from typing import Any, Literal, Self

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import quantities, reads
from wellindex.units.checks import Checks
from wellindex.units.elementwise import frozen
from wellindex.units.registry import Quantity

STANDARD_GRAVITY = 9.80665

#: Off-diagonal permeability below this part of the largest entry is rounding, not direction.
_ROUNDING = 1e-9


class Permeability:
    """Permeability along the axes of the grid, for all blocks alike or one value per block.

    Parameters
    ----------
    kx, ky, kz : Quantity or str, permeability, scalar or (nx, ny, nz)
        Along east, north and down. Zero is tight rock, not an error.
    invalid : {"raise", "nan"}
        Whether an unusable element of an array raises, naming its index, or becomes NaN with one
        warning; its couplings then have an index of NaN.

    Raises
    ------
    UnitsError, DomainError, ShapeError
        A missing or wrong unit; a negative value; arrays of different shape.

    Notes
    -----
    The permeability's principal directions must be the axes of the grid: the five-point scheme
    has no term for others. `Permeability.from_tensor` checks a full tensor and says how far the
    grid has to be turned.

    Examples
    --------
    >>> from wellindex import Permeability
    >>> rock = Permeability("120 mD", "120 mD", "12 mD")
    >>> print(f"{rock.kz:.1f}")
    12.0 mD
    """

    @reads
    def __init__(
        self,
        kx: kinds.Permeability,
        ky: kinds.Permeability,
        kz: kinds.Permeability,
        *,
        invalid: Literal["raise", "nan"] = "raise",
    ) -> None:
        shapes = {np.shape(k) for k in (kx, ky, kz)} - {()}
        if len(shapes) > 1:
            given = ", ".join(
                f"{n} {np.shape(k)}" for n, k in zip("xyz", (kx, ky, kz), strict=True)
            )
            raise ShapeError(f"Permeability(): one shape is needed, or scalars; got {given}")
        for shape in shapes:
            if len(shape) != 3:
                raise ShapeError(
                    f"Permeability(): an array needs the shape (nx, ny, nz); got {shape}"
                )
        self._si = tuple(frozen(k) if np.ndim(k) else k for k in (kx, ky, kz))
        self._shape: tuple[int, ...] = shapes.pop() if shapes else ()

    @classmethod
    @reads
    def from_tensor(cls, tensor: kinds.TensorPermeability) -> Self:
        """Take the diagonal of a permeability tensor whose principal axes are the grid's.

        Parameters
        ----------
        tensor : Quantity, permeability, (3, 3)
            Symmetric, in the axes of the grid (east, north, down).

        Returns
        -------
        Permeability

        Raises
        ------
        DomainError
            A tensor that is not symmetric or has a negative principal value, or one whose
            principal directions are not the grid's; the message gives the angle to turn by.

        Examples
        --------
        >>> from wellindex import Permeability, ureg
        >>> k = ureg.Quantity([[90, 0, 0], [0, 40, 0], [0, 0, 5]], "mD")
        >>> print(f"{Permeability.from_tensor(k).ky:.1f}")
        40.0 mD
        """
        _check_axes(tensor)
        return cls(*(as_quantity(kinds.PERMEABILITY, tensor[i, i]) for i in range(3)))

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape of the arrays, (nx, ny, nz); () where all blocks are alike."""
        return self._shape

    @property
    def kx(self) -> Quantity:
        """Permeability along x (east)."""
        return as_quantity(kinds.PERMEABILITY, self._si[0])

    @property
    def ky(self) -> Quantity:
        """Permeability along y (north)."""
        return as_quantity(kinds.PERMEABILITY, self._si[1])

    @property
    def kz(self) -> Quantity:
        """Permeability along z (down)."""
        return as_quantity(kinds.PERMEABILITY, self._si[2])

    def at(self, cells: np.ndarray[Any, Any]) -> np.ndarray[Any, Any]:
        """Return kx, ky, kz of some cells in SI, shape (3, n); cells of shape (n, 3)."""
        index = tuple(cells.T)
        return np.array(
            [k[index] if np.ndim(k) else np.full(len(cells), float(k)) for k in self._si]
        )

    def __repr__(self) -> str:
        if self.shape:
            return f"Permeability(one value per block, shape {self.shape})"
        return f"Permeability({self.kx}, {self.ky}, {self.kz})"


def _check_axes(tensor: np.ndarray[Any, Any]) -> None:
    """Refuse a tensor that is none, or whose principal directions are not the grid's."""
    if np.shape(tensor) != (3, 3):
        raise ShapeError(f"a permeability tensor has the shape (3, 3); got {np.shape(tensor)}")
    size = float(np.abs(tensor).max())
    if np.abs(tensor - tensor.T).max() > _ROUNDING * size:
        raise DomainError("a permeability tensor is symmetric; this one is not")
    if np.linalg.eigvalsh(tensor).min() < -_ROUNDING * size:
        raise DomainError("a permeability tensor has no negative principal value; this one has")
    vertical = max(abs(tensor[0, 2]), abs(tensor[1, 2]))
    if vertical > _ROUNDING * size:
        raise DomainError(
            "the principal directions of this permeability are tilted against the grid's layers: "
            "lay the layers along the bedding, or use a scheme with a full tensor"
        )
    if abs(tensor[0, 1]) > _ROUNDING * size:
        turn = 0.5 * math.degrees(math.atan2(2.0 * tensor[0, 1], tensor[0, 0] - tensor[1, 1]))
        raise DomainError(
            "the principal directions of this permeability are not the grid's, and five-point "
            f"formulas have no place for that: turn the grid {abs(turn):.4g} degrees "
            f"{'counter-clockwise' if turn > 0 else 'clockwise'} (seen from above)"
        )


@quantities
def permeability_from_conductivity(
    check: Checks,
    *,
    conductivity: kinds.HydraulicConductivity,
    viscosity: kinds.Viscosity,
    density: kinds.Density,
) -> kinds.Permeability:
    r"""Permeability of rock whose hydraulic conductivity is known.

    .. math:: k = \frac{K \mu}{\rho g}, \qquad g = 9.80665\ \mathrm{m/s^2}

    Parameters
    ----------
    conductivity : Quantity or str, length/time, any shape
        Hydraulic conductivity K; zero or positive.
    viscosity, density : Quantity or str, any shape
        Of the water that K was measured with, at its temperature then; both positive.

    Returns
    -------
    Quantity, permeability

    Raises
    ------
    UnitsError
        A missing or wrong unit.
    DomainError
        A negative conductivity; a viscosity or density that is not positive.

    References
    ----------
    .. [1] R. A. Freeze and J. A. Cherry, "Groundwater", Prentice-Hall (1979), eq. 2.28 (from
       memory of the source).

    Examples
    --------
    >>> from wellindex import permeability_from_conductivity
    >>> k = permeability_from_conductivity(conductivity="1 m/day", viscosity="1 cP",
    ...                                    density="1000 kg/m**3")
    >>> print(f"{k.to('D'):.3f}")
    1.196 D
    """
    return conductivity * viscosity / (density * STANDARD_GRAVITY)
