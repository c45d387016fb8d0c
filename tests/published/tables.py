"""Published check values: one table a subject, read by the tests and by the page of checks.

A row keeps the number as printed beside one computed by a route of its own, and says where it was
printed and how it was obtained. ``inputs`` are arguments as text with units, ready for the library;
a row that is a constant of the trade has ``terms`` and ``factor`` instead: its value is the factor
times the product of (``of`` expressed in ``unit``) ** ``power``, so that it emerges from the units.
"""

import json
from dataclasses import dataclass
from math import e, exp, log, pi, sqrt
from pathlib import Path
from typing import Any, Final

FOLDER: Final = Path(__file__).parent
EULER_GAMMA: Final = 0.57721566490153286

STATUSES: Final = ("solid", "loose", "own-reference")
OBTAINED: Final = (
    "read in print or a reprint",
    "from memory of the source",
    "own computation",
)
FACTORS: Final[dict[str, float]] = {
    "1": 1.0,
    "1/4": 0.25,
    "2*pi": 2 * pi,
    "1/(2*pi)": 1 / (2 * pi),
    "1/(4*pi)": 1 / (4 * pi),
    "1/(2*sqrt(pi))": 1 / (2 * sqrt(pi)),
    "ln(10)/(4*pi)": log(10) / (4 * pi),
    "ln(10)/(2*pi)": log(10) / (2 * pi),
    "1000/pi": 1000 / pi,
    "pi/1000": pi / 1000,
    "500*ln(10)/pi": 500 * log(10) / pi,
    "4*exp(-gamma)": 4 * exp(-EULER_GAMMA),
    "4*exp(3/2-gamma)": 4 * e**1.5 * exp(-EULER_GAMMA),
    "ln(4)-gamma": log(4) - EULER_GAMMA,
    "exp(-gamma)/4": exp(-EULER_GAMMA) / 4,
    "exp(-gamma)/2": exp(-EULER_GAMMA) / 2,
    "exp(-1/2)/sqrt(pi)": exp(-0.5) / sqrt(pi),
}


@dataclass(frozen=True, slots=True)
class Term:
    """One factor of a trade constant: (``of`` expressed in ``unit``) ** ``power``."""

    of: str
    unit: str
    power: float = 1.0


@dataclass(frozen=True, slots=True)
class Check:
    """One row: what is computed from what, the printed number and the computed one.

    ``tolerance`` is relative and covers printed against computed. ``printed`` is None where no
    source prints the number (status "own-reference"). ``flag`` names a misprint or a loose value:
    there ``computed`` is what to hold a result to.
    """

    subject: str
    id: str
    quantity: str
    title: str
    unit: str
    printed: float | None
    computed: float
    tolerance: float
    source: str
    obtained: str
    verified_by: str
    status: str
    flag: str
    inputs: dict[str, str | float]
    terms: tuple[Term, ...]
    factor: str

    @property
    def factor_value(self) -> float:
        """The number that ``factor`` names."""
        return FACTORS[self.factor]


def subjects() -> list[str]:
    """Name every table."""
    return sorted(path.stem for path in FOLDER.glob("*.json"))


def about(subject: str) -> str:
    """Say in a sentence what a table holds."""
    return str(_table(subject)["about"])


def given(subject: str) -> dict[str, Any]:
    """Return the description that the rows share (a grid, say); empty if there is none."""
    return dict(_table(subject).get("given", {}))


def load(subject: str, *quantities: str) -> list[Check]:
    """Return the rows of a table, or those of the quantities named.

    Raises ValueError for a row that is not well formed, an id that stands twice, or a quantity that
    the table does not hold.
    """
    checks = [_check(subject, row) for row in _table(subject)["rows"]]
    names = [check.id for check in checks]
    twice = {name for name in names if names.count(name) > 1}
    if twice:
        raise ValueError(f"{subject}: ids stand twice: {sorted(twice)}")
    unknown = set(quantities) - {check.quantity for check in checks}
    if unknown:
        raise ValueError(f"{subject}: no row of {sorted(unknown)}")
    return [check for check in checks if not quantities or check.quantity in quantities]


def _table(subject: str) -> dict[str, Any]:
    table: dict[str, Any] = json.loads((FOLDER / f"{subject}.json").read_text(encoding="utf-8"))
    return table


def _check(subject: str, row: dict[str, Any]) -> Check:
    values = {"printed": None, "flag": "", "inputs": {}, "factor": "1", **row}
    values["terms"] = tuple(Term(**term) for term in row.get("terms", ()))
    try:
        check = Check(subject=subject, **values)
    except TypeError as error:
        raise ValueError(f"{subject}, row {row.get('id')}: {error}") from error
    if check.status not in STATUSES or check.obtained not in OBTAINED:
        raise ValueError(f"{subject}, row {check.id}: unknown status or origin")
    if check.factor not in FACTORS:
        raise ValueError(f"{subject}, row {check.id}: unknown factor {check.factor!r}")
    if (check.printed is None) is not (check.status == "own-reference"):
        raise ValueError(f"{subject}, row {check.id}: a printed number, or status own-reference")
    return check
