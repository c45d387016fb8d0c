"""Read one given value of one kind into SI: from our registry, another one, text or a number."""

from __future__ import annotations

import numbers
from decimal import Decimal
from typing import Any, NamedTuple

import numpy as np
import pint

from wellindex.errors import DomainError, ShapeError, UnitsError, WellIndexError
from wellindex.units.definitions import (
    GAUGE_UNITS,
    MISTAKEN_ELSEWHERE,
    OFFSET_UNITS,
    SURFACE_NAMES,
)
from wellindex.units.elementwise import greatest, least
from wellindex.units.kinds import Either, Given, Kind
from wellindex.units.registry import read_text, ureg
from wellindex.units.systems import STANDARD_ATMOSPHERE, current

OUR_QUANTITY = ureg.Quantity
BARREL = 0.158987294928
ANGLES = frozenset({"radian", "degree"})
_REMEMBERED = 1024
_DEEPEST_LIST = 5
_OWN_ZERO = "its unit has a zero of its own: write one without"
_NEVER_NUMBERS = (numbers.Complex, str, bytes, dict, set, pint.Quantity)


class Problem(Exception):
    """One argument that cannot be used: what is needed, what was given, the remedy."""

    def __init__(self, error: type[WellIndexError], needed: str, given: str, remedy: str) -> None:
        super().__init__(needed)
        self.error = error
        self.needed = needed
        self.given = given
        self.remedy = remedy


class Factor(NamedTuple):
    """The SI value of one unit; `units` keeps the identity that the memory goes by."""

    units: Any
    si: float
    registry: Any


class Bad(NamedTuple):
    """Elements of an array outside the range of their kind."""

    mask: Any
    reason: str


def shown(value: Any) -> str:
    """Return what was given, short enough for a message."""
    if isinstance(value, pint.Quantity) and np.ndim(value.magnitude) == 0:
        value = f"{value.magnitude} {value.units}".rstrip()
    text = " ".join(repr(value).split())
    return text if len(text) <= 70 else text[:67] + "..."


def _plain_remedy(kind: Kind) -> str:
    system = current().name
    return f"give a quantity or text with its unit, such as '... {kind.unit(system)}'"


def _wrong_dimension(kind: Kind, units: Any, text: str) -> Problem:
    names = set(dict(units))
    remedy = "use a unit such as " + " or ".join(dict.fromkeys((kind.metric, kind.oilfield)))
    if names & {"darcy", "millidarcy"} and "[time]" in kind.dimension:
        remedy = "D is darcy here; write 'day' for a day"
    elif "[standard_volume]" in kind.dimension and "[length]" not in kind.dimension:
        remedy += "; a surface volume is not a reservoir volume"
    elif "reservoir" in kind.name:
        remedy += "; a formation volume factor turns surface into reservoir volumes"
    elif "permeability" in kind.name:
        remedy += "; permeability_from_conductivity turns a hydraulic conductivity into one"
    for name in names & set(MISTAKEN_ELSEWHERE):
        remedy = MISTAKEN_ELSEWHERE[name]
    return Problem(UnitsError, kind.name, text, remedy)


def _check_names(kind: Kind, units: Any, registry: Any, text: str) -> None:
    names = set(dict(units))
    for name in names & set(MISTAKEN_ELSEWHERE):
        raise Problem(UnitsError, kind.name, text, MISTAKEN_ELSEWHERE[name])
    for name in names & SURFACE_NAMES:
        if "[standard_volume]" not in dict(registry.get_dimensionality(name)):
            raise Problem(
                UnitsError,
                kind.name,
                text,
                f"that registry makes {name!r} a volume at reservoir conditions: leave it "
                "undefined there and call wellindex.define_units(registry) once",
            )
    roots = {root for name in names for _, root, _ in registry.parse_unit_name(name)}
    if "barrel" in roots:
        cubic_metres = registry.convert(1.0, registry.UnitsContainer({"barrel": 1}), "meter**3")
        if abs(cubic_metres / BARREL - 1.0) > 1e-6:
            raise Problem(
                UnitsError,
                kind.name,
                text,
                f"that registry's barrel holds {cubic_metres:.5f} m3; the trade's holds 42 "
                "gallons: write 'oil_barrel' there, or 'rb' or 'stb' here",
            )


def _check_zero(kind: Kind, units: Any, text: str) -> None:
    names = set(dict(units))
    if any(name.startswith("delta_") for name in names) and kind.measured_from_zero:
        raise Problem(UnitsError, kind.name, text, "this is a difference of two, not a value")
    if names & OFFSET_UNITS and kind.measured_from_zero is False:
        raise Problem(UnitsError, kind.name, text, "a difference has no gauge: write psi or bar")


def parse_unit(text: str) -> Any:
    """Return the unit that a guarded text names; raise `UnitsError`."""
    if not isinstance(text, str):
        raise UnitsError(f"a unit is a text such as 'mD*ft'; got {shown(text)}")
    number, units = read_text("1 " + text)
    if number != 1.0 or units is None:
        raise UnitsError(f"{text!r} is not a unit")
    return units


class KindReader:
    """Reads values of one kind; remembers the SI factor of each unit it has accepted."""

    def __init__(self, kind: Kind) -> None:
        self.kind = kind
        self.low = kind.range.low
        self.high = kind.range.high
        self.ours: dict[int, Factor] = {}
        self.others: dict[int, Factor] = {}
        self.by_value: dict[tuple[Any, Any], float] = {}

    def read(self, value: Any) -> Any:
        """Return `value` in SI, unchecked against the range; raise `Problem` otherwise."""
        if isinstance(value, pint.Quantity):
            magnitude = value.magnitude
            if type(magnitude) is not float:
                magnitude = _floats(magnitude, self.kind, value)
            return self._in_si(magnitude, value._units, value._REGISTRY, value)
        if isinstance(value, str):
            return self._text(value)
        if isinstance(value, (list, tuple)):
            return self._sequence(value, 1)
        return self._number(value, value)

    def read_si(self, value: Any) -> Any:
        """Return a number or array that is given in SI, without a unit."""
        try:
            return _floats(value, self.kind, value)
        except Problem as problem:
            problem.remedy = problem.remedy.replace(
                _plain_remedy(self.kind), f"give a plain number in {self.kind.si}"
            )
            raise

    def raw(self, value: Any) -> tuple[np.ndarray[Any, Any], float] | None:
        """Return a float array and its SI factor, unscaled, or None where that is not enough."""
        if not isinstance(value, pint.Quantity) or type(value.magnitude) is not np.ndarray:
            return None
        factor = self._factor(value._units, value._REGISTRY, value)
        if factor is None or value.magnitude.dtype != np.float64:
            return None
        return value.magnitude, factor.si

    def check(self, value: Any) -> Bad | None:
        """Return the elements of an SI value outside the range, or None."""
        if isinstance(value, float):
            fine = self.low < value < self.high
            return None if fine else Bad(np.True_, self.reason)
        if self.low < least(value) and greatest(value) < self.high:
            return None
        return Bad(~((value > self.low) & (value < self.high)), self.reason)

    @property
    def reason(self) -> str:
        """Say what a value of this kind must be."""
        return f"must be {self.kind.range.words}"

    def _text(self, value: str) -> Any:
        try:
            number, units = read_text(value)
        except UnitsError as error:
            raise Problem(UnitsError, self.kind.name, shown(value), str(error)) from None
        if units is None:
            return self._number(number, value)
        return self._in_si(number, units, ureg, value)

    def _in_si(self, magnitude: Any, units: Any, registry: Any, given: Any) -> Any:
        factor = self._factor(units, registry, given)
        if factor is not None:
            return magnitude * factor.si
        (name, *_others) = dict(units)
        if name in GAUGE_UNITS and registry.convert(0, units, self.kind.si) == STANDARD_ATMOSPHERE:
            return magnitude * GAUGE_UNITS[name] + current().site_pressure
        return registry.convert(magnitude, units, self.kind.si)

    def _factor(self, units: Any, registry: Any, given: Any) -> Factor | None:
        """Return the SI factor of a unit, or None where it has a zero of its own."""
        memory = self.ours if registry is ureg else self.others
        known = memory.get(id(units))
        if known is not None and known.units is units and known.registry is registry:
            return known
        recalled = self.recall(units, registry)
        if recalled is not None:
            return recalled
        self._check_dimension(units, registry, given)
        try:
            zero, one = (float(registry.convert(x, units, self.kind.si)) for x in (0, 1))
        except (pint.PintError, ArithmeticError) as error:
            raise Problem(UnitsError, self.kind.name, shown(given), str(error)) from None
        if zero != 0.0:
            if not self.kind.measured_from_zero:
                raise Problem(UnitsError, self.kind.name, shown(given), _OWN_ZERO)
            return None
        if len(self.by_value) >= _REMEMBERED:
            self.by_value.clear()
        self.by_value[registry, tuple(units.unit_items())] = one
        return self._remember(memory, Factor(units, one, registry))

    def _remember(self, memory: dict[int, Factor], factor: Factor) -> Factor:
        if len(memory) >= _REMEMBERED:
            memory.clear()
        memory[id(factor.units)] = factor
        return factor

    def recall(self, units: Any, registry: Any = ureg) -> Factor | None:
        """Return the factor of a unit of the same value as one seen before, or None.

        A call looks for a unit's identity first; the value serves units made afresh by
        arithmetic (150.0 * ureg.ft), each an object of its own.
        """
        si = self.by_value.get((registry, tuple(units.unit_items())))
        if si is None:
            return None
        memory = self.ours if registry is ureg else self.others
        return self._remember(memory, Factor(units, si, registry))

    def _check_dimension(self, units: Any, registry: Any, given: Any) -> None:
        try:
            dimension = dict(registry.get_dimensionality(units))
        except (pint.PintError, AttributeError, KeyError) as error:
            raise Problem(UnitsError, self.kind.name, shown(given), str(error)) from None
        if dimension != self.kind.dimension:
            raise _wrong_dimension(self.kind, units, shown(given))
        angle = self.kind.si == "radian"
        if not self.kind.dimension and angle != bool(ANGLES & set(dict(units))):
            meant = "a plain number is no angle: write degree or radian"
            remedy = meant if angle else "an angle is not what is meant here"
            raise Problem(UnitsError, self.kind.name, shown(given), remedy)
        if registry is not ureg:
            _check_names(self.kind, units, registry, shown(given))
        _check_zero(self.kind, units, shown(given))

    def _sequence(self, value: Any, depth: int) -> np.ndarray[Any, Any]:
        if depth > _DEEPEST_LIST:
            raise Problem(ShapeError, self.kind.name, "lists in lists in lists", "give an array")
        if not value:
            raise Problem(ShapeError, self.kind.name, "an empty sequence", "give a value")
        items = [
            self._sequence(item, depth + 1)
            if isinstance(item, (list, tuple))
            else np.asarray(self.read(item))
            for item in value
        ]
        if len({item.shape for item in items}) > 1:
            raise Problem(ShapeError, self.kind.name, shown(value), "its parts differ in shape")
        return np.stack(items)

    def _number(self, value: Any, given: Any) -> Any:
        number = _floats(value, self.kind, given)
        plain = self.kind.plain
        if plain is None:
            raise Problem(UnitsError, self.kind.name, shown(given), _plain_remedy(self.kind))
        if self.kind.dimension and not np.all((number > plain.low) & (number < plain.high)):
            remedy = f"a plain number must be {plain.words}; otherwise give its unit"
            raise Problem(DomainError, self.kind.name, shown(given), remedy)
        return number


class EitherReader(KindReader):
    """Reads a value of one of two kinds into a `Given`; the dimension decides."""

    def __init__(self, either: Either) -> None:
        super().__init__(either.first)
        self.either = either  # kept: readers go by the identity of what they read
        self.readers = (KindReader(either.first), KindReader(either.second))

    def read(self, value: Any) -> Any:
        """Return a `Given`; raise the first kind's `Problem` where neither fits."""
        problems = []
        for reader in self.readers:
            try:
                return Given(reader.read(value), reader.kind)
            except Problem as problem:
                problems.append(problem)
        first, second = problems
        first.needed = f"{first.needed} or {second.needed}"
        raise first

    def raw(self, value: Any) -> None:
        """Return None: a `Given` is never left unscaled."""

    def check(self, value: Any) -> Bad | None:
        """Check the value inside a `Given`."""
        return self.readers[0].check(value.value)


def _floats(value: Any, kind: Kind, given: Any) -> Any:
    """Return a float or a float64 array; refuse everything that only looks like one."""

    def refused(remedy: str) -> Problem:
        return Problem(UnitsError, kind.name, shown(given), remedy)

    if isinstance(value, (bool, np.bool_)):
        raise refused("a boolean is no quantity")
    if isinstance(value, (numbers.Real, Decimal)):
        try:
            return float(value)
        except OverflowError:
            raise refused("the number is too large") from None
    if isinstance(value, np.ma.MaskedArray):
        raise refused("fill the masked elements first: a mask would be lost")
    if value is None or isinstance(value, _NEVER_NUMBERS):
        raise refused(_plain_remedy(kind))
    try:
        array = np.asarray(value)
    except (TypeError, ValueError) as error:
        raise refused(f"it is no array: {error}") from None
    if array.dtype.kind not in "iuf":
        raise refused(f"an array of real numbers is needed, not of {array.dtype}")
    floats = array.astype(np.float64, copy=False)
    return float(floats) if floats.ndim == 0 else floats
