"""The well index of a real well in a coarse numerical grid, unit-safe.

Screening calculations: not for well control, nor a substitute for licensed engineering and local
regulation.
"""

from wellindex.convention import Convention
from wellindex.coupling import couple
from wellindex.couplings import Couplings
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
from wellindex.fluid import Liquid
from wellindex.index import productivity_index, well_index
from wellindex.profile import RadialProfile, radial_profile
from wellindex.radius.closed_form import equivalent_radius, equivalent_wellbore_radius
from wellindex.radius.voronoi import voronoi_equivalent_radius
from wellindex.recognise import Comparison, Match, compare, recognise
from wellindex.rock import Permeability, permeability_from_conductivity
from wellindex.space.crossing import Crossings, cross
from wellindex.space.grid import TensorGrid
from wellindex.space.hexahedral import HexahedralGrid
from wellindex.space.path import Path
from wellindex.space.survey import Survey
from wellindex.state import WellState
from wellindex.units.other_registries import define_units
from wellindex.units.registry import Quantity, ureg
from wellindex.units.systems import set_unit_system, unit_system
from wellindex.well import Well
from wellindex.workings import Workings, workings

__version__ = "0.1.0"

__all__ = [
    "ArgumentsError",
    "AssumptionWarning",
    "BackflowWarning",
    "CaseError",
    "Comparison",
    "Convention",
    "Couplings",
    "Crossings",
    "DomainError",
    "HexahedralGrid",
    "Liquid",
    "Match",
    "Path",
    "Permeability",
    "Quantity",
    "RadialProfile",
    "ShapeError",
    "Survey",
    "TensorGrid",
    "UnitsError",
    "Well",
    "WellIndexError",
    "WellState",
    "Workings",
    "compare",
    "couple",
    "cross",
    "define_units",
    "equivalent_radius",
    "equivalent_wellbore_radius",
    "permeability_from_conductivity",
    "productivity_index",
    "radial_profile",
    "recognise",
    "set_unit_system",
    "unit_system",
    "ureg",
    "voronoi_equivalent_radius",
    "well_index",
    "workings",
]
