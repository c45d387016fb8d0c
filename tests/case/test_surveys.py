"""A well's path from a survey: lists, rows of stations or a CSV beside the case."""

import hashlib
import json
import os
from pathlib import Path
from typing import Any

import pytest

from tests.case.cases import BUNDLED, command, edited, written

PATH = edited()[edited().index("path = [") : edited().index("wellbore_radius")]
FALL = [("8215 ft", 8190.0), ("8280 ft", 8255.0), ("8345 ft", 8320.0)]
STATIONS = [(md, "0 degree", "77 degree") for md, _depth in FALL]
HEAD = 'head = ["1575 ft", "1575 ft", "8190 ft"]'
CSV = "measured_depth [ft],inclination [degree],azimuth [degree]\n" + "".join(
    f"{md.removesuffix(' ft')},0,77\n" for md, _depth in FALL
)


def _case(survey: str) -> str:
    return edited((PATH, f"survey = {{ {survey} }}\n"))


def _rows(stations: list[tuple[str, str, str]]) -> str:
    return f"stations = {json.dumps(stations)}"


def _lists(stations: list[tuple[str, str, str]]) -> str:
    names = ("measured_depth", "inclination", "azimuth")
    columns = zip(names, map(list, zip(*stations, strict=True)), strict=True)
    return ", ".join(f"{name} = {json.dumps(column)}" for name, column in columns)


def _wells(folder: Path, text: str) -> list[dict[str, Any]]:
    answer = command("run", written(folder, text), "--out", folder / "out", "--force")
    assert answer.code == 0, answer.err
    wells: list[dict[str, Any]] = json.loads((folder / "out" / "results.json").read_text())["wells"]
    return wells


def _close(found: Any, wanted: Any) -> None:
    """Compare results item by item; floats to rounding."""
    if isinstance(wanted, dict):
        assert found.keys() == wanted.keys()
        for key in wanted:
            _close(found[key], wanted[key])
    elif isinstance(wanted, list):
        assert len(found) == len(wanted)
        for one, other in zip(found, wanted, strict=True):
            _close(one, other)
    elif isinstance(wanted, float):
        assert found == pytest.approx(wanted, rel=1e-10)
    else:
        assert found == wanted


@pytest.mark.parametrize("form", [_rows, _lists])
def test_a_vertical_survey_is_the_path_of_points(form: Any, tmp_path: Path) -> None:
    wanted = _wells(tmp_path, edited())
    _close(_wells(tmp_path, _case(f"{HEAD}, {form(STATIONS)}")), wanted)


def test_a_survey_from_csv_and_its_hash(tmp_path: Path) -> None:
    wanted = _wells(tmp_path, edited())
    (tmp_path / "surveys").mkdir()
    file = tmp_path / "surveys" / "demo 1.csv"
    file.write_text(CSV)
    _close(_wells(tmp_path, _case(f'{HEAD}, file = "surveys/demo 1.csv"')), wanted)
    results = json.loads((tmp_path / "out" / "results.json").read_text())
    digest = hashlib.sha256(file.read_bytes()).hexdigest()
    assert results["files"] == [{"file": "surveys/demo 1.csv", "sha256": digest}]


def test_azimuth_and_its_offset_turn_clockwise_from_north(tmp_path: Path) -> None:
    """A horizontal well at azimuth 50 plus 40 degrees runs due east: along x."""
    level = [("8215 ft", "90 degree", "50 degree"), ("8515 ft", "90 degree", "50 degree")]
    opened = (('from = "8240 ft"\nto = "8285 ft"', 'from = "8240 ft"\nto = "8500 ft"'),)
    cut = "\n[[wells.open]]\n" + 'from = "8303 ft"'
    head = 'head = ["1500 ft", "1575 ft", "8250 ft"], azimuth_offset = "40 degree"'
    text = edited((PATH, f"survey = {{ {head}, {_rows(level)} }}\n"), *opened).partition(cut)[0]
    points = '[["1500 ft", "1575 ft", "8250 ft"], ["1800 ft", "1575 ft", "8250 ft"]]'
    start = 'measured_depth_at_start = "8215 ft"'
    straight = edited((PATH, f"path = {points}\n{start}\n"), *opened).partition(cut)[0]
    found, wanted = _wells(tmp_path, text), _wells(tmp_path, straight)
    assert found[0]["couplings"]["i"]["values"] == [10, 11]
    _close(found, wanted)


def test_the_method_is_taken_and_said(tmp_path: Path) -> None:
    text = BUNDLED.read_text()
    (projected,) = _wells(tmp_path, text)
    (axis,) = _wells(tmp_path, text.replace("skin = 2\n", 'skin = 2\nmethod = "axis"\n'))
    assert (projected["method"], axis["method"]) == ("projection", "axis")
    assert projected["couplings"]["length"] == axis["couplings"]["length"]
    assert projected["couplings"]["wi"] != axis["couplings"]["wi"]


def test_the_bundled_case_is_deviated_and_crosses_the_shale(tmp_path: Path) -> None:
    (well,) = _wells(tmp_path, BUNDLED.read_text())
    couplings = well["couplings"]
    assert sum(couplings["length"]["values"]) == pytest.approx(155.0 + 125.0, rel=1e-9)
    cells = {(i, j) for i, j in zip(*(couplings[a]["values"] for a in "ij"), strict=True)}
    assert len(cells) > 1
    shale = [k == 1 for k in couplings["k"]["values"]]
    assert any(shale)
    assert [wi == 0.0 for wi in couplings["wi"]["values"]] == shale
    assert well["cautions"] == []


def _bad(md: str = "8345 ft", inclination: str = "0 degree") -> str:
    return f"{HEAD}, {_rows([*STATIONS[:2], (md, inclination, '77 degree')])}"


BAD = {
    "path and survey": (
        edited((PATH, f"{PATH}survey = {{ {HEAD}, {_rows(STATIONS)} }}\n")),
        "wells[0]: give either path or survey; got keys of both",
    ),
    "neither": (edited((PATH, "")), "wells[0]: give either path or survey; got neither"),
    "start beside a survey": (
        edited(
            (PATH, f"survey = {{ {HEAD}, {_rows(STATIONS)} }}\nmeasured_depth_at_start = '1 m'\n")
        ),
        "wells[0]: give either path or survey; got keys of both",
    ),
    "a text": (
        edited((PATH, 'survey = "demo.csv"\n')),
        "wells[0].survey: needs a table with the keys head, measured_depth",
    ),
    "no head": (_case(_rows(STATIONS)), "wells[0].survey.head: missing"),
    "two forms": (
        _case(f"{HEAD}, {_rows(STATIONS)}, {_lists(STATIONS)}"),
        "wells[0].survey: give either measured_depth, inclination, azimuth or stations or file; "
        "got keys of both",
    ),
    "no form": (_case(HEAD), "wells[0].survey: give either", "got neither"),
    "a list too few": (
        _case(f"{HEAD}, measured_depth = ['1 m', '2 m'], azimuth = ['0 degree', '0 degree']"),
        "wells[0].survey.inclination: missing",
    ),
    "rows of different length": (
        _case(f"{HEAD}, {_lists(STATIONS)}".replace('["0 degree", ', "[")),
        "wells[0].survey: one value per station is needed in each row",
    ),
    "one station": (
        _case(f"{HEAD}, {_rows(STATIONS[:1])}"),
        "wells[0].survey: a survey has at least two stations",
    ),
    "list of numbers": (
        _case(f"{HEAD}, {_lists(STATIONS)}".replace('"8280 ft"', "8280")),
        "wells[0].survey.measured_depth[1]: needs a position; got 8280; give a text with its unit",
    ),
    "no station": (_case(f"{HEAD}, stations = []"), "stations: needs a list of stations; got a"),
    "station of two": (
        _case(f"{HEAD}, stations = [['1 m', '0 degree']]"),
        "wells[0].survey.stations[0]: needs a station of three texts",
    ),
    "not increasing": (
        _case(_bad(md="8280 ft")),
        "wells[0].survey: measured depth must increase; stations 1 and 2",
    ),
    "beyond upright": (
        _case(_bad(inclination="181 degree")),
        "wells[0].survey.stations[2][1]: needs an inclination",
        "got '181 degree'",
    ),
    "angle without unit": (
        _case(_bad(inclination="12")),
        "wells[0].survey.stations[2][1]: needs an inclination; got '12'; give a text with its unit",
    ),
    "angle in feet": (_case(_bad(inclination="12 ft")), "stations[2][1]: needs an inclination"),
    "straight back": (
        _case(_bad(inclination="180 degree")),
        "wells[0].survey: the well turns straight back between stations 1, 2",
    ),
    "arcs of light years": (
        _case(_bad(md="1e15 ft", inclination="90 degree")),
        "wells[0].survey: the arcs between the stations need more than 50000 chords",
    ),
    "too far to calculate with": (
        _case(_bad(md="1e308 ft", inclination="90 degree")),
        "wells[0].survey: the",
    ),
    "open outside the survey": (
        _case(f"{HEAD}, {_rows(STATIONS)}").replace('"8315 ft"', '"8350 ft"'),
        "wells[0].open[1]: open[1] leaves the path, which runs from 8215 ft to 8345 ft",
    ),
    "misses the grid": (
        _case(f"{HEAD}, {_rows(STATIONS)}").replace('"1575 ft", "1575 ft"', '"-90 ft", "1575 ft"'),
        "wells[0].open: the open interval from 8240 ft to 8285 ft",
        "crosses no block of the grid",
    ),
}


@pytest.mark.parametrize("name", BAD)
def test_a_bad_survey_is_refused_in_words(name: str, tmp_path: Path) -> None:
    text, *words = BAD[name]
    case = written(tmp_path, text)
    answer = command("run", case, "--out", tmp_path / "out")
    assert (answer.code, answer.out) == (2, "")
    for part in words:
        assert part in answer.err
    assert list(tmp_path.iterdir()) == [case]


BAD_FILES = {
    "no column": (b"measured_depth [ft],azimuth [degree]\n", "no column 'inclination'"),
    "no unit": (CSV.replace(" [ft]", "").encode(), "column 'measured_depth' has no unit"),
    "wrong unit": (CSV.replace("[ft]", "[psi]").encode(), "measured_depth: needs a position"),
    "no such unit": (CSV.replace("[ft]", "[fod]").encode(), "unknown unit 'fod'"),
    "no number": (CSV.replace("8280", "82B0").encode(), "row 3: measured_depth is no number"),
    "not finite": (CSV.replace("8280", "nan").encode(), "row 3: measured_depth is no number"),
    "cell missing": (CSV.replace(",0,77\n", "\n").encode(), "row 2: inclination is no number: ''"),
    "header alone": (CSV.partition("\n")[0].encode(), "demo.csv"),
    "empty": (b"", "demo.csv: the file is empty"),
    "not utf-8": (b"\xff\xfe" + CSV.encode(), "demo.csv"),
    "null byte": (CSV.replace("8280", "82\x0080").encode(), "demo.csv"),
    "twice the same column": (
        CSV.replace("azimuth [degree]", "inclination [degree]").encode(),
        "column 'inclination' stands twice in the header",
    ),
    "stations out of order": (CSV.replace("8280", "8180").encode(), "stations 0 and 1 have"),
    "inclination of 190": (CSV.replace(",0,", ",190,").encode(), "inclination"),
}


@pytest.mark.parametrize("name", BAD_FILES)
def test_a_bad_file_is_refused_in_words(name: str, tmp_path: Path) -> None:
    content, words = BAD_FILES[name]
    (tmp_path / "demo.csv").write_bytes(content)
    case = written(tmp_path, _case(f'{HEAD}, file = "demo.csv"'))
    answer = command("run", case, "--out", tmp_path / "out")
    assert (answer.code, answer.out) == (2, "")
    assert "1 problem\n  wells[0].survey.file: " in answer.err
    assert words in answer.err
    assert not (tmp_path / "out").exists()


NAMES = {
    "absent": ("gone.csv", "gone.csv: there is no such file in the folder of the case"),
    "upwards": ("../demo.csv", "leads out of it: copy the file beside the case"),
    "absolute": ("/etc/passwd.csv", "needs the name of a file in the folder of the case or below"),
    "a drive": ("C:/demo.csv", "needs the name of a file in the folder of the case or below"),
    "backslash": ("surveys\\\\demo.csv", "written with '/'"),
    "folder": ("folder.csv", "folder.csv: this is no plain file"),
    "link that leads out": ("link.csv", "leads out of it"),
    "pipe": ("pipe.csv", "pipe.csv: this is no plain file"),
    "other ending": ("demo.txt", "needs the name of a file that ends in .csv; got 'demo.txt'"),
    "null character": ("a\\u0000.csv", "a text without control characters"),
    "too long": ("x" * 300 + ".csv", "needs a text of 1 to 200 characters"),
}


@pytest.mark.parametrize("name", NAMES)
def test_a_file_is_beside_the_case_or_refused(name: str, tmp_path: Path) -> None:
    file, words = NAMES[name]
    folder = tmp_path / "inner"
    (folder / "folder.csv").mkdir(parents=True)
    (tmp_path / "demo.csv").write_text(CSV)
    (folder / "link.csv").symlink_to(tmp_path / "demo.csv")
    os.mkfifo(folder / "pipe.csv")
    answer = command("check", written(folder, _case(f'{HEAD}, file = "{file}"')))
    assert (answer.code, answer.out) == (2, "")
    assert "wells[0].survey.file: " in answer.err
    assert words in answer.err


def test_a_file_that_is_no_text(tmp_path: Path) -> None:
    answer = command("check", written(tmp_path, _case(f"{HEAD}, file = 12")))
    assert "wells[0].survey.file: needs a text of 1 to 200 characters; got 12" in answer.err


def test_a_file_too_large(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("wellindex.case.beside.LARGEST_CSV", 50)
    (tmp_path / "demo.csv").write_text(CSV)
    answer = command("check", written(tmp_path, _case(f'{HEAD}, file = "demo.csv"')))
    assert answer.code == 2
    assert "demo.csv: the file is larger than 50 bytes" in answer.err


def test_too_many_stations_in_a_file(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("wellindex.case.surveys.MOST_STATIONS", 2)
    (tmp_path / "demo.csv").write_text(CSV)
    answer = command("check", written(tmp_path, _case(f'{HEAD}, file = "demo.csv"')))
    assert answer.code == 2
    assert "the survey has more than 2 stations" in answer.err
