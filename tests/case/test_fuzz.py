"""Whatever stands in a case file, the command ends with 0 or 2 and a message."""

import copy
import datetime
import json
from contextlib import suppress
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.case.cases import TEXT, command, document

NUMBERS = st.sampled_from(
    ["0", "-0.0", "1", "-1", "1e-320", "1e-300", "1e-12", "1e12", "1e150", "1e300", "1e999", "nan"]
)
TRADE = ["", "ft", "m", "mD", "D", "psi", "psig", "barg", "cP", "rb/stb", "lbm/ft**3", "stb/day"]
WRONG = ["m3/h", "delta_degF", "Nm3", "ft**99", "((((m", "9**9", "%", "\u00b5m", "\0", "\ud7ff"]
UNITS = st.sampled_from(TRADE) | st.sampled_from(WRONG)
QUANTITIES = st.builds(lambda number, unit: f"{number} {unit}", NUMBERS, UNITS)
PLAIN = (
    st.booleans()
    | st.integers(-(10**30), 10**30)
    | st.floats()
    | QUANTITIES
    | st.text(max_size=12)
    | st.dates()
    | st.just(datetime.time(1, 2))
)
KEYS = st.sampled_from(
    ["size", "count", "by_layer", "by_coupling", "from", "to", "name"]
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


PLACES = _places(document())


@pytest.fixture(scope="module")
def case(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("fuzz") / "case.toml"


def _check(case: Path, content: bytes) -> int:
    case.write_bytes(content)
    answer = command("check", case)
    assert answer.code in (0, 2)
    assert bool(answer.err) == (answer.code == 2)
    assert answer.err.startswith("error: ") or answer.code == 0
    return answer.code


def test_what_the_fuzzing_writes_is_the_case(case: Path) -> None:
    assert document(_with([]).decode()) == document()
    assert _check(case, _with([])) == 0


def _with(changes: list[tuple[tuple[Any, ...], Any]]) -> bytes:
    """The case with other values; a place that an earlier change took away is left out."""
    changed: Any = copy.deepcopy(document())
    for place, value in changes:
        inner = changed
        with suppress(KeyError, IndexError, TypeError):
            for key in place[:-1]:
                inner = inner[key]
            inner[place[-1]] = value
    lines = [f"{key} = {_toml(value)}" for key, value in changed.items()]
    return "\n".join(lines).encode("utf-8", "replace")


@given(changes=st.lists(st.tuples(st.sampled_from(PLACES), VALUES), min_size=1, max_size=3))
def test_any_value_at_any_place(case: Path, changes: list[tuple[tuple[Any, ...], Any]]) -> None:
    _check(case, _with(changes))


@given(changes=st.lists(st.tuples(st.sampled_from(PLACES), QUANTITIES), min_size=1, max_size=3))
def test_any_quantity_at_any_place(case: Path, changes: list[tuple[tuple[Any, ...], Any]]) -> None:
    _check(case, _with(changes))


@given(content=st.binary(max_size=200) | st.text(max_size=200).map(lambda t: t.encode("utf-8")))
def test_any_bytes(case: Path, content: bytes) -> None:
    _check(case, content)


@given(start=st.integers(0, len(TEXT)), length=st.integers(0, 60), instead=st.text(max_size=5))
def test_any_part_lost(case: Path, start: int, length: int, instead: str) -> None:
    _check(case, (TEXT[:start] + instead + TEXT[start + length :]).encode("utf-8", "replace"))
