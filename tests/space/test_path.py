"""The path of a well: measured depths, units, errors."""

import math
from functools import partial
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.builders import metres, route
from wellindex import DomainError, Path, ShapeError, UnitsError, unit_system, ureg

close = partial(pytest.approx, abs=0)
coordinates = st.floats(-5e3, 5e3)
points = st.tuples(coordinates, coordinates, coordinates)


@given(
    places=st.lists(points, min_size=2, max_size=6).filter(
        lambda p: all(math.dist(a, b) > 1e-3 for a, b in pairwise(p))
    ),
    start=st.floats(-100.0, 5e3),
)
def test_measured_depth_is_the_length_along_the_legs(
    places: list[tuple[float, float, float]], start: float
) -> None:
    path = route(*places, start=start)
    legs = [math.dist(a, b) for a, b in pairwise(places)]
    depths = [start + math.fsum(legs[:n]) for n in range(len(places))]
    assert path.measured_depth.m_as("m") == pytest.approx(depths, rel=1e-12, abs=1e-9)
    assert path.length.m_as("m") == pytest.approx(math.fsum(legs), rel=1e-9)
    assert path.points.m_as("m").tolist() == [list(p) for p in places]


def test_points_as_texts_in_mixed_units() -> None:
    path = Path([("0 m", "0 m", "1000 ft"), ("0 m", "0 m", "1 km")], measured_depth="1000 ft")
    assert path.length.m_as("m") == close(1000.0 - 304.8, rel=1e-14)
    with unit_system("oilfield"):
        assert path.measured_depth.m == close([1000.0, 1000.0 / 0.3048], rel=1e-14)
        assert repr(path) == "Path(2 points, 2280.84 ft)"


@pytest.mark.parametrize(
    ("points", "error", "words"),
    [
        (metres([[0.0, 0.0, 0.0]]), DomainError, "at least two points"),
        (metres([0.0, 0.0, 0.0]), ShapeError, r"shape \(n, 3\); got \(3,\)"),
        (metres([[0.0, 0.0], [1.0, 1.0]]), ShapeError, r"got \(2, 2\)"),
        (metres(np.zeros((2, 3))), DomainError, "points 0 and 1 are the same"),
        (metres([[0, 0, 0], [0, 0, 1], [0, 0, 1]]), DomainError, "points 1 and 2 are the same"),
        ([(0, 0, 0), (0, 0, 1)], UnitsError, "points: needs a position"),
        ([("0 m", "0 m", "0 m"), ("0 m", "0 m")], ShapeError, "its parts differ in shape"),
        (metres([[0, 0, 0], [0, 0, np.inf]]), DomainError, r"points: .*\[1, 2\]"),
        (metres([[0, 0, 0], [0, np.nan, 5]]), DomainError, r"points: .*\[1, 1\]"),
        (ureg.Quantity(np.ones((2, 3)), "s"), UnitsError, "points: needs a position"),
    ],
)
def test_bad_paths(points: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Path(points)


def test_the_first_measured_depth_is_one_length() -> None:
    with pytest.raises(UnitsError, match="measured_depth: needs a position"):
        Path(metres([[0, 0, 0], [0, 0, 1]]), measured_depth=5.0)
    with pytest.raises(ShapeError, match="measured_depth is one value"):
        Path(metres([[0, 0, 0], [0, 0, 1]]), measured_depth=metres([1.0, 2.0, 3.0]))


def test_measured_depth_at_every_point_where_legs_stand_for_arcs() -> None:
    places = [(0.0, 0.0, 0.0), (0.0, 0.0, 10.0), (3.0, 4.0, 10.0)]
    path = Path(metres(places), measured_depth=metres([100.0, 110.0, 115.5]))
    assert path.measured_depth.m_as("m").tolist() == [100.0, 110.0, 115.5]
    assert path.length.m_as("m") == close(15.5, rel=1e-14)
    # Along a leg the place goes with the part of its measured depth.
    assert path.at(np.array([105.0, 112.75]))[:, 2].tolist() == [5.0, 10.0]
    assert path.at(np.array([112.75]))[0] == pytest.approx([1.5, 2.0, 10.0], abs=1e-12)
    texts = Path(metres(places), measured_depth=["100 m", "110 m", "120 m"])
    assert texts.length.m_as("m") == close(20.0, rel=1e-14)


@pytest.mark.parametrize(
    ("depths", "error", "words"),
    [
        ([1.0, 2.0], ShapeError, r"or one per point \(3\); got \(2,\)"),
        ([[1.0, 2.0, 3.0]], ShapeError, r"or one per point \(3\); got \(1, 3\)"),
        ([1.0, 3.0, 2.0], DomainError, "must increase; points 1 and 2 do not"),
        ([1.0, 1.0, 2.0], DomainError, "must increase; points 0 and 1 do not"),
        ([1.0, np.nan, 2.0], DomainError, r"measured_depth: .*\[1\]"),
    ],
)
def test_bad_measured_depths(depths: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Path(metres([[0, 0, 0], [0, 0, 1], [0, 0, 2]]), measured_depth=metres(depths))
