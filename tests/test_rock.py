"""Permeability of blocks, tensors turned against the grid, hydraulic conductivity."""

import math
import re
from functools import partial
from operator import attrgetter
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests import strategies
from tests.oracles import closed_form
from tests.oracles.closed_form import arguments
from tests.published import tables
from tests.published.tables import Check
from wellindex import (
    AssumptionWarning,
    DomainError,
    Permeability,
    ShapeError,
    UnitsError,
    permeability_from_conductivity,
    unit_system,
    ureg,
)

close = partial(pytest.approx, abs=0)


def test_scalars_and_blocks() -> None:
    kx = ureg.Quantity(np.arange(24.0).reshape(2, 3, 4), "mD")
    rock = Permeability(kx, "30 mD", "0 mD")
    assert rock.shape == (2, 3, 4)
    cells = np.array([[1, 2, 3], [0, 0, 0], [1, 0, 2]])
    found = ureg.Quantity(rock.at(cells), "m**2").m_as("mD")
    expected = [[kx.m[tuple(cell)] for cell in cells], [30.0] * 3, [0.0] * 3]
    assert found == close(np.array(expected), rel=1e-14)
    assert rock.kx.m_as("mD") == close(kx.m, rel=1e-14)
    assert rock.kz.m == 0.0
    assert repr(rock) == "Permeability(one value per block, shape (2, 3, 4))"


def test_scalars_have_no_shape_and_print_in_the_unit_system() -> None:
    rock = Permeability("1 D", "30 mD", "2 mD")
    assert rock.shape == ()
    with unit_system("darcy"):
        assert repr(rock) == "Permeability(1 D, 0.03 D, 0.002 D)"


@pytest.mark.parametrize(
    ("k", "error", "words"),
    [
        (("-1 mD", "1 mD", "1 mD"), DomainError, "kx: needs a permeability, zero or positive"),
        (("1 mD", 3.0, "1 mD"), UnitsError, "ky: needs a permeability"),
        (("1 mD", "1 mD", "1 bar"), UnitsError, "kz: needs a permeability"),
        ((ureg.Quantity([1.0, 2.0], "mD"), "1 mD", "1 mD"), ShapeError, r"\(nx, ny, nz\)"),
        (
            (ureg.Quantity(np.ones((2, 2, 2)), "mD"), ureg.Quantity(np.ones((2, 2, 3)), "mD"),
             "1 mD"),
            ShapeError,
            r"x \(2, 2, 2\), y \(2, 2, 3\), z \(\)",
        ),
        ((ureg.Quantity(np.full((1, 1, 2), np.nan), "mD"), "1 mD", "1 mD"), DomainError, "kx"),
    ],
)  # fmt: skip
def test_bad_permeability(k: tuple[Any, ...], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Permeability(*k)


def test_invalid_nan_marks_bad_blocks() -> None:
    k = np.array([[[1.0, -1.0, np.nan, 0.0]]])
    with pytest.warns(AssumptionWarning, match="2 elements are not a number: 2 x ky") as caught:
        rock = Permeability("1 mD", ureg.Quantity(k, "mD"), "1 mD", invalid="nan")
    assert len(caught) == 1
    assert np.isnan(rock.ky.m).tolist() == [[[False, True, True, False]]]


def turned(k1: float, k2: float, kz: float, angle: float) -> Any:
    """A tensor whose first principal direction lies `angle` (rad) counter-clockwise of east."""
    c, s = math.cos(angle), math.sin(angle)
    turn = np.array([[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]])
    return turn @ np.diag([k1, k2, kz]) @ turn.T


@pytest.mark.parametrize("angle", [0.0, math.pi / 2, math.pi])
def test_a_tensor_along_the_grid(angle: float) -> None:
    rock = Permeability.from_tensor(ureg.Quantity(turned(90.0, 40.0, 5.0, angle), "mD"))
    expected = (40.0, 90.0, 5.0) if angle == math.pi / 2 else (90.0, 40.0, 5.0)
    assert [k.m_as("mD") for k in (rock.kx, rock.ky, rock.kz)] == close(expected, rel=1e-12)


@given(
    k1=strategies.logarithmic(1.0, 1e3),
    ratio=st.floats(0.01, 0.9),
    degrees=st.floats(-89.0, 89.0).filter(lambda x: abs(x) > 0.1),
)
def test_a_turned_tensor_says_how_far_to_turn_the_grid(
    k1: float, ratio: float, degrees: float
) -> None:
    tensor = turned(k1, ratio * k1, 1.0, math.radians(degrees))
    with pytest.raises(DomainError, match="turn the grid") as caught:
        Permeability.from_tensor(ureg.Quantity(tensor, "mD"))
    (angle, way) = re.findall(r"([\d.e+-]+) degrees (counter-clockwise|clockwise)", str(caught.value))[0]  # fmt: skip # noqa: E501
    turn = float(angle) if way == "counter-clockwise" else -float(angle)
    # In a grid turned by this angle the tensor reads turned back by it.
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    back = np.array([[c, s, 0.0], [-s, c, 0.0], [0.0, 0.0, 1.0]])
    in_grid = back @ tensor @ back.T
    assert abs(in_grid[0, 1]) < 1e-3 * k1
    assert abs(turn) <= 90.0


TILTED = np.array([[90.0, 0.0, 3.0], [0.0, 40.0, 0.0], [3.0, 0.0, 5.0]])
SKEWED = np.array([[90.0, 1.0, 0.0], [0.0, 40.0, 0.0], [0.0, 0.0, 5.0]])


@pytest.mark.parametrize(
    ("tensor", "error", "words"),
    [
        (TILTED, DomainError, "tilted against the grid's layers"),
        (SKEWED, DomainError, "symmetric"),
        (np.diag([90.0, 40.0, -5.0]), DomainError, "no negative principal value"),
        (np.array([[1.0, 2.0, 0.0], [2.0, 1.0, 0.0], [0.0, 0.0, 1.0]]), DomainError, "negative"),
        (np.ones((2, 2)), ShapeError, r"\(3, 3\); got \(2, 2\)"),
    ],
)
def test_bad_tensors(tensor: Any, error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Permeability.from_tensor(ureg.Quantity(tensor, "mD"))


def test_a_tensor_needs_its_unit() -> None:
    with pytest.raises(UnitsError, match="tensor: needs a permeability tensor"):
        Permeability.from_tensor(np.eye(3))  # type: ignore[arg-type]


CONDUCTIVITIES = tables.load("groundwater", "permeability_from_conductivity")


@pytest.mark.parametrize("check", CONDUCTIVITIES, ids=attrgetter("id"))
def test_published_conductivities(check: Check) -> None:
    known = {name: check.inputs[name] for name in ("conductivity", "mu", "rho")}
    found = permeability_from_conductivity(
        conductivity=known["conductivity"], viscosity=known["mu"], density=known["rho"]
    ).m_as(check.unit)
    exact = closed_form.permeability_from_conductivity(
        **arguments(check.inputs, "conductivity", "mu", "rho")
    )
    unit = ureg.Quantity(1.0, check.unit).m_as("m**2")
    assert found == close(float(exact) / unit, rel=1e-12)
    assert found == close(check.printed, rel=check.tolerance)


@given(
    conductivity=strategies.logarithmic(1e-12, 1.0),
    mu=strategies.viscosities(),
    rho=strategies.densities(),
)
def test_conductivity_at_50_digits(conductivity: float, mu: float, rho: float) -> None:
    found = permeability_from_conductivity.si(conductivity=conductivity, viscosity=mu, density=rho)
    exact = closed_form.permeability_from_conductivity(conductivity=conductivity, mu=mu, rho=rho)
    assert found == close(float(exact), rel=1e-12)


WATER = {"conductivity": "1 m/day", "viscosity": "1 cP", "density": "1 g/cm**3"}


def test_a_conductivity_of_zero_is_tight_rock() -> None:
    assert permeability_from_conductivity(**(WATER | {"conductivity": "0 m/day"})).m == 0.0


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"conductivity": "-1 m/day"}, DomainError, "conductivity: needs a hydraulic"),
        ({"conductivity": "1 D"}, UnitsError, "D is darcy here"),
        ({"viscosity": "0 cP"}, DomainError, "viscosity: needs a viscosity, positive"),
        ({"density": "0 kg/m**3"}, DomainError, "density: needs a density, positive"),
        ({"density": 1000}, UnitsError, "density: needs a density"),
    ],
)
def test_bad_conductivities(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        permeability_from_conductivity(**(WATER | changed))


def test_errors_of_a_tensor_speak_of_it() -> None:
    with pytest.raises(UnitsError, match=r"^Permeability\.from_tensor\(\): 1 argument is wrong"):
        Permeability.from_tensor("90 ft")  # type: ignore[arg-type]


@pytest.mark.parametrize("k", ["1 m/day", "1e-5 m/s", "3 ft/day"])
def test_a_conductivity_is_no_permeability_and_the_way_is_said(k: str) -> None:
    with pytest.raises(UnitsError, match="permeability_from_conductivity turns a hydraulic condu"):
        Permeability(k, k, k)
