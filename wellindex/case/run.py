"""Couple the wells of a case, find rates or pressures, and put the results into words and files."""

from __future__ import annotations

import re
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from typing import NamedTuple

import numpy as np

from wellindex.case.beside import Beside
from wellindex.case.entries import TOO_FAR_APART, Problems, plain_words
from wellindex.case.files import CaseFile
from wellindex.case.schema import Case, read_case
from wellindex.case.wells import WellCase
from wellindex.coupling import couple
from wellindex.couplings import Couplings
from wellindex.errors import AssumptionWarning, BackflowWarning, WellIndexError
from wellindex.state import WellState
from wellindex.units.systems import SystemName, unit_system
from wellindex.well import Well

_INTERVAL = re.compile(r"\binterval (\d+)")


class SolvedWell(NamedTuple):
    """A well of the case with its couplings, its state and what to be careful about."""

    case: WellCase
    couplings: Couplings
    state: WellState
    cautions: list[str]


class Outcome(NamedTuple):
    """A case, the hashes of the files beside it, and its solved wells."""

    file: CaseFile
    beside: dict[str, str]
    case: Case
    wells: list[SolvedWell]

    @contextmanager
    def units(self) -> Iterator[None]:
        """Answer in the case's units inside a ``with`` block."""
        with unit_system(self.case.system, site_pressure=self.case.site_pressure):
            yield


def run_case(file: CaseFile, system: SystemName | None = None) -> Outcome:
    """Couple and solve every well of a case.

    Parameters
    ----------
    file : CaseFile
        From `read_file`.
    system : {"metric", "oilfield", "si", "darcy"}, optional
        Unit system of the answers; default the case's own.

    Returns
    -------
    Outcome

    Raises
    ------
    CaseError
        Lists everything that is wrong with the case, each with its place, what was expected and
        the remedy.

    Notes
    -----
    Screening calculations: not for well control, nor a substitute for licensed engineering and
    local regulation.

    Examples
    --------
    >>> from pathlib import Path
    >>> import wellindex.case
    >>> from wellindex.case.files import read_file
    >>> from wellindex.case.run import run_case
    >>> path = Path(wellindex.case.__file__).with_name("five_layers.toml")
    >>> outcome = run_case(read_file(path))
    >>> [well.case.name for well in outcome.wells]
    ['Demo 1']
    """
    with np.errstate(over="raise", divide="raise", invalid="raise"):
        beside = Beside(file.folder)
        case = read_case(file.document, system, beside)
        problems = Problems()
        with unit_system(case.system, site_pressure=case.site_pressure):
            wells = [_solve(case, well, problems) for well in case.wells]
    problems.raise_any()
    return Outcome(file, beside.sha256, case, [well for well in wells if well is not None])


class _UnfitError(Exception):
    """An error of the library, with the place in the file that it is about."""

    def __init__(self, where: str, error: WellIndexError) -> None:
        super().__init__(str(error))
        self.where = where
        self.words = plain_words(error)


@contextmanager
def _about(where: str) -> Iterator[None]:
    try:
        yield
    except WellIndexError as error:
        raise _UnfitError(where, error) from None


def _solve(case: Case, well: WellCase, problems: Problems) -> SolvedWell | None:
    """Solve one well; note what is wrong and return None where it cannot be."""
    with warnings.catch_warnings(record=True) as caught:
        for category in (AssumptionWarning, BackflowWarning):
            warnings.simplefilter("always", category)
        try:
            couplings = _couple(case, well)
            state = _hold(well, couplings)
            _check_finite(couplings, state)
        except _UnfitError as error:
            problems.add(_place(well, error), _in_case_words(well, error.words))
            return None
        except ArithmeticError:
            problems.add(well.where, TOO_FAR_APART)
            return None
    cautions = [_in_case_words(well, str(warning.message)) for warning in caught]
    return SolvedWell(well, couplings, state, cautions)


def _couple(case: Case, well: WellCase) -> Couplings:
    with _about(well.where):
        return couple(
            well.path,
            case.grid,
            case.permeability,
            rw=well.rw,
            skin=well.skin,
            intervals=well.intervals,
            method=well.method,
            net_to_gross=case.net_to_gross,
            placement=well.placement,
        )


def _hold(well: WellCase, couplings: Couplings) -> WellState:
    """Return the well's state at the rate or pressure that it is held at."""
    layers = couplings.cell[:, 2]
    with _about(well.relative_permeability.where):
        relative_permeability = well.relative_permeability.at(layers)
    with _about(well.block_pressure.where):
        block_pressure = well.block_pressure.at(layers)
    with _about(well.where):
        made = Well(
            couplings,
            well.fluid,
            role=well.role,
            reference_depth=well.reference_depth,
            relative_permeability=relative_permeability,
        )
    if well.at_rate is None:
        with _about(f"{well.where}.at_pressure"):
            return made.at_pressure(well.at_pressure, block_pressure=block_pressure)
    with _about(f"{well.where}.at_rate"):
        return made.at_rate(well.at_rate, block_pressure=block_pressure)


def _check_finite(couplings: Couplings, state: WellState) -> None:
    values = [float(each.magnitude) for each in (state.pwf, state.rate, state.reservoir_rate)]
    for column in (*couplings.columns(), *state.columns()):
        values += [value for value in column.values if isinstance(value, float)]
    if not np.all(np.isfinite(values)):
        raise OverflowError


def _place(well: WellCase, error: _UnfitError) -> str:
    """Return the key that an error is about."""
    interval = _INTERVAL.match(error.words)
    opened = bool(interval) or error.words.startswith("the open interval")
    if opened and well.intervals is not None:
        return f"{error.where}.open[{interval[1]}]" if interval else f"{error.where}.open"
    return f"{error.where}.path" if opened or error.words.startswith("the path") else error.where


def _in_case_words(well: WellCase, message: str) -> str:
    """Return a message of the library in the words of a case file."""
    return _INTERVAL.sub("the path" if well.intervals is None else r"open[\1]", message)
