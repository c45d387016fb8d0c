"""The unit system in force: which unit an answer comes in, and the site's air pressure."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from typing import Literal, NamedTuple, get_args

import numpy as np

from wellindex.errors import DomainError, UnitsError
from wellindex.units.definitions import OFFSET_UNITS
from wellindex.units.registry import Quantity, read_text, ureg

SystemName = Literal["metric", "oilfield", "si", "darcy"]
SYSTEMS: tuple[SystemName, ...] = get_args(SystemName)
STANDARD_ATMOSPHERE = 101325.0


class UnitSystem(NamedTuple):
    """A named set of units, with the air pressure that gauge pressures are measured from."""

    name: SystemName
    site_pressure: float


_notebook_choice = [UnitSystem("metric", STANDARD_ATMOSPHERE)]
_in_force: ContextVar[UnitSystem | None] = ContextVar("wellindex_unit_system", default=None)


def current() -> UnitSystem:
    """Return the unit system in force."""
    return _in_force.get() or _notebook_choice[0]


def _chosen(name: str, site_pressure: Quantity | str | None, otherwise: float) -> UnitSystem:
    for known in SYSTEMS:
        if known == name:
            given = site_pressure is not None
            return UnitSystem(known, _site_pressure(site_pressure) if given else otherwise)
    raise DomainError(f"unknown unit system {name!r}; one of {', '.join(SYSTEMS)}")


def _site_pressure(given: Quantity | str | None) -> float:
    if isinstance(given, str):
        given = ureg.Quantity(*read_text(given))
    if (
        not isinstance(given, Quantity)
        or np.ndim(given.magnitude)
        or given.dimensionality != ureg.pascal.dimensionality
        or OFFSET_UNITS & set(dict(given.unit_items()))
    ):
        raise UnitsError(
            "site_pressure needs one absolute pressure of our registry, or a text such as "
            f"'0.85 bar'; got {given!r}"
        )
    value = float(given.m_as("Pa"))
    if not 2e4 <= value <= 1.2e5:
        raise DomainError(
            f"site_pressure is the air pressure at the wellhead, 0.2 to 1.2 bar; got {given}"
        )
    return value


@contextmanager
def unit_system(
    name: SystemName, *, site_pressure: Quantity | str | None = None
) -> Iterator[UnitSystem]:
    """Answer in the units of one system inside a ``with`` block.

    Parameters
    ----------
    name : {"metric", "oilfield", "si", "darcy"}
        metric: m, mD, bar, cP, m3/day; oilfield: ft, mD, psi, cP, rb/day and stb/day;
        si: m, m2, Pa, Pa s, m3/s; darcy: cm, D, atm, cP, cm3/s.
    site_pressure : Quantity or str, pressure, optional
        Air pressure at the site, which turns psig and barg into absolute pressure. Default: the
        one in force, which is one standard atmosphere where none was ever given.

    Raises
    ------
    DomainError
        Unknown system, or a site pressure that no air has.

    Examples
    --------
    >>> from wellindex import equivalent_radius, unit_system
    >>> with unit_system("oilfield"):
    ...     r0 = equivalent_radius(dx="100 ft", dy="100 ft", kx="50 mD", ky="50 mD")
    >>> print(f"{r0:.3f}")
    19.851 ft
    """
    token = _in_force.set(_chosen(name, site_pressure, current().site_pressure))
    try:
        yield current()
    finally:
        _in_force.reset(token)


def set_unit_system(name: SystemName, *, site_pressure: Quantity | str | None = None) -> None:
    """Choose the unit system of a notebook or script; a library must not call this.

    Parameters
    ----------
    name : {"metric", "oilfield", "si", "darcy"}
        As for `unit_system`.
    site_pressure : Quantity or str, pressure, optional
        As for `unit_system`; default one standard atmosphere.

    Raises
    ------
    DomainError
        Unknown system, or a site pressure that no air has.

    Examples
    --------
    >>> from wellindex import set_unit_system
    >>> set_unit_system("metric")
    """
    _notebook_choice[0] = _chosen(name, site_pressure, STANDARD_ATMOSPHERE)
