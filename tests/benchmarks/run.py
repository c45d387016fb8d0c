"""Print how the package's speed and memory compare with plain code, side by side in one run.

    python -m tests.benchmarks.run [--write FILE]

Each line is a ratio of two measurements taken in turn on this machine, beside the bar that the
project holds itself to. It is a report, not a test: timings on a busy machine wander.
"""

from __future__ import annotations

import argparse
import os
import platform
import subprocess
import sys
import time
import tracemalloc
from collections.abc import Callable
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
import pint

from tests.benchmarks import hexahedra
from tests.benchmarks.formulas import bare_numpy, by_hand, plain_pint
from wellindex import HexahedralGrid, cross, equivalent_radius, ureg, well_index

BLOCK = {
    "dx": (150.0, "ft"),
    "dy": (120.0, "ft"),
    "dz": (20.0, "ft"),
    "kx": (120.0, "millidarcy"),
    "ky": (80.0, "millidarcy"),
    "kz": (12.0, "millidarcy"),
    "rw": (0.354, "ft"),
    "skin": (2.0, "dimensionless"),
}
ROUNDS = 9


class Line(NamedTuple):
    """One comparison: what, its ratio, the bar, and whether larger is better."""

    what: str
    ratio: float
    bar: float
    at_least: bool
    detail: str

    @property
    def meets(self) -> bool:
        """Whether the ratio meets the bar."""
        return self.ratio >= self.bar if self.at_least else self.ratio <= self.bar


def in_turn(
    calls: list[Callable[[], Any]], repeat: int, clock: Callable[[], float] = time.perf_counter
) -> list[float]:
    """Return the least seconds per call of each, measured in turn."""
    least = [float("inf")] * len(calls)
    for call in calls:
        call()
    for _ in range(ROUNDS):
        for n, call in enumerate(calls):
            start = clock()
            for _ in range(repeat):
                call()
            least[n] = min(least[n], (clock() - start) / repeat)
    return least


def _quantities(registry: Any) -> dict[str, Any]:
    return {name: registry.Quantity(*value) for name, value in BLOCK.items()}


def _arrays(size: int, seed: int = 7) -> dict[str, Any]:
    spread = np.random.default_rng(seed)
    return {
        name: ureg.Quantity(value * spread.uniform(0.9, 1.1, size), unit)
        for name, (value, unit) in BLOCK.items()
    }


def _bare(arrays: dict[str, Any]) -> dict[str, Any]:
    return {name: value.to_base_units().magnitude for name, value in arrays.items()}


def scalars() -> list[Line]:
    """Scalar calls against plain pint, a foreign registry's and a function by hand."""
    theirs = _quantities(pint.UnitRegistry())
    ours = _quantities(ureg)
    si = {name: float(value.to_base_units().magnitude) for name, value in ours.items()}
    plain, own, foreign = in_turn(
        [
            lambda: plain_pint(**theirs),
            lambda: well_index(**ours),
            lambda: well_index(**theirs),
        ],
        300,
    )
    kernel, hand = in_turn([lambda: well_index.si(**si), lambda: by_hand(**si)], 5000)
    assert abs(well_index.si(**si) / by_hand(**si) - 1.0) < 1e-12
    return [
        Line("scalar call: plain pint over ours", plain / own, 15, True, _us(plain, own)),
        Line(
            "foreign registry: plain pint over ours", plain / foreign, 4, True, _us(plain, foreign)
        ),
        Line(".si over a function by hand", kernel / hand, 1.3, False, _us(kernel, hand)),
    ]


def _made(registry: Any) -> Callable[[], dict[str, Any]]:
    """Return a maker of quantities by arithmetic, whose units are new objects each time."""
    units = {name: registry.Unit(unit) for name, (_, unit) in BLOCK.items() if name != "skin"}

    def make() -> dict[str, Any]:
        made = {name: BLOCK[name][0] * unit for name, unit in units.items()}
        return {**made, "skin": BLOCK["skin"][0]}

    return make


def fresh_units() -> list[Line]:
    """Calls on quantities made by arithmetic just before; making them is not counted."""
    registry = pint.UnitRegistry()
    lines = []
    for what, make in (("ours", _made(ureg)), ("a foreign registry's", _made(registry))):
        plain_make = _made(registry)
        making, call, plain_making, plain = in_turn(
            [
                make,
                lambda make=make: well_index(**make()),  # type: ignore[misc]
                plain_make,
                lambda plain_make=plain_make: plain_pint(**plain_make()),  # type: ignore[misc]
            ],
            300,
        )
        own, other = call - making, plain - plain_making
        bar = 4 if "foreign" in what else 8
        name = f"units made afresh, {what}: plain pint over ours"
        lines.append(Line(name, other / own, bar, True, _us(other, own)))
    return lines


def short_arrays() -> list[Line]:
    """Arrays of 10 to 100 elements against two scalar calls plus the bare formula."""
    lines = []
    ours = _quantities(ureg)
    for size in (10, 30, 100):
        arrays = _arrays(size)
        bare = _bare(arrays)
        scalar, array, formula = in_turn(
            [
                lambda: well_index(**ours),
                lambda arrays=arrays: well_index(**arrays),  # type: ignore[misc]
                lambda bare=bare: bare_numpy(**bare),  # type: ignore[misc]
            ],
            1000,
        )
        allowed = 2 * scalar + formula
        what = f"{size} elements: ours over two scalar calls plus the formula"
        lines.append(Line(what, array / allowed, 1.0, False, _us(array, allowed)))
    return lines


def a_million() -> list[Line]:
    """One million couplings against the bare formula: processor time and memory."""
    arrays = _arrays(1_000_000)
    bare = _bare(arrays)
    ours, formula = in_turn(
        [lambda: well_index(**arrays), lambda: bare_numpy(**bare)], 1, time.process_time
    )
    inputs = sum(value.magnitude.nbytes for value in arrays.values())
    tracemalloc.start()
    before = tracemalloc.get_traced_memory()[0]
    well_index(**arrays)
    peak = inputs + tracemalloc.get_traced_memory()[1] - before
    tracemalloc.stop()
    detail = f"{ours * 1e3:.1f} ms / {formula * 1e3:.1f} ms"
    return [
        Line("1e6 couplings: ours over bare numpy", ours / formula, 0.9, False, detail),
        Line(
            "1e6 couplings: peak memory over inputs", peak / inputs, 3, False, f"{peak >> 20} MiB"
        ),
    ]


def _index_of(n: int) -> tuple[Any, float, float]:
    """Return a grid of n**3 hexahedra, the time of its index and the peak memory of both."""
    given = ureg.Quantity(hexahedra.corners(n), "m")
    tracemalloc.start()
    grid = HexahedralGrid(given)
    grid.tree()
    peak = tracemalloc.get_traced_memory()[1] / given.magnitude.nbytes
    tracemalloc.stop()
    del given
    seconds = float("inf")
    for _ in range(3):
        grid._tree = None
        start = time.process_time()
        grid.tree()
        seconds = min(seconds, time.process_time() - start)
    return grid, seconds, peak


def through_hexahedra() -> list[Line]:
    """The same path through 1e6 and 8e6 cells of one box; needs 4 GB of memory."""
    small, small_index, peak = _index_of(100)
    large, large_index, _ = _index_of(200)
    path = hexahedra.straight_well()
    one, eight = in_turn(
        [lambda: cross(path, small), lambda: cross(path, large)], 3, time.process_time
    )
    rows = f"{len(cross(path, small))} and {len(cross(path, large))} rows"
    ms = f"{eight * 1e3:.1f} ms / {one * 1e3:.1f} ms, {rows}"
    built = f"{large_index:.2f} s / {small_index:.2f} s"
    return [
        Line("same path, 8e6 over 1e6 hexahedra", eight / one, 2.5, False, ms),
        Line("index of 8e6 over 1e6 hexahedra", large_index / small_index, 10, False, built),
        Line("grid and index: peak memory over the corners given", peak, 3, False, "1e6 cells"),
    ]


def many_wells() -> list[Line]:
    """1,000 wells of 200 stations: ten of them, against one leg's loop over a part of the cells."""
    wells, measured, cells = 1000, 10, 20_000
    grid = hexahedra.grid(100)
    paths = [hexahedra.deviated_well(seed) for seed in range(measured)]
    some = hexahedra.boxes(hexahedra.corners(100).reshape(-1, 8, 3)[:cells])
    start, stop = paths[0].points[100:102].m_as("m").tolist()
    ours, loop = in_turn(
        [
            lambda: [cross(path, grid) for path in paths],
            lambda: hexahedra.plain_loop(start, stop, some),
        ],
        1,
        time.process_time,
    )
    ours *= wells / measured
    loop *= 1e6 / cells * wells * 199
    detail = f"{loop / 3600:.0f} h / {ours:.0f} s, from {measured} wells and {cells} cells"
    what = "1,000 wells, 200 stations, 1e6 hexahedra: plain loop over ours"
    return [Line(what, loop / ours, 50, True, detail)]


def importing() -> list[Line]:
    """Import time against numpy and pint alone, in fresh processes."""

    # An installed package has its bytecode: the first, unmeasured round writes ours.
    cached = {name: v for name, v in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"}

    def run(code: str) -> Callable[[], Any]:
        return lambda: subprocess.run([sys.executable, "-c", code], check=True, env=cached)

    ours, base, empty = in_turn(
        [run("import wellindex"), run("import numpy, pint"), run("pass")], 1
    )
    ratio = (ours - empty) / (base - empty)
    detail = f"{(ours - empty) * 1e3:.0f} ms / {(base - empty) * 1e3:.0f} ms"
    return [Line("import wellindex over import numpy, pint", ratio, 1.25, False, detail)]


def _us(one: float, other: float) -> str:
    return f"{one * 1e6:.2f} us / {other * 1e6:.2f} us"


def markdown(lines: list[Line]) -> str:
    """Return the lines as a Markdown table."""
    rows = ["| what | ratio | bar | measured | |", "|---|---|---|---|---|"]
    for line in lines:
        sign = "at least" if line.at_least else "at most"
        verdict = "met" if line.meets else "MISSED"
        rows.append(
            f"| {line.what} | {line.ratio:.2f} | {sign} {line.bar:g} | {line.detail} | {verdict} |"
        )
    return "\n".join(rows)


def main() -> None:
    """Measure and print."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--write", type=Path, help="also write the table as Markdown")
    options = parser.parse_args()
    assert equivalent_radius.si(dx=1.0, dy=1.0, kx=1.0, ky=1.0) > 0.0
    lines = [
        *scalars(),
        *fresh_units(),
        *short_arrays(),
        *a_million(),
        *through_hexahedra(),
        *many_wells(),
        *importing(),
    ]
    versions = (
        f"Python {platform.python_version()}, numpy {np.__version__}, pint {pint.__version__}"
    )
    how = f"{versions}, {platform.machine()}; least of {ROUNDS}, taken in turn."
    text = f"{how}\n\n{markdown(lines)}\n"
    print(text)
    if options.write:
        options.write.parent.mkdir(parents=True, exist_ok=True)
        options.write.write_text(text, encoding="utf-8")


if __name__ == "__main__":
    main()
