"""The kinds of argument and answer: dimension, units per system, and range of validity.

A formula annotates its arguments with these; the boundary reads the annotation once, at import.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Annotated, Any

from wellindex.units.systems import SystemName

_JUST_BELOW_ZERO = -5e-324
_JUST_ABOVE_ONE = math.nextafter(1.0, 2.0)


@dataclass(frozen=True)
class Range:
    """An open interval: `low` < value < `high`."""

    low: float
    high: float
    words: str


ANY = Range(-math.inf, math.inf, "finite")
POSITIVE = Range(0.0, math.inf, "positive and finite")
NON_NEGATIVE = Range(_JUST_BELOW_ZERO, math.inf, "zero or positive, and finite")
FRACTION = Range(_JUST_BELOW_ZERO, _JUST_ABOVE_ONE, "between 0 and 1")
PART = Range(0.0, _JUST_ABOVE_ONE, "above 0 and at most 1")


@dataclass(frozen=True, eq=False)
class Kind:
    """What one argument or answer is.

    Parameters
    ----------
    name : str
        In words, with its article: "a length".
    dimension : dict of str to float
        Exponents of [length], [mass], [time], [temperature], [standard_volume].
    si : str
        Coherent SI unit, in names that every pint registry knows.
    metric, oilfield, darcy : str
        Units of answers in the other systems.
    range : Range
        Values for which formulas hold.
    plain : Range or None
        Plain numbers accepted for it; None where a unit must be given.
    measured_from_zero : bool or None
        True for an absolute pressure or temperature, False for a difference of two,
        None where the question does not arise.
    """

    name: str
    dimension: dict[str, float]
    si: str
    metric: str
    oilfield: str
    darcy: str
    range: Range = POSITIVE
    plain: Range | None = None
    measured_from_zero: bool | None = None

    def unit(self, system: SystemName) -> str:
        """Return the unit of an answer of this kind in `system`."""
        return str(getattr(self, system))


@dataclass(frozen=True, eq=False)
class Either:
    """An argument of one of two kinds; the body receives a `Given`."""

    first: Kind
    second: Kind


@dataclass(frozen=True)
class Given:
    """An SI value together with the kind that it was given as."""

    value: Any
    kind: Kind


def plain(value: Any) -> Any:
    """Return the bare SI value of a `Given`, or the value itself."""
    return value.value if isinstance(value, Given) else value


_LENGTH = {"[length]": 1.0}
_VOLUME = {"[length]": 3.0}
_SURFACE = {"[standard_volume]": 1.0}
_PRESSURE = {"[mass]": 1.0, "[length]": -1.0, "[time]": -2.0}


def _dimensionless(name: str, values: Range) -> Kind:
    none = "dimensionless"
    return Kind(name, {}, none, none, none, none, values, plain=ANY)


def _length(name: str, values: Range) -> Kind:
    return Kind(name, _LENGTH, "meter", "m", "ft", "cm", values)


def _pressure(name: str, values: Range, measured_from_zero: bool) -> Kind:
    units = ("pascal", "bar", "psi", "atm")
    return Kind(name, _PRESSURE, *units, values, measured_from_zero=measured_from_zero)


def _volume_factor(name: str, plain: Range | None) -> Kind:
    units = ("meter**3/standard_cubic_metre", "rm3/sm3", "rb/stb", "cm**3/scm3")
    return Kind(name, _VOLUME | {"[standard_volume]": -1.0}, *units, POSITIVE, plain)


LENGTH = _length("a length", POSITIVE)
COORDINATE = _length("a position", ANY)
VOLUME = Kind("a volume", {"[length]": 3.0}, "meter**3", "m**3", "ft**3", "cm**3")
PERMEABILITY = Kind("a permeability", {"[length]": 2.0}, "meter**2", "mD", "mD", "D", NON_NEGATIVE)
VISCOSITY = Kind(
    "a viscosity",
    {"[mass]": 1.0, "[length]": -1.0, "[time]": -1.0},
    "pascal*second",
    "cP",
    "cP",
    "cP",
)
ANGLE = Kind("an angle", {}, "radian", "degree", "degree", "degree", ANY)
INCLINATION = Kind(
    "an inclination",
    {},
    "radian",
    "degree",
    "degree",
    "degree",
    Range(_JUST_BELOW_ZERO, math.nextafter(math.pi, 4.0), "between 0 and 180 degrees"),
)
CURVATURE = Kind(
    "a dogleg severity",
    {"[length]": -1.0},
    "radian/meter",
    "degree/m",
    "degree/ft",
    "degree/cm",
    NON_NEGATIVE,
)
PRESSURE = _pressure("an absolute or gauge pressure", NON_NEGATIVE, True)
PRESSURE_DIFFERENCE = _pressure("a pressure difference", ANY, False)
TEMPERATURE = Kind(
    "a temperature",
    {"[temperature]": 1.0},
    "kelvin",
    "degC",
    "degF",
    "K",
    measured_from_zero=True,
)
TIME = Kind("a time", {"[time]": 1.0}, "second", "day", "day", "s")
RESERVOIR_RATE = Kind(
    "a reservoir rate (m3/day, rb/day)",
    _VOLUME | {"[time]": -1.0},
    "meter**3/second",
    "rm3/day",
    "rb/day",
    "cm**3/s",
    ANY,
)
SURFACE_RATE = Kind(
    "a surface rate (sm3/day, stb/day)",
    _SURFACE | {"[time]": -1.0},
    "standard_cubic_metre/second",
    "sm3/day",
    "stb/day",
    "scm3/s",
    ANY,
)
VOLUME_FACTOR = _volume_factor("a formation volume factor (rm3/sm3, rb/stb, rb/Mscf)", None)
LIQUID_VOLUME_FACTOR = _volume_factor(
    "a formation volume factor (rm3/sm3, rb/stb, or a number between 0.5 and 10)",
    Range(math.nextafter(0.5, 0.0), math.nextafter(10.0, 11.0), "between 0.5 and 10"),
)
DENSITY = Kind(
    "a density",
    {"[mass]": 1.0, "[length]": -3.0},
    "kilogram/meter**3",
    "kg/m**3",
    "lbm/ft**3",
    "g/cm**3",
)
COMPRESSIBILITY = Kind(
    "a compressibility",
    {"[mass]": -1.0, "[length]": 1.0, "[time]": 2.0},
    "1/pascal",
    "1/bar",
    "1/psi",
    "1/atm",
    NON_NEGATIVE,
)
HYDRAULIC_CONDUCTIVITY = Kind(
    "a hydraulic conductivity",
    {"[length]": 1.0, "[time]": -1.0},
    "meter/second",
    "m/day",
    "ft/day",
    "cm/s",
    NON_NEGATIVE,
)
WELL_INDEX = Kind(
    "a well index",
    _VOLUME,
    "meter**3",
    "cP*m**3/day/bar",
    "cP*rb/day/psi",
    "cP*cm**3/s/atm",
    NON_NEGATIVE,
)
PRODUCTIVITY_INDEX = Kind(
    "a productivity index",
    {"[standard_volume]": 1.0, "[time]": 1.0, "[mass]": -1.0, "[length]": 1.0},
    "standard_cubic_metre/second/pascal",
    "sm3/day/bar",
    "stb/day/psi",
    "scm3/s/atm",
    NON_NEGATIVE,
)

# One annotation cannot type a formula's body (floats) and its caller (quantities) at once: to a
# type checker each is Any, while names, defaults and the answer stay checked.
Length = Annotated[Any, LENGTH]
Coordinate = Annotated[Any, COORDINATE]
Angle = Annotated[Any, ANGLE]
Inclination = Annotated[Any, INCLINATION]
Permeability = Annotated[Any, PERMEABILITY]
TensorPermeability = Annotated[
    Any, Kind("a permeability tensor", {"[length]": 2.0}, "meter**2", "mD", "mD", "D", ANY)
]
Viscosity = Annotated[Any, VISCOSITY]
Pressure = Annotated[Any, PRESSURE]
PressureDifference = Annotated[Any, PRESSURE_DIFFERENCE]
Temperature = Annotated[Any, TEMPERATURE]
Time = Annotated[Any, TIME]
ReservoirRate = Annotated[Any, RESERVOIR_RATE]
SurfaceRate = Annotated[Any, SURFACE_RATE]
Rate = Annotated[Any, Either(RESERVOIR_RATE, SURFACE_RATE)]
VolumeFactor = Annotated[Any, VOLUME_FACTOR]
LiquidVolumeFactor = Annotated[Any, LIQUID_VOLUME_FACTOR]
Density = Annotated[Any, DENSITY]
Compressibility = Annotated[Any, COMPRESSIBILITY]
HydraulicConductivity = Annotated[Any, HYDRAULIC_CONDUCTIVITY]
WellIndex = Annotated[Any, WELL_INDEX]
ProductivityIndex = Annotated[Any, PRODUCTIVITY_INDEX]
Skin = Annotated[Any, _dimensionless("a skin (a plain number)", ANY)]
Number = Annotated[Any, _dimensionless("a plain number", ANY)]
Fraction = Annotated[Any, _dimensionless("a fraction", FRACTION)]
Sector = Annotated[Any, _dimensionless("the fraction of a full circle that flows", PART)]
Scale = Annotated[Any, _dimensionless("a factor (a plain number)", NON_NEGATIVE)]
