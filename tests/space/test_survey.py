"""Surveys: printed examples, arcs in closed form, 50-digit slerp, chords, CSV, errors."""

import math
from functools import partial
from itertools import pairwise
from pathlib import Path as FilePath
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mpmath import mp, mpf  # type: ignore[import-untyped]

from tests.builders import metres
from tests.oracles import trajectory
from tests.oracles.closed_form import si
from tests.published import tables
from tests.published.tables import Check
from wellindex import DomainError, ShapeError, Survey, UnitsError, unit_system, ureg

close = partial(pytest.approx, abs=0)

ROWS = tables.load("survey")
NORTH, EAST, DOWN = 0, 1, 2
AXES = {"north": NORTH, "east": EAST, "down": DOWN}


def radians(text: str | float) -> Any:
    """An angle of a table, "15 degree", at 50 digits."""
    with mp.workdps(trajectory.DIGITS):
        return mp.radians(mpf(str(text).removesuffix(" degree")))


def leg_of(check: Check) -> list[Any]:
    """The leg of a row: length and angles, SI."""
    i = check.inputs
    length = si(i["measured_depth_2"]) - si(i["measured_depth_1"])
    angles = ("inclination_1", "azimuth_1", "inclination_2", "azimuth_2")
    return [length, *(radians(i[name]) for name in angles)]


def hole(check: Check) -> list[list[Any]]:
    """The legs of the test hole: inclination from zero in equal steps."""
    legs, last = int(check.inputs["legs"]), radians(check.inputs["inclination"])
    marks = [last * n / legs for n in range(legs + 1)]
    length = si(check.inputs["length"]) / legs
    return [[length, a, mpf(0), b, mpf(0)] for a, b in pairwise(marks)]


def recomputed(check: Check) -> Any:
    """The number of a row by a route of its own, in SI."""
    what = AXES.get(str(check.inputs.get("what")), NORTH)
    match check.quantity:
        case "minimum_curvature":
            dogleg = trajectory.dogleg(leg_of(check))
            if check.inputs["what"] == "dogleg":
                return dogleg / (mp.pi / 180 if check.unit == "degree" else 1)
            if check.inputs["what"] == "ratio":
                return mp.tan(dogleg / 2) / (dogleg / 2)
            return trajectory.minimum_curvature(leg_of(check))[what]
        case "radius_of_curvature":
            return trajectory.radius_of_curvature(leg_of(check))[what]
        case "angle_averaging":
            return trajectory.angle_averaging(leg_of(check))[what]
        case "arc_radius":
            return si(check.inputs["length"]) / radians(check.inputs["turn"])
    # The test hole is an arc of a circle: north R (1 - cos), down R sin.
    angle = radians(check.inputs["inclination"])
    radius = si(check.inputs["length"]) / angle
    true = (radius * (1 - mp.cos(angle)), mpf(0), radius * mp.sin(angle))[what]
    if check.quantity == "test_hole":
        return true
    method = trajectory.tangential if "tangential" in check.quantity else trajectory.angle_averaging
    return abs(mp.fsum(method(leg)[what] for leg in hole(check)) - true)


@pytest.mark.parametrize("check", ROWS, ids=lambda check: check.id)
def test_survey_table(check: Check) -> None:
    unit = 1.0 if check.unit in ("radian", "degree", "dimensionless") else si(f"1 {check.unit}")
    # The errors of the test hole are small differences of large numbers.
    small = check.quantity.startswith("test_hole_")
    assert float(recomputed(check)) / unit == close(check.computed, rel=1e-8 if small else 1e-12)


@pytest.mark.parametrize(
    "check", tables.load("survey", "minimum_curvature"), ids=lambda check: check.id
)
def test_printed_examples(check: Check) -> None:
    columns = [
        [check.inputs[f"{name}_{n}"] for n in (1, 2)]
        for name in ("measured_depth", "inclination", "azimuth")
    ]
    survey = Survey(*columns)
    east, north, down = survey.points[-1].m_as("ft")
    dogleg = survey.dogleg[0].m_as("radian")
    found = {
        "dogleg": survey.dogleg[0].m_as(check.unit) if "dogleg" in check.id else None,
        "ratio": math.sqrt(north**2 + east**2 + down**2)
        / (np.diff(survey.measured_depth.m_as("ft"))[0] * math.cos(dogleg / 2)),
        "north": north,
        "east": east,
        "down": down,
    }[str(check.inputs["what"])]
    assert found == close(check.computed, rel=1e-12)
    if check.printed is not None:
        digits = len(str(check.printed).split(".")[1])
        assert f"{found:.{digits}f}" == f"{check.printed:.{digits}f}"


def test_hole_of_1976() -> None:
    inclination = ureg.Quantity(np.arange(0.0, 61.0, 3.0), "degree")
    depth = ureg.Quantity(np.arange(0.0, 2001.0, 100.0), "ft")
    survey = Survey(depth, inclination, ureg.Quantity(np.zeros(21), "degree"))
    east, north, down = survey.points[-1].m_as("ft")
    printed = {check.id: check.printed for check in ROWS}
    assert east == 0.0
    assert f"{north:.2f}" == f"{printed['test-hole-north']:.2f}"
    assert f"{down:.2f}" == f"{printed['test-hole-down']:.2f}"
    per_100_ft = survey.dogleg_severity.m_as("degree/ft") * 100.0
    assert per_100_ft == close(np.full(20, 3.0), rel=1e-12)
    assert f"{1.0 / survey.dogleg_severity[0].m_as('radian/ft'):.2f}" == (
        f"{printed['severity-3-radius']:.2f}"
    )


@pytest.mark.parametrize("azimuth", [0.0, 37.0, 180.0, 301.5])
@pytest.mark.parametrize("stations", [2, 5, 40])
def test_a_circular_arc_in_closed_form(azimuth: float, stations: int) -> None:
    # A quarter of a circle of radius 300 m from the vertical: down R sin, out R (1 - cos).
    radius, a = 300.0, math.radians(azimuth)
    angle = np.linspace(0.0, math.pi / 2, stations)
    survey = Survey(
        metres(1000.0 + radius * angle),
        ureg.Quantity(angle, "radian"),
        ureg.Quantity(np.full(stations, azimuth), "degree"),
        head=metres([50.0, -20.0, 990.0]),
    )
    at = np.linspace(0.0, math.pi / 2, 33)
    out = radius * (1.0 - np.cos(at))
    expected = np.stack(
        (50 + out * math.sin(a), -20 + out * math.cos(a), 990 + radius * np.sin(at)), axis=1
    )
    depths = metres(1000.0 + radius * at)
    assert survey.position(depths).m_as("m") == pytest.approx(expected, abs=1e-10)
    level = np.sin(at)
    direction = np.stack((level * math.sin(a), level * math.cos(a), np.cos(at)), axis=1)
    assert survey.direction(depths) == pytest.approx(direction, abs=1e-12)


@pytest.mark.parametrize(
    ("inclination", "azimuth", "towards"),
    [
        (0.0, 77.0, (0.0, 0.0, 1.0)),
        (90.0, 0.0, (0.0, 1.0, 0.0)),
        (90.0, 90.0, (1.0, 0.0, 0.0)),
        (90.0, 180.0, (0.0, -1.0, 0.0)),
        (90.0, -90.0, (-1.0, 0.0, 0.0)),
        (180.0, 0.0, (0.0, 0.0, -1.0)),
        (45.0, 45.0, (0.5, 0.5, math.sqrt(0.5))),
    ],
)
def test_straight_wells_run_straight(
    inclination: float, azimuth: float, towards: tuple[float, ...]
) -> None:
    depth = np.array([0.0, 100.0, 250.0, 1000.0])
    survey = Survey(
        metres(depth),
        ureg.Quantity(np.full(4, inclination), "degree"),
        ureg.Quantity(np.full(4, azimuth), "degree"),
    )
    assert survey.points.m_as("m") == pytest.approx(np.outer(depth, towards), abs=1e-11)
    assert survey.dogleg.m == pytest.approx(np.zeros(3), abs=1e-15)
    assert survey.direction("333 m") == pytest.approx(np.array(towards), abs=1e-15)
    assert len(survey.path.points) == 4


@pytest.mark.parametrize("dogleg", [10.0**n for n in range(-12, -2)])
@pytest.mark.parametrize("inclination", [0.0, 0.3, math.pi / 2])
def test_near_straight_legs_lose_no_digits(dogleg: float, inclination: float) -> None:
    # The second direction differs by the dogleg in inclination alone.
    leg = (900.0, inclination, 0.0, inclination + dogleg, 0.0)
    survey = Survey(
        metres([0.0, leg[0]]),
        ureg.Quantity(np.array([leg[1], leg[3]]), "radian"),
        ureg.Quantity(np.zeros(2), "radian"),
    )
    # The angle of two unit vectors in floats is known to a few 1e-16 and no better.
    assert survey.dogleg[0].m_as("radian") == pytest.approx(
        float(trajectory.dogleg(leg)), rel=1e-13, abs=4e-16
    )
    for part in (0.25, 0.5, 1.0):
        move, towards = trajectory.along_arc(leg, part)
        found = survey.position(metres(part * leg[0])).m_as("m")
        assert found == pytest.approx([float(move[n]) for n in (EAST, NORTH, DOWN)], abs=4e-13)
        assert survey.direction(metres(part * leg[0])) == pytest.approx(
            [float(towards[n]) for n in (EAST, NORTH, DOWN)], abs=4e-16
        )


@pytest.mark.parametrize(
    ("inclinations", "azimuths"),
    [((90.0, 90.0), (10.0, 190.0)), ((0.0, 180.0), (0.0, 0.0)), ((30.0, 150.0), (40.0, 220.0))],
)
def test_a_leg_straight_back_is_refused(
    inclinations: tuple[float, float], azimuths: tuple[float, float]
) -> None:
    with pytest.raises(DomainError, match="straight back between stations 1, 2"):
        Survey(
            metres([0.0, 10.0, 20.0]),
            ureg.Quantity(np.array([inclinations[0], *inclinations]), "degree"),
            ureg.Quantity(np.array([azimuths[0], *azimuths]), "degree"),
        )


def test_a_leg_almost_straight_back_is_an_arc() -> None:
    leg = (100.0, math.pi / 2, 0.0, math.pi / 2, math.radians(179.0))
    survey = Survey(
        metres([0.0, 100.0]),
        ureg.Quantity(np.full(2, 90.0), "degree"),
        ureg.Quantity(np.array([0.0, 179.0]), "degree"),
    )
    move, _ = trajectory.along_arc(leg, 1)
    assert survey.points[1].m_as("m") == pytest.approx(
        [float(move[n]) for n in (EAST, NORTH, DOWN)], abs=1e-11
    )


angles = st.floats(0.0, 180.0)
azimuths = st.floats(-360.0, 720.0)


@st.composite
def surveys(draw: st.DrawFn) -> tuple[Survey, list[tuple[float, ...]]]:
    """A survey and its legs, SI."""
    count = draw(st.integers(2, 5))
    steps = draw(st.lists(st.floats(0.1, 500.0), min_size=count - 1, max_size=count - 1))
    first = draw(st.floats(-100.0, 4000.0))
    depth = first + np.concatenate(([0.0], np.cumsum(steps)))
    i, a = (
        np.radians(draw(st.lists(one, min_size=count, max_size=count)))
        for one in (angles, azimuths)
    )
    legs = [(depth[n + 1] - depth[n], i[n], a[n], i[n + 1], a[n + 1]) for n in range(count - 1)]
    if any(trajectory.dogleg(leg) > 3.0 for leg in legs):
        i = i / 3.0
        legs = [(leg[0], i[n], a[n], i[n + 1], a[n + 1]) for n, leg in enumerate(legs)]
    return Survey(metres(depth), ureg.Quantity(i, "radian"), ureg.Quantity(a, "radian")), legs


@given(case=surveys(), part=st.floats(0.0, 1.0))
def test_position_and_direction_at_50_digits(
    case: tuple[Survey, list[tuple[float, ...]]], part: float
) -> None:
    survey, legs = case
    depths = survey.measured_depth.m_as("m")
    slack = 1e-12 * float(np.abs(depths).max() + depths[-1] - depths[0]) + 1e-12
    start = mp.matrix([0, 0, 0])
    for n, leg in enumerate(legs):
        at = min(depths[n] + part * leg[0], depths[n + 1])
        move, towards = trajectory.along_arc(leg, (mpf(at) - mpf(depths[n])) / mpf(leg[0]))
        place = [float((start + move)[a]) for a in (EAST, NORTH, DOWN)]
        assert survey.position(metres(at)).m_as("m") == pytest.approx(place, abs=10 * slack)
        if at < depths[n + 1]:
            heading = [float(towards[a]) for a in (EAST, NORTH, DOWN)]
            blur = 1e-12 + 20 * slack / leg[0]
            assert survey.direction(metres(at)) == pytest.approx(heading, abs=blur)
        dogleg = float(trajectory.dogleg(leg))
        assert survey.dogleg[n].m_as("radian") == pytest.approx(dogleg, rel=1e-12, abs=1e-15)
        assert survey.dogleg_severity[n].m_as("radian/m") == pytest.approx(
            dogleg / leg[0], rel=1e-10, abs=1e-14
        )
        start = start + trajectory.along_arc(leg, 1)[0]


@given(case=surveys(), tolerance=st.sampled_from([0.5, 0.01, 0.001]))
def test_chords_keep_to_the_arcs(
    case: tuple[Survey, list[tuple[float, ...]]], tolerance: float
) -> None:
    whole, _legs = case
    survey = Survey(
        whole.measured_depth,
        ureg.Quantity(whole._inclination, "radian"),
        ureg.Quantity(whole._azimuth, "radian"),
        chord_tolerance=metres(tolerance),
    )
    path = survey.path
    depths = path.measured_depth.m_as("m")
    points = path.points.m_as("m")
    assert depths[[0, -1]].tolist() == survey.measured_depth.m_as("m")[[0, -1]].tolist()
    assert np.all(np.isin(survey.measured_depth.m_as("m"), depths))
    assert path.length.m_as("m") == close(depths[-1] - depths[0], rel=1e-12)
    # Chord ends lie on the arc at their measured depth, chords are no longer than their arc.
    assert survey.position(metres(depths)).m_as("m") == pytest.approx(points, abs=1e-8)
    chords = np.linalg.norm(np.diff(points, axis=0), axis=1)
    assert np.all(chords <= np.diff(depths) + 1e-8)
    for part in (0.25, 0.5, 0.75):
        middle = depths[:-1] + part * np.diff(depths)
        arc = survey.position(metres(middle)).m_as("m")
        along = (points[1:] - points[:-1]) / chords[:, None]
        off = arc - points[:-1]
        away = np.linalg.norm(off - np.sum(off * along, axis=1)[:, None] * along, axis=1)
        assert np.all(away <= tolerance * (1.0 + 1e-9) + 1e-8)


def test_finer_chords_come_nearer_to_the_length_of_the_arc() -> None:
    given_ = (
        metres([0.0, 400.0]),
        ureg.Quantity(np.array([0.0, 80.0]), "degree"),
        ureg.Quantity(np.zeros(2), "degree"),
    )
    lost = []
    for tolerance in ("1 m", "1 cm", "1 mm"):
        path = Survey(*given_, chord_tolerance=tolerance).path
        lost.append(
            400.0 - float(np.linalg.norm(np.diff(path.points.m_as("m"), axis=0), axis=1).sum())
        )
        assert path.length.m_as("m") == close(400.0, rel=1e-14)
    assert lost[0] > lost[1] > lost[2] > 0.0
    assert lost[2] < 1e-3


def test_the_head_and_the_first_depth_shift_everything() -> None:
    inclination, azimuth = ["10 degree", "20 degree"], ["30 degree", "80 degree"]
    plain = Survey(["0 m", "120 m"], inclination, azimuth)
    moved = Survey(["2500 m", "2620 m"], inclination, azimuth, head=("4000 m", "-250 m", "2480 m"))
    assert moved.measured_depth.m_as("m").tolist() == [2500.0, 2620.0]
    assert moved.points[0].m_as("m").tolist() == [4000.0, -250.0, 2480.0]
    assert moved.position("2550 m").m_as("m") - plain.position("50 m").m_as("m") == pytest.approx(
        [4000.0, -250.0, 2480.0], abs=1e-9
    )
    assert moved.path.measured_depth[0].m_as("m") == 2500.0
    assert moved.path.points[0].m_as("m").tolist() == [4000.0, -250.0, 2480.0]


@pytest.mark.parametrize("offset", ["-7.5 degree", "0.2 radian", "400 degree"])
def test_an_azimuth_offset_turns_the_well_clockwise(offset: str) -> None:
    depth, inclination = ["0 m", "120 m", "300 m"], ["10 degree", "20 degree", "85 degree"]
    azimuth = ureg.Quantity(np.array([30.0, 80.0, 60.0]), "degree")
    turned = Survey(depth, inclination, azimuth, azimuth_offset=offset)
    plain = Survey(depth, inclination, azimuth)
    angle = ureg.Quantity(offset).m_as("radian")
    east, north, down = plain.points.m_as("m").T
    # Clockwise seen from above: north turns to the east.
    expected = np.stack(
        (
            east * math.cos(angle) + north * math.sin(angle),
            north * math.cos(angle) - east * math.sin(angle),
            down,
        ),
        axis=1,
    )
    assert turned.points.m_as("m") == pytest.approx(expected, abs=1e-10)


def test_magnetic_declination_to_the_east_adds() -> None:
    # Magnetic north 10 degrees east of grid north: a magnetic azimuth of 80 is grid east.
    azimuth = ["80 degree", "80 degree"]
    survey = Survey(["0 m", "10 m"], ["90 degree"] * 2, azimuth, azimuth_offset="10 degree")
    assert survey.points[1].m_as("m") == pytest.approx([10.0, 0.0, 0.0], abs=1e-12)


def test_positions_of_any_shape_in_the_unit_system_in_force() -> None:
    survey = Survey(["0 ft", "100 ft"], ["0 degree"] * 2, ["0 degree"] * 2)
    with unit_system("oilfield"):
        depths = ureg.Quantity([[10.0, 20.0, 30.0]], "ft")
        found = survey.position(depths)
        assert found.m == pytest.approx(np.array([[[0, 0, 10], [0, 0, 20], [0, 0, 30]]]), abs=1e-12)
        assert survey.direction(depths).shape == (1, 3, 3)
        assert survey.position("100 ft").m.tolist() == pytest.approx([0.0, 0.0, 100.0], abs=1e-12)
        assert survey.dogleg_severity.units == ureg.Unit("degree/ft")
    assert repr(survey) == "Survey(2 stations)"


def test_the_ends_in_another_unit_are_still_inside() -> None:
    depths = np.arange(3500.0, 3600.0, 0.7)
    for end in depths:
        survey = Survey(
            ureg.Quantity(np.array([0.1, end]), "ft"), ["0 degree"] * 2, ["0 degree"] * 2
        )
        inches = ureg.Quantity(np.array([1.2, end * 12.0]), "inch")
        assert survey.position(inches).m_as("ft")[:, 2] == pytest.approx([0.0, end - 0.1], abs=1e-9)


@pytest.mark.parametrize("depth", ["99.9 m", "400.1 m"])
def test_a_depth_outside_the_survey_is_refused(depth: str) -> None:
    survey = Survey(["100 m", "400 m"], ["0 degree"] * 2, ["0 degree"] * 2)
    with pytest.raises(DomainError, match=r"lies outside the survey, \[100 400\] m"):
        survey.position(depth)
    with pytest.raises(DomainError, match="outside the survey"):
        survey.direction(ureg.Quantity([200.0, ureg.Quantity(depth).m_as("m")], "m"))


def test_a_depth_needs_its_unit() -> None:
    survey = Survey(["100 m", "400 m"], ["0 degree"] * 2, ["0 degree"] * 2)
    with pytest.raises(UnitsError, match="measured_depth: needs a position"):
        survey.position(200.0)  # type: ignore[arg-type]
    with pytest.raises(DomainError, match="measured_depth"):
        survey.position(ureg.Quantity(math.nan, "m"))


GOOD: dict[str, Any] = {
    "measured_depth": metres([0.0, 100.0, 250.0]),
    "inclination": ureg.Quantity(np.array([0.0, 5.0, 20.0]), "degree"),
    "azimuth": ureg.Quantity(np.array([0.0, 45.0, 50.0]), "degree"),
}


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"measured_depth": metres([0.0, 250.0, 100.0])}, DomainError, "stations 1 and 2 have"),
        ({"measured_depth": metres([0.0, 0.0, 100.0])}, DomainError, r"0 and 1 have \[0 0\] m"),
        ({"measured_depth": metres([0.0, 100.0])}, ShapeError, r"measured_depth \(2,\)"),
        ({"measured_depth": metres([[0.0, 1.0, 2.0]])}, ShapeError, r"\(1, 3\)"),
        ({"measured_depth": np.array([0.0, 1.0, 2.0])}, UnitsError, "measured_depth: needs"),
        ({"measured_depth": metres([0.0, math.nan, 9.0])}, DomainError, r"measured_depth.*\[1\]"),
        ({"measured_depth": ["0 m", "1 s", "2 m"]}, UnitsError, "measured_depth: needs"),
        (
            {"inclination": ureg.Quantity(np.array([0.0, 181.0, 3.0]), "degree")},
            DomainError,
            r"inclination: .*between 0 and 180 degrees.*\[1\]",
        ),
        (
            {"inclination": ureg.Quantity(np.array([0.0, 1.0, -0.1]), "degree")},
            DomainError,
            r"inclination: .*between 0 and 180 degrees.*\[2\]",
        ),
        (
            {"inclination": np.array([0.0, 1.0, 2.0])},
            UnitsError,
            "inclination: needs an incl.*degree",
        ),
        ({"azimuth": metres([0.0, 1.0, 2.0])}, UnitsError, "azimuth: needs an angle"),
        (
            {"azimuth": ureg.Quantity(np.array([0.0, np.inf, 2.0]), "degree")},
            DomainError,
            r"azimuth: .*\[1\]",
        ),
        ({"head": ("0 m", "0 m")}, ShapeError, "head is one point"),
        ({"head": "0 m"}, ShapeError, "head is one point"),
        ({"head": (0.0, 0.0, 5.0)}, UnitsError, "head: needs a position"),
        ({"azimuth_offset": 5.0}, UnitsError, "azimuth_offset: needs an angle"),
        ({"azimuth_offset": ["1 degree"] * 3}, ShapeError, "azimuth_offset is one angle"),
        ({"chord_tolerance": "0 m"}, DomainError, "chord_tolerance: needs a length, positive"),
        ({"chord_tolerance": metres([0.1, 0.2])}, ShapeError, "chord_tolerance one length"),
    ],
)
def test_bad_surveys(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Survey(**(GOOD | changed))


def test_one_station_is_no_survey() -> None:
    with pytest.raises(DomainError, match="at least two stations"):
        Survey(["0 m"], ["0 degree"], ["0 degree"])
    with pytest.raises(ShapeError, match="one value per station"):
        Survey("0 m", "0 degree", "0 degree")


def test_180_degrees_is_an_inclination() -> None:
    survey = Survey(["0 m", "10 m"], ["180 degree"] * 2, ["0 degree"] * 2)
    assert survey.points[1].m_as("m") == pytest.approx([0.0, 0.0, -10.0], abs=1e-12)
    with pytest.raises(DomainError, match="between 0 and 180"):
        Survey(["0 m", "10 m"], ["180.000001 degree"] * 2, ["0 degree"] * 2)


def test_every_wrong_row_is_in_one_error() -> None:
    with pytest.raises(UnitsError) as caught:
        Survey([0.0, 1.0], ["0 degree", "0 degree"], ["0 m", "0 m"])  # type: ignore[arg-type]
    assert "measured_depth: needs" in str(caught.value)
    assert "azimuth: needs" in str(caught.value)


def test_what_was_given_may_change_afterwards() -> None:
    depth, inclination = np.array([0.0, 50.0, 100.0]), np.array([0.0, 0.1, 0.4])
    azimuth, head = np.zeros(3), np.zeros(3)
    survey = Survey(
        metres(depth),
        ureg.Quantity(inclination, "radian"),
        ureg.Quantity(azimuth, "radian"),
        head=ureg.Quantity(head, "m"),
    )
    before = survey.points.m.copy()
    for array in (depth, inclination, azimuth, head):
        array[:] = 99.0
    survey.points.m[:] = 99.0
    survey.measured_depth.m[:] = 99.0
    survey.direction("70 m")[:] = 99.0
    assert survey.points.m.tolist() == before.tolist()
    assert survey.position("100 m").m == pytest.approx(before[-1], abs=1e-12)


TEXT = """measured_depth [ft],inclination [degree],azimuth [degree]
3500,15,20
3600,25,45
3700,25,45
"""
EXPECTED = Survey(
    ["3500 ft", "3600 ft", "3700 ft"],
    ["15 degree", "25 degree", "25 degree"],
    ["20 degree", "45 degree", "45 degree"],
)


def written(folder: FilePath, text: str | bytes) -> FilePath:
    file = folder / "well.csv"
    file.write_bytes(text if isinstance(text, bytes) else text.encode())
    return file


def survey_of(folder: FilePath, text: str | bytes, **options: Any) -> Survey:
    return Survey.from_csv(written(folder, text), **options)


@pytest.mark.parametrize(
    "text",
    [
        TEXT,
        "\ufeff" + TEXT,
        TEXT.replace("\n", "\r\n"),
        "\n" + TEXT.replace("3600", "\n , ,\n3600") + "\n\n",
        "azimuth [degree] , tool,measured_depth[ft],inclination [ degree ],by\n"
        '20,"gyro, north",3500,15,\n 45 ,gyro, 3.6e3 ,25,"a ""b"""\n45,,3700,25,c,more\n',
    ],
    ids=["plain", "byte order mark", "line ends", "empty lines", "any order"],
)
def test_csv_in_any_order(text: str, tmp_path: FilePath) -> None:
    survey = survey_of(tmp_path, text)
    assert survey.points.m_as("ft") == pytest.approx(EXPECTED.points.m_as("ft"), abs=1e-9)
    assert survey.measured_depth.m_as("ft") == close([3500.0, 3600.0, 3700.0], rel=1e-14)


def test_csv_in_other_units_and_with_options(tmp_path: FilePath) -> None:
    text = "measured_depth [m],inclination [radian],azimuth [radian]\n" + "\n".join(
        f"{m * 0.3048!r},{math.radians(i)!r},{math.radians(a)!r}"
        for m, i, a in ((3500, 15, 10), (3600, 25, 35), (3700, 25, 35))
    )
    survey = Survey.from_csv(
        str(written(tmp_path, text)), head=("5 m", "6 m", "7 m"), azimuth_offset="10 degree"
    )
    expected = EXPECTED.points.m_as("m") + np.array([5.0, 6.0, 7.0])
    assert survey.points.m_as("m") == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize(
    ("text", "error", "words"),
    [
        (TEXT.replace(" [ft]", ""), UnitsError, "'measured_depth' has no unit.*\\[ft\\]"),
        (TEXT.replace("inclination [degree]", "inclination"), UnitsError, "'inclination' has no"),
        (TEXT.replace("[ft]", "[ft"), UnitsError, "'measured_depth' has no unit"),
        (TEXT.replace("[ft]", "[]"), UnitsError, "well.csv: column 'measured_depth'"),
        (TEXT.replace("[ft]", "[fathoms of sea]"), UnitsError, "well.csv: column 'measured_depth'"),
        (TEXT.replace("[ft]", "[2 ft]"), UnitsError, "well.csv: column 'measured_depth'"),
        (TEXT.replace("[ft]", "[psi]"), UnitsError, "measured_depth: needs a position"),
        (TEXT.replace("azimuth", "bearing"), DomainError, "no column 'azimuth'.*'bearing"),
        (TEXT.replace("azimuth", "measured_depth"), DomainError, "'measured_depth' stands twice"),
        (
            TEXT.replace("3600,25", "3600,abc"),
            DomainError,
            "row 3: inclination is no number: 'abc'",
        ),
        (TEXT.replace("3600,25", "3600,"), DomainError, "row 3: inclination is no number: ''"),
        (TEXT.replace("3600,25,45", "3600,25"), DomainError, "row 3: azimuth is no number: ''"),
        (TEXT.replace("3600", "nan"), DomainError, "row 3: measured_depth is no number: 'nan'"),
        (TEXT.replace("3600", "inf"), DomainError, "row 3: measured_depth is no number"),
        (TEXT.replace("3600", "3_600"), DomainError, "row 3: measured_depth is no number: '3_600'"),
        (TEXT.replace("3600", '"3,600"'), DomainError, "row 3: measured_depth is no number"),
        (TEXT.replace("3600", "３６００"), DomainError, "row 3: measured_depth is no number"),
        ("\n\n" + TEXT.replace("3600", "x"), DomainError, "row 5: measured_depth is no number"),
        (TEXT.replace("3600", "3400"), DomainError, "stations 0 and 1 have"),
        (TEXT.replace("3600,25", "3600,200"), DomainError, r"inclination: .*\[1\]"),
        (TEXT.splitlines()[0], DomainError, "at least two stations"),
        ("\n".join(TEXT.splitlines()[:2]), DomainError, "at least two stations"),
        ("", DomainError, "well.csv: the file is empty"),
        (" \n , \n", DomainError, "well.csv: the file is empty"),
        (b"\xff\xfe\x00measured", DomainError, "well.csv: the file is no CSV text"),
    ],
)
def test_bad_csv(text: str | bytes, error: type[Exception], words: str, tmp_path: FilePath) -> None:
    with pytest.raises(error, match=words):
        survey_of(tmp_path, text)


def test_a_file_that_is_not_there(tmp_path: FilePath) -> None:
    with pytest.raises(FileNotFoundError, match=r"none\.csv"):
        Survey.from_csv(tmp_path / "none.csv")
