"""The two Newtonian viscosities that stand for a slurry in a pump, and the shear rate they are read at."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.rheology.models import Rheology
from pipeflow.sources import Source

APPARENT_FOR_HEAD = Source(
    key="apparent-for-head",
    title="Viscosity of a slurry in a pump, for head and flow: tau/rate",
    citation="Kalombo, Haldenwang, Chhabra & Fester (2014): it told the head of a pump better",
    confidence="medium",
    note="an assumption: published trials disagree",
)
DIFFERENTIAL_FOR_EFFICIENCY = Source(
    key="differential-for-efficiency",
    title="Viscosity of a slurry in a pump, for efficiency: d tau/d rate",
    citation=(
        "Walker & Goulas (1984), the plastic viscosity of a Bingham plastic; Kalombo et al. (2014): it told the "
        "efficiency better"
    ),
    confidence="medium",
    note="an assumption: published trials disagree; the motor covers the lower efficiency of the two viscosities",
)
TWICE_THE_SPEED = Source(
    key="twice-the-speed",
    title="Shear rate in a pump: twice its angular speed",
    citation="after Walker & Goulas (1984)",
    confidence="medium",
    note="common practice where the impeller is not known",
)
OUTLET_PASSAGE = Source(
    key="impeller-passage",
    title="Shear rate in a pump: the bulk rate of the passage at the outlet of its impeller",
    citation="after Pullum, Graham & Rudman (2007): 8V/D_h, V = Q/(pi D_2 b_2), D_h = 2 b_2",
    confidence="medium",
    note=(
        "D_h of a gap of width b_2 between two shrouds, its vanes left out; it follows the flow: the less flows, the "
        "thicker a shear-thinning slurry counts"
    ),
)


@dataclass(frozen=True)
class Outlet:
    """The outlet of an impeller: its diameter D_2 and the width b_2 of the passage there, m."""

    diameter: float
    width: float


@dataclass(frozen=True, eq=False)
class EquivalentViscosity:
    """Shear rate, 1/s, and the two kinematic viscosities at it, m²/s; arrays."""

    shear_rate: Array
    apparent: Array
    differential: Array


def twice_the_speed(speed: FloatOrArray) -> Array:
    """``2 omega`` [1/s] at a speed [rad/s]."""
    return 2.0 * np.asarray(speed, dtype=np.float64)


def passage_rate(flow: FloatOrArray, outlet: Outlet) -> Array:
    """``8V/D_h = 4Q/(pi D_2 b_2²)`` [1/s] at the flow of one pump [m³/s]."""
    velocity = np.asarray(flow, dtype=np.float64) / (np.pi * outlet.diameter * outlet.width)
    return 8.0 * velocity / (2.0 * outlet.width)


def equivalent_viscosity(rheology: Rheology, density: float, shear_rate: FloatOrArray) -> EquivalentViscosity:
    """Read the two viscosities of a fluid of a density [kg/m³] at a shear rate [1/s]."""
    rate = np.asarray(shear_rate, dtype=np.float64)
    apparent, differential = rheology.apparent_viscosity(rate), rheology.differential_viscosity(rate)
    return EquivalentViscosity(rate, np.asarray(apparent) / density, differential / density)
