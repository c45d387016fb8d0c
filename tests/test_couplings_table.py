"""The table of couplings: the one identity behind it, its exports re-read, its units."""

import csv
import json
import math
import re
from functools import partial
from pathlib import Path as FilePath
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import blocks_of, layered_couplings, metres, route, square_metres
from tests.strategies import Block
from wellindex import AssumptionWarning, Couplings, Permeability, couple, unit_system, ureg
from wellindex.table import Column, aligned

SYSTEMS = ["metric", "oilfield", "si", "darcy"]
MEASURED = ("md_in", "md_out", "depth", "block_depth", "length", "k_normal", "r0", "rw", "wi")
PLAIN = ("skin", "sector", "scale")
UNITS = {
    "metric": {"length": "m", "k_normal": "mD", "wi": "cP*m**3/day/bar"},
    "oilfield": {"length": "ft", "k_normal": "mD", "wi": "cP*rb/day/psi"},
    "si": {"length": "m", "k_normal": "m**2", "wi": "m**3"},
    "darcy": {"length": "cm", "k_normal": "D", "wi": "cP*cm**3/s/atm"},
}

close = partial(pytest.approx, abs=0)


def rows_of(block: Block, placement: str, parts: int) -> Couplings:
    """Couplings of one block, opened in so many places along it."""
    grid = blocks_of([block.dx], [block.dy], [block.dz])
    along = getattr(block, "d" + block.direction)
    middle = {"x": block.dx / 2, "y": block.dy / 2, "z": block.dz / 2}
    ends = [tuple((middle | {block.direction: end})[a] for a in "xyz") for end in (0.0, along)]
    marks = np.linspace(0.0, along, 2 * parts).reshape(parts, 2)
    k = (square_metres(getattr(block, name)) for name in ("kx", "ky", "kz"))
    return couple(
        route(*ends),  # type: ignore[arg-type]
        grid,
        Permeability(*k),
        rw=metres(block.rw),
        skin=block.skin,
        intervals=metres(marks),
        placement=placement,  # type: ignore[arg-type]
    )


@given(data=st.data(), block=strategies.blocks(), parts=st.integers(1, 4))
def test_the_identity_of_every_row(data: st.DataObject, block: Block, parts: int) -> None:
    rows = rows_of(block, data.draw(strategies.placements(block.direction)), parts)
    k_length = rows.k_normal.m_as("m**2") * rows.length.m_as("m")
    logarithm = np.log(rows.r0.m_as("m") / rows.rw.m_as("m"))
    flow = 2 * math.pi * rows.sector * k_length * rows.scale / (logarithm + rows.skin)
    assert rows.wi.m_as("m**3") == close(flow, rel=1e-12)
    assert len(rows) == parts


def test_columns_are_copies() -> None:
    rows = layered_couplings()
    before = rows.wi.m.copy()
    for name in ("cell", *PLAIN):
        getattr(rows, name)[...] = 99
    for name in MEASURED:
        getattr(rows, name).m[...] = 99.0
    assert rows.wi.m.tolist() == before.tolist()
    assert rows.cell[0].tolist() == [1, 1, 0]


def check_export(name: str, unit: str, values: list[float], rows: Couplings) -> None:
    """Compare one column, read again, with the table's own."""
    column = getattr(rows, name)
    if name in MEASURED:
        assert ureg.Quantity(np.array(values), unit).to(column.units).m == close(
            column.m, rel=1e-14
        )
    else:
        assert unit == ""
        assert values == column.tolist()


@pytest.mark.parametrize("system", SYSTEMS)
def test_csv_read_again(system: str, tmp_path: FilePath) -> None:
    rows = layered_couplings()
    with unit_system(system):
        rows.to_csv(tmp_path / "rows.csv")
    with open(tmp_path / "rows.csv", encoding="utf-8", newline="") as file:
        header, *body = list(csv.reader(file))
    columns = dict(zip(header, zip(*body, strict=True), strict=True))
    units = {}
    for title, values in columns.items():
        name, _, unit = title.removesuffix("]").partition(" [")
        units[name] = unit
        if name in (*MEASURED, *PLAIN):
            check_export(name, unit, [float(v) for v in values], rows)
    assert [[int(v) for v in columns[c]] for c in "ijk"] == rows.cell.T.tolist()
    assert list(columns["note"]) == rows.notes
    assert set(units) == {*"ijk", *MEASURED, *PLAIN, "note"}
    for name, unit in UNITS[system].items():
        assert ureg.Unit(units[name]) == ureg.Unit(unit)


@pytest.mark.parametrize("system", SYSTEMS)
def test_json_read_again(system: str, tmp_path: FilePath) -> None:
    rows = layered_couplings()
    with unit_system(system):
        rows.to_json(str(tmp_path / "rows.json"))
    columns = json.loads((tmp_path / "rows.json").read_text(encoding="utf-8"))
    for name in (*MEASURED, *PLAIN):
        check_export(name, columns[name]["unit"] or "", columns[name]["values"], rows)
    assert [columns[c]["values"] for c in "ijk"] == rows.cell.T.tolist()
    assert columns["note"] == {"unit": None, "values": rows.notes}


def test_what_is_no_number_becomes_null(tmp_path: FilePath) -> None:
    with pytest.warns(AssumptionWarning, match="not a number"):
        rows = layered_couplings(skin=-50.0, invalid="nan")
    rows.to_json(tmp_path / "rows.json")
    columns = json.loads((tmp_path / "rows.json").read_text(encoding="utf-8"))
    assert columns["wi"]["values"] == [None] * 4
    assert columns["length"]["values"] == rows.length.m.tolist()
    rows.to_csv(tmp_path / "rows.csv")
    assert (tmp_path / "rows.csv").read_text(encoding="utf-8").count("nan") == 8


def test_exports_replace_a_file(tmp_path: FilePath) -> None:
    file = tmp_path / "rows.csv"
    file.write_text("x" * 10_000, encoding="utf-8")
    layered_couplings().to_csv(file)
    assert len(file.read_text(encoding="utf-8").splitlines()) == 5


def words(line: str) -> list[tuple[str, int]]:
    """The words of a line with the place where each ends."""
    return [(match[0], match.end()) for match in re.finditer(r"\S+", line)]


@pytest.mark.parametrize("system", SYSTEMS)
def test_the_aligned_table(system: str) -> None:
    rows = layered_couplings()
    with unit_system(system):
        names, units, rule, *body = rows.table().splitlines()
        assert str(rows) == rows.table()
    assert set(rule) == {"-", " "}
    ends = {end: name for name, end in words(names)}
    found = {ends[end]: unit.strip("[]") for unit, end in words(units)}
    assert set(found) == set(MEASURED)
    for name, unit in UNITS[system].items():
        assert ureg.Unit(found[name]) == ureg.Unit(unit)
    assert len(body) == len(rows)
    for n, line in enumerate(body):
        values = {ends[end]: float(text) for text, end in words(line)}
        for name, unit in found.items():
            expected = getattr(rows, name)[n].m_as(unit)
            assert values[name] == pytest.approx(expected, rel=5e-6)
        assert [values[c] for c in "ijk"] == rows.cell[n].tolist()


def test_notes_stand_in_the_table_only_where_there_are_some() -> None:
    assert "note" not in layered_couplings().table()
    grid = blocks_of([50.0], [50.0], [5.0, 5.0])
    kx = ureg.Quantity(np.array([[[1.0, 0.0]]]), "mD")
    rows = couple(
        route((25, 25, 0), (25, 25, 10)), grid, Permeability(kx, "1 mD", "0 mD"), rw="0.1 m"
    )
    first, second = rows.table().splitlines()[3:]
    assert "note" in rows.table().splitlines()[0]
    assert second.endswith("no permeability across the well: index 0")
    assert first.endswith(f"{rows.wi[0].m:.6g}")


def test_a_table_without_units_has_no_line_for_them() -> None:
    text = aligned([Column("block", "", [7, 12]), Column("open", "", [True, False])])
    assert text.splitlines() == ["block  open", "-----  ----", "    7   yes", "   12    no"]


def test_repr_says_what_it_is() -> None:
    rows: Any = layered_couplings()
    assert repr(rows) == "Couplings(4 rows, z, method 'projection')"
