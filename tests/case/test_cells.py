"""Grid and rock from files beside the case: hexahedra from .npz, permeability from .npz and CSV."""

import csv
import io
import json
import pickle
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from tests.case.cases import BUNDLED, command, document, written
from wellindex import CaseError
from wellindex.case.schema import read_case

TEXT = BUNDLED.read_text(encoding="utf-8")
SHAPE = (21, 21, 5)
TOPS = 8210.0 + np.concatenate(([0.0], np.cumsum([18.0, 5.0, 34.0, 11.0, 27.0])))
LAYERS = {"kx": [85, 0, 140, 6, 62], "ky": [60, 0, 100, 6, 45], "kz": [9, 0, 15, 0.3, 6]}
GRID = TEXT[TEXT.index("dx = ") : TEXT.index("[rock]")]
ROCK = TEXT[TEXT.index("kx = ") : TEXT.index("net_to_gross")]
CORNERS = 'corners = { file = "grid.npz", unit = "ft" }\n'
FROM_NPZ = 'permeability = { file = "rock.npz", unit = "mD" }\n'
FROM_CSV = 'permeability = { file = "rock.csv" }\n'


def _corners() -> np.ndarray[Any, Any]:
    """Corners of the bundled grid, by the rule corner = i + 2 j + 4 k."""
    corners = np.empty((*SHAPE, 8, 3))
    i, j, k = np.indices(SHAPE)
    for n in range(8):
        corners[..., n, 0] = 150.0 * (i + (n & 1))
        corners[..., n, 1] = 150.0 * (j + (n >> 1 & 1))
        corners[..., n, 2] = TOPS[k + (n >> 2 & 1)]
    return corners


def _rock() -> dict[str, np.ndarray[Any, Any]]:
    return {key: np.broadcast_to(np.array(values, float), SHAPE) for key, values in LAYERS.items()}


def _csv(ky: bool = True) -> str:
    text = io.StringIO()
    writer = csv.writer(text)
    names = ["kz", "kx", *(["ky"] if ky else [])]
    writer.writerow(["i", "j", "k", *(f"{name} [D]" for name in names)])
    for cell in np.ndindex(SHAPE):
        writer.writerow([*cell, *(LAYERS[name][cell[2]] / 1000.0 for name in names)])
    return text.getvalue()


def _with(grid: str = GRID, rock: str = ROCK) -> str:
    return TEXT.replace(GRID, grid).replace(ROCK, rock)


def _results(folder: Path, text: str) -> dict[str, Any]:
    answer = command("run", written(folder, text), "--out", folder / "out", "--force")
    assert answer.code == 0, answer.err
    results: dict[str, Any] = json.loads((folder / "out" / "results.json").read_text())
    return results


def _same(found: dict[str, Any], wanted: dict[str, Any]) -> None:
    """The same couplings and rates to 1e-10; notes speak of the kind of grid."""
    (one,), (other,) = found["wells"], wanted["wells"]
    for name, column in other["couplings"].items():
        if name == "note":
            continue
        values = one["couplings"][name]["values"]
        if isinstance(column["values"][0], float):
            assert values == pytest.approx(column["values"], rel=1e-10, abs=1e-9), name
        else:
            assert values == column["values"], name
    for name in ("surface_rate", "bottom_hole_pressure"):
        assert one[name]["value"] == pytest.approx(other[name]["value"], rel=1e-10)


@pytest.fixture
def wanted(tmp_path: Path) -> dict[str, Any]:
    """Results of the bundled case, whose grid and rock stand in its text."""
    return _results(tmp_path, TEXT)


@pytest.mark.parametrize("save", [np.savez, np.savez_compressed])
@pytest.mark.parametrize("order", ["C", "F"])
def test_hexahedra_cut_from_blocks_are_the_blocks(
    save: Callable[..., None], order: str, tmp_path: Path, wanted: dict[str, Any]
) -> None:
    save(tmp_path / "grid.npz", corners=np.asarray(_corners(), order=order))
    found = _results(tmp_path, _with(CORNERS))
    _same(found, wanted)
    assert [each["file"] for each in found["files"]] == ["grid.npz"]
    assert command("check", tmp_path / "case.toml").out.endswith("grid of 21 x 21 x 5 blocks\n")


def test_the_unit_of_the_corners(tmp_path: Path, wanted: dict[str, Any]) -> None:
    np.savez(tmp_path / "grid.npz", corners=(_corners() * 0.3048).astype(">f8"))
    _same(_results(tmp_path, _with(CORNERS.replace('"ft"', '"m"'))), wanted)


def test_whole_numbers_are_numbers(tmp_path: Path, wanted: dict[str, Any]) -> None:
    np.savez(tmp_path / "grid.npz", corners=_corners().astype(np.int32))
    _same(_results(tmp_path, _with(CORNERS)), wanted)


def test_cells_that_do_not_exist_need_no_corners(tmp_path: Path, wanted: dict[str, Any]) -> None:
    corners, present = _corners(), np.ones(SHAPE, dtype=bool)
    present[0, :, 2] = False
    corners[0, :, 2] = np.nan
    np.savez(tmp_path / "grid.npz", corners=corners, present=present)
    _same(_results(tmp_path, _with(CORNERS)), wanted)
    present[9, 9, 4] = False
    np.savez(tmp_path / "grid.npz", corners=corners, present=present)
    (well,) = _results(tmp_path, _with(CORNERS))["wells"]
    assert 4 not in well["couplings"]["k"]["values"]
    assert "lies outside the grid" in " ".join("".join(well["cautions"]).split())


def test_permeability_per_cell(tmp_path: Path, wanted: dict[str, Any]) -> None:
    np.savez(tmp_path / "rock.npz", **_rock())
    _same(_results(tmp_path, _with(rock=FROM_NPZ)), wanted)
    (tmp_path / "rock.csv").write_text(_csv())
    _same(_results(tmp_path, _with(rock=FROM_CSV)), wanted)
    np.savez(tmp_path / "grid.npz", corners=_corners())
    _same(_results(tmp_path, _with(CORNERS, FROM_CSV)), wanted)


def test_ky_defaults_to_kx_per_cell(tmp_path: Path) -> None:
    wanted = _results(tmp_path, TEXT.replace("ky = {", "#"))
    rock = _rock()
    del rock["ky"]
    np.savez(tmp_path / "rock.npz", **rock)
    _same(_results(tmp_path, _with(rock=FROM_NPZ)), wanted)
    (tmp_path / "rock.csv").write_text(_csv(ky=False))
    _same(_results(tmp_path, _with(rock=FROM_CSV)), wanted)


def test_one_cell_of_its_own(tmp_path: Path, wanted: dict[str, Any]) -> None:
    """Twice the permeability in one crossed cell is twice that row's index, and no other's."""
    rock = {key: values.copy() for key, values in _rock().items()}
    (before,) = wanted["wells"]
    row = before["couplings"]["k"]["values"].index(2)
    cell = tuple(before["couplings"][axis]["values"][row] for axis in "ijk")
    for values in rock.values():
        values[cell] *= 2.0
    np.savez(tmp_path / "rock.npz", **rock)
    (after,) = _results(tmp_path, _with(rock=FROM_NPZ))["wells"]
    ratio = [2.0 if n == row else 1.0 for n in range(len(before["couplings"]["k"]["values"]))]
    expected = np.multiply(before["couplings"]["wi"]["values"], ratio)
    assert after["couplings"]["wi"]["values"] == pytest.approx(expected.tolist(), rel=1e-12)


def test_absent_cells_need_no_permeability(tmp_path: Path, wanted: dict[str, Any]) -> None:
    present = np.ones(SHAPE, dtype=bool)
    present[20] = False
    np.savez(tmp_path / "grid.npz", corners=_corners(), present=present)
    rows = [row for row in _csv().splitlines() if not row.startswith("20,")]
    (tmp_path / "rock.csv").write_text("\n".join(rows))
    _same(_results(tmp_path, _with(CORNERS, FROM_CSV)), wanted)
    rock = {key: np.where(present, values, np.nan) for key, values in _rock().items()}
    np.savez(tmp_path / "rock.npz", **rock)
    _same(_results(tmp_path, _with(CORNERS, FROM_NPZ)), wanted)


def _npz(**arrays: Any) -> bytes:
    stream = io.BytesIO()
    np.savez(stream, **arrays)
    return stream.getvalue()


def _member(content: bytes, name: str = "corners.npy", method: int = zipfile.ZIP_STORED) -> bytes:
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w", method) as file:
        file.writestr(name, content)
    return stream.getvalue()


def _changed(cell: tuple[int, int, int], values: Any) -> bytes:
    corners = _corners()
    corners[cell] = values
    return _npz(corners=corners)


def _declaring(shape: tuple[int, ...]) -> bytes:
    """A header that promises more than the file holds."""
    stream = io.BytesIO()
    np.lib.format.write_array_header_1_0(
        stream, {"descr": "<f8", "fortran_order": False, "shape": shape}
    )
    return _member(stream.getvalue())


class _Trap:
    """Unpickling it would write a file."""

    def __reduce__(self) -> tuple[Any, tuple[str, str]]:
        return open, ("trap_has_sprung", "w")


def _object_array() -> bytes:
    return _npz(corners=np.array([_Trap()], dtype=object))


SMALL = np.zeros((1, 1, 1, 8, 3))
GRIDS: dict[str, tuple[bytes, str]] = {
    "no array": (_npz(nodes=SMALL), "no array named 'corners'; it holds 'nodes'"),
    "empty archive": (_npz(), "no array named 'corners'; it holds nothing"),
    "a pickled object": (_object_array(), "'corners' holds Python objects; those are never unpick"),
    "a pickle": (pickle.dumps(_Trap()), "this is no .npz file"),
    "text": (b"corners", "this is no .npz file"),
    "empty": (b"", "this is no .npz file"),
    "an .npy": (_npz(corners=SMALL)[:0] + b"\x93NUMPY\x01\x00v\x00", "this is no .npz file"),
    "half a file": (_npz(corners=_corners())[:60_000], "this is no .npz file"),
    "texts": (_npz(corners=np.array(["a"])), "'corners' needs real numbers; it holds <U1"),
    "complex": (_npz(corners=SMALL + 1j), "'corners' needs real numbers; it holds complex128"),
    "bool": (_npz(corners=SMALL > 0), "'corners' needs real numbers; it holds bool"),
    "four corners": (
        _npz(corners=np.zeros((2, 1, 1, 4, 3))),
        "'corners' needs the shape (nx, ny, nz, 8, 3); its shape is (2, 1, 1, 4, 3)",
    ),
    "flat": (_npz(corners=np.zeros((8, 3))), "needs the shape (nx, ny, nz, 8, 3)"),
    "no cell": (_npz(corners=np.zeros((0, 1, 1, 8, 3))), "needs the shape (nx, ny, nz, 8, 3)"),
    "nan": (_changed((3, 0, 1), np.nan), "cell (3, 0, 1): a corner is no finite number;"),
    "infinite": (_changed((0, 2, 4), np.inf), "cell (0, 2, 4): a corner is no finite number;"),
    "inverted": (
        _changed((4, 5, 1), _corners()[4, 5, 1][[4, 5, 6, 7, 0, 1, 2, 3]]),
        "cell (4, 5, 1): it is inverted",
    ),
    "out of order": (
        _changed((4, 5, 1), _corners()[4, 5, 1][[0, 1, 3, 2, 4, 5, 6, 7]]),
        "cell (4, 5, 1): its corners are out of order",
    ),
    "pinched out everywhere": (_npz(corners=SMALL), "no cell exists and has a volume"),
    "promises a million million cells": (
        _declaring((10**4, 10**4, 10**4, 8, 3)),
        "'corners' holds more than 2000000 cells",
    ),
    "promises more than it holds": (_declaring((9, 9, 9, 8, 3)), "cannot read 'corners'"),
    "negative size": (_declaring((-1, -1, 1, 8, 3)), "'corners'"),
    "no header": (_member(b"corners"), "cannot read 'corners'"),
    "code for a header": (
        _member(b"\x93NUMPY\x01\x00\x20\x00" + b"__import__('os').getcwd()".ljust(31) + b"\n"),
        "cannot read 'corners'",
    ),
    "a later format": (
        _member(b"\x93NUMPY\x03\x00\x00\x00\x00\x00"),
        "cannot read 'corners': arrays of format (3, 0) are not read",
    ),
    "packed otherwise": (
        _member(b"corners", method=zipfile.ZIP_LZMA),
        "cannot read 'corners': it is packed in a way that numpy does not write",
    ),
    "present of another shape": (
        _npz(corners=_corners(), present=np.ones((1, 1, 1), dtype=bool)),
        "'present' needs the shape of the grid, (21, 21, 5); its shape is (1, 1, 1)",
    ),
    "present of numbers": (
        _npz(corners=_corners(), present=np.ones(SHAPE)),
        "'present' needs bool; it holds float64",
    ),
    "nothing present": (
        _npz(corners=_corners(), present=np.zeros(SHAPE, dtype=bool)),
        "no cell exists and has a volume",
    ),
}


@pytest.mark.parametrize("name", GRIDS)
def test_a_bad_grid_is_refused_in_words(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    content, words = GRIDS[name]
    (tmp_path / "grid.npz").write_bytes(content)
    case = written(tmp_path, _with(CORNERS))
    answer = command("run", case, "--out", tmp_path / "out")
    assert (answer.code, answer.out) == (2, "")
    assert words in answer.err
    assert "1 problem\n  grid.corners.file: grid.npz: " in answer.err
    assert sorted(each.name for each in tmp_path.iterdir()) == ["case.toml", "grid.npz"]


def _without(text: str, start: str) -> str:
    return "\n".join(row for row in text.splitlines() if not row.startswith(start))


ROCKS: dict[str, tuple[str, bytes, str]] = {
    "array missing": ("npz", _npz(kx=_rock()["kx"]), "rock.npz: no array named 'kz'"),
    "another grid": (
        "npz",
        _npz(kx=np.ones((2, 2, 2)), kz=np.ones((2, 2, 2))),
        "'kx' needs the shape of the grid, (21, 21, 5); its shape is (2, 2, 2)",
    ),
    "negative": (
        "npz",
        _npz(kx=_rock()["kx"], kz=-_rock()["kz"]),
        "cell (0, 0, 0) needs kz, zero or positive; it is negative or not finite",
    ),
    "nan": ("npz", _npz(kx=_rock()["kx"] * np.nan, kz=_rock()["kz"]), "needs kx, zero or positive"),
    "object": (
        "npz",
        _npz(kx=np.array([_Trap()], dtype=object)),
        "rock.npz: 'kx' holds Python objects",
    ),
    "no column": ("csv", _csv().replace("kx [D]", "k_x").encode(), "no column 'kx' in the header"),
    "no unit": ("csv", _csv().replace("kx [D]", "kx").encode(), "column 'kx' has no unit"),
    "unit of a length": ("csv", _csv().replace("kx [D]", "kx [m]").encode(), "column 'kx' needs a"),
    "unit of an index": (
        "csv",
        _csv().replace("i,j", "i [m],j", 1).encode(),
        "column 'i' holds plain numbers, without a unit",
    ),
    "cell twice": (
        "csv",
        (_csv() + "3,4,1,0,0,0\n").encode(),
        "rock.csv: cell (3, 4, 1) stands twice",
    ),
    "cell missing": (
        "csv",
        _without(_csv(), "3,4,1,").encode(),
        "cell (3, 4, 1) needs kx, zero or positive; none is given",
    ),
    "counted from one": (
        "csv",
        _csv().replace("20,20,4,", "21,20,4,").encode(),
        "i = 21 is no cell of the grid: whole numbers from 0 to 20",
    ),
    "half a cell": ("csv", _csv().replace("20,20,4,", "20,19.5,4,").encode(), "j = 19.5 is no"),
    "negative in a row": (
        "csv",
        _csv().replace("20,20,4,0.006", "20,20,4,-0.006").encode(),
        "cell (20, 20, 4) needs kz, zero or positive; it is negative",
    ),
    "not utf-8": ("csv", b"\xff" + _csv().encode(), "rock.csv: "),
}


@pytest.mark.parametrize("name", ROCKS)
def test_bad_rock_is_refused_in_words(name: str, tmp_path: Path) -> None:
    ending, content, words = ROCKS[name]
    (tmp_path / f"rock.{ending}").write_bytes(content)
    case = written(tmp_path, _with(rock=FROM_NPZ if ending == "npz" else FROM_CSV))
    answer = command("run", case, "--out", tmp_path / "out")
    assert (answer.code, answer.out) == (2, "")
    assert f"1 problem\n  rock.permeability.file: rock.{ending}: " in answer.err
    assert words in answer.err
    assert not (tmp_path / "out").exists()


KEYS = {
    "blocks and corners": (
        _with(GRID + CORNERS),
        "grid: give either dx, dy, dz or corners; got keys of both",
    ),
    "neither": (_with(""), "grid: give either dx, dy, dz or corners; got neither"),
    "a row missing": (TEXT.replace("dz = [", "# ["), "grid.dz: missing; the table grid needs it"),
    "corners as a text": (
        _with('corners = "grid.npz"\n'),
        "grid.corners: needs a table with the keys file, unit; got 'grid.npz'",
    ),
    "corners without unit": (
        _with('corners = { file = "grid.npz" }\n'),
        "grid.corners.unit: missing",
    ),
    "unit of a permeability": (
        _with(CORNERS.replace('"ft"', '"mD"')),
        "grid.corners.unit: needs the unit of a position, such as 'ft'; got 'mD'",
    ),
    "no unit at all": (_with(CORNERS.replace('"ft"', '"7 ft"')), "grid.corners.unit: needs the"),
    "unit as a number": (_with(CORNERS.replace('"ft"', "1")), "grid.corners.unit: needs a text"),
    "no such file": (_with(CORNERS), "grid.corners.file: grid.npz: there is no such file"),
    "other ending": (
        _with(CORNERS.replace(".npz", ".csv")),
        "grid.corners.file: needs the name of a file that ends in .npz",
    ),
    "leads out": (
        _with(CORNERS.replace("grid.npz", "../grid.npz")),
        "grid.corners.file: needs the name of a file in the folder of the case or below",
    ),
    "values and file": (
        _with(rock=ROCK + FROM_CSV),
        "rock: give either kx, kz or permeability; got keys of both",
    ),
    "no rock": (_with(rock=""), "rock: give either kx, kz or permeability; got neither"),
    "rock without unit": (
        _with(rock='permeability = { file = "rock.npz" }\n'),
        "rock.permeability.unit: missing; the arrays of an .npz need it",
    ),
    "rock with a unit twice": (
        _with(rock='permeability = { file = "rock.csv", unit = "mD" }\n'),
        "rock.permeability.unit: leave it out: a CSV's header has the units",
    ),
    "rock without a file": (
        _with(rock='permeability = { unit = "mD" }\n'),
        "rock.permeability.file: missing",
    ),
    "rock of another ending": (
        _with(rock='permeability = { file = "rock.xls", unit = "mD" }\n'),
        "rock.permeability.file: needs the name of a file that ends in .npz or .csv",
    ),
}


@pytest.mark.parametrize("name", KEYS)
def test_bad_keys_are_refused_in_words(name: str, tmp_path: Path) -> None:
    text, *words = KEYS[name]
    case = written(tmp_path, text)
    answer = command("run", case, "--out", tmp_path / "out")
    assert (answer.code, answer.out) == (2, "")
    for part in words:
        assert part in answer.err
    assert list(tmp_path.iterdir()) == [case]


def test_corners_beyond_what_a_float_holds(tmp_path: Path) -> None:
    np.savez(tmp_path / "grid.npz", corners=_corners() * 1e304)
    answer = command("check", written(tmp_path, _with(CORNERS.replace('"ft"', '"km"'))))
    assert answer.code == 2
    assert "grid.npz: its numbers cannot be calculated with" in answer.err


def test_a_disk_that_fails(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*_args: object) -> None:
        raise OSError(5, "Input/output error")

    np.savez(tmp_path / "grid.npz", corners=_corners())
    monkeypatch.setattr("wellindex.case.beside.hashlib.file_digest", fail)
    answer = command("check", written(tmp_path, _with(CORNERS)))
    assert answer.code == 2
    assert "grid.npz: cannot read the file: Input/output error" in answer.err


def test_a_document_without_a_folder_names_no_files() -> None:
    with pytest.raises(CaseError, match=r"grid\.npz: this case was not read from a folder"):
        read_case(document(_with(CORNERS)))


def test_rock_as_a_text(tmp_path: Path) -> None:
    text = TEXT.replace("[units]", 'rock = "sand"\n[units]').replace("[rock]", "[other]")
    answer = command("check", written(tmp_path, text))
    assert answer.code == 2
    assert "rock: needs a table with the keys kx, kz, ky, permeability, net_to_gross" in answer.err


def test_an_npz_too_large(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("wellindex.case.beside.LARGEST_NPZ", 1000)
    np.savez(tmp_path / "grid.npz", corners=_corners())
    answer = command("check", written(tmp_path, _with(CORNERS)))
    assert answer.code == 2
    assert "grid.npz: the file is larger than 1000 bytes" in answer.err


def test_too_many_cells_on_the_paths(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("wellindex.case.wells.MOST_CROSSINGS", 20)
    np.savez(tmp_path / "grid.npz", corners=_corners())
    answer = command("check", written(tmp_path, _with(CORNERS)))
    assert answer.code == 2
    assert "the paths pass more than 20 points and faces of blocks" in answer.err
