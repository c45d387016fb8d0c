"""The unit boundary: one decorator turns a formula in SI floats into one on quantities."""

from __future__ import annotations

import functools
import inspect
import math
from collections.abc import Callable
from typing import Any, Concatenate, NamedTuple, ParamSpec, Protocol, TypeVar, cast

import numpy as np

from wellindex.units.answers import as_quantity
from wellindex.units.checks import AT_ONCE, Checks, Tally
from wellindex.units.declaration import Declaration, Parameter
from wellindex.units.evaluate import Careful, full, scale_arrays
from wellindex.units.kernel import compile_si
from wellindex.units.reading import OUR_QUANTITY, Problem
from wellindex.units.registry import Quantity

P = ParamSpec("P")
R = TypeVar("R")


class Formula(Protocol[P]):
    """A formula on quantities; ``.si`` is the same body on SI floats or arrays."""

    __name__: str
    __doc__: str | None

    @property
    def si(self) -> Callable[P, Any]: ...

    def __call__(self, *args: P.args, **kwargs: P.kwargs) -> Quantity: ...


def quantities(body: Callable[Concatenate[Checks, P], Any]) -> Formula[P]:  # noqa: C901
    """Turn a formula in coherent SI floats into one that takes and returns quantities.

    Parameters
    ----------
    body : callable
        First argument a `Checks`, all others keyword-only and annotated with a kind of
        `wellindex.units.kinds`; the answer is annotated with a kind too. It must work element
        by element. An argument named ``invalid`` belongs to the boundary: "raise" or "nan".

    Raises
    ------
    TypeError
        At import, where an argument or the answer has no kind or a default is out of range.
    """
    declaration = Declaration(body, "check")
    if declaration.answer is None:
        raise TypeError(f"{declaration.name}: the answer is declared with no kind")
    plan = {name: _plan(parameter) for name, parameter in declaration.parameters.items()}
    careful = Careful(body, declaration)
    defaults = declaration.defaults
    expected = len(declaration.parameters)
    answer = declaration.answer
    array_class, float64 = np.ndarray, np.dtype(np.float64)

    # The common forms of input are read here, in one loop without a call, because a call an
    # argument would double the cost of a scalar formula; all else goes the careful way.
    @functools.wraps(body)
    def formula(*args: Any, **given: Any) -> Any:  # noqa: C901
        if args:
            given = declaration.by_name(args, given)
        values = defaults.copy()
        arrays: dict[str, Any] = {}
        scales: list[float] = []
        spans: list[tuple[float, float]] = []
        all_one_sided = True
        for name, value in given.items():
            if name not in plan:
                return careful(given)
            factors, span, one_sided, bare, choices = plan[name]
            if value.__class__ is OUR_QUANTITY:
                known = factors.get(id(value._units))
                if known is None or known[0] is not value._units:
                    return careful(given)
                magnitude = value._magnitude
                if magnitude.__class__ is float:
                    si = magnitude * known[1]
                    if not span[0] < si < span[1]:
                        return careful(given)
                    values[name] = si
                elif magnitude.__class__ is array_class and magnitude.dtype is float64:
                    arrays[name] = magnitude
                    scales.append(known[1])
                    spans.append(span)
                    all_one_sided = all_one_sided and one_sided
                else:
                    return careful(given)
            elif bare and (value.__class__ is float or value.__class__ is int):
                if not span[0] < value < span[1]:
                    return careful(given)
                values[name] = float(value)
            elif value.__class__ is str and value in choices:
                values[name] = value
            else:
                return careful(given)
        if arrays and not (
            values.get("invalid") != "nan"
            and scale_arrays(arrays, scales, spans, all_one_sided, values)
        ):
            return careful(given)
        if len(values) != expected:
            return careful(given)
        result = body(AT_ONCE, **values)  # type: ignore[call-arg]
        if arrays:
            result = full(result, next(iter(arrays.values())).shape)
        return as_quantity(answer, result)

    formula.__signature__ = declaration.signature  # type: ignore[attr-defined]
    formula.si = compile_si(body, declaration)  # type: ignore[attr-defined]
    return cast("Formula[P]", formula)


class _Plan(NamedTuple):
    """What the common forms of one argument are read with."""

    factors: dict[int, Any]
    span: tuple[float, float]
    one_sided: bool
    bare: bool
    choices: tuple[Any, ...]


def _plan(parameter: Parameter) -> _Plan:
    reader = parameter.reader
    if reader is None:
        return _Plan({}, (0.0, 0.0), False, False, parameter.choices)
    one_sided = reader.low <= 0.0 and reader.high == math.inf
    bare = not reader.kind.dimension
    return _Plan(reader.ours, (reader.low, reader.high), one_sided, bare, ())


def reads(body: Callable[P, R]) -> Callable[P, R]:
    """Let a method or function take quantities where its body works in SI.

    Parameters
    ----------
    body : callable
        Annotated with kinds, or with classes, for its arguments; its answer passes through.

    Raises
    ------
    TypeError
        At import, where an argument has no kind.
    """
    method = next(iter(inspect.signature(body).parameters), "") == "self"
    declaration = Declaration(body, "self")

    @functools.wraps(body)
    def reading(*args: Any, **given: Any) -> Any:
        owner, args = (args[:1], args[1:]) if method else ((), args)
        given = declaration.by_name(args, given)
        declaration.check_names(given)
        values = {**declaration.defaults, **_read_all(declaration, given)}
        return body(*owner, **values)

    return cast("Callable[P, R]", reading)


def _read_all(declaration: Declaration, given: dict[str, Any]) -> dict[str, Any]:
    values: dict[str, Any] = {}
    problems: dict[str, Problem] = {}
    tally = Tally(keep_going=True)
    keep_going = given.get("invalid") == "nan"
    for name, value in given.items():
        try:
            values[name] = declaration.read(name, value)
            if keep_going and isinstance(values[name], np.ndarray):
                values[name] = _without_bad(declaration, name, values[name], tally)
            else:
                declaration.check(name, values[name])
        except Problem as problem:
            problems[name] = problem
    if problems:
        declaration.raise_for(problems)
    tally.report()
    return values


def _without_bad(declaration: Declaration, name: str, value: Any, tally: Tally) -> Any:
    reader = declaration.parameters[name].reader
    bad = None if reader is None else reader.check(value)
    if bad is None:
        return value
    tally.start(0, value.shape, value.size)
    tally.refuse(np.ravel(bad.mask), f"{name} {bad.reason}")
    return np.where(bad.mask, np.nan, value)
