"""Couplings of a path and a grid: rows, intervals, placement, thresholds, refusals."""

import math
from functools import partial
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import (
    BASE,
    LAYER_K,
    LAYERS,
    TOP,
    blocks_of,
    layered_couplings,
    metres,
    rock,
    route,
)
from tests.oracles import closed_form
from wellindex import (
    AssumptionWarning,
    Couplings,
    DomainError,
    Path,
    Permeability,
    TensorGrid,
    couple,
    ureg,
    well_index,
)

close = partial(pytest.approx, abs=0)

DX, DY, DZ = [40.0, 70.0, 50.0], [90.0, 60.0, 80.0], [5.0, 9.0, 7.0]
GRID = blocks_of(DX, DY, DZ)
ROCK = Permeability("90 mD", "30 mD", "10 mD")
MIDDLE = {"x": 75.0, "y": 120.0, "z": 10.0}
#: Where a path runs on a side of its blocks. West, south and top: an inner face, which belongs to
#: the block on its east, north or lower side. The others: sides of the grid.
ON_SIDE = {
    "west": ("x", 40.0),
    "east": ("x", 160.0),
    "south": ("y", 90.0),
    "north": ("y", 230.0),
    "top": ("z", 5.0),
    "bottom": ("z", 21.0),
}
CORNERS = {"x": ("south", "bottom"), "y": ("east", "top"), "z": ("west", "north")}
VERTICAL = route((75.0, 120.0, 0.0), (75.0, 120.0, 21.0))


def straight(direction: str, *, up: bool = False, placement: str = "centre") -> Path:
    """A path through the whole grid along one axis, on the sides that the placement names."""
    length = dict(zip("xyz", map(sum, (DX, DY, DZ)), strict=True))[direction]
    sides = {"centre": (), "corner": CORNERS[direction]}.get(placement, (placement,))
    across = MIDDLE | dict(ON_SIDE[side] for side in sides)
    ends = [across | {direction: end} for end in (0.0, length)]
    points = [tuple(end[axis] for axis in "xyz") for end in (reversed(ends) if up else ends)]
    return route(*points)  # type: ignore[arg-type]


def exact(
    cell: Any, direction: str, length: float, k: tuple[float, float, float], **others: Any
) -> float:
    """The index of one block at 50 digits."""
    i, j, n = (int(index) for index in cell)
    return float(
        closed_form.well_index(
            dx=DX[i], dy=DY[j], dz=DZ[n], kx=k[0], ky=k[1], kz=k[2], direction=direction,
            length=length, **others,
        )
    )  # fmt: skip


@pytest.mark.parametrize("direction", "xyz")
@pytest.mark.parametrize("up", [False, True])
@pytest.mark.parametrize("placement", ["centre", "corner"])
def test_rows_at_50_digits(direction: str, up: bool, placement: str) -> None:
    k = (9e-14, 3e-14, 1e-14)
    path = straight(direction, up=up, placement=placement)
    rows = couple(path, GRID, rock(*k), rw="0.1 m", skin=1.5, placement=placement)
    sizes = {"x": DX, "y": DY, "z": DZ}[direction]
    axis = "xyz".index(direction)
    assert rows.cell[:, axis].tolist() == ([2, 1, 0] if up else [0, 1, 2])
    assert rows.length.m_as("m") == close(np.array(sizes[::-1] if up else sizes), rel=1e-12)
    for cell, length, wi in zip(
        rows.cell, rows.length.m_as("m"), rows.wi.m_as("m**3"), strict=True
    ):
        expected = exact(cell, direction, length, k, rw=0.1, skin=1.5, placement=placement)
        assert wi == close(expected, rel=1e-12)
    assert rows.direction == direction
    assert rows.method == "projection"


@pytest.mark.parametrize(
    ("direction", "placement"),
    [("z", "west"), ("z", "north"), ("x", "top"), ("x", "south"), ("y", "east"), ("y", "bottom")],
)
def test_placement_on_a_side(direction: str, placement: str) -> None:
    k = (9e-14, 3e-14, 1e-14)
    path = straight(direction, placement=placement)
    rows = couple(path, GRID, rock(*k), rw="0.1 m", placement=placement)
    assert rows.sector.tolist() == [0.5] * 3
    expected = [
        exact(cell, direction, length, k, rw=0.1, placement=placement)
        for cell, length in zip(rows.cell, rows.length.m_as("m"), strict=True)
    ]
    assert rows.wi.m_as("m**3") == close(np.array(expected), rel=1e-12)


@pytest.mark.parametrize(("direction", "side"), [("x", "west"), ("y", "north"), ("z", "bottom")])
def test_a_side_that_the_well_crosses_is_refused(direction: str, side: str) -> None:
    with pytest.raises(DomainError, match=f"'{side}' is a side that a well along {direction}"):
        couple(straight(direction), GRID, ROCK, rw="0.1 m", placement=side)


@pytest.mark.parametrize("direction", "xyz")
@pytest.mark.parametrize("placement", ["corner", *ON_SIDE])
def test_a_path_that_is_not_on_the_side_it_names(direction: str, placement: str) -> None:
    if placement != "corner" and ON_SIDE[placement][0] == direction:
        return  # the well crosses it: refused elsewhere
    with pytest.raises(DomainError) as caught:
        couple(straight(direction), GRID, ROCK, rw="0.1 m", placement=placement)
    said = str(caught.value)
    pairs = [("west", "east"), ("south", "north"), ("top", "bottom")]
    pairs.pop("xyz".index(direction))
    sides = " or ".join(pairs[0]) if placement == "corner" else placement
    first = {"x": (0, 1, 1), "y": (1, 0, 1), "z": (1, 1, 0)}[direction]
    assert said.startswith(f"couple(): placement {placement!r} says that the well stands on the ")
    assert f"on the {sides} side of its blocks, but the path does not run there" in said
    assert f"in block {first}: move the path onto the side, or leave the placement out" in said


@pytest.mark.parametrize("direction", "xyz")
def test_a_corner_needs_a_side_of_each_pair(direction: str) -> None:
    one, two = CORNERS[direction]
    for on, off in ((one, two), (two, one)):
        path = straight(direction, placement=on)
        with pytest.raises(DomainError, match=f"the .*{off}.* side of its blocks, but the path"):
            couple(path, GRID, ROCK, rw="0.1 m", placement="corner")
    path = straight(direction, placement="corner")
    assert couple(path, GRID, ROCK, rw="0.1 m", placement="corner").sector.tolist() == [0.25] * 3
    for side in CORNERS[direction]:
        rows = couple(path, GRID, ROCK, rw="0.1 m", placement=side)
        assert rows.sector.tolist() == [0.5] * 3


def test_an_inner_face_is_the_west_south_or_upper_side_of_its_owner() -> None:
    # x = 40 m is between blocks 0 and 1 and belongs to block 1, whose west side it is.
    path = route((40.0, 120.0, 0.0), (40.0, 120.0, 21.0))
    rows = couple(path, GRID, ROCK, rw="0.1 m", placement="west")
    assert rows.cell.tolist() == [[1, 1, 0], [1, 1, 1], [1, 1, 2]]
    with pytest.raises(DomainError, match=r"on the east side .* in block \(1, 1, 0\)"):
        couple(path, GRID, ROCK, rw="0.1 m", placement="east")


@pytest.mark.parametrize("side", ["west", "east"])
def test_a_side_is_met_to_a_millionth_of_the_width(side: str) -> None:
    # Block 1 is 70 m wide, block 2 is 50 m wide.
    face, inwards, width = {"west": (40.0, 1.0, 70.0), "east": (160.0, -1.0, 50.0)}[side]
    for part, fits in ((0.9e-6, True), (1.1e-6, False), (1e-3, False)):
        x = face + inwards * part * width
        path = route((x, 120.0, 0.0), (x, 120.0, 21.0))
        if fits:
            assert len(couple(path, GRID, ROCK, rw="0.1 m", placement=side)) == 3
        else:
            with pytest.raises(DomainError, match=f"stands on the {side} side of its blocks"):
                couple(path, GRID, ROCK, rw="0.1 m", placement=side)


def test_partial_opening_of_blocks() -> None:
    rows = couple(VERTICAL, GRID, ROCK, rw="0.1 m", intervals=[("3 m", "6.5 m"), ("8 m", "15 m")])
    assert rows.cell.tolist() == [[1, 1, 0], [1, 1, 1], [1, 1, 1], [1, 1, 2]]
    assert rows.length.m_as("m") == close(np.array([2.0, 1.5, 6.0, 1.0]), rel=1e-12)
    assert rows.md_in.m_as("m") == close(np.array([3.0, 5.0, 8.0, 14.0]), rel=1e-12)
    assert rows.md_out.m_as("m") == close(np.array([5.0, 6.5, 14.0, 15.0]), rel=1e-12)
    assert rows.depth.m_as("m") == close(np.array([4.0, 5.75, 11.0, 14.5]), rel=1e-12)
    assert rows.block_depth.m_as("m") == close(np.array([2.5, 9.5, 9.5, 17.5]), rel=1e-12)
    whole = couple(VERTICAL, GRID, ROCK, rw="0.1 m")
    shares = np.array([2.0 / 5, 1.5 / 9, 6.0 / 9, 1.0 / 7])
    expected = whole.wi[[0, 1, 1, 2]].m * shares
    assert rows.wi.m == close(expected, rel=1e-12)


def test_measured_depth_counts_from_the_path_s_first_point() -> None:
    path = route((75.0, 120.0, 0.0), (75.0, 120.0, 21.0), start=1000.0)
    rows = couple(path, GRID, ROCK, rw="0.1 m", intervals=[("1003 m", "1006.5 m")])
    assert rows.md_in.m_as("m") == close(np.array([1003.0, 1005.0]), rel=1e-13)
    assert rows.length.m_as("m") == close(np.array([2.0, 1.5]), rel=1e-9)


@pytest.mark.parametrize("start", [0.0, -21.0, -12.0, 5000.0])
@pytest.mark.parametrize("middle", [4.0, 5.0, 12.0])
def test_splitting_an_interval_changes_nothing(start: float, middle: float) -> None:
    path = route((75.0, 120.0, 0.0), (75.0, 120.0, 21.0), start=start)
    marks = [start + m for m in (2.0, middle, 18.0)]
    one = couple(path, GRID, ROCK, rw="0.1 m", intervals=metres([[marks[0], marks[2]]]))
    two = couple(path, GRID, ROCK, rw="0.1 m", intervals=metres([marks[:2], marks[1:]]))
    assert two.cell.tolist() == one.cell.tolist()
    assert two.wi.m == close(one.wi.m, rel=1e-12)


def test_touching_intervals_that_differ_stay_apart() -> None:
    rows = couple(
        VERTICAL,
        GRID,
        ROCK,
        rw=["0.1 m", "0.1 m", "0.08 m"],
        skin=[0.0, 2.0, 2.0],
        intervals=[("0 m", "2 m"), ("2 m", "4 m"), ("4 m", "5 m")],
    )
    assert rows.cell.tolist() == [[1, 1, 0]] * 3
    assert rows.skin.tolist() == [0.0, 2.0, 2.0]
    assert rows.rw.m_as("m") == close(np.array([0.1, 0.1, 0.08]), rel=1e-14)
    given_ = {"dx": "70 m", "dy": "60 m", "dz": "5 m", "kx": "90 mD", "ky": "30 mD", "kz": "1 mD"}
    expected = [
        well_index(**given_, length=length, rw=rw, skin=skin).m
        for length, rw, skin in (("2 m", "0.1 m", 0), ("2 m", "0.1 m", 2), ("1 m", "0.08 m", 2))
    ]
    assert rows.wi.m == close(np.array(expected), rel=1e-12)


def test_radius_and_skin_belong_to_their_interval() -> None:
    rows = couple(
        VERTICAL,
        GRID,
        ROCK,
        rw=ureg.Quantity([0.1, 0.05], "m"),
        skin=np.array([3.0, -0.5]),
        intervals=[("4 m", "6 m"), ("13 m", "16 m")],
    )
    assert rows.cell[:, 2].tolist() == [0, 1, 1, 2]
    assert rows.skin.tolist() == [3.0, 3.0, -0.5, -0.5]
    assert rows.rw.m_as("m") == close(np.array([0.1, 0.1, 0.05, 0.05]), rel=1e-14)


def test_intervals_and_the_edge_of_the_grid() -> None:
    path = route((75.0, 120.0, -30.0), (75.0, 120.0, 40.0))
    with pytest.warns(AssumptionWarning, match="4 m of the open interval from 26 m to 33 m"):
        rows = couple(path, GRID, ROCK, rw="0.1 m", intervals=[("26 m", "33 m")])
    assert rows.length.m_as("m") == close(np.array([3.0]), rel=1e-12)
    with pytest.raises(DomainError, match=r"interval from 60 m to 70 m .*crosses no block"):
        couple(path, GRID, ROCK, rw="0.1 m", intervals=[("31 m", "33 m"), ("60 m", "70 m")])
    assert couple(path, GRID, ROCK, rw="0.1 m").length.m_as("m").sum() == close(21.0, rel=1e-12)


def test_an_interval_outside_is_named_by_its_own_depths_after_joining() -> None:
    path = route((75.0, 120.0, 0.0), (75.0, 120.0, 40.0))
    intervals = [("0 m", "2 m"), ("2 m", "4 m"), ("25 m", "30 m")]
    with pytest.raises(DomainError, match="from 25 m to 30 m in measured depth crosses no block"):
        couple(path, GRID, ROCK, rw="0.1 m", intervals=intervals)


def test_an_interval_beyond_the_path_by_rounding_has_no_length() -> None:
    with pytest.raises(DomainError, match="from 21 m to 21 m in measured depth crosses no block"):
        couple(VERTICAL, GRID, ROCK, rw="0.1 m", intervals=[("21 m", "21.00000001 m")])


def test_a_path_beside_the_grid() -> None:
    with pytest.raises(DomainError, match="crosses no block of the grid: check x, y and depth"):
        couple(route((-5.0, 120.0, 0.0), (-5.0, 120.0, 21.0)), GRID, ROCK, rw="0.1 m")


@pytest.mark.parametrize(
    ("x", "y", "sides"),
    [
        (0.0, 120.0, {"west"}),
        (160.0, 120.0, {"east"}),
        (75.0, 0.0, {"south"}),
        (75.0, 230.0, {"north"}),
        (160.0, 230.0, {"east", "north"}),
    ],
)
@pytest.mark.parametrize("bends", [1, 3, 7])
def test_a_path_on_an_outer_side_is_counted_once_with_a_caution(
    x: float, y: float, sides: set[str], bends: int
) -> None:
    path = route(*((x, y, z) for z in np.linspace(0.0, 21.0, bends + 1)))
    with pytest.warns(AssumptionWarning) as caught:
        rows = couple(path, GRID, ROCK, rw="0.1 m")
    assert len(caught) == len(sides)
    said = {side for side in sides for w in caught if f"on the {side} side" in str(w.message)}
    assert said == sides
    assert rows.length.m_as("m").sum() == close(21.0, rel=1e-12)
    assert rows.sector.tolist() == [1.0] * 3


def test_the_remedy_of_the_caution_is_silent() -> None:
    rows = couple(
        route((160.0, 120.0, 0.0), (160.0, 120.0, 21.0)), GRID, ROCK, rw="0.1 m", placement="east"
    )
    assert rows.sector.tolist() == [0.5] * 3


def test_a_horizontal_path_on_the_top_of_the_grid_is_cautioned() -> None:
    with pytest.warns(AssumptionWarning, match="on the top side"):
        couple(route((0.0, 120.0, 0.0), (160.0, 120.0, 0.0)), GRID, ROCK, rw="0.1 m")


def test_a_path_on_an_inner_face_is_counted_once() -> None:
    rows = couple(route((110.0, 150.0, 0.0), (110.0, 150.0, 21.0)), GRID, ROCK, rw="0.1 m")
    assert rows.cell.tolist() == [[2, 2, 0], [2, 2, 1], [2, 2, 2]]


def test_an_outer_side_given_in_decimals() -> None:
    # 10.1 + 10.7 is not 20.8 in floats; the path is on the side all the same.
    grid = TensorGrid(["10.1 m", "10.7 m"], "30 m", "5 m")
    path = Path([("20.8 m", "20 m", "0 m"), ("20.8 m", "20 m", "5 m")])
    with pytest.warns(AssumptionWarning, match="on the east side"):
        assert couple(path, grid, ROCK, rw="0.1 m").cell.tolist() == [[1, 0, 0]]


def test_absent_blocks_hold_no_coupling() -> None:
    present = np.ones((3, 3, 3), dtype=bool)
    present[1, 1, 1] = False
    grid = blocks_of(DX, DY, DZ, present=present)
    assert couple(VERTICAL, grid, ROCK, rw="0.1 m").cell[:, 2].tolist() == [0, 2]
    with pytest.warns(AssumptionWarning, match="9 m of the open interval from 0 m to 21 m"):
        couple(VERTICAL, grid, ROCK, rw="0.1 m", intervals=[("0 m", "21 m")])


@pytest.mark.parametrize(
    "points",
    [
        ((5.0, 5.0, 0.0), (150.0, 5.0, 10.0)),
        ((75.0, 120.0, 0.0), (75.0, 120.0, 10.0), (150.0, 120.0, 10.0)),
        ((75.0, 120.0, 0.0), (75.1, 120.0, 21.0)),
    ],
)
def test_a_path_off_the_axes_is_oblique(points: tuple[tuple[float, float, float], ...]) -> None:
    rows = couple(route(*points), GRID, ROCK, rw="0.1 m")
    assert rows.direction == "oblique"
    assert rows.length.m_as("m").sum() == close(sum(map(math.dist, points, points[1:])), rel=1e-9)
    with pytest.raises(DomainError, match="placement 'corner' is for a well along one axis"):
        couple(route(*points), GRID, ROCK, rw="0.1 m", placement="corner")


def test_only_the_open_part_must_follow_an_axis() -> None:
    path = route((75.0, 120.0, 0.0), (75.0, 120.0, 10.0), (150.0, 120.0, 10.0))
    rows = couple(path, GRID, ROCK, rw="0.1 m", intervals=[("12 m", "70 m")])
    assert rows.direction == "x"
    assert rows.cell.tolist() == [[1, 1, 1], [2, 1, 1]]


def test_a_block_entered_again_has_two_rows() -> None:
    path = route((75.0, 120.0, 1.0), (75.0, 120.0, 8.0), (75.0, 120.0, 3.0))
    rows = couple(path, GRID, ROCK, rw="0.1 m")
    assert rows.cell[:, 2].tolist() == [0, 1, 0]
    assert rows.length.m_as("m") == close(np.array([4.0, 6.0, 2.0]), rel=1e-12)


def test_permeability_of_each_block() -> None:
    k = np.arange(1.0, 28.0).reshape(3, 3, 3) * 1e-14
    rows = couple(VERTICAL, GRID, rock(k, 2 * k, k), rw="0.1 m")
    expected = [
        exact(cell, "z", DZ[cell[2]], (k[tuple(cell)], 2 * k[tuple(cell)], 1.0), rw=0.1)
        for cell in rows.cell
    ]
    assert rows.wi.m_as("m**3") == close(np.array(expected), rel=1e-12)
    assert rows.k_normal.m_as("m**2") == close(math.sqrt(2) * k[1, 1], rel=1e-12)


@pytest.mark.parametrize("direction", "xyz")
@pytest.mark.parametrize("per_block", [False, True])
def test_net_to_gross_multiplies_kx_and_ky_alone(direction: str, per_block: bool) -> None:
    net = np.linspace(0.2, 0.9, 27).reshape(3, 3, 3) if per_block else 0.7
    k = (9e-14, 3e-14, 1e-14)
    rows = couple(straight(direction), GRID, rock(*k), rw="0.1 m", net_to_gross=net)
    for cell, wi in zip(rows.cell, rows.wi.m_as("m**3"), strict=True):
        n = float(np.broadcast_to(net, (3, 3, 3))[tuple(cell)])
        length = {"x": DX[cell[0]], "y": DY[cell[1]], "z": DZ[cell[2]]}[direction]
        expected = exact(cell, direction, length, (n * k[0], n * k[1], k[2]), rw=0.1)
        assert wi == close(expected, rel=1e-12)


def test_net_to_gross_of_a_vertical_well_is_net_length() -> None:
    net = couple(VERTICAL, GRID, ROCK, rw="0.1 m", net_to_gross=0.6)
    full = couple(VERTICAL, GRID, ROCK, rw="0.1 m")
    assert net.wi.m == close(0.6 * full.wi.m, rel=1e-13)
    assert net.length.m.tolist() == full.length.m.tolist()


def test_tight_layers_have_an_index_of_zero_and_a_note() -> None:
    kx = np.full((3, 3, 3), 1e-13)
    kx[:, :, 1] = 0.0
    rows = couple(VERTICAL, GRID, rock(kx, 1e-13, 0.0), rw="0.1 m", skin=-3.0)
    assert (rows.wi.m == 0.0).tolist() == [False, True, False]
    # Block (1, 1): dx 70 m beside 40 and 50 m, dy 60 m beside 90 and 80 m.
    uneven = (
        "dx of a neighbour differs by a factor of 1.75 and dy of a neighbour differs by a factor "
        "of 1.5: the formula assumes equal blocks"
    )
    assert rows.notes == [uneven, "no permeability across the well: index 0", uneven]
    level = couple(straight("x"), GRID, rock(1e-13, 1e-13, 0.0), rw="0.1 m")
    assert level.wi.m.tolist() == [0.0] * 3


@st.composite
def aligned_wells(draw: st.DrawFn) -> tuple[TensorGrid, Path, str]:
    """An uneven grid and a path along one axis, beginning and ending anywhere."""
    spans = st.lists(st.floats(5.0, 200.0), min_size=1, max_size=6)
    grid = blocks_of(draw(spans), draw(spans), draw(spans))
    direction = draw(strategies.directions())
    ends = [[draw(st.floats(0.01, 0.99)) * e[-1] for e in grid.edges()] for _ in range(2)]
    axis = "xyz".index(direction)
    for other in {0, 1, 2} - {axis}:
        ends[1][other] = ends[0][other]
    ends[1][axis] = draw(st.floats(-100.0, grid.edges()[axis][-1] + 100.0))
    if abs(ends[1][axis] - ends[0][axis]) < 1.0:
        ends[1][axis] = ends[0][axis] + 1.0
    return grid, route(*map(tuple, ends)), direction  # type: ignore[arg-type]


@given(case=aligned_wells())
def test_lengths_add_up_to_the_open_length_inside_the_grid(
    case: tuple[TensorGrid, Path, str],
) -> None:
    grid, path, direction = case
    rows = couple(path, grid, ROCK, rw="0.05 m")
    axis = "xyz".index(direction)
    ends = np.clip(path.points.m_as("m")[:, axis], 0.0, grid.edges()[axis][-1])
    assert rows.length.m_as("m").sum() == close(abs(ends[1] - ends[0]), rel=1e-9)
    assert rows.direction == direction


@given(case=aligned_wells())
def test_a_path_reversed_has_the_same_rows_in_reverse(case: tuple[TensorGrid, Path, str]) -> None:
    grid, path, _direction = case
    rows = couple(path, grid, ROCK, rw="0.05 m")
    back = couple(Path(path.points[::-1]), grid, ROCK, rw="0.05 m")
    thick = rows.length.m > 1e-6
    thick_back = back.length.m > 1e-6
    assert back.cell[thick_back][::-1].tolist() == rows.cell[thick].tolist()
    assert back.wi.m[thick_back][::-1] == close(rows.wi.m[thick], rel=1e-7)


def test_the_layered_well_of_the_tests() -> None:
    rows: Couplings = layered_couplings()
    assert rows.length.m_as("m") == close(np.array(LAYERS), rel=1e-10)
    assert rows.k_normal.m_as("m**2") == close(math.sqrt(2) * np.array(LAYER_K), rel=1e-12)
    assert rows.depth.m_as("m")[0] == close(TOP + LAYERS[0] / 2, rel=1e-12)
    assert rows.depth.m_as("m")[-1] == close(BASE - LAYERS[-1] / 2, rel=1e-12)
