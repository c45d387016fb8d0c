"""``.si``: the same formula on plain SI floats and arrays, with the same signature and checks."""

import inspect
import math
import pickle
import re
from decimal import Decimal
from typing import Any

import numpy as np
import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

import wellindex
from tests import strategies
from tests.units import sample_formulas as sample
from wellindex import (
    ArgumentsError,
    AssumptionWarning,
    DomainError,
    ShapeError,
    UnitsError,
    equivalent_radius,
    unit_system,
    ureg,
    well_index,
)

FORMULAS = {
    name: formula
    for name in wellindex.__all__
    if hasattr(formula := getattr(wellindex, name), "si") and formula is not ureg
} | {name: f for name, f in vars(sample).items() if hasattr(f, "si")}
UNITS = {"dx": "m", "dy": "m", "dz": "m", "kx": "m**2", "ky": "m**2", "kz": "m**2", "rw": "m"}
UNITS |= {"length": "m", "equivalent_radius": "m"}
LENGTH = "a length, positive and finite; got "


def block(**changed: Any) -> dict[str, Any]:
    return {
        "dx": 100.0,
        "dy": 80.0,
        "dz": 10.0,
        "kx": 1e-13,
        "ky": 5e-14,
        "kz": 1e-14,
        "rw": 0.1,
        **changed,
    }


def with_units(values: dict[str, Any]) -> dict[str, Any]:
    return {
        name: ureg.Quantity(value, UNITS[name]) if name in UNITS else value
        for name, value in values.items()
    }


def test_the_formulas_are_here() -> None:
    assert {"well_index", "equivalent_radius", "equivalent_wellbore_radius"} <= set(FORMULAS)


@pytest.mark.parametrize("formula", FORMULAS.values(), ids=FORMULAS.keys())
def test_the_signature_is_the_formula_s(formula: Any) -> None:
    ours, theirs = inspect.signature(formula), inspect.signature(formula.si)
    assert list(ours.parameters) == list(theirs.parameters)
    for name, parameter in ours.parameters.items():
        assert parameter.kind is theirs.parameters[name].kind is parameter.KEYWORD_ONLY
        np.testing.assert_equal(parameter.default, theirs.parameters[name].default)
    assert formula.__name__ in formula.si.__qualname__
    assert formula.__name__ in formula.si.__doc__


@given(strategies.blocks())
def test_it_is_the_quantity_call(drawn: strategies.Block) -> None:
    values: dict[str, Any] = drawn.arguments
    with unit_system("si"):
        answer = well_index(**with_units(values))
    assert well_index.si(**values) == pytest.approx(answer.magnitude, rel=1e-15, abs=0)


@given(st.lists(strategies.blocks(direction="z"), min_size=1, max_size=5))
def test_arrays_are_elements(drawn: list[strategies.Block]) -> None:
    names = [*block(), "skin"]
    arrays = {name: np.array([getattr(one, name) for one in drawn]) for name in names}
    alone = [well_index.si(**one.arguments) for one in drawn]
    np.testing.assert_allclose(well_index.si(**arrays), alone, rtol=1e-13)


def test_a_float_for_floats() -> None:
    assert type(well_index.si(**block())) is float


@pytest.mark.parametrize(
    "value",
    [100, np.float64(100.0), np.float32(100.0), np.int32(100), Decimal(100), np.array(100.0)],
)
def test_other_numbers(value: Any) -> None:
    assert well_index.si(**block(dx=value)) == pytest.approx(well_index.si(**block()), rel=1e-15)


@pytest.mark.parametrize(
    "values",
    [
        [90, 100],
        (90.0, 100.0),
        np.array([90, 100]),
        np.array([90, 100], dtype=np.float32),
        np.array([100.0, 0.0, 90.0])[::-2],
        np.array([[90.0], [100.0]]),
        np.array([90.0, 100.0]).astype(">f8"),
    ],
)
def test_other_arrays(values: Any) -> None:
    answer = well_index.si(**block(dx=values))
    assert answer.shape == np.shape(values)
    expected = [well_index.si(**block(dx=float(value))) for value in np.ravel(values)]
    np.testing.assert_allclose(np.ravel(answer), expected, rtol=1e-14)


def test_shapes_broadcast() -> None:
    answer = well_index.si(**block(dx=np.full(3, 100.0), kz=np.full((2, 1), 1e-14)))
    np.testing.assert_allclose(answer, np.full((2, 3), well_index.si(**block())), rtol=1e-14)
    assert well_index.si(**block(kz=np.full(2, 1e-14))).shape == (2,)
    assert well_index.si(**block(dx=np.array([]))).shape == (0,)


def test_shapes_that_do_not_fit() -> None:
    words = "well_index(): these shapes do not fit together: dx (3,), dy (2,)"
    with pytest.raises(ShapeError, match=re.escape(words)):
        well_index.si(**block(dx=np.ones(3), dy=np.ones(2)))


def test_inputs_stay_as_they_are() -> None:
    values = np.array([90.0, 100.0])
    kept = values.copy()
    answer = well_index.si(**block(dx=values))
    answer[:] = -1.0
    np.testing.assert_array_equal(values, kept)


@pytest.mark.parametrize(
    ("changed", "words", "echo", "si_echo"),
    [
        ({"dx": 0.0}, "dx: needs " + LENGTH, "'0.0 m'", "0 meter"),
        ({"dx": -1}, "dx: needs " + LENGTH, "'-1 m'", "-1 meter"),
        (
            {"kx": -1e-15},
            "kx: needs a permeability, zero or positive, and finite; got ",
            "'-1e-15 m**2'",
            "-1e-15 meter**2",
        ),
        ({"rw": math.nan}, "rw: needs " + LENGTH, "'nan m'", "nan meter"),
        ({"dz": math.inf}, "dz: needs " + LENGTH, "'inf m'", "inf meter"),
        ({"length": 0.0}, "length: needs " + LENGTH, "'0.0 m'", "0 meter"),
    ],
)
def test_the_same_ranges_echo_what_was_given(
    changed: dict[str, Any], words: str, echo: str, si_echo: str
) -> None:
    with pytest.raises(DomainError, match=re.escape(words + si_echo) + "$"):
        well_index.si(**block(**changed))
    with pytest.raises(DomainError, match=re.escape(words + echo) + "$"):
        well_index(**with_units(block(**changed)))


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        ({"skin": -math.inf}, "skin: needs a skin (a plain number), finite; got -inf"),
        ({"sector": 1.5, "equivalent_radius": 9.0}, "sector: needs the fraction of a full circle"),
        ({"dx": np.array([1e2, -1.0])}, "dx: needs a length, positive and finite; got -1 meter at"),
        ({"direction": "up"}, "direction: needs one of 'x', 'y', 'z'; got 'up'"),
        ({"rw": 60.0}, "ln(r0/rw) is below 0.5"),
        ({"skin": -20.0}, "ln(r0/rw) + skin is zero or negative"),
    ],
)
def test_the_same_ranges(changed: dict[str, Any], words: str) -> None:
    with pytest.raises(DomainError, match=re.escape(words)):
        well_index.si(**block(**changed))
    with pytest.raises(DomainError, match=re.escape(words)):
        well_index(**with_units(block(**changed)))


@pytest.mark.parametrize(
    ("value", "words"),
    [
        (True, "a boolean is no quantity"),
        (1j, "give a plain number in meter"),
        ("100 m", "give a plain number in meter"),
        ("100", "give a plain number in meter"),
        (None, "give a plain number in meter"),
        (ureg.Quantity(100.0, "ft"), "give a plain number in meter"),
        (ureg.Quantity(np.ones(2), "ft"), "give a plain number in meter"),
        (pint.UnitRegistry().Quantity(100.0, "ft"), "give a plain number in meter"),
        (np.ma.masked_array([100.0]), "fill the masked elements"),
        (np.array(["100"]), "not of <U3"),
    ],
)
def test_only_plain_numbers(value: Any, words: str) -> None:
    with pytest.raises(UnitsError, match=f"dx: needs a length; got .*{re.escape(words)}"):
        well_index.si(**block(dx=value))


def test_one_error_lists_every_bad_argument() -> None:
    with pytest.raises(ArgumentsError) as caught:
        equivalent_radius.si(dx=-1.0, dy="1 m", kx=1e-13, ky=1e-13, placement="inside")
    assert str(caught.value).splitlines() == [
        "equivalent_radius(): 3 arguments are wrong",
        "  dx: needs a length, positive and finite; got -1 meter",
        "  dy: needs a length; got '1 m'; give a plain number in meter",
        "  placement: needs one of 'centre', 'corner', 'west', 'east', 'south', 'north'; "
        "got 'inside'; use one of these",
    ]


def test_names_as_in_any_function() -> None:
    with pytest.raises(TypeError, match="positional"):
        well_index.si(100.0)  # type: ignore[call-arg]
    with pytest.raises(TypeError, match="missing 6 required keyword-only arguments"):
        well_index.si(dx=100.0)  # type: ignore[call-arg]
    with pytest.raises(TypeError, match="unexpected keyword argument 'skn'"):
        well_index.si(**block(skn=1.0))


def test_the_same_warning() -> None:
    with pytest.warns(AssumptionWarning, match=r"ln\(r0/rw\) is below 1") as caught:
        well_index.si(**block(rw=10.0))
    assert caught[0].filename == __file__


def test_one_bad_element_can_be_marked() -> None:
    with pytest.warns(AssumptionWarning, match="1 element is not a number: 1 x dx must be"):
        marked = well_index.si(**block(dx=np.array([100.0, -1.0])), invalid="nan")
    assert marked[0] == well_index.si(**block(dx=100.0))
    assert np.isnan(marked[1])


def test_marked_elements_are_counted() -> None:
    with pytest.warns(AssumptionWarning, match="2 elements are not a number: 2 x dx must be"):
        marked = well_index.si(**block(dx=np.array([-1.0, 100.0, np.nan])), invalid="nan")
    assert np.isnan(marked).tolist() == [True, False, True]


def test_a_bad_scalar_is_refused_with_either() -> None:
    with pytest.raises(DomainError, match="dx: needs a length, positive and finite; got -1 meter"):
        well_index.si(**block(dx=-1.0), invalid="nan")
    with pytest.raises(DomainError, match="invalid: needs one of 'raise', 'nan'; got 'skip'"):
        well_index.si(**block(), invalid="skip")
    assert well_index.si(**block(), invalid="nan") == well_index.si(**block())


@pytest.mark.parametrize("formula", FORMULAS.values(), ids=FORMULAS.keys())
def test_it_can_be_pickled(formula: Any) -> None:
    for protocol in range(pickle.HIGHEST_PROTOCOL + 1):
        assert pickle.loads(pickle.dumps(formula.si, protocol)) is formula.si
