"""Mistakes that a type checker must find: each line says which error belongs to it."""

from typing import Any

from wellindex import (
    Quantity,
    define_units,
    equivalent_radius,
    set_unit_system,
    unit_system,
    well_index,
)

ROCK: dict[str, Any] = {}

equivalent_radius(dx="1 m", dy="1 m", kx="1 mD", kj="1 mD")  # E: call-arg
equivalent_radius(dx="1 m", dy="1 m", kx="1 mD")  # E: call-arg
equivalent_radius("1 m", dy="1 m", kx="1 mD", ky="1 mD")  # E: call-arg
equivalent_radius(dx="1 m", dy="1 m", kx="1 D", ky="1 D", placement="top")  # E: arg-type
equivalent_radius(dx="1 m", dy="1 m", kx="1 D", ky="1 D", invalid="nan")  # E: call-arg
well_index(dx="1 m", dy="1 m")  # E: call-arg call-arg call-arg call-arg call-arg
well_index(direction="Z", **ROCK)  # E: arg-type
well_index(placement="center", **ROCK)  # E: arg-type
well_index(invalid=True, **ROCK)  # E: arg-type

equivalent_radius.si(dx=1.0, dy=1.0, kx=1.0)  # E: call-arg
equivalent_radius.si(1.0, 1.0, 1.0, 1.0)  # E: call-arg
equivalent_radius.si(dx=1.0, dy=1.0, kx=1.0, ky=1.0, placement=0)  # E: arg-type
equivalent_radius.kernel(dx=1.0, dy=1.0, kx=1.0, ky=1.0)  # E: attr-defined

r0 = equivalent_radius(dx="1 m", dy="1 m", kx="1 mD", ky="1 mD")
as_number: float = r0  # E: assignment
as_text: str = r0  # E: assignment
r0(1)  # E: operator


def radius() -> float:
    """An answer is no number."""
    return equivalent_radius(dx="1 m", dy="1 m", kx="1 mD", ky="1 mD")  # E: return-value


def half(length: Quantity) -> Any:
    """A number is no quantity."""
    return length / 2


half(1.0)  # E: arg-type
half("1 m")  # E: arg-type

set_unit_system()  # E: call-arg
set_unit_system(3)  # E: arg-type
set_unit_system("metrc")  # E: arg-type
set_unit_system("metric", "1 atm")  # E: call-arg
unit_system("si", site_pressure=1.0)  # E: arg-type
define_units("registry")  # E: arg-type
