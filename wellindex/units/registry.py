"""Our unit registry: the trade's symbols, no prefixes, surface volumes apart, safe to pickle."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING, Any

import pint
import pint.registry

from wellindex.errors import UnitsError
from wellindex.units import text
from wellindex.units.definitions import ALL

SYMBOLS = "~C"
DISPLAY = f".6g{SYMBOLS}"
_UNIT_FORMATS = frozenset("~CDHLP")


def _revive_quantity(magnitude: Any, units: dict[str, float]) -> Quantity:
    return ureg.Quantity(magnitude, ureg.UnitsContainer(units))


def _revive_unit(units: dict[str, float]) -> Any:
    return ureg.Unit(ureg.UnitsContainer(units))


def _revive_registry() -> Registry:
    return ureg


class Quantity(pint.registry.Quantity[Any]):
    """A number, or an array, with its unit, in the registry of this package."""

    if not TYPE_CHECKING:  # the signature that a type checker sees is pint's

        def __new__(cls, *args: Any, **kwargs: Any) -> Any:
            # pint would give a class without a registry its application registry.
            if cls is Quantity:
                return ureg.Quantity(*args, **kwargs)
            return super().__new__(cls, *args, **kwargs)

    def __format__(self, spec: str) -> str:
        """Show symbols, also where `spec` speaks of the number alone, as ".3f" does."""
        return super().__format__(spec if not spec or _UNIT_FORMATS & set(spec) else spec + SYMBOLS)

    def __reduce__(self) -> tuple[Any, ...]:
        return _revive_quantity, (self.magnitude, dict(self.unit_items()))


class Unit(pint.registry.Unit):
    """A unit in the registry of this package."""

    def __reduce__(self) -> tuple[Any, ...]:
        return _revive_unit, (dict(self._units),)


class UnknownName(UnitsError, AttributeError):
    """An attribute that is no unit: `hasattr` expects an `AttributeError`."""


class Registry(pint.registry.GenericUnitRegistry[Quantity, Unit]):
    """The registry of this package; ``wellindex.ureg`` is its one instance."""

    Quantity = Quantity
    Unit = Unit

    def __init__(self) -> None:
        self._known_names: frozenset[str] = frozenset()
        super().__init__(
            filename=None,
            on_redefinition="raise",
            autoconvert_offset_to_baseunit=True,
            separate_format_defaults=True,
        )
        self.preprocessors = [self._guard]
        self.formatter.default_format = DISPLAY

    def names(self) -> frozenset[str]:
        """Return every unit name and symbol that may stand in a unit string."""
        return self._known_names or self._read_names()

    def _read_names(self) -> frozenset[str]:
        self._known_names = frozenset(self) | {"dimensionless"}
        return self._known_names

    def define(self, definition: Any) -> None:
        """Add a unit of your own, as in ``ureg.define("furlong = 660 * foot")``."""
        super().define(definition)
        self._known_names = frozenset()

    def __getattr__(self, item: str) -> Any:
        try:
            return super().__getattr__(item)
        except UnitsError as error:
            raise UnknownName(str(error)) from None

    def _guard(self, string: str) -> str:
        if string == "":
            return string  # no unit: as in ``ratio.to("")``
        return text.guard(string, self.names)

    def __deepcopy__(self, memo: dict[int, Any]) -> Any:
        return self

    def __reduce__(self) -> tuple[Any, ...]:
        return _revive_registry, ()


def _built() -> Registry:
    # Definitions loaded after the constructor spare pint's table of equivalent units, half the
    # time of the import.
    registry = Registry()
    registry.load_definitions([line for line in ALL.splitlines() if line])
    return registry


ureg = _built()


@lru_cache(maxsize=4096)
def read_text(string: str) -> tuple[float, Any]:
    """Return the number and the units of "150 ft"; the units of a bare number are None."""
    text.guard(string, ureg.names)
    number, unit = text.split_number(string)
    return number, ureg.parse_units(unit, as_delta=False)._units if unit else None
