"""The radial profile against the exact solution, the well index and its own limits."""

import math
from functools import partial
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import metres, pascals, square_metres
from tests.oracles import closed_form
from tests.strategies import Block
from wellindex import (
    AssumptionWarning,
    DomainError,
    ShapeError,
    UnitsError,
    equivalent_radius,
    equivalent_wellbore_radius,
    radial_profile,
    unit_system,
    ureg,
    well_index,
)

PLANE = {"dx": "100 m", "dy": "60 m", "kx": "90 mD", "ky": "10 mD", "rw": "0.1 m"}
PRESSURES = {"pwf": "150 bar", "p_block": "200 bar"}

close = partial(pytest.approx, abs=0)
blocks = strategies.blocks(direction="z")


def profile_of(block: Block, pwf: float, p_block: float, **others: Any) -> Any:
    """The profile of a block across a vertical well."""
    return radial_profile(
        dx=metres(block.dx), dy=metres(block.dy), kx=square_metres(block.kx),
        ky=square_metres(block.ky), rw=metres(block.rw), skin=block.skin, pwf=pascals(pwf),
        p_block=pascals(p_block), **others,
    )  # fmt: skip


@given(block=blocks, pwf=strategies.pressures(), p_block=strategies.pressures())
def test_profile_at_50_digits(block: Block, pwf: float, p_block: float) -> None:
    profile = profile_of(block, pwf, p_block)
    k = {"kx": block.kx, "ky": block.ky}
    r0 = closed_form.equivalent_radius(dx=block.dx, dy=block.dy, **k)
    stretched = closed_form.equivalent_wellbore_radius(rw=block.rw, k1=block.kx, k2=block.ky)
    radii = profile.radius.m_as("m")
    for radius, pressure in list(zip(radii, profile.pressure.m_as("Pa"), strict=True))[::20]:
        true = float(radius) / stretched * block.rw
        expected = closed_form.radial_pressure(
            r=true, pwf=pwf, p_block=p_block, r0=r0, rw=block.rw, skin=block.skin
        )
        scale = max(pwf, p_block, abs(float(expected)))
        assert pressure == pytest.approx(float(expected), abs=2e-12 * scale)


@given(block=blocks, angle=st.floats(0.0, math.tau), share=st.floats(0.0, 1.0))
def test_a_point_of_the_block_has_one_radius(block: Block, angle: float, share: float) -> None:
    # In stretched coordinates, x (ky/kx)**(1/4) and y (kx/ky)**(1/4), pressure is a circle's.
    distance = block.rw * 5.0 + share * block.dx
    x, y = distance * math.cos(angle), distance * math.sin(angle)
    ratio = (block.ky / block.kx) ** 0.25
    radius = math.hypot(x * ratio, y / ratio)
    k = {"kx": block.kx, "ky": block.ky}
    true = closed_form.stretched_radius(x=x, y=y, **k)
    wellbore = closed_form.equivalent_wellbore_radius(rw=block.rw, k1=block.kx, k2=block.ky)
    inner = float(wellbore) * math.exp(max(0.0, -block.skin))
    assume(abs(radius / inner - 1.0) > 1e-9)
    if radius < inner:
        with pytest.raises(DomainError, match=r"lies inside the (wellbore|effective radius)"):
            profile_of(block, 1e7, 2e7, radius=metres([radius]))
        return
    expected = closed_form.radial_pressure(
        r=true,
        pwf=1e7,
        p_block=2e7,
        r0=closed_form.equivalent_radius(dx=block.dx, dy=block.dy, **k),
        rw=block.rw,
        skin=block.skin,
    )
    found = profile_of(block, 1e7, 2e7, radius=metres([radius])).pressure.m_as("Pa")
    assert found[0] == pytest.approx(float(expected), abs=1e-4 + 1e-11 * abs(float(expected)))


@given(block=blocks, pwf=strategies.pressures(), p_block=strategies.pressures())
def test_flow_through_any_circle_is_the_well_index_times_drawdown(
    block: Block, pwf: float, p_block: float
) -> None:
    # Darcy's law on a circle: q mu / h = 2 pi k dp / dln(r), k = sqrt(kx ky).
    profile = profile_of(block, pwf, p_block)
    radii, pressures = profile.radius.m_as("m"), profile.pressure.m_as("Pa")
    slope = (pressures[-1] - pressures[0]) / math.log(radii[-1] / radii[0])
    flow = 2 * math.pi * math.sqrt(block.kx * block.ky) * block.dz * slope
    expected = well_index.si(**block.arguments) * (p_block - pwf)
    scale = well_index.si(**block.arguments) * max(pwf, p_block)
    assert flow == pytest.approx(expected, abs=1e-11 * scale)


def test_where_pressure_equals_that_of_the_block() -> None:
    profile = radial_profile(**PLANE, **PRESSURES, skin=3.0)
    again = radial_profile(**PLANE, **PRESSURES, skin=3.0, radius=profile.r0)
    assert again.pressure[0].m_as("bar") == close(200.0, rel=1e-13)


def test_isotropic_rock_needs_no_stretching() -> None:
    plane = PLANE | {"ky": "90 mD"}
    profile = radial_profile(**plane, **PRESSURES)
    assert profile.coordinates == "true"
    assert profile.rw.m_as("m") == close(0.1, rel=1e-15)
    expected = equivalent_radius(**{n: plane[n] for n in ("dx", "dy", "kx", "ky")})
    assert profile.r0.m == close(expected.m, rel=1e-14)


def test_anisotropic_rock_is_stretched() -> None:
    profile = radial_profile(**PLANE, **PRESSURES)
    assert profile.coordinates == "stretched"
    wellbore = equivalent_wellbore_radius(**{n: PLANE[n] for n in ("rw", "kx", "ky")})
    assert profile.rw.m == close(wellbore.m, rel=1e-14)
    assert "stretched" in repr(profile)


@pytest.mark.parametrize("skin", [0.0, 4.0])
def test_the_drop_of_skin_lies_at_the_wellbore(skin: float) -> None:
    profile = radial_profile(**PLANE, **PRESSURES, skin=skin)
    resistance = math.log((profile.r0 / profile.rw).m_as("dimensionless")) + skin
    assert profile.pressure[0].m_as("bar") == close(150 + 50 * skin / resistance, rel=1e-13)


@pytest.mark.parametrize("skin", [-0.5, -1.0, -3.0])
def test_a_negative_skin_is_a_larger_wellbore(skin: float) -> None:
    # The effective radius rw exp(-skin), from memory of the source: Matthews and Russell,
    # "Pressure Buildup and Flow Tests in Wells", SPE Monograph 1 (1967).
    profile = radial_profile(**PLANE, **PRESSURES, skin=skin)
    inner = profile.rw.m_as("m") * math.exp(-skin)
    radii, pressures = profile.radius.m_as("m"), profile.pressure.m_as("bar")
    assert radii[0] == close(inner, rel=1e-14)
    assert pressures[0] == close(150.0, rel=1e-13)
    assert np.all(pressures[1:] > 150.0)
    # A wellbore of that size without skin has the same line; PLANE's r0 does not depend on rw.
    larger = PLANE | {"rw": ureg.Quantity(0.1 * math.exp(-skin), "m")}
    same = radial_profile(**larger, **PRESSURES, radius=profile.radius)
    assert pressures == close(same.pressure.m_as("bar"), rel=1e-12)
    with pytest.raises(DomainError, match=r"inside the effective radius rw exp\(-skin\) of"):
        radial_profile(**PLANE, **PRESSURES, skin=skin, radius=metres([0.999 * inner]))


def test_default_radii_run_from_the_wellbore_to_the_far_side() -> None:
    profile = radial_profile(**PLANE, **PRESSURES)
    radii = profile.radius.m_as("m")
    assert radii[0] == close(profile.rw.m_as("m"), rel=1e-15)
    assert np.all(np.diff(radii) > 0.0)
    stretch = (10 / 90) ** 0.25
    assert radii[-1] == close(max(50.0 * stretch, 30.0 / stretch), rel=1e-12)
    assert len(profile.pressure) == len(radii)


def test_injection_turns_the_profile() -> None:
    profile = radial_profile(**PLANE, pwf="250 bar", p_block="200 bar")
    assert np.all(np.diff(profile.pressure.m) < 0.0)


def test_profile_in_the_unit_system_in_force() -> None:
    with unit_system("oilfield"):
        profile = radial_profile(**PLANE, **PRESSURES)
        assert profile.radius.units == profile.r0.units == profile.rw.units == ureg.Unit("ft")
        assert profile.pressure.units == ureg.Unit("psi")


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"kx": "0 mD"}, DomainError, "where kx or ky is zero"),
        ({"dx": ureg.Quantity([1.0, 2.0], "m")}, ShapeError, "dx is one value"),
        ({"pwf": ureg.Quantity([1.0, 2.0], "bar")}, ShapeError, "pwf is one value"),
        ({"skin": [0.0, 1.0]}, ShapeError, "skin is one value"),
        ({"radius": "0.01 m"}, DomainError, "inside the wellbore of 0.11"),
        ({"dx": "0.5 m", "dy": "0.5 m"}, DomainError, "use larger blocks"),
        ({"skin": -9.0}, DomainError, "zero or negative"),
        ({"pwf": "-1 bar"}, DomainError, "pwf: "),
        ({"pwf": "3 m"}, UnitsError, "pwf: needs an absolute or gauge pressure"),
    ],
)
def test_bad_profile_arguments(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        radial_profile(**(PLANE | PRESSURES | changed))


def test_a_small_block_warns() -> None:
    with pytest.warns(AssumptionWarning, match="hardly wider than the wellbore"):
        radial_profile(**(PLANE | PRESSURES | {"dx": "1 m", "dy": "1 m", "ky": "90 mD"}))
