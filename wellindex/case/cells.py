"""What a case takes per cell from files beside it: corners of hexahedra, permeability."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any, BinaryIO

import numpy as np

from wellindex.case.arrays import Archive
from wellindex.case.beside import Beside
from wellindex.case.entries import UNUSABLE, Entry, line
from wellindex.errors import CaseError, UnitsError
from wellindex.rock import Permeability
from wellindex.space.hexahedral import HexahedralGrid
from wellindex.units import kinds
from wellindex.units.columns import read_columns
from wellindex.units.kinds import Kind
from wellindex.units.reading import KindReader, Problem, parse_unit
from wellindex.units.registry import ureg

Array = np.ndarray[Any, Any]

#: Cells of a grid, of either kind.
MOST_BLOCKS = 2_000_000
_INDICES = ("i", "j", "k")
_AXES = ("kx", "ky", "kz")


def read_hexahedra(entry: Entry, beside: Beside) -> Any:
    """Read ``{ file, unit }``; give a `HexahedralGrid`."""
    table = entry.table(("file", "unit"))
    if table is None:
        return UNUSABLE
    unit = table.read("unit", lambda each: _unit(each, kinds.COORDINATE, "ft"))

    def made(stream: BinaryIO, name: str) -> HexahedralGrid:
        archive = Archive(stream, name)
        corners = archive.numbers("corners", _not_corners)
        shape = corners.shape[:3]
        present = None
        if "present" in archive:
            present = archive.truths("present", lambda found: _not_of_grid(found, shape))
            corners = np.where(present[..., np.newaxis, np.newaxis], corners, 0.0)
        _refuse_nan(corners, name)
        grid = HexahedralGrid(ureg.Quantity(corners, unit), present=present)
        if not grid.present.any():
            raise CaseError(f"{name}: no cell exists and has a volume")
        return grid

    if "file" not in table or unit is UNUSABLE:
        return UNUSABLE
    return beside.read_bytes(table.entry("file"), made)


def _not_corners(shape: tuple[int, ...]) -> str | None:
    if len(shape) != 5 or shape[3:] != (8, 3) or 0 in shape:
        return "needs the shape (nx, ny, nz, 8, 3)"
    if math.prod(shape[:3]) > MOST_BLOCKS:
        return f"holds more than {MOST_BLOCKS} cells: keep the part around the wells"
    return None


def _not_of_grid(found: tuple[int, ...], shape: tuple[int, ...]) -> str | None:
    return None if found == shape else f"needs the shape of the grid, {shape}"


def _refuse_nan(corners: Array, name: str) -> None:
    broken = ~np.isfinite(corners).all(axis=(3, 4))
    if broken.any():
        cell = tuple(int(n) for n in np.argwhere(broken)[0])
        count = int(broken.sum())
        more = f" ({count} such cells)" if count > 1 else ""
        raise CaseError(
            f"{name}: cell {cell}: a corner is no finite number{more}; where a cell does not "
            "exist, say so in an array of bool named 'present'"
        )


def read_cells(entry: Entry, grid: Any, beside: Beside) -> Any:
    """Read ``{ file, unit }`` (.npz) or ``{ file }`` (.csv); give a `Permeability` per cell."""
    table = entry.table(("file",), ("unit",))
    if table is None or "file" not in table or grid is UNUSABLE:
        return UNUSABLE
    file = table.entry("file")
    if beside.suffix(file) == ".csv":
        if "unit" in table:
            table.problems.add(f"{entry.where}.unit", "leave it out: a CSV's header has the units")
        return beside.read_text(file, lambda lines, name: _from_csv(lines, name, grid))
    if beside.suffix(file) != ".npz":
        file.refuse("the name of a file that ends in .npz or .csv")
        return UNUSABLE
    if "unit" not in table:
        table.problems.add(f"{entry.where}.unit", "missing; the arrays of an .npz need it")
        return UNUSABLE
    unit = table.read("unit", lambda each: _unit(each, kinds.PERMEABILITY, "mD"))
    if unit is UNUSABLE:
        return UNUSABLE
    return beside.read_bytes(file, lambda stream, name: _from_npz(stream, name, grid, unit))


def _from_npz(stream: BinaryIO, name: str, grid: Any, unit: Any) -> Permeability:
    archive = Archive(stream, name)
    values = [
        archive.numbers(key, lambda found: _not_of_grid(found, grid.shape))
        for key in _AXES
        if key != "ky" or key in archive
    ]
    reader = KindReader(kinds.PERMEABILITY)
    return _permeability([reader.read(ureg.Quantity(each, unit)) for each in values], grid, name)


def _from_csv(lines: Iterable[str], name: str, grid: Any) -> Permeability:
    wanted = {**dict.fromkeys(_INDICES, ""), **dict.fromkeys(_AXES, "mD")}
    columns = read_columns(lines, name, wanted, optional=("ky",))
    numbers = _cell_numbers([columns[index] for index in _INDICES], grid.shape, name)
    values = []
    for key in _AXES:
        if key in columns:
            laid = np.full(grid.shape, np.nan)
            laid.flat[numbers] = _si(columns[key], kinds.PERMEABILITY, f"{name}: column {key!r}")
            values.append(laid)
    return _permeability(values, grid, name)


def _cell_numbers(indices: list[Array], shape: tuple[int, int, int], name: str) -> Array:
    """Return the flat number of each row's cell; refuse a cell outside the grid or one twice."""
    for index, values, count in zip(_INDICES, indices, shape, strict=True):
        wrong = (values != np.floor(values)) | (values < 0) | (values >= count)
        if wrong.any():
            raise CaseError(
                f"{name}: {index} = {values[int(np.argmax(wrong))]:g} is no cell of the grid: "
                f"whole numbers from 0 to {count - 1}"
            )
    numbers: Array = np.ravel_multi_index(tuple(each.astype(np.int64) for each in indices), shape)
    counts = np.bincount(numbers, minlength=math.prod(shape))
    if (counts > 1).any():
        raise CaseError(f"{name}: cell {_cell(counts > 1, shape)} stands twice")
    return numbers


def _cell(marked: Array, shape: tuple[int, int, int]) -> tuple[int, ...]:
    return tuple(int(n) for n in np.unravel_index(int(np.argmax(marked)), shape))


def _permeability(values: list[Array], grid: Any, name: str) -> Permeability:
    """Check values per cell (kx, kz or kx, ky, kz; SI); cells that do not exist need none."""
    kx, *middle, kz = values
    laid = (kx, *(middle or [kx]), kz)
    exists = grid.present
    for key, each in zip(_AXES, laid, strict=True):
        wrong = exists & ~((each >= 0.0) & np.isfinite(each))
        if wrong.any():
            cell = _cell(wrong, grid.shape)
            found = each[cell]
            given = "none is given" if np.isnan(found) else "it is negative or not finite"
            raise CaseError(f"{name}: cell {cell} needs {key}, zero or positive; {given}")
    return Permeability(*(ureg.Quantity(np.where(exists, each, 0.0), "m**2") for each in laid))


def _unit(entry: Entry, kind: Kind, example: str) -> Any:
    """Read the unit of an array; it must fit its kind."""
    text = line(40)(entry)
    if text is UNUSABLE:
        return UNUSABLE
    try:
        unit = parse_unit(text)
        KindReader(kind).read(ureg.Quantity(1.0, unit))
    except UnitsError:
        return entry.refuse(f"the unit of {kind.name}, such as {example!r}")
    except Problem as problem:
        return entry.refuse(f"the unit of {kind.name}, such as {example!r}", problem.remedy)
    return unit


def _si(values: Any, kind: Kind, where: str) -> Any:
    try:
        return KindReader(kind).read(values)
    except Problem as problem:
        raise CaseError(f"{where} needs {problem.needed}; {problem.remedy}") from None
