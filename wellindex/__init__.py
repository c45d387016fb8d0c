"""The well index of a real well in a coarse numerical grid, unit-safe."""

from wellindex.errors import (
    ArgumentsError,
    AssumptionWarning,
    BackflowWarning,
    CaseError,
    DomainError,
    ShapeError,
    UnitsError,
    WellIndexError,
)
from wellindex.index import well_index
from wellindex.radius.closed_form import equivalent_radius, equivalent_wellbore_radius
from wellindex.units.other_registries import define_units
from wellindex.units.registry import Quantity, ureg
from wellindex.units.systems import set_unit_system, unit_system

__version__ = "0.1.0"

__all__ = [
    "ArgumentsError",
    "AssumptionWarning",
    "BackflowWarning",
    "CaseError",
    "DomainError",
    "Quantity",
    "ShapeError",
    "UnitsError",
    "WellIndexError",
    "define_units",
    "equivalent_radius",
    "equivalent_wellbore_radius",
    "set_unit_system",
    "unit_system",
    "ureg",
    "well_index",
]
