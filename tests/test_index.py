"""The well index against exact arithmetic, published tables and its own limits."""

import math
import warnings
from functools import partial
from operator import attrgetter
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import in_si_units
from tests.oracles import closed_form
from tests.published import tables
from tests.published.tables import Check
from tests.strategies import Block
from wellindex import (
    AssumptionWarning,
    DomainError,
    ShapeError,
    UnitsError,
    productivity_index,
    ureg,
    well_index,
)

BLOCK = {
    "dx": "100 m",
    "dy": "60 m",
    "dz": "8 m",
    "kx": "90 mD",
    "ky": "40 mD",
    "kz": "5 mD",
    "rw": "0.1 m",
}
SIDES = {"x": ("west", "east"), "y": ("south", "north"), "z": ("top", "bottom")}
LEAST_LOG, DOUBTFUL_LOG, DOUBTFUL_SUM = 0.5, 1.0, 0.5

close = partial(pytest.approx, abs=0)


@given(data=st.data(), block=strategies.blocks())
def test_index_at_50_digits(data: st.DataObject, block: Block) -> None:
    placement = data.draw(strategies.placements(block.direction))
    expected = closed_form.well_index(**block.arguments, placement=placement)
    found = well_index.si(**block.arguments, placement=placement)
    assert found == close(float(expected), rel=1e-12)


@given(block=strategies.blocks(), share=st.floats(0.01, 1.0))
def test_index_of_quantities_and_of_a_part_of_the_block(block: Block, share: float) -> None:
    along = getattr(block, "d" + block.direction)
    given_ = block.arguments | {"length": share * along}
    found = well_index(**in_si_units(given_)).m_as("m**3")
    assert found == close(float(closed_form.well_index(**given_)), rel=1e-12)


@given(block=strategies.blocks(zero_permeability=True))
def test_zero_permeability_across_the_well_is_an_index_of_zero(block: Block) -> None:
    found = well_index.si(**block.arguments)
    assert found == close(float(closed_form.well_index(**block.arguments)), rel=1e-12)


@pytest.mark.parametrize("direction", "xyz")
@pytest.mark.parametrize("zeros", [("kx",), ("ky",), ("kz",), ("kx", "ky"), ("kx", "ky", "kz")])
def test_which_permeabilities_stop_the_flow(direction: str, zeros: tuple[str, ...]) -> None:
    found = well_index(**(BLOCK | dict.fromkeys(zeros, "0 mD")), direction=direction)
    assert (found.m == 0.0) is any(k != "k" + direction for k in zeros)


def test_tight_rock_is_not_judged_by_its_radius() -> None:
    small = BLOCK | {"dx": "0.1 m", "dy": "0.1 m", "kx": "0 mD"}
    assert well_index(**small, skin=-9.0).m == 0.0


COMPARISON = tables.load("comparison_1981", "well_index")


@pytest.mark.parametrize("check", COMPARISON, ids=attrgetter("id"))
def test_indices_of_the_1981_comparison(check: Check) -> None:
    assert well_index(**check.inputs).m_as(check.unit) == close(check.computed, rel=1e-12)


@pytest.mark.parametrize(
    "check", tables.load("comparison_1981", "well_index_near_sides"), ids=attrgetter("id")
)
def test_indices_of_the_1981_comparison_with_the_radius_of_a_corner_block(check: Check) -> None:
    (radius,) = (
        row
        for row in tables.load("comparison_1981", "equivalent_radius_near_sides")
        if row.inputs == check.inputs
    )
    block = {name: value for name, value in check.inputs.items() if not name.startswith("side")}
    r0 = ureg.Quantity(radius.computed, radius.unit)
    found = well_index(**block, equivalent_radius=r0)
    assert found.m_as(check.unit) == close(check.computed, rel=1e-12)


@pytest.mark.parametrize("check", tables.load("geometric_factor"), ids=attrgetter("id"))
def test_sector_of_a_placement(check: Check) -> None:
    # The index with a huge skin counts the sector alone: r0 no longer matters.
    placement = str(check.inputs["placement"])
    skin = 1e14
    part = well_index(**BLOCK, placement=placement, skin=skin)
    full = well_index(**BLOCK, skin=skin)
    assert (part / full).m_as("dimensionless") == close(check.printed, rel=1e-12)


@pytest.mark.parametrize("direction", "xyz")
def test_placements_open_to_a_direction(direction: str) -> None:
    for axis, sides in SIDES.items():
        for side in sides:
            if axis != direction:
                assert well_index(**BLOCK, direction=direction, placement=side).m > 0.0
                continue
            with pytest.raises(DomainError) as caught:
                well_index(**BLOCK, direction=direction, placement=side)
            allowed = [s for a, pair in SIDES.items() if a != axis for s in pair]
            assert f"'{side}' is a side that a well along {axis} crosses" in str(caught.value)
            assert ", ".join(allowed) in str(caught.value)


@pytest.mark.parametrize(
    ("argument", "words"),
    [("placement", "'centre', 'corner', 'west'"), ("direction", "'x', 'y', 'z'")],
)
def test_unknown_words_are_answered_with_the_known_ones(argument: str, words: str) -> None:
    with pytest.raises(DomainError, match=words):
        well_index(**BLOCK, **{argument: "up"})


@given(block=strategies.blocks(), sector=st.floats(0.01, 1.0), factor=st.floats(1.0, 20.0))
def test_radius_and_sector_of_the_callers(block: Block, sector: float, factor: float) -> None:
    r0 = factor * block.rw * math.exp(max(1.001, 0.501 - block.skin))
    given_ = block.arguments | {"equivalent_radius": r0, "sector": sector}
    expected = float(closed_form.well_index(**given_))
    assert well_index.si(**given_) == close(expected, rel=1e-12)
    assert well_index(**in_si_units(given_)).m_as("m**3") == close(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        ({"sector": 0.5}, "give both"),
        ({"sector": np.array([1.0, 1.0])}, "give both"),
        ({"placement": "west", "equivalent_radius": "20 m"}, "either placement or"),
        ({"equivalent_radius": "20 m", "sector": 0.0}, "above 0 and at most 1"),
        ({"equivalent_radius": "20 m", "sector": math.nextafter(1.0, 2.0)}, "at most 1"),
        ({"equivalent_radius": "0 m"}, "equivalent_radius: needs a length, positive"),
    ],
)
def test_a_sector_belongs_to_its_radius(changed: dict[str, Any], words: str) -> None:
    with pytest.raises(DomainError, match=words):
        well_index(**BLOCK, **changed)


def radius_at(logarithm: float) -> float:
    """The smallest float whose logarithm is not below `logarithm`."""
    radius = math.exp(logarithm)
    while math.log(radius) < logarithm:
        radius = math.nextafter(radius, math.inf)
    while math.log(math.nextafter(radius, 0.0)) >= logarithm:
        radius = math.nextafter(radius, 0.0)
    return radius


def at_logarithm(logarithm: float, skin: float = 0.0) -> Any:
    """The index where ln(r0/rw) is `logarithm`, or next above it; rw is 1 m."""
    r0 = ureg.Quantity(radius_at(logarithm), "m")
    return well_index(**(BLOCK | {"rw": "1 m"}), equivalent_radius=r0, skin=skin)


def test_the_limits_are_met_exactly() -> None:
    assert [math.log(radius_at(limit)) for limit in (0.5, 1.0, 2.0)] == [0.5, 1.0, 2.0]


@pytest.mark.parametrize("logarithm", [0.25, 0.46875, 0.484375])
def test_a_logarithm_below_a_half_is_refused(logarithm: float) -> None:
    with pytest.raises(DomainError, match=r"ln\(r0/rw\) is below 0\.5.*use larger blocks"):
        at_logarithm(logarithm, skin=10.0)


def test_just_below_the_smallest_logarithm_is_refused() -> None:
    below = math.nextafter(radius_at(LEAST_LOG), 0.0)
    with pytest.raises(DomainError, match=r"too small for any well index.*\(here 0\.5\)"):
        well_index(**(BLOCK | {"rw": "1 m"}), equivalent_radius=ureg.Quantity(below, "m"))


def test_just_below_the_doubtful_logarithm_warns() -> None:
    below = math.nextafter(radius_at(DOUBTFUL_LOG), 0.0)
    with pytest.warns(AssumptionWarning, match="depends on the grid"):
        well_index(**(BLOCK | {"rw": "1 m"}), equivalent_radius=ureg.Quantity(below, "m"))


@pytest.mark.parametrize("logarithm", [LEAST_LOG, 0.75, 0.984375])
def test_a_logarithm_from_a_half_to_one_warns(logarithm: float) -> None:
    with pytest.warns(AssumptionWarning, match=r"ln\(r0/rw\) is below 1.*use larger blocks"):
        found = at_logarithm(logarithm, skin=2.0)
    k_h = math.sqrt(90 * 40) * 8 / (logarithm + 2.0)
    assert found.m_as("mD*m") == close(2 * math.pi * k_h, rel=1e-14)


@pytest.mark.parametrize(("logarithm", "skin"), [(DOUBTFUL_LOG, 0.0), (1.0, -0.5), (2.0, -1.5)])
def test_at_the_limits_of_doubt_nothing_is_said(logarithm: float, skin: float) -> None:
    assert logarithm + skin >= DOUBTFUL_SUM
    assert at_logarithm(logarithm, skin).m > 0.0


@pytest.mark.parametrize("skin", [-2.0, math.nextafter(-2.0, -3.0), -50.0])
def test_a_sum_that_is_not_positive_is_refused(skin: float) -> None:
    with pytest.raises(DomainError, match=r"skin is zero or negative.*use larger blocks, or"):
        at_logarithm(2.0, skin)


@pytest.mark.parametrize("skin", [math.nextafter(-2.0, 0.0), -1.75, math.nextafter(-1.5, -2.0)])
def test_a_sum_below_a_half_warns(skin: float) -> None:
    with pytest.warns(AssumptionWarning, match=r"skin is below 0\.5.*use larger blocks, or"):
        assert at_logarithm(2.0, skin).m > 0.0


def test_invalid_nan_marks_bad_elements_and_warns_once() -> None:
    rw = ureg.Quantity([0.1, 0.0, 0.1, 18.0, 0.1, 0.1, math.nan], "m")
    kx = ureg.Quantity([90.0, 90.0, -1.0, 90.0, 90.0, 0.0, 90.0], "mD")
    skin = np.array([0.0, 0.0, 0.0, 0.0, -7.0, 0.0, 0.0])
    given_ = BLOCK | {"rw": rw, "kx": kx, "skin": skin}
    with pytest.warns(AssumptionWarning) as caught:
        found = well_index(**given_, invalid="nan")
    assert len(caught) == 1
    words = str(caught[0].message)
    assert words.startswith("5 elements are not a number")
    for reason in ("2 x rw must be positive", "1 x kx must be zero or positive", "1 x ln(r0/rw) is",
                   "1 x ln(r0/rw) + skin is zero or negative"):  # fmt: skip
        assert reason in words
    assert np.isnan(found.m).tolist() == [False, True, True, True, True, False, True]
    assert found[0].m == close(well_index(**BLOCK).m, rel=1e-14)
    assert found[5].m == 0.0


def test_one_bad_element_raises_and_names_its_place() -> None:
    rw = ureg.Quantity([[0.1, 0.1], [0.1, -0.1]], "m")
    with pytest.raises(DomainError, match=r"rw: .*\[1, 1\]"):
        well_index(**(BLOCK | {"rw": rw}))
    skin = np.array([0.0, 1.0, -30.0])
    with pytest.raises(DomainError, match=r"ln\(r0/rw\) \+ skin is zero or negative.*\[2\]"):
        well_index(**BLOCK, skin=skin)


def test_nothing_bad_means_no_warning_with_invalid_nan() -> None:
    skin = np.array([0.0, 1.0])
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        found = well_index(**BLOCK, skin=skin, invalid="nan")
    assert found.m == close(well_index(**BLOCK, skin=skin).m, rel=1e-14)


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"rw": "0 m"}, DomainError, "rw: needs a length, positive"),
        ({"dz": "-8 m"}, DomainError, "dz: "),
        ({"length": "0 m"}, DomainError, "length: "),
        ({"kz": "-1 mD"}, DomainError, "kz: needs a permeability, zero or positive"),
        ({"rw": 0.1}, UnitsError, "rw: needs a length"),
        ({"rw": "0.1 bar"}, UnitsError, "rw: needs a length"),
        ({"skin": "2 m"}, UnitsError, "skin: needs a skin"),
        ({"skin": math.inf}, DomainError, "skin: "),
        ({"skin": True}, UnitsError, "boolean"),
        ({"invalid": "ignore"}, DomainError, "'raise', 'nan'"),
    ],
)
def test_bad_arguments(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        well_index(**(BLOCK | changed))


def test_shapes_that_do_not_broadcast() -> None:
    with pytest.raises(ShapeError, match=r"skin \(3,\)"):
        well_index(**(BLOCK | {"rw": ureg.Quantity([0.1, 0.1], "m")}), skin=np.zeros(3))


def test_every_bad_argument_is_named_in_one_error() -> None:
    with pytest.raises(UnitsError) as caught:
        well_index(**(BLOCK | {"dx": 100, "rw": "-1 m", "kx": "3 bar"}))
    assert isinstance(caught.value, DomainError)
    assert all(f"\n  {name}: " in str(caught.value) for name in ("dx", "rw", "kx"))


# ln(r0/rw) = 2 pi leaves k L, ln(re/rw) = 1 leaves 2 pi k h: the trade's constants are what the
# library returns for one millidarcy and one foot or metre.
UNIT_BLOCK = {"dx": "1 m", "dy": "1 m", "kx": "1 mD", "ky": "1 mD", "kz": "1 mD", "rw": "1 cm"}


def linear(size: str) -> Any:
    r0 = ureg.Quantity(math.exp(2 * math.pi), "cm")
    return well_index(**UNIT_BLOCK, dz=size, equivalent_radius=r0)


def radial(size: str, factor: str) -> Any:
    return productivity_index(
        against="boundary",
        k="1 mD",
        h=size,
        re=ureg.Quantity(math.e, "m"),
        rw="1 m",
        viscosity="1 cP",
        formation_volume_factor=factor,
    )


EMERGING = {
    "linear-field": lambda: linear("1 ft").m_as("cP*rb/day/psi"),
    "linear-field-long": lambda: linear("1 ft").m_as("cP*rb/day/psi"),
    "linear-metric": lambda: linear("1 m").m_as("cP*m**3/day/bar"),
    "radial-field": lambda: radial("1 ft", "1 rb/stb").m_as("stb/day/psi"),
    "radial-metric": lambda: radial("1 m", "1 rm3/sm3").m_as("sm3/day/bar"),
    "inverse-radial-field": lambda: 1 / radial("1 ft", "1 rb/stb").m_as("stb/day/psi"),
    "inverse-radial-metric": lambda: 1 / radial("1 m", "1 rm3/sm3").m_as("sm3/day/bar"),
}


@pytest.mark.parametrize("name", EMERGING)
def test_constants_of_the_trade_emerge(name: str) -> None:
    (check,) = (row for row in tables.load("trade_constants") if row.id == name)
    found = EMERGING[name]()
    assert found == close(check.computed, rel=1e-12)
    assert found == close(check.printed, rel=check.tolerance)
