"""The grid of hexahedra: eight corners to a cell, tilted, pinched out or faulted."""

from __future__ import annotations

from typing import Any

import numpy as np

from wellindex.errors import DomainError, ShapeError
from wellindex.space.box_tree import BoxTree
from wellindex.space.grid import one_cell
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.registry import Quantity

Array = np.ndarray[Any, Any]

#: A cell whose volume is below this part of its box's is no cell: it has pinched out.
_NO_VOLUME = 1e-12
#: A fold by less than this part of the largest Jacobian is rounding.
_FOLDED = 1e-6
#: Cells whose volume and corners are examined at once.
_CHUNK = 4096

#: Corner number = i + 2 j + 4 k, with i, j, k in {0, 1} for west/east, south/north, top/bottom.
CORNERS = np.array([[c & 1, c >> 1 & 1, c >> 2 & 1] for c in range(8)])
_GAUSS = 0.5 + np.array([-1.0, 1.0]) / np.sqrt(12.0)


def shape_derivatives(at: Array) -> Array:
    """Return the derivatives of the eight trilinear weights at points (m, 3), (m, 8, 3)."""
    weights = np.where(CORNERS == 1, at[:, np.newaxis, :], 1.0 - at[:, np.newaxis, :])
    slopes = np.where(CORNERS == 1, 1.0, -1.0)
    derivatives = np.empty((len(at), 8, 3))
    for axis in range(3):
        others = [a for a in range(3) if a != axis]
        derivatives[:, :, axis] = slopes[:, axis] * weights[:, :, others].prod(axis=2)
    return derivatives


def shape_weights(at: Array) -> Array:
    """Return the eight trilinear weights at points (m, 3), (m, 8)."""
    weights: Array = np.where(CORNERS == 1, at[:, np.newaxis, :], 1.0 - at[:, np.newaxis, :])
    product: Array = weights.prod(axis=2)
    return product


def _jacobians(corners: Array, at: Array) -> Array:
    """Return the determinant of the trilinear map of cells (8, 3, n) at points (m, 3), (m, n)."""
    slopes = np.ascontiguousarray(shape_derivatives(at).transpose(0, 2, 1).reshape(-1, 8))
    # One matrix product for all cells: rows are (point, axis), columns (coordinate, cell).
    products = slopes @ corners.reshape(8, -1)
    east, north, down = products.reshape(len(at), 3, 3, -1).swapaxes(0, 1)
    determinant: Array = (
        east[:, 0] * (north[:, 1] * down[:, 2] - north[:, 2] * down[:, 1])
        - east[:, 1] * (north[:, 0] * down[:, 2] - north[:, 2] * down[:, 0])
        + east[:, 2] * (north[:, 0] * down[:, 1] - north[:, 1] * down[:, 0])
    )
    return determinant


class HexahedralGrid:
    """Cells of eight corners each, joined in rows i, j, k.

    Parameters
    ----------
    corners : Quantity, length, (nx, ny, nz, 8, 3)
        x east, y north, z down. Corner number = i + 2 j + 4 k with i, j, k in {0, 1} for
        west/east, south/north, top/bottom. Neighbours need not share corners (faults), and cells
        may pinch out to nothing.
    present : array of bool, (nx, ny, nz), optional
        False where a cell does not exist; default all exist.

    Raises
    ------
    UnitsError, ShapeError
        A missing or wrong unit; an array of a wrong shape.
    DomainError
        A corner that is no finite number, a cell that is folded (its corners are out of order),
        or one that is inverted against the others; the cell is named.

    Notes
    -----
    Faces are bilinear through their four corners, the same for both cells that share them. A grid
    that is mirrored as a whole (every cell alike) is accepted. Cells of no volume are skipped.

    The size dx of a cell is the distance between the centres (means of four corners) of its west
    and east faces; dy and dz likewise.

    Examples
    --------
    >>> import numpy as np
    >>> from wellindex import HexahedralGrid, ureg
    >>> unit = np.array([[c & 1, c >> 1 & 1, c >> 2 & 1] for c in range(8)], dtype=float)
    >>> grid = HexahedralGrid(ureg.Quantity(unit.reshape(1, 1, 1, 8, 3) * 50.0, "m"))
    >>> print(f"{grid.volume[0, 0, 0].to('m**3'):.0f}")
    125000 m**3
    """

    @reads
    def __init__(
        self,
        corners: kinds.Coordinate,
        *,
        present: np.ndarray | list | None = None,  # type: ignore[type-arg]
    ) -> None:
        corners = np.ascontiguousarray(corners)
        if corners.ndim != 5 or corners.shape[3:] != (8, 3) or 0 in corners.shape:
            raise ShapeError(
                f"HexahedralGrid(): corners have the shape (nx, ny, nz, 8, 3); got {corners.shape}"
            )
        self.shape: tuple[int, int, int] = corners.shape[:3]
        self._corners = corners.reshape(-1, 8, 3)
        self._volume = np.empty(len(self._corners))
        self._exists = self._examined(present)
        self._tree: BoxTree | None = None

    def _examined(self, present: Any) -> Array:
        """Return which cells exist and have a volume; refuse folded and inverted ones."""
        try:
            exists = np.ones(self.shape, dtype=bool) if present is None else np.asarray(present)
        except ValueError:
            raise ShapeError("HexahedralGrid(): present is no array: its rows differ") from None
        if exists.shape != self.shape or exists.dtype != np.bool_:
            raise ShapeError(
                f"HexahedralGrid(): present is an array of bool of shape {self.shape}; "
                f"got {exists.dtype} {exists.shape}"
            )
        exists = exists.ravel().copy()
        gauss = np.stack(np.meshgrid(_GAUSS, _GAUSS, _GAUSS, indexing="ij"), axis=-1).reshape(8, 3)
        points = np.concatenate((gauss, CORNERS))
        folded = np.zeros(len(exists), dtype=bool)
        for start in range(0, len(exists), _CHUNK):
            part = slice(start, start + _CHUNK)
            # Seen from a corner: coordinates far from zero would cost digits.
            cells = self._corners[part].transpose(1, 2, 0)
            cells = np.ascontiguousarray(cells - cells[0])
            jacobians = _jacobians(cells, points)
            # The Jacobian is quadratic along each axis, so two Gauss points give it exactly.
            volume = jacobians[: len(gauss)].mean(axis=0)
            rounding = _NO_VOLUME * np.ptp(cells, axis=0).prod(axis=0)
            # A cell turned inside out in one part may have no volume in all: it is no pinch-out.
            low, high = jacobians.min(axis=0), jacobians.max(axis=0)
            least = np.maximum(_FOLDED * np.maximum(-low, high), rounding)
            folded[part] = exists[part] & (low < -least) & (high > least)
            exists[part] &= np.abs(volume) > rounding
            self._volume[part] = volume
        self._refuse(folded, "its corners are out of order or its faces cross")
        sign = np.sign(self._volume)
        majority = 1.0 if np.sum(sign[exists]) >= 0.0 else -1.0
        self._refuse(
            exists & (sign == -majority), "it is inverted (inside out) against most of the grid"
        )
        return exists

    def _refuse(self, bad: Array, why: str) -> None:
        if np.any(bad):
            cell = tuple(int(i) for i in np.unravel_index(int(np.argmax(bad)), self.shape))
            count = int(np.count_nonzero(bad))
            more = f" ({count} such cells)" if count > 1 else ""
            raise DomainError(f"HexahedralGrid(): cell {cell}: {why}{more}")

    @property
    def volume(self) -> Quantity:
        """Volumes of the cells, (nx, ny, nz)."""
        return as_quantity(kinds.VOLUME, np.abs(self._volume).reshape(self.shape))

    @property
    def present(self) -> Array:
        """Which cells exist and have a volume, (nx, ny, nz)."""
        return self._exists.reshape(self.shape).copy()

    def tree(self) -> BoxTree:
        """Return the index of the cells, built when first needed."""
        if self._tree is None:
            shape = (*self.shape, 8, 3)
            self._tree = BoxTree(self._corners.reshape(shape), self._exists.reshape(self.shape))
        return self._tree

    def number(self, cells: Array) -> Array:
        """Return the flat numbers of cells (n, 3)."""
        numbers: Array = np.ravel_multi_index(tuple(cells.T), self.shape)
        return numbers

    def corners(self, cells: Array) -> Array:
        """Return the corners of cells (n, 3) in SI, (n, 8, 3)."""
        corners: Array = self._corners[self.number(cells)]
        return corners

    def centres(self, cells: Array) -> Array:
        """Return the centres (means of the corners) of cells in SI, (n, 3)."""
        centres: Array = self.corners(cells).mean(axis=1)
        return centres

    def axes(self, cells: Array) -> Array:
        """Return the vectors from face centre to opposite face centre in SI, (n, 3, 3).

        Row a of a cell is its vector along axis a (west to east, south to north, top to bottom).
        """
        corners = self.corners(cells)
        return np.stack(
            [
                corners[:, CORNERS[:, a] == 1].mean(axis=1)
                - corners[:, CORNERS[:, a] == 0].mean(axis=1)
                for a in range(3)
            ],
            axis=1,
        )

    def components(self, cells: Array, vectors: Array) -> Array:
        """Return the lengths of vectors (n, 3) along the axes of their cells, (n, 3).

        The components are oblique: the vector is their sum along the cell's own directions.
        """
        axes = self.axes(cells)
        directions = axes / np.linalg.norm(axes, axis=2, keepdims=True)
        parts = np.linalg.solve(directions.transpose(0, 2, 1), vectors[:, :, np.newaxis])
        lengths: Array = np.abs(parts[:, :, 0])
        return lengths

    def sizes(self, cells: Array) -> Array:
        """Return dx, dy, dz of cells in SI, (3, n)."""
        sizes: Array = np.linalg.norm(self.axes(cells), axis=2).T
        return sizes

    def exists(self, cells: Array) -> Array:
        """Return which cells exist and have a volume, (n,)."""
        exists: Array = self._exists[self.number(cells)]
        return exists

    def centre(self, cell: tuple[int, int, int]) -> Quantity:
        """Return the centre (x, y, z) of one cell: the mean of its corners.

        Parameters
        ----------
        cell : tuple of int
            (i, j, k), from 0.

        Raises
        ------
        ShapeError
            A cell that is not three whole numbers.
        DomainError
            The grid has no such cell.

        Examples
        --------
        >>> import numpy as np
        >>> from wellindex import HexahedralGrid, ureg
        >>> unit = np.array([[c & 1, c >> 1 & 1, c >> 2 & 1] for c in range(8)], dtype=float)
        >>> grid = HexahedralGrid(ureg.Quantity(unit.reshape(1, 1, 1, 8, 3) * 50.0, "m"))
        >>> print(f"{grid.centre((0, 0, 0)):.1f}")
        [25.0 25.0 25.0] m
        """
        return as_quantity(kinds.COORDINATE, self.centres(one_cell(cell, self.shape))[0])

    def __repr__(self) -> str:
        return "HexahedralGrid({} x {} x {} cells)".format(*self.shape)
