"""Rates of the tutorial's well, coupling by coupling, at falling bottom-hole pressure."""

from __future__ import annotations

import warnings
from pathlib import Path

import matplotlib.pyplot as plt
import numpy as np
import pages
from draw import Theme
from matplotlib.figure import Figure

from wellindex import BackflowWarning, set_unit_system, unit_system, ureg

_TUTORIAL = Path(__file__).parents[1] / "tutorial.rst"


def draw(theme: Theme) -> Figure:
    """Draw the depleted case of the tutorial."""
    try:
        tutorial = pages.run(_TUTORIAL)
    finally:
        set_unit_system("metric")
    pwf = np.linspace(3250.0, 2300.0, 96)
    with unit_system("oilfield"), warnings.catch_warnings():
        warnings.simplefilter("ignore", BackflowWarning)
        state = tutorial["well"].at_pressure(
            ureg.Quantity(pwf, "psi"), block_pressure=tutorial["depleted"]
        )
        rates, total = state.coupling_surface_rate.magnitude, state.rate.magnitude
    figure, axes = plt.subplots(figsize=(8.0, 4.8))
    axes.grid(True)
    axes.axhspan(-4000, 0, color=theme.faint, alpha=0.25, lw=0)
    axes.axhline(0, color=theme.ink, lw=1)
    colours = (theme.blue, theme.green, theme.orange, theme.purple)
    styles = ("-", "--", "-", "-.")
    for n, (colour, style) in enumerate(zip(colours, styles, strict=True)):
        wide = 2.6 if n == 2 else 1.8
        axes.plot(
            pwf,
            rates[:, n],
            color=colour,
            ls=style,
            lw=wide,
            label=f"coupling {n}" + (", depleted" if n == 2 else ""),
        )
    axes.plot(pwf, total, color=theme.ink, lw=1.4, ls=":", label="whole well")
    axes.text(2310, -1950, "backflow: into the rock", ha="right", va="bottom")
    axes.set(
        xlim=(3250, 2300),
        ylim=(-2100, 4300),
        xlabel="bottom-hole pressure at 8200 ft, psi (falling to the right)",
        ylabel="surface rate, stb/day",
    )
    axes.legend(loc="upper left")
    return figure
