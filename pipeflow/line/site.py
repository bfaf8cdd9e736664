"""The site of a line: atmospheric pressure by altitude."""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.sources import Range, Source

STANDARD_ATMOSPHERE = Source(
    key="standard-atmosphere",
    title="Atmospheric pressure at an altitude",
    citation="ISO 2533:1975, Standard Atmosphere (the ICAO atmosphere)",
    ranges=(Range("altitude", -2000, 11000),),
    confidence="high",
    note="the mean at middle latitudes; weather moves it by some 3 %",
)
SEA_LEVEL_PRESSURE = 101325.0
SEA_LEVEL_TEMPERATURE = 288.15
LAPSE_RATE = 0.0065
GAS_CONSTANT_OF_AIR = 287.05287


def standard_atmosphere(altitude: FloatOrArray) -> Array:
    """Atmospheric pressure of the standard atmosphere.

    ``p = 101325 Pa (1 - 0.0065 h/288.15)^(g/(R 0.0065))``, ISO 2533, the layer from -2000 m to 11 000 m.

    Parameters
    ----------
    altitude : float or array
        Height above sea level, m (geopotential; at most 0.2 % above the geometric height there).

    Returns
    -------
    Array
        Absolute pressure, Pa; nan outside the layer.

    Examples
    --------
    >>> round(float(standard_atmosphere(0.0)))
    101325
    """
    height = np.asarray(altitude, dtype=np.float64)
    inside = (height >= -2000.0) & (height <= 11000.0)
    relative = 1.0 - LAPSE_RATE * np.where(inside, height, np.nan) / SEA_LEVEL_TEMPERATURE
    return np.asarray(SEA_LEVEL_PRESSURE * relative ** (STANDARD_GRAVITY / (GAS_CONSTANT_OF_AIR * LAPSE_RATE)))
