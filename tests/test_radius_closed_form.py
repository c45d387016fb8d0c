"""Equivalent radii against 50-digit arithmetic, the lattice by quadrature and published values."""

from functools import partial
from operator import attrgetter
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mpmath import mp, mpf  # type: ignore[import-untyped]

from tests import strategies
from tests.oracles import closed_form, lattice
from tests.oracles.closed_form import arguments, in_si
from tests.published import tables
from tests.published.tables import Check
from wellindex import (
    DomainError,
    ShapeError,
    UnitsError,
    equivalent_radius,
    equivalent_wellbore_radius,
    ureg,
)
from wellindex.radius.closed_form import HALF_EXP_MINUS_GAMMA

CLOSED = {
    "centre": (),
    "west": (1,),
    "east": (1,),
    "south": (2,),
    "north": (2,),
    "corner": (1, 2),
}
SQUARE = {"dx": "100 m", "dy": "100 m", "kx": "50 mD", "ky": "50 mD"}

close = partial(pytest.approx, abs=0)
widths = strategies.block_sizes()
rock = strategies.permeabilities()


def exact(placement: str, *, dx: float, dy: float, kx: float, ky: float) -> float:
    """The radius of a placed well at 50 digits."""
    return float(closed_form.placed(d1=dx, d2=dy, k1=kx, k2=ky, closed=CLOSED[placement]).r0)


@pytest.mark.parametrize("placement", CLOSED)
@given(dx=widths, dy=widths, kx=rock, ky=rock)
def test_radius_at_50_digits(placement: str, **block: float) -> None:
    assert equivalent_radius.si(**block, placement=placement) == close(
        exact(placement, **block), rel=1e-12
    )


@pytest.mark.parametrize("placement", CLOSED)
@given(dx=widths, dy=widths, k=rock, zero=st.sampled_from(["kx", "ky"]))
def test_radius_with_one_permeability_zero_is_the_limit(
    placement: str, dx: float, dy: float, k: float, zero: str
) -> None:
    block = {"dx": dx, "dy": dy, "kx": k, "ky": k} | {zero: 0.0}
    assert equivalent_radius.si(**block, placement=placement) == close(
        exact(placement, **block), rel=1e-12
    )


def test_one_zero_in_an_array_leaves_the_others_alone() -> None:
    kx = ureg.Quantity([90.0, 0.0, 20.0], "mD")
    found = equivalent_radius(dx="80 m", dy="50 m", kx=kx, ky="10 mD", placement="south")
    for element, k in zip(found, kx, strict=True):
        block = {"dx": 80.0, "dy": 50.0, "kx": float(in_si(f"{k.m:g} mD")), "ky": 1.0}
        block["ky"] = float(in_si("10 mD"))
        assert element.m_as("m") == close(exact("south", **block), rel=1e-12)


def test_constant_is_that_of_euler() -> None:
    assert close(float(mp.exp(-mp.euler) / 2), rel=1e-16) == HALF_EXP_MINUS_GAMMA


PLACED = tables.load("equivalent_radius", "equivalent_radius", "equivalent_radius_placed")
FULL_SPACING = tables.load(
    "equivalent_radius", "equivalent_radius_half_block", "equivalent_radius_off_centre"
)
COMPARISON = tables.load("comparison_1981", "equivalent_radius")


@pytest.mark.parametrize("check", PLACED + FULL_SPACING + COMPARISON, ids=attrgetter("id"))
def test_published_radii(check: Check) -> None:
    block = {name: check.inputs[name] for name in ("dx", "dy", "kx", "ky")}
    placement = check.inputs.get("placement", "centre")
    found = equivalent_radius(**block, placement=placement).m_as(check.unit)
    assert found == close(check.computed, rel=1e-12)
    if check.printed is not None:
        assert found == close(check.printed, rel=check.tolerance)


@pytest.mark.parametrize(
    "check",
    tables.load("equivalent_radius", "equivalent_radius_over_diagonal"),
    ids=attrgetter("id"),
)
def test_radius_is_a_fixed_part_of_the_diagonal(check: Check) -> None:
    # Peaceman (1983): r0 = 0.14 sqrt(dx2 + dy2) in isotropic rock, 0.14 for exp(-gamma)/4.
    sizes = arguments(check.inputs, "dx", "dy")
    ratio = equivalent_radius(**check.inputs).m_as("m") / np.hypot(*sizes.values())
    assert ratio == close(check.computed, rel=1e-12)
    assert ratio == close(check.printed, rel=check.tolerance)


@pytest.mark.parametrize("placement", ["centre", "east", "north", "corner"])
@pytest.mark.parametrize(("dx", "dy", "kx", "ky"), [(60.0, 60.0, 1.0, 1.0), (90.0, 20.0, 3.0, 7.0)])
def test_radius_from_the_lattice_by_quadrature(
    placement: str, dx: float, dy: float, kx: float, ky: float
) -> None:
    sides = {
        f"side_{axis}": 0.0 if number in CLOSED[placement] else None
        for axis, number in (("x", 1), ("y", 2))
    }
    expected = lattice.equivalent_radius(dx=dx, dy=dy, kx=kx, ky=ky, **sides).r0
    found = equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky, placement=placement)
    assert found == close(float(expected), rel=1e-12)


def test_quantities_give_what_si_gives() -> None:
    found = equivalent_radius(dx="300 ft", dy="150 ft", kx="90 mD", ky="10 mD")
    k = (float(in_si("90 mD")), float(in_si("10 mD")))
    expected = equivalent_radius.si(dx=91.44, dy=45.72, kx=k[0], ky=k[1])
    assert found.m_as("m") == close(expected, rel=1e-14)


def test_arrays_broadcast() -> None:
    dx = ureg.Quantity([[50.0], [100.0]], "m")
    ky = ureg.Quantity([1.0, 10.0, 100.0], "mD")
    found = equivalent_radius(dx=dx, dy="70 m", kx="5 mD", ky=ky)
    assert found.shape == (2, 3)
    for i, j in np.ndindex(2, 3):
        alone = equivalent_radius(dx=dx[i, 0], dy="70 m", kx="5 mD", ky=ky[j])
        assert found[i, j].m == close(alone.m, rel=1e-14)


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"dx": "0 m"}, DomainError, "dx: needs a length, positive"),
        ({"dy": "-1 m"}, DomainError, "dy: needs a length, positive"),
        ({"kx": "-1 mD"}, DomainError, "kx: needs a permeability, zero or positive"),
        ({"kx": "0 mD", "ky": "0 mD"}, DomainError, "both zero"),
        ({"dx": 100.0}, UnitsError, "dx: needs a length"),
        ({"dx": "100 mD"}, UnitsError, "dx: needs a length"),
        ({"placement": "top"}, DomainError, "one of 'centre'"),
        ({"dx": ureg.Quantity(float("nan"), "m")}, DomainError, "dx"),
    ],
)
def test_bad_radius_arguments(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        equivalent_radius(**(SQUARE | changed))


def test_shapes_that_do_not_broadcast() -> None:
    with pytest.raises(ShapeError, match=r"dx \(2,\).*kx \(3,\)"):
        equivalent_radius(
            dx=ureg.Quantity([1.0, 2.0], "m"),
            dy="1 m",
            kx=ureg.Quantity([1.0, 2.0, 3.0], "mD"),
            ky="1 mD",
        )


@given(rw=strategies.wellbore_radii(), kx=rock, ky=rock)
def test_wellbore_radius_at_50_digits(rw: float, kx: float, ky: float) -> None:
    found = equivalent_wellbore_radius.si(rw=rw, kx=kx, ky=ky)
    expected = closed_form.equivalent_wellbore_radius(rw=rw, k1=kx, k2=ky)
    assert found == close(float(expected), rel=1e-12)


@given(dx=widths, dy=widths, kx=rock, ky=rock, rw=strategies.wellbore_radii())
def test_radius_contains_the_stretching_of_the_wellbore(
    dx: float, dy: float, kx: float, ky: float, rw: float
) -> None:
    # Peaceman (1983): r0/rw is that of the stretched, isotropic lattice over the mean half-axis.
    stretch = mpf(ky / kx) ** mpf("0.25")
    stretched = mp.exp(-mp.euler) / 4 * mp.hypot(dx * stretch, dy / stretch)
    ratio = equivalent_radius.si(dx=dx, dy=dy, kx=kx, ky=ky) / rw
    wellbore = equivalent_wellbore_radius.si(rw=rw, kx=kx, ky=ky)
    assert ratio == close(float(stretched / wellbore), rel=1e-12)


@pytest.mark.parametrize("zero", ["kx", "ky"])
def test_an_ellipse_needs_both_permeabilities(zero: str) -> None:
    with pytest.raises(DomainError, match="ellipse"):
        equivalent_wellbore_radius(**{"rw": "0.1 m", "kx": "1 mD", "ky": "1 mD", zero: "0 mD"})
