"""What a case file may hold, and how it becomes grid, rock and wells."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, NamedTuple

from wellindex.case.beside import Beside
from wellindex.case.entries import (
    UNUSABLE,
    Entry,
    Problems,
    choice,
    line,
    plain_words,
    quantity,
)
from wellindex.case.reservoir import read_fluid, read_grid, read_rock
from wellindex.case.wells import WellCase, read_wells
from wellindex.errors import WellIndexError
from wellindex.rock import Permeability
from wellindex.space.grid import TensorGrid
from wellindex.space.hexahedral import HexahedralGrid
from wellindex.units import kinds
from wellindex.units.systems import SYSTEMS, SystemName, unit_system


class Case(NamedTuple):
    """A case that has been read: library objects, ready to couple."""

    title: str
    system: SystemName
    site_pressure: str | None
    grid: TensorGrid | HexahedralGrid
    permeability: Permeability
    net_to_gross: Any
    wells: list[WellCase]


def read_case(
    document: Mapping[str, Any], system: SystemName | None = None, beside: Beside | None = None
) -> Case:
    """Turn the parsed text of a case file into grid, rock and wells.

    Parameters
    ----------
    document : mapping
        What `tomllib` made of the file.
    system : {"metric", "oilfield", "si", "darcy"}, optional
        Unit system of the answers; default the case's own, and metric where it names none.
    beside : Beside, optional
        Opens the files that the case names; without it, a case that names one is refused.

    Returns
    -------
    Case

    Raises
    ------
    CaseError
        Lists everything that is wrong, each with its key, what was expected and the remedy.

    Examples
    --------
    >>> from wellindex.case.schema import read_case
    >>> read_case({"title": "Nothing yet"})
    Traceback (most recent call last):
    wellindex.errors.CaseError: 3 problems
      grid: missing; the file needs it
      rock: missing; the file needs it
      wells: missing; the file needs it
    """
    problems = Problems()
    beside = beside or Beside()
    top = Entry(document, "", problems).table(
        ("title", "grid", "rock", "wells"), ("units", "fluid")
    )
    assert top is not None
    title = top.read("title", line(200))
    chosen, site_pressure = top.read("units", _units, ("metric", None))
    with unit_system("metric", site_pressure=site_pressure):
        grid = top.read("grid", lambda entry: read_grid(entry, beside))
        permeability, net_to_gross = top.read(
            "rock", lambda entry: read_rock(entry, grid, beside), (UNUSABLE, UNUSABLE)
        )
        fluid = top.read("fluid", read_fluid, None)
        wells = top.read("wells", lambda entry: read_wells(entry, grid, fluid, beside))
    problems.raise_any()
    return Case(title, system or chosen, site_pressure, grid, permeability, net_to_gross, wells)


def _units(entry: Entry) -> tuple[Any, Any]:
    table = entry.table((), ("system", "site_pressure"))
    if table is None:
        return "metric", None
    system = table.read("system", choice(*SYSTEMS), "metric")
    return system, table.read("site_pressure", _site_pressure, None)


def _site_pressure(entry: Entry) -> str | None:
    if quantity(kinds.PRESSURE, "0.85 bar")(entry) is UNUSABLE:
        return None
    try:
        with unit_system("metric", site_pressure=entry.value):
            return str(entry.value)
    except WellIndexError as error:
        entry.problems.add(entry.where, plain_words(error))
    return None
