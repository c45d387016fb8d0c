"""The table of couplings: the one identity behind it, its exports re-read, its units."""

import csv
import json
import math
import pickle
import re
from functools import partial
from itertools import pairwise
from pathlib import Path as FilePath
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import blocks_of, layered_couplings, metres, rock, route, square_metres
from tests.strategies import Block
from wellindex import AssumptionWarning, Couplings, Permeability, couple, unit_system, ureg
from wellindex.table import Column, aligned

SYSTEMS = ["metric", "oilfield", "si", "darcy"]
MEASURED = ("md_in", "md_out", "depth", "block_depth", "length", "k_normal", "r0", "rw", "wi")
PLAIN = ("skin", "sector", "scale")
SIDES = {"x": ("west", "east"), "y": ("south", "north"), "z": ("top", "bottom")}
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
    at = {"x": block.dx / 2, "y": block.dy / 2, "z": block.dz / 2}
    for axis, sides in SIDES.items():
        if placement in (sides[0], "corner"):
            at[axis] = 0.0
        elif placement == sides[1]:
            at[axis] = getattr(block, "d" + axis)
    ends = [tuple((at | {block.direction: end})[a] for a in "xyz") for end in (0.0, along)]
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
    grid = blocks_of([50.0] * 3, [50.0] * 3, [5.0, 5.0])
    kx = ureg.Quantity(np.broadcast_to([1.0, 0.0], (3, 3, 2)), "mD")
    rows = couple(
        route((75, 75, 0), (75, 75, 10)), grid, Permeability(kx, "1 mD", "0 mD"), rw="0.1 m"
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


def wandering(turns: list[float], marks: list[float]) -> Couplings:
    """A vertical path up and down through ten layers, open in places."""
    depths = [0.0, *turns]
    path = route(*((75.0, 75.0, depth) for depth in depths))
    total = float(np.abs(np.diff(depths)).sum())
    opened = np.array(sorted(marks)).reshape(-1, 2) * total
    k = np.linspace(1e-14, 9e-13, 90).reshape(3, 3, 10)
    grid = blocks_of([50.0] * 3, [50.0] * 3, [10.0] * 10)
    return couple(path, grid, rock(k, k, k), rw="0.1 m", skin=1.0, intervals=metres(opened))


@given(
    turns=st.lists(st.integers(1, 99), min_size=1, max_size=6).filter(
        lambda turns: all(one != two for one, two in pairwise(turns))
    ),
    marks=st.lists(st.integers(0, 100), min_size=2, max_size=6, unique=True).filter(
        lambda marks: len(marks) % 2 == 0
    ),
)
def test_one_number_for_each_block(turns: list[int], marks: list[int]) -> None:
    rows = wandering([float(t) for t in turns], [m / 100 for m in marks])
    sums: dict[tuple[int, ...], float] = {}
    for cell, wi in zip(rows.cell.tolist(), rows.wi.m_as("m**3"), strict=True):
        sums[tuple(cell)] = sums.get(tuple(cell), 0.0) + float(wi)
    cell, wi = rows.by_cell()
    assert [tuple(c) for c in cell.tolist()] == list(sums)  # in the order of the first visit
    assert wi.m_as("m**3") == close(np.array(list(sums.values())), rel=1e-13)
    assert wi.check("[length]**3")
    assert cell.dtype.kind == "i"


def test_one_number_for_each_block_in_the_unit_system_in_force() -> None:
    rows = wandering([80.0, 20.0], [0.1, 0.5, 0.6, 0.9])
    assert len(rows.by_cell()[0]) < len(rows)
    with unit_system("oilfield"):
        assert rows.by_cell()[1].units == ureg.Unit("cP*rb/day/psi")
    cell, wi = layered_couplings().by_cell()
    assert cell.tolist() == layered_couplings().cell.tolist()
    assert wi.m.tolist() == layered_couplings().wi.m.tolist()


def test_a_block_with_an_unusable_row_has_no_number() -> None:
    with pytest.warns(AssumptionWarning, match="1 element is not a number"):
        rows = layered_couplings(
            skin=[0.0, -50.0, 0.0],
            intervals=[("0 m", "1 m"), ("2 m", "3 m"), ("5 m", "6 m")],
            invalid="nan",
        )
    assert np.isnan(rows.by_cell()[1].m).tolist() == [True, False]


def test_equal_tables() -> None:
    rows = layered_couplings()
    assert rows.equals(rows)
    assert rows.equals(layered_couplings())
    assert rows.equals(pickle.loads(pickle.dumps(rows)))
    with unit_system("oilfield"):
        assert rows.equals(layered_couplings())
    with pytest.warns(AssumptionWarning, match="4 elements are not a number"):
        lost = layered_couplings(skin=-50.0, invalid="nan")
    assert lost.equals(pickle.loads(pickle.dumps(lost)))


@pytest.mark.parametrize(
    "changed",
    [
        {"skin": 1.5000001},
        {"rw": "0.1000001 m"},
        {"net_to_gross": 0.999999},
        {"intervals": [("0 m", "19.49 m")]},
        {"intervals": [("0 m", "3 m")]},
    ],
)
def test_tables_that_differ(changed: dict[str, Any]) -> None:
    assert not layered_couplings().equals(layered_couplings(**changed))
    assert not layered_couplings(**changed).equals(layered_couplings())
