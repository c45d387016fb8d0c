"""Notes on what is not around a block: its neighbours found again, one by one, in a dictionary."""

import math
import re
import warnings
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.builders import blocks_of, layered_couplings, rock, route
from wellindex import Couplings, TensorGrid, couple

STEPS = {
    "west": (-1, 0, 0),
    "east": (1, 0, 0),
    "south": (0, -1, 0),
    "north": (0, 1, 0),
    "top": (0, 0, -1),
    "bottom": (0, 0, 1),
}
AXIS_OF = {"west": 0, "east": 0, "south": 1, "north": 1, "top": 2, "bottom": 2}
Sizes = dict[tuple[int, ...], tuple[float, float, float]]


def sizes_of(dx: list[float], dy: list[float], dz: list[float], present: Any) -> Sizes:
    """Every block that exists, with its widths."""
    return {
        (i, j, k): (dx[i], dy[j], dz[k])
        for i in range(len(dx))
        for j in range(len(dy))
        for k in range(len(dz))
        if present is None or present[i, j, k]
    }


def around(blocks: Sizes, cell: tuple[int, ...], direction: str) -> tuple[set[str], dict[str, str]]:
    """The sides without a block, and by which factor a neighbour's width differs, six per cent on.

    The factor is written as it is printed; a row's two neighbours along one axis share the worst.
    """
    missing = set()
    worst: dict[str, float] = {}
    for side, step in STEPS.items():
        axis = AXIS_OF[side]
        if "xyz"[axis] == direction:
            continue
        beside = blocks.get(tuple(c + s for c, s in zip(cell, step, strict=True)))
        if beside is None:
            missing.add(side)
            continue
        own, other = blocks[cell][axis], beside[axis]
        factor = max(own, other) / min(own, other)
        worst["xyz"[axis]] = max(worst.get("xyz"[axis], 1.0), factor)
    return missing, {axis: f"{f:.3g}" for axis, f in worst.items() if f > 1.05}


def said(note: str) -> tuple[set[str], dict[str, str]]:
    """What a note says, read back from its words."""
    missing: set[str] = set()
    uneven: dict[str, str] = {}
    for part in filter(None, note.split("; ")):
        if part.startswith("no block"):
            sides = re.fullmatch(r"no block to the (.*): the formula assumes one", part)
            assert sides is not None, part
            missing = set(sides[1].split(" and "))
        else:
            assert part.endswith(": the formula assumes equal blocks"), part
            each = r"d([xyz]) of a neighbour differs by a factor of ([\d.e+]+?)(?: and |: )"
            uneven = dict(re.findall(each, part))
            assert uneven, part
    return missing, uneven


#: No pair of these lies within rounding of the 5 % from which on widths are unequal.
widths = st.lists(st.sampled_from([50.0, 51.0, 54.0, 80.0, 200.0]), min_size=1, max_size=4)


@st.composite
def wells(draw: st.DrawFn) -> tuple[Sizes, Couplings, str]:
    """A grid with holes, and a well along an axis through the middle of some of its blocks."""
    dx, dy, dz = draw(widths), draw(widths), draw(widths)
    shape = (len(dx), len(dy), len(dz))
    present = np.array(draw(st.lists(st.booleans(), min_size=64, max_size=64)))
    present = present[: np.prod(shape)].reshape(shape)
    cell = tuple(draw(st.integers(0, n - 1)) for n in shape)
    present[cell] = True
    direction = draw(st.sampled_from("xyz"))
    axis = "xyz".index(direction)
    grid = blocks_of(dx, dy, dz, present=present)
    start = [sum(sizes[:n]) + sizes[n] / 2 for sizes, n in zip((dx, dy, dz), cell, strict=True)]
    stop = [*start]
    start[axis], stop[axis] = 0.0, sum((dx, dy, dz)[axis])
    path = route(tuple(start), tuple(stop))  # type: ignore[arg-type]
    rows = couple(path, grid, rock(1e-13, 1e-13, 1e-13), rw="0.1 m")
    return sizes_of(dx, dy, dz, present), rows, direction


@given(wells())
def test_neighbours_one_by_one(well: tuple[Sizes, Couplings, str]) -> None:
    blocks, rows, direction = well
    for cell, note in zip(rows.cell.tolist(), rows.notes, strict=True):
        assert said(note) == around(blocks, tuple(cell), direction)


GRID = blocks_of([40.0, 70.0, 50.0], [90.0, 60.0, 80.0], [5.0, 9.0, 7.0])
EQUAL = blocks_of([50.0] * 3, [50.0] * 3, [50.0] * 3)
ROCK = rock(1e-13, 1e-13, 1e-13)


def notes(grid: TensorGrid, *points: Any, **others: Any) -> list[str]:
    return couple(route(*points), grid, ROCK, rw="0.1 m", **others).notes


def test_words() -> None:
    # Layer 0 along x: nothing above; the rows to the south, 90 m, and north, 80 m, beside 60 m;
    # the layer below, 9 m, beside 5 m.
    along_x = (
        "no block to the top: the formula assumes one; "
        "dy of a neighbour differs by a factor of 1.5 and "
        "dz of a neighbour differs by a factor of 1.8: the formula assumes equal blocks"
    )
    assert notes(GRID, (0.0, 120.0, 2.5), (160.0, 120.0, 2.5)) == [along_x] * 3
    # The south-west column of equal blocks.
    outermost = "no block to the west and south: the formula assumes one"
    assert notes(EQUAL, (25.0, 25.0, 0.0), (25.0, 25.0, 150.0)) == [outermost] * 3


def test_as_assumed_there_is_no_note_and_nowhere_a_warning() -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        assert notes(EQUAL, (75.0, 75.0, 50.0), (75.0, 75.0, 100.0)) == [""]
        assert all(notes(GRID, (20.0, 45.0, 0.0), (20.0, 45.0, 21.0)))
    assert layered_couplings().notes == [""] * 4


@pytest.mark.parametrize(
    ("beside", "noted"), [(52.4, False), (52.6, True), (47.7, False), (47.5, True)]
)
def test_unequal_begins_above_five_per_cent(beside: float, noted: bool) -> None:
    grid = blocks_of([50.0, 50.0, beside], [50.0] * 3, [10.0])
    (note,) = notes(grid, (75.0, 75.0, 0.0), (75.0, 75.0, 10.0))
    assert bool(note) is noted


@pytest.mark.parametrize(("z0", "dy"), [(5.0, 50.0), (5.0, 20.0), (2.5, 50.0), (1.0, 100.0)])
def test_what_the_note_of_a_thin_layer_is_worth(z0: float, dy: float) -> None:
    # One layer closed top and bottom, 10 m thick: images of the line source, summed one by one, at
    # the wellbore and 50 m away, where flow is linear: p = p_block + |y|/(2 H). The equivalent
    # radius is H/(2 pi sin(pi z0/H)) whatever the blocks' width (docs/explanation/theory.rst).
    H, rw, away = 10.0, 0.01, 50.0
    n = 2.0 * H * np.arange(-400_000, 400_001)
    own, mirrored = n, 2.0 * z0 + n
    near, far = (
        float(np.log((y**2 + own**2) / (1.0 + n**2)).sum())
        + float(np.log((y**2 + mirrored**2) / (1.0 + n**2)).sum())
        for y in (rw, away)
    )
    drop = (far - near) / (4.0 * math.pi) - away / (2.0 * H)
    exact = rw * math.exp(2.0 * math.pi * drop)
    assert exact == pytest.approx(H / (2.0 * math.pi * math.sin(math.pi * z0 / H)), rel=1e-3)
    grid = blocks_of([400.0], [dy] * 3, [H])
    y = 1.5 * dy
    rows = couple(route((0.0, y, H / 2), (400.0, y, H / 2)), grid, ROCK, rw="0.1 m")
    assert rows.notes == ["no block to the top and bottom: the formula assumes one"]
    index = rows.wi.m_as("m**3")[0] / (2.0 * math.pi * 1e-13 * 400.0 / math.log(exact / 0.1))
    if (z0, dy) == (5.0, 50.0):
        assert index == pytest.approx(0.65, abs=0.01)  # 35 % low
    assert index < 0.85


def test_a_side_named_by_the_placement_is_not_noted() -> None:
    on_west = ((0.0, 75.0, 0.0), (0.0, 75.0, 150.0))
    assert notes(EQUAL, *on_west, placement="west") == [""] * 3
    corner = ((0.0, 150.0, 0.0), (0.0, 150.0, 150.0))
    assert notes(EQUAL, *corner, placement="corner") == [""] * 3
    assert (
        notes(EQUAL, *corner, placement="west")
        == ["no block to the north: the formula assumes one"] * 3
    )


def test_what_lies_behind_a_closed_side_does_not_matter() -> None:
    # x = 40 m is the west side of blocks 70 m wide; behind it they are 40 m wide.
    uneven = blocks_of([40.0, 70.0, 70.0], [50.0] * 3, [10.0])
    path = ((40.0, 75.0, 0.0), (40.0, 75.0, 10.0))
    assert notes(uneven, *path, placement="west") == [""]
    assert notes(uneven, *path) == [
        "dx of a neighbour differs by a factor of 1.75: the formula assumes equal blocks"
    ]


@pytest.mark.parametrize("placement", ["corner", "west"])
def test_the_far_sides_of_a_placed_well_count(placement: str) -> None:
    single = blocks_of([50.0], [50.0], [10.0])
    (note,) = notes(single, (0.0, 0.0, 0.0), (0.0, 0.0, 10.0), placement=placement)
    far = {"corner": {"east", "north"}, "west": {"east", "south", "north"}}
    assert said(note) == (far[placement], {})


def test_tight_rows_have_the_tight_note_alone() -> None:
    grid = blocks_of([50.0], [70.0], [10.0, 10.0])
    kx = np.array([[[0.0, 1e-13]]])
    path = route((25.0, 35.0, 0.0), (25.0, 35.0, 20.0))
    tight, open_ = couple(path, grid, rock(kx, 1e-13, 0.0), rw="0.1 m").notes
    assert tight == "no permeability across the well: index 0"
    assert said(open_) == ({"west", "east", "south", "north"}, {})


def test_notes_stand_in_the_table() -> None:
    rows = couple(route((25.0, 25.0, 0.0), (25.0, 25.0, 50.0)), EQUAL, ROCK, rw="0.1 m")
    header, *_units, row = rows.table().splitlines()
    assert header.split()[-1] == "note"
    assert row.endswith("  no block to the west and south: the formula assumes one")
