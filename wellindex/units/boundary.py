"""The unit boundary: one decorator turns a formula in SI floats into one on quantities."""

from __future__ import annotations

import functools
import inspect
import sys
from collections.abc import Callable
from typing import Any, Concatenate, ParamSpec, Protocol, TypeVar, cast

import numpy as np

from wellindex.units.answers import as_quantity
from wellindex.units.checks import AT_ONCE, Checks, Tally
from wellindex.units.declaration import Declaration
from wellindex.units.evaluate import Careful, full, plan_for, scale_arrays
from wellindex.units.kernel import compile_si
from wellindex.units.kinds import Given, Kind, plain
from wellindex.units.reading import OUR_QUANTITY, Problem
from wellindex.units.registry import Quantity

LARGEST = sys.float_info.max

P = ParamSpec("P")
R = TypeVar("R")


class Formula(Protocol[P]):
    """A formula on quantities; ``.si`` is the same body on SI floats or arrays."""

    __name__: str
    __doc__: str | None

    @property
    def si(self) -> Callable[P, Any]: ...

    def __call__(self, *args: P.args, **kwargs: P.kwargs) -> Quantity: ...


def quantities(body: Callable[Concatenate[Checks, P], Any]) -> Formula[P]:
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
    careful = Careful(body, declaration)
    formula = _formula(careful, declaration.answer)
    formula.__signature__ = declaration.signature  # type: ignore[attr-defined]
    formula.si = compile_si(careful)  # type: ignore[attr-defined]
    return cast("Formula[P]", formula)


def _formula(careful: Careful, answer: Kind) -> Callable[..., Any]:  # noqa: C901
    """Return the formula that callers see.

    The common forms of input are read here, in one loop without a call, because a call an
    argument would double the cost of a scalar formula; all else goes the careful way.
    """
    body, declaration = careful.body, careful.declaration
    plan = {name: plan_for(parameter) for name, parameter in declaration.parameters.items()}
    defaults = declaration.defaults
    expected = len(declaration.parameters)
    array_class, float64 = np.ndarray, np.dtype(np.float64)

    @functools.wraps(body)
    def formula(*args: Any, **given: Any) -> Any:  # noqa: C901
        if args:
            given = declaration.by_name(args, given)
        values = defaults.copy()
        arrays: dict[str, Any] = {}
        scales: list[float] = []
        all_one_sided = True
        for name, value in given.items():
            if name not in plan:
                return careful(given)
            factors, recall, span, one_sided, bare, choices = plan[name]
            if value.__class__ is OUR_QUANTITY:
                known = factors.get(id(value._units))
                if known is None or known[0] is not value._units:
                    known = recall(value._units)
                    if known is None:
                        return careful(given)
                magnitude = value._magnitude
                if magnitude.__class__ is float or magnitude.__class__ is int:
                    try:
                        si = magnitude * known[1]
                    except OverflowError:  # an integer beyond all floats
                        return careful(given)
                    if not span[0] < si < span[1]:
                        return careful(given)
                    values[name] = si
                elif magnitude.__class__ is array_class and magnitude.dtype is float64:
                    arrays[name] = magnitude
                    scales.append(known[1])
                    all_one_sided = all_one_sided and one_sided
                else:
                    return careful(given)
            elif bare and (value.__class__ is float or value.__class__ is int):
                if not span[0] < value < span[1] or abs(value) > LARGEST:
                    return careful(given)
                values[name] = float(value)
            elif value.__class__ is str and value in choices:
                values[name] = value
            else:
                return careful(given)
        shape = None
        if arrays:
            if values.get("invalid") == "nan":
                return careful(given)
            shape = scale_arrays(arrays, scales, plan, all_one_sided, values)
            if shape is None:
                return careful(given)
        if len(values) != expected:
            return careful(given)
        result = body(AT_ONCE, **values)
        if shape is not None and (result.__class__ is not array_class or result.shape != shape):
            result = full(result, shape)
        return as_quantity(answer, result)

    return formula


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
    first = next(iter(inspect.signature(body).parameters), "")
    method = first in ("self", "cls")
    declaration = Declaration(body, first if method else None)

    @functools.wraps(body)
    def reading(*args: Any, **given: Any) -> Any:
        owner, args = (args[:1], args[1:]) if method else ((), args)
        given = declaration.by_name(args, given)
        declaration.check_names(given)
        values = {**declaration.defaults, **_read_all(declaration, given)}
        return body(*owner, **values)

    return cast("Callable[P, R]", reading)


def called(name: str) -> Callable[[Callable[P, R]], Callable[P, R]]:
    """Give a private function the name that its errors speak of: what the caller has called."""

    def rename(body: Callable[P, R]) -> Callable[P, R]:
        body.__qualname__ = name
        return body

    return rename


def _read_all(declaration: Declaration, given: dict[str, Any]) -> dict[str, Any]:
    values: dict[str, Any] = {}
    problems: dict[str, Problem] = {}
    tally = Tally(keep_going=True)
    keep_going = given.get("invalid") == "nan"
    for name, value in given.items():
        try:
            values[name] = declaration.read(name, value)
            if keep_going and isinstance(plain(values[name]), np.ndarray):
                values[name] = _without_bad(declaration, name, values[name], tally)
            else:
                declaration.check(name, values[name], value)
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
    array = plain(value)
    tally.start(0, array.shape, array.size)
    tally.refuse(np.ravel(bad.mask), f"{name} {bad.reason}")
    marked = np.where(bad.mask, np.nan, array)
    return Given(marked, value.kind) if isinstance(value, Given) else marked
