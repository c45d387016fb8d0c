"""Grids, paths, rock and wells for the tests, from plain SI floats."""

from typing import Any, Final

import numpy as np

from wellindex import Couplings, Liquid, Path, Permeability, TensorGrid, Well, couple, ureg

#: Standard acceleration of free fall, m/s2 (3rd General Conference on Weights and Measures, 1901).
GRAVITY: Final = 9.80665
METRES: Final = {"dx": "m", "dy": "m", "dz": "m", "rw": "m", "length": "m"}
SI_UNITS: Final = METRES | {"kx": "m**2", "ky": "m**2", "kz": "m**2", "equivalent_radius": "m"}


def metres(values: Any) -> Any:
    """Lengths."""
    return ureg.Quantity(np.asarray(values, dtype=float), "m")


def square_metres(value: Any) -> Any:
    """A permeability, or one per block."""
    return ureg.Quantity(value if np.ndim(value) else float(value), "m**2")


def pascals(values: Any) -> Any:
    """Pressures."""
    return ureg.Quantity(np.asarray(values, dtype=float) if np.ndim(values) else values, "Pa")


def in_si_units(arguments: dict[str, Any]) -> dict[str, Any]:
    """Arguments of a well index with their SI units; words and plain numbers as they are."""
    return {
        name: ureg.Quantity(value, SI_UNITS[name]) if name in SI_UNITS else value
        for name, value in arguments.items()
    }


def blocks_of(dx: Any, dy: Any, dz: Any, **others: Any) -> TensorGrid:
    """A grid from rows of sizes in m."""
    return TensorGrid(metres(dx), metres(dy), metres(dz), **others)


def rock(kx: Any, ky: Any, kz: Any, **others: Any) -> Permeability:
    """Rock from permeabilities in m2."""
    return Permeability(square_metres(kx), square_metres(ky), square_metres(kz), **others)


def route(*points: tuple[float, float, float], start: float = 0.0) -> Path:
    """A path through points in m."""
    return Path(metres(points), measured_depth=ureg.Quantity(start, "m"))


LAYERS: Final = (4.0, 7.0, 2.5, 6.0)
LAYER_K: Final = (2e-13, 5e-14, 8e-13, 1e-13)
TOP: Final = 1500.0
BASE: Final = TOP + sum(LAYERS)


def layered_couplings(**others: Any) -> Couplings:
    """A vertical well through four layers of uneven thickness and permeability."""
    grid = blocks_of([80.0] * 3, [120.0] * 3, LAYERS, origin=metres([0.0, 0.0, TOP]))
    k = np.broadcast_to(np.array(LAYER_K), grid.shape).copy()
    arguments = {"rw": "0.1 m", "skin": 1.5, **others}
    return couple(
        route((120.0, 180.0, TOP), (120.0, 180.0, BASE)), grid, rock(k, 2 * k, k / 10), **arguments
    )


def brine(**others: Any) -> Liquid:
    """A liquid with density."""
    given = {"viscosity": "0.5 mPa*s", "formation_volume_factor": 1.2, "density": "950 kg/m**3"}
    return Liquid(**{**given, **others})


def layered_well(**others: Any) -> Well:
    """The well through four layers, with brine in it."""
    return Well(layered_couplings(), brine(), **others)


def by_hand(well: Well, pwf: float, blocks: Any, *, density: float, mu: float) -> list[float]:
    """Reservoir rates of the couplings, one by one, SI."""
    rows = well.couplings
    reference = well.reference_depth.m_as("m")
    rates = []
    for n in range(len(rows)):
        depth, centre = rows.depth[n].m_as("m"), rows.block_depth[n].m_as("m")
        p_well = pwf + density * GRAVITY * (depth - reference)
        p_block = blocks[n] + density * GRAVITY * (depth - centre)
        rates.append(rows.wi[n].m_as("m**3") / mu * (p_block - p_well))
    return rates
