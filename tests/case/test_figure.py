"""The figure: cells cut along the well against geometry by hand; its files with the others."""

import importlib.util
import json
import os
import re
import struct
import subprocess
import sys
import warnings
from itertools import pairwise
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

import numpy as np
import pytest

from tests.case.cases import BUNDLED, STRAIGHT, command, edited, written
from tests.case.test_cells import CORNERS, _corners, _with
from wellindex import Path as WellPath
from wellindex import Permeability, TensorGrid, couple
from wellindex.case import figure
from wellindex.case.files import read_file
from wellindex.case.run import Outcome, run_case
from wellindex.case.section import plan, section

FIGURES = ["well_1_Demo-1.png", "well_1_Demo-1.svg"]
NAMES = sorted(["couplings.csv", "results.json", *FIGURES])


def _outcome(case: Path) -> Outcome:
    return run_case(read_file(case))


def _well(points: list[tuple[float, float, float]]) -> Any:
    """A path through blocks of 100 m x 100 m x 10 m whose top is at 1000 m."""
    grid = TensorGrid(["100 m"] * 8, ["100 m"] * 8, ["10 m"] * 3, origin=("0 m", "0 m", "1000 m"))
    path = WellPath([tuple(f"{x} m" for x in point) for point in points])
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        rows = couple(path, grid, Permeability("90 mD", "90 mD", "9 mD"), rw="0.1 m")
    return path, rows, grid


def _area(corners: np.ndarray[Any, Any]) -> float:
    """Area of a polygon by the shoelace formula."""
    x, y = corners.T
    return 0.5 * abs(float(np.sum(x * np.roll(y, 1) - y * np.roll(x, 1))))


def test_a_section_holds_the_cells_along_the_trace() -> None:
    """Northeast at 45 degrees: each block of the diagonal is 100 sqrt(2) m wide in the section."""
    path, rows, grid = _well([(150, 150, 1001), (450, 450, 1029)])
    cut = section(path, rows, grid)
    start, stop = cut.across
    assert start < 0.0 < 300.0 * 2**0.5 < stop
    strip = (stop - start) / 240
    for outline in cut.outlines:
        i, j, k = outline.cell
        top, bottom = outline.corners[:, 1].min(), outline.corners[:, 1].max()
        assert (top, bottom) == pytest.approx((1000 + 10 * k, 1010 + 10 * k), abs=1e-9)
        if i == j and 1 <= i <= 4:
            across = np.array([100.0 * i, 100.0 * (i + 1)]) * 2**0.5 - 150.0 * 2**0.5
            inside = np.clip(across, start, stop)
            found = outline.corners[:, 0].min(), outline.corners[:, 0].max()
            assert found == pytest.approx(inside.tolist(), abs=strip)
    whole = sum(_area(outline.corners) for outline in cut.outlines)
    assert whole == pytest.approx((stop - start) * 30.0, rel=1e-9)
    assert cut.path[-1].tolist() == pytest.approx([300.0 * 2**0.5, 1029.0])


def test_a_vertical_well_is_cut_from_west_to_east() -> None:
    path, rows, grid = _well([(250, 350, 1000), (250, 350, 1030)])
    cut = section(path, rows, grid)
    assert {outline.cell[1] for outline in cut.outlines} == {3}
    assert {outline.cell[0] for outline in cut.outlines} == {1, 2, 3}
    assert cut.across[0] == -cut.across[1] < -100.0


def test_a_plan_shows_the_columns_around() -> None:
    path, rows, grid = _well([(150, 150, 1001), (450, 450, 1029)])
    seen = plan(path, rows, grid)
    columns = {outline.cell[:2]: outline for outline in seen.outlines}
    assert set(columns) == {(i, j) for i in range(7) for j in range(7)}
    for (i, j), outline in columns.items():
        assert outline.corners.mean(axis=0).tolist() == pytest.approx([100 * i + 50, 100 * j + 50])
        assert _area(outline.corners) == pytest.approx(1e4)
    cells = rows.cell.tolist()
    strongest = max(
        (wi, k) for (i, j, k), wi in zip(cells, rows.wi.m.tolist(), strict=True) if (i, j) == (2, 2)
    )
    assert columns[2, 2].cell[2] == strongest[1]


def test_hexahedra_cut_from_blocks_look_the_same(tmp_path: Path) -> None:
    np.savez(tmp_path / "grid.npz", corners=_corners())
    flat, cornered = _outcome(BUNDLED), _outcome(written(tmp_path, _with(CORNERS)))
    for look in (section, plan):
        one, other = (
            look(each.wells[0].case.path, each.wells[0].couplings, each.case.grid)
            for each in (flat, cornered)
        )
        rings = [
            {(o.cell, round(float(o.corners[0, 0]), 3)): o.corners for o in each.outlines}
            for each in (one, other)
        ]
        assert rings[0].keys() == rings[1].keys()
        for key, corners in rings[0].items():
            assert np.allclose(corners, rings[1][key], atol=1e-6), key


def test_a_grid_of_many_layers_is_cut_coarsely(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("wellindex.case.section._MOST_PIECES", 90)
    monkeypatch.setattr("wellindex.case.section._MOST_COLUMNS", 3)
    path, rows, grid = _well([(150, 150, 1001), (450, 450, 1029)])
    cut = section(path, rows, grid)
    assert max(len(outline.corners) for outline in cut.outlines) < 40
    cells = {outline.cell[:2] for outline in plan(path, rows, grid).outlines}
    assert cells == {tuple(cell[:2]) for cell in rows.cell.tolist()}


def test_the_axes_are_named_with_units_and_depth_runs_down() -> None:
    outcome = _outcome(BUNDLED)
    with outcome.units():
        drawn = figure.draw(outcome.wells[0], outcome.case.grid)
    along, above, bar = drawn.axes
    assert along.get_ylabel() == "depth [ft]"
    assert along.get_xlabel().endswith("[ft]")
    assert along.yaxis_inverted()
    assert not along.xaxis_inverted()
    assert (above.get_xlabel(), above.get_ylabel()) == ("x, east [ft]", "y, north [ft]")
    assert above.get_aspect() == 1.0
    assert bar.get_ylabel() == "well index of the coupling [cP*rb/day/psi]"
    (well,) = outcome.wells
    largest = float(well.couplings.wi.m_as("cP*rb/day/psi").max())
    assert bar.get_ylim() == pytest.approx((0.0, largest))
    words = [text.get_text() for text in along.get_legend().get_texts()]  # type: ignore[union-attr]
    assert words == ["well path", "open in the grid", "index 0: tight rock"]
    texts = [text.get_text() for text in along.texts]
    for depth in ("8705", "8860", "8935", "9060"):
        assert f"measured depth {depth} ft" in texts


def test_a_vertical_well_is_named_and_scaled() -> None:
    outcome = _outcome(STRAIGHT)
    with outcome.units():
        drawn = figure.draw(outcome.wells[0], outcome.case.grid)
    along = drawn.axes[0]
    assert along.get_xlabel() == "east of the well [ft]"
    box = along.get_window_extent()
    across, down = np.ptp(along.get_xlim()), np.ptp(along.get_ylim())
    times = f"{(box.height / down) / (box.width / across):.2g}"
    assert (
        along.get_title() == f"Section along the well, depth at {times} times the horizontal scale"
    )


def test_labels_are_left_out_where_there_is_no_room(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(figure, "_MOST_LABELS", 0)
    monkeypatch.setattr(figure, "_NARROWEST", 0.5)
    monkeypatch.setattr(figure, "_MOST_ENDS", 3)
    outcome = _outcome(BUNDLED)
    with outcome.units():
        drawn = figure.draw(outcome.wells[0], outcome.case.grid)
    assert [list(axes.texts) for axes in drawn.axes[:2]] == [[], []]


def test_a_well_that_turns_back_shows_its_cells_twice() -> None:
    """East along y = 350 m, then back west a layer lower: the trace passes each column twice."""
    path, rows, grid = _well([(250, 350, 1005), (550, 350, 1005), (250, 350, 1015)])
    cut = section(path, rows, grid)
    outlines = [o.corners for o in cut.outlines if o.cell == (3, 3, 0)]
    assert len(outlines) == 2
    strip = (cut.across[1] - cut.across[0]) / 240
    spans = sorted((o[:, 0].min(), o[:, 0].max()) for o in outlines)
    # 300 m to 400 m east lies 50 m to 150 m after the start, and 150 m to 250 m after the turn.
    assert np.allclose(spans, [(50.0, 150.0), (450.0, 550.0)], atol=strip)


def test_colours_run_from_light_to_dark_in_grey() -> None:
    """Luminance by ITU-R BT.709, weights 0.2126, 0.7152, 0.0722 (from memory of the standard)."""
    from matplotlib import colormaps

    shades = colormaps["cividis"](np.linspace(0.92, 0.05, 40))[:, :3]
    grey = np.where(shades <= 0.04045, shades / 12.92, ((shades + 0.055) / 1.055) ** 2.4)
    luminance = grey @ [0.2126, 0.7152, 0.0722]
    assert all(later < earlier for earlier, later in pairwise(luminance))
    assert luminance[0] < 0.75  # apart from the white of cells without a coupling


def test_figures_are_written_with_the_results(tmp_path: Path) -> None:
    answer = command("run", BUNDLED, "--out", tmp_path / "out", "--figure")
    assert answer.code == 0, answer.err
    folder = tmp_path / "out"
    assert sorted(path.name for path in folder.iterdir()) == NAMES
    assert all(f"written: {folder / name}" in answer.out for name in NAMES)
    png = (folder / FIGURES[0]).read_bytes()
    assert png.startswith(b"\x89PNG\r\n\x1a\n")
    assert struct.unpack(">II", png[16:24]) == (1650, 870)
    root = ElementTree.fromstring((folder / FIGURES[1]).read_text(encoding="utf-8"))
    assert root.tag == "{http://www.w3.org/2000/svg}svg"
    before = {name: (folder / name).read_bytes() for name in NAMES}
    assert command("run", BUNDLED, "--out", folder, "--figure", "--force").code == 0
    assert {name: (folder / name).read_bytes() for name in NAMES} == before


def test_a_figure_that_exists_is_kept(tmp_path: Path) -> None:
    (tmp_path / FIGURES[0]).write_text("mine")
    answer = command("run", BUNDLED, "--out", tmp_path, "--figure")
    assert answer.code == 2
    assert f"{FIGURES[0]}' exists and is kept" in answer.err
    assert [path.name for path in tmp_path.iterdir()] == [FIGURES[0]]
    assert (tmp_path / FIGURES[0]).read_text() == "mine"


@pytest.mark.parametrize(("name", "call"), [("replace", 3), ("replace", 4), ("fsync", 4)])
def test_a_failure_among_the_figures_leaves_nothing(
    name: str, call: int, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    real, calls = getattr(os, name), []

    def failing(*args: object) -> None:
        calls.append(args)
        if len(calls) == call:
            raise OSError(28, "No space left on device")
        real(*args)

    monkeypatch.setattr(os, name, failing)
    answer = command("run", BUNDLED, "--out", tmp_path / "out", "--figure")
    assert (answer.code, answer.out) == (2, "")
    assert list(tmp_path.iterdir()) == []


def test_without_matplotlib_the_option_says_what_to_install(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    find = importlib.util.find_spec

    def without(name: str, package: str | None = None) -> Any:
        return None if name == "matplotlib" else find(name, package)

    monkeypatch.setattr(importlib.util, "find_spec", without)
    answer = command("run", BUNDLED, "--out", tmp_path / "out", "--figure")
    assert (answer.code, answer.out) == (2, "")
    assert "--figure needs matplotlib, which is not installed: pip install 'wellindex[report]'" in (
        answer.err
    )
    assert list(tmp_path.iterdir()) == []
    assert command("run", BUNDLED, "--out", tmp_path / "out").code == 0


def test_a_bad_case_draws_nothing(tmp_path: Path) -> None:
    case = written(tmp_path, edited(('"0.9 cP"', '"0.9"')))
    assert command("run", case, "--out", tmp_path / "out", "--figure").code == 2
    assert list(tmp_path.iterdir()) == [case]


def test_too_many_wells_to_draw(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("wellindex.case.figure.MOST_WELLS", 1)
    second = edited()[edited().index("[[wells]]") :].replace("Demo 1", "Demo 2")
    case = written(tmp_path, edited(extra="\n" + second))
    answer = command("run", case, "--out", tmp_path / "out", "--figure")
    assert (answer.code, answer.out) == (2, "")
    assert "--figure draws at most 1 wells, and the case has 2" in answer.err
    assert list(tmp_path.iterdir()) == [case]


@pytest.mark.parametrize(
    ("name", "stem"),
    [("a$b^{", "well_1_a-b"), ("7/../x", "well_1_7-x"), ("井戸", "well_1"), ("é" * 60, "well_1")],
)
def test_any_name_can_be_drawn(name: str, stem: str, tmp_path: Path) -> None:
    """No mathematics, no path and no warning is made of a well's name."""
    case = written(tmp_path, edited(('"Demo 1"', json.dumps(name))))
    answer = command("run", case, "--out", tmp_path / "out", "--figure")
    assert answer.code == 0, answer.err
    assert sorted(path.stem for path in (tmp_path / "out").glob("well_*")) == [stem, stem]


TIGHT = edited(("85 mD", "0 mD"), ("140 mD", "0 mD"))
SHAPES = {
    "a vertical well": edited(),
    "a well mostly in tight rock": TIGHT,
    "a level well": edited(
        ('"1575 ft", "1575 ft", "8190 ft"', '"1200 ft", "1575 ft", "8300 ft"'),
        ('"1575 ft", "1575 ft", "8320 ft"', '"1900 ft", "1575 ft", "8300 ft"'),
    ),
    "one short interval": edited().partition("[[wells.open]]")[0]
    + '[[wells.open]]\nfrom = "8261 ft"\nto = "8261.001 ft"\n',
    "a well along a side of the grid": edited(('"1575 ft", "1575 ft"', '"0 ft", "1575 ft"')),
}


@pytest.mark.parametrize("name", SHAPES)
def test_odd_wells_are_drawn(name: str, tmp_path: Path) -> None:
    outcome = _outcome(written(tmp_path, SHAPES[name]))
    files = figure.as_files(outcome)
    assert sorted(files) == FIGURES
    assert not re.search(rb"[ML \-]nan\b", files[FIGURES[1]])


def test_a_reader_s_settings_of_matplotlib_are_left_alone_and_without_effect() -> None:
    import matplotlib

    outcome = _outcome(STRAIGHT)
    plain = figure.as_files(outcome)
    with matplotlib.rc_context({"font.size": 30.0, "savefig.bbox": "tight"}):
        assert figure.as_files(outcome) == plain
        assert matplotlib.rcParams["font.size"] == 30.0


def test_the_command_draws_without_a_display_and_without_pyplot(tmp_path: Path) -> None:
    code = (
        "import sys\n"
        "from wellindex.__main__ import main\n"
        "assert 'matplotlib' not in sys.modules\n"
        f"arguments = ['run', {str(BUNDLED)!r}, '--out', {str(tmp_path / 'out')!r}, '--figure']\n"
        "assert main(arguments) == 0\n"
        "assert 'matplotlib.pyplot' not in sys.modules\n"
    )
    environment = {key: value for key, value in os.environ.items() if key != "DISPLAY"}
    done = subprocess.run(
        [sys.executable, "-W", "error", "-c", code], env=environment, capture_output=True
    )
    assert done.returncode == 0, done.stderr
    assert done.stderr == b""
