"""The pressure around a well, with the block's pressure and the equivalent radius marked."""

from __future__ import annotations

import matplotlib.pyplot as plt
from draw import Theme
from matplotlib.figure import Figure

from wellindex import radial_profile, unit_system

_BLOCK = {"dx": "100 m", "dy": "100 m", "kx": "50 mD", "ky": "50 mD", "rw": "0.1 m"}
_PRESSURES = {"pwf": "150 bar", "p_block": "200 bar"}


def draw(theme: Theme) -> Figure:
    """Draw pressure over true distance, both sides of the well."""
    with unit_system("metric"):
        profile = radial_profile(**_BLOCK, **_PRESSURES)
        radius, pressure = profile.radius.magnitude, profile.pressure.magnitude
        r0, rw = profile.r0.magnitude, profile.rw.magnitude
    figure, axes = plt.subplots(figsize=(8.0, 4.6))
    half, p_block, pwf = 50.0, 200.0, 150.0
    axes.axvspan(-half, half, color=theme.faint, alpha=0.25, lw=0)
    for side in (-1, 1):
        axes.plot(side * radius, pressure, color=theme.blue, lw=2.2)
        axes.plot([side * r0] * 2, [pwf, p_block], color=theme.orange, lw=1.2, ls=":")
        axes.plot(side * r0, p_block, "o", color=theme.orange, ms=7, zorder=4)
    axes.plot([-half, half], [p_block] * 2, color=theme.orange, lw=1.6, ls="--")
    axes.plot([-rw, rw], [pwf] * 2, color=theme.green, lw=4, solid_capstyle="butt", zorder=4)
    axes.text(-48, p_block - 1.5, "block pressure", color=theme.orange, va="top")
    axes.text(2.0, pwf, "bottom-hole\npressure", color=theme.green, va="bottom")
    axes.annotate(
        f"$r_0$ = {r0:.2f} m",
        (r0, p_block),
        (r0 + 6, p_block - 10),
        color=theme.orange,
        arrowprops={"arrowstyle": "-", "color": theme.orange},
    )
    axes.text(49, 211, "pressure in the rock", color=theme.blue, ha="right", va="bottom")
    axes.text(0, 146.0, "one block, 100 m wide", ha="center", va="center")
    axes.set(
        xlim=(-53, 53),
        ylim=(143, 222),
        xlabel="distance from the well, m",
        ylabel="pressure, bar",
    )
    return figure
