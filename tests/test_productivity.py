"""The productivity index against worked examples, exact arithmetic and its refusals."""

import math
from functools import partial
from operator import attrgetter
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mpmath import mp  # type: ignore[import-untyped]
from scipy.optimize import brentq

from tests import strategies
from tests.oracles import closed_form
from tests.published import tables
from tests.published.tables import Check
from wellindex import DomainError, productivity_index, ureg

close = partial(pytest.approx, abs=0)

REGIMES = {("pseudo_steady", "average"): "average", ("steady", "outer_boundary"): "boundary"}


def radial_arguments(check: Check) -> dict[str, Any]:
    """A row's arguments under the names of `productivity_index`."""
    inputs = {n: v for n, v in check.inputs.items() if n in ("k", "h", "re", "rw", "skin")}
    return inputs | {
        "against": REGIMES[str(check.inputs["regime"]), str(check.inputs["against"])],
        "viscosity": check.inputs["mu"],
        "formation_volume_factor": check.inputs["formation_volume_factor"],
    }


def worked(check: Check) -> float:
    """Return the answer of a worked example in its unit, by way of the library."""
    given_ = radial_arguments(check)
    inputs = check.inputs
    if check.quantity == "productivity_index":
        return float(productivity_index(**given_).m_as(check.unit))
    if check.quantity == "rate":
        drawdown = ureg.Quantity(str(inputs["drawdown"]))
        return float((productivity_index(**given_) * drawdown).m_as(check.unit))
    measured = ureg.Quantity(str(inputs["productivity_index"])).m_as("stb/day/psi")
    if check.quantity == "permeability_from_productivity":
        return measured / productivity_index(**given_, k="1 mD").m_as("stb/day/psi")
    return brentq(
        lambda skin: productivity_index(**given_, skin=skin).m_as("stb/day/psi") - measured,
        0.0,
        100.0,
        xtol=1e-13,
    )


@pytest.mark.parametrize(
    "check",
    tables.load(
        "productivity",
        "productivity_index",
        "rate",
        "permeability_from_productivity",
        "skin_from_productivity",
    ),
    ids=attrgetter("id"),
)
def test_worked_examples(check: Check) -> None:
    assert worked(check) == close(check.computed, rel=1e-11)
    assert worked(check) == close(check.printed, rel=check.tolerance)


@given(
    k=strategies.permeabilities(),
    h=strategies.thicknesses(),
    rw=strategies.wellbore_radii(),
    spread=strategies.logarithmic(10.0, 1e5),
    mu=strategies.viscosities(),
    factor=strategies.volume_factors(),
    kr=strategies.relative_permeabilities(),
    skin=st.floats(-1.0, 30.0),
    against=st.sampled_from(["average", "boundary"]),
)
def test_radial_productivity_at_50_digits(
    k: float, h: float, rw: float, spread: float, mu: float, factor: float, kr: float,
    skin: float, against: str,
) -> None:  # fmt: skip
    regime, pressure = next(names for names, word in REGIMES.items() if word == against)
    expected = kr * closed_form.radial_productivity_index(
        k=k, h=h, re=spread * rw, rw=rw, mu=mu, formation_volume_factor=factor, skin=skin,
        regime=regime, against=pressure,
    )  # fmt: skip
    found = productivity_index.si(
        against=against, k=k, h=h, re=spread * rw, rw=rw, viscosity=mu,
        formation_volume_factor=factor, relative_permeability=kr, skin=skin,
    )  # fmt: skip
    assert found == close(float(expected), rel=1e-12)


@given(
    wi=strategies.logarithmic(1e-18, 1e-8),
    mu=strategies.viscosities(),
    factor=strategies.volume_factors(),
    kr=strategies.relative_permeabilities(zero=True),
)
def test_block_productivity_at_50_digits(wi: float, mu: float, factor: float, kr: float) -> None:
    found = productivity_index(
        against="block",
        wi=ureg.Quantity(wi, "m**3"),
        viscosity=ureg.Quantity(mu, "Pa*s"),
        formation_volume_factor=factor,
        relative_permeability=kr,
    )
    expected = closed_form.block_productivity_index(
        wi=wi, mu=mu, formation_volume_factor=factor, kr=kr
    )
    assert found.m_as("sm3/s/Pa") == close(float(expected), rel=1e-12)


RADIAL = {
    "against": "average",
    "k": "8.2 mD",
    "h": "53 ft",
    "re": "2980 ft",
    "rw": "0.328 ft",
    "viscosity": "1.7 cP",
    "formation_volume_factor": 1.1,
}


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        ({"against": "block"}, "needs wi and takes no k, h, re, rw"),
        ({"wi": "1 mD*m"}, "takes no wi"),
        ({"k": None}, "against='average' needs k"),
        ({"re": "0.328 ft"}, "outer radius must be larger"),
        ({"re": "0.2 ft"}, "outer radius must be larger"),
        ({"re": "0.5 ft"}, "no flow resistance"),
        ({"skin": -9.0}, "no flow resistance"),
        ({"against": "well"}, "one of 'block', 'boundary', 'average'"),
        ({"formation_volume_factor": 0.49}, "between 0.5 and 10"),
        ({"relative_permeability": 1.1}, "between 0 and 1"),
    ],
)
def test_bad_productivity_arguments(changed: dict[str, Any], words: str) -> None:
    with pytest.raises(DomainError, match=words):
        productivity_index(**(RADIAL | changed))


def test_the_pressure_is_always_named() -> None:
    with pytest.raises(TypeError, match="missing 'against'"):
        productivity_index(**{n: v for n, v in RADIAL.items() if n != "against"})


def test_average_and_boundary_differ_by_three_quarters() -> None:
    # Dake (1978), table 6.1: the radial resistances differ by 3/4 (from memory of the source).
    average, boundary = (
        productivity_index(**(RADIAL | {"against": word})).m for word in ("average", "boundary")
    )
    resistance = float(mp.log(mp.mpf(2980) / mp.mpf("0.328")))
    assert average / boundary == close(resistance / (resistance - 0.75), rel=1e-13)


@given(
    rw=strategies.wellbore_radii(),
    spread=strategies.logarithmic(1.01, 1e5),
    nearer=st.sampled_from([0.0, -1e-9, -1.0]),
)
def test_a_resistance_of_exactly_zero_is_refused(rw: float, spread: float, nearer: float) -> None:
    re = spread * rw
    given_: dict[str, Any] = {
        "against": "boundary", "k": 1e-13, "h": 10.0, "re": re, "rw": rw, "viscosity": 1e-3,
        "formation_volume_factor": 1.2,
    }  # fmt: skip
    nothing = -math.log(re / rw)
    with pytest.raises(DomainError, match=r"ln\(re/rw\) and skin leave no flow resistance"):
        productivity_index.si(**given_, skin=nothing + nearer)
    with pytest.raises(DomainError, match=r"no flow resistance .* at \[1\]"):
        productivity_index.si(**given_, skin=np.array([1.0, nothing + nearer]))
    assert productivity_index.si(**given_, skin=nothing + 1e-3) > 0.0


def test_a_resistance_of_exactly_zero_against_the_average() -> None:
    # ln(e**2) - 3/4 + skin is 0 in floats where skin is 3/4 - ln(re/rw).
    re = math.exp(2.0)
    given_: dict[str, Any] = {"k": 1e-13, "h": 10.0, "re": re, "rw": 1.0, "viscosity": 1e-3}
    nothing = 0.75 - math.log(re)
    assert math.log(re) + nothing - 0.75 == 0.0
    with pytest.raises(DomainError, match="no flow resistance"):
        productivity_index.si(
            **given_, against="average", formation_volume_factor=1.2, skin=nothing
        )
