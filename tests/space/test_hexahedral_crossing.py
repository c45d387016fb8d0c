"""Paths through hexahedra: against tensor grids, exact lengths, shared faces, faults, the index."""

import math
from functools import partial
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.builders import blocks_of, metres, route
from tests.space.hexahedra import (
    Array,
    corners_of,
    cut,
    grid_of,
    lattice,
    point_in,
    warped,
)
from wellindex import Crossings, DomainError, HexahedralGrid, Path, ShapeError, Survey, cross, ureg
from wellindex.space.hexahedral_crossing import hexahedral_pieces

close = partial(pytest.approx, abs=0)
SPANS = st.lists(st.floats(0.5, 40.0), min_size=1, max_size=4)
Point = tuple[float, float, float]


def assert_same(one: Crossings, other: Crossings, slack: float) -> None:
    """The same rows, but for rows that are shorter than the slack."""
    long, other_long = one.length.m_as("m") > slack, other.length.m_as("m") > slack
    assert one.cell[long].tolist() == other.cell[other_long].tolist()
    for name in ("md_in", "md_out", "length", "entry", "exit", "vector"):
        a, b = getattr(one, name).m_as("m")[long], getattr(other, name).m_as("m")[other_long]
        assert a == pytest.approx(b, abs=slack), name


@st.composite
def faces_and_paths(draw: st.DrawFn) -> tuple[list[Array], Path]:
    """Faces of a small uneven grid and a bent path through and beyond it."""
    edges = [
        start + np.concatenate(([0.0], np.cumsum(draw(SPANS))))
        for start in (draw(st.sampled_from([0.0, 5e5])), -7.0, 900.0)
    ]
    # To the micrometre: what misses a face by rounding alone is on it in either grid.
    near = [st.floats(e[0] - 20.0, e[-1] + 20.0).map(lambda x: round(x, 6)) for e in edges]
    points = draw(
        st.lists(st.tuples(*near), min_size=2, max_size=4).filter(
            lambda p: all(math.dist(a, b) > 0.5 for a, b in pairwise(p))
        )
    )
    return edges, route(*points, start=draw(st.floats(-50.0, 3000.0)))


@given(case=faces_and_paths())
def test_hexahedra_cut_from_a_tensor_grid_give_its_answer(case: tuple[list[Array], Path]) -> None:
    edges, path = case
    tensor = blocks_of(*map(np.diff, edges), origin=metres([e[0] for e in edges]))
    # The tensor grid sums its sizes: the hexahedra stand on its faces to the last bit.
    hexahedra = cut(*tensor.edges())
    scale = max(float(np.abs(path.points.m_as("m")).max()), path.length.m_as("m"))
    assert_same(cross(path, hexahedra), cross(path, tensor), 1e-10 * max(1.0, scale))


def sheared(shape: tuple[int, int, int]) -> tuple[HexahedralGrid, Array]:
    """Parallelepipeds, and the matrix that takes cell indices to places."""
    edges = np.array([[10.0, 1.0, 2.0], [-3.0, 12.0, -1.0], [1.5, 0.5, 4.0]])
    nodes = lattice(*(np.arange(n + 1) for n in shape)) @ edges
    return grid_of(corners_of(nodes)), edges


@pytest.mark.parametrize(
    ("start", "stop"),
    [
        ((0.5, 0.5, -1.0), (0.5, 0.5, 6.0)),
        ((-1.0, 0.25, 0.5), (4.0, 2.75, 3.5)),
        ((3.4, 2.9, 4.7), (0.1, 0.2, 0.3)),
        ((0.1, 2.7, 4.4), (2.9, 0.4, 0.2)),
    ],
)
def test_a_sheared_grid_with_exact_lengths(start: Point, stop: Point) -> None:
    # In the cells' own coordinates the faces are whole numbers: the cuts are simple fractions.
    shape = (3, 3, 5)
    grid, edges = sheared(shape)
    a, b = np.array(start), np.array(stop)
    cuts = [0.0, 1.0]
    for axis in range(3):
        for face in range(shape[axis] + 1):
            if a[axis] != b[axis]:
                cuts.append((face - a[axis]) / (b[axis] - a[axis]))
    cuts = sorted(t for t in set(cuts) if 0.0 <= t <= 1.0)
    expected: list[tuple[list[int], float, float]] = []
    for one, two in pairwise(cuts):
        if two - one < 1e-12:
            continue
        at = np.floor(a + 0.5 * (one + two) * (b - a)).astype(int)
        if np.all((at >= 0) & (at < shape)):
            expected.append((at.tolist(), one, two))
    found = cross(route(tuple(a @ edges), tuple(b @ edges)), grid)
    size = float(np.linalg.norm((b - a) @ edges))
    assert found.cell.tolist() == [cell for cell, _, _ in expected]
    assert found.md_in.m_as("m") == pytest.approx([t * size for _, t, _ in expected], abs=1e-9)
    assert found.md_out.m_as("m") == pytest.approx([t * size for _, _, t in expected], abs=1e-9)
    # Components along the cell's axes: parts of its edges' lengths.
    components = [(t - s) * np.abs(b - a) * np.linalg.norm(edges, axis=1) for _, s, t in expected]
    assert found.in_si().components == pytest.approx(np.array(components), abs=1e-9)


def boxed(shape: tuple[int, int, int], seed: int, strength: float = 0.2) -> Array:
    """Nodes of cells whose inner nodes have moved: shared faces are warped, the outside is a box
    of 10 x 12 x 4 m times the shape."""
    nodes = lattice(*(np.arange(n + 1.0) for n in shape))
    inner = nodes[1:-1, 1:-1, 1:-1]
    inner += np.random.default_rng(seed).uniform(-strength, strength, inner.shape)
    return nodes * np.array([10.0, 12.0, 4.0])


parts = st.tuples(*[st.floats(0.0, 1.0)] * 3)


@given(seed=st.integers(0, 10**6), start=parts, stop=parts)
def test_warped_shared_faces_leave_no_gap_and_no_overlap(
    seed: int, start: Point, stop: Point
) -> None:
    shape = (4, 3, 5)
    size = np.array(shape) * [10.0, 12.0, 4.0]
    ends = np.array([start, stop]) * size
    if math.dist(*ends) < 1.0:
        return
    grid = grid_of(corners_of(boxed(shape, seed)))
    path = route(*map(tuple, ends))
    found = cross(path, grid)
    length = path.length.m_as("m")
    assert found.length.m_as("m").sum() == close(length, rel=1e-9)
    assert len(found.gaps) == 0
    assert found.overlaps == []
    assert np.all(found.md_in.m[1:] == pytest.approx(found.md_out.m[:-1], abs=1e-9 * length))
    assert found.vector.m_as("m").sum(axis=0) == pytest.approx(ends[1] - ends[0], abs=1e-9)
    # The middle of each row lies in its cell: the trilinear map at 8 x 8 x 8 places surrounds it.
    for cell, entry, leave in zip(found.cell, found.entry.m, found.exit.m, strict=True):
        own = grid.corners(cell[None])[0]
        middle = 0.5 * (entry + leave)
        assert np.all(middle >= own.min(axis=0) - 1e-6)
        assert np.all(middle <= own.max(axis=0) + 1e-6)


@given(seed=st.integers(0, 10**6), ends=st.lists(parts, min_size=2, max_size=4))
def test_lengths_in_warped_cells_by_sampling(seed: int, ends: list[Point]) -> None:
    # A second way to find a point's cell: the map is turned round by scipy's solver.
    from scipy.optimize import root

    shape = (2, 2, 2)
    corners = corners_of(boxed(shape, seed))
    places = np.array(ends) * np.array(shape) * [10.0, 12.0, 4.0]
    if any(math.dist(a, b) < 1.0 for a, b in pairwise(places)):
        return
    found = cross(route(*map(tuple, places)), grid_of(corners))
    for n in (0, len(found) // 2, len(found) - 1):
        if found.length.m_as("m")[n] < 1e-3 or len(ends) > 2:
            continue
        middle = 0.5 * (found.entry.m_as("m")[n] + found.exit.m_as("m")[n])
        own = corners[tuple(found.cell[n])]
        at = root(lambda p, own=own, m=middle: point_in(own, *p) - m, [0.5] * 3, tol=1e-13).x
        assert np.all((at > -1e-6) & (at < 1.0 + 1e-6))
        for end in (found.entry.m_as("m")[n], found.exit.m_as("m")[n]):
            edge = root(lambda p, own=own, m=end: point_in(own, *p) - m, at, tol=1e-13).x
            on_a_face = np.min(np.minimum(np.abs(edge), np.abs(edge - 1.0))) < 1e-6
            ends_there = min(math.dist(end, p) for p in places) < 1e-9
            assert on_a_face or ends_there


@given(seed=st.integers(0, 10**6), start=parts, stop=parts)
def test_a_path_reversed_has_the_reverse_rows(seed: int, start: Point, stop: Point) -> None:
    shape = (3, 3, 3)
    ends = np.array([start, stop]) * np.array(shape) * [10.0, 12.0, 4.0]
    length = math.dist(*ends)
    if length < 1.0:
        return
    grid = grid_of(corners_of(boxed(shape, seed)))
    there = cross(route(*map(tuple, ends)), grid)
    back = cross(route(*map(tuple, ends[::-1])), grid)
    long, long_back = there.length.m > 1e-7, back.length.m > 1e-7
    assert back.cell[long_back][::-1].tolist() == there.cell[long].tolist()
    assert back.md_in.m[long_back][::-1] == pytest.approx(length - there.md_out.m[long], abs=1e-8)
    assert back.entry.m[long_back][::-1] == pytest.approx(there.exit.m[long], abs=1e-8)
    assert back.vector.m[long_back][::-1] == pytest.approx(-there.vector.m[long], abs=1e-8)


@given(seed=st.integers(0, 10**6), start=parts, stop=parts, at=st.floats(0.01, 0.99))
def test_splitting_an_interval_changes_nothing(
    seed: int, start: Point, stop: Point, at: float
) -> None:
    shape = (3, 3, 3)
    ends = np.array([start, stop]) * np.array(shape) * [10.0, 12.0, 4.0]
    length = math.dist(*ends)
    if length < 1.0:
        return
    grid = grid_of(corners_of(boxed(shape, seed)))
    path = route(*map(tuple, ends), start=100.0)
    one = cross(path, grid)
    marks = [100.0, 100.0 + at * length, 100.0 + length]
    two = cross(path, grid, metres([marks[:2], marks[1:]]))
    assert sorted(set(two.interval.tolist())) == [0, 1]
    sums: dict[tuple[int, ...], float] = {}
    for found, sign in ((one, 1.0), (two, -1.0)):
        for cell, size in zip(found.cell.tolist(), found.length.m_as("m"), strict=True):
            sums[tuple(cell)] = sums.get(tuple(cell), 0.0) + sign * size
    assert list(sums.values()) == pytest.approx([0.0] * len(sums), abs=1e-8)


@given(seed=st.integers(0, 10**6), start=parts, stop=parts, turn=st.floats(0.0, 360.0))
def test_turning_everything_about_the_vertical_changes_nothing(
    seed: int, start: Point, stop: Point, turn: float
) -> None:
    shape = (3, 2, 3)
    ends = np.array([start, stop]) * np.array(shape) * [10.0, 12.0, 4.0]
    if math.dist(*ends) < 1.0:
        return
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    rotation = np.array([[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]])
    corners = corners_of(boxed(shape, seed))
    plain = cross(route(*map(tuple, ends)), grid_of(corners))
    turned = cross(route(*map(tuple, ends @ rotation.T)), grid_of(corners @ rotation.T))
    long, other = plain.length.m > 1e-6, turned.length.m > 1e-6
    if bool(np.all([0.001 < part < 0.999 for part in (*start, *stop)])):
        assert turned.cell[other].tolist() == plain.cell[long].tolist()
        assert turned.md_in.m[other] == pytest.approx(plain.md_in.m[long], abs=1e-7)
        assert turned.vector.m[other] == pytest.approx(plain.vector.m[long] @ rotation.T, abs=1e-7)
        components = plain.in_si().components[long]
        assert turned.in_si().components[other] == pytest.approx(components, abs=1e-7)


EDGES = ([0.0, 10.0, 30.0], [0.0, 40.0, 90.0], [0.0, 2.0, 5.0, 9.0])
GRID = cut(*EDGES)


@pytest.mark.parametrize(
    ("x", "y", "column"),
    [
        (10.0, 20.0, (1, 0)),
        (10.0, 40.0, (1, 1)),
        (0.0, 0.0, (0, 0)),
        (30.0, 90.0, (1, 1)),
        (30.0, 20.0, (1, 0)),
        (10.0, 0.0, (1, 0)),
    ],
)
@pytest.mark.parametrize("ends", [(0.0, 9.0), (9.0, 0.0), (-3.0, 11.0)])
def test_a_path_on_a_face_or_edge_is_counted_once(
    x: float, y: float, column: tuple[int, int], ends: tuple[float, float]
) -> None:
    found = cross(route((x, y, ends[0]), (x, y, ends[1])), GRID)
    assert {tuple(cell[:2]) for cell in found.cell.tolist()} == {column}
    assert sorted(found.cell[:, 2].tolist()) == [0, 1, 2]
    assert sorted(found.length.m_as("m")) == pytest.approx([2.0, 3.0, 4.0], abs=1e-9)
    assert found.overlaps == []


@pytest.mark.parametrize(("z", "layer"), [(0.0, 0), (2.0, 1), (5.0, 2), (9.0, 2)])
def test_a_level_path_on_a_layer_boundary_lies_in_the_lower_layer(z: float, layer: int) -> None:
    found = cross(route((0.0, 20.0, z), (30.0, 20.0, z)), GRID)
    assert found.cell.tolist() == [[0, 0, layer], [1, 0, layer]]
    assert found.length.m_as("m") == pytest.approx([10.0, 20.0], abs=1e-9)
    assert found.overlaps == []


def test_a_path_along_a_diagonal_through_edges_and_corners() -> None:
    grid = cut(range(4), range(4), range(4))
    found = cross(route((0.0, 0.0, 0.0), (3.0, 3.0, 3.0)), grid)
    assert found.cell.tolist() == [[0, 0, 0], [1, 1, 1], [2, 2, 2]]
    assert found.length.m_as("m") == pytest.approx([math.sqrt(3.0)] * 3, abs=1e-9)
    flat = cross(route((0.0, 3.0, 1.5), (3.0, 0.0, 1.5)), grid)
    assert flat.length.m_as("m").sum() == close(math.sqrt(18.0), rel=1e-9)
    assert flat.overlaps == []
    assert len(flat.gaps) == 0


@pytest.mark.parametrize("seed", range(6))
def test_a_path_through_nodes_and_along_edges_of_warped_cells(seed: int) -> None:
    nodes = boxed((3, 3, 3), seed)
    grid = grid_of(corners_of(nodes))
    chain = [nodes[1, 1, 1], nodes[2, 1, 1], nodes[2, 2, 1], nodes[2, 2, 2], nodes[1, 1, 1]]
    path = route(*(tuple(node) for node in chain))
    found = cross(path, grid)
    assert found.length.m_as("m").sum() == close(path.length.m_as("m"), rel=1e-9)
    assert found.overlaps == []
    assert len(found.gaps) == 0


@pytest.mark.parametrize("seed", range(4))
def test_a_path_in_a_warped_face_is_counted_once(seed: int) -> None:
    # A bilinear face holds straight lines: one from edge to edge at the same part of both.
    nodes = boxed((2, 2, 2), seed)
    face = nodes[1, 0:2, 0:2]
    for part in (0.2, 0.5, 0.9):
        start = (1 - part) * face[0, 0] + part * face[1, 0]
        stop = (1 - part) * face[0, 1] + part * face[1, 1]
        path = route(tuple(start), tuple(stop))
        found = cross(path, grid_of(corners_of(nodes)))
        assert found.length.m_as("m").sum() == close(path.length.m_as("m"), rel=1e-9)
        assert {tuple(c) for c in found.cell.tolist()} <= {(0, 0, 0), (1, 0, 0)}


def test_leaving_and_entering_again() -> None:
    path = route((5, 20, 1), (-5, 20, 1), (-5, 20, 1.5), (5, 20, 1.5))
    found = cross(path, GRID)
    assert found.cell.tolist() == [[0, 0, 0], [0, 0, 0]]
    assert found.length.m_as("m") == pytest.approx([5.0, 5.0], abs=1e-9)
    assert found.gaps.m_as("m") == pytest.approx(np.array([[5.0, 15.5]]), abs=1e-9)


def test_the_same_cell_twice_and_a_bend_inside() -> None:
    path = route((5, 20, 0.5), (5, 20, 1), (5, 20, 4), (15, 20, 4), (15, 20, 1), (5, 20, 1))
    found = cross(path, GRID)
    cells = [[0, 0, 0], [0, 0, 1], [1, 0, 1], [1, 0, 0], [0, 0, 0]]
    assert found.cell.tolist() == cells
    assert found.length.m_as("m") == pytest.approx([1.5, 2 + 5, 5 + 2, 1 + 5, 5.0], abs=1e-8)
    assert len(found.gaps) == 0


def test_an_absent_cell_is_a_gap() -> None:
    present = np.ones((2, 2, 3), dtype=bool)
    present[0, 0, 1] = False
    found = cross(route((5, 20, 0), (5, 20, 9)), cut(*EDGES, present=present))
    assert found.cell.tolist() == [[0, 0, 0], [0, 0, 2]]
    assert found.gaps.m_as("m") == pytest.approx(np.array([[2.0, 5.0]]), abs=1e-9)
    beside = cross(route((-5, 20, 0), (-5, 20, 9)), GRID)
    assert len(beside) == 0
    assert beside.cell.shape == (0, 3)
    assert len(beside.gaps) == 0


def faulted(throw: float, apart: float = 0.0) -> HexahedralGrid:
    """Two columns of three layers of 4 m; the eastern stands lower by the throw, and away."""
    corners = corners_of(lattice([0, 10, 20], [0, 10], [0, 4, 8, 12]))
    corners[1, ..., 2] += throw
    corners[1, ..., 0] += apart
    return grid_of(corners)


def test_a_fault_joins_layers_that_are_not_neighbours() -> None:
    found = cross(route((0, 5, 6), (20, 5, 6)), faulted(3.0))
    assert found.cell.tolist() == [[0, 0, 1], [1, 0, 0]]
    assert found.length.m_as("m") == pytest.approx([10.0, 10.0], abs=1e-9)
    assert len(found.gaps) == 0


def test_a_gap_at_a_fault_is_reported() -> None:
    found = cross(route((0, 5, 6), (20, 5, 6), start=1000.0), faulted(3.0, apart=0.5))
    assert found.cell.tolist() == [[0, 0, 1], [1, 0, 0]]
    assert found.length.m_as("m") == pytest.approx([10.0, 9.5], abs=1e-9)
    assert found.gaps.m_as("m") == pytest.approx(np.array([[1010.0, 1010.5]]), abs=1e-9)
    assert found.overlaps == []
    assert repr(found) == "Crossings(2 rows, 1 gaps, 0 overlaps)"


def test_an_overlap_at_a_fault_counts_once_and_is_reported() -> None:
    found = cross(route((0, 5, 6), (20, 5, 6), start=1000.0), faulted(3.0, apart=-0.5))
    assert found.length.m_as("m").sum() == close(19.5, rel=1e-9)
    assert len(found.gaps) == 0
    ((top, bottom, other),) = found.overlaps
    assert [top.m_as("m"), bottom.m_as("m")] == pytest.approx([1009.5, 1010.0], abs=1e-9)
    # The length is the first cell's, the other claims it.
    assert found.cell.tolist() == [[0, 0, 1], [1, 0, 0]]
    assert other == (1, 0, 0)
    assert found.length.m_as("m") == pytest.approx([10.0, 9.5], abs=1e-9)


def test_an_overlap_that_other_faces_cut_is_one_overlap() -> None:
    # The eastern column overlaps by 3 m; a vertical path through the overlap meets both layerings.
    found = cross(route((8.5, 5, -2), (8.5, 5, 20)), faulted(1.0, apart=-3.0))
    west = [(0, 0, k) for k in range(3)]
    east = [(1, 0, k) for k in range(3)]
    assert {tuple(c) for c in found.cell.tolist()} == {*west, east[2]}
    assert found.length.m_as("m").sum() == close(13.0, rel=1e-9)
    claims = [(a.m_as("m"), b.m_as("m"), cell) for a, b, cell in found.overlaps]
    assert [cell for _, _, cell in claims] == east
    expected = [(3.0, 7.0), (7.0, 11.0), (11.0, 14.0)]
    for (top, bottom, _), (first, last) in zip(claims, expected, strict=True):
        assert (top, bottom) == pytest.approx((first, last), abs=1e-9)


def test_layers_that_pinch_out_along_the_path() -> None:
    # The middle layer thins to nothing half way: wedges, then cells without volume.
    nodes = lattice([0, 10, 20, 30, 40], [0, 10], [0.0, 4.0, 8.0, 12.0])
    nodes[1, :, 2, 2] = 6.0
    nodes[2:, :, 2, 2] = 4.0
    grid = grid_of(corners_of(nodes))
    assert grid.present[:, 0, 1].tolist() == [True, True, False, False]
    for x, thickness in (
        (2.0, 3.6),
        (8.0, 2.4),
        (15.0, 1.0),
        (19.99, 0.002),
        (20.0, 0.0),
        (33.0, 0),
    ):
        found = cross(route((x, 5, 0), (x, 5, 12)), grid)
        sums = np.bincount(found.cell[:, 2], weights=found.length.m_as("m"), minlength=3)
        assert sums == pytest.approx([4.0, thickness, 8.0 - thickness], abs=1e-7)
        assert len(found.gaps) == 0
        assert found.overlaps == []
    along = cross(route((0, 5, 4.5), (40, 5, 4.5)), grid)
    assert along.cell[:, 2].tolist() == [1, 1, 2, 2, 2]
    # The boundary falls from 6 to 4 m between 10 and 20 m: it is at 4.5 m at x = 17.5 m.
    assert along.length.m_as("m") == pytest.approx([10.0, 7.5, 2.5, 10.0, 10.0], abs=1e-8)


@pytest.mark.parametrize("at", [(0.0, 0.0, 0.0), (456123.3, 6789012.7, 3000.0)])
def test_coordinates_of_a_map_cost_no_digits(at: Point) -> None:
    # Cells of 1 m, seven million metres from zero: doubles know such places to 1e-9 m.
    corners = corners_of(boxed((3, 3, 3), 4) / [10.0, 12.0, 4.0]) + np.array(at)
    ends = np.array([[0.1, 0.2, 0.05], [2.9, 2.7, 2.95]]) + np.array(at)
    path = route(*map(tuple, ends))
    found = cross(path, grid_of(corners))
    assert found.length.m_as("m").sum() == close(path.length.m_as("m"), rel=1e-8)
    assert len(found.gaps) == 0
    plain = cross(
        route((0.1, 0.2, 0.05), (2.9, 2.7, 2.95)),
        grid_of(corners_of(boxed((3, 3, 3), 4) / [10.0, 12.0, 4.0])),
    )
    assert found.cell.tolist() == plain.cell.tolist()
    assert found.length.m == pytest.approx(plain.length.m, abs=1e-7)


def test_arcs_of_a_survey_keep_their_length() -> None:
    survey = Survey(
        metres([0.0, 60.0, 110.0]),
        ureg.Quantity(np.array([0.0, 80.0, 95.0]), "degree"),
        ureg.Quantity(np.array([40.0, 40.0, 60.0]), "degree"),
        head=metres([2.0, 3.0, 0.5]),
    )
    grid = grid_of(corners_of(boxed((12, 12, 16), 9, 0.2)))
    found = cross(survey.path, grid)
    assert found.length.m_as("m").sum() == close(110.0, rel=1e-9)
    assert found.md_in.m_as("m")[0] == pytest.approx(0.0, abs=1e-12)
    assert found.md_out.m_as("m")[-1] == close(110.0, rel=1e-12)
    assert len({tuple(c) for c in found.cell.tolist()}) > 10
    # Entry points lie within the chord tolerance of the arc, at the measured depth of the row.
    places = survey.position(found.md_in).m_as("m")
    assert np.all(np.linalg.norm(places - found.entry.m_as("m"), axis=1) < 0.011)


@pytest.mark.parametrize(
    ("intervals", "error", "words"),
    [
        ([("2 m", "6 m"), ("5 m", "8 m")], DomainError, "interval 1 overlaps or precedes"),
        ([("6 m", "2 m")], DomainError, "interval 0 does not run forwards"),
        ([("-1 m", "2 m")], DomainError, "interval 0 leaves the path"),
        ([("1 m", "9.1 m")], DomainError, "interval 0 leaves the path"),
        (("1 m", "2 m"), ShapeError, "pairs"),
    ],
)
def test_bad_intervals(intervals: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        cross(route((5, 20, 0), (5, 20, 9)), GRID, intervals)


def slab(start: Array, stop: Array, low: Array, high: Array) -> bool:
    """Whether a segment meets a box, written out with plain numbers."""
    into, out = 0.0, 1.0
    for a, b, first, last in zip(start, stop, low, high, strict=True):
        if a == b:
            if not first <= a <= last:
                return False
            continue
        one, other = sorted(((first - a) / (b - a), (last - a) / (b - a)))
        into, out = max(into, one), min(out, other)
    return into <= out


@pytest.mark.parametrize("shape", [(1, 1, 1), (3, 5, 2), (9, 4, 17), (33, 6, 5)])
@pytest.mark.parametrize("hidden", [0.0, 0.5, 0.97])
def test_the_index_finds_what_a_look_at_every_cell_finds(
    shape: tuple[int, int, int], hidden: float
) -> None:
    spread = np.random.default_rng(11)
    corners = warped(shape, 2)
    present = spread.random(shape) >= hidden
    grid = grid_of(corners, present=present)
    low, high = corners.min(axis=3), corners.max(axis=3)
    size = np.array(shape) * [10.0, 12.0, 4.0]
    legs = [spread.uniform(-0.3, 1.3, (2, 3)) * size for _ in range(12)]
    legs += [
        np.array([[5.0, 6.0, -9.0], [5.0, 6.0, 99.0]]),
        np.array([[-9.0, 6.0, 2.0], [400.0, 6.0, 2.0]]),
    ]
    slack = 1e-6
    for start, stop in legs:
        found = {tuple(c) for c in grid.tree().near(start, stop, slack).tolist()}
        expected = {
            cell
            for cell in np.ndindex(shape)
            if present[cell] and slab(start, stop, low[cell] - slack, high[cell] + slack)
        }
        assert found == expected


def test_the_index_is_small_and_built_once() -> None:
    grid = grid_of(warped((16, 16, 16), 1))
    tree = grid.tree()
    assert grid.tree() is tree
    held = sum(low.nbytes + high.nbytes for low, high in tree._levels)
    assert held < 0.05 * 16**3 * 8 * 3 * 8


def test_pieces_run_from_end_to_end() -> None:
    grid = grid_of(corners_of(boxed((3, 3, 3), 7)))
    start, stop = np.array([1.0, 1.0, 1.0]), np.array([29.0, 35.0, 11.0])
    pieces = hexahedral_pieces(start, stop, grid)
    assert pieces.into[0] == 0.0
    assert pieces.out[-1] == 1.0
    assert pieces.into[1:].tolist() == pieces.out[:-1].tolist()
