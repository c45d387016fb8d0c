"""The shown calculation: its formulas evaluated again from the printed numbers alone."""

import math
import pickle
import re
from typing import Any

import numpy as np
import pytest
from mpmath import iv  # type: ignore[import-untyped]

from tests.builders import GRAVITY, blocks_of, brine, layered_couplings, layered_well, rock, route
from wellindex import (
    Couplings,
    DomainError,
    Liquid,
    ShapeError,
    UnitsError,
    Well,
    WellState,
    couple,
    unit_system,
    ureg,
    workings,
)
from wellindex.workings import Step

SYSTEMS = ["metric", "oilfield", "si", "darcy"]
PLACEMENTS = ["centre", "corner", "west", "north"]
ON_SIDE = {
    "corner": {"x": 0.0, "y": 0.0, "z": 70.0},
    "west": {"x": 0.0},
    "north": {"y": 180.0},
    "south": {"y": 0.0},
    "bottom": {"z": 70.0},
}
NUMBER = r"-?\d[\d.]*(?:e[+-]?\d+)?"
UNIT = r"(?!x\b|sqrt\b)[A-Za-z]\w*(?:\*\*\d+)?(?:[*/][A-Za-z]\w*(?:\*\*\d+)?)*"
PRINTED = re.compile(rf"(?P<number>{NUMBER})(?: (?P<unit>{UNIT}))?")


def interval(number: str, unit: str | None) -> Any:
    """All SI values that print as this number with six digits."""
    value = float(number)
    half = 0.5000001 * 10.0 ** (math.floor(math.log10(abs(value))) - 5) if value else 0.0
    factor = 1.0 if unit is None else ureg.Quantity(1.0, unit).to_base_units().m
    return iv.mpf([value - half, value + half]) * factor


def arctangent(x: Any) -> Any:
    """The arctangent of an interval; mpmath has none."""
    return iv.mpf([math.atan(float(x.a)) - 1e-15, math.atan(float(x.b)) + 1e-15])


def evaluated(expression: str) -> Any:
    """Evaluate a line of printed arithmetic in interval arithmetic, SI."""
    values = []

    def name(match: re.Match[str]) -> str:
        values.append(interval(match["number"], match["unit"]))
        return f"v[{len(values) - 1}]"

    text = expression.replace("^2", "**TWO")
    text = PRINTED.sub(name, text).replace("**TWO", "**2")
    text = re.sub(r"(v\[\d+\]|\)) sqrt", r"\1 * sqrt", text.replace(" x ", " * "))
    names = {"v": values, "sqrt": iv.sqrt, "ln": iv.log, "exp": iv.exp, "atan": arctangent}
    return eval(text, {"__builtins__": {}}, names | {"g": iv.mpf(GRAVITY)})


def assert_agrees(step: Step) -> None:
    """Every line between equals signs is the same number, to the digits printed."""
    if not step.numbers:
        return
    sides = [evaluated(part) for part in f"{step.numbers} = {step.result}".split(" = ")]
    for side in sides[1:]:
        assert sides[0].a <= side.b, step
        assert side.a <= sides[0].b, step


def placed_rows(placement: str, direction: str = "z") -> Couplings:
    """Couplings along one axis of a small uneven grid, on the sides that the placement names."""
    grid = blocks_of([80.0, 50.0], [120.0, 60.0], [30.0, 40.0])
    start, stop = {
        "x": ({"x": 0.0, "y": 70.0, "z": 20.0}, {"x": 130.0}),
        "z": ({"x": 60.0, "y": 70.0, "z": 0.0}, {"z": 65.0}),
    }[direction]
    for axis, place in ON_SIDE.get(placement, {}).items():
        if axis != direction:
            start[axis] = place
    ends = [tuple(end[axis] for axis in "xyz") for end in (start, start | stop)]
    return couple(
        route(*ends),  # type: ignore[arg-type]
        grid,
        rock(2.3e-13, 7.1e-14, 1.9e-14),
        rw="0.11 m",
        skin=1.7,
        placement=placement,
        net_to_gross=0.8,
    )


@pytest.mark.parametrize("system", SYSTEMS)
@pytest.mark.parametrize("placement", PLACEMENTS)
def test_the_shown_index_is_right(system: str, placement: str) -> None:
    rows = placed_rows(placement)
    with unit_system(system):
        shown = workings(rows)
    assert list(shown.steps) == [0, 1]
    for n, steps in shown.steps.items():
        for step in steps:
            assert_agrees(step)
        last = evaluated(steps[-1].result.split(" = ")[-1])
        assert last.a <= rows.wi[n].m_as("m**3") <= last.b


@pytest.mark.parametrize(
    ("placement", "layer"), [("centre", 0), ("corner", 1), ("south", 0), ("bottom", 1)]
)
def test_a_well_along_x_names_y_and_z(placement: str, layer: int) -> None:
    shown = workings(placed_rows(placement, "x"), 1)
    for step in shown.steps[1]:
        assert_agrees(step)
    text = str(shown)
    assert "k = sqrt(ky kz)" in text
    assert "dy^2" in text
    assert "dx" not in text
    assert text.startswith(f"Coupling 1 in block (1, 0, {layer}), well along x\n====")


@pytest.mark.parametrize("system", SYSTEMS)
def test_the_shown_rates_are_right(system: str) -> None:
    well = layered_well(relative_permeability=0.37, reference_depth="1480 m")
    state = well.at_pressure("150 bar", block_pressure="201.7 bar")
    with unit_system(system):
        shown = workings(state.couplings, state=state)
    assert len(shown.steps) == 4
    for n, steps in shown.steps.items():
        for step in steps:
            assert_agrees(step)
        wellbore, block, reservoir, surface = steps[-4:]
        for step, value in (
            (wellbore, state.coupling_pressure[n]),
            (block, state.coupling_pressure[n] + state.coupling_drawdown[n]),
            (reservoir, state.coupling_rate[n]),
            (surface, state.coupling_surface_rate[n]),
        ):
            printed = evaluated(step.result)
            assert printed.a <= value.to_base_units().m <= printed.b


def test_the_evaluation_notices_a_wrong_number() -> None:
    # 2 pi 1 m2 3 m / 2 = 9.42478 m3
    right = Step("", "", "6.28319 x 1 m**2 x 3 m / 2", "9.42478 m**3")
    assert_agrees(right)
    with pytest.raises(AssertionError):
        assert_agrees(right._replace(result="9.4249 m**3"))
    with pytest.raises(AssertionError):
        assert_agrees(right._replace(result="9.42478 ft**3"))


def test_steps_of_a_state_without_density_have_no_head() -> None:
    grid = blocks_of([80.0], [80.0], [10.0])
    rows = couple(route((40, 40, 0), (40, 40, 10)), grid, rock(1e-13, 1e-13, 0.0), rw="0.1 m")
    oil = Liquid(viscosity="0.9 cP", formation_volume_factor=1.25)
    state = Well(rows, oil).at_pressure("100 bar", block_pressure="150 bar")
    titles = [step.title for step in workings(rows, state=state).steps[0]]
    assert titles[-2:] == ["Reservoir rate of the coupling", "Surface rate of the coupling"]
    assert not any("Pressure in the wellbore" in title for title in titles)
    for step in workings(rows, state=state).steps[0]:
        assert_agrees(step)


def test_titles_in_order() -> None:
    titles = [step.title for step in workings(layered_couplings(), 0).steps[0]]
    assert titles == [
        "Equivalent radius (Peaceman 1983, eq. 14)",
        "Permeability across the well",
        "Flow resistance",
        "Well index",
    ]


def test_the_text_numbers_its_steps() -> None:
    lines = str(workings(layered_couplings(), 2)).splitlines()
    assert lines[0] == "Coupling 2 in block (1, 1, 2), well along z"
    assert [line[:2] for line in lines if line[0].isdigit()] == ["1.", "2.", "3.", "4."]
    assert str(workings(layered_couplings())).count("well along z") == 4


@pytest.mark.parametrize("kx", [0.0, 1e-13])
def test_tight_rock_is_shown_as_an_index_of_zero(kx: float) -> None:
    grid = blocks_of([80.0], [80.0], [10.0])
    rows = couple(route((40, 40, 0), (40, 40, 10)), grid, rock(kx, 0.0, 1e-13), rw="0.1 m")
    steps = workings(rows).steps[0]
    assert_agrees(steps[0])
    assert [step.title for step in steps] == ["Permeability across the well", "Well index"]
    assert steps[-1].result == "0"
    assert "nothing flows" in str(workings(rows))


def state_of(couplings: Couplings, pressures: Any) -> WellState:
    return Well(couplings, brine()).at_pressure(pressures, block_pressure="200 bar")


def test_bad_workings() -> None:
    rows = layered_couplings()
    with pytest.raises(DomainError, match="row 4 is not in the table of 4 rows"):
        workings(rows, 4)
    with pytest.raises(DomainError, match="row -1 is not in the table"):
        workings(rows, -1)
    with pytest.raises(DomainError, match="belongs to other couplings"):
        workings(rows, state=state_of(layered_couplings(skin=1.6), "150 bar"))
    for boolean in (True, np.True_):
        with pytest.raises(UnitsError, match="row: needs a whole number"):
            workings(rows, boolean)
    with pytest.raises(UnitsError, match=r"row: needs a whole number; got 1\.0"):
        workings(rows, 1.0)  # type: ignore[arg-type]
    with pytest.raises(DomainError, match="row 4 is not in the table"):
        workings(rows, np.int64(4))
    with pytest.raises(ShapeError, match="many moments"):
        workings(rows, state=state_of(rows, ureg.Quantity([150.0, 160.0], "bar")))
    with pytest.raises(UnitsError, match="couplings: needs Couplings"):
        workings("all")  # type: ignore[arg-type]


@pytest.mark.parametrize("row", [np.int8(2), np.int64(2), np.uint16(2)])
def test_a_row_counted_by_numpy(row: Any) -> None:
    rows = layered_couplings()
    assert str(workings(rows, row)) == str(workings(rows, 2))


def test_a_state_of_equal_couplings_will_do() -> None:
    rows = layered_couplings()
    state = state_of(rows, "150 bar")
    expected = str(workings(rows, state=state))
    for copied in (layered_couplings(), pickle.loads(pickle.dumps(rows))):
        assert str(workings(copied, state=state)) == expected
    assert str(workings(rows, state=pickle.loads(pickle.dumps(state)))) == expected


def test_workings_say_what_they_are() -> None:
    assert repr(workings(layered_couplings())) == "Workings(of 4 couplings; print it to read them)"
