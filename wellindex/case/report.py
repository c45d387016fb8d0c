"""The results of a case as text for people, CSV and JSON."""

from __future__ import annotations

import json
import textwrap
from collections.abc import Iterator
from typing import Any

from wellindex.case.run import Outcome, SolvedWell
from wellindex.table import Column, aligned, as_csv, as_plain
from wellindex.units import kinds
from wellindex.units.registry import Quantity
from wellindex.units.systems import current

CSV_NAME = "couplings.csv"
JSON_NAME = "results.json"
NAMES = (CSV_NAME, JSON_NAME)
CAUTION = (
    "Screening calculations: not for well control, nor a substitute for licensed engineering and "
    "local regulation. Injection above the fracture pressure can breach the seal; excessive "
    "drawdown can produce sand, cone water or gas, or collapse casing; a flow reversal can "
    "contaminate a well or an aquifer. Inputs carry uncertainty: state it."
)
_WIDTH = 100
_NOT_PRINTED = ("depth", "block_depth")
_PRINTED_IF_NOT_ONE = ("sector", "scale")


def as_text(outcome: Outcome) -> str:
    """Return the results as text: couplings, result and cautions of each well.

    Parameters
    ----------
    outcome : Outcome
        From `run_case`.

    Returns
    -------
    str
    """
    with outcome.units():
        parts = [outcome.case.title, f"case {outcome.file.name}, {outcome.case.system} units", ""]
        for well in outcome.wells:
            parts += [f"Couplings of well {well.case.name}", "", _couplings_table(well), ""]
            parts += [f"Well {well.case.name}: {well.state}", ""]
            parts += [*caution_lines(well), ""] if well.cautions else []
        return "\n".join([*parts, textwrap.fill(CAUTION, _WIDTH), ""])


def caution_lines(well: SolvedWell) -> Iterator[str]:
    """Return what to be careful about, one paragraph each."""
    for caution in well.cautions:
        yield textwrap.fill(
            f"caution: well {well.case.name}: {caution}", _WIDTH, subsequent_indent="  "
        )


def _couplings_table(well: SolvedWell) -> str:
    """Return the table of couplings; each note stands once, below it."""
    *columns, note = well.couplings.columns()
    shown = [
        column
        for column in columns
        if column.name not in _NOT_PRINTED
        and not (column.name in _PRINTED_IF_NOT_ONE and set(column.values) == {1.0})
    ]
    notes = list(dict.fromkeys(words for words in note.values if words))
    if not notes:
        return aligned(shown)
    marks = [str(notes.index(words) + 1) if words else "" for words in note.values]
    lines = (
        textwrap.fill(f"note {number}: {words}", _WIDTH, subsequent_indent="  ")
        for number, words in enumerate(notes, start=1)
    )
    return "\n".join([aligned([*shown, Column("note", "", marks)]), "", *lines])


def as_files(outcome: Outcome, version: str) -> dict[str, str]:
    """Return the files that hold the results: their names and texts.

    Parameters
    ----------
    outcome : Outcome
        From `run_case`.
    version : str
        Of this package; the JSON carries it.

    Returns
    -------
    dict of str to str
        A CSV with one row per coupling, whose header carries the units, and a JSON with all
        inputs and results.
    """
    with outcome.units():
        tables = [_columns(well) for well in outcome.wells]
        joined = [
            Column(column.name, column.unit, [v for table in tables for v in table[n].values])
            for n, column in enumerate(tables[0])
        ]
        document = {
            "wellindex": version,
            "case": {"file": outcome.file.name, "sha256": outcome.file.sha256},
            "files": [{"file": name, "sha256": digest} for name, digest in outcome.beside.items()],
            "unit_system": outcome.case.system,
            "given": outcome.file.document,
            "wells": [
                _as_plain_well(well, table)
                for well, table in zip(outcome.wells, tables, strict=True)
            ],
            "caution": CAUTION,
        }
    return {
        CSV_NAME: as_csv(joined),
        JSON_NAME: json.dumps(document, indent=2, allow_nan=False) + "\n",
    }


def _columns(well: SolvedWell) -> list[Column]:
    """Return couplings and their results side by side, the well's name first."""
    *couplings, note = well.couplings.columns()
    shown = {column.name for column in couplings}
    pressures = well.state.block_pressure.magnitude.tolist()
    return [
        Column("well", "", [well.case.name] * len(well.couplings)),
        *couplings,
        Column("block_pressure", kinds.PRESSURE.unit(current().name), pressures),
        *(column for column in well.state.columns() if column.name not in shown),
        note,
    ]


def _as_plain_well(well: SolvedWell, columns: list[Column]) -> dict[str, Any]:
    state = well.state
    return {
        "name": well.case.name,
        "role": well.case.role,
        "method": well.couplings.method,
        "bottom_hole_pressure": _single(kinds.PRESSURE, state.pwf),
        "reference_depth": _single(kinds.COORDINATE, state.reference_depth),
        "surface_rate": _single(kinds.SURFACE_RATE, state.rate),
        "reservoir_rate": _single(kinds.RESERVOIR_RATE, state.reservoir_rate),
        "well_backflow": state.well_backflow,
        "couplings": as_plain(columns[1:]),
        "cautions": well.cautions,
    }


def _single(kind: kinds.Kind, quantity: Quantity) -> dict[str, Any]:
    return {"unit": kind.unit(current().name), "value": float(quantity.magnitude)}
