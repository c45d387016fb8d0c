"""Crossings of paths and blocks against clipping of every leg by every block (slab method)."""

import math
from collections import defaultdict
from itertools import pairwise, product

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.builders import blocks_of, metres, route
from wellindex import Path, TensorGrid
from wellindex.space.crossing import Rows, crossings
from wellindex.space.tensor_crossing import onto_faces

Point = tuple[float, float, float]
SPANS = st.lists(st.floats(0.5, 40.0), min_size=1, max_size=4)


def clipped(start: np.ndarray, stop: np.ndarray, low: np.ndarray, high: np.ndarray) -> float:  # type: ignore[type-arg]
    """Length of a leg inside one block."""
    into, out = 0.0, 1.0
    for a, b, first, last in zip(start, stop, low, high, strict=True):
        if a == b:
            if not first <= a < last:
                return 0.0
            continue
        with np.errstate(over="ignore"):
            one, other = sorted(((first - a) / (b - a), (last - a) / (b - a)))
        into, out = max(into, one), min(out, other)
    return max(0.0, out - into) * float(np.linalg.norm(stop - start))


def by_clipping(path: Path, grid: TensorGrid) -> dict[tuple[int, ...], float]:
    """Length of a path in each block that it crosses."""
    lengths: dict[tuple[int, ...], float] = defaultdict(float)
    for start, stop in pairwise(path.points.m_as("m")):
        for cell in product(*map(range, grid.shape)):
            ends = [(edges[i], edges[i + 1]) for edges, i in zip(grid.edges(), cell, strict=True)]
            low, high = np.array(ends).T
            length = clipped(start, stop, low, high) if grid.present[cell] else 0.0
            if length > 0.0:
                lengths[cell] += length
    return lengths


def whole(path: Path, grid: TensorGrid) -> Rows:
    """The crossings of a path that is open everywhere."""
    depths = path.measured_depth.m_as("m")
    return crossings(path, grid, np.array([[depths[0], depths[-1]]])).in_si()


def by_cell(found: Rows) -> dict[tuple[int, ...], float]:
    """Length per block."""
    lengths: dict[tuple[int, ...], float] = defaultdict(float)
    for cell, length in zip(found.cell.tolist(), found.length, strict=True):
        lengths[tuple(cell)] += length
    return lengths


@st.composite
def grids(draw: st.DrawFn) -> TensorGrid:
    """Small uneven grids, now and then with absent blocks."""
    sizes = [draw(SPANS) for _ in range(3)]
    shape = tuple(len(s) for s in sizes)
    present = None
    if draw(st.booleans()):
        flat = draw(st.lists(st.booleans(), min_size=math.prod(shape), max_size=math.prod(shape)))
        present = np.array(flat).reshape(shape)
    return blocks_of(*sizes, origin=metres([3.0, -7.0, 900.0]), present=present)


@st.composite
def grids_and_paths(draw: st.DrawFn) -> tuple[TensorGrid, Path]:
    """A grid and a bent path through and beyond it."""
    grid = draw(grids())
    near = [st.floats(e[0] - 20.0, e[-1] + 20.0) for e in grid.edges()]
    points = draw(
        st.lists(st.tuples(*near), min_size=2, max_size=4).filter(
            lambda p: all(math.dist(a, b) > 0.5 for a, b in pairwise(p))
        )
    )
    return grid, route(*points, start=draw(st.floats(-50.0, 3000.0)))


@given(case=grids_and_paths())
def test_lengths_by_clipping(case: tuple[TensorGrid, Path]) -> None:
    grid, path = case
    found, expected = by_cell(whole(path, grid)), by_clipping(path, grid)
    slack = 1e-9 * path.length.m_as("m")
    for cell in found.keys() | expected.keys():
        assert found.get(cell, 0.0) == pytest.approx(expected.get(cell, 0.0), abs=slack)
    assert math.fsum(found.values()) == pytest.approx(math.fsum(expected.values()), abs=slack)


@given(case=grids_and_paths())
def test_rows_run_along_the_path(case: tuple[TensorGrid, Path]) -> None:
    grid, path = case
    found = whole(path, grid)
    slack = 1e-9 * max(1.0, float(np.abs(path.measured_depth.m).max()))
    assert found.md_out - found.md_in == pytest.approx(found.length, abs=slack)
    assert np.all(found.md_in[1:] >= found.md_out[:-1] - slack)
    assert np.all(found.length > 0.0)
    low = np.array([e[i] for e, i in zip(grid.edges(), found.cell.T, strict=True)])
    high = np.array([e[i + 1] for e, i in zip(grid.edges(), found.cell.T, strict=True)])
    middle = found.midpoint.T
    assert np.all((middle >= low - 1e-9) & (middle <= high + 1e-9))


@given(case=grids_and_paths())
def test_a_path_reversed_crosses_the_same_blocks(case: tuple[TensorGrid, Path]) -> None:
    grid, path = case
    there, back = whole(path, grid), whole(Path(path.points[::-1]), grid)
    slack = 1e-9 * path.length.m_as("m")
    forth, reverse = by_cell(there), by_cell(back)
    for cell in forth.keys() | reverse.keys():
        assert forth.get(cell, 0.0) == pytest.approx(reverse.get(cell, 0.0), abs=slack)


@given(case=grids_and_paths(), cuts=st.lists(st.floats(0.0, 1.0), min_size=2, max_size=6))
def test_intervals_share_the_length_of_what_they_cover(
    case: tuple[TensorGrid, Path], cuts: list[float]
) -> None:
    grid, path = case
    depths = path.measured_depth.m_as("m")
    marks = depths[0] + np.unique(cuts) * (depths[-1] - depths[0])
    if len(marks) < 2:
        return
    parts = crossings(path, grid, np.column_stack((marks[:-1], marks[1:]))).in_si()
    one = crossings(path, grid, np.array([[marks[0], marks[-1]]])).in_si()
    slack = 1e-9 * path.length.m_as("m")
    split, joined = by_cell(parts), by_cell(one)
    for cell in split.keys() | joined.keys():
        assert split.get(cell, 0.0) == pytest.approx(joined.get(cell, 0.0), abs=slack)
    assert np.all(np.diff(parts.interval) >= 0)


GRID = blocks_of([10.0, 20.0, 30.0], [40.0, 50.0], [2.0, 3.0, 4.0])


@pytest.mark.parametrize(
    ("points", "cells", "lengths"),
    [
        (((5.0, 20.0, 0.0), (5.0, 20.0, 9.0)), [(0, 0, 0), (0, 0, 1), (0, 0, 2)], [2.0, 3.0, 4.0]),
        (((5.0, 20.0, 9.0), (5.0, 20.0, 0.0)), [(0, 0, 2), (0, 0, 1), (0, 0, 0)], [4.0, 3.0, 2.0]),
        (((0.0, 20.0, 1.0), (60.0, 20.0, 1.0)), [(0, 0, 0), (1, 0, 0), (2, 0, 0)], [10, 20, 30]),
        (((45.0, 20.0, 1.0), (4.0, 20.0, 1.0)), [(2, 0, 0), (1, 0, 0), (0, 0, 0)], [15, 20, 6]),
        (((5.0, -9.0, 1.0), (5.0, 99.0, 1.0)), [(0, 0, 0), (0, 1, 0)], [40.0, 50.0]),
        (((5.0, 20.0, -7.0), (5.0, 20.0, 1.5)), [(0, 0, 0)], [1.5]),
        (((5.0, 20.0, 2.0), (5.0, 20.0, 3.0)), [(0, 0, 1)], [1.0]),
    ],
)
def test_paths_along_the_axes(
    points: tuple[Point, Point], cells: list[tuple[int, ...]], lengths: list[float]
) -> None:
    found = whole(route(*points), GRID)
    assert [tuple(cell) for cell in found.cell.tolist()] == cells
    assert found.length == pytest.approx(np.array(lengths), rel=1e-13)


@pytest.mark.parametrize(
    ("x", "y", "column"),
    [
        (10.0, 20.0, (1, 0)),  # on a face: the block to the east
        (5.0, 40.0, (0, 1)),  # on a face: the block to the north
        (30.0, 40.0, (2, 1)),  # on an edge
        (0.0, 20.0, (0, 0)),  # on the west side of the grid
        (60.0, 90.0, (2, 1)),  # on the edge of its east and north sides
    ],
)
@pytest.mark.parametrize("ends", [(0.0, 9.0), (9.0, 0.0)])
def test_a_path_on_faces_is_counted_once(
    x: float, y: float, column: tuple[int, int], ends: tuple[float, float]
) -> None:
    found = whole(route((x, y, ends[0]), (x, y, ends[1])), GRID)
    assert found.length.sum() == pytest.approx(9.0, rel=1e-13)
    assert {tuple(cell[:2]) for cell in found.cell.tolist()} == {column}


@pytest.mark.parametrize(("z", "layer"), [(2.0, 1), (5.0, 2), (0.0, 0), (9.0, 2)])
def test_a_horizontal_path_on_a_layer_boundary_lies_in_the_lower_layer(
    z: float, layer: int
) -> None:
    found = whole(route((0.0, 20.0, z), (60.0, 20.0, z)), GRID)
    assert found.cell[:, 2].tolist() == [layer] * 3
    assert found.length.sum() == pytest.approx(60.0, rel=1e-13)


@given(
    sizes=st.lists(st.integers(1, 999), min_size=2, max_size=12),
    which=st.integers(0, 12),
    unit=st.sampled_from(["ft", "m", "cm"]),
)
def test_a_path_on_a_face_in_decimals_is_on_that_face(
    sizes: list[int], which: int, unit: str
) -> None:
    # Sizes to a tenth, written out: their sum in floats misses the face by rounding.
    face = min(which, len(sizes))
    grid = TensorGrid([f"{n / 10} {unit}" for n in sizes], "40 m", "8 m")
    x = f"{sum(sizes[:face]) / 10} {unit}"
    found = whole(Path([(x, "20 m", "0 m"), (x, "20 m", "8 m")]), grid)
    assert found.cell.tolist() == [[min(face, len(sizes) - 1), 0, 0]]
    assert found.length == pytest.approx([8.0], rel=1e-12)


def test_only_rounding_is_moved_onto_a_face() -> None:
    faces = np.array([0.0, 10.0, 1000.0])
    given_ = np.array([-1e-6, 1e-15, 10.0 + 1e-10, 10.0 + 1e-7, 1000.0 - 1e-10, 1001.0])
    assert onto_faces(given_, faces).tolist() == [-1e-6, 0.0, 10.0, 10.0 + 1e-7, 1000.0, 1001.0]


def test_a_bend_inside_a_block_does_not_split_its_row() -> None:
    path = route((5.0, 20.0, 0.0), (5.0, 20.0, 0.7), (5.0, 20.0, 1.1), (5.0, 20.0, 4.0))
    found = whole(path, GRID)
    assert found.cell.tolist() == [[0, 0, 0], [0, 0, 1]]
    assert found.length == pytest.approx([2.0, 2.0], rel=1e-13)
    assert found.midpoint[:, 2] == pytest.approx([1.0, 3.0], rel=1e-13)


def test_a_block_entered_again_has_two_rows() -> None:
    # Down through two layers, east, and up again through the first block's neighbour and back.
    path = route((5, 20, 0.5), (5, 20, 4), (15, 20, 4), (15, 20, 1), (5, 20, 1))
    found = whole(path, GRID)
    cells = [[0, 0, 0], [0, 0, 1], [1, 0, 1], [1, 0, 0], [0, 0, 0]]
    assert found.cell.tolist() == cells
    assert found.length == pytest.approx([1.5, 2 + 5, 5 + 2, 1 + 5, 5.0], rel=1e-13)
    assert found.md_in.tolist() == pytest.approx([0.0, 1.5, 8.5, 15.5, 21.5], rel=1e-13)


def test_leaving_and_entering_the_grid_makes_two_rows() -> None:
    path = route((5, 20, 1), (-5, 20, 1), (-5, 20, 1.5), (5, 20, 1.5))
    found = whole(path, GRID)
    assert found.cell.tolist() == [[0, 0, 0], [0, 0, 0]]
    assert found.length == pytest.approx([5.0, 5.0], rel=1e-13)


def test_components_add_up_over_legs() -> None:
    found = whole(route((1, 20, 1), (4, 24, 1), (1, 24, 1)), GRID)
    assert found.length == pytest.approx([8.0], rel=1e-13)
    assert found.components == pytest.approx(np.array([[6.0, 4.0, 0.0]]), rel=1e-13)


def test_an_absent_block_is_passed_over() -> None:
    present = np.ones(GRID.shape, dtype=bool)
    present[1, 0, 0] = False
    grid = blocks_of([10.0, 20.0, 30.0], [40.0, 50.0], [2.0, 3.0, 4.0], present=present)
    found = whole(route((0.0, 20.0, 1.0), (60.0, 20.0, 1.0)), grid)
    assert found.cell.tolist() == [[0, 0, 0], [2, 0, 0]]
    assert found.md_in == pytest.approx(np.array([0.0, 30.0]), abs=1e-12)


def test_a_path_beside_the_grid_crosses_nothing() -> None:
    found = whole(route((-1.0, 20.0, 0.0), (-1.0, 20.0, 9.0)), GRID)
    assert len(found.length) == 0
    assert found.cell.shape == (0, 3)
