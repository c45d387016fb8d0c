"""Liquids: what they take, refuse and show."""

from functools import partial
from typing import Any

import numpy as np
import pytest

from tests.oracles.closed_form import in_si
from wellindex import (
    ArgumentsError,
    DomainError,
    Liquid,
    ShapeError,
    UnitsError,
    unit_system,
    ureg,
)

OIL = {"viscosity": "0.9 cP", "formation_volume_factor": "1.25 rb/stb"}

close = partial(pytest.approx, abs=0)


def test_values_in_the_unit_system_in_force() -> None:
    oil = Liquid(**OIL, density="48 lbm/ft**3", compressibility="1e-5 psi**-1")
    with unit_system("oilfield"):
        assert str(oil.viscosity.units) == "cP"
        assert oil.density.m == close(48.0, rel=1e-14)
        assert oil.compressibility.m == close(1e-5, rel=1e-14)
        assert oil.formation_volume_factor.units == ureg.Unit("rb/stb")
    with unit_system("si"):
        assert oil.viscosity.m == close(9e-4, rel=1e-14)
        assert oil.density.m == close(float(in_si("48 lbm/ft**3")), rel=1e-14)
    assert oil.formation_volume_factor.m_as("rm3/sm3") == close(1.25, rel=1e-14)


def test_si_values_for_a_well() -> None:
    known = Liquid(**OIL, density="800 kg/m**3").in_si()
    assert (known.viscosity, known.volume_factor, known.density) == close(
        (9e-4, 1.25, 800.0), rel=1e-15
    )


def test_what_is_not_given_is_none() -> None:
    oil = Liquid(**OIL)
    assert oil.density is None
    assert oil.compressibility is None
    assert repr(oil) == "Liquid(0.9 cP, 1.25 rm3/sm3)"
    assert "density=800" in repr(Liquid(**OIL, density="800 kg/m**3"))


@pytest.mark.parametrize("factor", [0.5, 1, 10.0, np.float64(1.2)])
def test_a_plain_volume_factor_of_a_liquid(factor: float) -> None:
    oil = Liquid(viscosity="1 cP", formation_volume_factor=factor)
    assert oil.formation_volume_factor.m_as("rm3/sm3") == close(float(factor), rel=1e-15)


@pytest.mark.parametrize(
    ("changed", "error", "words"),
    [
        ({"formation_volume_factor": 0.4999}, DomainError, "between 0.5 and 10"),
        ({"formation_volume_factor": 10.001}, DomainError, "between 0.5 and 10"),
        ({"formation_volume_factor": "0 rb/stb"}, DomainError, "formation_volume_factor: "),
        ({"formation_volume_factor": "1.2 rb/rb"}, UnitsError, "formation volume factor"),
        ({"viscosity": 0.9}, UnitsError, "viscosity: needs a viscosity"),
        ({"viscosity": "0 cP"}, DomainError, "viscosity: needs a viscosity, positive"),
        ({"viscosity": "-1 cP"}, DomainError, "viscosity"),
        ({"viscosity": True}, UnitsError, "boolean"),
        ({"viscosity": ureg.Quantity(float("inf"), "cP")}, DomainError, "viscosity"),
        ({"viscosity": ureg.Quantity([1.0, 2.0], "cP")}, ShapeError, r"one value; got .*\(2,\)"),
        ({"density": "0 kg/m**3"}, DomainError, "density: needs a density, positive"),
        ({"density": "9 kN/m**3"}, UnitsError, "density: needs a density"),
        ({"compressibility": "-1e-5 psi**-1"}, DomainError, "compressibility: "),
    ],
)
def test_bad_liquids(changed: dict[str, Any], error: type[Exception], words: str) -> None:
    with pytest.raises(error, match=words):
        Liquid(**(OIL | changed))


def test_several_bad_values_in_one_error() -> None:
    with pytest.raises(ArgumentsError, match="3 arguments are wrong") as caught:
        Liquid(viscosity=1.0, formation_volume_factor=0.9e-3, density="-1 kg/m**3")
    for name in ("viscosity", "formation_volume_factor", "density"):
        assert f"\n  {name}: " in str(caught.value)


def test_a_compressibility_of_zero_is_allowed() -> None:
    assert Liquid(**OIL, compressibility="0 1/bar").compressibility.m == 0.0
