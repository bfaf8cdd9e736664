"""A pump at work: what every kind of pump gives at the points of its curve."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array


@dataclass(frozen=True, eq=False)
class PumpState:
    """Points of a pump's curve in the fluid it pumps; arrays of one shape, nan where there is no figure.

    Attributes
    ----------
    flow : Array
        m³/s, of all pumps of an arrangement together.
    head : Array
        m of the fluid, of all together.
    efficiency, efficiency_lower : Array
        Fraction: the figure to report, and the lower of two, which the motor must cover.
    shaft_power, shaft_power_upper : Array
        ``rho g Q H`` over each of the two, W, of all pumps together.
    npsh_required : Array
        m, of one pump.
    established : array of bool
        Whether the head may be credited.
    """

    flow: Array
    head: Array
    efficiency: Array
    efficiency_lower: Array
    shaft_power: Array
    shaft_power_upper: Array
    npsh_required: Array
    established: NDArray[np.bool_]
