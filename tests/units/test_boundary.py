"""The boundary around a formula: errors, arrays, invalid elements, answers, declarations."""

import re
import warnings
from collections.abc import Callable
from functools import partial
from typing import Annotated, Any, Literal

import numpy as np
import pint
import pytest

from tests.units import sample_formulas as sample
from wellindex import (
    ArgumentsError,
    AssumptionWarning,
    DomainError,
    ShapeError,
    UnitsError,
    WellIndexError,
    define_units,
    equivalent_radius,
    unit_system,
    ureg,
    well_index,
)
from wellindex.units import kinds
from wellindex.units.boundary import quantities, reads
from wellindex.units.checks import Checks
from wellindex.units.evaluate import BLOCK

SMALL, LARGE = 7, 2 * BLOCK + 1_000
THEIRS = pint.UnitRegistry()
TAUGHT = pint.UnitRegistry()
define_units(TAUGHT)

close = partial(pytest.approx, abs=0, rel=1e-14)


def metres(values: Any, registry: Any = ureg) -> Any:
    return registry.Quantity(values, "m")


def block(registry: Any = ureg, **changed: Any) -> dict[str, Any]:
    """A block that no check objects to."""
    quantity = registry.Quantity
    return {
        "dx": quantity(100.0, "m"),
        "dy": quantity(80.0, "m"),
        "dz": quantity(10.0, "m"),
        "kx": quantity(100.0, "millidarcy"),
        "ky": quantity(50.0, "millidarcy"),
        "kz": quantity(10.0, "millidarcy"),
        "rw": quantity(0.1, "m"),
        **changed,
    }


def message(error: type[Exception], call: Callable[[], Any]) -> list[str]:
    with pytest.raises(error) as caught:
        call()
    assert type(caught.value) is error
    return str(caught.value).splitlines()


# One error for everything that is wrong.


def test_one_error_lists_every_bad_argument() -> None:
    bad = block(dx=100.0, kx="50 ft", ky="-1 D", direction="up", skin=True)
    assert message(ArgumentsError, lambda: well_index(**bad)) == [
        "well_index(): 5 arguments are wrong",
        "  dx: needs a length; got 100.0; give a quantity or text with its unit, such as '... m'",
        "  kx: needs a permeability; got '50 ft'; use a unit such as mD; "
        "permeability_from_conductivity turns a hydraulic conductivity into one",
        "  ky: needs a permeability, zero or positive, and finite; got '-1 D'",
        "  direction: needs one of 'x', 'y', 'z'; got 'up'; use one of these",
        "  skin: needs a skin (a plain number); got True; a boolean is no quantity",
    ]


@pytest.mark.parametrize("size", [SMALL, LARGE])
def test_a_bad_element_and_a_bad_unit_in_one_error(size: int) -> None:
    lengths = np.full(size, 100.0)
    lengths[size - 2] = -1.0
    bad = block(dx=metres(lengths), kx="50 ft")
    assert message(ArgumentsError, lambda: well_index(**bad)) == [
        "well_index(): 2 arguments are wrong",
        f"  dx: needs a length, positive and finite; got -1 meter at [{size - 2}]",
        "  kx: needs a permeability; got '50 ft'; use a unit such as mD; "
        "permeability_from_conductivity turns a hydraulic conductivity into one",
    ]


@pytest.mark.parametrize(
    ("bad", "error", "builtin"),
    [
        ({"dx": "1 s", "dy": 3.0}, UnitsError, TypeError),
        ({"dx": "-1 m", "skin": float("nan")}, DomainError, ValueError),
        ({"dx": [], "dy": ()}, ShapeError, ValueError),
    ],
)
def test_errors_of_one_sort_keep_it(
    bad: dict[str, Any], error: type[Exception], builtin: type[Exception]
) -> None:
    lines = message(error, lambda: well_index(**block(**bad)))
    assert lines[0] == "well_index(): 2 arguments are wrong"
    assert issubclass(error, (WellIndexError, builtin))


@pytest.mark.parametrize(
    "catch", [TypeError, ValueError, WellIndexError, UnitsError, DomainError, ShapeError]
)
def test_mixed_errors_are_caught_as_any_of_them(catch: type[Exception]) -> None:
    with pytest.raises(catch):
        well_index(**block(dx="1 s", dy="-1 m"))


def test_names_come_first_and_all_at_once() -> None:
    with pytest.raises(TypeError) as caught:
        well_index(dx="1 s", banana=3, skn=2)  # type: ignore[call-arg]
    assert str(caught.value) == (
        "well_index(): no argument 'banana'; no argument 'skn'; did you mean 'skin'?; "
        "missing 'dy', 'dz', 'kx', 'ky', 'kz', 'rw'"
    )


def test_arguments_by_position_and_twice() -> None:
    with pytest.raises(TypeError, match="takes 0 positional arguments; give the others by name"):
        sample.length("1 m")  # type: ignore[call-arg]
    with pytest.raises(TypeError, match=r"sums\(\) got 'a' twice"):
        sample.sums("1 m", a="2 m")
    with pytest.raises(TypeError, match="takes 2 positional arguments; give the others by name"):
        sample.sums("1 m", "2 m", "name")  # type: ignore[call-arg]


def test_a_function_that_only_reads() -> None:
    assert sample.sums("1 km") == (1001.0, "")
    assert sample.sums(metres(2.0), "1 ft", name="two") == (close(2.3048), "two")
    assert sample.Holder("5 ft").d == close(1.524)
    assert sample.Holder(d="5 ft", mode="two").mode == "two"
    assert message(UnitsError, lambda: sample.sums(2.0, name=3)) == [  # type: ignore[arg-type]
        "sums(): 2 arguments are wrong",
        "  a: needs a length; got 2.0; give a quantity or text with its unit, such as '... m'",
        "  name: needs str; got 'int'; give a str",
    ]
    with pytest.raises(TypeError, match=r"^Holder\(\): missing 'd'"):
        sample.Holder()  # type: ignore[call-arg]
    with pytest.raises(DomainError, match=r"^Holder\(\): 1 argument is wrong\n  mode: needs one"):
        sample.Holder("1 m", mode="three")  # type: ignore[arg-type]


def test_none_stands_for_an_argument_left_out() -> None:
    assert well_index(**block(length=None)) == well_index(**block())
    with pytest.raises(UnitsError, match="dz: needs a length; got None"):
        well_index(**block(dz=None))


# Arrays.


def spread(size: int) -> dict[str, Any]:
    """Blocks all different, none of which a check objects to; by shapes and orders of all sorts."""
    rows = np.linspace(0.0, 1.0, size)
    return block(
        dx=metres(50.0 + 100.0 * rows),
        dy=metres(np.asfortranarray((80.0 + 40.0 * rows**2)[:, np.newaxis])[:, 0]),
        dz=metres(np.repeat(5.0 + rows, 2)[::2]),
        kx=ureg.Quantity((1.0 + 999.0 * rows).astype(np.float32), "mD"),
        ky=ureg.Quantity(np.arange(1, size + 1) % 500 + 1, "mD"),
        rw=ureg.Quantity(0.354, "ft"),
        skin=np.sin(np.arange(size)),
    )


def one_of(arguments: dict[str, Any], part: Any) -> dict[str, Any]:
    return {
        name: value[part] if np.ndim(getattr(value, "magnitude", value)) else value
        for name, value in arguments.items()
    }


@pytest.mark.parametrize("size", [SMALL, 300, BLOCK, BLOCK + 1, LARGE])
def test_elements_do_not_know_of_each_other(size: int) -> None:
    arguments = spread(size)
    whole = well_index(**arguments).magnitude
    assert whole.shape == (size,)
    for start in (0, size // 2, size - 5):
        part = well_index(**one_of(arguments, slice(start, start + 5))).magnitude
        np.testing.assert_allclose(whole[start : start + 5], part, rtol=1e-15)
        alone = well_index(**one_of(arguments, start)).magnitude
        assert whole[start] == pytest.approx(alone, rel=1e-14, abs=0)


@pytest.mark.parametrize("columns", [3, 6_000])
def test_shapes_broadcast(columns: int) -> None:
    across = np.linspace(50.0, 150.0, columns)
    down = np.linspace(20.0, 80.0, 4)[:, np.newaxis]
    answer = equivalent_radius(dx=metres(across), dy=metres(down), kx="9 mD", ky=["4 mD"])
    assert answer.magnitude.shape == (4, columns)
    full = np.broadcast_arrays(across, down)
    same = equivalent_radius(dx=metres(full[0]), dy=metres(full[1]), kx="9 mD", ky="4 mD")
    np.testing.assert_allclose(answer.magnitude, same.magnitude, rtol=1e-15)
    one = equivalent_radius(dx=metres(across[2]), dy=metres(down[3, 0]), kx="9 mD", ky="4 mD")
    assert answer.magnitude[3, 2] == pytest.approx(one.magnitude, rel=1e-14, abs=0)


@pytest.mark.parametrize("order", ["C", "F"])
@pytest.mark.parametrize("shape", [(4, 5), (200, 170), (3, 100, 120)])
def test_an_answer_is_where_its_argument_is(shape: tuple[int, ...], order: Any) -> None:
    values = np.asarray(1.0 + np.arange(np.prod(shape)).reshape(shape), order=order)
    np.testing.assert_allclose(sample.length(d=metres(values)).magnitude, values, rtol=1e-15)
    backwards = metres(values)[::-1, ::2]
    found = sample.length(d=backwards).magnitude
    np.testing.assert_allclose(found, values[::-1, ::2], rtol=1e-15)


@pytest.mark.parametrize("size", [1, SMALL, LARGE])
def test_an_array_that_does_not_matter_still_counts(size: int) -> None:
    alone = well_index(**block()).magnitude
    for _again in range(2):
        answer = well_index(**block(kz=ureg.Quantity(np.full(size, 10.0), "mD"))).magnitude
        np.testing.assert_allclose(answer, np.full(size, alone), rtol=1e-14)


def test_no_elements_no_answer() -> None:
    for _again in range(2):
        assert well_index(**block(dx=metres(np.array([])))).magnitude.shape == (0,)
        empty = metres(np.empty((2, 0, 3)))
        assert well_index(**block(dx=empty, invalid="nan")).magnitude.shape == (2, 0, 3)


@pytest.mark.parametrize("size", [3, LARGE])
def test_shapes_that_do_not_fit(size: int) -> None:
    bad = block(dx=metres(np.ones(size)), ky=ureg.Quantity(np.ones((2, 2)), "mD"))
    assert message(ShapeError, lambda: well_index(**bad)) == [
        f"well_index(): these shapes do not fit together: dx ({size},), ky (2, 2)"
    ]


def test_inputs_are_neither_changed_nor_shared() -> None:
    for size in (SMALL, 300, LARGE):
        arguments = spread(size)
        kept = {
            name: np.array(getattr(value, "magnitude", value)) for name, value in arguments.items()
        }
        answer = well_index(**arguments).magnitude
        well_index(**arguments, invalid="nan")
        answer[:] = -1.0
        for name, value in arguments.items():
            given = getattr(value, "magnitude", value)
            np.testing.assert_array_equal(given, kept[name])
            assert not np.shares_memory(answer, given)


def test_an_answer_may_be_written_to() -> None:
    for size in (SMALL, LARGE):
        answer = well_index(**block(kz=ureg.Quantity(np.full(size, 10.0), "mD"))).magnitude
        answer[0] = 0.0
        assert np.count_nonzero(answer == 0.0) == 1


# Bad elements: raised by default, with the index.


@pytest.mark.parametrize("value", [-1.0, 0.0, float("nan"), float("inf"), -float("inf")])
@pytest.mark.parametrize("registry", [ureg, THEIRS], ids=["ours", "theirs"])
@pytest.mark.parametrize(
    ("shape", "at"),
    [
        ((4,), (3,)),
        ((2, 3), (1, 0)),
        ((400,), (399,)),
        ((LARGE,), (BLOCK + 3,)),
        ((300, 170), (170, 5)),
    ],
)
def test_a_bad_element_is_named(
    value: float, registry: Any, shape: tuple[int, ...], at: tuple[int, ...]
) -> None:
    lengths = np.full(shape, 100.0)
    lengths[at] = value
    words = f"dx: needs a length, positive and finite; got {value:.6g} meter at [{str(at)[1:-1]}"
    for order in (np.ascontiguousarray, np.asfortranarray):
        arguments = block(registry, dx=metres(order(lengths), registry))
        with pytest.raises(DomainError, match=re.escape(words.rstrip(","))):
            well_index(**arguments)


def test_the_first_bad_element_is_named() -> None:
    lengths = np.full(LARGE, 100.0)
    lengths[[BLOCK + 7, 2 * BLOCK + 7]] = -1.0, -2.0
    with pytest.raises(DomainError, match=re.escape(f"got -1 meter at [{BLOCK + 7}]")):
        well_index(**block(dx=metres(lengths)))


@pytest.mark.parametrize("shape", [(5,), (LARGE,), (2, 3), (200, 180)])
def test_an_element_that_the_formula_refuses_is_named(shape: tuple[int, ...]) -> None:
    lengths = np.full(shape, 20.0)
    at = tuple(size - 1 for size in shape)
    lengths[at] = 150.0
    where = "[" + ", ".join(str(index) for index in at) + "]"
    with pytest.raises(DomainError, match=re.escape(f"d is too long (here 150) at {where}")):
        sample.short(d=metres(lengths))


@pytest.mark.parametrize("size", [10, LARGE])
def test_ranges_come_before_what_the_formula_says(size: int) -> None:
    lengths = np.full(size, 20.0)
    lengths[1], lengths[size - 1] = 150.0, -1.0
    with pytest.raises(DomainError, match=re.escape(f"got -1 meter at [{size - 1}]")):
        sample.short(d=metres(lengths))


def test_an_element_in_a_list() -> None:
    with pytest.raises(DomainError, match=re.escape("got -1 meter at [1]")):
        sample.length(d=["1 m", "-1 m"])
    with pytest.raises(DomainError, match=re.escape("got nan at [0, 1]")):
        sample.plain(skin=[[0.0, float("nan")]])


def test_a_scalar_that_the_formula_refuses() -> None:
    with pytest.raises(DomainError, match=r"^d is too long \(here 150\)$"):
        sample.short(d="150 m")
    with pytest.warns(AssumptionWarning, match=r"^d is doubtful \(here 70\)$"):
        sample.short(d="70 m")


# Bad elements: kept as NaN on demand.


def marked(call: Callable[[], Any]) -> tuple[Any, list[str]]:
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        answer = call()
    assert all(warning.category is AssumptionWarning for warning in caught)
    assert all(warning.filename in (__file__, sample.__file__) for warning in caught)
    return answer.magnitude, [str(warning.message) for warning in caught]


@pytest.mark.parametrize("size", [10, LARGE])
@pytest.mark.parametrize("registry", [ureg, TAUGHT], ids=["ours", "theirs"])
def test_invalid_elements_become_nan(size: int, registry: Any) -> None:
    lengths = np.full(size, 100.0)
    rock = np.full(size, 100.0)
    lengths[[1, size - 1]] = -1.0, float("nan")
    rock[[1, 4]] = float("inf"), -5.0
    arguments = block(
        registry, dx=metres(lengths, registry), kx=registry.Quantity(rock, "millidarcy")
    )
    answer, said = marked(lambda: well_index(**arguments, invalid="nan"))
    assert np.flatnonzero(np.isnan(answer)).tolist() == [1, 4, size - 1]
    good = np.isfinite(answer)
    fine = well_index(**block(registry)).magnitude
    np.testing.assert_allclose(answer[good], fine, rtol=1e-14)
    assert said == [
        "3 elements are not a number: 2 x dx must be positive and finite; "
        "1 x kx must be zero or positive, and finite"
    ]
    with pytest.raises(DomainError, match=r"2 arguments are wrong"):
        well_index(**arguments)


# Lengths of which the radius 0.14036 sqrt(dx**2 + dy**2) (Peaceman 1983; isotropic, the exact
# constant) makes ln(r0/rw) with rw = 0.1 m: 0.16 m refused, 0.9 m: 0.58 doubtful, 100 m fine.
@pytest.mark.parametrize("size", [10, LARGE])
def test_blocks_too_small_become_nan(size: int) -> None:
    lengths = np.full(size, 100.0)
    lengths[2], lengths[5], lengths[size - 1] = 0.16, 0.9, 0.16
    arguments = block(dx=metres(lengths), dy=metres(lengths), ky="100 mD")
    answer, said = marked(lambda: well_index(**arguments, invalid="nan"))
    assert np.flatnonzero(np.isnan(answer)).tolist() == [2, size - 1]
    assert len(said) == 2
    assert re.match(r"ln\(r0/rw\) is below 1: .* \(1 elements\)$", said[0])
    assert re.match(r"2 elements are not a number: 2 x ln\(r0/rw\) is below 0\.5", said[1])
    with pytest.raises(DomainError, match=r"ln\(r0/rw\) is below 0\.5.* at \[2\]$"):
        well_index(**arguments)


@pytest.mark.parametrize("size", [10, LARGE])
def test_stimulated_past_the_block_becomes_nan(size: int) -> None:
    skins = np.zeros(size)
    skins[3], skins[size - 2] = -20.0, -8.0
    answer, said = marked(lambda: well_index(**block(skin=skins), invalid="nan"))
    assert np.flatnonzero(np.isnan(answer)).tolist() == [3, size - 2]
    assert len(said) == 1
    assert re.match(r"2 elements are not a number: 2 x ln\(r0/rw\) \+ skin is zero or neg", said[0])


@pytest.mark.parametrize("size", [10, LARGE])
def test_a_doubt_is_told_once(size: int) -> None:
    values = np.full(size, 20.0)
    values[[1, 2, size - 1]] = 70.0
    answer, said = marked(lambda: sample.short(d=metres(values)))
    np.testing.assert_allclose(answer, values, rtol=1e-15)
    assert len(said) == 1
    assert re.fullmatch(r"d is doubtful( \(here 70\))? \(3 elements\)", said[0])


@pytest.mark.parametrize("size", [4, LARGE])
def test_what_scalars_spoil_spoils_every_element(size: int) -> None:
    skins = np.arange(float(size))
    answer, said = marked(lambda: sample.short(d="150 m", skin=skins, invalid="nan"))
    assert np.isnan(answer).all()
    assert said == [f"{size} elements are not a number: {size} x d is too long"]
    answer, said = marked(lambda: sample.short(d="70 m", skin=skins, invalid="nan"))
    np.testing.assert_allclose(answer, 70.0 + skins, rtol=1e-15)
    assert said == [f"d is doubtful ({size} elements)"]


@pytest.mark.parametrize("size", [6, LARGE])
def test_wholly_invalid(size: int) -> None:
    answer, said = marked(lambda: sample.short(d=metres(np.full(size, -1.0)), invalid="nan"))
    assert np.isnan(answer).all()
    assert said == [f"{size} elements are not a number: {size} x d must be positive and finite"]


def test_invalid_elements_of_a_broadcast() -> None:
    across, down = np.array([100.0, -1.0, 100.0]), np.array([[80.0], [float("nan")]])
    answer, said = marked(
        lambda: well_index(**block(dx=metres(across), dy=metres(down)), invalid="nan")
    )
    np.testing.assert_array_equal(np.isnan(answer), [[False, True, False], [True, True, True]])
    assert said[0].startswith("4 elements are not a number: ")


def test_a_function_that_only_reads_marks_them_too() -> None:
    def call() -> Any:
        found = sample.lengths(
            a=metres(np.array([[1.0, -1.0], [float("nan"), 4.0]])),
            b=np.array([1.0, float("inf")]),
            invalid="nan",
        )
        return ureg.Quantity(np.concatenate([np.ravel(part) for part in found]), "m")

    answer, said = marked(call)
    np.testing.assert_array_equal(answer, [1.0, np.nan, np.nan, 4.0, 1.0, np.nan])
    assert said == [
        "3 elements are not a number: 2 x a must be positive and finite; 1 x b must be finite"
    ]
    with pytest.raises(DomainError, match="a: needs a length, positive"):
        sample.lengths(a="-1 m", invalid="nan")


def test_invalid_lets_no_other_error_pass() -> None:
    numbers = metres(np.array([100.0, -1.0]))
    with pytest.raises(UnitsError, match="ky: needs a permeability"):
        well_index(**block(dx=numbers, ky=5.0), invalid="nan")
    with pytest.raises(DomainError, match="rw: needs a length, positive"):
        well_index(**block(dx=numbers, rw="-1 m"), invalid="nan")
    with pytest.raises(UnitsError, match="fill the masked"):
        well_index(**block(dx=metres(np.ma.masked_less([1.0, -1.0], 0.0))), invalid="nan")
    with pytest.raises(DomainError, match="invalid: needs one of 'raise', 'nan'; got 'skip'"):
        well_index(**block(dx=numbers), invalid="skip")
    with pytest.raises(DomainError, match="dx: needs a length, positive"):
        well_index(**block(dx="-1 m"), invalid="nan")


# Answers.


def test_answers_come_home_to_one_other_registry() -> None:
    for registry in (THEIRS, TAUGHT):
        for size in (None, SMALL, LARGE):
            kx = registry.Quantity(100.0 if size is None else np.full(size, 100.0), "millidarcy")
            answer = well_index(**block(registry, kx=kx))
            assert isinstance(answer, registry.Quantity)
            assert answer.units == registry.meter**3
            np.testing.assert_allclose(
                answer.m_as("m**3"), well_index(**block()).m_as("m**3"), rtol=1e-14
            )


def test_text_and_numbers_do_not_count() -> None:
    answer = well_index(**block(THEIRS, dx="100 m", skin=2, direction="z"))
    assert isinstance(answer, THEIRS.Quantity)


def test_a_list_counts_by_what_is_in_it() -> None:
    theirs = metres(2.0, THEIRS)
    assert isinstance(sample.length(d=["1 m", theirs]), THEIRS.Quantity)
    assert isinstance(sample.length(d=[metres(1.0), theirs]), ureg.Quantity)
    assert isinstance(sample.between(a=theirs, b=[metres(1.0)]), ureg.Quantity)


@pytest.mark.parametrize("other", [ureg, TAUGHT], ids=["ours", "a third"])
def test_mixed_registries_answer_in_ours(other: Any) -> None:
    with unit_system("oilfield"):
        answer = well_index(**block(THEIRS, dz=metres(10.0, other)))
    assert isinstance(answer, ureg.Quantity)
    assert answer.units == ureg.Unit("cP*rb/day/psi")
    assert answer.m_as("m**3") == close(well_index(**block()).m_as("m**3"))


def test_pint_s_application_registry_is_one_too() -> None:
    answer = sample.length(d=pint.Quantity(1.0, "ft"))
    assert isinstance(answer, pint.application_registry.get().Quantity)
    assert answer.m_as("meter") == close(0.3048)


def test_a_surface_volume_needs_a_registry_that_knows_it() -> None:
    registry = pint.UnitRegistry()
    reservoir = registry.Quantity(120.0, "m**3/day")
    words = (
        "the answer holds a surface volume, which the registry of the arguments does not know: "
        "call wellindex.define_units(registry) once"
    )
    with pytest.raises(UnitsError, match=re.escape(words)):
        sample.surface_rate(q=reservoir, factor=1.2)
    define_units(registry)
    answer = sample.surface_rate(q=reservoir, factor=1.2)
    assert isinstance(answer, registry.Quantity)
    assert answer.m_as("sm3/day") == close(100.0)
    assert sample.surface_rate(q=reservoir, factor=registry.Quantity(1.2, "rb/stb")) == answer


def test_an_active_context_does_not_change_an_answer() -> None:
    lets_pass = pint.Context()
    lets_pass.add_transformation("[length]", "[length]**2", lambda registry, x: x * x)
    fine = well_index(**block(THEIRS))
    with THEIRS.context(lets_pass):
        assert well_index(**block(THEIRS)) == fine
        with pytest.raises(UnitsError, match="kx: needs a permeability"):
            well_index(**block(THEIRS, kx=metres(3.0, THEIRS)))


# Declarations: read at import.


def declare(annotation: Any, default: Any = ..., answer: Any = kinds.Length) -> Callable[..., Any]:
    def body(check: Checks, *, x: Any = default) -> Any:
        return x

    if default is ...:
        body.__kwdefaults__ = {}

        def body(check: Checks, *, x: Any) -> Any:  # type: ignore[misc]
            return x

    body.__annotations__ = {"check": Checks, "x": annotation, "return": answer}
    return body


@pytest.mark.parametrize(
    ("annotation", "default"),
    [
        (kinds.Length, ...),
        (kinds.Length, 1.0),
        (kinds.Length | None, None),
        (kinds.Coordinate, (0.0, 1.0)),
        (kinds.Fraction, 1),
        (Literal["a", "b"], "b"),
    ],
)
def test_a_good_declaration(annotation: Any, default: Any) -> None:
    formula = quantities(declare(annotation, default))
    assert callable(formula.si)


@pytest.mark.parametrize(
    ("annotation", "default", "answer", "words"),
    [
        (kinds.Length, 0.0, kinds.Length, "body: default of 'x' is outside its range"),
        (kinds.Length, -1.0, kinds.Length, "default of 'x' is outside its range"),
        (kinds.Skin, float("nan"), kinds.Length, "default of 'x' is outside its range"),
        (kinds.Coordinate, (0.0, float("inf")), kinds.Length, "is outside its range"),
        (kinds.Sector, 1.5, kinds.Length, "default of 'x' is outside its range"),
        (kinds.Length, None, kinds.Length, "'x' may not be None, yet that is its default"),
        (Literal["a", "b"], "c", kinds.Length, "default of 'x' is not among its choices"),
        (Any, ..., kinds.Length, "argument 'x' is declared with no kind"),
        (Annotated[float, "a length"], ..., kinds.Length, "'x' is declared with no kind"),
        (kinds.Length | kinds.Time, ..., kinds.Length, "'x' is declared with no kind"),
        (kinds.Length, ..., float, "the answer is declared with no kind"),
        (kinds.Length, ..., Any, "the answer is declared with no kind"),
    ],
)
def test_a_bad_declaration_breaks_the_import(
    annotation: Any, default: Any, answer: Any, words: str
) -> None:
    with pytest.raises(TypeError, match=words):
        quantities(declare(annotation, default, answer))


def test_an_argument_without_annotation_breaks_the_import() -> None:
    def formula(check: Checks, *, x) -> kinds.Length:  # type: ignore[no-untyped-def]
        return x

    with pytest.raises(TypeError, match="argument 'x' has no kind"):
        quantities(formula)
    with pytest.raises(TypeError, match="argument 'x' has no kind"):
        reads(lambda x: x)


def test_an_answer_without_annotation_breaks_the_import() -> None:
    def formula(check: Checks, *, x: kinds.Length):  # type: ignore[no-untyped-def]
        return x

    with pytest.raises(TypeError, match="the answer is declared with no kind"):
        quantities(formula)


def test_a_formula_keeps_its_name_and_docstring() -> None:
    assert equivalent_radius.__name__ == "equivalent_radius"
    assert "Peaceman" in str(equivalent_radius.__doc__)


@pytest.mark.parametrize(
    ("changed", "hint"),
    [
        ({"direction": "up"}, "use one of these"),
        ({"placement": "nort"}, "did you mean 'north'?"),
        ({"placement": "center"}, "did you mean 'centre'?"),
        ({"invalid": "nam"}, "did you mean 'nan'?"),
        ({"placement": 3}, "use one of these"),
        ({"placement": None}, "use one of these"),
    ],
)
def test_a_choice_that_is_nearly_one(changed: dict[str, Any], hint: str) -> None:
    ((name, value),) = changed.items()
    (line,) = message(DomainError, lambda: well_index(**block(**changed)))[1:]
    assert line.startswith(f"  {name}: needs one of '")
    assert line.endswith(f"; got {value!r}; {hint}")


def nested(depth: int) -> Any:
    value: Any = "5 m"
    for _level in range(depth):
        value = [value]
    return value


def test_lists_in_lists() -> None:
    answer = sample.length(d=nested(5))
    assert answer.magnitude.shape == (1,) * 5
    for depth in (6, 7, 500):
        with pytest.raises(ShapeError, match="got lists in lists in lists; give an array"):
            sample.length(d=nested(depth))


@pytest.mark.parametrize(
    ("value", "echo"),
    [
        ("-3 ft", "'-3 ft'"),
        (ureg.Quantity(-3, "ft"), "'-3 ft'"),
        (ureg.Quantity(-3.5, "km"), "'-3.5 km'"),
        (THEIRS.Quantity(-3, "foot"), "'-3 foot'"),
        (["1 m", "-3 ft"], "-0.9144 meter at [1]"),
        (ureg.Quantity(np.array([1.0, -3.0]), "ft"), "-0.9144 meter at [1]"),
    ],
)
def test_a_range_error_says_what_was_given(value: Any, echo: str) -> None:
    with pytest.raises(DomainError, match=re.escape(f"positive and finite; got {echo}") + "$"):
        sample.length(d=value)


@pytest.mark.parametrize(
    "angle", ["30 degree", "0.5 rad", ureg.Quantity(30.0, "degree"), THEIRS.Quantity(1.0, "degree")]
)
def test_an_angle_is_no_plain_number(angle: Any) -> None:
    with pytest.raises(UnitsError, match="an angle is not what is meant here"):
        well_index(**block(skin=angle))


@pytest.mark.parametrize("name", ["wellindex_tools", "wellindexes.core", "my.wellindex", "app"])
def test_a_warning_points_at_the_caller_whatever_its_name(name: str) -> None:
    filename = f"/elsewhere/{name}.py"
    source = "\n\nanswer = call(**given)\n"
    names = {"__name__": name, "call": well_index, "given": block(rw="10 m")}
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        exec(compile(source, filename, "exec"), names)
    assert [(w.filename, w.lineno) for w in caught] == [(filename, 3)]
