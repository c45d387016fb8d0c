"""Read a formula's annotations once, at import: a wrong declaration breaks the import."""

from __future__ import annotations

import inspect
import operator
import types
import typing
from collections.abc import Callable
from typing import Annotated, Any, Literal, NamedTuple, NoReturn, get_args, get_origin

import numpy as np
import pint

from wellindex.errors import ArgumentsError, DomainError, ShapeError, UnitsError, WellIndexError
from wellindex.units.checks import place
from wellindex.units.kinds import Either, Kind, plain
from wellindex.units.reading import EitherReader, KindReader, Problem, shown
from wellindex.units.text import nearest

_readers: dict[int, KindReader] = {}


class Parameter(NamedTuple):
    """One argument: how to read it and what else it may be."""

    name: str
    reader: KindReader | None
    choices: tuple[Any, ...]
    instances: tuple[type, ...]
    optional: bool


def _reader(kind: Kind | Either) -> KindReader:
    if id(kind) not in _readers:
        make = EitherReader if isinstance(kind, Either) else KindReader
        _readers[id(kind)] = make(kind)  # type: ignore[arg-type]
    return _readers[id(kind)]


def _parameter(name: str, annotation: Any) -> Parameter:
    options = [annotation]
    if get_origin(annotation) in (typing.Union, types.UnionType):
        options = list(get_args(annotation))
    optional = type(None) in options
    options = [option for option in options if option is not type(None)]
    first = options[0]
    if get_origin(first) is Annotated and len(options) == 1:
        kind = first.__metadata__[0]
        if isinstance(kind, (Kind, Either)):
            return Parameter(name, _reader(kind), (), (), optional)
    if get_origin(first) is Literal and len(options) == 1:
        return Parameter(name, None, get_args(first), (), optional)
    instances = tuple(get_origin(option) or option for option in options)
    unclear = first is Any or Annotated in instances
    if unclear or not all(isinstance(option, type) for option in instances):
        raise TypeError(f"argument {name!r} is declared with no kind: {annotation!r}")
    return Parameter(name, None, (), instances, optional)


def answer_kind(hints: dict[str, Any]) -> Kind | None:
    """Return the kind of a formula's answer, or None where it answers with an object."""
    marks = getattr(hints.get("return"), "__metadata__", (None,))
    return marks[0] if isinstance(marks[0], Kind) else None


def _whole_number(value: Any) -> int:
    """Return a whole number of Python's or numpy's kind; a boolean is none."""
    if isinstance(value, (bool, np.bool_)) or not hasattr(value, "__index__"):
        raise Problem(UnitsError, "a whole number", repr(value), "give one")
    return operator.index(value)


class Declaration:
    """The arguments of one formula, ready to read.

    Parameters
    ----------
    body : callable
        The formula in SI.
    first : {"self", "check"}
        Name of the leading argument that callers do not give.
    """

    def __init__(self, body: Callable[..., Any], first: str | None) -> None:
        self.name = body.__qualname__.removesuffix(".__init__")
        signature = inspect.signature(body)
        hints = typing.get_type_hints(body, include_extras=True)
        given = [p for p in signature.parameters.values() if p.name != first]
        bare = [p.replace(annotation=p.empty) for p in given]
        self.signature = signature.replace(parameters=bare, return_annotation=signature.empty)
        self.answer = answer_kind(hints)
        self.parameters: dict[str, Parameter] = {}
        self.defaults: dict[str, Any] = {}
        for parameter in given:
            if parameter.name not in hints:
                raise TypeError(f"{self.name}: argument {parameter.name!r} has no kind")
            self.parameters[parameter.name] = _parameter(parameter.name, hints[parameter.name])
            if parameter.default is not parameter.empty:
                self.defaults[parameter.name] = self._default(parameter.name, parameter.default)
        self.positional = [p.name for p in given if p.kind is p.POSITIONAL_OR_KEYWORD]
        self.required = frozenset(self.parameters) - frozenset(self.defaults)

    def _default(self, name: str, value: Any) -> Any:
        parameter = self.parameters[name]
        if value is None and not parameter.optional:
            raise TypeError(f"{self.name}: {name!r} may not be None, yet that is its default")
        if parameter.choices and value not in (*parameter.choices, None):
            raise TypeError(f"{self.name}: default of {name!r} is not among its choices")
        if parameter.reader is None or value is None:
            return value
        default = np.asarray(value, dtype=np.float64) if np.ndim(value) else float(value)
        if parameter.reader.check(default) is not None:
            raise TypeError(f"{self.name}: default of {name!r} is outside its range")
        return default

    def by_name(self, args: tuple[Any, ...], given: dict[str, Any]) -> dict[str, Any]:
        """Return every given argument by its name."""
        if len(args) > len(self.positional):
            most = len(self.positional)
            raise TypeError(
                f"{self.name}() takes {most} positional arguments; give the others by name"
            )
        names = self.positional[: len(args)]
        for name in names:
            if name in given:
                raise TypeError(f"{self.name}() got {name!r} twice")
        return {**dict(zip(names, args, strict=True)), **given}

    def check_names(self, given: dict[str, Any]) -> None:
        """Raise `TypeError` for unknown and missing arguments, all in one."""
        parts = [
            f"no argument {name!r}{nearest(name, self.parameters)}"
            for name in given
            if name not in self.parameters
        ]
        missing = [n for n in self.parameters if n in self.required and n not in given]
        if missing:
            parts.append("missing " + ", ".join(repr(name) for name in missing))
        if parts:
            raise TypeError(f"{self.name}(): " + "; ".join(parts))

    def read(self, name: str, value: Any) -> Any:
        """Return one argument in SI (kinds) or as it is; raise `Problem`."""
        parameter = self.parameters[name]
        if value is None and parameter.optional:
            return None
        if parameter.reader is not None:
            return parameter.reader.read(value)
        if parameter.choices and not (isinstance(value, str) and value in parameter.choices):
            choices = ", ".join(repr(choice) for choice in parameter.choices)
            close = nearest(value, parameter.choices) if isinstance(value, str) else ""
            remedy = close.removeprefix("; ") or "use one of these"
            raise Problem(DomainError, f"one of {choices}", repr(value), remedy)
        if parameter.instances == (int,):
            return _whole_number(value)
        if parameter.instances and not isinstance(value, parameter.instances):
            wanted = " or ".join(kind.__name__ for kind in parameter.instances)
            raise Problem(UnitsError, wanted, repr(type(value).__name__), f"give a {wanted}")
        return value

    def read_si(self, name: str, value: Any) -> Any:
        """Return one argument that is given in SI, without a unit."""
        parameter = self.parameters[name]
        if parameter.reader is None or (value is None and parameter.optional):
            return self.read(name, value)
        return parameter.reader.read_si(value)

    def check(self, name: str, value: Any, given: Any = None) -> None:
        """Raise `Problem` where an SI value, `given` so, lies outside the range of its kind."""
        reader = self.parameters[name].reader
        if reader is None or value is None:
            return
        bad = reader.check(value)
        if bad is not None:
            raise Problem(DomainError, *self._range_words(name, value, bad, given))

    def _range_words(self, name: str, value: Any, bad: Any, given: Any) -> tuple[str, str, str]:
        """Say what is out of range: needed, given, remedy."""
        reader = self.parameters[name].reader
        assert reader is not None
        value = plain(value)
        flat = int(np.argmax(bad.mask))
        number = float(np.ravel(value)[flat])
        needed = f"{reader.kind.name}, {reader.kind.range.words}"
        if isinstance(given, (str, pint.Quantity)) and not np.ndim(value):
            return needed, shown(given), ""
        unit = "" if reader.kind.si == "dimensionless" else f" {reader.kind.si}"
        where = f" at {place(flat, np.shape(value))}" if np.ndim(value) else ""
        return needed, f"{number:.6g}{unit}{where}", ""

    def raise_for(self, problems: dict[str, Problem]) -> NoReturn:
        """Raise one error that lists every bad argument."""
        lines = []
        for name, problem in problems.items():
            remedy = f"; {problem.remedy}" if problem.remedy else ""
            lines.append(f"  {name}: needs {problem.needed}; got {problem.given}{remedy}")
        errors = {problem.error for problem in problems.values()}
        error: type[WellIndexError] = errors.pop() if len(errors) == 1 else ArgumentsError
        count = "1 argument is" if len(lines) == 1 else f"{len(lines)} arguments are"
        raise error(f"{self.name}(): {count} wrong\n" + "\n".join(lines)) from None

    def raise_shapes(self, arrays: dict[str, Any]) -> NoReturn:
        """Raise `ShapeError` naming the shapes that do not broadcast."""
        shapes = ", ".join(f"{name} {np.shape(value)}" for name, value in arrays.items())
        raise ShapeError(f"{self.name}(): these shapes do not fit together: {shapes}") from None
