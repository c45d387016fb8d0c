"""Recognising a printed number and comparing tables: the numbers are made by hand here."""

import math
from typing import Any

import numpy as np
import pytest

from tests.builders import blocks_of, rock, route
from tests.oracles.closed_form import in_si
from wellindex import (
    Convention,
    DomainError,
    ShapeError,
    UnitsError,
    compare,
    couple,
    recognise,
    ureg,
    voronoi_equivalent_radius,
)

BLOCK = {
    "dx": "150 ft",
    "dy": "120 ft",
    "dz": "20 ft",
    "kx": "120 mD",
    "ky": "45 mD",
    "kz": "12 mD",
    "rw": "0.354 ft",
    "skin": 2.5,
    "length": "13 ft",
    "viscosity": "0.9 cP",
    "formation_volume_factor": "1.25 rb/stb",
    "density": "48 lbm/ft**3",
}
ROOT = math.sqrt(120.0 * 45.0)
#: Peaceman (1983, eq. 14) as printed, exact constant exp(-gamma)/2 = 0.2807297 (from mpmath).
PRINTED = math.sqrt(math.sqrt(45 / 120) * 150**2 + math.sqrt(120 / 45) * 120**2) / (
    (45 / 120) ** 0.25 + (120 / 45) ** 0.25
)
EXACT_R0 = 0.28072974178344257 * PRINTED


def kh_over(r0: float, length: float, skin: float) -> float:
    """The number in mD ft without 2 pi."""
    return ROOT * length / (math.log(r0 / 0.354) + skin)


def field_constant() -> float:
    """1 mD ft psi/cP in rb/day, by exact definitions."""
    return float(in_si("1 mD*ft") / in_si("1 cP*rb/day/psi"))


PLAIN = kh_over(EXACT_R0, 13.0, 2.5)
TRUE_INDEX = 2 * math.pi * field_constant() * PLAIN


@pytest.mark.parametrize(
    ("number", "unit", "two_pi", "words"),
    [
        (PLAIN, "mD*ft", False, "exact r0, open length, with skin, exact constant"),
        (2 * math.pi * PLAIN, "mD*ft", True, "exact r0, open length, with skin"),
        (TRUE_INDEX, "cP*rb/day/psi", True, "exact r0, open length, with skin"),
        (TRUE_INDEX / 0.9, "rb/day/psi", True, "1/viscosity"),
        (TRUE_INDEX / 0.9 / 1.25, "stb/day/psi", True, "1/formation volume factor"),
        (kh_over(0.28 * PRINTED, 13.0, 2.5), "mD*ft", False, "r0 with 0.28, open length"),
        (kh_over(EXACT_R0, 20.0, 2.5), "mD*ft", False, "exact r0, whole block, with skin"),
        (kh_over(EXACT_R0, 13.0, 0.0), "mD*ft", False, "exact r0, open length, without skin"),
        (kh_over(0.2 * math.sqrt(150 * 120), 13.0, 2.5), "mD*ft", False, "r0 = 0.2 d"),
        (0.00708 * PLAIN, "cP*rb/day/psi", True, "constant 0.00708"),
    ],
)
def test_a_number_made_by_hand_is_recognised(
    number: float, unit: str, two_pi: bool, words: str
) -> None:
    found = recognise(f"{number:.7g}", **BLOCK)
    right = [m for m in found if m.convention.unit == unit and m.convention.two_pi is two_pi]
    assert any(words in match.words for match in right)
    assert all(abs(match.difference) < 1e-6 for match in found)


def test_the_plainest_reading_comes_first() -> None:
    first = recognise(f"{TRUE_INDEX:.6g}", **BLOCK)[0]
    assert first.words.startswith("exact r0, open length, with skin, exact constant, 2 pi")


def test_fewer_digits_allow_more_readings() -> None:
    few, many = recognise(f"{PLAIN:.3g}", **BLOCK), recognise(f"{PLAIN:.7g}", **BLOCK)
    assert len(few) > len(many) > 0
    assert all(abs(match.value - float(f"{PLAIN:.3g}")) <= 0.5 for match in few)


def test_a_number_from_nowhere_has_no_reading() -> None:
    assert recognise("123456789.1", **BLOCK) == []


@pytest.mark.parametrize(
    ("number", "words"),
    [("twelve", "not a number"), ("-3.1", "positive"), ("0", "positive"), ("nan", "positive")],
)
def test_bad_numbers(number: str, words: str) -> None:
    with pytest.raises(DomainError, match=words):
        recognise(number, **BLOCK)


def test_tight_rock_is_refused() -> None:
    with pytest.raises(DomainError, match="tight rock"):
        recognise("1.0", **{**BLOCK, "kx": "0 mD"})


def table(**others: Any) -> Any:
    grid = blocks_of([80.0] * 5, [80.0] * 5, [5.0, 8.0, 6.0])
    path = route((200.0, 200.0, 0.0), (200.0, 200.0, 19.0))
    return couple(path, grid, rock(9e-14, 6e-14, 5e-15), rw="0.1 m", **others)


@pytest.mark.parametrize(
    ("factor", "cause"),
    [
        (2 * math.pi, "2 pi"),
        (1 / (2 * math.pi), "1 over (2 pi)"),
        (0.5, "1 over (half a circle)"),
        (1 / 0.3048, "m for ft"),
        (1e-3, "1 over (D for mD)"),
        (2 * math.pi * 0.3048, "2 pi and 1 over (m for ft)"),
    ],
)
def test_the_cause_of_a_common_factor(factor: float, cause: str) -> None:
    rows = table()
    comparison = compare(rows.wi * factor, rows)
    assert comparison.common_factor == pytest.approx(factor, rel=1e-12)
    assert cause in comparison.causes
    assert cause in str(comparison)


def test_tables_that_agree_or_differ_row_by_row() -> None:
    rows = table()
    assert compare(rows, rows).causes == ["the same"]
    different = compare(rows, table(skin=1.0))
    assert different.ratio == pytest.approx((rows.wi / table(skin=1.0).wi).m_as(""), rel=1e-12)
    halved = rows.scaled([1.0, 0.5, 1.0])
    assert compare(halved, rows).common_factor is None
    assert "no common factor" in str(compare(halved, rows))


def test_rows_of_tight_rock_do_not_hide_a_factor() -> None:
    one = ureg.Quantity([0.0, 2.0, 4.0], "m**3")
    comparison = compare(one, ureg.Quantity([0.0, 1.0, 2.0], "m**3"))
    assert comparison.ratio.tolist() == [1.0, 2.0, 2.0]
    assert comparison.common_factor == 2.0
    assert compare(one, ureg.Quantity([1.0, 1.0, 2.0], "m**3")).common_factor is None


def test_bad_tables() -> None:
    with pytest.raises(ShapeError, match="3 and 2 rows"):
        compare(table(), table()[:2])
    with pytest.raises(UnitsError, match="no well index"):
        compare(ureg.Quantity([1.0], "m"), table())
    with pytest.raises(UnitsError, match="not list"):
        compare([1.0], table())  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("sides", "distances", "expected"),
    [
        # Palagi & Aziz 1994 as recomputed: exp(-pi/2) on a square, exp(-pi/sqrt 3) on a hexagon.
        ([1.0] * 4, [1.0] * 4, math.exp(-math.pi / 2)),
        ([1 / math.sqrt(3)] * 6, [1.0] * 6, math.exp(-math.pi / math.sqrt(3))),
    ],
)
def test_voronoi_cells(sides: list[float], distances: list[float], expected: float) -> None:
    r0 = voronoi_equivalent_radius(
        sides=ureg.Quantity(sides, "m"), distances=ureg.Quantity(distances, "m")
    )
    assert r0.m_as("m") == pytest.approx(expected, rel=1e-14)


def test_voronoi_scales_and_halves() -> None:
    cell = {"sides": ["3 m", "5 m", "4 m"], "distances": ["6 m", "7 m", "9 m"]}
    larger = {name: [f"{2 * float(v.split()[0])} m" for v in row] for name, row in cell.items()}
    one, other = voronoi_equivalent_radius(**cell), voronoi_equivalent_radius(**larger)
    assert (other / one).m_as("") == pytest.approx(2.0, rel=1e-14)
    # A cell cut by a no-flow side through its centre: half the sides, half the angle.
    half = voronoi_equivalent_radius(sides=["1 m"] * 2, distances=["1 m"] * 2, angle="180 degree")
    assert half.m_as("m") == pytest.approx(math.exp(-math.pi / 2), rel=1e-14)


def test_bad_voronoi_cells() -> None:
    with pytest.raises(ShapeError, match="one distance per side"):
        voronoi_equivalent_radius(sides=["1 m"] * 4, distances=["1 m"] * 3)
    with pytest.raises(DomainError, match="full circle"):
        voronoi_equivalent_radius(sides=["1 m"], distances=["1 m"], angle="400 degree")
    with pytest.raises(UnitsError, match="no angle"):
        voronoi_equivalent_radius(sides=["1 m"], distances=["1 m"], angle=ureg.Quantity(3.0, ""))


def test_tables_in_use() -> None:
    rows = table(skin=1.5)
    assert rows[1].cell.tolist() == [rows.cell[1].tolist()]
    assert rows[[2, 0]].cell[:, 2].tolist() == [2, 0]
    assert len(rows[rows.length > ureg.Quantity(5.5, "m")]) == 2
    assert np.allclose((rows.scaled(3.0).wi / rows.wi).m_as(""), 3.0, rtol=1e-14)
    again = rows.with_skin(0.0).with_skin(1.5)
    assert again.equals(rows)
    with pytest.raises(DomainError, match="zero or negative"):
        rows.with_skin(-20.0)
    with pytest.raises(ShapeError, match="one per row"):
        rows.scaled([1.0, 2.0])
    array = rows.to_array()
    assert array["wi"].tolist() == rows.wi.magnitude.tolist()
    assert array["k"].tolist() == [0, 1, 2]


def test_a_table_for_another_code() -> None:
    rows = table(skin=1.5)
    outside = Convention(
        "mD*m", two_pi=False, skin_inside=False, first_index=1, order="kij", sign=-1
    )
    taken = rows.in_convention(outside)
    assert [column.name for column in taken.columns] == ["k", "i", "j", "number", "rw", "skin"]
    assert taken["k"] == [1, 2, 3]
    assert taken["i"] == [3, 3, 3]
    assert taken["skin"] == [1.5] * 3
    zero_skin = table().wi.m_as("mD*m") / (2 * math.pi)
    assert taken["number"] == pytest.approx(-zero_skin, rel=1e-12)
    conductance = Convention("m**2/day", head=True, viscosity=True)
    by_hand = rows.wi.m_as("m**3") / 1e-3 * 1000.0 * 9.80665 * 86400.0
    numbers = rows.in_convention(conductance, viscosity="1 mPa*s", density="1000 kg/m**3")
    assert numbers["number"] == pytest.approx(by_hand, rel=1e-12)


def test_bad_layouts() -> None:
    for wrong in ({"first_index": 2}, {"order": "xyz"}, {"sign": 0}):
        with pytest.raises(DomainError):
            Convention("m**3", **wrong)
