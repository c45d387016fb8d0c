"""The tables of a case that describe the reservoir, and values spread over its layers."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from wellindex.case.beside import Beside
from wellindex.case.cells import MOST_BLOCKS, read_cells, read_hexahedra
from wellindex.case.entries import (
    UNUSABLE,
    Entry,
    Reader,
    Table,
    all_or_nothing,
    number,
    quantity,
    whole,
)
from wellindex.errors import DomainError
from wellindex.fluid import Liquid
from wellindex.rock import Permeability
from wellindex.space.grid import TensorGrid
from wellindex.units import kinds
from wellindex.units.answers import as_quantity

Array = np.ndarray[Any, Any]

MOST_SIZES = 10_000
#: Edges of blocks further than this part of a size from where they belong are lost in rounding.
_LOST = 1e-6

_BLOCKS = (("dx", "dy", "dz"), ("origin",))
_ROCK = (("kx", "kz"), ("ky",))

position = quantity(kinds.COORDINATE, "8200 ft")
fraction = number(kinds.Fraction.__metadata__[0], "0.85")
_size = quantity(kinds.LENGTH, "150 ft")
_permeability = quantity(kinds.PERMEABILITY, "120 mD")


class Spread(NamedTuple):
    """One value for all couplings, or one per layer of the grid, or one per coupling."""

    per: str
    values: Any
    where: str

    def at(self, layers: Array) -> Any:
        """Return one value, or one per coupling; `layers` are the layers of the couplings."""
        if self.per == "layer":
            return self.values[layers]
        if self.per == "coupling" and len(self.values) != len(layers):
            raise DomainError(
                f"by_coupling holds {len(self.values)} values, and the well has {len(layers)} "
                "couplings: give one per row of its table, in order along the well"
            )
        return self.values


def read_grid(entry: Entry, beside: Beside) -> Any:
    """Read the cells; give a `TensorGrid` or a `HexahedralGrid`."""
    table = entry.table((), (*_BLOCKS[0], *_BLOCKS[1], "corners"))
    if table is None:
        return UNUSABLE
    form = table.form(_BLOCKS, (("corners",), ()))
    if form == 1:
        return table.read("corners", lambda each: read_hexahedra(each, beside))
    return UNUSABLE if form is None else _read_blocks(entry, table)


def _read_blocks(entry: Entry, table: Table) -> Any:
    """Read rows of sizes; give a `TensorGrid`."""
    sizes = [table.read(key, _sizes) for key in ("dx", "dy", "dz")]
    if not any(size is UNUSABLE for size in sizes):
        blocks = int(np.prod([len(size) for size in sizes]))
        if blocks > MOST_BLOCKS:
            table.problems.add(
                entry.where,
                f"{blocks} blocks are more than {MOST_BLOCKS}: keep the part around the wells",
            )
            return UNUSABLE
    origin = table.read("origin", read_point, as_quantity(kinds.COORDINATE, np.zeros(3), "si"))
    grid = table.build(TensorGrid, *sizes, origin=origin)
    if grid is not UNUSABLE and _sizes_are_lost(grid):
        table.problems.add(
            f"{entry.where}.origin", "so far away that rounding swallows the sizes of blocks"
        )
        return UNUSABLE
    return grid


def _sizes_are_lost(grid: TensorGrid) -> bool:
    sizes = (grid.dx, grid.dy, grid.dz)
    return any(
        np.any(np.abs(np.diff(edges) - size.m_as("m")) > _LOST * size.m_as("m"))
        for edges, size in zip(grid.edges(), sizes, strict=True)
    )


def _sizes(entry: Entry) -> Any:
    """Read a row of sizes: one text, ``{ size, count }``, or a list of these."""
    if isinstance(entry.value, list):
        parts = entry.items("a list of sizes", MOST_SIZES)
        if parts is None:
            return UNUSABLE
    else:
        parts = [entry]
    runs = all_or_nothing([_run_of_sizes(part) for part in parts])
    if runs is UNUSABLE:
        return UNUSABLE
    total = sum(count for _size, count in runs)
    if total > MOST_SIZES:
        entry.problems.add(entry.where, f"{total} blocks along one axis; at most {MOST_SIZES}")
        return UNUSABLE
    row = np.repeat([size for size, _count in runs], [count for _size, count in runs])
    return as_quantity(kinds.LENGTH, row, "si")


def _run_of_sizes(entry: Entry) -> Any:
    if isinstance(entry.value, dict):
        table = entry.table(("size", "count"))
        assert table is not None
        size, count = table.read("size", _size), table.read("count", whole(MOST_SIZES))
    else:
        size, count = _size(entry), 1
    return UNUSABLE if size is UNUSABLE or count is UNUSABLE else (size.magnitude, count)


def read_point(entry: Entry) -> Any:
    """Read one point; give its coordinates in SI."""
    needed = "a point of three texts, such as ['500 ft', '500 ft', '8200 ft']"
    if not isinstance(entry.value, list) or len(entry.value) != 3:
        return entry.refuse(needed)
    values = all_or_nothing([position(item) for item in entry.items(needed, 3) or []])
    if values is UNUSABLE:
        return UNUSABLE
    return as_quantity(kinds.COORDINATE, np.array([value.magnitude for value in values]), "si")


def read_rock(entry: Entry, grid: Any, beside: Beside) -> tuple[Any, Any]:
    """Read the rock; give a `Permeability` and net-to-gross."""
    table = entry.table((), (*_ROCK[0], *_ROCK[1], "permeability", "net_to_gross"))
    if table is None:
        return UNUSABLE, UNUSABLE
    form = table.form(_ROCK, (("permeability",), ()))

    def blocks(key: str, reader: Reader, default: Any) -> Any:
        return table.read(
            key, lambda each: _in_blocks(read_spread(each, reader, grid), grid), default
        )

    net_to_gross = blocks("net_to_gross", fraction, 1.0)
    if form == 1:
        return table.read("permeability", lambda e: read_cells(e, grid, beside)), net_to_gross
    kx = blocks("kx", _permeability, UNUSABLE)
    ky = blocks("ky", _permeability, kx)
    kz = blocks("kz", _permeability, UNUSABLE)
    return table.build(Permeability, kx, ky, kz), net_to_gross


def _in_blocks(spread: Any, grid: Any) -> Any:
    """Lay values per layer out over the grid."""
    if spread is UNUSABLE or spread.per == "all":
        return spread if spread is UNUSABLE else spread.values
    values = spread.values
    if isinstance(values, np.ndarray):
        return np.broadcast_to(values, grid.shape)
    return type(values)(np.broadcast_to(values.magnitude, grid.shape), values.units)


def read_spread(entry: Entry, reader: Reader, grid: Any, *, by_coupling: bool = False) -> Any:
    """Read one value, or a table with one list of values, by layer or by coupling."""
    if not isinstance(entry.value, dict):
        value = reader(entry)
        return UNUSABLE if value is UNUSABLE else Spread("all", value, entry.where)
    keys = ("by_layer", "by_coupling") if by_coupling else ("by_layer",)
    table = entry.table((), keys)
    assert table is not None
    given = [key for key in keys if key in table]
    if len(given) != 1:
        return entry.refuse("one value, or a table with " + " or ".join(keys))
    return _listed(table.entry(given[0]), reader, grid, given[0].removeprefix("by_"))


def _listed(entry: Entry, reader: Reader, grid: Any, per: str) -> Any:
    items = entry.items(f"a list of values, one per {per}", MOST_SIZES)
    values = UNUSABLE if items is None else all_or_nothing([reader(item) for item in items])
    if values is UNUSABLE or (per == "layer" and grid is UNUSABLE):
        return UNUSABLE
    if per == "layer" and len(values) != grid.shape[2]:
        layers = grid.shape[2]
        return entry.refuse(f"{layers} values, one per layer of the grid from the top down")
    if isinstance(values[0], float):
        return Spread(per, np.array(values), entry.where)
    row = np.array([value.magnitude for value in values])
    return Spread(per, type(values[0])(row, values[0].units), entry.where)


def read_fluid(entry: Entry) -> Any:
    """Read the fluid; give a `Liquid`."""
    table = entry.table(("viscosity", "formation_volume_factor"), ("density", "compressibility"))
    if table is None:
        return UNUSABLE
    factor = quantity(kinds.LIQUID_VOLUME_FACTOR, "1.25 rb/stb")
    return table.build(
        Liquid,
        viscosity=table.read("viscosity", quantity(kinds.VISCOSITY, "0.9 cP")),
        formation_volume_factor=table.read("formation_volume_factor", factor),
        density=table.read("density", quantity(kinds.DENSITY, "48 lbm/ft**3"), None),
        compressibility=table.read(
            "compressibility", quantity(kinds.COMPRESSIBILITY, "1.2e-5 1/psi"), None
        ),
    )
