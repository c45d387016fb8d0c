"""Calls that a type checker must accept, and the types it must find."""

from collections.abc import Callable
from decimal import Decimal
from typing import Any, assert_type

import numpy as np
import pint

from wellindex import (
    ArgumentsError,
    Quantity,
    define_units,
    equivalent_radius,
    equivalent_wellbore_radius,
    set_unit_system,
    unit_system,
    ureg,
    well_index,
)

wi = well_index(
    dx="150 ft",
    dy=ureg.Quantity(150.0, "ft"),
    dz=ureg.Quantity(np.array([20.0, 30.0]), "ft"),
    kx=["120 mD", "80 mD"],
    ky=pint.UnitRegistry().Quantity(120.0, "millidarcy"),
    kz="12 mD",
    rw=("0.354 ft", "0.3 ft"),
    skin=2,
    direction="z",
    length=None,
    placement="centre",
    invalid="nan",
)
assert_type(wi, Quantity)
assert_type(wi.to("cP*rb/day/psi"), Quantity)
number: float = wi.m_as("mD*ft")
per_cent = well_index(
    dx="1 m", dy="1 m", dz="1 m", kx="1 D", ky="1 D", kz="1 D", rw="1 mm", skin=Decimal(2)
)

r0 = equivalent_radius(dx="1 m", dy="1 m", kx="1 mD", ky="1 mD", placement="corner")
assert_type(r0, Quantity)
assert_type(equivalent_wellbore_radius(rw=r0, kx="1 mD", ky="1 mD"), Quantity)
of_ours: Quantity = ureg.Quantity(1.0, "ft")
of_class: Quantity = Quantity(1.0, "ft")

in_si: Callable[..., Any] = equivalent_radius.si
hot: float = equivalent_radius.si(dx=1.0, dy=np.ones(3), kx=1e-13, ky=1e-13)


def through(length: Quantity) -> Quantity:
    """Quantities may be passed on and calculated with."""
    return equivalent_radius(dx=length, dy=2 * length, kx="1 mD", ky="1 mD")


with unit_system("oilfield", site_pressure="0.85 bar") as system:
    name: str = system.name
set_unit_system("metric")
define_units(pint.UnitRegistry())

through(of_ours)
caught_as: tuple[type[TypeError], type[ValueError]] = (ArgumentsError, ArgumentsError)
