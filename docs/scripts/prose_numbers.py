"""Numbers that stand in running text: computed here, never typed."""

from __future__ import annotations

import math
import sys
from pathlib import Path

if __name__ == "__main__":
    sys.path.insert(0, str(Path(__file__).parents[2]))

from tests.published import tables
from wellindex import equivalent_radius, ureg, well_index
from wellindex.case import figure
from wellindex.case.beside import LARGEST_CSV, LARGEST_NPZ
from wellindex.case.cells import MOST_BLOCKS
from wellindex.case.files import LARGEST_FILE
from wellindex.case.reservoir import MOST_SIZES
from wellindex.case.surveys import MOST_CHORDS, MOST_STATIONS
from wellindex.case.wells import MOST_CROSSINGS, MOST_INTERVALS, MOST_WELLS
from wellindex.index import DOUBTFUL_LOGARITHM, DOUBTFUL_SUM, SMALLEST_LOGARITHM
from wellindex.radius.closed_form import HALF_EXP_MINUS_GAMMA
from wellindex.rock import STANDARD_GRAVITY


def _radius(placement: str = "centre") -> float:
    """Return r0/dx in square blocks of isotropic rock."""
    return float(equivalent_radius.si(dx=1.0, dy=1.0, kx=1.0, ky=1.0, placement=placement))


def _index(rw: float, r0: float) -> float:
    return float(
        well_index.si(dx=1.0, dy=1.0, dz=1.0, kx=1.0, ky=1.0, kz=1.0, rw=rw, equivalent_radius=r0)
    )


def _tabulated(subject: str, row: str) -> float:
    """Return the independent value of a row of a published table."""
    (check,) = (c for c in tables.load(subject) if c.id == row)
    return check.computed


def _below_isolated(row: str) -> str:
    """Return how far a tabulated radius of square blocks lies below the isolated well's."""
    return f"{100 * (1 - _tabulated('equivalent_radius', row) / _radius()):.1f} %"


def standard_state_difference() -> float:
    """Return by how much an ideal gas is larger at 60 degF, 14.696 psia than at 15 degC, 1 atm."""

    def volume(temperature: float, unit: str, pressure: str) -> float:
        kelvin = ureg.Quantity(temperature, unit).m_as("K")
        return float(kelvin / ureg.Quantity(pressure).m_as("Pa"))

    return volume(60.0, "degF", "14.696 psi") / volume(15.0, "degC", "1.01325 bar") - 1.0


def values() -> dict[str, str]:
    """Return each number as it is written, by its name."""
    printed, exact = 0.28, HALF_EXP_MINUS_GAMMA
    square = _radius()
    shift = {
        block: _index(1.0 / block, square) / _index(1.0 / block, square * printed / exact) - 1.0
        for block in (100, 1000)
    }
    sum_below = math.exp(SMALLEST_LOGARITHM)
    return {
        "exact constant": f"{exact:.5f}",
        "printed below exact": f"{100 * (1 - printed / exact):.2f} %",
        "index shift at 100": f"{100 * abs(shift[100]):.3f} %",
        "index shift at 1000": f"{100 * abs(shift[1000]):.3f} %",
        "square r0": f"{square:.4f}",
        "neighbour estimate": f"{math.exp(-math.pi / 2):.4f}",
        "side r0": f"{_radius('west'):.4f}",
        "corner r0": f"{_radius('corner'):.4f}",
        "edge difference": _below_isolated("edge-block-x-square"),
        "corner difference": _below_isolated("corner-block-square"),
        "smallest logarithm": f"{SMALLEST_LOGARITHM:g}",
        "doubtful logarithm": f"{DOUBTFUL_LOGARITHM:g}",
        "doubtful sum": f"{DOUBTFUL_SUM:g}",
        "smallest block": f"{sum_below / square:.1f}",
        "doubtful block": f"{math.exp(DOUBTFUL_LOGARITHM) / square:.1f}",
        "standard state difference": f"{100 * standard_state_difference():.2f} %",
        "gravity": f"{STANDARD_GRAVITY:g}",
        "most sizes": f"{MOST_SIZES:,}",
        "most blocks": f"{MOST_BLOCKS:,}",
        "most wells": f"{MOST_WELLS:,}",
        "most points": f"{MOST_STATIONS:,}",
        "most intervals": f"{MOST_INTERVALS:,}",
        "most crossings": f"{MOST_CROSSINGS:,}",
        "most chords": f"{MOST_CHORDS:,}",
        "most drawn": f"{figure.MOST_WELLS:,}",
        "largest file": f"{LARGEST_FILE:,}",
        "largest csv": f"{LARGEST_CSV:,}",
        "largest npz": f"{LARGEST_NPZ:,}",
    }


def substitutions() -> str:
    """Return the values as reStructuredText substitutions."""
    return "\n".join(f".. |{name}| replace:: {value}" for name, value in values().items())


if __name__ == "__main__":
    for name, value in values().items():
        print(f"{name:28}{value}")
