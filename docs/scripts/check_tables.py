"""Published values beside what the library computes, from the tables that the tests read.

Run as a script it prints what is off and fails; the documentation's build does the same.
"""

from __future__ import annotations

import math
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any, NamedTuple

if __name__ == "__main__":
    sys.path.insert(0, str(Path(__file__).parents[2]))

from unit_tables import list_table, literal

from tests.published import tables
from tests.published.tables import Check
from wellindex import (
    Quantity,
    Survey,
    equivalent_radius,
    permeability_from_conductivity,
    productivity_index,
    unit_system,
    ureg,
    well_index,
)

#: The library must meet the independent computation this well, whatever the printed digits are.
INDEPENDENT = 1e-8

_LIBRARY = "library"
_UNITS = "library's units"
_OTHER = "independent only"
_BLOCK = ("dx", "dy", "dz", "kx", "ky", "kz", "rw")
_HEADINGS = {
    "comparison_1981": "The grid of the 1981 comparison",
    "equivalent_radius": "Equivalent radius",
    "geometric_factor": "Fraction of the circle",
    "groundwater": "Groundwater",
    "productivity": "Productivity of wells in textbooks",
    "pure_constants": "Pure constants",
    "survey": "Surveys",
    "trade_constants": "Constants of the trade",
    "unit_constants": "Units",
}


class Row(NamedTuple):
    """A check with the value that stands beside the printed one, and who computed it."""

    check: Check
    value: float
    by: str

    @property
    def difference(self) -> float | None:
        """The printed number less the computed, as a part of it."""
        if self.check.printed is None:
            return None
        return self.check.printed / self.value - 1.0

    @property
    def miss(self) -> str:
        """What is off, or nothing."""
        name = f"{self.check.subject}/{self.check.id}"
        if self.difference is not None and abs(self.difference) > self.check.tolerance:
            return f"{name}: printed {self.check.printed}, computed {self.value!r}"
        independent = abs(self.value / self.check.computed - 1.0)
        if independent > min(INDEPENDENT, self.check.tolerance):
            return f"{name}: library {self.value!r}, independently {self.check.computed!r}"
        return ""


def _quantity(value: Any) -> Quantity:
    return ureg.Quantity(value) if isinstance(value, str) else ureg.Quantity(value, "dimensionless")


def _radius(check: Check, **more: Any) -> Quantity:
    plane = {name: check.inputs[name] for name in ("dx", "dy", "kx", "ky")}
    return equivalent_radius(**plane, **more)


def _over_diagonal(check: Check) -> Quantity:
    dx, dy = _quantity(check.inputs["dx"]), _quantity(check.inputs["dy"])
    return _radius(check) / (dx**2 + dy**2) ** 0.5


def _block(check: Check, **more: Any) -> Quantity:
    return well_index(**{name: check.inputs[name] for name in _BLOCK}, **more)


def _near_sides(check: Check) -> Quantity:
    """Return the index with the radius that the table gives for the block's closed sides."""
    radius = check.id.replace("-index", "-radius")
    (row,) = (r for r in tables.load(check.subject) if r.id == radius)
    return _block(check, equivalent_radius=f"{row.computed!r} {row.unit}")


def _sector(check: Check) -> Quantity:
    """Return the sector that a placement brings: the index over that of a full circle."""
    block = dict.fromkeys(("dx", "dy", "dz"), "1 m") | dict.fromkeys(("kx", "ky", "kz"), "1 D")
    place = str(check.inputs["placement"])
    r0 = equivalent_radius(dx="1 m", dy="1 m", kx="1 D", ky="1 D", placement=place)
    placed = well_index(**block, rw="1 cm", placement=place)
    return placed / well_index(**block, rw="1 cm", equivalent_radius=r0)


def _conductivity(check: Check) -> Quantity:
    given = check.inputs
    return permeability_from_conductivity(
        conductivity=given["conductivity"], viscosity=given["mu"], density=given["rho"]
    )


def _productivity(check: Check, **changed: Any) -> Quantity:
    given = {**check.inputs, **changed}
    return productivity_index(
        against={"outer_boundary": "boundary"}.get(given["against"], given["against"]),
        viscosity=given["mu"],
        formation_volume_factor=given["formation_volume_factor"],
        k=given["k"],
        h=given["h"],
        re=given["re"],
        rw=given["rw"],
        skin=given.get("skin", 0),
    )


def _permeability(check: Check) -> Quantity:
    per_darcy = _productivity(check, k="1 D") / ureg.Quantity(1.0, "D")
    return _quantity(check.inputs["productivity_index"]) / per_darcy


def _skin(check: Check) -> Quantity:
    ideal = _productivity(check) / _quantity(check.inputs["productivity_index"])
    ratio = (_quantity(check.inputs["re"]) / _quantity(check.inputs["rw"])).m_as("dimensionless")
    return (ideal - 1) * (math.log(ratio) - 0.75)


def _leg(check: Check) -> Quantity:
    """Return a number of one leg by minimum curvature."""
    given, what = check.inputs, str(check.inputs["what"])
    columns = ("measured_depth", "inclination", "azimuth")
    survey = Survey(*([given[f"{name}_{end}"] for end in (1, 2)] for name in columns))
    if what == "dogleg":
        return survey.dogleg[0]
    if what == "ratio":
        half = float(survey.dogleg[0].m_as("radian")) / 2.0
        return _quantity(math.tan(half) / half)
    return survey.points[-1][("east", "north", "down").index(what)]


def _test_hole(check: Check) -> Quantity:
    """Return where the test hole of equal turns ends."""
    legs = int(check.inputs["legs"])
    parts = [n / legs for n in range(legs + 1)]
    depth, angle = (
        ureg.Quantity([part * _quantity(check.inputs[name]).magnitude for part in parts], unit)
        for name, unit in (("length", "ft"), ("inclination", "degree"))
    )
    survey = Survey(depth, angle, ureg.Quantity([0.0] * (legs + 1), "degree"))
    return survey.points[-1][("east", "north", "down").index(str(check.inputs["what"]))]


def _constant(check: Check) -> Quantity:
    value = check.factor_value
    for term in check.terms:
        value *= float(ureg.Quantity(term.of).m_as(term.unit)) ** term.power
    return ureg.Quantity(value, check.unit)


def _radius_constant(check: Check) -> Quantity:
    """Return the constant of the equivalent radius as the library's radius holds it."""
    radius = equivalent_radius(dx="1 m", dy="1 m", kx="1 D", ky="1 D").m_as("m")
    per_diagonal = radius / math.sqrt(2.0)
    return _quantity(per_diagonal * (2.0 if check.id.endswith("0.28") else 1.0))


_BY_QUANTITY: dict[str, tuple[str, Callable[[Check], Quantity]]] = {
    "equivalent_radius": (_LIBRARY, _radius),
    "equivalent_radius_half_block": (_LIBRARY, _radius),
    "equivalent_radius_off_centre": (_LIBRARY, _radius),
    "equivalent_radius_over_diagonal": (_LIBRARY, _over_diagonal),
    "equivalent_radius_placed": (
        _LIBRARY,
        lambda check: _radius(check, placement=check.inputs["placement"]),
    ),
    "well_index": (_LIBRARY, _block),
    "well_index_near_sides": ("library, radius given", _near_sides),
    "sector": (_LIBRARY, _sector),
    "permeability_from_conductivity": (_LIBRARY, _conductivity),
    "productivity_index": (_LIBRARY, _productivity),
    "rate": (_LIBRARY, lambda check: _productivity(check) * _quantity(check.inputs["drawdown"])),
    "vogel_part": (
        "library's J, by hand",
        lambda check: _productivity(check) * _quantity(check.inputs["p_bubble"]) / 1.8,
    ),
    "permeability_from_productivity": ("library's J, by hand", _permeability),
    "skin_from_productivity": ("library's J, by hand", _skin),
    "productivity_index_from_rate": (
        _UNITS,
        lambda check: _quantity(check.inputs["rate"]) / _quantity(check.inputs["drawdown"]),
    ),
    "drainage_radius": (
        _UNITS,
        lambda check: (_quantity(check.inputs["area"]) / math.pi) ** 0.5,
    ),
    "minimum_curvature": (_LIBRARY, _leg),
    "test_hole": (_LIBRARY, _test_hole),
    "unit": (_UNITS, _constant),
    "trade constant": (_UNITS, _constant),
}
_BY_ID = {
    "radius-constant-0.14": (_LIBRARY, _radius_constant),
    "radius-constant-0.28": (_LIBRARY, _radius_constant),
}


def _row(check: Check) -> Row:
    by, route = _BY_ID.get(check.id) or _BY_QUANTITY.get(check.quantity, (_OTHER, None))
    if route is None or (route is _constant and not check.terms):
        return Row(check, check.computed, _OTHER)
    with unit_system("si"):
        return Row(check, float(route(check).m_as(check.unit)), by)


def compute() -> dict[str, list[Row]]:
    """Return every table with the library's values."""
    return {
        subject: [_row(check) for check in tables.load(subject)] for subject in tables.subjects()
    }


def missed(computed: dict[str, list[Row]]) -> list[str]:
    """Say which rows are off their tolerance."""
    return [row.miss for rows in computed.values() for row in rows if row.miss]


def _cells(row: Row) -> list[str]:
    check = row.check
    unit = "" if check.unit == "dimensionless" else f" {check.unit}"
    printed = "none" if check.printed is None else f"{check.printed!r}{unit}"
    difference = "" if row.difference is None else f"{row.difference:+.1e}"
    status = f"{check.status}. {check.flag}" if check.flag else check.status
    source = check.source
    if check.obtained not in source:
        source = f"{source} ({check.obtained})"
    return [
        check.title.replace("*", r"\*").replace("|", r"\|"),
        printed.replace("*", r"\*"),
        f"{row.value:.10g}{unit}".replace("*", r"\*"),
        difference,
        row.by,
        source.replace("*", r"\*"),
        status.replace("*", r"\*"),
    ]


def page(computed: dict[str, list[Row]]) -> str:
    """Return the tables as reStructuredText."""
    rows = [row for table in computed.values() for row in table]
    printed = sum(row.check.printed is not None for row in rows)
    ours = sum(row.by != _OTHER for row in rows)
    parts = [
        f"{len(rows)} rows, {printed} of them printed in a source; the library computes {ours}.\n"
    ]
    head = ("What", "Printed", "Computed", "Difference", "By", "Source", "Status")
    for subject, table in computed.items():
        heading = _HEADINGS.get(subject, subject)
        parts += [heading, "-" * len(heading), "", tables.about(subject), ""]
        parts += [f"Table {literal(subject)}.", ""]
        parts.append(list_table(head, map(_cells, table)))
    return "\n".join(parts)


def main() -> int:
    """Print what is off; return 1 if anything is."""
    computed = compute()
    off = missed(computed)
    print("\n".join(off) or f"{sum(map(len, computed.values()))} rows within their tolerance")
    return 1 if off else 0


if __name__ == "__main__":
    sys.exit(main())
