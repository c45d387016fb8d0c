"""The table of couplings of one well."""

from __future__ import annotations

import os
from importlib import import_module
from typing import Any, NamedTuple, Unpack

import numpy as np

from wellindex.convention import Contents, Convention
from wellindex.errors import ShapeError
from wellindex.index import flow_resistance, geometric_index
from wellindex.radius.crossed_block import Crossed
from wellindex.space.grid import AXES
from wellindex.table import Column, Table, aligned, header, measured
from wellindex.units import kinds
from wellindex.units.answers import as_quantity, number_in
from wellindex.units.boundary import reads
from wellindex.units.checks import AT_ONCE
from wellindex.units.elementwise import frozen
from wellindex.units.registry import Quantity

Array = np.ndarray[Any, Any]


class Rows(NamedTuple):
    """The columns of a table of couplings in SI."""

    cell: Array
    md_in: Array
    md_out: Array
    depth: Array
    block_depth: Array
    length: Array
    k_normal: Array
    r0: Array
    rw: Array
    skin: Array
    sector: Array
    scale: Array


class Couplings:
    """The couplings of one well, one row per visit of a block, in order along the well.

    `couple` makes them. Each row obeys
    ``wi = 2 pi sector k_normal length scale / (ln(r0/rw) + skin)``.

    Examples
    --------
    >>> from wellindex import Path, Permeability, TensorGrid, couple
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, ["5 m", "8 m"])
    >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "13 m")])
    >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
    >>> rows.cell.tolist()
    [[1, 1, 0], [1, 1, 1]]
    >>> print(f"{rows.wi[0]:.3f}")
    4.557 cP*m**3/bar/day
    """

    def __init__(self, rows: Rows, *, crossed: Crossed, method: str, notes: list[str]) -> None:
        self._rows = Rows(*map(frozen, rows))
        self._crossed = crossed._replace(
            components=frozen(crossed.components),
            sizes=frozen(crossed.sizes),
            k=frozen(crossed.k),
        )
        self._method = method
        self._notes = tuple(notes)

    def __len__(self) -> int:
        return len(self._rows.length)

    def __setstate__(self, state: dict[str, Any]) -> None:
        # A pickle forgets that its arrays cannot be written.
        self.__dict__.update(state, _rows=Rows(*map(frozen, state["_rows"])))

    def equals(self, other: object) -> bool:
        """Tell whether another table has the same rows.

        Parameters
        ----------
        other : Couplings
            Any table of couplings, such as a pickled copy; anything else is not equal.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> rows.equals(couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m"))
        True
        """
        if not isinstance(other, Couplings) or len(self) != len(other):
            return False
        return all(
            np.array_equal(one, two, equal_nan=True)
            for one, two in zip(self._rows, other.rows_in_si(), strict=True)
        )

    def by_cell(self) -> tuple[Array, Quantity]:
        """Sum the indices of all visits of a block, for codes that take one number per block.

        Returns
        -------
        cell : array of int, (m, 3)
            The blocks, in the order of their first visit.
        wi : Quantity, well index, (m,)
            The sum of their rows' indices.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m",
        ...               intervals=[("1 m", "3 m"), ("5 m", "8 m")])
        >>> cell, wi = rows.by_cell()
        >>> len(rows), cell.tolist()
        (2, [[1, 1, 0]])
        >>> print(f"{wi[0]:.3f}")
        4.557 cP*m**3/bar/day
        """
        cells, first, place = np.unique(
            self._rows.cell, axis=0, return_index=True, return_inverse=True
        )
        sums = np.bincount(place.ravel(), weights=self.in_si().wi, minlength=len(cells))
        order = np.argsort(first)
        return cells[order], as_quantity(kinds.WELL_INDEX, sums[order])

    @property
    def crossed(self) -> Crossed:
        """What the equivalent radii were found from, in SI."""
        return self._crossed

    @property
    def method(self) -> str:
        """How the equivalent radii were found."""
        return self._method

    @property
    def notes(self) -> list[str]:
        """What the reader of each row must know; empty where there is nothing.

        A block without permeability across the well; a side on which the grid has no block; a
        neighbour whose width differs by more than 5 %. The closed form holds for equal blocks all
        around.
        """
        return list(self._notes)

    @property
    def direction(self) -> str:
        """The axis that the well runs along, or "oblique"."""
        axes = set(self.crossed.dominant.tolist())
        straight = len(axes) == 1 and bool(np.all(self.crossed.aligned))
        return AXES[axes.pop()] if straight else "oblique"

    @property
    def cell(self) -> Array:
        """Block indices (i, j, k) from 0, (n, 3)."""
        return self._rows.cell.copy()

    @property
    def md_in(self) -> Quantity:
        """Measured depth where the open length enters the block, (n,)."""
        return as_quantity(kinds.COORDINATE, self._rows.md_in)

    @property
    def md_out(self) -> Quantity:
        """Measured depth where the open length leaves the block, (n,)."""
        return as_quantity(kinds.COORDINATE, self._rows.md_out)

    @property
    def depth(self) -> Quantity:
        """Depth of the middle of the open length, (n,)."""
        return as_quantity(kinds.COORDINATE, self._rows.depth)

    @property
    def block_depth(self) -> Quantity:
        """Depth of the block's centre, (n,)."""
        return as_quantity(kinds.COORDINATE, self._rows.block_depth)

    @property
    def length(self) -> Quantity:
        """Open length in the block, (n,)."""
        return as_quantity(kinds.LENGTH, self._rows.length)

    @property
    def k_normal(self) -> Quantity:
        """Permeability that counts across the well, net-to-gross included, (n,)."""
        return as_quantity(kinds.PERMEABILITY, self._rows.k_normal)

    @property
    def r0(self) -> Quantity:
        """Equivalent radius at zero skin, to be used with the true rw, (n,)."""
        return as_quantity(kinds.LENGTH, self._rows.r0)

    @property
    def rw(self) -> Quantity:
        """Wellbore radius, (n,)."""
        return as_quantity(kinds.LENGTH, self._rows.rw)

    @property
    def skin(self) -> Array:
        """Local skin, (n,)."""
        return self._rows.skin.copy()

    @property
    def sector(self) -> Array:
        """Fraction of the full circle that flows, (n,)."""
        return self._rows.sector.copy()

    @property
    def scale(self) -> Array:
        """Factor on the index (measured over computed), (n,)."""
        return self._rows.scale.copy()

    @property
    def wi(self) -> Quantity:
        """Well index, (n,); zero in tight rock."""
        return as_quantity(kinds.WELL_INDEX, self.in_si().wi)

    def rows_in_si(self) -> Rows:
        """Return the table's columns as plain arrays in SI."""
        return self._rows

    def in_si(self) -> SIRows:
        """Return what a well needs, as plain arrays in SI."""
        rows = self._rows
        logarithm = np.log(rows.r0 / rows.rw) + rows.skin
        flows = rows.k_normal > 0.0
        wi = geometric_index(
            rows.k_normal, rows.length * rows.scale, rows.sector, np.where(flows, logarithm, 1.0)
        )
        return SIRows(wi, rows.depth, rows.block_depth)

    def columns(self) -> list[Column]:
        """Return the table's columns as plain numbers in the unit system in force."""
        rows = self._rows
        cells = [Column(n, "", rows.cell[:, a].tolist()) for a, n in enumerate("ijk")]
        lengths = [
            ("md_in", kinds.COORDINATE, rows.md_in),
            ("md_out", kinds.COORDINATE, rows.md_out),
            ("depth", kinds.COORDINATE, rows.depth),
            ("block_depth", kinds.COORDINATE, rows.block_depth),
            ("length", kinds.LENGTH, rows.length),
            ("k_normal", kinds.PERMEABILITY, rows.k_normal),
            ("r0", kinds.LENGTH, rows.r0),
            ("rw", kinds.LENGTH, rows.rw),
        ]
        plain = [(n, getattr(rows, n).tolist()) for n in ("skin", "sector", "scale")]
        wi, unit = number_in(kinds.WELL_INDEX, self.in_si().wi)
        return [
            *cells,
            *(measured(name, kind, values) for name, kind, values in lengths),
            *(Column(name, "", values) for name, values in plain),
            Column("wi", unit, wi.tolist()),
            Column("note", "", self.notes),
        ]

    def table(self) -> str:
        """Return an aligned text table in the unit system in force.

        A column of notes stands at its end where a row has one.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> print(rows.table()[:37])
        i  j  k  md_in  md_out  depth  block_
        """
        columns = self.columns()
        return aligned(columns if any(self.notes) else columns[:-1])

    def to_csv(self, path: str | os.PathLike[str]) -> None:
        """Write the table as CSV in the unit system in force; the header carries the units.

        Parameters
        ----------
        path : str or path
            The file to write; one that exists is replaced.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> import os, tempfile
        >>> with tempfile.TemporaryDirectory() as folder:
        ...     rows.to_csv(os.path.join(folder, "rows.csv"))
        ...     with open(os.path.join(folder, "rows.csv")) as file:
        ...         print(file.readline()[:24])
        i,j,k,md_in [m],md_out [
        """
        Table(self.columns()).to_csv(path)

    def to_json(self, path: str | os.PathLike[str]) -> None:
        """Write the table as JSON in the unit system in force: per column, unit and values.

        Parameters
        ----------
        path : str or path
            The file to write; one that exists is replaced.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> import json, os, tempfile
        >>> with tempfile.TemporaryDirectory() as folder:
        ...     rows.to_json(os.path.join(folder, "rows.json"))
        ...     with open(os.path.join(folder, "rows.json")) as file:
        ...         print(json.load(file)["length"])
        {'unit': 'm', 'values': [10.0]}
        """
        Table(self.columns()).to_json(path)

    def to_array(self) -> Array:
        """Return the table as a numpy structured array, in the unit system in force.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> print(f"{rows.to_array()['length'][0]:.1f}")
        10.0
        """
        columns = self.columns()
        kinds_of = {"i": "i8", "j": "i8", "k": "i8", "note": "U200"}
        array = np.empty(len(self), dtype=[(c.name, kinds_of.get(c.name, "f8")) for c in columns])
        for column in columns:
            array[column.name] = column.values
        return array

    def to_pandas(self) -> Any:
        """Return the table as a pandas DataFrame whose column names carry the units.

        Raises
        ------
        ImportError
            pandas is not installed.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> rows.to_pandas().shape
        (1, 16)
        """
        pandas = import_module("pandas")
        return pandas.DataFrame({header(column): column.values for column in self.columns()})

    def in_convention(self, convention: Convention, **data: Unpack[Contents]) -> Table:
        """Return the table that another code takes, its numbers in that code's convention.

        Parameters
        ----------
        convention : Convention
            What the number contains, where indices start, in which order, with which sign.
        **data
            What the number contains and the well index does not; see `Convention.number`.

        Returns
        -------
        Table
            Block indices and ``number``, with rw and skin beside it where it holds no skin.

        Raises
        ------
        UnitsError
            Something that the number contains is not given.
        DomainError
            An index whose skin cannot be taken out.

        Examples
        --------
        >>> from wellindex import Convention, Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> print(rows.in_convention(Convention("mD*m", first_index=1)))
        i  j  k   number
                  [mD*m]
        -  -  -  -------
        2  2  1  1068.81
        """
        if "length" not in data:
            data["length"] = self.length
        table = self if convention.skin_inside else self.with_skin(0.0)
        numbers = np.atleast_1d(convention.number(table.wi, **data))
        cells = {n: self._rows.cell[:, a] + convention.first_index for a, n in enumerate("ijk")}
        columns = [Column(n, "", cells[n].tolist()) for n in convention.order]
        columns.append(Column("number", convention.unit, numbers.tolist()))
        if not convention.skin_inside:
            columns.append(measured("rw", kinds.LENGTH, self._rows.rw))
            columns.append(Column("skin", "", self._rows.skin.tolist()))
        return Table(columns)

    def __getitem__(self, rows: Any) -> Couplings:
        """Return some rows: a slice, an array of row numbers or of bool, or one row number."""
        index = np.atleast_1d(np.arange(len(self))[rows])
        crossed = self._crossed
        return Couplings(
            Rows(*(column[index] for column in self._rows)),
            crossed=crossed._replace(
                components=crossed.components[index],
                sizes=crossed.sizes[:, index],
                k=crossed.k[:, index],
            ),
            method=self._method,
            notes=[self._notes[n] for n in index],
        )

    def scaled(self, factor: Any) -> Couplings:
        """Return the table with each row's scale multiplied (measured over computed).

        Parameters
        ----------
        factor : float or array, (n,)
            Zero or positive.

        Raises
        ------
        DomainError, ShapeError
            A negative factor; neither one factor nor one per row.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> print(f"{(rows.scaled(1.5).wi / rows.wi)[0].magnitude:.2f}")
        1.50
        """
        scaled: Couplings = self._with(factor=factor)
        return scaled

    def with_skin(self, skin: Any) -> Couplings:
        """Return the table with another skin; the equivalent radii stay.

        Parameters
        ----------
        skin : float or array, (n,)
            Local skin of each row.

        Raises
        ------
        DomainError, ShapeError
            ln(r0/rw) + skin not positive; neither one skin nor one per row.

        Examples
        --------
        >>> from wellindex import Path, Permeability, TensorGrid, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> well = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(well, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> print(f"{rows.with_skin(2.0).wi[0]:.3f}")
        6.614 cP*m**3/bar/day
        """
        changed: Couplings = self._with(skin=skin)
        return changed

    @reads
    def _with(self, *, factor: kinds.Scale | None = None, skin: kinds.Skin | None = None) -> Any:
        rows = self._rows
        for name, value in (("factor", factor), ("skin", skin)):
            if isinstance(value, np.ndarray) and value.shape != (len(self),):
                raise ShapeError(f"{name} is one value, or one per row ({len(self)})")
        if factor is not None:
            rows = rows._replace(scale=rows.scale * factor)
        if skin is not None:
            rows = rows._replace(skin=np.broadcast_to(skin, len(self)))
            flow_resistance(AT_ONCE, rows.r0, rows.rw, rows.skin, rows.k_normal)
        return Couplings(rows, crossed=self._crossed, method=self._method, notes=self.notes)

    def __str__(self) -> str:
        return self.table()

    def __repr__(self) -> str:
        return f"Couplings({len(self)} rows, {self.direction}, method {self.method!r})"


class SIRows(NamedTuple):
    """What a well needs of its couplings: index, depth and block depth, in SI."""

    wi: Array
    depth: Array
    block_depth: Array
