"""What a line is made of: the input of :mod:`pipeflow.line.route`, in SI units.

Every dimensioned field may be a float or a numpy array; arrays broadcast against each other and the flow.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from pipeflow.arrays import FloatOrArray
from pipeflow.rheology import Rheology

Discharge = Literal["submerged", "free"]


@dataclass(frozen=True)
class Fluid:
    """What flows: density in kg/m³ and the law of its shear stress."""

    density: FloatOrArray
    rheology: Rheology


@dataclass(frozen=True)
class Vessel:
    """One end of the line.

    Parameters
    ----------
    pressure : float or array
        Gauge pressure on the liquid, Pa.
    level : float or array
        Level of its surface above that end of the line, m.
    discharge : str
        Of a destination: ``submerged``, the pipe ends below the surface; ``free``, it ends above it, in the gas, and
        the level then neither helps nor hinders.
    """

    pressure: FloatOrArray = 0.0
    level: FloatOrArray = 0.0
    discharge: Discharge = "submerged"

    @property
    def head_of_level(self) -> FloatOrArray:
        """Level of the surface that the line feels, m: zero for a free discharge."""
        return 0.0 if self.discharge == "free" else self.level


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
    loss_coefficient : float or array
        Sum of further loss coefficients on ``rho V²/2`` of this pipe, dimensionless.
    """

    name: str
    diameter: FloatOrArray
    length: FloatOrArray
    rise: FloatOrArray = 0.0
    roughness: FloatOrArray = 0.0
    nominal_diameter: FloatOrArray = 0.0
    fittings: dict[str, float] = field(default_factory=dict)
    loss_coefficient: FloatOrArray = 0.0


@dataclass(frozen=True)
class Equipment:
    """A loss stated by its maker: fixed, or following the flow as ``(Q/at_flow)**exponent``.

    ``pressure_loss`` in Pa, ``at_flow`` in m³/s or None for a fixed loss; an exponent of 0 is a fixed loss too.
    """

    name: str
    pressure_loss: FloatOrArray
    at_flow: FloatOrArray | None = None
    exponent: FloatOrArray = 2.0


Element = Pipe | Equipment
