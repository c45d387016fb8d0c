"""What the library answers with cannot be changed: not by its accessors, not by what was given."""

import pickle
from collections.abc import Callable, Iterator
from typing import Any

import numpy as np
import pint
import pytest

from tests.builders import blocks_of, brine, layered_couplings, layered_well, metres, pascals, rock
from wellindex import (
    Convention,
    Couplings,
    Liquid,
    Path,
    Permeability,
    RadialProfile,
    TensorGrid,
    Well,
    WellState,
    Workings,
    couple,
    radial_profile,
    unit_system,
    ureg,
    workings,
)

PRESENT = np.ones((3, 3, 4), dtype=bool)


def grid() -> TensorGrid:
    return blocks_of([80.0] * 3, [120.0] * 3, [4.0, 7.0, 2.5, 6.0], present=PRESENT.copy())


def path() -> Path:
    return Path(metres([(120.0, 180.0, 0.0), (120.0, 180.0, 19.5)]), measured_depth="10 m")


def per_block() -> Permeability:
    k = np.linspace(1e-14, 9e-13, 36).reshape(3, 3, 4)
    return rock(k, 2 * k, k)


def profile() -> RadialProfile:
    return radial_profile(
        dx="80 m", dy="60 m", kx="90 mD", ky="10 mD", rw="0.1 m", pwf="150 bar", p_block="200 bar"
    )


def state() -> WellState:
    return layered_well(relative_permeability=np.array([0.5, 0.6, 0.7, 0.8])).at_pressure(
        "150 bar", block_pressure=pascals([2e7, 2.1e7, 2e7, 2.2e7])
    )


THINGS: dict[str, Callable[[], Any]] = {
    "grid": grid,
    "path": path,
    "rock": per_block,
    "even rock": lambda: Permeability("9 mD", "9 mD", "1 mD"),
    "liquid": lambda: brine(compressibility="1e-5 1/bar"),
    "couplings": layered_couplings,
    "well": layered_well,
    "state": state,
    "states": lambda: layered_well().at_pressure(
        pascals([1e7, 1.1e7]), block_pressure=pascals([2e7, 2.1e7, 2e7, 2.2e7])
    ),
    "profile": profile,
    "workings": lambda: workings(layered_couplings()),
    "convention": lambda: Convention("mD*ft"),
}
#: Methods without arguments that answer with arrays, lists or tuples.
CALLED = {
    "grid": ["edges"],
    "path": ["in_si"],
    "liquid": ["in_si"],
    "couplings": ["by_cell", "rows_in_si", "in_si", "columns"],
    "state": ["columns"],
}


def attributes(thing: Any) -> list[str]:
    """Every public name that holds a value."""
    return [n for n in dir(thing) if not n.startswith("_") and not callable(getattr(thing, n))]


def parts(value: Any) -> Iterator[Any]:
    """A value and everything inside it that could be changed in place."""
    yield value
    if isinstance(value, pint.Quantity):
        yield value.magnitude
    elif isinstance(value, dict):
        for item in value.values():
            yield from parts(item)
    elif isinstance(value, (list, tuple)):
        for item in value:
            yield from parts(item)


def spoil(value: Any) -> None:
    """Try to change all of a value in place."""
    for part in parts(value):
        try:
            if isinstance(part, np.ndarray):
                part[...] = not part.flat[0] if part.dtype == bool else 77
            elif isinstance(part, pint.Quantity):
                part.ito_base_units()
                part *= 3.0
            elif isinstance(part, (list, dict)):
                part.clear()
        except (ValueError, TypeError):
            continue  # it cannot be written to


def snapshot(thing: Any) -> Any:
    """All of a thing's values as plain text and numbers, in SI units, wherever it holds them."""
    if isinstance(thing, pint.Quantity):
        base = thing.to_base_units()
        return np.array(base.magnitude).tolist(), str(base.units)
    if isinstance(thing, np.ndarray):
        return thing.tolist()
    if isinstance(thing, dict):
        return {key: snapshot(value) for key, value in thing.items()}
    if isinstance(thing, (list, tuple)):
        return [snapshot(value) for value in thing]
    if type(thing).__module__.startswith("wellindex."):
        return {name: snapshot(getattr(thing, name)) for name in attributes(thing)} | {
            "words": str(thing)
        }
    return thing


@pytest.mark.parametrize("name", THINGS)
def test_nothing_can_be_assigned(name: str) -> None:
    thing = THINGS[name]()
    before = snapshot(thing)
    for attribute in attributes(thing):
        with pytest.raises(AttributeError):
            setattr(thing, attribute, None)
        with pytest.raises(AttributeError):
            delattr(thing, attribute)
    assert snapshot(thing) == before


@pytest.mark.parametrize("system", ["metric", "si", "darcy"])
@pytest.mark.parametrize("name", THINGS)
def test_nothing_can_be_changed_in_place(name: str, system: Any) -> None:
    thing = THINGS[name]()
    with unit_system(system):
        before = snapshot(thing)
        for attribute in attributes(thing):
            spoil(getattr(thing, attribute))
        for method in CALLED.get(name, []):
            answer = getattr(thing, method)()
            spoil(answer)
        assert snapshot(thing) == before


def test_a_change_would_be_noticed() -> None:
    class Soft:
        """A thing that hands out what it holds."""

        values = np.ones(3)

    Soft.__module__ = "wellindex.soft"
    thing = Soft()
    before = snapshot(thing)["values"]
    spoil(thing.values)
    assert snapshot(thing)["values"] != before


def test_workings_say_the_same_after_their_couplings_were_handled() -> None:
    rows = layered_couplings()
    before = str(workings(rows))
    spoil(rows.crossed)
    spoil(rows.rows_in_si())
    spoil(rows.in_si())
    assert str(workings(rows)) == before


def given_arrays() -> dict[str, np.ndarray[Any, Any]]:
    return {
        "dx": np.array([80.0, 80.0, 80.0]),
        "dz": np.array([4.0, 7.0, 2.5, 6.0]),
        "origin": np.array([0.0, 0.0, 1000.0]),
        "present": PRESENT.copy(),
        "points": np.array([(120.0, 180.0, 1000.0), (120.0, 180.0, 1019.5)]),
        "k": np.linspace(1e-14, 9e-13, 36).reshape(3, 3, 4),
        "net": np.linspace(0.2, 0.9, 36).reshape(3, 3, 4),
        "skin": np.array([1.0, 2.0]),
        "rw": np.array([0.1, 0.09]),
        "intervals": np.array([[0.0, 3.0], [6.0, 15.0]]),
        "kr": np.array([0.5, 0.6, 0.7, 0.8]),
        "blocks": np.array([2e7, 2.1e7, 2e7, 2.2e7]),
        "pwf": np.array([1e7, 1.1e7]),
        "radius": np.array([0.5, 1.0, 2.0]),
    }


def made_of(a: dict[str, np.ndarray[Any, Any]]) -> list[Any]:
    """One of everything, from arrays in SI units, which need no conversion that copies."""
    mesh = TensorGrid(
        metres(a["dx"]), metres(a["dx"]), metres(a["dz"]), origin=metres(a["origin"]),
        present=a["present"],
    )  # fmt: skip
    line = Path(metres(a["points"]))
    k = ureg.Quantity(a["k"], "m**2")
    stone = Permeability(k, k, k)
    rows = couple(
        line, mesh, stone, rw=metres(a["rw"]), skin=a["skin"], net_to_gross=a["net"],
        intervals=metres(a["intervals"]),
    )  # fmt: skip
    well = Well(rows, brine(), relative_permeability=a["kr"])
    pressures = ureg.Quantity(a["blocks"], "Pa")
    one = well.at_pressure("100 bar", block_pressure=pressures)
    many = well.at_pressure(ureg.Quantity(a["pwf"], "Pa"), block_pressure=pressures)
    ring = radial_profile(
        dx="80 m", dy="60 m", kx="90 mD", ky="90 mD", rw="0.1 m", pwf="150 bar",
        p_block="200 bar", radius=metres(a["radius"]),
    )  # fmt: skip
    return [mesh, line, stone, rows, well, one, many, ring]


def test_what_was_given_is_not_held() -> None:
    with unit_system("si"):
        arrays = given_arrays()
        things = made_of(arrays)
        before = [snapshot(thing) for thing in things]
        assert len(things[3]) == 4
        for array in arrays.values():
            array[...] = not array.flat[0] if array.dtype == bool else 55.0
        assert [snapshot(thing) for thing in things] == before


def test_kr_of_a_state_is_its_own() -> None:
    kr = np.array([0.5, 0.6, 0.7, 0.8])
    held = layered_well(relative_permeability=kr).at_pressure("150 bar", block_pressure="200 bar")
    kr[:] = 0.1
    assert held.basis.relative_permeability.tolist() == [0.5, 0.6, 0.7, 0.8]
    with pytest.raises(ValueError, match="read-only"):
        held.basis.relative_permeability[0] = 0.9


def test_notes_are_a_fresh_list() -> None:
    rows = layered_couplings()
    assert rows.notes is not rows.notes
    rows.notes[0] = "changed"
    rows.notes.clear()
    assert rows.notes == [""] * 4


@pytest.mark.parametrize("name", THINGS)
def test_a_pickled_copy_says_the_same(name: str) -> None:
    thing = THINGS[name]()
    again = pickle.loads(pickle.dumps(thing))
    assert type(again) is type(thing)
    assert snapshot(again) == snapshot(thing)


def test_every_class_of_the_library_is_here() -> None:
    covered = {type(make()) for make in THINGS.values()}
    classes = {
        Convention, Couplings, Liquid, Path, Permeability, RadialProfile, TensorGrid, Well,
        WellState, Workings,
    }  # fmt: skip
    assert covered == classes


def test_a_pickled_table_cannot_be_written_either() -> None:
    copy = pickle.loads(pickle.dumps(layered_couplings()))
    with pytest.raises(ValueError, match="read-only"):
        copy.rows_in_si().r0[:] = 1.0
    assert not copy.equals(3)
