"""Teach another pint registry the surface volumes, so that answers can come back in it."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import pint

from wellindex.errors import UnitsError
from wellindex.units.definitions import FOR_OTHER_REGISTRIES, REFERENCE_VALUES


def _names(definition: str) -> list[str]:
    left, *rest = (part.strip() for part in definition.split(";")[0].split("="))
    return [left, *rest[1:]]


def define_units(registry: pint.UnitRegistry[Any]) -> None:
    """Define surface volumes and the trade's pressures in a pint registry of your own.

    Parameters
    ----------
    registry : pint.UnitRegistry
        Gets [standard_volume] with sm3, scf, Mscf, MMscf, stb, Mstb, MMstb; rb and rm3; psia,
        bara, psig, barg. What it defines under these names already, with the same value, is left
        alone. Call it once, before such a name is first used there.

    Raises
    ------
    UnitsError
        The argument is no pint registry, or gives one of the names another value.

    Examples
    --------
    >>> import pint
    >>> from wellindex import define_units
    >>> registry = pint.UnitRegistry()
    >>> define_units(registry)
    >>> print(f"{registry.Quantity(1, 'Mscf').to('sm3').magnitude:.4f}")
    28.3168
    """
    if isinstance(registry, pint.registry.ApplicationRegistry):
        registry = registry.get()
    getattr(registry, "Quantity", None)  # a registry that loads when first used loads here
    if not isinstance(registry, pint.registry.GenericUnitRegistry):
        raise UnitsError(f"define_units needs a pint.UnitRegistry, not {type(registry).__name__}")
    known = set(registry)
    _refuse(name for name in REFERENCE_VALUES if name in known and not _agrees(registry, name))
    for line in FOR_OTHER_REGISTRIES.splitlines():
        if line and _names(line)[0] not in known:
            registry.define(_without(line, known))
    # A name that was read as something else before is still read so: say it.
    _refuse(name for name in REFERENCE_VALUES if not _agrees(registry, name))


def _refuse(names: Iterable[str]) -> None:
    wrong = ", ".join(names)
    if wrong:
        raise UnitsError(
            f"this registry gives {wrong} another value than the trade: call define_units before "
            "these names are used, on a registry without them"
        )


def _without(line: str, known: set[str]) -> str:
    """Drop the names of a definition that the registry has taken."""
    definition, *offset = line.split(";")
    left, value, *names = (part.strip() for part in definition.split("="))
    free = [name for name in names if name not in known]
    return ";".join([" = ".join([left, value, *free]), *offset])


def _agrees(registry: Any, name: str) -> bool:
    value, unit = REFERENCE_VALUES[name]
    try:
        converted = float(registry.Quantity(1, name).m_as(unit))
    except pint.PintError:
        return False
    return abs(converted / value - 1.0) < 1e-9
