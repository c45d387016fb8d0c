"""Tables of units, read from the package: what answers come in, what is known, what is refused."""

from __future__ import annotations

from collections.abc import Iterable

from wellindex import ureg
from wellindex.units import definitions, kinds

_SHOWN = (
    kinds.LENGTH,
    kinds.PERMEABILITY,
    kinds.PRESSURE,
    kinds.VISCOSITY,
    kinds.DENSITY,
    kinds.COMPRESSIBILITY,
    kinds.HYDRAULIC_CONDUCTIVITY,
    kinds.RESERVOIR_RATE,
    kinds.SURFACE_RATE,
    kinds.VOLUME_FACTOR,
    kinds.WELL_INDEX,
    kinds.PRODUCTIVITY_INDEX,
)
_SYSTEMS = ("oilfield", "metric", "si", "darcy")


def list_table(head: Iterable[str], rows: Iterable[Iterable[str]], widths: str = "auto") -> str:
    """Return a table with one row of heads, as reStructuredText."""
    lines = [".. list-table::", "   :header-rows: 1", f"   :widths: {widths}", ""]
    for row in (head, *rows):
        for number, cell in enumerate(row):
            lines.append(f"   {'*' if number == 0 else ' '} - {cell}".rstrip())
    return "\n".join(lines) + "\n"


def literal(text: str) -> str:
    """Return text as code, or nothing for nothing."""
    return f"``{text}``" if text else ""


def answers() -> str:
    """Return the unit of each kind of answer in each system."""
    rows = []
    for kind in _SHOWN:
        name = kind.name.removeprefix("a ").removeprefix("an ").split(" (")[0]
        rows.append([name, *(literal(kind.unit(system)) for system in _SYSTEMS)])
    return list_table(("Kind", *_SYSTEMS), rows)


def known() -> str:
    """Return every unit of the registry with its other names and its size in base units."""
    rows = []
    for line in definitions.ALL.splitlines():
        if not line or "= [" in line:
            continue
        name, _value, *others = (part.strip() for part in line.split(";")[0].split("="))
        if "offset" in line:
            size = "has a zero of its own, or is read from one"
        else:
            size = literal(f"{ureg.Quantity(1.0, name).to_base_units():.10g~C}")
        names = [name, *(other for other in others if other != "_")]
        rows.append([", ".join(map(literal, names)), size])
    return list_table(("Names", "Size"), rows)


def refused() -> str:
    """Return the names that are refused, with the remedy."""
    rows = [(literal(name), why) for name, why in definitions.REFUSED.items()]
    return list_table(("Name", "Why, and what to write"), rows)
