"""Oblique wells: the axes' indices added as vectors, against 50 digits; limits and symmetries."""

import math
from functools import partial
from itertools import permutations
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import blocks_of, metres, rock, route
from tests.oracles import projection
from tests.oracles.projection import projected, with_skin
from tests.space.hexahedra import corners_of, cut, grid_of, lattice
from tests.test_workings import assert_agrees, evaluated
from wellindex import (
    AssumptionWarning,
    Couplings,
    DomainError,
    Path,
    Survey,
    couple,
    cross,
    unit_system,
    ureg,
    workings,
)

close = partial(pytest.approx, abs=0)

SIZES = st.tuples(*[strategies.logarithmic(20.0, 300.0)] * 2, strategies.logarithmic(5.0, 60.0))
#: Anisotropy to 1:1000 keeps ln(r0/rw) above 1 in these blocks: r0 > 0.1985 min(d) for any ratio.
ROCKS = st.tuples(*[strategies.logarithmic(1e-15, 1e-12)] * 3)
LEGS = st.tuples(*[st.floats(0.05, 0.95)] * 3)
RW = st.floats(0.05, 0.15)


def through(sizes: Any, start: Any, stop: Any) -> Path:
    """A leg inside one block from part to part of its sizes."""
    return route(*(tuple(np.multiply(sizes, end)) for end in (start, stop)))


def one_block(sizes: Any, k: Any, path: Path, **others: Any) -> Couplings:
    """The couplings of a path inside one block."""
    return couple(path, blocks_of(*([s] for s in sizes)), rock(*k), **others)


@given(sizes=SIZES, k=ROCKS, start=LEGS, stop=LEGS, rw=RW, skin=st.floats(0.0, 20.0))
def test_the_vector_sum_at_50_digits(
    sizes: Any, k: Any, start: Any, stop: Any, rw: float, skin: float
) -> None:
    parts = np.abs(np.multiply(sizes, np.subtract(stop, start)))
    assume(parts.min() > 1e-3 * parts.max() > 1e-3)
    rows = one_block(sizes, k, through(sizes, start, stop), rw=metres(rw), skin=skin)
    length = float(np.linalg.norm(parts))
    expected = projected(parts, sizes, k, rw, length)
    assert rows.length.m_as("m") == close([length], rel=1e-12)
    assert rows.k_normal.m_as("m**2") == close([float(expected.k_normal)], rel=1e-11)
    assert rows.r0.m_as("m") == close([float(expected.r0)], rel=1e-10)
    assert rows.wi.m_as("m**3") == close([float(with_skin(expected, length, rw, skin))], rel=1e-10)
    assert rows.sector.tolist() == [1.0]
    # k_normal is the permeability across the well that the words define.
    t = parts / length
    k_normal = math.sqrt(
        k[1] * k[2] * t[0] ** 2 + k[0] * k[2] * t[1] ** 2 + k[0] * k[1] * t[2] ** 2
    )
    assert rows.k_normal.m_as("m**2") == close([k_normal], rel=1e-11)


@given(sizes=SIZES, k=ROCKS, start=LEGS, stop=LEGS, rw=RW, skin=st.floats(-0.3, 20.0))
def test_a_skin_put_in_later_is_the_skin_given_at_first(
    sizes: Any, k: Any, start: Any, stop: Any, rw: float, skin: float
) -> None:
    parts = np.abs(np.multiply(sizes, np.subtract(stop, start)))
    assume(parts.min() > 1e-3 * parts.max() > 1e-3)
    path = through(sizes, start, stop)
    clean, damaged = (one_block(sizes, k, path, rw=metres(rw), skin=s) for s in (0.0, skin))
    assert damaged.r0.m.tolist() == clean.r0.m.tolist()
    assert damaged.k_normal.m.tolist() == clean.k_normal.m.tolist()
    logarithm = np.log(clean.r0.m_as("m") / rw)
    later = clean.wi.m * logarithm / (logarithm + skin)
    assert damaged.wi.m == close(later, rel=1e-12)


def test_the_sum_with_skin_differs_as_documented() -> None:
    # Equal logarithms on all axes: no difference. Else a small one: a cube against a thin block.
    path = through((50.0, 50.0, 50.0), (0.1, 0.2, 0.1), (0.9, 0.8, 0.7))
    cube = one_block((50.0,) * 3, (1e-13,) * 3, path, rw="0.1 m", skin=3.0)
    ratio = 0.28072974178344257 * math.sqrt(2) * 50.0 / 0.1 / 2
    expected = 2 * math.pi * 1e-13 * cube.length.m_as("m") / (math.log(ratio) + 3.0)
    assert cube.wi.m_as("m**3") == close(expected, rel=1e-6)


@pytest.mark.parametrize("axis", range(3))
@pytest.mark.parametrize("backwards", [False, True])
def test_an_aligned_well_has_the_axis_formula(axis: int, backwards: bool) -> None:
    start, stop = np.array([30.0, 40.0, 6.0]), np.array([30.0, 40.0, 6.0])
    start[axis], stop[axis] = 1.0, [79.0, 119.0, 15.0][axis]
    ends = (stop, start) if backwards else (start, stop)
    grid = blocks_of([80.0], [120.0], [16.0])
    given_: dict[str, Any] = {"rw": "0.1 m", "skin": 1.5}
    path, k = route(*map(tuple, ends)), rock(2e-13, 5e-14, 1e-14)
    by_axis = couple(path, grid, k, **given_, method="axis")
    by_projection = couple(path, grid, k, **given_)
    for name in ("wi", "r0", "k_normal", "length", "depth"):
        assert getattr(by_projection, name).m.tolist() == getattr(by_axis, name).m.tolist()
    assert by_projection.direction == by_axis.direction == "xyz"[axis]
    assert (by_projection.method, by_axis.method) == ("projection", "axis")


@pytest.mark.parametrize("axis", range(3))
@pytest.mark.parametrize("tilt", [1e-3, 1e-5, 1e-7, 1e-11])
def test_a_nearly_aligned_well_tends_to_the_axis_formula(axis: int, tilt: float) -> None:
    sizes, k = (80.0, 120.0, 16.0), rock(2e-13, 5e-14, 1e-14)
    start, stop = np.full(3, 7.0), np.full(3, 7.0)
    stop[axis] += 8.0
    straight = couple(
        route(tuple(start), tuple(stop)), blocks_of(*([s] for s in sizes)), k, rw="0.1 m"
    )
    stop[axis - 1] += 8.0 * tilt
    leaning = couple(
        route(tuple(start), tuple(stop)), blocks_of(*([s] for s in sizes)), k, rw="0.1 m"
    )
    # The other component enters by its square; here its index is at most 30 times the axis's.
    assert leaning.wi.m == close(straight.wi.m, rel=1000.0 * tilt**2 + 1e-11)
    assert leaning.direction == ("oblique" if tilt > 1e-9 else "xyz"[axis])


def test_the_axis_method_takes_the_dominant_axis() -> None:
    sizes, k = (80.0, 120.0, 16.0), (2e-13, 5e-14, 1e-14)
    path = through(sizes, (0.1, 0.1, 0.1), (0.5, 0.2, 0.8))
    rows = one_block(sizes, k, path, rw="0.1 m", method="axis")
    # Components 32, 12, 11.2 m: along x, over the whole length.
    length = math.sqrt(32.0**2 + 12.0**2 + 11.2**2)
    expected = projected((length, 0.0, 0.0), sizes, k, 0.1, length)
    assert rows.length.m_as("m") == close([length], rel=1e-12)
    assert rows.wi.m_as("m**3") == close([float(expected.wi)], rel=1e-11)
    assert rows.r0.m_as("m") == close([float(expected.r0)], rel=1e-11)


@pytest.mark.parametrize("tight", [0, 1, 2])
def test_one_permeability_of_zero(tight: int) -> None:
    # Only the projection along the tight axis flows: the plane normal to it has both others.
    sizes, k = (80.0, 120.0, 16.0), [2e-13, 5e-14, 1e-14]
    k[tight] = 0.0
    path = through(sizes, (0.1, 0.1, 0.1), (0.5, 0.2, 0.8))
    rows = one_block(sizes, k, path, rw="0.1 m", skin=2.0)
    parts = (32.0, 12.0, 11.2)
    length = math.sqrt(sum(p * p for p in parts))
    expected = projected(parts, sizes, k, 0.1, length)
    assert float(expected.wi) > 0.0
    assert rows.wi.m_as("m**3") == close([float(with_skin(expected, length, 0.1, 2.0))], rel=1e-11)
    assert rows.k_normal.m_as("m**2") == close([float(expected.k_normal)], rel=1e-11)


def test_two_permeabilities_of_zero_leave_an_index_of_zero_with_a_note() -> None:
    sizes = (80.0, 120.0, 16.0)
    path = through(sizes, (0.1, 0.1, 0.1), (0.5, 0.2, 0.8))
    for k in ((2e-13, 0.0, 0.0), (0.0, 0.0, 1e-14), (0.0, 0.0, 0.0)):
        rows = one_block(sizes, k, path, rw="0.1 m", skin=-9.0)
        assert rows.wi.m.tolist() == [0.0]
        assert "no permeability across the well: index 0" in rows.notes[0]
    # A level well in rock without vertical flow has no index: kz counts across it.
    level = through(sizes, (0.1, 0.1, 0.5), (0.5, 0.6, 0.5))
    assert one_block(sizes, (2e-13, 2e-13, 0.0), level, rw="0.1 m").wi.m.tolist() == [0.0]


@given(sizes=SIZES, k=ROCKS, start=LEGS, stop=LEGS, net=strategies.net_to_gross())
def test_net_to_gross_multiplies_kx_and_ky_alone(
    sizes: Any, k: Any, start: Any, stop: Any, net: float
) -> None:
    parts = np.abs(np.multiply(sizes, np.subtract(stop, start)))
    assume(parts.min() > 1e-3 * parts.max() > 1e-3)
    path = through(sizes, start, stop)
    rows = one_block(sizes, k, path, rw="0.05 m", net_to_gross=net)
    expected = projected(
        parts, sizes, (net * k[0], net * k[1], k[2]), 0.05, rows.length.m_as("m")[0]
    )
    assert rows.wi.m_as("m**3") == close([float(expected.wi)], rel=1e-10)
    assert rows.length.m_as("m") == close([float(np.linalg.norm(parts))], rel=1e-12)


@given(sizes=SIZES, k=ROCKS, start=LEGS, stop=LEGS, order=st.permutations(range(3)))
def test_exchanging_the_axes_changes_nothing(
    sizes: Any, k: Any, start: Any, stop: Any, order: Any
) -> None:
    assume(math.dist(np.multiply(sizes, start), np.multiply(sizes, stop)) > 1.0)

    def turned(values: Any) -> list[float]:
        return [values[n] for n in order]

    here = one_block(sizes, k, through(sizes, start, stop), rw="0.05 m", skin=1.0)
    there = one_block(
        turned(sizes), turned(k), through(turned(sizes), turned(start), turned(stop)),
        rw="0.05 m", skin=1.0,
    )  # fmt: skip
    assert there.wi.m == close(here.wi.m, rel=1e-9)
    assert there.r0.m == close(here.r0.m, rel=1e-9)


@given(sizes=SIZES, k=ROCKS, start=LEGS, stop=LEGS, factor=strategies.logarithmic(0.1, 10.0))
def test_scaling_all_lengths_scales_the_index(
    sizes: Any, k: Any, start: Any, stop: Any, factor: float
) -> None:
    assume(math.dist(np.multiply(sizes, start), np.multiply(sizes, stop)) > 1.0)
    large = np.multiply(sizes, factor)
    one = one_block(sizes, k, through(sizes, start, stop), rw=metres(0.05))
    other = one_block(large, k, through(large, start, stop), rw=metres(0.05 * factor))
    assert other.wi.m == close(factor * one.wi.m, rel=1e-9)
    assert other.r0.m == close(factor * one.r0.m, rel=1e-9)


@given(sizes=SIZES, k=ROCKS, start=LEGS, stop=LEGS, factor=strategies.logarithmic(0.01, 100.0))
def test_scaling_the_permeability_scales_the_index(
    sizes: Any, k: Any, start: Any, stop: Any, factor: float
) -> None:
    assume(math.dist(np.multiply(sizes, start), np.multiply(sizes, stop)) > 1.0)
    path = through(sizes, start, stop)
    one = one_block(sizes, k, path, rw="0.05 m")
    other = one_block(sizes, np.multiply(k, factor), path, rw="0.05 m")
    assert other.wi.m == close(factor * one.wi.m, rel=1e-9)
    assert other.r0.m == close(one.r0.m, rel=1e-9)


@pytest.mark.parametrize("flip", [(1, 1, -1), (-1, 1, 1), (-1, -1, -1)])
def test_the_sense_of_a_component_does_not_count(flip: tuple[int, ...]) -> None:
    sizes, k = (80.0, 120.0, 16.0), (2e-13, 5e-14, 1e-14)
    move = np.multiply((0.3, -0.2, 0.25), flip)
    plain = one_block(
        sizes, k, through(sizes, (0.5,) * 3, np.add(0.5, (0.3, 0.2, 0.25))), rw="0.1 m"
    )
    other = one_block(sizes, k, through(sizes, (0.5,) * 3, 0.5 + move), rw="0.1 m")
    assert other.wi.m == close(plain.wi.m, rel=1e-12)


@given(turn=st.floats(0.0, 360.0), seed=st.integers(0, 10**6))
def test_turning_everything_about_the_vertical_changes_nothing(turn: float, seed: int) -> None:
    spread = np.random.default_rng(seed)
    nodes = lattice(*(np.arange(4.0) * size for size in (40.0, 50.0, 12.0)))
    nodes += spread.uniform(-0.1, 0.1, nodes.shape) * [40.0, 50.0, 12.0]
    nodes[..., 2] += 0.05 * nodes[..., 0] + 2000.0
    ends = np.array([[31.0, 37.0, 2006.0], [97.0, 118.0, 2027.0]])
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    rotation = np.array([[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]])
    k = rock(2e-13, 2e-13, 2e-13)
    plain = couple(route(*map(tuple, ends)), grid_of(corners_of(nodes)), k, rw="0.1 m")
    turned = couple(
        route(*map(tuple, ends @ rotation.T)),
        grid_of(corners_of(nodes @ rotation.T)),
        k,
        rw="0.1 m",
    )
    long, other = plain.length.m > 1e-4, turned.length.m > 1e-4
    assert turned.cell[other].tolist() == plain.cell[long].tolist()
    assert turned.wi.m[other] == close(plain.wi.m[long], rel=1e-4)
    assert turned.wi.m.sum() == close(plain.wi.m.sum(), rel=1e-7)


def test_hexahedra_cut_from_a_tensor_grid_give_its_couplings() -> None:
    edges = ([0.0, 40.0, 110.0, 160.0], [0.0, 90.0, 150.0], [1500.0, 1505.0, 1514.0, 1521.0])
    tensor = blocks_of(*map(np.diff, edges), origin=metres([0.0, 0.0, 1500.0]))
    spread = np.random.default_rng(2)
    k = rock(*(spread.uniform(1e-14, 1e-12, (3, 2, 3)) for _ in range(3)))
    net = spread.uniform(0.3, 1.0, (3, 2, 3))
    survey = Survey(
        metres([1495.0, 1515.0, 1600.0]),
        ureg.Quantity(np.array([5.0, 60.0, 88.0]), "degree"),
        ureg.Quantity(np.array([30.0, 50.0, 55.0]), "degree"),
        head=metres([13.0, 17.0, 1499.0]),
    )
    given_: dict[str, Any] = {"rw": "0.09 m", "skin": 2.5, "net_to_gross": net}
    one = couple(survey.path, tensor, k, **given_)
    other = couple(survey.path, cut(*edges), k, **given_)
    assert len(one) > 2
    assert other.cell.tolist() == one.cell.tolist()
    for name in ("wi", "r0", "k_normal", "length", "depth", "block_depth", "md_in", "md_out"):
        assert getattr(other, name).m == close(getattr(one, name).m, rel=1e-9), name


@given(parts=st.tuples(*[st.floats(0.05, 0.9)] * 3), k=ROCKS, skin=st.floats(0.0, 10.0))
def test_oblique_components_on_the_axes_of_a_sheared_cell(parts: Any, k: Any, skin: float) -> None:
    edges = np.array([[80.0, 6.0, 3.0], [-9.0, 100.0, 4.0], [5.0, -3.0, 20.0]])
    grid = grid_of(corners_of(lattice([0, 1], [0, 1], [0, 1]) @ edges))
    start = np.array([0.05, 0.05, 0.05])
    path = route(tuple(start @ edges), tuple((start + parts) @ edges))
    rows = couple(path, grid, rock(*k), rw="0.1 m", skin=skin)
    sizes = np.linalg.norm(edges, axis=1)
    length = float(np.linalg.norm(np.array(parts) @ edges))
    expected = projected(np.array(parts) * sizes, sizes, k, 0.1, length)
    assert rows.length.m_as("m") == close([length], rel=1e-9)
    assert rows.k_normal.m_as("m**2") == close([float(expected.k_normal)], rel=1e-8)
    assert rows.wi.m_as("m**3") == close([float(with_skin(expected, length, 0.1, skin))], rel=1e-8)


def test_a_bent_row_adds_its_components() -> None:
    sizes, k = (80.0, 120.0, 16.0), (2e-13, 5e-14, 1e-14)
    points = [(10.0, 10.0, 2.0), (20.0, 14.0, 5.0), (24.0, 11.0, 9.0), (23.0, 30.0, 8.0)]
    rows = one_block(sizes, k, route(*points), rw="0.1 m")
    parts = np.abs(np.diff(points, axis=0)).sum(axis=0)
    length = sum(map(math.dist, points, points[1:]))
    expected = projected(parts, sizes, k, 0.1, length)
    assert len(rows) == 1
    assert rows.wi.m_as("m**3") == close([float(expected.wi)], rel=1e-10)
    assert rows.k_normal.m_as("m**2") == close([float(expected.k_normal)], rel=1e-10)
    assert rows.r0.m_as("m") == close([float(expected.r0)], rel=1e-10)


def test_splitting_an_interval_changes_nothing() -> None:
    grid = blocks_of([40.0] * 3, [50.0] * 3, [8.0] * 3)
    path = route((11.0, 13.0, 1.0), (110.0, 140.0, 23.0), start=700.0)
    end = path.measured_depth.m_as("m")[1]
    k = rock(2e-13, 5e-14, 1e-14)
    one = couple(path, grid, k, rw="0.1 m", skin=1.0)
    two = couple(path, grid, k, rw="0.1 m", skin=1.0, intervals=metres([[700, 760], [760, end]]))
    assert two.cell.tolist() == one.cell.tolist()
    assert two.wi.m == close(one.wi.m, rel=1e-9)
    # Of different skin they stay apart, and their indices at zero skin add up all the same.
    three = couple(
        path, grid, k, rw="0.1 m", skin=[0.0, 1e-12], intervals=metres([[700, 760], [760, end]])
    )
    clean = couple(path, grid, k, rw="0.1 m")
    cells, sums = three.by_cell()
    assert len(three) == len(clean) + 1
    assert cells.tolist() == clean.cell.tolist()
    assert sums.m == close(clean.wi.m, rel=1e-9)


@pytest.mark.parametrize("order", list(permutations(range(3))))
def test_a_path_reversed_has_the_same_rows_in_reverse(order: tuple[int, ...]) -> None:
    grid = blocks_of([40.0] * 3, [50.0] * 3, [38.0] * 3)
    ends = np.array([[11.0, 13.0, 1.0], [110.0, 140.0, 103.0]])[:, list(order)]
    k = rock(2e-13, 5e-14, 1e-14)
    one = couple(route(*map(tuple, ends)), grid, k, rw="0.1 m")
    back = couple(route(*map(tuple, ends[::-1])), grid, k, rw="0.1 m")
    assert back.cell[::-1].tolist() == one.cell.tolist()
    assert back.wi.m[::-1] == close(one.wi.m, rel=1e-9)


def test_a_claim_of_another_cell_is_a_note() -> None:
    corners = corners_of(lattice([0, 50, 100], [0, 50], [0, 20]))
    corners[1, ..., 0] -= 2.0
    rows = couple(
        route((10, 20, 3), (90, 30, 16)), grid_of(corners), rock(1e-13, 1e-13, 1e-14), rw="0.1 m"
    )
    assert rows.notes == ["cell (1, 0, 0) claims a part of this length too", ""]
    assert len(cross(route((10, 20, 3), (90, 30, 16)), grid_of(corners)).overlaps) == 1


def test_a_block_too_small_across_any_axis_of_the_well() -> None:
    path = through((40.0, 0.6, 0.6), (0.1,) * 3, (0.9,) * 3)
    with pytest.raises(DomainError, match=r"ln\(r0/rw\) is below 0\.5"):
        one_block((40.0, 0.6, 0.6), (1e-13,) * 3, path, rw="0.11 m")
    with pytest.warns(AssumptionWarning, match=r"1 element is not a number: 1 x ln\(r0/rw\)"):
        rows = one_block((40.0, 0.6, 0.6), (1e-13,) * 3, path, rw="0.11 m", invalid="nan")
    assert np.isnan(rows.wi.m).tolist() == [True]
    with pytest.warns(AssumptionWarning, match=r"ln\(r0/rw\) is below 1.*\(1 elements\)") as caught:
        one_block((40.0, 0.6, 0.6), (1e-13,) * 3, path, rw="0.05 m")
    assert len(caught) == 1


def test_only_the_bad_row_of_an_oblique_well_is_lost() -> None:
    grid = blocks_of([40.0] * 3, [50.0] * 3, [8.0] * 3)
    kx = np.full((3, 3, 3), 1e-13)
    kx[1, 1, 1] = math.nan
    with pytest.warns(AssumptionWarning, match="1 x kx"):
        spoiled = rock(kx, 1e-13, 1e-14, invalid="nan")
    path = route((50.0, 60.0, 1.0), (70.0, 80.0, 23.0))
    with pytest.raises(DomainError, match=r"no valid permeability at \[1\]"):
        couple(path, grid, spoiled, rw="0.1 m")
    with pytest.warns(AssumptionWarning, match="no valid permeability"):
        rows = couple(path, grid, spoiled, rw="0.1 m", invalid="nan")
    assert np.isnan(rows.wi.m).tolist() == [False, True, False]
    sound = couple(path, grid, rock(1e-13, 1e-13, 1e-14), rw="0.1 m")
    assert rows.wi[[0, 2]].m == close(sound.wi[[0, 2]].m, rel=1e-13)


SYSTEMS = ["metric", "oilfield", "si", "darcy"]


@pytest.mark.parametrize("system", SYSTEMS)
def test_workings_of_oblique_rows_evaluate_again(system: str) -> None:
    grid = blocks_of([80.0, 50.0], [120.0, 60.0], [30.0, 40.0])
    rows = couple(
        route((30.0, 40.0, 3.0), (120.0, 150.0, 61.0)),
        grid,
        rock(2.3e-13, 7.1e-14, 1.9e-14),
        rw="0.11 m",
        skin=1.7,
        net_to_gross=0.8,
    )
    with unit_system(system):
        shown = workings(rows)
    assert len(shown.steps) == len(rows) >= 3
    for n, steps in shown.steps.items():
        for step in steps:
            assert_agrees(step)
        titles = [step.title for step in steps]
        assert titles.count("Vector sum of the indices (Shu 2005)") == 1
        assert titles[-2:] == ["Flow resistance", "Well index"]
        last = evaluated(steps[-1].result.split(" = ")[-1])
        assert last.a <= rows.wi[n].m_as("m**3") <= last.b
        named = {step.title: step for step in steps}
        for title, value in (
            ("Permeability across the well, t the direction in the block", rows.k_normal[n]),
            ("Equivalent radius of the row", rows.r0[n]),
        ):
            printed = evaluated(named[title].result)
            assert printed.a <= value.to_base_units().m <= printed.b
    assert str(shown).startswith("Coupling 0 in block (0, 0, 0), oblique well\n====")


def test_workings_leave_out_the_axes_that_do_not_flow() -> None:
    sizes = (80.0, 120.0, 16.0)
    path = through(sizes, (0.1, 0.1, 0.1), (0.5, 0.2, 0.8))
    steps = workings(one_block(sizes, (2e-13, 5e-14, 0.0), path, rw="0.1 m")).steps[0]
    assert [s.title for s in steps if s.title.startswith("Index of")] == [
        "Index of the length along z, at zero skin"
    ]
    for step in steps:
        assert_agrees(step)
    tight = workings(one_block(sizes, (2e-13, 0.0, 0.0), path, rw="0.1 m")).steps[0]
    assert tight[-1].result == "0"
    for step in tight[:-1]:
        assert_agrees(step)


def test_the_oracle_knows_the_textbook_case() -> None:
    # A cube of isotropic rock: every direction has the same index per length.
    for parts in ((30.0, 0.0, 0.0), (10.0, 20.0, 20.0)):
        found = projection.projected(parts, (50.0,) * 3, (1e-13,) * 3, 0.1, 30.0)
        radius = 0.28072974178344257 * math.sqrt(2.0) * 50.0 / 2.0
        assert float(found.wi) == close(
            2 * math.pi * 1e-13 * 30.0 / math.log(radius / 0.1), rel=1e-12
        )
        assert float(found.r0) == close(radius, rel=1e-12)


def test_an_oblique_well_needs_the_permeability_of_every_axis() -> None:
    # kz is not across a vertical well, but it is across the horizontal part of an oblique one.
    grid = blocks_of([50.0] * 3, [50.0] * 3, [10.0] * 2)
    kz = np.full((3, 3, 2), 1e-14)
    kz[1, 1, 1] = np.nan
    with pytest.warns(AssumptionWarning, match="1 element is not a number"):
        partly = rock(np.full((3, 3, 2), 1e-13), np.full((3, 3, 2), 1e-13), kz, invalid="nan")
    upright = route((75.0, 75.0, 0.0), (75.0, 75.0, 20.0))
    oblique = route((70.0, 70.0, 0.0), (80.0, 78.0, 20.0))
    assert np.all(np.isfinite(couple(upright, grid, partly, rw="0.1 m").wi.magnitude))
    with pytest.raises(DomainError, match="no valid permeability"):
        couple(oblique, grid, partly, rw="0.1 m")
    with pytest.warns(AssumptionWarning, match="no valid permeability"):
        rows = couple(oblique, grid, partly, rw="0.1 m", invalid="nan")
    assert np.isnan(rows.wi.magnitude).tolist() == [False, True]
