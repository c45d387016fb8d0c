"""The grid of rectangular blocks: sizes, faces, centres, mask, errors."""

from fractions import Fraction
from functools import partial
from itertools import accumulate
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.builders import blocks_of, metres
from wellindex import DomainError, ShapeError, TensorGrid, UnitsError, unit_system, ureg

close = partial(pytest.approx, abs=0)


@given(
    sizes=st.lists(strategies.block_sizes(), min_size=1, max_size=8),
    start=st.floats(-1e4, 1e4),
)
def test_faces_and_centres_in_exact_arithmetic(sizes: list[float], start: float) -> None:
    grid = blocks_of([10.0], sizes, [5.0], origin=metres([0.0, start, 0.0]))
    faces = list(accumulate(map(Fraction, sizes), initial=Fraction(start)))
    scale = abs(start) + sum(sizes)
    assert grid.edges()[1] == pytest.approx([float(f) for f in faces], abs=1e-14 * scale)
    for j in range(len(sizes)):
        middle = float((faces[j] + faces[j + 1]) / 2)
        assert grid.centre((0, j, 0))[1].m_as("m") == pytest.approx(middle, abs=1e-14 * scale)
    assert grid.shape == (1, len(sizes), 1)


def test_a_scalar_is_one_block_and_texts_are_sizes() -> None:
    grid = TensorGrid("100 m", ["50 ft", "60 ft"], ureg.Quantity([3.0, 4.0, 5.0], "m"))
    assert grid.shape == (1, 2, 3)
    assert repr(grid) == "TensorGrid(1 x 2 x 3 blocks)"
    assert grid.dx.m_as("m") == close([100.0], rel=1e-15)
    assert grid.dy.m_as("ft") == close([50.0, 60.0], rel=1e-14)
    assert grid.dz.m_as("m") == close([3.0, 4.0, 5.0], rel=1e-15)


def test_origin_is_the_corner_at_west_south_and_top() -> None:
    grid = TensorGrid("10 m", "20 m", ["4 m", "6 m"], origin=("100 m", "-200 m", "1000 m"))
    assert grid.origin.m_as("m").tolist() == [100.0, -200.0, 1000.0]
    assert grid.centre((0, 0, 1)).m_as("m").tolist() == [105.0, -190.0, 1007.0]
    assert blocks_of([1.0], [1.0], [1.0]).origin.m.tolist() == [0.0, 0.0, 0.0]


def test_sizes_and_centres_of_some_cells() -> None:
    grid = blocks_of([1.0, 2.0], [3.0, 4.0], [5.0, 6.0])
    cells = np.array([[0, 1, 0], [1, 0, 1]])
    assert grid.sizes(cells).T.tolist() == [[1.0, 4.0, 5.0], [2.0, 3.0, 6.0]]
    assert grid.centres(cells).tolist() == [[0.5, 5.0, 2.5], [2.0, 1.5, 8.0]]


def test_answers_come_in_the_unit_system_in_force() -> None:
    grid = blocks_of([30.48], [30.48], [3.048])
    with unit_system("oilfield"):
        assert grid.dx.m == close([100.0], rel=1e-14)
        assert grid.centre((0, 0, 0)).m == close([50.0, 50.0, 5.0], rel=1e-14)


def test_the_mask_is_the_grid_s_own() -> None:
    present = np.array([[[True, False]], [[True, True]]])
    grid = blocks_of([1.0, 1.0], [1.0], [1.0, 1.0], present=present)
    present[:] = False
    assert grid.present.tolist() == [[[True, False]], [[True, True]]]
    grid.present[:] = False
    cells = np.array([[0, 0, 1], [1, 0, 1]])
    assert grid.exists(cells).tolist() == [False, True]
    assert blocks_of([1.0], [1.0], [1.0]).present.all()
    listed = blocks_of([1.0], [1.0], [1.0, 1.0], present=[[[True, False]]])
    assert listed.present.tolist() == [[[True, False]]]


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"dx": ["1 m", "0 m"]}, DomainError, r"dx: needs a length, positive.*\[1\]"),
        ({"dy": "-3 m"}, DomainError, "dy: needs a length, positive"),
        ({"dz": 5.0}, UnitsError, "dz: needs a length"),
        ({"dz": []}, ShapeError, "dz: "),
        ({"dx": metres([[1.0], [2.0]])}, ShapeError, r"dx is one row of sizes; got \(2, 1\)"),
        ({"dx": metres([])}, ShapeError, "dx is one row of sizes"),
        ({"origin": "3 m"}, ShapeError, "origin is one point"),
        ({"origin": ("0 m", "0 m")}, ShapeError, "origin is one point"),
        ({"origin": (0, 0, 100)}, UnitsError, "origin: needs a position"),
        ({"present": np.ones((1, 1, 2), dtype=bool)}, ShapeError, r"\(1, 1, 1\); got bool"),
        ({"present": np.ones((1, 1, 1))}, ShapeError, "array of bool.*float64"),
        ({"present": "all"}, UnitsError, "present: needs ndarray or list"),
    ],
)
def test_bad_grids(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        TensorGrid(**({"dx": "1 m", "dy": "1 m", "dz": "1 m"} | changed))


@pytest.mark.parametrize(
    ("cell", "error", "words"),
    [
        ((0, 0, 2), DomainError, "k = 2 is outside the grid: 0 to 1"),
        ((-1, 0, 0), DomainError, "i = -1 is outside"),
        ((0, 0), ShapeError, "three whole numbers"),
        ((0, 0, 0.5), ShapeError, "three whole numbers"),
    ],
)
def test_bad_cells(cell: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        blocks_of([1.0], [1.0], [1.0, 1.0]).centre(cell)
