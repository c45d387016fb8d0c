"""Where in its block a well stands: centre, side, corner, with sector and equivalent radius."""

from __future__ import annotations

import matplotlib.pyplot as plt
from draw import Theme
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Arc, Rectangle, Wedge

from wellindex import equivalent_radius

_SIZE = 100.0
_PLACES = (
    ("centre", "centre", (50.0, 50.0), 0.0, 360.0, "full circle"),
    ("west", "west side", (0.0, 50.0), -90.0, 90.0, "sector 1/2"),
    ("corner", "corner", (0.0, 0.0), 0.0, 90.0, "sector 1/4"),
)


def _closed(axes: Axes, theme: Theme, placement: str) -> None:
    """Hatch the no-flow sides that the well stands on."""
    style = {"facecolor": "none", "edgecolor": theme.ink, "hatch": "////", "lw": 0}
    if placement in ("west", "corner"):
        low = -9.0 if placement == "corner" else 0.0
        axes.add_patch(Rectangle((-9, low), 9, _SIZE - low, **style))
        axes.plot([0, 0], [0, _SIZE], color=theme.ink, lw=3)
    if placement == "corner":
        axes.add_patch(Rectangle((0, -9), _SIZE, 9, **style))
        axes.plot([0, _SIZE], [0, 0], color=theme.ink, lw=3)


def draw(theme: Theme) -> Figure:
    """Draw the three places in a square block of isotropic rock, to scale."""
    figure, panels = plt.subplots(1, 3, figsize=(9.6, 3.9), sharey=True)
    for axes, (placement, title, well, start, stop, sector) in zip(panels, _PLACES, strict=True):
        r0 = equivalent_radius.si(dx=_SIZE, dy=_SIZE, kx=1.0, ky=1.0, placement=placement)
        axes.add_patch(Rectangle((0, 0), _SIZE, _SIZE, fill=False, ec=theme.ink, lw=1.2))
        axes.add_patch(Wedge(well, r0, start, stop, fc=theme.blue, alpha=0.15, lw=0))
        axes.add_patch(Arc(well, 2 * r0, 2 * r0, theta1=start, theta2=stop, ec=theme.blue, lw=2))
        _closed(axes, theme, placement)
        axes.plot(*well, "o", color=theme.orange, ms=8, zorder=5, clip_on=False)
        axes.set_title(f"{title}\n{sector}, $r_0$ = {r0:.2f} m", fontsize=11)
        axes.set(xlim=(-12, 106), ylim=(-12, 106), aspect="equal", xlabel="x (east), m")
        axes.set(xticks=[0, 50, 100], yticks=[0, 50, 100])
        axes.tick_params(length=0)
        for side in ("left", "bottom"):
            axes.spines[side].set_visible(False)
    panels[0].set_ylabel("y (north), m")
    figure.tight_layout()
    return figure
