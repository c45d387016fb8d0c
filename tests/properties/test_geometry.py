"""What equivalent radii, well indices and couplings must obey whatever the numbers."""

import math
from functools import partial
from itertools import permutations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import blocks_of, metres, rock, route
from tests.strategies import PLANE, Block
from wellindex import Couplings, couple, equivalent_radius, well_index

close = partial(pytest.approx, abs=0)
AXES = "xyz"
SIDES = {"x": ("west", "east"), "y": ("south", "north"), "z": ("top", "bottom")}
AXIS_OF = {side: axis for axis, pair in SIDES.items() for side in pair}
widths = strategies.block_sizes()
rocks = strategies.permeabilities()


@given(data=st.data(), block=strategies.blocks(zero_permeability=True))
def test_permuting_the_axes_changes_nothing(data: st.DataObject, block: Block) -> None:
    placement = data.draw(strategies.placements(block.direction))
    expected = well_index.si(**block.arguments, placement=placement)
    for order in permutations(AXES):
        renamed = dict(zip(AXES, order, strict=True))
        turned = {f"d{renamed[a]}": getattr(block, f"d{a}") for a in AXES}
        turned |= {f"k{renamed[a]}": getattr(block, f"k{a}") for a in AXES}
        where = placement
        if placement in AXIS_OF:
            end = SIDES[AXIS_OF[placement]].index(placement)
            where = SIDES[renamed[AXIS_OF[placement]]][end]
        found = well_index.si(
            **turned, rw=block.rw, skin=block.skin, direction=renamed[block.direction],
            placement=where,
        )  # fmt: skip
        assert found == close(expected, rel=1e-12)


@given(block=strategies.blocks(), scale=strategies.logarithmic(1e-3, 1e3))
def test_scaling_all_lengths_scales_the_index(block: Block, scale: float) -> None:
    larger = {n: v * scale if n in ("dx", "dy", "dz", "rw") else v
              for n, v in block.arguments.items()}  # fmt: skip
    assert well_index.si(**larger) == close(scale * well_index.si(**block.arguments), rel=1e-11)


@given(block=strategies.blocks(), scale=strategies.logarithmic(1e-3, 1e3))
def test_scaling_permeability_scales_the_index(block: Block, scale: float) -> None:
    richer = {n: v * scale if n in ("kx", "ky", "kz") else v for n, v in block.arguments.items()}
    assert well_index.si(**richer) == close(scale * well_index.si(**block.arguments), rel=1e-11)


@given(block=strategies.blocks(), scale=strategies.logarithmic(1e-3, 1e3))
def test_permeability_along_the_well_does_not_count(block: Block, scale: float) -> None:
    along = "k" + block.direction
    other = block.arguments | {along: getattr(block, along) * scale}
    assert well_index.si(**other) == well_index.si(**block.arguments)


@given(dx=widths, dy=widths, kx=rocks, ky=rocks, scale=strategies.logarithmic(1e-3, 1e3))
def test_the_radius_scales_with_lengths_and_not_with_permeability(
    dx: float, dy: float, kx: float, ky: float, scale: float
) -> None:
    r0 = equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky)
    larger = equivalent_radius.si(dx=scale * dx, dy=scale * dy, kx=kx, ky=ky)
    richer = equivalent_radius.si(dx=dx, dy=dy, kx=scale * kx, ky=scale * ky)
    assert larger == close(scale * r0, rel=1e-12)
    assert richer == close(r0, rel=1e-12)


@given(
    dx=widths, dy=widths, kx=rocks, ky=rocks,
    pair=st.sampled_from([("centre", "centre"), ("corner", "corner"), ("west", "north"),
                          ("east", "south")]),
)  # fmt: skip
def test_swapping_the_two_axes_of_the_plane(
    dx: float, dy: float, kx: float, ky: float, pair: tuple[str, str]
) -> None:
    one = equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky, placement=pair[0])
    other = equivalent_radius.si(dx=dy, dy=dx, kx=ky, ky=kx, placement=pair[1])
    assert one == close(other, rel=1e-13)


@given(dx=widths, dy=widths, kx=rocks, ky=rocks)
def test_stretching_makes_the_rock_isotropic(dx: float, dy: float, kx: float, ky: float) -> None:
    # Only dx (ky/kx)**(1/4) and dy (kx/ky)**(1/4) count, up to the wellbore's mean half-axis.
    stretch = (ky / kx) ** 0.25
    isotropic = equivalent_radius.si(dx=dx * stretch, dy=dy / stretch, kx=1.0, ky=1.0)
    mean = (stretch + 1 / stretch) / 2
    assert equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky) == close(isotropic / mean, rel=1e-12)


@given(dx=widths, dy=widths, k=rocks)
def test_isotropic_and_square_limits(dx: float, dy: float, k: float) -> None:
    # Peaceman (1983): 0.14 of the diagonal, with exp(-gamma)/4 for 0.14; Peaceman (1978): 0.2 dx.
    constant = math.exp(-np.euler_gamma) / 4
    assert equivalent_radius.si(dx=dx, dy=dy, kx=k, ky=k) == close(
        constant * math.hypot(dx, dy), rel=1e-12
    )
    square = equivalent_radius.si(dx=dx, dy=dx, kx=k, ky=k)
    assert square == close(constant * math.sqrt(2) * dx, rel=1e-12)
    assert square / dx == close(0.2, rel=8e-3)


@given(dx=widths, dy=widths, kx=rocks, ky=rocks)
def test_the_least_radius_is_a_fifth_of_the_lesser_width(
    dx: float, dy: float, kx: float, ky: float
) -> None:
    r0 = equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky)
    constant = math.exp(-np.euler_gamma) / 2
    assert constant / math.sqrt(2) * min(dx, dy) * (1 - 1e-12) <= r0
    assert r0 <= constant * math.hypot(dx, dy) * (1 + 1e-12)


@given(dx=widths, dy=widths, kx=rocks, ky=rocks)
def test_closed_sides_put_the_block_s_pressure_further_out(
    dx: float, dy: float, kx: float, ky: float
) -> None:
    def radius(placement: str) -> float:
        return equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky, placement=placement)

    centre, west, south, corner = map(radius, ("centre", "west", "south", "corner"))
    assert centre <= min(west, south) * (1 + 1e-14)
    assert max(west, south) <= corner * (1 + 1e-14)
    assert corner == close(math.exp(0.5) * math.sqrt(west * south), rel=1e-12)


@given(block=strategies.blocks(), more=st.floats(0.01, 30.0))
def test_the_index_falls_with_skin(block: Block, more: float) -> None:
    damaged = block.arguments | {"skin": block.skin + more}
    assert well_index.si(**damaged) < well_index.si(**block.arguments)


@given(block=strategies.blocks(), share=st.floats(0.05, 0.98))
def test_the_index_rises_with_the_wellbore(block: Block, share: float) -> None:
    thinner = block.arguments | {"rw": share * block.rw}
    assert well_index.si(**thinner) < well_index.si(**block.arguments)


@given(block=strategies.blocks(), factor=st.floats(1.01, 50.0))
def test_a_smaller_wellbore_is_a_skin_of_its_logarithm(block: Block, factor: float) -> None:
    # ln(r0/rw) + s is unchanged where rw/exp(s) is: the wellbore radius in effect.
    thinner = block.arguments | {"rw": block.rw / factor, "skin": block.skin - math.log(factor)}
    assert well_index.si(**thinner) == close(well_index.si(**block.arguments), rel=1e-11)


@given(block=strategies.blocks(), share=st.floats(0.001, 1.0))
def test_the_index_is_linear_in_length(block: Block, share: float) -> None:
    along = getattr(block, "d" + block.direction)
    part = well_index.si(**block.arguments, length=share * along)
    assert part == close(share * well_index.si(**block.arguments), rel=1e-12)


def rows_of(block: Block, scale: float = 1.0, count: int = 3, k_scale: float = 1.0) -> Couplings:
    """A well through a row of equal blocks along its direction, all lengths scaled."""
    sizes = {a: [scale * getattr(block, "d" + a)] for a in AXES}
    sizes[block.direction] *= count
    middle = [sum(sizes[a]) / 2 for a in AXES]
    ends = [list(middle), list(middle)]
    axis = AXES.index(block.direction)
    ends[0][axis], ends[1][axis] = 0.0, sum(sizes[block.direction])
    k = [k_scale * getattr(block, "k" + a) for a in AXES]
    return couple(
        route(*map(tuple, ends)),  # type: ignore[arg-type]
        blocks_of(*(sizes[a] for a in AXES)),
        rock(*k),
        rw=metres(scale * block.rw),
        skin=block.skin,
    )


@given(block=strategies.blocks())
def test_couplings_of_equal_blocks_are_the_block_s_index(block: Block) -> None:
    expected = well_index.si(**block.arguments)
    assert rows_of(block).wi.m_as("m**3") == close(np.full(3, expected), rel=1e-9)


@given(block=strategies.blocks(), scale=strategies.logarithmic(0.01, 100.0))
def test_couplings_scale_with_lengths_and_permeability(block: Block, scale: float) -> None:
    wi = rows_of(block).wi.m
    assert rows_of(block, scale=scale).wi.m == close(scale * wi, rel=1e-9)
    assert rows_of(block, k_scale=scale).wi.m == close(scale * wi, rel=1e-11)


@given(block=strategies.blocks(direction="z"), net=strategies.net_to_gross())
def test_net_to_gross_is_net_length_for_a_vertical_well(block: Block, net: float) -> None:
    gross = well_index.si(**block.arguments)
    thin = block.arguments | {"kx": net * block.kx, "ky": net * block.ky}
    assert well_index.si(**thin) == close(
        well_index.si(**block.arguments, length=net * block.dz), rel=1e-12
    )
    assert well_index.si(**thin) == close(net * gross, rel=1e-12)


def test_the_plane_of_each_direction_is_the_other_two_axes() -> None:
    assert {d: [name[1] for name in PLANE[d]] for d in AXES} == {
        "x": ["y", "z"],
        "y": ["x", "z"],
        "z": ["x", "y"],
    }
