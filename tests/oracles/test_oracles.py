"""The oracles against each other, against the published radii and against direct solutions."""

from collections.abc import Callable
from functools import partial
from itertools import product
from math import pi
from operator import attrgetter
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given, settings
from mpmath import mp, mpf  # type: ignore[import-untyped]

from tests import strategies
from tests.oracles import closed_form, lattice
from tests.oracles.closed_form import arguments, si
from tests.published import tables
from tests.published.tables import Check

Array = np.ndarray[tuple[int, ...], np.dtype[np.float64]]

LATTICES = [(1, 1, 1, 1), (3, 1, 5, 2), (100, 0.5, 1000, 1), (0.5, 100, 1000, 1), (1, 2, 1, 10)]

close = partial(pytest.approx, abs=0)


@pytest.mark.parametrize(("dx", "dy", "kx", "ky"), LATTICES)
@pytest.mark.parametrize("closed", [(), (1,), (2,), (1, 2)])
def test_lattice_gives_the_closed_forms(
    dx: float, dy: float, kx: float, ky: float, closed: tuple[int, ...]
) -> None:
    found = lattice.equivalent_radius(
        dx=dx,
        dy=dy,
        kx=kx,
        ky=ky,
        side_x=0 if 1 in closed else None,
        side_y=0 if 2 in closed else None,
    )
    expected = closed_form.placed(d1=dx, d2=dy, k1=kx, k2=ky, closed=closed)
    assert float(found.r0 / expected.r0 - 1) == pytest.approx(0, abs=1e-20)
    assert found.sector == expected.sector == mpf(1) / 2 ** len(closed)


LATTICE_ROWS = tables.load(
    "equivalent_radius",
    "equivalent_radius",
    "equivalent_radius_half_block",
    "equivalent_radius_off_centre",
    "equivalent_radius_near_sides",
    "equivalent_radius_placed",
) + tables.load("comparison_1981", "equivalent_radius", "equivalent_radius_near_sides")


@pytest.mark.parametrize("check", LATTICE_ROWS, ids=attrgetter("id"))
def test_radius_tables_by_the_lattice(check: Check) -> None:
    sides = arguments(check.inputs, "side_x", "side_y")
    placement = check.inputs.get("placement")
    sides |= {"side_x": 0.0} if placement in ("west", "corner") else {}
    sides |= {"side_y": 0.0} if placement in ("south", "corner") else {}
    found = lattice.equivalent_radius(**arguments(check.inputs, "dx", "dy", "kx", "ky"), **sides)
    assert float(found.r0) / si(check.unit) == close(check.computed, rel=1e-13)


@pytest.mark.parametrize(
    "check",
    tables.load("equivalent_radius", "equivalent_radius_over_diagonal"),
    ids=attrgetter("id"),
)
def test_radius_over_diagonal(check: Check) -> None:
    size = arguments(check.inputs, "dx", "dy", "kx", "ky")
    r0 = closed_form.equivalent_radius(**size)
    assert float(r0) / np.hypot(size["dx"], size["dy"]) == close(check.computed, rel=1e-14)


@pytest.mark.parametrize(
    "check", tables.load("equivalent_radius", "two_wells_resistance"), ids=attrgetter("id")
)
def test_two_wells_in_one_block(check: Check) -> None:
    r0 = closed_form.equivalent_radius(**arguments(check.inputs, "dx", "dy", "kx", "ky"))
    near = arguments(check.inputs, "rw", "distance")
    resistance = mp.log(r0 / near["rw"]) + mp.log(r0 / near["distance"])
    assert float(resistance) == close(check.computed, rel=1e-14)


def quarter_five_spot(intervals: int) -> float:
    """Half the pressure difference injector to producer of the repeated five-spot, k h/mu = 1."""
    nodes = intervals + 1
    number = np.arange(nodes * nodes).reshape(nodes, nodes)
    width = np.ones(nodes)
    width[[0, -1]] = 0.5
    matrix = np.zeros((nodes * nodes, nodes * nodes))
    for i, j in product(range(nodes), range(intervals)):
        for p, q in (
            (number[i, j], number[i, j + 1]),
            (number[j, i], number[j + 1, i]),
        ):
            matrix[[p, q], [p, q]] += width[i]
            matrix[[p, q], [q, p]] -= width[i]
    source = np.zeros(nodes * nodes)
    source[0] = 0.25
    producer = number[-1, -1]
    matrix[producer, :] = 0
    matrix[producer, producer] = 1
    return float(np.linalg.solve(matrix, source)[0])


@pytest.mark.parametrize(
    "check", tables.load("equivalent_radius", "five_spot_radius"), ids=attrgetter("id")
)
def test_five_spots(check: Check) -> None:
    # Peaceman 1978: dp = q mu/(pi k h) (ln(d/r0) - c), with the exact c = ln K(m = 1/2).
    intervals = int(check.inputs["intervals"])
    exponent = -float(mp.log(mp.ellipk(0.5))) - np.pi * quarter_five_spot(intervals)
    assert np.sqrt(2) * intervals * np.exp(exponent) == close(check.computed, rel=1e-11)


def test_muskat_constant_and_the_limit_of_1978() -> None:
    (muskat,) = tables.load("equivalent_radius", "five_spot_constant")
    (limit,) = tables.load("equivalent_radius", "five_spot_limit_radius")
    assert float(mp.log(mp.ellipk(0.5))) == close(muskat.computed, rel=1e-14)
    r0 = lattice.equivalent_radius(dx=1, dy=1).r0
    shift = muskat.computed - float(limit.inputs["muskat_constant"])
    assert float(r0) * np.exp(shift) == close(limit.computed, rel=1e-14)


def test_hexagonal_radius() -> None:
    # Palagi & Aziz 1994: r0 = exp((sum(b/d ln d) - 2 pi)/sum(b/d)); b/d = tan(pi/6) for hexagons.
    (check,) = tables.load("equivalent_radius", "hexagonal_radius")
    total = int(check.inputs["neighbours"]) * mp.tan(mp.pi / 6)
    assert float(mp.exp(-2 * mp.pi / total)) == close(check.computed, rel=1e-14)


@pytest.mark.parametrize("check", tables.load("geometric_factor"), ids=attrgetter("id"))
def test_sectors(check: Check) -> None:
    placement = check.inputs["placement"]
    side_x = 0 if placement in ("west", "corner") else None
    side_y = 0 if placement == "corner" else None
    assert lattice.equivalent_radius(dx=1, dy=1, side_x=side_x, side_y=side_y).sector == (
        check.computed
    )


def line_source(points: Array, wells: list[tuple[float, float]]) -> Array:
    distances = [np.hypot(points[0] - x, points[1] - y) for x, y in wells]
    potential: Array = -np.sum(np.log(distances), axis=0) / (2 * np.pi)
    return potential


def solved_block_pressure(
    a: float, b: float, walls: tuple[bool, bool], wells: list[tuple[float, float]], reach: int
) -> float:
    """Block pressure of a unit source in a finite window, line-source pressures round it."""
    cells = [np.arange(0 if wall else -reach, reach + 1) for wall in walls]
    centres = [(cells[0] + 0.5) * a, (cells[1] + 0.5) * b]
    values, vectors = [], []
    for axis, wall in enumerate(walls):
        size = len(cells[axis])
        operator = 2 * np.eye(size) - np.eye(size, k=1) - np.eye(size, k=-1)
        operator[0, 0] = 1 if wall else 2
        value, vector = np.linalg.eigh(operator * (b / a if axis == 0 else a / b))
        values.append(value)
        vectors.append(vector)
    source = np.zeros((len(cells[0]), len(cells[1])))
    block = tuple(np.flatnonzero(cell == 0)[0] for cell in cells)
    source[block] = 1
    for end, step in ((-1, 1), (0, -1)):
        if end == -1 or not walls[0]:
            ghost = np.full(len(centres[1]), centres[0][end] + step * a)
            source[end, :] += b / a * line_source(np.array([ghost, centres[1]]), wells)
        if end == -1 or not walls[1]:
            ghost = np.full(len(centres[0]), centres[1][end] + step * b)
            source[:, end] += a / b * line_source(np.array([centres[0], ghost]), wells)
    inner = vectors[0].T @ source @ vectors[1] / (values[0][:, None] + values[1][None, :])
    return float((vectors[0] @ inner @ vectors[1].T)[block])


SIDES: list[tuple[float | None, float | None]] = [
    (None, None),
    (0.0, None),
    (None, 0.0),
    (0.0, 0.0),
    (0.5, None),
    (0.5, 0.5),
    (0.0, 0.5),
    (0.3, None),
    (0.9, 0.2),
]


@pytest.mark.parametrize(("a", "b"), [(1.0, 1.0), (1.5, 1.0)])
@pytest.mark.parametrize("sides", SIDES)
def test_lattice_against_a_finite_window(
    a: float, b: float, sides: tuple[float | None, float | None]
) -> None:
    # Line-source data on the rim err to second order in 1/reach: extrapolate from two reaches.
    rw, spacing = 1e-3, (a, b)
    walls = (sides[0] is not None, sides[1] is not None)
    well = tuple(
        size / 2 if side is None else side * size for side, size in zip(sides, spacing, strict=True)
    )
    mirrors = [(1, -1) if wall else (1,) for wall in walls]
    wells = [(i * well[0], j * well[1]) for i, j in product(*mirrors)]
    coarse, fine = (solved_block_pressure(a, b, walls, wells, reach) for reach in (23, 47))
    apart = [np.hypot(x - well[0], y - well[1]) for x, y in wells]
    pressure = -sum(np.log(max(distance, rw)) for distance in apart) / (2 * np.pi)
    sector = 1 / sum(distance == 0 for distance in apart)
    r0 = rw * np.exp(2 * np.pi * sector * (pressure - (4 * fine - coarse) / 3))
    found = lattice.equivalent_radius(
        dx=a,
        dy=b,
        side_x=well[0] if walls[0] else None,
        side_y=well[1] if walls[1] else None,
    )
    assert r0 == close(float(found.r0), rel=3e-5)
    assert float(found.sector) == sector


@pytest.mark.parametrize(
    ("m", "n", "value"),
    [(1, 0, 1 / 4), (1, 1, 1 / pi), (2, 0, 1 - 2 / pi), (2, 1, 2 / pi - 1 / 4), (2, 2, 4 / pi / 3)],
)
def test_kernel_of_the_square_lattice(m: int, n: int, value: float) -> None:
    # Half the resistances between nodes of the infinite square grid of unit resistors: Atkinson &
    # van Steenwijk, Am. J. Phys. 67 (1999) 486, from memory of the source.
    assert float(lattice.potential_kernel(m, n, a=1, b=1)) == close(value, rel=1e-15)
    mirrored = lattice.potential_kernel(n, m, a=1, b=1)
    assert float(mirrored) == close(value, rel=1e-15)


@pytest.mark.parametrize(("m", "n"), [(30, 0), (0, 30), (20, 25)])
def test_far_field_of_the_kernel(m: int, n: int) -> None:
    a, b = 1.5, 1.0
    far = mp.log(mp.hypot(m * a, n * b)) + lattice.far_field_constant(a=a, b=b)
    kernel = 2 * mp.pi * lattice.potential_kernel(m, n, a=a, b=b)
    # The next term of the expansion is below a**2/(6 r**2).
    assert float(kernel) == pytest.approx(float(far), abs=a**2 / (6 * 30**2))


@pytest.mark.parametrize(("kx", "ky", "size"), [(0.0, 2.0, 3.0), (2.0, 0.0, 5.0)])
def test_limit_of_one_zero_permeability(kx: float, ky: float, size: float) -> None:
    # Peaceman 1983 as one permeability goes to zero: exp(-gamma)/2 times the width along the
    # axis of the zero.
    r0 = closed_form.equivalent_radius(dx=3.0, dy=5.0, kx=kx, ky=ky)
    assert float(r0) == close(float(mp.exp(-mp.euler) / 2 * size), rel=1e-15)
    with pytest.raises(ValueError, match="not both zero"):
        closed_form.equivalent_radius(dx=3.0, dy=5.0, kx=0.0, ky=0.0)


def test_equivalent_wellbore_radius_is_the_mean_of_ln_over_the_ellipse() -> None:
    # The far field of an ellipse with half-axes A, B is that of a circle of radius (A + B)/2:
    # the equilibrium measure has ln((A + B)/2) as its energy (conformal map z + c/z).
    k1, k2 = 5.0, 0.2
    with mp.workdps(30):
        first, second = (mpf(k2) / k1) ** mpf("0.25"), (mpf(k1) / k2) ** mpf("0.25")

        def log_distance(angle: mpf) -> mpf:
            return mp.log(mp.hypot(first * mp.cos(angle), second * mp.sin(angle)))

        mean = mp.quad(log_distance, [0, mp.pi / 8, mp.pi / 4, mp.pi / 2]) * 2 / mp.pi
    found = closed_form.equivalent_wellbore_radius(rw=1.0, k1=k1, k2=k2)
    assert float(mp.log(found)) == close(float(mean), rel=1e-14)


def test_radial_productivity_constants_by_integration() -> None:
    # Average over the circle's area of the steady and pseudo-steady profiles (Dake 1978, ch. 6).
    re, rw = 300.0, 0.1
    common = {"k": 1.0, "h": 1.0, "re": re, "rw": rw, "mu": 1.0, "formation_volume_factor": 1.0}

    def average(profile: Callable[[mpf], mpf]) -> float:
        area = (mpf(re) ** 2 - mpf(rw) ** 2) / 2
        grid = [rw, 1, 10, 100, re]
        return float(mp.quad(lambda r: profile(r) * r, grid) / area)

    def steady(r: mpf) -> mpf:
        return mp.log(r / rw)

    def pseudo_steady(r: mpf) -> mpf:
        return mp.log(r / rw) - r**2 / (2 * mpf(re) ** 2)

    for regime, profile in (("steady", steady), ("pseudo_steady", pseudo_steady)):
        for against, resistance in (
            ("outer_boundary", float(profile(mpf(re)))),
            ("average", average(profile)),
        ):
            j = closed_form.radial_productivity_index(**common, regime=regime, against=against)
            assert float(2 * mp.pi / j) == close(resistance, rel=1e-6)


@pytest.mark.parametrize(
    "check",
    tables.load("comparison_1981", "well_index", "well_index_near_sides"),
    ids=attrgetter("id"),
)
def test_comparison_grid_indices(check: Check) -> None:
    block = arguments(check.inputs, "dx", "dy", "dz", "kx", "ky", "kz", "rw")
    sides = arguments(check.inputs, "side_x", "side_y")
    radius = float(lattice.equivalent_radius(dx=block["dx"], dy=block["dy"], **sides).r0)
    wi = closed_form.well_index(**block, equivalent_radius=radius)
    assert float(wi) / si(check.unit) == close(check.computed, rel=1e-13)


def test_radial_pressure_agrees_with_darcy_and_meets_both_ends() -> None:
    block: dict[str, Any] = {
        "dx": 40.0,
        "dy": 40.0,
        "dz": 7.0,
        "kx": 2e-13,
        "ky": 2e-13,
        "kz": 1e-14,
    }
    rw, skin, pwf, p_block, mu = 0.1, 1.5, 9e6, 1.1e7, 2e-3
    wi = closed_form.well_index(**block, rw=rw, skin=skin)
    rate = closed_form.block_productivity_index(wi=wi, mu=mu, formation_volume_factor=1.0)
    rate *= p_block - pwf
    r0 = closed_form.equivalent_radius(dx=40.0, dy=40.0, kx=2e-13, ky=2e-13)
    for r in (rw, 1.0, float(r0)):
        profile = {"r": r, "pwf": pwf, "rw": rw, "skin": skin}
        between = closed_form.radial_pressure(**profile, p_block=p_block, r0=r0)
        darcy = closed_form.radial_pressure_at_rate(**profile, rate=rate, k=2e-13, h=7.0, mu=mu)
        assert float(between) == close(float(darcy), rel=1e-14)
    assert float(between) == close(p_block, rel=1e-14)


def test_well_index_by_direction_placement_and_zero_rock() -> None:
    block: dict[str, Any] = {
        "dx": 10.0,
        "dy": 20.0,
        "dz": 3.0,
        "kx": 1e-13,
        "ky": 2e-13,
        "kz": 3e-14,
    }
    turned: dict[str, Any] = {
        "dx": 3.0,
        "dy": 10.0,
        "dz": 20.0,
        "kx": 3e-14,
        "ky": 1e-13,
        "kz": 2e-13,
    }
    for direction, same, placement, same_placement in (
        ("x", "y", "top", "west"),
        ("y", "z", "corner", "corner"),
        ("z", "x", "west", "south"),
    ):
        first = closed_form.well_index(**block, rw=0.1, direction=direction, placement=placement)
        second = closed_form.well_index(**turned, rw=0.1, direction=same, placement=same_placement)
        assert float(first) == close(float(second), rel=1e-15)
    assert closed_form.well_index(**{**block, "kz": 0.0}, rw=0.1, direction="x") == 0


def test_stretched_radius_reads_against_rw() -> None:
    isotropic = closed_form.stretched_radius(x=3.0, y=4.0, kx=1.0, ky=1.0)
    assert float(isotropic) == close(5.0, rel=1e-15)
    # On its two axes the stretched wellbore's mean radius is the true one.
    ends = [closed_form.stretched_radius(x=x, y=1 - x, kx=7.0, ky=1.0) for x in (0.0, 1.0)]
    assert float(sum(ends) / 2) == close(1.0, rel=1e-15)


@settings(max_examples=60, deadline=None)
@given(block=strategies.blocks(zero_permeability=True))
def test_drawn_blocks_are_large_enough_for_an_index(block: strategies.Block) -> None:
    size = {"x": block.dx, "y": block.dy, "z": block.dz}
    rock = {"x": block.kx, "y": block.ky, "z": block.kz}
    first, second = closed_form.PLANE[block.direction]
    assume(rock[first] > 0 or rock[second] > 0)
    for closed in ((), (1,), (2,), (1, 2)):
        found = closed_form.placed(
            d1=size[first], d2=size[second], k1=rock[first], k2=rock[second], closed=closed
        )
        resistance = float(mp.log(found.r0 / block.rw))
        assert resistance > 1
        assert resistance + block.skin > 0.5
