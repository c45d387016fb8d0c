"""The grid of rectangular blocks with spacings of its own along each axis."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.elementwise import frozen
from wellindex.units.registry import Quantity

AXES = ("x", "y", "z")
#: The two sides normal to each axis, at its low and its high end (z and depth run down).
SIDES = {"x": ("west", "east"), "y": ("south", "north"), "z": ("top", "bottom")}


def one_cell(cell: Any, shape: tuple[int, int, int]) -> np.ndarray[Any, Any]:
    """Return the indices of a block that a grid of this shape has, (1, 3)."""
    indices = np.asarray(cell)
    if indices.shape != (3,) or indices.dtype.kind not in "iu":
        raise ShapeError(f"a block is three whole numbers (i, j, k); got {cell!r}")
    for axis, index, count in zip("ijk", cell, shape, strict=True):
        if not 0 <= index < count:
            raise DomainError(f"{axis} = {index} is outside the grid: 0 to {count - 1}")
    return indices[np.newaxis]


class TensorGrid:
    """Blocks of dx by dy by dz, x to the east, y to the north, z downwards.

    Parameters
    ----------
    dx, dy, dz : Quantity, str or list of str, length, (nx,), (ny,), (nz,)
        Block sizes from west to east, from south to north, from the top down; positive. A scalar
        means one block.
    origin : Quantity or tuple of three, length
        The corner at the west, south and top; its z is the depth of the grid's top. Default zero.
    present : array of bool, (nx, ny, nz), optional
        False where a block does not exist; default all exist.

    Raises
    ------
    UnitsError, DomainError, ShapeError
        A missing or wrong unit; a size that is not positive; arrays of a wrong shape.

    Notes
    -----
    Indices start at 0; layer 0 is the top. `~TensorGrid.shape` is (nx, ny, nz).

    Examples
    --------
    >>> from wellindex import TensorGrid, ureg
    >>> grid = TensorGrid(ureg.Quantity([150] * 21, "ft"), ureg.Quantity([150] * 21, "ft"),
    ...                   ["20 ft", "35 ft"], origin=("0 ft", "0 ft", "8000 ft"))
    >>> grid.shape
    (21, 21, 2)
    >>> print(f"{grid.centre((10, 10, 1))[2].to('ft'):.1f}")
    8037.5 ft
    """

    @reads
    def __init__(
        self,
        dx: kinds.Length,
        dy: kinds.Length,
        dz: kinds.Length,
        *,
        origin: kinds.Coordinate = (0.0, 0.0, 0.0),
        present: np.ndarray | list | None = None,  # type: ignore[type-arg]
    ) -> None:
        sizes = [np.atleast_1d(np.asarray(d, dtype=float)) for d in (dx, dy, dz)]
        for axis, size in zip(AXES, sizes, strict=True):
            if size.ndim != 1 or size.size == 0:
                raise ShapeError(f"TensorGrid(): d{axis} is one row of sizes; got {size.shape}")
        if np.shape(origin) != (3,):
            raise ShapeError("TensorGrid(): origin is one point (x, y, z)")
        self._shape = (len(sizes[0]), len(sizes[1]), len(sizes[2]))
        self._sizes = tuple(frozen(size) for size in sizes)
        self._edges = tuple(
            frozen(start + np.concatenate(([0.0], np.cumsum(size))))
            for start, size in zip(np.asarray(origin, dtype=float), sizes, strict=True)
        )
        self._present = self._mask(present)

    def _mask(self, present: Any) -> np.ndarray[Any, Any] | None:
        if present is None:
            return None
        try:
            mask = np.asarray(present)
        except ValueError:
            raise ShapeError("TensorGrid(): present is no array: its rows differ") from None
        if mask.shape != self.shape or mask.dtype != np.bool_:
            raise ShapeError(
                f"TensorGrid(): present is an array of bool of shape {self.shape}; "
                f"got {mask.dtype} {mask.shape}"
            )
        copy: np.ndarray[Any, Any] = frozen(mask)
        return copy

    @property
    def shape(self) -> tuple[int, int, int]:
        """Number of blocks along x, y and z, (nx, ny, nz)."""
        return self._shape

    @property
    def dx(self) -> Quantity:
        """Sizes of the blocks from west to east, (nx,)."""
        return as_quantity(kinds.LENGTH, self._sizes[0])

    @property
    def dy(self) -> Quantity:
        """Sizes of the blocks from south to north, (ny,)."""
        return as_quantity(kinds.LENGTH, self._sizes[1])

    @property
    def dz(self) -> Quantity:
        """Sizes of the blocks from the top down, (nz,)."""
        return as_quantity(kinds.LENGTH, self._sizes[2])

    @property
    def origin(self) -> Quantity:
        """The corner at the west, south and top, (3,)."""
        return as_quantity(kinds.COORDINATE, np.array([edges[0] for edges in self._edges]))

    @property
    def present(self) -> np.ndarray[Any, Any]:
        """Which blocks exist, (nx, ny, nz)."""
        return np.ones(self.shape, dtype=bool) if self._present is None else self._present.copy()

    def centre(self, cell: tuple[int, int, int]) -> Quantity:
        """Return the centre (x, y, z) of one block.

        Parameters
        ----------
        cell : tuple of int
            (i, j, k), from 0.

        Raises
        ------
        ShapeError
            A cell that is not three whole numbers.
        DomainError
            The grid has no such block.

        Examples
        --------
        >>> from wellindex import TensorGrid
        >>> grid = TensorGrid(["100 m"] * 3, ["80 m"] * 3, "10 m", origin=("0 m", "0 m", "900 m"))
        >>> print(f"{grid.centre((1, 0, 0)):.0f}")
        [150 40 905] m
        """
        return as_quantity(kinds.COORDINATE, self.centres(one_cell(cell, self.shape))[0])

    def centres(self, cells: np.ndarray[Any, Any]) -> np.ndarray[Any, Any]:
        """Return the centres of some cells in SI, (n, 3)."""
        halves = [0.5 * (edges[1:] + edges[:-1]) for edges in self._edges]
        return np.stack([half[i] for half, i in zip(halves, cells.T, strict=True)], axis=1)

    def sizes(self, cells: np.ndarray[Any, Any]) -> np.ndarray[Any, Any]:
        """Return dx, dy, dz of some cells in SI, (3, n)."""
        return np.stack([size[i] for size, i in zip(self._sizes, cells.T, strict=True)])

    def components(self, cells: np.ndarray[Any, Any], vectors: np.ndarray[Any, Any]) -> Any:
        """Return the lengths of vectors (n, 3) along the axes of their cells, (n, 3)."""
        return np.abs(vectors)

    def edges(self) -> tuple[np.ndarray[Any, Any], ...]:
        """Return the coordinates of the block faces along x, y and z in SI."""
        return self._edges

    def widths(self, axis: int) -> np.ndarray[Any, Any]:
        """Return the sizes of the blocks along one axis in SI."""
        widths: np.ndarray[Any, Any] = self._sizes[axis]
        return widths

    def has(self, cell: tuple[int, ...]) -> bool:
        """Tell whether the grid has a block (i, j, k), and the block exists."""
        inside = all(0 <= n < count for n, count in zip(cell, self.shape, strict=True))
        return inside and (self._present is None or bool(self._present[cell]))

    def exists(self, cells: np.ndarray[Any, Any]) -> np.ndarray[Any, Any]:
        """Return which of some cells exist, (n,)."""
        if self._present is None:
            return np.ones(len(cells), dtype=bool)
        exists: np.ndarray[Any, Any] = self._present[tuple(cells.T)]
        return exists

    def __repr__(self) -> str:
        return "TensorGrid({} x {} x {} blocks)".format(*self.shape)
