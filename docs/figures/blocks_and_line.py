"""Pressures of the blocks of a five-point grid against the analytic line ln r."""

from __future__ import annotations

import math

import matplotlib.pyplot as plt
import numpy as np
from draw import Theme
from matplotlib.figure import Figure

from wellindex import equivalent_radius

_HALF = 5
_SPACING = 100.0


def solve() -> tuple[np.ndarray, np.ndarray]:
    """Solve 11 x 11 square blocks with a unit sink in the middle one, mu/(k h) = 1.

    Ghost centres around the grid carry the analytic pressure ln(r)/(2 pi). Returns the distances
    of the block centres from the well, in block widths, and the pressures.
    """
    offsets = np.arange(-_HALF, _HALF + 1)
    number = {(i, j): n for n, (i, j) in enumerate((i, j) for i in offsets for j in offsets)}
    matrix, source = np.zeros((len(number),) * 2), np.zeros(len(number))
    for (i, j), row in number.items():
        for neighbour in ((i + 1, j), (i - 1, j), (i, j + 1), (i, j - 1)):
            matrix[row, row] += 1.0
            if neighbour in number:
                matrix[row, number[neighbour]] -= 1.0
            else:
                source[row] += math.log(math.hypot(*neighbour)) / (2 * math.pi)
    source[number[(0, 0)]] -= 1.0
    pressure = np.linalg.solve(matrix, source)
    return np.array([math.hypot(*block) for block in number]), pressure


def draw(theme: Theme) -> Figure:
    """Draw dimensionless pressure over distance, the latter logarithmic."""
    distance, pressure = solve()
    radius = np.geomspace(0.05, 8.0, 50)
    middle = distance == 0.0
    p_block = float(pressure[middle][0])
    r0 = math.exp(2 * math.pi * p_block)
    formula = equivalent_radius.si(dx=1.0, dy=1.0, kx=1.0, ky=1.0)
    figure, axes = plt.subplots(figsize=(8.0, 4.8))
    axes.grid(True, which="major")
    axes.semilogx(radius * _SPACING, np.log(radius) / (2 * math.pi), color=theme.blue, lw=2)
    axes.semilogx(
        distance[~middle] * _SPACING, pressure[~middle], "o", ms=6, mfc="none", color=theme.green
    )
    axes.plot([5, r0 * _SPACING], [p_block] * 2, color=theme.orange, ls="--", lw=1.4)
    axes.plot([r0 * _SPACING] * 2, [p_block, -0.5], color=theme.orange, ls=":", lw=1.4)
    axes.plot(r0 * _SPACING, p_block, "s", color=theme.orange, ms=8, zorder=4)
    axes.text(5.4, p_block + 0.012, "pressure of\nthe well's block", color=theme.orange)
    axes.text(
        r0 * _SPACING * 1.08,
        -0.47,
        f"$r_0$ = {r0 * _SPACING:.2f} m here\n{formula * _SPACING:.2f} m by the formula",
        color=theme.orange,
        va="bottom",
    )
    axes.text(130, -0.05, "the other 120 blocks,\nat their centres", color=theme.green, va="top")
    axes.text(42, -0.1, "analytic, $\\ln r$", color=theme.blue, ha="right")
    axes.set(
        xlim=(5, 800),
        ylim=(-0.5, 0.33),
        xlabel="distance from the well, m (blocks of 100 m)",
        ylabel=r"pressure, $p\,k h/(q\mu)$, no unit",
    )
    axes.set_xticks([10, 20, 50, 100, 200, 500], ["10", "20", "50", "100", "200", "500"])
    axes.minorticks_off()
    return figure
