"""The calculation of a coupling shown step by step, with its numbers and units."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

import numpy as np

from wellindex.couplings import Couplings
from wellindex.errors import DomainError, ShapeError
from wellindex.index import TWO_PI, side_axis
from wellindex.radius.closed_form import HALF_EXP_MINUS_GAMMA
from wellindex.radius.crossed_block import PLANES, Crossed
from wellindex.space.grid import AXES
from wellindex.state import WellState
from wellindex.units import kinds
from wellindex.units.answers import as_quantity
from wellindex.units.boundary import reads
from wellindex.units.registry import Quantity

#: The exponent of a placed well's factor by the axis that its side is normal to (None: corner).
_EXPONENTS = {
    0: "u x atan(1 / u)",
    1: "atan(u) / u",
    None: "(u x atan(1 / u) + atan(u) / u + 1) / 2",
}


class Step(NamedTuple):
    """One step: what is found, the formula, the formula with its numbers, the result."""

    title: str
    formula: str
    numbers: str
    result: str

    def text(self) -> str:
        """Return the step as indented text."""
        lines = [self.title, f"    {self.formula}"]
        if self.numbers:
            lines.append(f"    = {self.numbers}")
        return "\n".join([*lines, f"    = {self.result}"])


class Workings:
    """Steps of the calculation of some couplings; ``print`` shows them.

    `workings` makes it.

    Examples
    --------
    >>> from wellindex import Path, Permeability, TensorGrid, couple, workings
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
    >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
    >>> shown = workings(couple(path, grid, Permeability("9 mD", "9 mD", "1 mD"), rw="0.1 m"))
    >>> [step.title for step in shown.steps[0]][1:]
    ['Permeability across the well', 'Flow resistance', 'Well index']
    """

    def __init__(self, titles: dict[int, str], steps: dict[int, list[Step]]) -> None:
        self._titles = titles
        self._steps = steps

    @property
    def steps(self) -> dict[int, list[Step]]:
        """The steps of each coupling, by its row; each has title, formula, numbers and result."""
        return {row: list(steps) for row, steps in self._steps.items()}

    def __repr__(self) -> str:
        return f"Workings(of {len(self._steps)} couplings; print it to read them)"

    def __str__(self) -> str:
        parts = []
        for row, steps in self._steps.items():
            lines = [self._titles[row], "=" * len(self._titles[row])]
            lines += [f"{n}. {step.text()}" for n, step in enumerate(steps, start=1)]
            parts.append("\n".join(lines))
        return "\n\n".join(parts)


@reads
def workings(
    couplings: Couplings, row: int | None = None, *, state: WellState | None = None
) -> Workings:
    """Show how the well index of each coupling comes about, to attach to one's notes.

    Parameters
    ----------
    couplings : Couplings
        From `couple`.
    row : int, optional
        One coupling, counted from 0; default all.
    state : WellState, optional
        Of a well on these couplings: its rates are shown too.

    Returns
    -------
    Workings
        Prints as text in the unit system in force when it was made.

    Raises
    ------
    DomainError
        A row that the table does not have, or a state of another well.
    ShapeError
        A state that holds many moments.

    References
    ----------
    .. [1] D. W. Peaceman, SPE Journal 23(3), 531-543 (1983), eqs. 14 and 16 (from memory
       of the source); doi:10.2118/10528-PA.

    Examples
    --------
    >>> from wellindex import Path, Permeability, TensorGrid, couple, workings
    >>> grid = TensorGrid(["100 m"] * 3, ["100 m"] * 3, "10 m")
    >>> path = Path([("150 m", "150 m", "0 m"), ("150 m", "150 m", "10 m")])
    >>> rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
    >>> print(workings(rows).steps[0][1].text())
    Permeability across the well
        k = sqrt(kx ky)
        = sqrt(90 mD x 90 mD)
        = 90 mD
    """
    if row is not None and not 0 <= row < len(couplings):
        raise DomainError(f"workings(): row {row} is not in the table of {len(couplings)} rows")
    if state is not None and not state.couplings.equals(couplings):
        raise DomainError("workings(): the state belongs to other couplings")
    if state is not None and state.coupling_rate.ndim != 1:
        raise ShapeError("workings(): the state holds many moments; give one of them")
    chosen = range(len(couplings)) if row is None else [row]
    titles = {}
    steps = {}
    for n in chosen:
        block = tuple(couplings.cell[n].tolist())
        titles[n] = f"Coupling {n} in block {block}, {_course(couplings, n)}"
        steps[n] = [*_index_steps(couplings, n), *(_rate_steps(state, n) if state else [])]
    return Workings(titles, steps)


def _course(couplings: Couplings, n: int) -> str:
    crossed = couplings.crossed
    return f"well along {AXES[crossed.dominant[n]]}" if crossed.aligned[n] else "oblique well"


def _show(kind: kinds.Kind, value: Any) -> str:
    return str(as_quantity(kind, float(value)))


class _Plane(NamedTuple):
    """Names and texts of the two axes normal to a well along one axis."""

    a: str
    b: str
    da: str
    db: str
    ka: str
    kb: str


def _plane(crossed: Crossed, n: int, axis: int) -> _Plane:
    first, second = PLANES[axis]
    sizes = [_show(kinds.LENGTH, crossed.sizes[i, n]) for i in (first, second)]
    k = [_show(kinds.PERMEABILITY, crossed.k[i, n]) for i in (first, second)]
    return _Plane(AXES[first], AXES[second], *sizes, *k)


def _centred_step(crossed: Crossed, n: int, axis: int, result: float) -> Step:
    a, b, da, db, ka, kb = _plane(crossed, n, axis)
    return Step(
        "Equivalent radius (Peaceman 1983, eq. 14)",
        f"r0 = (exp(-gamma)/2) sqrt(k{b} d{a}^2 + k{a} d{b}^2) / (sqrt(k{a}) + sqrt(k{b}))",
        f"{HALF_EXP_MINUS_GAMMA:.6g} sqrt({kb} x ({da})^2 + {ka} x ({db})^2) / "
        f"(sqrt({ka}) + sqrt({kb}))",
        _show(kinds.LENGTH, result),
    )


def _radius_steps(couplings: Couplings, n: int, axis: int) -> list[Step]:
    crossed = couplings.crossed
    centred = _centred_step(crossed, n, axis, couplings.rows_in_si().r0[n])
    if crossed.placement == "centre":
        return [centred]
    a, b, da, db, ka, kb = _plane(crossed, n, axis)
    first, second = PLANES[axis]
    sizes, k = crossed.sizes[:, n], crossed.k[:, n]
    shape = f"{sizes[first] / sizes[second] * math.sqrt(k[second] / k[first]):.6g}"
    exponent = _EXPONENTS[side_axis(AXES[axis], crossed.placement)]
    return [
        Step(
            "Shape of the block in stretched coordinates",
            f"u = (d{a} / d{b}) sqrt(k{b} / k{a})",
            f"({da} / {db}) sqrt({kb} / {ka})",
            shape,
        ),
        centred._replace(
            title=f"{centred.title}, well placed: {crossed.placement}",
            formula=f"{centred.formula} x exp({exponent})",
            numbers=f"{centred.numbers} x exp({exponent.replace('u', shape)})",
        ),
    ]


def _along_axis_steps(couplings: Couplings, n: int, axis: int) -> list[Step]:
    plane = _plane(couplings.crossed, n, axis)
    rows = couplings.rows_in_si()
    across = Step(
        "Permeability across the well",
        f"k = sqrt(k{plane.a} k{plane.b})",
        f"sqrt({plane.ka} x {plane.kb})",
        _show(kinds.PERMEABILITY, rows.k_normal[n]),
    )
    if rows.k_normal[n] == 0.0:
        return [across]
    return [*_radius_steps(couplings, n, axis), across]


def _oblique_steps(couplings: Couplings, n: int) -> list[Step]:
    """Return the steps of a row whose index is the vector sum over the axes (Shu 2005)."""
    crossed, rows = couplings.crossed, couplings.rows_in_si()
    rw, length = _show(kinds.LENGTH, rows.rw[n]), _show(kinds.LENGTH, rows.length[n])
    steps, parts = [], []
    for axis, name in enumerate(AXES):
        across, component = crossed.across(axis)[n], crossed.components[n, axis]
        if across * component == 0.0:
            continue
        plane = _plane(crossed, n, axis)
        radius = float(crossed.radius(axis)[n])
        index = TWO_PI * across * component / math.log(radius / rows.rw[n])
        parts.append((name, _show(kinds.WELL_INDEX, index)))
        steps += [
            _centred_step(crossed, n, axis, radius)._replace(
                title=f"Equivalent radius of a well along {name} (Peaceman 1983, eq. 14)"
            ),
            Step(
                f"Index of the length along {name}, at zero skin",
                f"wi_{name} = 2 pi sqrt(k{plane.a} k{plane.b}) L{name} / ln(r0/rw)",
                f"{TWO_PI:.6g} sqrt({plane.ka} x {plane.kb}) x {_show(kinds.LENGTH, component)} "
                f"/ ln({_show(kinds.LENGTH, radius)} / {rw})",
                parts[-1][1],
            ),
        ]
    k_normal = _show(kinds.PERMEABILITY, rows.k_normal[n])
    extent = float(np.linalg.norm(crossed.components[n]))
    tx, ty, tz = (f"{c / extent:.6g}" for c in crossed.components[n])
    kx, ky, kz = (_show(kinds.PERMEABILITY, k) for k in crossed.k[:, n])
    steps.append(
        Step(
            "Permeability across the well, t the direction in the block",
            "k = sqrt(ky kz tx^2 + kx kz ty^2 + kx ky tz^2)",
            f"sqrt({ky} x {kz} x {tx}^2 + {kx} x {kz} x {ty}^2 + {kx} x {ky} x {tz}^2)",
            k_normal,
        )
    )
    if not parts:
        return steps
    logarithm = math.log(rows.r0[n] / rows.rw[n])
    total = TWO_PI * rows.k_normal[n] * rows.length[n] / logarithm
    whole = _show(kinds.WELL_INDEX, total)
    return [
        *steps,
        Step(
            "Vector sum of the indices (Shu 2005)",
            f"wi_0 = sqrt({' + '.join(f'wi_{name}^2' for name, _ in parts)})",
            f"sqrt({' + '.join(f'({value})^2' for _, value in parts)})",
            whole,
        ),
        Step(
            "Equivalent radius of the row",
            "r0 = rw exp(2 pi k length / wi_0)",
            f"{rw} x exp({TWO_PI:.6g} x {k_normal} x {length} / {whole})",
            _show(kinds.LENGTH, rows.r0[n]),
        ),
    ]


def _index_steps(couplings: Couplings, n: int) -> list[Step]:
    rows, crossed = couplings.rows_in_si(), couplings.crossed
    if couplings.method == "axis" or crossed.aligned[n]:
        steps = _along_axis_steps(couplings, n, int(crossed.dominant[n]))
    else:
        steps = _oblique_steps(couplings, n)
    if rows.k_normal[n] == 0.0:
        return [*steps, Step("Well index", "wi = 0 where nothing flows across the well", "", "0")]
    r0, rw, length = (_show(kinds.LENGTH, x[n]) for x in (rows.r0, rows.rw, rows.length))
    k_normal = _show(kinds.PERMEABILITY, rows.k_normal[n])
    logarithm = math.log(rows.r0[n] / rows.rw[n])
    resistance = logarithm + rows.skin[n]
    wi = couplings.in_si().wi[n]
    return [
        *steps,
        Step(
            "Flow resistance",
            "ln(r0/rw) + skin",
            f"ln({r0} / {rw}) + {rows.skin[n]:.6g} = {logarithm:.6g} + {rows.skin[n]:.6g}",
            f"{resistance:.6g}",
        ),
        Step(
            "Well index",
            "wi = 2 pi sector k length scale / (ln(r0/rw) + skin)",
            f"{TWO_PI:.6g} x {rows.sector[n]:.6g} x {k_normal} x {length} x "
            f"{rows.scale[n]:.6g} / {resistance:.6g}",
            f"{_in_product_units(wi)} = {_show(kinds.WELL_INDEX, wi)}",
        ),
    ]


def _in_product_units(wi: float) -> Quantity:
    """Return an index in the product of the units of permeability and length."""
    permeability = as_quantity(kinds.PERMEABILITY, 1.0).units
    length = as_quantity(kinds.LENGTH, 1.0).units
    return as_quantity(kinds.WELL_INDEX, wi).to(permeability * length)


def _rate_steps(state: WellState, n: int) -> list[Step]:
    basis = state.basis
    rows = state.couplings.in_si()
    wellbore, drawdown = state.coupling_pressure[n], state.coupling_drawdown[n]
    steps = []
    if basis.fluid.density is not None:
        gradient = f"{basis.fluid.density} x g x "
        depth, block_depth = (_show(kinds.COORDINATE, d[n]) for d in (rows.depth, rows.block_depth))
        steps = [
            Step(
                "Pressure in the wellbore at the coupling",
                "p_well = pwf + density g (depth - reference depth)",
                f"{state.pwf} + {gradient}({depth} - {state.reference_depth})",
                f"{wellbore}",
            ),
            Step(
                "Block pressure carried to the coupling's depth",
                "p_block + density g (depth - block depth)",
                f"{state.block_pressure[n]} + {gradient}({depth} - {block_depth})",
                f"{wellbore + drawdown}",
            ),
        ]
    mobility = f"{basis.relative_permeability[n]:.6g} / {basis.fluid.viscosity}"
    return [
        *steps,
        Step(
            "Reservoir rate of the coupling",
            "q = wi (kr / viscosity) (p_block - p_well)",
            f"{_show(kinds.WELL_INDEX, rows.wi[n])} x {mobility} x {drawdown}",
            f"{state.coupling_rate[n]}",
        ),
        Step(
            "Surface rate of the coupling",
            "q / formation volume factor",
            f"{state.coupling_rate[n]} / {basis.fluid.formation_volume_factor}",
            f"{state.coupling_surface_rate[n]}",
        ),
    ]
