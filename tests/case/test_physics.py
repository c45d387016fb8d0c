"""Results of the command against the closed forms at 50 digits and a grid from print.

The case is read here with tomllib alone, its units by the exact definitions of the oracle.
"""

import csv
import hashlib
import json
from itertools import accumulate, pairwise
from pathlib import Path
from typing import Any, NamedTuple

import pytest
from mpmath import mpf  # type: ignore[import-untyped]

from tests.case.cases import STRAIGHT, command, document, edited, written
from tests.oracles import closed_form
from tests.published import tables
from wellindex import ureg

GRAVITY = closed_form.STANDARD_GRAVITY
INCH = 0.0254
RELATIVE = 1e-12
#: Sums and differences of pressures lose a digit or two of the 16.
DIFFERENCES = 1e-11


def _results(tmp_path: Path, text: str, *options: str) -> dict[str, Any]:
    answer = command("run", written(tmp_path, text), "--out", tmp_path / "out", *options, "--force")
    assert answer.code == 0, answer.err
    results: dict[str, Any] = json.loads((tmp_path / "out" / "results.json").read_text())
    return results


def _si(text: str) -> float:
    """Exact SI value of a text of the case; an inch and psia are not among the oracle's units."""
    if text.endswith(" in"):
        return float(text.removesuffix(" in")) * INCH
    return closed_form.si(text.replace("psia", "psi").replace("**", "^"))


def _column(well: dict[str, Any], name: str) -> list[float]:
    column = well["couplings"][name]
    unit = str(column["unit"]).replace("**", "^") if column["unit"] else "dimensionless"
    factor = float(closed_form.in_si(unit))
    return [value * factor for value in column["values"]]


class Row(NamedTuple):
    """One coupling of the straight case by hand."""

    layer: int
    wi: mpf
    depth: float
    block_depth: float


def _rows(case: dict[str, Any]) -> list[Row]:
    """Couplings of a vertical well: layer by layer, interval by interval."""
    grid, rock, (well,) = case["grid"], case["rock"], case["wells"]
    thickness = [_si(text) for text in grid["dz"]]
    tops = list(accumulate(thickness, initial=_si(grid["origin"][2])))
    shift = _si(well["path"][0][2]) - _si(well["measured_depth_at_start"])
    rows = []
    for opened in well["open"]:
        upper, lower = _si(opened["from"]) + shift, _si(opened["to"]) + shift
        for layer, (top, bottom) in enumerate(pairwise(tops)):
            start, stop = max(top, upper), min(bottom, lower)
            if stop - start < 1e-6:
                continue
            net = rock["net_to_gross"]["by_layer"][layer]
            wi = closed_form.well_index(
                dx=_si(grid["dx"]["size"]),
                dy=_si(grid["dy"]["size"]),
                dz=thickness[layer],
                kx=_si(rock["kx"]["by_layer"][layer]) * net,
                ky=_si(rock["ky"]["by_layer"][layer]) * net,
                kz=_si(rock["kz"]["by_layer"][layer]),
                rw=_si(well["wellbore_radius"]),
                skin=opened.get("skin", well["skin"]),
                length=stop - start,
            )
            rows.append(Row(layer, wi, 0.5 * (start + stop), 0.5 * (top + bottom)))
    return rows


class Flow(NamedTuple):
    """Reservoir rates by hand at a bottom-hole pressure, and their sum's change with it."""

    rates: list[mpf]
    total: mpf
    slope: mpf


def _flow(case: dict[str, Any], pwf: float | mpf) -> Flow:
    """q = wi/mu (p_block - p_well), both at the coupling's depth by the fluid's head rho g z."""
    fluid, (well,) = case["fluid"], case["wells"]
    gradient = mpf(_si(fluid["density"])) * mpf(GRAVITY)
    viscosity = mpf(_si(fluid["viscosity"]))
    reference = _si(well["reference_depth"])
    rates, slope = [], mpf(0)
    for row in _rows(case):
        block = _si(well["block_pressure"]["by_layer"][row.layer])
        inside = mpf(block) + gradient * (mpf(row.depth) - mpf(row.block_depth))
        wellbore = mpf(pwf) + gradient * (mpf(row.depth) - mpf(reference))
        rates.append(row.wi / viscosity * (inside - wellbore))
        slope += row.wi / viscosity
    return Flow(rates, sum(rates), slope)


def test_the_indices_of_the_straight_case(tmp_path: Path) -> None:
    (well,) = _results(tmp_path, edited())["wells"]
    rows = _rows(document())
    assert [row.layer for row in rows] == well["couplings"]["k"]["values"] == [0, 1, 2, 4]
    assert well["couplings"]["i"]["values"] == well["couplings"]["j"]["values"] == [10] * 4
    assert _column(well, "wi") == pytest.approx([float(row.wi) for row in rows], rel=RELATIVE)
    assert _column(well, "depth") == pytest.approx([row.depth for row in rows], rel=RELATIVE)
    assert _column(well, "block_depth") == pytest.approx(
        [row.block_depth for row in rows], rel=RELATIVE
    )
    assert rows[1].wi == 0.0


def test_the_rates_of_the_straight_case(tmp_path: Path) -> None:
    (well,) = _results(tmp_path, edited())["wells"]
    case = document()
    flow = _flow(case, _si(case["wells"][0]["at_pressure"]))
    factor = _si(case["fluid"]["formation_volume_factor"])
    assert _column(well, "reservoir_rate") == pytest.approx(
        [float(rate) for rate in flow.rates], rel=DIFFERENCES
    )
    day = 86400.0
    barrel = float(closed_form.in_si("rb"))
    assert well["reservoir_rate"]["unit"] == "rb/day"
    assert well["reservoir_rate"]["value"] * barrel / day == pytest.approx(
        float(flow.total), rel=DIFFERENCES
    )
    assert well["surface_rate"]["unit"] == "stb/day"
    assert well["surface_rate"]["value"] * barrel / day == pytest.approx(
        float(flow.total) / factor, rel=DIFFERENCES
    )


@pytest.mark.parametrize("rate", ["900 stb/day", "1125 rb/day"])
def test_the_pressure_of_the_straight_case_at_a_rate(rate: str, tmp_path: Path) -> None:
    text = edited(('at_pressure = "3050 psia"', f'at_rate = "{rate}"'))
    (well,) = _results(tmp_path, text)["wells"]
    case = document()
    at_zero = _flow(case, 0.0)
    reservoir = _si("1125 rb/day")  # 900 stb/day at 1.25 rb/stb
    pwf = (at_zero.total - mpf(reservoir)) / at_zero.slope
    assert well["bottom_hole_pressure"]["unit"] == "psi"
    assert well["bottom_hole_pressure"]["value"] * _si("1 psi") == pytest.approx(
        float(pwf), rel=DIFFERENCES
    )
    assert well["surface_rate"]["value"] == pytest.approx(900.0, rel=DIFFERENCES)


def test_gauge_pressures_rest_on_the_site_pressure(tmp_path: Path) -> None:
    text = edited(('at_pressure = "3050 psia"', 'at_pressure = "3035.5 psig"'))
    (well,) = _results(tmp_path, text)["wells"]
    assert well["bottom_hole_pressure"]["value"] == pytest.approx(3035.5 + 14.5, rel=RELATIVE)


def _comparison_case() -> str:
    """The 1981 comparison grid as a case; fluids and pressures are ours: indices need none."""
    given = tables.given("comparison_1981")
    nx, ny, _nz = given["blocks"]
    width = closed_form.in_si(given["dx"]) / closed_form.in_si("ft")
    layers = given["layers"]
    tops = list(accumulate((_feet(layer["dz"]) for layer in layers), initial=0.0))

    def by_layer(key: str) -> str:
        return json.dumps([layer[key] for layer in layers])

    lines = [
        'title = "Comparison grid of 1981"',
        "[grid]",
        f'dx = {{ size = "{given["dx"]}", count = {nx} }}',
        f'dy = {{ size = "{given["dy"]}", count = {ny} }}',
        f"dz = {by_layer('dz')}",
        "[rock]",
        *(f"{key} = {{ by_layer = {by_layer(key)} }}" for key in ("kx", "ky", "kz")),
        "[fluid]",
        'viscosity = "1 cP"',
        "formation_volume_factor = 1.2",
    ]
    for number, well in enumerate(given["wells"]):
        x, y = ((each - given["first_index"] + 0.5) * float(width) for each in well["block"])
        layer = well["layer"] - given["first_index"]
        top, bottom = tops[layer], tops[layer + 1]
        sign = "-" if well["role"] == "injector" else ""
        lines += [
            "[[wells]]",
            f'name = "W{number}"',
            f'role = "{well["role"]}"',
            f'path = [["{x} ft", "{y} ft", "{top} ft"], ["{x} ft", "{y} ft", "{bottom} ft"]]',
            f'wellbore_radius = "{given["rw"]}"',
            f'placement = "{well["at"]}"',
            'block_pressure = "4800 psia"',
            f'at_rate = "{sign}1000 rb/day"',
        ]
    return "\n".join(lines)


def _feet(text: str) -> float:
    return float(closed_form.in_si(text) / closed_form.in_si("ft"))


def test_the_published_comparison_grid_with_both_wells(tmp_path: Path) -> None:
    producer, injector = _results(tmp_path, _comparison_case(), "--units", "oilfield")["wells"]
    for well, name, cell in (
        (producer, "producer", (9, 9, 2)),
        (injector, "injector", (0, 0, 0)),
    ):
        assert well["role"] == name
        couplings = well["couplings"]
        assert [couplings[axis]["values"] for axis in "ijk"] == [[index] for index in cell]
        checks = {check.id: check for check in tables.load("comparison_1981")}
        for quantity, column in (("radius", "r0"), ("index", "wi")):
            check = checks[f"{name}-{quantity}"]
            assert couplings[column]["unit"] == check.unit
            assert couplings[column]["values"][0] == pytest.approx(
                check.computed, rel=check.tolerance
            )
        names = ("dx", "dy", "dz", "kx", "ky", "kz", "rw")
        inputs = closed_form.arguments(checks[f"{name}-index"].inputs, *names)
        exact = float(closed_form.well_index(**inputs))
        assert _column(well, "wi") == pytest.approx([exact], rel=RELATIVE)
        # At 1 cP the drawdown of 1000 rb/day is 1000 over the index in cP*rb/day/psi.
        drawdown = 1000.0 / couplings["wi"]["values"][0] * (1 if name == "producer" else -1)
        assert couplings["drawdown"]["values"][0] == pytest.approx(drawdown, rel=DIFFERENCES)


def test_results_do_not_depend_on_the_unit_system(tmp_path: Path) -> None:
    in_si: dict[str, dict[str, Any]] = {}
    for system in ("si", "metric", "oilfield", "darcy"):
        (well,) = _results(tmp_path, edited(), "--units", system)["wells"]
        in_si[system] = {
            name: ureg.Quantity(column["values"], column["unit"]).to_base_units().magnitude
            for name, column in well["couplings"].items()
            if column["unit"]
        }
        for name in ("bottom_hole_pressure", "reference_depth", "surface_rate", "reservoir_rate"):
            value = ureg.Quantity(well[name]["value"], well[name]["unit"])
            in_si[system][f"well {name}"] = value.to_base_units().magnitude
    assert len(in_si["si"]) == 18
    for system, values in in_si.items():
        for name, value in values.items():
            assert value == pytest.approx(in_si["si"][name], rel=RELATIVE), (system, name)


def test_units_of_the_case_hold_unless_overridden(tmp_path: Path) -> None:
    assert _results(tmp_path, edited())["unit_system"] == "oilfield"
    assert _results(tmp_path, edited(), "--units", "darcy")["unit_system"] == "darcy"
    metric = edited(('system = "oilfield"', "# system"))
    assert _results(tmp_path, metric)["unit_system"] == "metric"


def test_one_case_written_in_two_unit_systems(tmp_path: Path) -> None:
    field = _results(tmp_path, edited(), "--units", "si")["wells"][0]
    text = edited(
        ('"4.25 in"', '"10.795 cm"'),
        ('"0.9 cP"', '"9e-4 Pa*s"'),
        ('"1.25 rb/stb"', "1.25"),
        ('"150 ft"', '"45.72 m"'),
        ('"34 ft"', '"1036.32 cm"'),
        ('"8240 ft"', '"2511.552 m"'),
        ('"140 mD"', '"0.14 D"'),
    )
    metres = _results(tmp_path, text, "--units", "si")["wells"][0]
    for name in ("wi", "r0", "reservoir_rate", "drawdown"):
        assert metres["couplings"][name]["values"] == pytest.approx(
            field["couplings"][name]["values"], rel=DIFFERENCES
        )


def test_a_list_of_sizes_and_counted_sizes_are_the_same_grid(tmp_path: Path) -> None:
    short = _results(tmp_path, edited())["wells"]
    sizes = ", ".join(['"150 ft"'] * 10)
    long = edited(
        (
            'dx = { size = "150 ft", count = 21 }',
            f'dx = [{sizes}, {{ size = "150 ft", count = 11 }}]',
        )
    )
    assert _results(tmp_path, long)["wells"] == short


def test_ky_defaults_to_kx(tmp_path: Path) -> None:
    without = _results(tmp_path, edited(("ky = {", "#")))["wells"]
    alike = '"85 mD", "0 mD", "140 mD", "6 mD", "62 mD"'
    given = edited(('"60 mD", "0 mD", "100 mD", "6 mD", "45 mD"', alike))
    assert _results(tmp_path, given)["wells"] == without


def test_values_by_coupling_are_those_by_layer(tmp_path: Path) -> None:
    by_layer = _results(tmp_path, edited())["wells"]
    text = edited(
        (
            '{ by_layer = ["3610 psia", "3640 psia", "3590 psia", "3650 psia", "3660 psia"] }',
            '{ by_coupling = ["3610 psia", "3640 psia", "3590 psia", "3660 psia"] }',
        ),
        ("skin = 2\n", "skin = 2\nrelative_permeability = { by_coupling = [1, 1.0, 1, 1] }\n"),
    )
    assert _results(tmp_path, text)["wells"] == by_layer


def test_relative_permeability_scales_the_rates(tmp_path: Path) -> None:
    (whole,) = _results(tmp_path, edited())["wells"]
    text = edited(("skin = 2\n", "skin = 2\nrelative_permeability = 0.25\n"))
    (part,) = _results(tmp_path, text)["wells"]
    assert part["couplings"]["wi"] == whole["couplings"]["wi"]
    assert part["surface_rate"]["value"] == pytest.approx(
        0.25 * whole["surface_rate"]["value"], rel=RELATIVE
    )


def test_a_fluid_and_a_radius_of_its_own(tmp_path: Path) -> None:
    text = edited(
        ("skin = 4.5", 'skin = 4.5\nwellbore_radius = "3 in"'),
        extra='\n[wells.fluid]\nviscosity = "0.45 cP"\nformation_volume_factor = 1\n'
        'density = "48 lbm/ft**3"\n',
    )
    (base,) = _results(tmp_path, edited())["wells"]
    (own,) = _results(tmp_path, text)["wells"]
    assert _column(own, "rw")[-1] == pytest.approx(3 * INCH, rel=RELATIVE)
    rates = zip(_column(own, "reservoir_rate"), _column(base, "reservoir_rate"), strict=True)
    for mine, first in list(rates)[:3]:
        assert mine == pytest.approx(2.0 * first, rel=RELATIVE)
    assert own["surface_rate"]["value"] == own["reservoir_rate"]["value"]


def test_without_intervals_the_whole_path_is_open(tmp_path: Path) -> None:
    (well,) = _results(tmp_path, edited().partition("# Measured depths")[0])["wells"]
    assert well["couplings"]["k"]["values"] == [0, 1, 2, 3, 4]
    assert _column(well, "length") == pytest.approx(
        [_si(text) for text in document()["grid"]["dz"]], rel=1e-10
    )


def test_a_well_on_a_closed_side(tmp_path: Path) -> None:
    text = edited(
        ('"1575 ft", "1575 ft"', '"0 ft", "1575 ft"'),
        ("skin = 2\n", 'skin = 2\nplacement = "west"\n'),
    )
    (well,) = _results(tmp_path, text)["wells"]
    case = document()
    net = 0.9
    exact = closed_form.well_index(
        dx=_si("150 ft"),
        dy=_si("150 ft"),
        dz=_si("18 ft"),
        kx=_si("85 mD") * net,
        ky=_si("60 mD") * net,
        kz=_si("9 mD"),
        rw=_si(case["wells"][0]["wellbore_radius"]),
        skin=2.0,
        length=_si("13 ft"),
        placement="west",
    )
    assert _column(well, "wi")[0] == pytest.approx(float(exact), rel=1e-10)
    assert well["couplings"]["sector"]["values"] == [0.5] * 4


def test_backflow_is_said_in_print_and_in_the_file(tmp_path: Path) -> None:
    case = written(tmp_path, edited(('"3590 psia"', '"2900 psia"')))
    answer = command("run", case, "--out", tmp_path / "out")
    assert answer.code == 0
    assert "BACKFLOW: the producer takes in fluid through part of its couplings" in answer.out
    assert "caution: well Demo 1: the producer takes in fluid" in answer.out
    (well,) = json.loads((tmp_path / "out" / "results.json").read_text())["wells"]
    assert well["couplings"]["backflow"]["values"] == [False, False, True, False]
    assert well["well_backflow"] is (well["reservoir_rate"]["value"] < 0)
    assert len(well["cautions"]) == 1
    assert "caution: well Demo 1: the producer takes in fluid" in command("check", case).out


def test_assumptions_under_strain_are_said(tmp_path: Path) -> None:
    text = edited(('from = "8240 ft"', 'from = "8230 ft"'))
    answer = command("check", written(tmp_path, text))
    assert answer.code == 0
    lines = answer.out.splitlines()
    assert lines[1].startswith("caution: well Demo 1: 5 ft of the open interval from 8230 ft")


def test_the_csv_holds_the_same_numbers(tmp_path: Path) -> None:
    (well,) = _results(tmp_path, edited())["wells"]
    with (tmp_path / "out" / "couplings.csv").open(newline="") as file:
        header, *rows = list(csv.reader(file))
    assert header[0] == "well"
    for number, name in enumerate(header[1:], start=1):
        column = well["couplings"][name.partition(" [")[0]]
        assert name.partition(" [")[2].removesuffix("]") == (column["unit"] or "")
        assert [row[number] for row in rows] == [str(value) for value in column["values"]]


def test_the_json_restates_the_case(tmp_path: Path) -> None:
    results = _results(tmp_path, edited())
    assert results["given"] == document()
    assert results["wellindex"]
    assert results["files"] == []
    assert results["case"]["file"] == "case.toml"
    assert results["case"]["sha256"] == hashlib.sha256(STRAIGHT.read_bytes()).hexdigest()
    assert results["caution"].startswith("Screening calculations: not for well control")
