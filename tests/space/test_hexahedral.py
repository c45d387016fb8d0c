"""Hexahedral grids: volumes, sizes, order of corners, mirrored, inverted, pinched and bad cells."""

from functools import partial
from itertools import combinations, permutations
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.spatial import ConvexHull

from tests.builders import metres, route
from tests.space.hexahedra import (
    OFFSETS,
    corners_of,
    cut,
    grid_of,
    lattice,
    point_in,
    volume_by_flux,
    warped,
)
from wellindex import DomainError, HexahedralGrid, ShapeError, UnitsError, cross, unit_system, ureg

close = partial(pytest.approx, abs=0)
UNIT = corners_of(lattice([0, 1], [0, 1], [0, 1]))
vectors = st.tuples(*[st.floats(-50.0, 50.0)] * 3)


def one(corners: Any) -> HexahedralGrid:
    """A grid of one cell."""
    return grid_of(np.asarray(corners, dtype=float).reshape(1, 1, 1, 8, 3))


@given(a=vectors, b=vectors, c=vectors, at=st.tuples(*[st.floats(-1e6, 1e6)] * 3))
def test_the_volume_of_a_parallelepiped_is_its_triple_product(
    a: Any, b: Any, c: Any, at: Any
) -> None:
    edges = np.array([a, b, c])
    triple = abs(np.dot(a, np.cross(b, c)))
    box = float(np.prod(np.abs(edges).sum(axis=0)))
    if triple < 1e-3 * max(box, 1e-3):
        return
    grid = one(np.array(OFFSETS) @ edges + np.array(at))
    # A coordinate of a million metres is known to 1e-10 m.
    blur = 1e-9 * box / np.abs(edges).sum(axis=0).min()
    assert grid.volume.m_as("m**3").ravel() == pytest.approx([triple], rel=1e-11, abs=blur)


@pytest.mark.parametrize("seed", range(12))
def test_the_volume_of_a_warped_cell_is_the_flux_through_its_faces(seed: int) -> None:
    corners = warped((2, 2, 2), seed)
    grid = grid_of(corners)
    for cell in np.ndindex(2, 2, 2):
        expected = volume_by_flux(corners[cell])
        assert grid.volume[cell].m_as("m**3") == close(expected, rel=1e-12)


def test_volumes_of_cells_that_share_their_faces_fill_the_whole() -> None:
    # Inner nodes moved, outer ones not: the cells still fill a box.
    nodes = lattice(np.arange(5.0), np.arange(4.0), np.arange(6.0))
    nodes[1:-1, 1:-1, 1:-1] += np.random.default_rng(3).uniform(-0.25, 0.25, (3, 2, 4, 3))
    grid = grid_of(corners_of(nodes))
    assert grid.volume.m_as("m**3").sum() == close(4.0 * 3.0 * 5.0, rel=1e-13)
    assert np.ptp(grid.volume.m_as("m**3")) > 0.1


def test_volume_of_a_wedge_and_a_pyramid() -> None:
    # Top and bottom meet along the west edge; all of the top meets in one point.
    wedge = UNIT.reshape(8, 3) * [6.0, 4.0, 3.0]
    wedge[[0, 2], 2] = 3.0
    assert one(wedge).volume.m_as("m**3").ravel() == close([0.5 * 6 * 4 * 3], rel=1e-13)
    pyramid = UNIT.reshape(8, 3) * [6.0, 4.0, 3.0]
    pyramid[:4] = [1.0, 2.0, 0.0]
    assert one(pyramid).volume.m_as("m**3").ravel() == close([6 * 4 * 3 / 3], rel=1e-13)
    assert ConvexHull(pyramid).volume == close(24.0, rel=1e-12)
    assert one(wedge).present.all()
    assert one(pyramid).present.all()


@given(a=vectors, b=vectors, c=vectors)
def test_the_sizes_of_a_parallelepiped_are_the_lengths_of_its_edges(a: Any, b: Any, c: Any) -> None:
    edges = np.array([a, b, c])
    if abs(np.dot(a, np.cross(b, c))) < 1e-2 * max(1.0, np.prod(np.abs(edges).sum(axis=0))):
        return
    grid = one(np.array(OFFSETS) @ edges)
    cell = np.zeros((1, 3), dtype=int)
    assert grid.sizes(cell)[:, 0] == close(np.linalg.norm(edges, axis=1), rel=1e-12)


def test_the_sizes_are_distances_between_centres_of_opposite_faces() -> None:
    corners = warped((3, 2, 2), 8)
    grid = grid_of(corners)
    cells = np.argwhere(grid.present)
    for n, cell in enumerate(cells):
        own = corners[tuple(cell)]
        # Face centres by the corners' numbers, written out.
        faces = [
            ([0, 2, 4, 6], [1, 3, 5, 7]),
            ([0, 1, 4, 5], [2, 3, 6, 7]),
            ([0, 1, 2, 3], [4, 5, 6, 7]),
        ]
        for axis, (low, high) in enumerate(faces):
            apart = own[high].mean(axis=0) - own[low].mean(axis=0)
            assert grid.sizes(cells)[axis, n] == close(float(np.linalg.norm(apart)), rel=1e-13)
            assert grid.axes(cells)[n, axis] == pytest.approx(apart, abs=1e-12)
        middle = point_in(own, 0.5, 0.5, 0.5)
        assert grid.centre(tuple(cell.tolist())).m_as("m") == pytest.approx(middle, abs=1e-12)


def test_corner_number_is_i_plus_2_j_plus_4_k() -> None:
    grid = cut([0, 10], [0, 20], [100, 105])
    corners = grid.corners(np.zeros((1, 3), dtype=int))[0]
    assert corners[1].tolist() == [10.0, 0.0, 100.0]
    assert corners[2].tolist() == [0.0, 20.0, 100.0]
    assert corners[4].tolist() == [0.0, 0.0, 105.0]
    assert corners[7].tolist() == [10.0, 20.0, 105.0]
    assert grid.sizes(np.zeros((1, 3), dtype=int))[:, 0].tolist() == [10.0, 20.0, 5.0]


@given(move=vectors, parts=st.lists(st.floats(-2.0, 2.0), min_size=3, max_size=3))
def test_oblique_components_add_up_to_the_vector(move: Any, parts: list[float]) -> None:
    edges = np.array([[10.0, 1.0, 0.5], [-2.0, 12.0, 1.0], [3.0, 1.0, 4.0]])
    grid = one(np.array(OFFSETS) @ edges + np.array(move))
    cell = np.zeros((1, 3), dtype=int)
    directions = edges / np.linalg.norm(edges, axis=1)[:, None]
    vector = np.array(parts) @ directions
    assert grid.components(cell, vector[None])[0] == pytest.approx(np.abs(parts), abs=1e-12)


MIRRORS = [
    [(-1 if a in flipped else 1) for a in range(3)]
    for flipped in ({0}, {1}, {2}, {0, 1}, {1, 2}, {0, 1, 2})
]


@pytest.mark.parametrize("signs", MIRRORS)
def test_a_grid_mirrored_as_a_whole_is_accepted(signs: list[int]) -> None:
    corners = warped((2, 3, 2), 5)
    plain, mirrored = grid_of(corners), grid_of(corners * signs)
    assert mirrored.volume.m == close(plain.volume.m, rel=1e-13)
    assert mirrored.present.all()
    path = ((-1.0, 3.0, 1.0), (20.0, 30.0, 6.0))
    there = cross(route(*path), plain)
    back = cross(route(*(np.array(path) * signs)), mirrored)
    assert back.cell.tolist() == there.cell.tolist()
    assert back.length.m == pytest.approx(there.length.m, abs=1e-9)


def test_a_cell_inverted_against_the_rest_is_named() -> None:
    corners = corners_of(lattice(range(4), range(3), range(3)))
    corners[2, 1, 0] = corners[2, 1, 0][[1, 0, 3, 2, 5, 4, 7, 6]]
    with pytest.raises(DomainError, match=r"cell \(2, 1, 0\): it is inverted \(inside out\)"):
        grid_of(corners)
    corners[0, 0, 1] = corners[0, 0, 1][[4, 5, 6, 7, 0, 1, 2, 3]]
    with pytest.raises(DomainError, match=r"cell \(0, 0, 1\): it is inverted.*\(2 such cells\)"):
        grid_of(corners)
    present = np.ones((3, 2, 2), dtype=bool)
    present[2, 1, 0] = present[0, 0, 1] = False
    assert grid_of(corners, present=present).present.sum() == 10


SWAPPED = [
    [b if n == a else a if n == b else n for n in range(8)] for a, b in combinations(range(8), 2)
]
FOLDED = [
    [0, 1, 3, 2, 4, 5, 7, 6],  # round the top, as finite elements number them
    [4, 5, 7, 6, 0, 1, 3, 2],  # and from the bottom up
    [0, 1, 2, 3, 4, 5, 7, 6],  # the bottom alone twisted
]


@pytest.mark.parametrize("order", FOLDED + SWAPPED, ids=str)
def test_corners_out_of_order_are_refused(order: list[int]) -> None:
    corners = corners_of(lattice([0, 10, 20], [0, 10], [0, 5]))
    corners[1, 0, 0] = corners[1, 0, 0][order]
    # Ends of a long diagonal that change places turn the cell inside out as a whole.
    words = "its corners are out of order|it is inverted"
    with pytest.raises(DomainError, match=rf"cell \(1, 0, 0\): ({words})"):
        grid_of(corners)


def test_orders_that_turn_or_mirror_the_cell_are_accepted() -> None:
    corners = UNIT.reshape(8, 3) * [3.0, 2.0, 1.0]
    # The cube has 48 symmetries; each numbers the corners soundly.
    orders = set()
    for axes in permutations(range(3)):
        for flips in np.ndindex(2, 2, 2):
            places = [[(o[a] + f) % 2 for a, f in zip(axes, flips, strict=True)] for o in OFFSETS]
            orders.add(tuple(i + 2 * j + 4 * k for i, j, k in places))
    assert len(orders) == 48
    for order in orders:
        assert one(corners[list(order)]).volume.m.ravel() == close([6.0], rel=1e-13)


@pytest.mark.parametrize("degrees", [20, 60, 135])
def test_a_twisted_cell_has_the_volume_between_its_faces(degrees: float) -> None:
    corners = UNIT.reshape(8, 3) - [0.5, 0.5, 0.0]
    turn = np.radians(degrees)
    rotation = np.array([[np.cos(turn), -np.sin(turn)], [np.sin(turn), np.cos(turn)]])
    corners[4:, :2] = corners[4:, :2] @ rotation.T
    assert one(corners).volume.m.ravel() == close([volume_by_flux(corners)], rel=1e-12)


def test_layers_that_cross_are_refused_though_their_volume_cancels() -> None:
    # The top dips below the bottom half way along: as much above as below.
    nodes = lattice([0, 10], [0, 10], [0, 2])
    nodes[1, :, 0, 2], nodes[1, :, 1, 2] = 2.0, 0.0
    with pytest.raises(DomainError, match="its faces cross"):
        grid_of(corners_of(nodes))


def test_a_cell_turned_inside_at_one_corner_is_refused() -> None:
    corners = UNIT.copy()
    corners[0, 0, 0, 7] = [0.2, 0.2, 0.2]
    with pytest.raises(DomainError, match="its faces cross"):
        grid_of(corners)
    corners[0, 0, 0, 7] = [0.8, 0.8, 0.8]
    assert grid_of(corners).present.all()


@pytest.mark.parametrize("at", [(0.0, 0.0, 0.0), (456123.3, 6789012.7, 2000.1)])
@pytest.mark.parametrize("dip", [0.0, 0.13])
def test_cells_without_volume_are_skipped(at: tuple[float, float, float], dip: float) -> None:
    nodes = lattice([0, 33.3, 71.9], [0, 47.1], [0.0, 3.3, 3.3, 7.7])
    nodes[..., 2] += dip * nodes[..., 0]
    grid = grid_of(corners_of(nodes + np.array(at)))
    assert grid.present.tolist() == [[[True, False, True]]] * 2
    volume = grid.volume.m_as("m**3")
    assert volume[:, 0, 0] == close([33.3 * 47.1 * 3.3, 38.6 * 47.1 * 3.3], rel=1e-7)
    found = cross(
        route((at[0] + 20, at[1] + 9, at[2] - 50), (at[0] + 20, at[1] + 9, at[2] + 50)), grid
    )
    assert found.cell.tolist() == [[0, 0, 0], [0, 0, 2]]
    assert found.length.m_as("m") == pytest.approx([3.3, 4.4], abs=1e-6)
    assert len(found.gaps) == 0


def test_a_grid_without_any_volume_is_crossed_nowhere() -> None:
    grid = cut([0, 1], [0, 1], [5, 5])
    assert not grid.present.any()
    assert len(cross(route((0.5, 0.5, 0), (0.5, 0.5, 9)), grid)) == 0


def test_a_thin_cell_is_a_cell() -> None:
    grid = cut([0, 100], [0, 100], [2000, 2000.001])
    assert grid.present.all()
    assert cross(route((5, 5, 1990), (5, 5, 2010)), grid).length.m == pytest.approx(
        [0.001], abs=1e-9
    )


def test_the_mask_and_the_corners_are_the_grid_s_own() -> None:
    corners = corners_of(lattice(range(3), range(2), range(2)))
    present = np.array([[[True]], [[False]]])
    grid = grid_of(corners, present=present)
    present[:] = True
    corners[:] = 0.0
    grid.present[:] = True
    grid.volume.m[:] = 7.0
    grid.centres(np.zeros((1, 3), dtype=int))[:] = 7.0
    assert grid.present.tolist() == [[[True]], [[False]]]
    assert grid.volume.m_as("m**3").ravel() == close([1.0, 1.0], rel=1e-14)
    assert grid.centre((1, 0, 0)).m_as("m").tolist() == [1.5, 0.5, 0.5]
    listed = grid_of(corners_of(lattice(range(3), [0, 1], [0, 1])), present=[[[True]], [[False]]])
    assert listed.present.tolist() == [[[True]], [[False]]]


def test_absent_cells_may_be_folded_but_must_be_numbers() -> None:
    corners = corners_of(lattice(range(3), range(2), range(2)))
    corners[1, 0, 0, 7] = [1.0, 0.0, 0.0]
    with pytest.raises(DomainError, match=r"cell \(1, 0, 0\)"):
        grid_of(corners)
    assert grid_of(corners, present=[[[True]], [[False]]]).present.sum() == 1


def test_answers_in_the_unit_system_in_force() -> None:
    grid = HexahedralGrid(ureg.Quantity(UNIT * 100.0, "ft"))
    assert repr(grid) == "HexahedralGrid(1 x 1 x 1 cells)"
    assert grid.shape == (1, 1, 1)
    with unit_system("oilfield"):
        assert grid.volume.m == close(np.full((1, 1, 1), 1e6), rel=1e-12)
        assert grid.centre((0, 0, 0)).m == close([50.0] * 3, rel=1e-12)


@pytest.mark.parametrize(
    ("corners", "error", "words"),
    [
        (UNIT.reshape(8, 3), ShapeError, r"shape \(nx, ny, nz, 8, 3\); got \(8, 3\)"),
        (UNIT.reshape(1, 1, 8, 3), ShapeError, r"got \(1, 1, 8, 3\)"),
        (np.zeros((1, 1, 1, 3, 8)), ShapeError, r"got \(1, 1, 1, 3, 8\)"),
        (np.zeros((0, 1, 1, 8, 3)), ShapeError, r"got \(0, 1, 1, 8, 3\)"),
    ],
)
def test_corners_of_a_wrong_shape(corners: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        grid_of(corners)


@pytest.mark.parametrize("bad", [np.nan, np.inf, -np.inf])
def test_a_corner_that_is_no_number_is_named(bad: float) -> None:
    corners = corners_of(lattice(range(3), range(3), range(3)))
    corners[1, 0, 1, 5, 2] = bad
    with pytest.raises(DomainError, match=r"corners: .*\[1, 0, 1, 5, 2\]"):
        grid_of(corners)


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"corners": UNIT}, UnitsError, "corners: needs a position"),
        ({"corners": ureg.Quantity(UNIT, "mD")}, UnitsError, "corners: needs a position"),
        ({"present": np.ones((1, 1), dtype=bool)}, ShapeError, r"\(1, 1, 1\); got bool \(1, 1\)"),
        ({"present": np.ones((1, 1, 1))}, ShapeError, "array of bool.*float64"),
        ({"present": [[[1]]]}, ShapeError, "array of bool.*int64"),
        ({"present": [[[True], [True, False]]]}, ShapeError, "its rows differ"),
        ({"present": "all"}, UnitsError, "present: needs ndarray or list"),
    ],
)
def test_bad_grids(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        HexahedralGrid(**({"corners": metres(UNIT)} | changed))


@pytest.mark.parametrize(
    ("cell", "error", "words"),
    [
        ((0, 0, 1), DomainError, "k = 1 is outside the grid: 0 to 0"),
        ((-1, 0, 0), DomainError, "i = -1 is outside"),
        ((0, 0), ShapeError, "three whole numbers"),
        ((0, 0, 0.5), ShapeError, "three whole numbers"),
    ],
)
def test_bad_cells(cell: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        grid_of(UNIT).centre(cell)
