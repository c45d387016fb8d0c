"""Evaluate a formula on any kind of input: every problem reported, large arrays in blocks."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator
from typing import Any, NamedTuple

import numpy as np
import pint

from wellindex.errors import DomainError
from wellindex.units.answers import as_quantity, in_other_registry
from wellindex.units.checks import AT_ONCE, Tally
from wellindex.units.declaration import Declaration, Parameter
from wellindex.units.reading import Problem
from wellindex.units.registry import ureg

#: Elements evaluated at once: a few arrays of this size stay in a core's cache.
BLOCK = 16384

#: Arrays up to this size are scaled and checked together: one array operation serves them all.
SHORT = 256


class Plan(NamedTuple):
    """What the common forms of one argument are read with."""

    factors: dict[int, Any]
    recall: Callable[[Any], Any]
    span: tuple[float, float]
    one_sided: bool
    bare: bool
    choices: tuple[Any, ...]


def plan_for(parameter: Parameter) -> Plan:
    reader = parameter.reader
    if reader is None:
        return Plan({}, lambda _units: None, (0.0, 0.0), False, False, parameter.choices)
    one_sided = reader.low <= 0.0 and reader.high == math.inf
    bare = not reader.kind.dimension and reader.kind.plain is not None
    return Plan(reader.ours, reader.recall, (reader.low, reader.high), one_sided, bare, ())


_latest: list[tuple[list[float], int, np.ndarray[Any, Any]]] = [([], 0, np.empty((0, 0)))]


def _factor_table(factors: list[float], size: int) -> np.ndarray[Any, Any]:
    """Return one row of equal factors per array: multiplying like shapes costs half as much."""
    known_factors, known_size, table = _latest[0]
    if known_factors != factors or known_size != size:
        table = np.repeat(np.array(factors)[:, np.newaxis], size, axis=1)
        _latest[0] = (factors, size, table)
    return table


def scale_arrays(
    arrays: dict[str, Any],
    factors: list[float],
    plan: dict[str, Plan],
    one_sided: bool,
    values: dict[str, Any],
) -> tuple[int, ...] | None:
    """Put arrays of our quantities into `values` in SI; return their shape.

    None, where it is not that simple. `one_sided` says that every range holds all positive
    finite numbers.
    """
    magnitudes = list(arrays.values())
    shape: tuple[int, ...] = magnitudes[0].shape
    if one_sided and len(shape) == 1 and 0 < shape[0] <= SHORT:
        try:
            table = np.array(magnitudes)
        except ValueError:
            return None
        table *= _factor_table(factors, shape[0])
        if table.item(table.argmin()) > 0.0 and table.item(table.argmax()) < math.inf:
            values.update(zip(arrays, table, strict=True))
            return shape
    for (name, magnitude), factor in zip(arrays.items(), factors, strict=True):
        low, high = plan[name].span
        if magnitude.shape != shape or not 0 < magnitude.size <= BLOCK:
            return None
        si = magnitude * factor
        if not (low < si.item(si.argmin()) and si.item(si.argmax()) < high):
            return None
        values[name] = si
    return shape


def full(result: Any, shape: tuple[int, ...]) -> Any:
    """Return a result in the shape of its arguments, also where it does not depend on some."""
    if np.shape(result) == shape:
        return result
    return np.broadcast_to(result, shape).copy()


class Careful:
    """The careful way: any kind of input, every problem reported, large arrays in blocks."""

    def __init__(self, body: Callable[..., Any], declaration: Declaration) -> None:
        self.body = body
        self.declaration = declaration

    def __call__(self, given: dict[str, Any]) -> Any:
        kind = self.declaration.answer
        assert kind is not None
        self.declaration.check_names(given)
        keep_going = given.get("invalid") == "nan"
        values, scales = self._read(given, keep_going)
        result = self._evaluate(given, values, scales, keep_going)
        registry = _only_registry(given)
        if registry is not None:
            return in_other_registry(kind, result, registry)
        return as_quantity(kind, result)

    def si(self, given: dict[str, Any]) -> Any:
        """Evaluate numbers and arrays that are given in SI, without units."""
        keep_going = given.get("invalid") == "nan"
        values: dict[str, Any] = {}
        problems: dict[str, Problem] = {}
        for name, value in given.items():
            self._take(name, self.declaration.read_si, value, keep_going, values, problems)
        if problems:
            self.declaration.raise_for(problems)
        return self._evaluate({}, values, {}, keep_going)

    def _take(
        self,
        name: str,
        read: Callable[[str, Any], Any],
        value: Any,
        keep_going: bool,
        values: dict[str, Any],
        problems: dict[str, Problem],
    ) -> None:
        """Read and check one argument, or note its problem."""
        try:
            values[name] = read(name, value)
            if not (keep_going and isinstance(values[name], np.ndarray)):
                self.declaration.check(name, values[name], value)
        except Problem as problem:
            problems[name] = problem

    def _read(
        self, given: dict[str, Any], keep_going: bool, whole: bool = False
    ) -> tuple[dict[str, Any], dict[str, float]]:
        """Read all arguments; large arrays stay unscaled and unchecked unless `whole`."""
        values = self.declaration.defaults.copy()
        scales: dict[str, float] = {}
        problems: dict[str, Problem] = {}
        for name, value in given.items():
            try:
                raw = None if whole else self._raw(name, value)
            except Problem as problem:
                problems[name] = problem
                continue
            if raw is not None:
                values[name], scales[name] = raw
            else:
                self._take(name, self.declaration.read, value, keep_going, values, problems)
        if problems and scales:
            return self._read(given, keep_going, whole=True)
        if problems:
            self.declaration.raise_for(problems)
        return values, scales

    def _raw(self, name: str, value: Any) -> tuple[Any, float] | None:
        reader = self.declaration.parameters[name].reader
        raw = None if reader is None else reader.raw(value)
        return raw if raw is not None and raw[0].size > BLOCK else None

    def _evaluate(
        self,
        given: dict[str, Any],
        values: dict[str, Any],
        scales: dict[str, float],
        keep_going: bool,
    ) -> Any:
        arrays = {n: v for n, v in values.items() if isinstance(v, np.ndarray)}
        if not arrays:
            return self.body(AT_ONCE, **values)
        try:
            shape = np.broadcast_shapes(*(array.shape for array in arrays.values()))
        except ValueError:
            self.declaration.raise_shapes(arrays)
        if math.prod(shape) <= BLOCK and not keep_going:
            return full(np.array(self.body(AT_ONCE, **values)), shape)
        tally = Tally(keep_going=keep_going)
        try:
            result = self._in_blocks(values, arrays, scales, shape, tally)
        except (_OutOfRange, DomainError):
            self._read(given, keep_going, whole=True)  # ranges come before what the formula says
            raise
        tally.report()
        return result

    def _in_blocks(
        self,
        values: dict[str, Any],
        arrays: dict[str, Any],
        scales: dict[str, float],
        shape: tuple[int, ...],
        tally: Tally,
    ) -> np.ndarray[Any, Any]:
        result = np.empty(shape)
        iterate: Any = np.nditer  # its overloads differ between versions of numpy
        blocks = iterate(
            [*arrays.values(), result],
            flags=["external_loop", "buffered", "zerosize_ok"],
            op_flags=[["readonly"]] * len(arrays) + [["writeonly"]],
            order="C",
            buffersize=BLOCK,
        )
        offset = 0
        with blocks, np.errstate(divide="ignore", invalid="ignore"):
            for *inputs, out in blocks:
                tally.start(offset, shape, out.size)
                for name, value in zip(arrays, inputs, strict=True):
                    values[name] = self._block(name, value, scales.get(name), tally)
                out[...] = self.body(tally, **values)
                if tally.lost is not None:
                    out[tally.lost] = np.nan
                offset += out.size
        return result

    def _block(self, name: str, value: Any, scale: float | None, tally: Tally) -> Any:
        if scale is not None and scale != 1.0:
            value = value * scale
        reader = self.declaration.parameters[name].reader
        bad = None if reader is None else reader.check(value)
        if bad is None:
            return value
        if not tally.keep_going:
            raise _OutOfRange
        tally.refuse(bad.mask, f"{name} {bad.reason}")
        return np.where(bad.mask, np.nan, value)


class _OutOfRange(Exception):
    """A block holds a value out of range: the whole input is read again for the full report."""


def _only_registry(given: dict[str, Any]) -> Any:
    """Return the one other registry that all given quantities belong to, or None."""
    found = None
    for value in _parts(given.values()):
        if found is not None and found is not value._REGISTRY:
            return None
        found = value._REGISTRY
    return None if found is ureg else found


def _parts(values: Iterable[Any]) -> Iterator[Any]:
    """Every quantity given, also those in lists and tuples."""
    for value in values:
        if isinstance(value, pint.Quantity):
            yield value
        elif isinstance(value, (list, tuple)):
            yield from _parts(value)
