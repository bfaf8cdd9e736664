"""What a line is made of: the input of :mod:`pipeflow.line.route`, in SI units.

Every dimensioned field may be a float or a numpy array; arrays broadcast against each other and the flow.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from pipeflow.arrays import FloatOrArray
from pipeflow.rheology import Rheology


@dataclass(frozen=True)
class Fluid:
    """What flows: density in kg/m³ and the law of its shear stress."""

    density: FloatOrArray
    rheology: Rheology


@dataclass(frozen=True)
class Vessel:
    """One end of the line: gauge pressure on the liquid, Pa, and level of its surface above that end, m."""

    pressure: FloatOrArray = 0.0
    level: FloatOrArray = 0.0


@dataclass(frozen=True)
class Pipe:
    """A length of pipe of one bore with its fittings.

    Parameters
    ----------
    name : str
    diameter : float or array
        Inside diameter, m.
    length : float or array
        Developed length, m.
    rise : float or array
        Elevation gained along it, m.
    roughness : float or array
        Absolute wall roughness, m.
    nominal_diameter : float or array
        Nominal size in inches, as the fitting constants want it.
    fittings : mapping of str to float
        Number of each fitting, by its key in :mod:`pipeflow.line.fittings`.
    """

    name: str
    diameter: FloatOrArray
    length: FloatOrArray
    rise: FloatOrArray = 0.0
    roughness: FloatOrArray = 0.0
    nominal_diameter: FloatOrArray = 0.0
    fittings: dict[str, float] = field(default_factory=dict)


@dataclass(frozen=True)
class Equipment:
    """A loss stated by its maker: fixed, or following the flow as ``(Q/at_flow)**exponent``.

    ``pressure_loss`` in Pa, ``at_flow`` in m³/s or None for a fixed loss.
    """

    name: str
    pressure_loss: FloatOrArray
    at_flow: FloatOrArray | None = None
    exponent: FloatOrArray = 2.0


Element = Pipe | Equipment
