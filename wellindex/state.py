"""What a well does at one moment, or at many at once."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from wellindex.couplings import Couplings
from wellindex.errors import ShapeError
from wellindex.fluid import Liquid
from wellindex.table import Column, aligned, measured
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.registry import Quantity

Array = np.ndarray[Any, Any]


class Flow(NamedTuple):
    """Pressures and rates in SI: (...) for the well, (..., n) for its couplings."""

    pwf: Array
    block_pressure: Array
    wellbore: Array
    drawdown: Array
    rates: Array
    total: Array


class Basis(NamedTuple):
    """What the well's rates rest on; the reference depth in SI."""

    role: str
    fluid: Liquid
    relative_permeability: Array
    reference_depth: float


class WellState:
    """Rates and pressures of a well, with what flows against its role.

    `Well.at_rate` and `Well.at_pressure` make it. Rates are positive out of the ground. Where many
    block pressures were given at once, the well's values have their leading shape and the
    couplings' have one axis more.

    Screening values: not for well control, nor a substitute for licensed engineering and local
    regulation.

    Examples
    --------
    >>> from wellindex import Liquid, Path, Permeability, TensorGrid, Well, couple
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
    >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
    >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
    >>> oil = Liquid(viscosity="2 cP", formation_volume_factor=1.25)
    >>> Well(rows, oil).at_rate("100 sm3/day", block_pressure="200 bar")
    WellState(producer, 172.569 bar, 100 sm3/day, 125 rm3/day)
    """

    def __init__(self, flow: Flow, couplings: Couplings, basis: Basis) -> None:
        self._flow = flow
        self._volume_factor = basis.fluid.in_si().volume_factor
        self._total = flow.total
        self._couplings = couplings
        self._basis = basis

    @property
    def couplings(self) -> Couplings:
        """The well's couplings, in the order of the per-coupling values."""
        return self._couplings

    @property
    def basis(self) -> Basis:
        """Role, fluid, relative permeability and reference depth."""
        return self._basis

    @property
    def role(self) -> str:
        """The role of the well, "producer" or "injector"."""
        return self.basis.role

    @property
    def pwf(self) -> Quantity:
        """Bottom-hole pressure at the reference depth."""
        return _answer(kinds.PRESSURE, self._flow.pwf)

    @property
    def reference_depth(self) -> Quantity:
        """Depth of the bottom-hole pressure."""
        return as_quantity(kinds.COORDINATE, self.basis.reference_depth)

    @property
    def rate(self) -> Quantity:
        """Surface rate of the well."""
        return _answer(kinds.SURFACE_RATE, self._total / self._volume_factor)

    @property
    def reservoir_rate(self) -> Quantity:
        """Reservoir rate of the well."""
        return _answer(kinds.RESERVOIR_RATE, self._total)

    @property
    def coupling_rate(self) -> Quantity:
        """Reservoir rate of each coupling."""
        return _answer(kinds.RESERVOIR_RATE, self._flow.rates)

    @property
    def coupling_surface_rate(self) -> Quantity:
        """Surface rate of each coupling."""
        return _answer(kinds.SURFACE_RATE, self._flow.rates / self._volume_factor)

    @property
    def coupling_pressure(self) -> Quantity:
        """Pressure in the wellbore at each coupling's depth."""
        return _answer(kinds.PRESSURE, self._flow.wellbore)

    @property
    def block_pressure(self) -> Quantity:
        """Pressure of each coupling's block at its centre, as given."""
        return _answer(kinds.PRESSURE, self._flow.block_pressure)

    @property
    def coupling_drawdown(self) -> Quantity:
        """Block pressure, carried to the coupling's depth, less the wellbore's there."""
        return _answer(kinds.PRESSURE_DIFFERENCE, self._flow.drawdown)

    @property
    def backflow(self) -> Array:
        """Which couplings flow against the role, array of bool."""
        backflow: Array = self._flow.rates * self._against > 0.0
        return backflow

    @property
    def well_backflow(self) -> Any:
        """Whether the whole well flows against its role, a bool or an array of them."""
        against = np.asarray(self._total * self._against > 0.0)
        return bool(against) if against.ndim == 0 else against

    @property
    def _against(self) -> float:
        return -1.0 if self.role == "producer" else 1.0

    def backflow_words(self) -> str:
        """Say in one sentence what flows against the role; empty where nothing does.

        Examples
        --------
        >>> from wellindex import Liquid, Path, Permeability, TensorGrid, Well, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> well = Well(rows, Liquid(viscosity="2 cP", formation_volume_factor=1.25))
        >>> well.at_pressure("150 bar", block_pressure="200 bar").backflow_words()
        ''
        """
        backflow = self.backflow
        if not np.any(backflow):
            return ""
        verb = "takes in" if self.role == "producer" else "gives out"
        if backflow.ndim > 1:
            wells = int(np.count_nonzero(self.well_backflow))
            states = int(np.count_nonzero(np.any(backflow, axis=-1)))
            return (
                f"the {self.role} {verb} fluid: in {states} of {self._total.size} states through "
                f"at least one coupling, in {wells} as a whole well"
            )
        parts = [
            f"coupling {n} in block {tuple(self.couplings.cell[n].tolist())} "
            f"({self.coupling_rate[n]}, {self.coupling_surface_rate[n]})"
            for n in np.flatnonzero(backflow)
        ]
        whole = "as a whole well" if self.well_backflow else "through part of its couplings"
        return f"the {self.role} {verb} fluid {whole}: " + "; ".join(parts)

    def columns(self) -> list[Column]:
        """Return the per-coupling values as plain numbers in the unit system in force."""
        if self._flow.rates.ndim != 1:
            raise ShapeError("a table shows one state; this holds many: take them one at a time")
        surface = self._flow.rates / self._volume_factor
        return [
            *(Column(n, "", self.couplings.cell[:, a].tolist()) for a, n in enumerate("ijk")),
            measured("depth", kinds.COORDINATE, self.couplings.in_si().depth),
            measured("wellbore_pressure", kinds.PRESSURE, self._flow.wellbore),
            measured("drawdown", kinds.PRESSURE_DIFFERENCE, self._flow.drawdown),
            measured("reservoir_rate", kinds.RESERVOIR_RATE, self._flow.rates),
            measured("surface_rate", kinds.SURFACE_RATE, surface),
            Column("backflow", "", self.backflow.tolist()),
        ]

    def summary(self) -> str:
        """Return the well's values in a few lines, both rates with their names.

        Examples
        --------
        >>> from wellindex import Liquid, Path, Permeability, TensorGrid, Well, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> well = Well(rows, Liquid(viscosity="2 cP", formation_volume_factor=1.25))
        >>> print(well.at_rate("100 sm3/day", block_pressure="200 bar").summary())
        producer
          bottom-hole pressure  172.569 bar at 5 m depth
          surface rate          100 sm3/day
          reservoir rate        125 rm3/day
        """
        if self._flow.rates.ndim != 1:
            return f"{self.role} in {self._total.size} states of shape {self._total.shape}"
        lines = [
            f"{self.role}",
            f"  bottom-hole pressure  {self.pwf} at {self.reference_depth} depth",
            f"  surface rate          {self.rate}",
            f"  reservoir rate        {self.reservoir_rate}",
        ]
        if np.any(self.backflow):
            lines.append(f"  BACKFLOW: {self.backflow_words()}")
        return "\n".join(lines)

    def __repr__(self) -> str:
        if self._flow.rates.ndim != 1:
            return f"WellState({self.role}, {self._total.size} states of shape {self._total.shape})"
        return f"WellState({self.role}, {self.pwf}, {self.rate}, {self.reservoir_rate})"

    def __str__(self) -> str:
        if self._flow.rates.ndim != 1:
            return self.summary()
        return self.summary() + "\n\n" + aligned(self.columns())


def _answer(kind: kinds.Kind, value: Any) -> Quantity:
    return as_quantity(kind, value if np.ndim(value) else float(value))
