"""Figures of the wells of a case: the path through the grid in section and in plan."""

from __future__ import annotations

import importlib.util
import io
import re
import warnings
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from wellindex.case.run import Outcome, SolvedWell
from wellindex.case.section import Outline, Plan, Section, plan, section, strongest_of_columns
from wellindex.errors import CaseError
from wellindex.space.crossing import Grid
from wellindex.units import kinds
from wellindex.units.answers import number_in

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.colors import Colormap, Normalize
    from matplotlib.figure import Figure

Array = np.ndarray[Any, Any]

MOST_WELLS = 50
_SIZE = (11.0, 5.8)
_DOTS_PER_INCH = 150
_MOST_LABELS = 24
_MOST_ENDS = 12
#: A column narrower than this part of the plan has no room for its numbers.
_NARROWEST = 0.15
_FOOT = (
    "Screening calculation: not for well control, nor a substitute for licensed engineering and "
    "local regulation."
)


def require() -> None:
    """Refuse a figure where matplotlib is not installed."""
    if importlib.util.find_spec("matplotlib") is None:
        raise CaseError(
            "--figure needs matplotlib, which is not installed: pip install 'wellindex[report]', "
            "or leave the option out"
        )


def as_files(outcome: Outcome) -> dict[str, bytes]:
    """Return an SVG and a PNG of each well: their names and contents.

    Parameters
    ----------
    outcome : Outcome
        From `run_case`.

    Returns
    -------
    dict of str to bytes
        The same case gives the same bytes.

    Raises
    ------
    CaseError
        More wells than are drawn; no matplotlib.
    """
    require()
    import matplotlib

    if len(outcome.wells) > MOST_WELLS:
        raise CaseError(
            f"--figure draws at most {MOST_WELLS} wells, and the case has {len(outcome.wells)}: "
            "leave the option out, or split the case"
        )
    files = {}
    # A reader's own settings of matplotlib must not change a report.
    with outcome.units(), matplotlib.rc_context(), warnings.catch_warnings():
        matplotlib.rcdefaults()
        matplotlib.rcParams["svg.hashsalt"] = "wellindex"
        warnings.filterwarnings("ignore", message="Glyph")
        for number, well in enumerate(outcome.wells, start=1):
            figure = draw(well, outcome.case.grid)
            for ending, metadata in (("svg", {"Date": None}), ("png", {"Software": None})):
                stream = io.BytesIO()
                figure.savefig(
                    stream, format=ending, dpi=_DOTS_PER_INCH, metadata=metadata, facecolor="white"
                )
                files[f"{_stem(number, well.case.name)}.{ending}"] = stream.getvalue()
    return files


def _stem(number: int, name: str) -> str:
    """Return a file name that any disk can hold; the number keeps names apart."""
    words = "-".join(re.findall(r"[A-Za-z0-9]+", name))[:40]
    return f"well_{number}_{words}" if words else f"well_{number}"


def draw(well: SolvedWell, grid: Grid) -> Figure:
    """Draw one well: the grid cut along it, and the columns from above."""
    from matplotlib.colors import ListedColormap, Normalize
    from matplotlib.figure import Figure

    figure = Figure(figsize=_SIZE, layout="constrained")
    left, right = figure.subplots(1, 2, width_ratios=[1.55, 1.0])
    indices, unit = number_in(kinds.WELL_INDEX, well.couplings.in_si().wi)
    # Light to dark without a turn, so that a grey copy reads the same.
    light_to_dark = np.linspace(0.92, 0.05, 256)
    colours = ListedColormap(_cividis()(light_to_dark))
    scale = Normalize(0.0, max(float(np.max(indices)), np.finfo(float).tiny))
    by_cell: dict[tuple[int, ...], float] = {}
    for cell, index in zip(well.couplings.cell.tolist(), np.asarray(indices).tolist(), strict=True):
        by_cell[tuple(cell)] = max(index, by_cell.get(tuple(cell), 0.0))
    cut = section(well.case.path, well.couplings, grid)
    _draw_section(left, cut, well, by_cell, colours, scale)
    _draw_plan(right, plan(well.case.path, well.couplings, grid), well, by_cell, colours, scale)
    _add_key(figure, left, right, colours, scale, unit, any(v == 0.0 for v in by_cell.values()))
    figure.suptitle(
        f"Well {well.case.name}: its path through the grid and its couplings", parse_math=False
    )
    figure.supxlabel(_FOOT, fontsize=7, color="0.35")
    _state_exaggeration(figure, left)
    return figure


def _cividis() -> Colormap:
    from matplotlib import colormaps

    return colormaps["cividis"]


def _lengths(values: Any) -> tuple[Array, str]:
    numbers, unit = number_in(kinds.COORDINATE, np.asarray(values, dtype=float))
    return np.asarray(numbers), unit


def _draw_cells(
    axes: Axes,
    outlines: list[Outline],
    indices: list[float | None],
    colours: Colormap,
    scale: Normalize,
) -> None:
    """Fill the cells that the well is coupled to, and outline the others."""
    from matplotlib.collections import PolyCollection

    rings = [_lengths(outline.corners)[0] for outline in outlines]
    plain = [ring for ring, index in zip(rings, indices, strict=True) if index is None]
    tight = [ring for ring, index in zip(rings, indices, strict=True) if index == 0.0]
    coupled = [(ring, index) for ring, index in zip(rings, indices, strict=True) if index]
    axes.add_collection(PolyCollection(plain, facecolor="white", edgecolor="0.72", linewidth=0.6))
    axes.add_collection(
        PolyCollection(tight, facecolor="white", edgecolor="0.35", linewidth=0.8, hatch="////")
    )
    axes.add_collection(
        PolyCollection(
            [ring for ring, _index in coupled],
            facecolor=[colours(scale(index)) for _ring, index in coupled],
            edgecolor="0.25",
            linewidth=0.9,
        )
    )


def _open_stretches(well: SolvedWell) -> list[tuple[float, float]]:
    """Return where the well is open in the grid: measured depths in SI, from and to."""
    starts, stops = well.couplings.md_in.m_as("m"), well.couplings.md_out.m_as("m")
    joined = np.isclose(starts[1:], stops[:-1], rtol=0.0, atol=1e-6)
    first, last = starts[np.r_[True, ~joined]], stops[np.r_[~joined, True]]
    return list(zip(first.tolist(), last.tolist(), strict=True))


def _draw_path(axes: Axes, line: Array, measured_depth: Array, well: SolvedWell) -> None:
    """Draw the path thin, and thick where it is open in the grid."""
    from matplotlib.patheffects import Normal, Stroke

    def halo(width: float) -> list[Any]:
        return [Stroke(linewidth=width + 2.0, foreground="white"), Normal()]

    numbers = _lengths(line)[0]
    axes.plot(*numbers.T, color="black", linewidth=1.1, path_effects=halo(1.1), label="well path")
    for n, (start, stop) in enumerate(_open_stretches(well)):
        inner = measured_depth[(measured_depth > start) & (measured_depth < stop)]
        depths = np.concatenate(([start], inner, [stop]))
        part = np.stack([np.interp(depths, measured_depth, x) for x in numbers.T], axis=1)
        axes.plot(
            *part.T,
            color="black",
            linewidth=3.4,
            solid_capstyle="butt",
            path_effects=halo(3.4),
            label=None if n else "open in the grid",
            marker="o" if np.ptp(part, axis=0).max() == 0.0 else None,
        )


def _draw_section(
    axes: Axes,
    cut: Section,
    well: SolvedWell,
    by_cell: dict[tuple[int, ...], float],
    colours: Colormap,
    scale: Normalize,
) -> None:
    indices = [by_cell.get(outline.cell) for outline in cut.outlines]
    _draw_cells(axes, cut.outlines, indices, colours, scale)
    _draw_path(axes, cut.path, cut.measured_depth, well)
    (left, right), unit = _lengths(cut.across)
    (top, bottom), _unit = _lengths(cut.depths)
    axes.set_xlim(left, right)
    axes.set_ylim(bottom, top)
    flat = float(cut.path[-1, 0]) > 0.0
    words = (
        "horizontal distance along the well from its first point" if flat else "east of the well"
    )
    axes.set_xlabel(f"{words} [{unit}]")
    axes.set_ylabel(f"depth [{unit}]")
    _label_layers(axes, cut)
    _label_ends(axes, cut, well)


def _label_ends(axes: Axes, cut: Section, well: SolvedWell) -> None:
    """Write the measured depth at both ends of each open stretch."""
    ends = [end for stretch in _open_stretches(well) for end in stretch]
    if len(ends) > _MOST_ENDS:
        return
    for depth in ends:
        at = [float(np.interp(depth, cut.measured_depth, x)) for x in cut.path.T]
        (x, z, shown), unit = _lengths([*at, depth])
        at_right = at[0] > 0.3 * cut.across[0] + 0.7 * cut.across[1]
        axes.annotate(
            f"measured depth {shown:.6g} {unit}",
            (x, z),
            xytext=(-9, -5) if at_right else (9, 5),
            textcoords="offset points",
            ha="right" if at_right else "left",
            va="top" if at_right else "bottom",
            fontsize=7,
            bbox={"boxstyle": "round,pad=0.2", "fc": "white", "ec": "none", "alpha": 0.85},
            annotation_clip=True,
        )


def _label_layers(axes: Axes, cut: Section) -> None:
    """Write k at the left end of each layer."""
    start = cut.across[0]
    first = [each for each in cut.outlines if each.corners[:, 0].min() <= start]
    if len(first) > _MOST_LABELS:
        return
    for cell, corners in first:
        (x, z), _unit = _lengths([start, float(np.mean(corners[corners[:, 0] <= start, 1]))])
        axes.annotate(
            f"k {cell[2]}",
            (x, z),
            xytext=(4, 0),
            textcoords="offset points",
            fontsize=7,
            color="0.35",
            va="center",
            annotation_clip=True,
        )


def _draw_plan(
    axes: Axes,
    seen: Plan,
    well: SolvedWell,
    by_cell: dict[tuple[int, ...], float],
    colours: Colormap,
    scale: Normalize,
) -> None:
    columns = strongest_of_columns(well.couplings)
    coupled = [outline.cell[:2] in columns for outline in seen.outlines]
    indices = [
        by_cell[outline.cell] if near else None
        for outline, near in zip(seen.outlines, coupled, strict=True)
    ]
    _draw_cells(axes, seen.outlines, indices, colours, scale)
    _points, depths = well.case.path.in_si()
    _draw_path(axes, seen.path, depths, well)
    (west, east), unit = _lengths(seen.east)
    (south, north), _unit = _lengths(seen.north)
    axes.set_xlim(west, east)
    axes.set_ylim(south, north)
    axes.set_aspect("equal", adjustable="box")
    axes.set_xlabel(f"x, east [{unit}]")
    axes.set_ylabel(f"y, north [{unit}]")
    axes.set_title("Plan: each column by its largest index", fontsize=10)
    narrowest = _NARROWEST * (seen.east[1] - seen.east[0])
    for outline, near, index in zip(seen.outlines, coupled, indices, strict=True):
        if near and np.ptp(outline.corners[:, 0]) > narrowest:
            _label_column(axes, outline, seen.path, dark=scale(index or 0.0) > 0.55)


def _label_column(axes: Axes, outline: Outline, path: Array, *, dark: bool) -> None:
    """Write i and j into the corner of a column that the path keeps away from most."""
    middle = outline.corners.mean(axis=0)
    dense = np.concatenate([np.linspace(a, b, 9) for a, b in pairwise(path)])
    inner = middle + 0.75 * (outline.corners - middle)
    apart = np.hypot(*(inner[:, np.newaxis] - dense).transpose(2, 0, 1)).min(axis=1)
    corner = outline.corners[int(np.argmax(apart))]
    east, north = (corner < middle).tolist()
    (x, y), _unit = _lengths(corner)
    axes.annotate(
        f"i {outline.cell[0]}, j {outline.cell[1]}",
        (float(x), float(y)),
        xytext=(3 if east else -3, 3 if north else -3),
        textcoords="offset points",
        ha="left" if east else "right",
        va="bottom" if north else "top",
        fontsize=7,
        color="white" if dark else "black",
        annotation_clip=True,
    )


def _add_key(
    figure: Figure,
    left: Axes,
    right: Axes,
    colours: Colormap,
    scale: Normalize,
    unit: str,
    tight: bool,
) -> None:
    from matplotlib.cm import ScalarMappable
    from matplotlib.patches import Patch

    bar = figure.colorbar(
        ScalarMappable(scale, colours), ax=[left, right], shrink=0.85, pad=0.02, aspect=28
    )
    bar.set_label(f"well index of the coupling [{unit}]")
    handles, _labels = left.get_legend_handles_labels()
    if tight:
        handles.append(
            Patch(facecolor="white", edgecolor="0.35", hatch="////", label="index 0: tight rock")
        )
    left.legend(handles=handles, loc="best", fontsize=8, framealpha=0.92)


def _state_exaggeration(figure: Figure, axes: Axes) -> None:
    """Title the section with how much steeper than true it looks."""
    axes.set_title("Section along the well", fontsize=10)
    figure.draw_without_rendering()  # lays the axes out
    box = axes.get_window_extent()
    (left, right), (bottom, top) = axes.get_xlim(), axes.get_ylim()
    exaggeration = (box.height / abs(top - bottom)) / (box.width / abs(right - left))
    words = "true to scale"
    if abs(exaggeration - 1.0) > 0.05:
        words = f"depth at {exaggeration:.2g} times the horizontal scale"
    axes.set_title(f"Section along the well, {words}", fontsize=10)
