"""A well on its couplings: rate to bottom-hole pressure, bottom-hole pressure to rate."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from wellindex.couplings import Couplings
from wellindex.errors import BackflowWarning, DomainError, ShapeError
from wellindex.fluid import Liquid
from wellindex.index import Invalid
from wellindex.rock import STANDARD_GRAVITY
from wellindex.state import Basis, Flow, WellState
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.checks import Tally, warn
from wellindex.units.elementwise import frozen
from wellindex.units.registry import Quantity

Array = np.ndarray[Any, Any]
Role = Literal["producer", "injector"]

#: Depths that differ by less than this part of themselves are the same depth.
_SAME_DEPTH = 1e-9
#: Pressures closer than this many roundings of themselves are the same pressure.
_SAME_PRESSURE = 16 * np.finfo(float).eps


class Well:
    """A producer or an injector on its couplings.

    Each coupling flows ``wi kr/mu (p_block - p_well)`` at reservoir conditions, both pressures at
    the coupling's depth: the block pressure is carried there from the block's centre, and the
    bottom-hole pressure from the reference depth, by the fluid's head. Rates are positive out of
    the ground: a producer's rate is positive, an injector's negative.

    Parameters
    ----------
    couplings : Couplings
        From `couple`.
    fluid : Liquid
        What flows in the rock and stands in the wellbore.
    role : {"producer", "injector"}
        What the well is for. A coupling or a well that flows against it is backflow, which the
        state reports and a `BackflowWarning` says.
    reference_depth : Quantity or str, length, optional
        Depth of the bottom-hole pressure; default the shallowest coupling's.
    relative_permeability : float, or one per coupling
        Of the flowing liquid, between 0 and 1; default 1.

    Raises
    ------
    UnitsError, DomainError, ShapeError
        A missing or wrong unit; depths that differ and a fluid without density; couplings that
        are all tight; an array that does not fit.

    Notes
    -----
    The wellbore is frictionless and filled with one fluid, of the rock fluid's density and
    viscosity: a cold injector in hot rock, or a long horizontal well, may be far from that.

    Screening calculations: not for well control, nor a substitute for licensed engineering and
    local regulation. Injection above the fracture pressure can breach the seal; excessive
    drawdown can produce sand, cone water or gas, or collapse casing.

    References
    ----------
    .. [1] D. W. Peaceman, SPE Journal 18(3), 183-194 (1978); doi:10.2118/6893-PA.

    Examples
    --------
    >>> from wellindex import Liquid, Path, Permeability, TensorGrid, Well, couple
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
    >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
    >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
    >>> oil = Liquid(viscosity="2 cP", formation_volume_factor=1.25)
    >>> state = Well(rows, oil).at_pressure("150 bar", block_pressure="200 bar")
    >>> print(f"{state.rate:.1f}, {state.reservoir_rate:.1f}")
    182.3 sm3/day, 227.8 rm3/day
    """

    @reads
    def __init__(
        self,
        couplings: Couplings,
        fluid: Liquid,
        *,
        role: Role = "producer",
        reference_depth: kinds.Coordinate | None = None,
        relative_permeability: kinds.Fraction = 1.0,
    ) -> None:
        rows = couplings.in_si()
        count = len(couplings)
        if np.shape(relative_permeability) not in ((), (count,)):
            raise ShapeError(
                f"Well(): relative_permeability is one value, or one per coupling ({count}); "
                f"got {np.shape(relative_permeability)}"
            )
        if isinstance(reference_depth, np.ndarray):
            raise ShapeError(f"Well(): reference_depth is one value; got {reference_depth.shape}")
        self._couplings = couplings
        self._liquid = fluid.in_si()
        self._transmissivity = rows.wi * relative_permeability / self._liquid.viscosity
        if not np.any(self._transmissivity != 0.0):
            raise DomainError(
                "Well(): no coupling can flow: every well index or relative permeability is zero"
            )
        shallowest = float(np.min(rows.depth))
        self._reference = shallowest if reference_depth is None else reference_depth
        kr = frozen(np.broadcast_to(relative_permeability, (count,)))
        self._basis = Basis(role, fluid, kr, self._reference)
        gradient = self._gradient(rows.depth, rows.block_depth)
        self._head = gradient * (rows.depth - self._reference)
        self._from_centre = gradient * (rows.depth - rows.block_depth)

    def _gradient(self, depth: Array, block_depth: Array) -> float:
        """Return the fluid's pressure gradient; refuse depths that differ without a density."""
        if self._liquid.density is not None:
            return self._liquid.density * STANDARD_GRAVITY
        flows = self._transmissivity != 0.0
        depths = np.concatenate((depth[flows], block_depth[flows], [self._reference]))
        if np.ptp(depths) > _SAME_DEPTH * max(1.0, float(np.abs(depths).max())):
            raise DomainError(
                "Well(): the depths of couplings, block centres and reference differ, and the "
                "fluid has no density to carry pressures between them: give Liquid(density=...)"
            )
        return 0.0

    @property
    def couplings(self) -> Couplings:
        """The couplings that the well flows through."""
        return self._couplings

    @property
    def fluid(self) -> Liquid:
        """What flows in the rock and stands in the wellbore."""
        return self._basis.fluid

    @property
    def role(self) -> str:
        """What the well is for, "producer" or "injector"."""
        return self._basis.role

    @property
    def reference_depth(self) -> Quantity:
        """Depth of the bottom-hole pressure."""
        return as_quantity(kinds.COORDINATE, self._reference)

    @reads
    def at_pressure(
        self,
        pwf: kinds.Pressure,
        *,
        block_pressure: kinds.Pressure,
        invalid: Invalid = "raise",
    ) -> WellState:
        """Return the well's state at a given bottom-hole pressure.

        Parameters
        ----------
        pwf : Quantity or str, absolute or gauge pressure, scalar or (...)
            At the reference depth; zero or positive.
        block_pressure : Quantity or str, absolute or gauge pressure, scalar or (..., n)
            At the centres of the couplings' blocks, in order along the well; one for all, or one
            per coupling.
        invalid : {"raise", "nan"}
            Whether an unusable element raises or becomes NaN with one warning.

        Returns
        -------
        WellState

        Raises
        ------
        UnitsError, DomainError, ShapeError
            A missing or wrong unit, a pressure difference in place of a pressure, a negative
            pressure (also in the wellbore at a coupling), shapes that do not fit.

        Warns
        -----
        BackflowWarning
            A coupling, or the whole well, flows against its role.

        Examples
        --------
        >>> from wellindex import Liquid, Path, Permeability, TensorGrid, Well, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> well = Well(rows, Liquid(viscosity="2 cP", formation_volume_factor=1.25))
        >>> print(f"{well.at_pressure('150 bar', block_pressure='200 bar').rate:.1f}")
        182.3 sm3/day
        """
        blocks = self._at_couplings(block_pressure)
        pwf = self._in_batch("pwf", pwf, blocks)
        return self._state(pwf, blocks, invalid)

    @reads
    def at_rate(
        self,
        rate: kinds.Rate,
        *,
        block_pressure: kinds.Pressure,
        invalid: Invalid = "raise",
    ) -> WellState:
        """Return the well's state at a given surface or reservoir rate.

        Parameters
        ----------
        rate : Quantity or str, scalar or (...)
            A surface rate (sm3/day, stb/day) or a reservoir rate (m3/day, rb/day): positive for
            a producer, negative for an injector, zero for a shut well, whose couplings may flow
            into one another.
        block_pressure, invalid
            As for `at_pressure`.

        Returns
        -------
        WellState

        Raises
        ------
        DomainError
            A rate with the sign against the role; a rate that needs a bottom-hole pressure below
            zero (the message gives the largest possible rate).
        UnitsError, ShapeError
            A missing or wrong unit; shapes that do not fit.

        Warns
        -----
        BackflowWarning
            A coupling flows against the well's role.

        Examples
        --------
        >>> from wellindex import Liquid, Path, Permeability, TensorGrid, Well, couple
        >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
        >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
        >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
        >>> well = Well(rows, Liquid(viscosity="2 cP", formation_volume_factor=1.25))
        >>> state = well.at_rate("100 sm3/day", block_pressure="200 bar")
        >>> print(f"{state.pwf:.2f}, {state.reservoir_rate:.1f}")
        172.57 bar, 125.0 rm3/day
        """
        surface = rate.kind is kinds.SURFACE_RATE
        given = rate.value * self._liquid.volume_factor if surface else rate.value
        given = self._with_right_sign(given, invalid)
        blocks = self._at_couplings(block_pressure)
        given = self._in_batch("rate", given, blocks)
        flows = self._transmissivity
        open_flow = np.sum(flows * (blocks - self._head), axis=-1)
        return self._state((open_flow - given) / np.sum(flows), blocks, invalid, given)

    def _with_right_sign(self, rate: Any, invalid: Invalid) -> Any:
        """Refuse a rate against the role, or mark it NaN."""
        against = rate < 0.0 if self.role == "producer" else rate > 0.0
        if not np.any(against):
            return rate
        article, right, sign = (
            ("a", "positive out of", "negative")
            if self.role == "producer"
            else ("an", "negative into", "positive")
        )
        reason = f"{article} {self.role}'s rate is {right} the ground; the rate given is {sign}"
        if invalid == "nan":
            return _marked(np.asarray(against), rate, reason)
        raise DomainError(reason)

    def _at_couplings(self, block_pressure: Any) -> Array:
        """Carry block pressures to the couplings' depths, (..., n)."""
        pressures = np.asarray(block_pressure)
        count = len(self.couplings)
        if pressures.ndim and pressures.shape[-1] not in (1, count):
            raise ShapeError(
                f"block_pressure has {pressures.shape[-1]} values in its last axis; the well has "
                f"{count} couplings"
            )
        blocks: Array = pressures + self._from_centre
        return blocks

    def _in_batch(self, name: str, value: Any, blocks: Array) -> Array:
        """Return a rate or pressure in the shape of the block pressures without couplings."""
        try:
            shape = np.broadcast_shapes(np.shape(value), blocks.shape[:-1])
        except ValueError:
            raise ShapeError(
                f"{name} of shape {np.shape(value)} does not fit block_pressure, which has the "
                f"shape {blocks.shape} with the couplings last"
            ) from None
        return np.broadcast_to(np.asarray(value, dtype=float), shape)

    def _state(
        self, pwf: Array, blocks: Array, invalid: Invalid, rate: Array | None = None
    ) -> WellState:
        wellbore = pwf[..., np.newaxis] + self._head
        below = np.minimum(pwf, np.min(wellbore, axis=-1)) < 0.0
        if np.any(below):
            pwf = self._without(below, pwf, wellbore, blocks, invalid)
            wellbore = pwf[..., np.newaxis] + self._head
        drawdown = blocks - wellbore
        same = np.abs(drawdown) <= _SAME_PRESSURE * (np.abs(blocks) + np.abs(wellbore))
        drawdown = np.where(same, 0.0, drawdown)
        centres = np.broadcast_to(blocks - self._from_centre, drawdown.shape)
        rates = self._transmissivity * drawdown
        # A rate that was given is the total; a sum that is rounding only is none.
        total = np.sum(rates, axis=-1)
        pressures = np.abs(blocks) + np.abs(wellbore)
        rounding = np.abs(total) <= _SAME_PRESSURE * np.sum(
            self._transmissivity * pressures, axis=-1
        )
        total = np.where(rounding, 0.0, total) if rate is None else np.where(below, np.nan, rate)
        flow = Flow(pwf, centres, wellbore, drawdown, rates, total)
        state = WellState(flow, self.couplings, self._basis)
        if np.any(state.backflow):
            warn(state.backflow_words(), BackflowWarning)
        return state

    def _without(
        self, below: Array, pwf: Array, wellbore: Array, blocks: Array, invalid: Invalid
    ) -> Array:
        """Refuse a wellbore pressure below zero, or mark it NaN."""
        if invalid == "nan":
            return _marked(below, pwf, "a bottom-hole pressure below zero")
        worst = as_quantity(kinds.PRESSURE, float(np.nanmin(wellbore)))
        raise DomainError(
            f"this needs a pressure of {worst} in the wellbore, and none is below zero"
            f"{self._largest_rate(blocks)}"
        )

    def _largest_rate(self, blocks: Array) -> str:
        if self.role == "injector" or blocks.ndim > 1:
            return ""
        least = max(0.0, -float(np.min(self._head)))
        most = float(np.sum(self._transmissivity * (blocks - least - self._head)))
        if most <= 0.0:
            return "; at no bottom-hole pressure does this well produce"
        reservoir = as_quantity(kinds.RESERVOIR_RATE, most)
        surface = as_quantity(kinds.SURFACE_RATE, most / self._liquid.volume_factor)
        return f"; the largest rate, at zero pressure, is {surface} ({reservoir})"

    def __repr__(self) -> str:
        return f"Well({self.role}, {len(self.couplings)} couplings)"


def _marked(bad: Array, values: Any, reason: str) -> Array:
    """Replace unusable elements by NaN, with one warning."""
    tally = Tally(keep_going=True)
    tally.start(0, bad.shape, bad.size)
    tally.refuse(np.ravel(bad), reason)
    tally.report()
    return np.where(bad, np.nan, values)
