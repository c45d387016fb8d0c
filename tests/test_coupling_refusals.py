"""What a coupling refuses, doubts or marks."""

import math
from functools import partial
from typing import Any

import numpy as np
import pytest

from tests.builders import blocks_of, rock, route
from wellindex import (
    AssumptionWarning,
    DomainError,
    Permeability,
    ShapeError,
    UnitsError,
    couple,
    ureg,
)

close = partial(pytest.approx, abs=0)

GRID = blocks_of([40.0, 70.0, 50.0], [90.0, 60.0, 80.0], [5.0, 9.0, 7.0])
ROCK = Permeability("90 mD", "30 mD", "10 mD")
VERTICAL = route((75.0, 120.0, 0.0), (75.0, 120.0, 21.0))


@pytest.mark.parametrize(
    ("intervals", "error", "words"),
    [
        ([("2 m", "6 m"), ("5 m", "8 m")], DomainError, "interval 1 overlaps or precedes interv"),
        ([("9 m", "12 m"), ("2 m", "6 m")], DomainError, "list intervals in order along the path"),
        ([("6 m", "2 m")], DomainError, "interval 0 does not run forwards along the path"),
        ([("6 m", "6 m")], DomainError, "interval 0 does not run forwards along the path"),
        ([("-1 m", "6 m")], DomainError, "leaves the path, which runs from 0 m to 21 m"),
        ([("1 m", "6 m"), ("8 m", "22 m")], DomainError, "interval 1 leaves the path"),
        (("1 m", "6 m"), ShapeError, r"pairs \(from, to\) of measured depth; got \(2,\)"),
        ([("1 m", "6 m", "8 m")], ShapeError, r"got \(1, 3\)"),
        ([(1.0, 6.0)], UnitsError, "intervals: needs a position"),
        ([("1 m", ureg.Quantity(math.nan, "m"))], DomainError, "intervals: "),
        ([], ShapeError, "intervals: "),
    ],
)
def test_bad_intervals(intervals: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        couple(VERTICAL, GRID, ROCK, rw="0.1 m", intervals=intervals)


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"rw": "10 m"}, DomainError, r"ln\(r0/rw\) is below 0\.5.*\[0\]"),
        ({"skin": -6.0}, DomainError, r"skin is zero or negative.*\[0\]"),
        ({"rw": "0 m"}, DomainError, "rw: needs a length, positive"),
        ({"rw": ["0.1 m", "0.1 m"]}, ShapeError, r"rw is one value, or one per interval \(1\)"),
        ({"skin": [0.0, 1.0]}, ShapeError, r"skin is one value, or one per interval \(1\)"),
        ({"rw": 0.1}, UnitsError, "rw: needs a length"),
        ({"net_to_gross": 1.2}, DomainError, "net_to_gross: needs a fraction, between 0 and 1"),
        ({"net_to_gross": np.ones((3, 3))}, ShapeError, r"net_to_gross has the shape \(3, 3\)"),
        ({"method": "guess"}, DomainError, "one of 'projection', 'axis'"),
        ({"placement": "left"}, DomainError, "one of 'centre'"),
        ({"path": [(0, 0, 0)]}, UnitsError, "path: needs Path"),
        ({"grid": None}, UnitsError, "grid: needs TensorGrid or HexahedralGrid"),
        ({"permeability": "90 mD"}, UnitsError, "permeability: needs Permeability"),
        (
            {"permeability": rock(np.ones((2, 2, 2)), 1.0, 1.0)},
            ShapeError,
            r"permeability has the shape \(2, 2, 2\), the grid \(3, 3, 3\)",
        ),
    ],
)
def test_bad_arguments(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    given_ = {"path": VERTICAL, "grid": GRID, "permeability": ROCK, "rw": "0.1 m"}
    with pytest.raises(error, match=words):
        couple(**(given_ | changed))


@pytest.mark.parametrize(
    ("changed", "words"),
    [({"rw": "6 m"}, "hardly wider than the wellbore"), ({"skin": -4.6}, r"skin is below 0\.5")],
)
def test_doubtful_rows_warn_once(changed: dict[str, Any], words: str) -> None:
    with pytest.warns(AssumptionWarning, match=f"{words}.*3 elements") as caught:
        couple(VERTICAL, GRID, ROCK, **({"rw": "0.1 m"} | changed))
    assert len(caught) == 1


def test_invalid_nan_keeps_the_other_rows() -> None:
    skin = [0.0, -20.0, 1.0]
    intervals = [("0 m", "2 m"), ("3 m", "4 m"), ("6 m", "8 m")]
    given_ = {"rw": "0.1 m", "skin": skin, "intervals": intervals}
    with pytest.raises(DomainError, match=r"zero or negative.*\[1\]"):
        couple(VERTICAL, GRID, ROCK, **given_)
    with pytest.warns(AssumptionWarning, match="1 element is not a number: 1 x ln") as caught:
        rows = couple(VERTICAL, GRID, ROCK, **given_, invalid="nan")
    assert len(caught) == 1
    assert np.isnan(rows.wi.m).tolist() == [False, True, False]
    sound = couple(VERTICAL, GRID, ROCK, **(given_ | {"skin": [0.0, 0.0, 1.0]}))
    assert rows.wi[[0, 2]].m == close(sound.wi[[0, 2]].m, rel=1e-14)


def test_invalid_nan_for_a_bad_radius_and_a_bad_block() -> None:
    intervals = [("0 m", "2 m"), ("3 m", "4 m"), ("6 m", "8 m")]
    rw = ureg.Quantity([0.1, -0.1, 0.1], "m")
    with pytest.warns(AssumptionWarning, match="1 x rw must be positive"):
        rows = couple(VERTICAL, GRID, ROCK, rw=rw, intervals=intervals, invalid="nan")
    assert np.isnan(rows.wi.m).tolist() == [False, True, False]
    kx = np.full((3, 3, 3), 1e-13)
    kx[1, 1, 1] = math.nan
    with pytest.warns(AssumptionWarning, match="1 x kx"):
        spoiled = rock(kx, 1e-13, 1e-13, invalid="nan")
    with pytest.raises(DomainError, match=r"no valid permeability at \[1\]"):
        couple(VERTICAL, GRID, spoiled, rw="0.1 m")
    with pytest.warns(AssumptionWarning, match="no valid permeability"):
        rows = couple(VERTICAL, GRID, spoiled, rw="0.1 m", invalid="nan")
    assert np.isnan(rows.wi.m).tolist() == [False, True, False]
