"""From the shaft of a pump to its motor."""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.sources import Source

STANDARD_MOTORS = Source(
    key="iec-motors",
    title="Rated outputs of motors",
    citation="IEC 60072-1, the outputs usually made, 0.06 to 1000 kW",
    confidence="medium",
    note="from memory; larger motors are made to order",
)
RATED_OUTPUTS = 1e3 * np.array(
    [
        *(0.06, 0.09, 0.12, 0.18, 0.25, 0.37, 0.55, 0.75, 1.1, 1.5, 2.2, 3.0, 4.0, 5.5, 7.5, 11.0, 15.0, 18.5, 22.0),
        *(30.0, 37.0, 45.0, 55.0, 75.0, 90.0, 110.0, 132.0, 160.0, 200.0, 250.0, 315.0, 355.0, 400.0, 450.0, 500.0),
        *(560.0, 630.0, 710.0, 800.0, 900.0, 1000.0),
    ]
)
"""W."""


def shaft_power(flow: FloatOrArray, head: FloatOrArray, density: FloatOrArray, efficiency: FloatOrArray) -> Array:
    """``rho g Q H/efficiency`` [W]; flow in m³/s, head in m of the fluid, density in kg/m³."""
    return np.asarray(density) * STANDARD_GRAVITY * flow * head / np.asarray(efficiency)


def motor_power(power: FloatOrArray, margin: float) -> Array:
    """Power the motor must have [W] for a shaft power [W], with a margin on it (a fraction)."""
    return np.asarray(power) * (1.0 + margin)


def standard_motor(power: float) -> float | None:
    """Next rated output [W] from a power [W] up; None above the largest, or for nan.

    Examples
    --------
    >>> standard_motor(float(motor_power(20e3, 0.25)))
    30000.0
    """
    enough = RATED_OUTPUTS[power * (1.0 - 1e-12) <= RATED_OUTPUTS]
    return float(enough[0]) if enough.size else None
