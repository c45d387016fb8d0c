"""Turn an SI value into an answer: in the unit system in force, or in the caller's registry."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np
import pint

from wellindex.errors import UnitsError
from wellindex.units.kinds import Kind
from wellindex.units.registry import Quantity, ureg
from wellindex.units.systems import SystemName, current

_new = object.__new__
_QuantityClass = ureg.Quantity


class _Unit(NamedTuple):
    units: Any
    si: float
    array: Any


_known: dict[tuple[Kind, SystemName], _Unit] = {}


def _unit(kind: Kind, system: SystemName) -> _Unit:
    key = (kind, system)
    if key not in _known:
        units = ureg.parse_units(kind.unit(system), as_delta=False)._units
        si = float(ureg.convert(1.0, units, kind.si))
        # Arrays divide faster by an array without dimensions than by a float.
        _known[key] = _Unit(units, si, np.array(si))
    return _known[key]


def as_quantity(kind: Kind, value: Any, system: SystemName | None = None) -> Quantity:
    """Return an SI value as a quantity in the unit that `system` gives its kind."""
    name = system or current().name
    known = _known.get((kind, name)) or _unit(kind, name)
    if kind.measured_from_zero and kind.si == "kelvin":
        return _QuantityClass(value, "kelvin").to(known.units)
    # What Quantity(value, unit) does after its parsing and copying, which cost five times more.
    answer = _new(_QuantityClass)
    answer._magnitude = value / (known.si if value.__class__ is float else known.array)
    answer._units = known.units
    return answer


def number_in(kind: Kind, value: Any, system: SystemName | None = None) -> tuple[Any, str]:
    """Return an SI value as a plain number, and the unit it is in."""
    name = system or current().name
    answer = as_quantity(kind, value, name)
    # The si units are spelled for every registry; a header wants their symbols.
    return answer.magnitude, f"{answer.units:~C}" if name == "si" else kind.unit(name)


def in_other_registry(kind: Kind, value: Any, registry: Any) -> Any:
    """Return an SI value as a quantity of another pint registry, in SI units."""
    if "standard_cubic_metre" in kind.si:
        try:
            fits = registry.get_dimensionality(kind.si) == kind.dimension
        except pint.PintError:
            fits = False
        if not fits:
            raise UnitsError(
                "the answer holds a surface volume, which the registry of the arguments does not "
                "know: call wellindex.define_units(registry) once"
            )
    return registry.Quantity(value, kind.si)


__all__ = ["as_quantity", "in_other_registry", "number_in"]
