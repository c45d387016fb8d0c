"""Draw every figure of the documentation twice: for light and for dark pages."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any, NamedTuple

import matplotlib as mpl

mpl.use("Agg")

from matplotlib.figure import Figure


class Theme(NamedTuple):
    """Colours of one kind of page."""

    name: str
    page: str
    ink: str
    faint: str
    blue: str
    orange: str
    green: str
    purple: str


THEMES = (
    Theme("light", "#ffffff", "#1f2328", "#c9ced4", "#0b62b8", "#c2500a", "#1a7f4b", "#8250a8"),
    Theme("dark", "#131416", "#e4e7ea", "#4a5058", "#6cb2f5", "#f5a15c", "#6fcf97", "#c79bea"),
)


def _settings(theme: Theme) -> dict[str, Any]:
    inks = ("text.color", "axes.labelcolor", "xtick.color", "ytick.color", "axes.edgecolor")
    pages = ("figure.facecolor", "savefig.facecolor", "axes.facecolor")
    return {
        **dict.fromkeys(inks, theme.ink),
        **dict.fromkeys(pages, theme.page),
        "grid.color": theme.faint,
        "grid.linewidth": 0.6,
        "axes.spines.top": False,
        "axes.spines.right": False,
        "font.size": 11,
        "legend.frameon": False,
        "savefig.dpi": 150,
    }


def save(draw: Callable[[Theme], Figure], name: str, folder: Path) -> None:
    """Write one figure as PNG in both themes."""
    for theme in THEMES:
        with mpl.rc_context(_settings(theme)):
            figure = draw(theme)
            figure.savefig(folder / f"{name}-{theme.name}.png", bbox_inches="tight", pad_inches=0.1)


def all_figures(folder: Path) -> None:
    """Draw all."""
    import backflow
    import blocks_and_line
    import placement
    import profile_of_pressure

    folder.mkdir(parents=True, exist_ok=True)
    for module in (profile_of_pressure, blocks_and_line, placement, backflow):
        save(module.draw, module.__name__, folder)


if __name__ == "__main__":
    import sys

    sys.path[:0] = [str(Path(__file__).parents[1] / "scripts")]
    # The figures import this module by its name; let them find the one that runs.
    sys.modules["draw"] = sys.modules["__main__"]
    all_figures(Path(__file__).parents[1] / "_generated" / "figures")
