"""Every bad case: one message that names the key, what is expected and the remedy; nothing written.

The keys and words are the case file's own, so nothing outside the project can be their source.
"""

import sys
from pathlib import Path

import pytest

from tests.case.cases import command, edited, written

AT = 'at_pressure = "3050 psia"'
DZ = 'dz = ["18 ft", "5 ft", "34 ft", "11 ft", "27 ft"]'
DX = 'dx = { size = "150 ft", count = 21 }'
PRESSURES = '{ by_layer = ["3610 psia", "3640 psia", "3590 psia", "3650 psia", "3660 psia"] }'
LAST = 'from = "8303 ft"\nto = "8315 ft"'
HUGE = "0x" + "f" * 1500

EDITS = {
    "unknown key": (
        edited(("wellbore_radius", "welbore_radius")),
        "wells[0].welbore_radius: unknown key; did you mean 'wellbore_radius'?",
        "wells[0].wellbore_radius: missing",
    ),
    "unknown table": (
        edited(extra="\n[reservoir]\n"),
        "reservoir: unknown key; known here: title, grid, rock, wells, units, fluid",
    ),
    "unknown quoted key": (edited(extra='\n"a\\nb" = 1\n'), "'a\\nb': unknown key"),
    "missing key": (edited(('viscosity = "0.9 cP"', "")), "fluid.viscosity: missing"),
    "missing table": (edited(("[rock]", "[reck]")), "rock: missing", "did you mean 'rock'?"),
    "missing title": (edited(("title =", "#")), "title: missing; the file needs it"),
    "table where a text stands": (
        edited(('"4.25 in"', "{ size = 1 }")),
        "wells[0].wellbore_radius: needs a length; got a table",
    ),
    "text where a table stands": (
        edited(("[units]", 'fluid = "oil"\n[units]'), ("[fluid]", "[[other]]")),
        "fluid: needs a table with the keys viscosity, formation_volume_factor, density",
        "other: unknown key",
    ),
    "grid is a text": (
        edited(("[units]", 'grid = "fine"\n[units]'), ("[grid]", "[other]")),
        "grid: needs a table with the keys dx, dy, dz, origin; got 'fine'",
    ),
    "units is a text": (
        edited(("[units]", 'units = "oilfield"\n[other]')),
        "units: needs a table with the keys system, site_pressure; got 'oilfield'",
    ),
    "a well is a number": (
        edited(("[units]", "wells = [1]\n[units]")).partition("[[wells]]")[0],
        "wells[0]: needs a table with the keys name, role, path",
    ),
    "long list": (
        edited((DZ, "dz = [\n" + "1,\n" * 10_001 + "]")),
        "grid.dz: needs a list of at most 10000; got a list of 10001",
    ),
    "sum of rates beyond a float": (
        edited(('"0.9 cP"', '"1.2e-305 cP"')),
        "wells[0]: the numbers are too large, or too far apart in size",
    ),
    "wells is one table": (
        edited(("[[wells]]", "[wells]")),
        "wells: needs a list of tables: write [[wells]] above each well; got a table",
    ),
    "open is one table": (
        edited().replace("[[wells.open]]", "[wells.open]", 1).partition("[[wells.open]]")[0],
        "wells[0].open: needs a list of tables: write [[wells.open]] above each; got a table",
    ),
    "number without unit": (
        edited(('"4.25 in"', "0.354")),
        "wells[0].wellbore_radius: needs a length; got 0.354; "
        "give a text with its unit, such as '0.354 ft'",
    ),
    "text without unit": (
        edited(('"0.9 cP"', '"0.9"')),
        "fluid.viscosity: needs a viscosity; got '0.9'; give a text with its unit",
    ),
    "size without unit": (
        edited(('size = "150 ft"', "size = 150")),
        "grid.dx.size: needs a length; got 150; give a text with its unit, such as '150 ft'",
    ),
    "boolean for a number": (edited(("skin = 2", "skin = true")), "wells[0].skin", "got true"),
    "boolean for a length": (edited(('"4.25 in"', "true")), "wells[0].wellbore_radius", "got true"),
    "text for a skin": (
        edited(("skin = 2", 'skin = "2"')),
        "wells[0].skin: needs a skin (a plain number); got '2'; give a number without quotes",
    ),
    "wrong dimension": (
        edited(('"48 lbm/ft**3"', '"48 psi/ft**2"')),
        "fluid.density: needs a density; got '48 psi/ft**2'; use a unit such as kg/m**3",
    ),
    "zero length": (edited(('"34 ft"', '"0 ft"')), "grid.dz[2]: needs a length, positive"),
    "negative length": (edited(('"34 ft"', '"-1 ft"')), "grid.dz[2]: needs a length, positive"),
    "zero viscosity": (edited(('"0.9 cP"', '"0 cP"')), "fluid.viscosity: needs a viscosity, pos"),
    "negative permeability": (
        edited(('"140 mD"', '"-140 mD"')),
        "rock.kx.by_layer[2]: needs a permeability, zero or positive, and finite; got '-140 mD'",
    ),
    "net to gross above one": (
        edited(("0.95", "1.95")),
        "rock.net_to_gross.by_layer[2]: needs a fraction, between 0 and 1; got 1.95",
    ),
    "gas factor without unit": (
        edited(('"1.25 rb/stb"', "0.0045")),
        "fluid.formation_volume_factor",
        "a plain number must be between 0.5 and 10; otherwise give its unit",
    ),
    "normal cubic metre": (
        edited((AT, 'at_rate = "100 Nm3/day"')),
        "wells[0].at_rate",
        "a normal cubic metre is at 0 degC",
    ),
    "millions or thousands": (edited((AT, 'at_rate = "1 Msm3/day"')), "wells[0].at_rate", "write"),
    "gauge as a compressibility": (
        edited(("[[wells]]", 'compressibility = "1e-5 1/psig"\n[[wells]]')),
        "fluid.compressibility",
    ),
    "temperature difference": (
        edited(('"0.9 cP"', '"0.9 delta_degF"')),
        "fluid.viscosity: needs a viscosity",
    ),
    "milliday": (
        edited(('"140 mD"', '"140 D*day"')),
        "rock.kx.by_layer[2]",
        "needs a permeability",
    ),
    "garbage": (edited(('"4.25 in"', '"four inches"')), "cannot read 'four inches'"),
    "hostile power": (edited(('"4.25 in"', '"9**9**9**9 ft"')), "wells[0].wellbore_radius"),
    "hostile length": (edited(('"4.25 in"', f'"{"k" * 1500}m"')), "longer than 100 characters"),
    "hostile brackets": (edited(('"4.25 in"', f'"{"(" * 90}m"')), "wells[0].wellbore_radius"),
    "comma": (edited(('"4.25 in"', '"4,25 in"')), "write a decimal point"),
    "nan": (edited(("skin = 2", "skin = nan")), "wells[0].skin", "finite; got nan"),
    "infinity": (edited(("skin = 2", "skin = -inf")), "wells[0].skin", "finite; got -inf"),
    "nan as a text": (edited(('"4.25 in"', '"nan in"')), "'not a number' is not a quantity"),
    "overflow": (edited(('"4.25 in"', '"1e999 in"')), "wells[0].wellbore_radius"),
    "date": (
        edited(("skin = 2", "skin = 1979-05-27T07:32:00Z")),
        "wells[0].skin: needs a skin (a plain number); got the date or time 1979-05-27",
    ),
    "whole number of 1500 hex digits": (
        edited(("skin = 2", f"skin = {HUGE}")),
        "got a whole number beyond 1e15",
    ),
    "such a number for a role": (
        edited(('role = "producer"', f"role = {HUGE}")),
        "wells[0].role: needs one of 'producer', 'injector'; got a whole number beyond 1e15",
    ),
    "whole number too long to read": (
        edited(("skin = 2", f"skin = {'9' * 1900}")),
        "got a whole number beyond 1e15",
    ),
    "unknown role": (
        edited(('"producer"', '"Producer"')),
        "wells[0].role: needs one of 'producer', 'injector'; got 'Producer'; "
        "did you mean 'producer'?",
    ),
    "unknown placement": (
        edited(("skin = 2\n", 'skin = 2\nplacement = "center"\n')),
        "wells[0].placement",
        "did you mean 'centre'?",
    ),
    "unknown unit system": (
        edited(('"oilfield"  ', '"oilfeld"  ')),
        "units.system",
        "did you mean 'oilfield'?",
    ),
    "site pressure": (
        edited(('"14.5 psi"', '"30 psi"')),
        "units.site_pressure",
        "0.2 to 1.2 bar",
    ),
    "site pressure without unit": (edited(('"14.5 psi"', "14.5")), "such as '0.85 bar'"),
    "control character": (
        edited(('title = "', 'title = "\\u001b[31m')),
        "title: needs a text without control characters",
    ),
    "name a spreadsheet would calculate": (
        edited(('"Demo 1"', '"=1+1"')),
        "wells[0].name: needs a name that starts with a letter or a digit",
    ),
    "empty list": (edited((DZ, "dz = []")), "grid.dz: needs a list of sizes; got a list of 0"),
    "count of zero": (edited(("count = 21", "count = 0")), "grid.dx.count: needs a whole number"),
    "huge count": (
        edited(("count = 21", "count = 1000000000")),
        "grid.dx.count: needs a whole number from 1 to 10000; got 1000000000",
    ),
    "huge sum of counts": (
        edited((DX, 'dx = [{ size = "1 ft", count = 9000 }, { size = "2 ft", count = 9000 }]')),
        "grid.dx: 18000 blocks along one axis; at most 10000",
    ),
    "huge grid": (edited(("count = 21", "count = 9000")), "grid: 405000000 blocks are more than"),
    "values per layer": (
        edited(('["85 mD", "0 mD",', '["85 mD",')),
        "rock.kx.by_layer: needs 5 values, one per layer of the grid from the top down; "
        "got a list of 4",
    ),
    "values per coupling": (
        edited((PRESSURES, '{ by_coupling = ["3600 psia", "3700 psia"] }')),
        "wells[0].block_pressure.by_coupling: by_coupling holds 2 values, and the well has 4",
    ),
    "permeability per coupling": (
        edited(("ky = { by_layer", "ky = { by_coupling")),
        "rock.ky.by_coupling: unknown key",
        "rock.ky: needs one value, or a table with by_layer",
    ),
    "pressure twice": (
        edited((PRESSURES, '{ by_layer = ["1 psi"], by_coupling = ["1 psi"] }')),
        "wells[0].block_pressure: needs one value, or a table with by_layer or by_coupling",
    ),
    "point of two": (edited(('"1575 ft", "8190 ft"]', '"1575 ft"]')), "wells[0].path[0]: needs a"),
    "path of one point": (
        edited(('  ["1575 ft", "1575 ft", "8320 ft"],\n', "")),
        "wells[0].path: a path has at least two points",
    ),
    "same point twice": (
        edited(('"8320 ft"', '"8190 ft"')),
        "wells[0].path: points 0 and 1 are the same",
    ),
    "oblique path": (
        edited(('["1575 ft", "1575 ft", "8320 ft"]', '["1575 ft", "1975 ft", "8320 ft"]')),
        "wells[0].path: the path is not along one axis",
    ),
    "interval outside the grid": (
        edited(('"8240 ft"', '"8216 ft"'), ('"8285 ft"', '"8220 ft"')),
        "wells[0].open: the open interval from 8216 ft to 8220 ft in measured depth crosses no",
    ),
    "path outside the grid": (
        edited(('"1575 ft", "1575 ft"', '"9000 ft", "1575 ft"')),
        "crosses no block of the grid",
    ),
    "interval outside the path": (
        edited(('"8315 ft"', '"9315 ft"')),
        "wells[0].open[1]: open[1] leaves the path, which runs from 8215 ft to 8345 ft",
    ),
    "interval upside down": (
        edited(('"8315 ft"', '"8300 ft"')),
        "wells[0].open[1]: open[1] does not run forwards along the path",
    ),
    "intervals overlap": (
        edited(('"8303 ft"', '"8280 ft"')),
        "wells[0].open[1]: open[1] overlaps or precedes open[0]",
    ),
    "interval without an end": (edited(('to = "8315 ft"', "")), "wells[0].open[1].to: missing"),
    "block too small": (edited(('"4.25 in"', '"30 ft"')), "wells[0]: ln(r0/rw) is below 0.5"),
    "stimulated beyond the block": (
        edited(("skin = 4.5", "skin = -4.5")),
        "wells[0]: ln(r0/rw) + skin is zero or negative",
    ),
    "depths differ without density": (
        edited(("density = ", "#")),
        "wells[0]: the depths of couplings, block centres and reference differ",
        "give the fluid a density",
    ),
    "no fluid": (
        edited(("[fluid]", "[units.fluid]")),
        "wells[0].fluid: missing; give [fluid] for all wells, or this",
    ),
    "rate and pressure": (
        edited((AT, f'{AT}\nat_rate = "900 stb/day"')),
        "wells[0]: give exactly one of at_rate and at_pressure; got both",
    ),
    "neither": (
        edited((AT, "")),
        "wells[0]: give exactly one of at_rate and at_pressure; got neither",
    ),
    "rate against the role": (
        edited((AT, 'at_rate = "-900 stb/day"')),
        "wells[0].at_rate: a producer's rate is positive out of the ground",
    ),
    "rate beyond the well": (
        edited((AT, 'at_rate = "90000 stb/day"')),
        "wells[0].at_rate: this needs a pressure of",
        "the largest rate, at zero pressure, is",
    ),
    "all tight": (
        edited(("85 mD", "0 mD"), ("140 mD", "0 mD"), ("62 mD", "0 mD")),
        "wells[0]: no coupling can flow",
    ),
    "two wells of one name": (
        edited(extra="\n" + edited()[edited().index("[[wells]]") :]),
        "wells[0].name: 'Demo 1' stands twice",
        "wells[1].name: 'Demo 1' stands twice",
    ),
    "far origin": (edited(('"8210 ft"]', '"1e30 ft"]')), "grid.origin: so far away"),
    "numbers too far apart": (
        edited(('"0.9 cP"', '"1e-310 cP"')),
        "wells[0]: the numbers are too large, or too far apart in size",
    ),
}
SYNTAX = {
    "syntax": (b"title = \n", "this is not valid TOML", "line 1, column 9"),
    "duplicate key": (b"title = 'a'\ntitle = 'b'\n", "this is not valid TOML", "line 2"),
    "not utf-8": (b"title = '\xff'\n", "byte 9 is not UTF-8 text: save the file as UTF-8"),
    "deep lists": (b"x = " + b"[" * 1900, "too deep inside one another"),
    "number of 4400 digits": (b"x = [\n" + b"9" * 4400 + b"]", "is longer than 2000 bytes"),
    "long line": (b"x = 1\n" + b"a." * 1500 + b"b = 1", "line 2 is longer than 2000 bytes"),
    "large file": (b"#\n" * 600_000, "larger than 1000000 bytes"),
}


@pytest.mark.parametrize("name", EDITS)
def test_a_bad_case_is_refused_in_words(name: str, tmp_path: Path) -> None:
    text, *words = EDITS[name]
    case = written(tmp_path, text)
    answer = command("run", case, "--out", tmp_path / "out")
    assert answer.code == 2
    assert answer.out == ""
    assert answer.err.startswith(f"error: {case}: ")
    for part in words:
        assert part in answer.err
    assert list(tmp_path.iterdir()) == [case]
    assert command("check", case) == answer


@pytest.mark.parametrize("name", SYNTAX)
def test_a_file_that_is_no_case_is_refused_in_words(name: str, tmp_path: Path) -> None:
    content, *words = SYNTAX[name]
    case = tmp_path / "case.toml"
    case.write_bytes(content)
    answer = command("run", case, "--out", tmp_path / "out")
    assert answer.code == 2
    for part in words:
        assert part in answer.err
    assert list(tmp_path.iterdir()) == [case]


def test_a_whole_number_longer_than_python_reads(tmp_path: Path) -> None:
    case = written(tmp_path, edited(("skin = 2", f"skin = {'9' * 1900}")))
    most = sys.get_int_max_str_digits()
    sys.set_int_max_str_digits(640)
    try:
        answer = command("check", case)
    finally:
        sys.set_int_max_str_digits(most)
    assert answer.code == 2
    assert "a number in the file cannot be read" in answer.err


def test_all_problems_stand_in_one_message(tmp_path: Path) -> None:
    text = edited(
        ('"34 ft"', "34"),
        ('"0.9 cP"', '"0.9 psi"'),
        ("skin = 2", "skim = 2"),
        (AT, ""),
        ('"8315 ft"', "true"),
    )
    answer = command("check", written(tmp_path, text))
    assert "5 problems" in answer.err
    places = ("grid.dz[2]", "fluid.viscosity", "wells[0].skim", "wells[0]:", "wells[0].open[1].to")
    for place in places:
        assert f"\n  {place}" in answer.err


def test_problems_of_every_well_stand_in_one_message(tmp_path: Path) -> None:
    second = edited()[edited().index("[[wells]]") :].replace("Demo 1", "Demo 2")
    text = edited(extra="\n" + second).replace('"4.25 in"', '"30 ft"')
    answer = command("check", written(tmp_path, text))
    assert "2 problems" in answer.err
    assert "  wells[0]: ln(r0/rw)" in answer.err
    assert "  wells[1]: ln(r0/rw)" in answer.err


def test_a_long_list_of_problems_is_cut(tmp_path: Path) -> None:
    text = edited((DZ, "dz = [" + ",".join(["1"] * 300) + "]"))
    answer = command("check", written(tmp_path, text))
    assert "300 problems" in answer.err
    assert answer.err.endswith("  and 250 more\n")


def test_too_many_blocks_on_the_paths(tmp_path: Path) -> None:
    turns = ",\n".join(
        ['["1575 ft", "1575 ft", "8190 ft"],["1575 ft", "1575 ft", "8320 ft"]'] * 999
    )
    old = '  ["1575 ft", "1575 ft", "8190 ft"],\n  ["1575 ft", "1575 ft", "8320 ft"],\n'
    text = edited((old, turns), (DZ, 'dz = { size = "0.1 ft", count = 900 }'))
    text = text.replace("{ by_layer = [0.9, 1.0, 0.95, 0.6, 0.85] }", "1.0")
    for key in ("kx", "ky", "kz"):
        text = text.replace(f"{key} = ", f'{key} = "9 mD" #')
    text = text.replace(PRESSURES, '"3600 psia"')
    answer = command("check", written(tmp_path, text))
    assert answer.code == 2
    assert "faces of blocks; at most 50000" in answer.err


@pytest.mark.parametrize(
    ("name", "words"),
    [("missing.toml", "there is no such file"), ("", "this is a folder"), ("a\0b", "null")],
)
def test_a_path_that_is_no_file(name: str, words: str, tmp_path: Path) -> None:
    answer = command("run", tmp_path / name, "--out", tmp_path / "out")
    assert answer.code == 2
    assert words in answer.err
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    "arguments",
    [(), ("run",), ("solve", "x"), ("run", "x", "--units", "imperial"), ("check", "x", "--force")],
)
def test_wrong_arguments_exit_with_2(
    arguments: tuple[str, ...], capsys: pytest.CaptureFixture[str]
) -> None:
    with pytest.raises(SystemExit) as stopped:
        command(*arguments)
    assert stopped.value.code == 2
    assert capsys.readouterr().out == ""
