"""What a well index in another code contains, and the conversion between two such numbers."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, TypedDict, Unpack

import numpy as np

from wellindex.errors import DomainError, UnitsError
from wellindex.rock import STANDARD_GRAVITY
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import called, reads
from wellindex.units.definitions import OFFSET_UNITS
from wellindex.units.reading import parse_unit
from wellindex.units.registry import Quantity, ureg

_Dimension = dict[str, float]

_FLAGS = (
    "two_pi",
    "viscosity",
    "formation_volume_factor",
    "mass",
    "head",
    "per_length",
    "skin_inside",
)

_DIMENSIONS: dict[str, _Dimension] = {
    "two_pi": {},
    "viscosity": kinds.VISCOSITY.dimension,
    "relative_permeability": {},
    "formation_volume_factor": kinds.VOLUME_FACTOR.dimension,
    "density": kinds.DENSITY.dimension,
    "gravity": {"[length]": 1.0, "[time]": -2.0},
    "length": kinds.LENGTH.dimension,
}


class Contents(TypedDict, total=False):
    """What a number may contain besides the well index."""

    viscosity: Quantity | str
    relative_permeability: Any
    formation_volume_factor: Any
    density: Quantity | str
    length: Quantity | str


@reads
@called("Convention")
def _read_contents(
    *,
    wi: kinds.WellIndex | None = None,
    number: kinds.Number | None = None,
    viscosity: kinds.Viscosity | None = None,
    relative_permeability: kinds.Fraction = 1.0,
    formation_volume_factor: kinds.LiquidVolumeFactor | None = None,
    density: kinds.Density | None = None,
    length: kinds.Length | None = None,
) -> dict[str, Any]:
    """Read what a conversion is given, in SI."""
    return {
        "wi": wi,
        "number": number,
        "two_pi": 2.0 * math.pi,
        "viscosity": viscosity,
        "relative_permeability": relative_permeability,
        "formation_volume_factor": formation_volume_factor,
        "density": density,
        "gravity": STANDARD_GRAVITY,
        "length": length,
    }


@dataclass(frozen=True)
class Convention:
    """What a number that a code calls its well index contains.

    The well index of this package contains 2 pi, the skin and the open length, and nothing of the
    fluid. Each field says where another number differs.

    Parameters
    ----------
    unit : str
        Unit of the number, such as "cP*rb/day/psi", "mD*ft", "stb/day/psi" or "m**2/day".
    two_pi : bool
        Whether it contains the factor 2 pi. Default True.
    viscosity : bool
        Whether it is divided by the viscosity (and holds the relative permeability).
    formation_volume_factor : bool
        Whether it is divided by the formation volume factor, for surface rates.
    mass : bool
        Whether it is multiplied by the density, for mass rates (kg/s/bar).
    head : bool
        Whether it multiplies a difference of head in place of pressure: a conductance (m2/day).
    per_length : bool
        Whether it is divided by the open length.
    skin_inside : bool
        Whether it contains the skin; if not, a table has skin and wellbore radius beside it.
    first_index : int
        Number of the first block along each axis, 0 or 1. Default 0.
    order : str
        Order of the block indices in a table: "ijk" or any other order of the three letters.
    sign : int
        1, or -1 where the code counts rates into the ground as positive.

    Raises
    ------
    UnitsError
        A unit whose dimension does not fit what the number contains, or a gauge unit; a field that
        is no bool.
    DomainError
        Fields that exclude each other: a surface volume is no mass. A first index, an order or a
        sign that is none.

    Examples
    --------
    >>> from wellindex import Convention, ureg
    >>> ours = ureg.Quantity(10.0, "cP*rb/day/psi")
    >>> field = Convention("stb/day/psi", viscosity=True, formation_volume_factor=True)
    >>> print(f"{field.number(ours, viscosity='0.8 cP', formation_volume_factor=1.25):.4f}")
    10.0000
    >>> without = Convention("mD*ft", two_pi=False)
    >>> print(f"{without.number(ours):.1f}")
    1412.1
    """

    unit: str
    two_pi: bool = True
    viscosity: bool = False
    formation_volume_factor: bool = False
    mass: bool = False
    head: bool = False
    per_length: bool = False
    skin_inside: bool = True
    first_index: int = 0
    order: str = "ijk"
    sign: int = 1

    def __post_init__(self) -> None:
        if self.first_index not in (0, 1) or self.sign not in (1, -1):
            raise DomainError("Convention(): first_index is 0 or 1, sign is 1 or -1")
        if sorted(self.order) != ["i", "j", "k"]:
            raise DomainError("Convention(): order holds each of i, j and k once")
        for name in _FLAGS:
            if not isinstance(getattr(self, name), bool):
                raise UnitsError(f"Convention(): {name} is True or False")
        if self.formation_volume_factor and self.mass:
            raise DomainError("Convention(): a number is per surface volume or per mass, not both")
        units = parse_unit(self.unit)
        if OFFSET_UNITS & set(dict(units)):
            raise UnitsError(
                f"Convention(): {self.unit!r} holds a unit with a zero of its own (a gauge "
                "pressure): a rate is per difference of pressure, write psi or bar"
            )
        given = dict(ureg.get_dimensionality(units))
        if given != self._dimension():
            needed = " ".join(f"{name}**{power:g}" for name, power in self._dimension().items())
            raise UnitsError(
                f"Convention(): a number that contains {self.words()} has the dimension {needed}; "
                f"{self.unit!r} does not"
            )

    def _powers(self) -> dict[str, float]:
        """Return how often the number contains each thing that the well index does not."""
        viscosity = -float(self.viscosity)
        return {
            "two_pi": float(self.two_pi) - 1.0,
            "viscosity": viscosity,
            "relative_permeability": -viscosity,
            "formation_volume_factor": -float(self.formation_volume_factor),
            "density": float(self.mass) + float(self.head),
            "gravity": float(self.head),
            "length": -float(self.per_length),
        }

    def _dimension(self) -> _Dimension:
        dimension = dict(kinds.WELL_INDEX.dimension)
        for name, power in self._powers().items():
            for base, exponent in _DIMENSIONS[name].items():
                dimension[base] = dimension.get(base, 0.0) + power * exponent
        return {base: exponent for base, exponent in dimension.items() if exponent}

    def words(self) -> str:
        """Say in words what the number contains.

        Examples
        --------
        >>> from wellindex import Convention
        >>> Convention("kg/s/bar", viscosity=True, mass=True).words()
        '2 pi, 1/viscosity, density, the whole open length'
        """
        parts = [
            "2 pi" if self.two_pi else "no 2 pi",
            "1/viscosity" if self.viscosity else "no viscosity",
        ]
        if self.formation_volume_factor:
            parts.append("1/formation volume factor")
        if self.mass:
            parts.append("density")
        if self.head:
            parts.append("density times gravity (head)")
        parts.append("per length" if self.per_length else "the whole open length")
        return ", ".join(parts)

    def number(self, wi: Quantity | str, **data: Unpack[Contents]) -> Any:
        """Return a well index of this package as a plain number in this convention.

        Parameters
        ----------
        wi : Quantity, a well index, any shape
            As `well_index` and ``Couplings.wi`` give it.
        viscosity, formation_volume_factor, density, length : Quantity or str, optional
            What the number contains and the well index does not; needed only then.
        relative_permeability : float, optional
            Counts where the number contains the viscosity; default 1.

        Returns
        -------
        float or array
            The number, in `unit`.

        Raises
        ------
        UnitsError
            Something that the number contains is not given; the message says what.

        Examples
        --------
        >>> from wellindex import Convention
        >>> per_bar = Convention("kg/s/bar", viscosity=True, mass=True)
        >>> print(f"{per_bar.number('1e-12 m**3', viscosity='0.1 cP', density='900 kg/m**3'):.4f}")
        0.9000
        """
        given = _read_contents(wi=wi, **data)
        return self.sign * given["wi"] * self._factor(self._powers(), given) / _si_value(self.unit)

    def well_index(self, number: Any, **data: Unpack[Contents]) -> Quantity:
        """Return the well index of this package behind a number in this convention.

        Parameters
        ----------
        number : float or array
            The number, in `unit`.
        **data
            As for `number`.

        Returns
        -------
        Quantity, a well index

        Raises
        ------
        UnitsError
            Something that the number contains is not given; the message says what.
        DomainError
            A negative number; a relative permeability of zero, which no number can be divided by.

        Examples
        --------
        >>> from wellindex import Convention
        >>> per_bar = Convention("kg/s/bar", viscosity=True, mass=True)
        >>> wi = per_bar.well_index(0.9, viscosity="0.1 cP", density="900 kg/m**3")
        >>> print(f"{wi.to('m**3'):.3e}")
        1.000e-12 m**3
        """
        given = _read_contents(number=number, **data)
        powers = {name: -power for name, power in self._powers().items()}
        si = self._unsigned(given["number"]) * _si_value(self.unit) * self._factor(powers, given)
        return as_quantity(kinds.WELL_INDEX, si)

    def convert(self, number: Any, to: Convention, **data: Unpack[Contents]) -> Any:
        """Return a number of this convention as one of another.

        Parameters
        ----------
        number : float or array
            In this convention's unit.
        to : Convention
            The other convention.
        **data
            As for `number`; needed only where one of the two contains it and the other does not.

        Returns
        -------
        float or array

        Raises
        ------
        UnitsError
            Something that one of the two contains, and the other does not, is not given.
        DomainError
            A negative number.

        Examples
        --------
        >>> from wellindex import Convention
        >>> per_psi = Convention("stb/day/psi", viscosity=True, formation_volume_factor=True)
        >>> metric = Convention("cP*m**3/day/bar")
        >>> number = per_psi.convert(2.0, metric, viscosity="0.8 cP", formation_volume_factor=1.25)
        >>> print(f"{number:.4f} {metric.unit}")
        4.6118 cP*m**3/day/bar
        """
        if not isinstance(to, Convention):
            raise UnitsError(f"convert(): to is a Convention, not {type(to).__name__}")
        given = _read_contents(number=number, **data)
        ours = self._powers()
        powers = {name: power - ours[name] for name, power in to._powers().items()}
        si = self._unsigned(given["number"]) * _si_value(self.unit) * self._factor(powers, given)
        return to.sign * si / _si_value(to.unit)

    def _unsigned(self, number: Any) -> Any:
        """Return a number as a positive index; refuse one with the sign against the convention."""
        unsigned = self.sign * number
        if np.any(unsigned < 0.0):
            sign = "positive" if self.sign > 0 else "negative"
            raise DomainError(
                "Convention(): 1 argument is wrong\n"
                f"  number: needs a well index, in this convention zero or {sign}"
            )
        return unsigned

    def per_index(self, data: dict[str, Any], length: float) -> float:
        """Return the number over the well index, both plain, from what it contains in SI."""
        contents = {"two_pi": 2.0 * math.pi, "gravity": STANDARD_GRAVITY, "length": length}
        given = {"relative_permeability": 1.0, **data, **contents}
        needed = {name: power for name, power in self._powers().items() if power}
        return float(self._factor(needed, given)) / _si_value(self.unit)

    def _factor(self, powers: dict[str, float], data: dict[str, Any]) -> Any:
        missing = [name for name, power in powers.items() if power and data[name] is None]
        if missing:
            raise UnitsError(
                f"a number that contains {self.words()} cannot be converted without "
                f"{' and '.join(missing)}: give {', '.join(name + '=' for name in missing)}"
            )
        factor: Any = 1.0
        for name, power in powers.items():
            if power < 0.0 and np.any(data[name] == 0.0):
                raise DomainError(f"{name} is zero: nothing can be divided by it")
            if power:
                factor = factor * data[name] ** power
        return factor


def _si_value(unit: str) -> float:
    return float(ureg.Quantity(1.0, parse_unit(unit)).to_base_units().magnitude)
