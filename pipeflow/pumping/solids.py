"""What settling solids do to a rotodynamic pump, and whether they or the viscosity of the slurry decide."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Range, Source

CAVE = Source(
    key="cave",
    title="Head and efficiency of a rotodynamic pump with settling solids",
    citation="Cave (1976): HR = ER = 1 - 0.0385 (S - 1)(1 + 4/S) C_w ln(d50/0.0227 mm), C_w a fraction by mass",
    ranges=(Range("d50, m", 2.27e-5, None),),
    confidence="medium",
    note="HR is the factor of the head; ER equal to it is a first estimate; the maker's test decides",
)
CAVE_SIZE = 2.27e-5
FINE = 25e-6
"""Median size, m, up to which particles are part of the fluid (25 to 50 µm are named)."""

Kind = Literal["viscous", "solids", "lower of both"]


@dataclass(frozen=True)
class PumpedSolids:
    """Solids in a liquid: median size in m, density over that of the liquid, fraction of the mixture by mass."""

    median_size: float
    relative_density: float
    mass_fraction: float


@dataclass(frozen=True)
class Derating:
    """Which correction a pump gets, and why."""

    kind: Kind
    reason: str


def cave(median_size: FloatOrArray, relative_density: FloatOrArray, mass_fraction: FloatOrArray) -> Array:
    """Head and efficiency with solids over those on water (Cave); nan for particles finer than 0.0227 mm.

    Parameters
    ----------
    median_size : float or array
        d50, m.
    relative_density : float or array
        S, density of the solids over that of the liquid.
    mass_fraction : float or array
        C_w.

    Examples
    --------
    >>> round(float(cave(0.211e-3, 2.65, 0.30)), 3)
    0.893
    """
    size = np.asarray(median_size, dtype=np.float64)
    s = np.asarray(relative_density, dtype=np.float64)
    spread = np.log(np.where(size >= CAVE_SIZE, size, np.nan) / CAVE_SIZE)
    return 1.0 - 0.0385 * (s - 1.0) * (1.0 + 4.0 / s) * np.asarray(mass_fraction) * spread


def derating(median_size: float | None, is_viscous: bool) -> Derating:
    """Decide by the median size of the solids which correction applies; the two are never multiplied.

    Parameters
    ----------
    median_size : float or None
        d50, m; None where it is not known.
    is_viscous : bool
        Whether the slurry is thick enough to derate the pump as a liquid.
    """
    if median_size is None:
        return Derating("viscous", "the size of the solids is not given: they are taken as part of the fluid")
    size = f"d50 of {median_size * 1e6:.3g} µm"
    if median_size <= FINE:
        return Derating("viscous", f"{size} is at most 25 µm: the solids are part of the fluid")
    if not is_viscous:
        return Derating("solids", f"{size} is above 25 µm, and the slurry as a liquid is too thin to derate a pump")
    return Derating(
        "lower of both",
        f"{size} is above 25 µm, and the slurry is viscous too: the lower factor of both corrections is taken, not "
        "their product, and only a test can tell whether they add",
    )
