"""Energy that a tonne takes along a kilometre of pipe."""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Source

SPECIFIC_ENERGY = Source(
    key="specific-energy",
    title="Energy of the losses for a tonne of dry solids and a kilometre",
    citation="Wilson, Addie, Sellgren & Clift, Slurry Transport Using Centrifugal Pumps (2006): 2.73 i/(S_s C_v)",
    confidence="exact",
    note="of the losses alone, hydraulic: the static head and the losses of pump and motor are not in it; from memory",
)
_PER_TONNE_AND_KILOMETRE = 1e6 / 3.6e6
"""kWh/(t km) in one J/(kg m)."""


def specific_energy(
    pressure_loss: FloatOrArray, length: float, density: FloatOrArray, mass_fraction: FloatOrArray = 1.0
) -> Array:
    """``dp/(L rho C_w)`` [kWh/(t km)]: energy lost along a line for what it carries.

    Parameters
    ----------
    pressure_loss : float or array
        Of the whole line, Pa.
    length : float
        Of its pipes, m.
    density : float or array
        Of the slurry, kg/m³.
    mass_fraction : float or array
        Of the dry solids; 1 counts the whole slurry.

    Examples
    --------
    >>> round(float(specific_energy(1000.0 * 9.80665 * 0.03 * 1000.0, 1000.0, 2650.0 * 0.2 / 0.5, 0.5)), 4)
    0.1542
    """
    return np.asarray(pressure_loss / (length * np.asarray(density) * mass_fraction) * _PER_TONNE_AND_KILOMETRE)
