"""Whatever stands in a case file, the command ends with 0 or 2 and a message."""

import copy
import datetime
import json
from contextlib import suppress
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.case.cases import TEXT, command, document

NUMBERS = st.sampled_from(
    ["0", "-0.0", "1", "-1", "1e-320", "1e-300", "1e-12", "1e12", "1e150", "1e300", "1e999", "nan"]
)
TRADE = [
    "",
    "ft",
    "m",
    "mD",
    "D",
    "psi",
    "psig",
    "barg",
    "cP",
    "rb/stb",
    "lbm/ft**3",
    "stb/day",
    "degree",
]
WRONG = ["m3/h", "delta_degF", "Nm3", "ft**99", "((((m", "9**9", "%", "\u00b5m", "\0", "\ud7ff"]
UNITS = st.sampled_from(TRADE) | st.sampled_from(WRONG)
QUANTITIES = st.builds(lambda number, unit: f"{number} {unit}", NUMBERS, UNITS)
FILES = st.sampled_from(
    ["grid.npz", "rock.npz", "rock.csv", "survey.csv", "../rock.csv", "/dev/zero", "case.toml", ""]
)
PLAIN = (
    st.booleans()
    | st.integers(-(10**30), 10**30)
    | st.floats()
    | QUANTITIES
    | FILES
    | st.text(max_size=12)
    | st.dates()
    | st.just(datetime.time(1, 2))
)
KEYS = st.sampled_from(
    ["size", "count", "by_layer", "by_coupling", "from", "to", "name", "file", "unit", "head"]
) | st.text(max_size=4)
VALUES = st.recursive(
    PLAIN,
    lambda inner: st.lists(inner, max_size=6) | st.dictionaries(KEYS, inner, max_size=3),
    max_leaves=8,
)


def _toml(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return json.dumps(value).replace("\x7f", "\\u007f")
    if isinstance(value, list):
        return "[" + ", ".join(map(_toml, value)) + "]"
    if isinstance(value, dict):
        return "{" + ", ".join(f"{json.dumps(k)} = {_toml(v)}" for k, v in value.items()) + "}"
    return str(value)


def _places(value: Any, path: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    if not isinstance(value, (dict, list)):
        return []
    inner = value.items() if isinstance(value, dict) else enumerate(value)
    return [place for key, each in inner for place in [(*path, key), *_places(each, (*path, key))]]


SHAPE = (5, 5, 5)
FILED = f"""
title = "Files"
[grid]
corners = {{ file = "grid.npz", unit = "ft" }}
[rock]
permeability = {{ file = "rock.npz", unit = "mD" }}
{TEXT[TEXT.index("[fluid]") : TEXT.index("path = [")]}
wellbore_radius = "4 in"
block_pressure = "3600 psia"
at_pressure = "3000 psia"
method = "axis"
[wells.survey]
head = ["310 ft", "280 ft", "8200 ft"]
azimuth_offset = "3 degree"
stations = [["8200 ft", "10 degree", "40 degree"], ["8320 ft", "25 degree", "70 degree"]]
[[wells.open]]
from = "8250 ft"
to = "8290 ft"
"""
BASES = [document(), document(FILED)]


def _corners() -> np.ndarray[Any, Any]:
    corners = np.empty((*SHAPE, 8, 3))
    for n in range(8):
        step = np.array([n & 1, n >> 1 & 1, n >> 2 & 1])
        corners[..., n, :] = np.moveaxis(np.indices(SHAPE), 0, -1) + step
    return corners * np.array([150.0, 150.0, 25.0]) + np.array([0.0, 0.0, 8210.0])


@pytest.fixture(scope="module")
def case(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("fuzz")
    np.savez(folder / "grid.npz", corners=_corners())
    np.savez(folder / "rock.npz", kx=np.full(SHAPE, 90.0), kz=np.full(SHAPE, 7.0))
    rows = (f"{i},{j},{k},80,6" for i, j, k in np.ndindex(SHAPE))
    (folder / "rock.csv").write_text("\n".join(["i,j,k,kx [mD],kz [mD]", *rows]))
    (folder / "survey.csv").write_text(
        "measured_depth [ft],inclination [degree],azimuth [degree]\n8200,10,40\n8320,25,70\n"
    )
    return folder / "case.toml"


def _check(case: Path, content: bytes) -> int:
    case.write_bytes(content)
    answer = command("check", case)
    assert answer.code in (0, 2)
    assert bool(answer.err) == (answer.code == 2)
    assert answer.err.startswith("error: ") or answer.code == 0
    return answer.code


@pytest.mark.parametrize("base", BASES)
def test_what_the_fuzzing_writes_is_the_case(case: Path, base: dict[str, Any]) -> None:
    assert document(_with(base, []).decode()) == base
    assert _check(case, _with(base, [])) == 0


def _with(base: dict[str, Any], changes: list[tuple[tuple[Any, ...], Any]]) -> bytes:
    """A case with other values; a place that an earlier change took away is left out."""
    changed: Any = copy.deepcopy(base)
    for place, value in changes:
        inner = changed
        with suppress(KeyError, IndexError, TypeError):
            for key in place[:-1]:
                inner = inner[key]
            inner[place[-1]] = value
    lines = [f"{key} = {_toml(value)}" for key, value in changed.items()]
    return "\n".join(lines).encode("utf-8", "replace")


def _changes(values: st.SearchStrategy[Any]) -> st.SearchStrategy[bytes]:
    """Strategy of cases with up to three values changed."""
    return st.sampled_from(BASES).flatmap(
        lambda base: st.lists(
            st.tuples(st.sampled_from(_places(base)), values), min_size=1, max_size=3
        ).map(lambda changes: _with(base, changes))
    )


@given(content=_changes(VALUES))
def test_any_value_at_any_place(case: Path, content: bytes) -> None:
    _check(case, content)


@given(content=_changes(QUANTITIES))
def test_any_quantity_at_any_place(case: Path, content: bytes) -> None:
    _check(case, content)


@given(file=FILES, unit=UNITS)
def test_any_file_at_any_place(case: Path, file: str, unit: str) -> None:
    for place in (("grid", "corners"), ("rock", "permeability"), ("wells", 0, "survey")):
        _check(case, _with(BASES[1], [((*place, "file"), file), ((*place, "unit"), unit)]))


#: How the case takes a file that it does not name by itself.
TAKEN: dict[str, tuple[tuple[Any, ...], Any]] = {
    "rock.csv": (("rock", "permeability"), {"file": "rock.csv"}),
    "survey.csv": (
        ("wells", 0, "survey"),
        {"file": "survey.csv", "head": ["310 ft", "280 ft", "8200 ft"]},
    ),
}
_ARRAYS = st.sampled_from(["grid.npz", "rock.npz", "rock.csv", "survey.csv"])


@given(name=_ARRAYS, start=st.floats(0, 1), instead=st.binary(max_size=6))
def test_any_bytes_in_a_file_beside(case: Path, name: str, start: float, instead: bytes) -> None:
    file = case.with_name(name)
    content = file.read_bytes()
    place = int(start * len(content))
    filed = _with(BASES[1], [TAKEN[name]] if name in TAKEN else [])
    try:
        file.write_bytes(content[:place] + instead + content[place + len(instead) :])
        _check(case, filed)
    finally:
        file.write_bytes(content)


@given(
    changes=st.lists(
        st.tuples(
            st.tuples(*(st.integers(0, n - 1) for n in (*SHAPE, 8, 3))),
            st.floats() | st.sampled_from([0.0, 8210.0, 8260.0, 150.0, 300.0]),
        ),
        min_size=1,
        max_size=4,
    )
)
def test_any_corner(case: Path, changes: list[tuple[tuple[int, ...], float]]) -> None:
    file = case.with_name("grid.npz")
    content = file.read_bytes()
    corners = _corners()
    for place, value in changes:
        corners[place] = value
    try:
        np.savez(file, corners=corners)
        _check(case, _with(BASES[1], []))
    finally:
        file.write_bytes(content)


@given(content=st.binary(max_size=200) | st.text(max_size=200).map(lambda t: t.encode("utf-8")))
def test_any_bytes(case: Path, content: bytes) -> None:
    _check(case, content)


@given(start=st.integers(0, len(TEXT)), length=st.integers(0, 60), instead=st.text(max_size=5))
def test_any_part_lost(case: Path, start: int, length: int, instead: str) -> None:
    _check(case, (TEXT[:start] + instead + TEXT[start + length :]).encode("utf-8", "replace"))
