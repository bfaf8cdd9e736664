"""What a pump finds at its inlet: NPSH, the margin on what it requires, and whether a slurry flows to it at all."""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.sources import Source

NPSH = Source(
    key="npsh",
    title="Net positive suction head",
    citation="(p_abs - p_vapour)/(rho g) + V²/(2g) at the inlet of the pump, at the level of its shaft",
    confidence="exact",
)
NPSH_MARGIN = Source(
    key="npsh-margin",
    title="Margin of NPSH available on NPSH required",
    citation="the greater of 1 m and 0.3 NPSH required, on top of it",
    confidence="medium",
    note="common practice for slurries; high suction energy, a hot or gassy feed ask for more",
)
SUCTION_YIELD = Source(
    key="suction-yield",
    title="Pressure that makes a yield-stress slurry flow to the pump at all",
    citation="force balance: p + rho g z > 4 tau_y L/D of the suction line",
    confidence="exact",
)
LEAST_MARGIN, MARGIN_SHARE = 1.0, 0.3


def npsh_available(
    absolute_pressure: FloatOrArray,
    vapour_pressure: FloatOrArray,
    density: FloatOrArray,
    velocity: FloatOrArray,
    acceleration_head: FloatOrArray = 0.0,
) -> Array:
    """``(p - p_v)/(rho g) + V²/(2g)`` [m] at the inlet of a pump.

    Parameters
    ----------
    absolute_pressure, vapour_pressure : float or array
        At the inlet, and of the liquid at its temperature, Pa.
    density : float or array
        Of the slurry, kg/m³.
    velocity : float or array
        At the inlet, m/s.
    acceleration_head : float or array
        Of a reciprocating pump, m.
    """
    static = (np.asarray(absolute_pressure) - vapour_pressure) / (np.asarray(density) * STANDARD_GRAVITY)
    return static + np.asarray(velocity) ** 2 / (2.0 * STANDARD_GRAVITY) - acceleration_head


def npsh_of_vessel(
    surface_pressure: FloatOrArray,
    vapour_pressure: FloatOrArray,
    density: FloatOrArray,
    level: FloatOrArray,
    head_loss: FloatOrArray,
    acceleration_head: FloatOrArray = 0.0,
) -> Array:
    """``(p_surface - p_v)/(rho g) + z - h`` [m]: the same from the surface of the vessel.

    Parameters
    ----------
    surface_pressure, vapour_pressure : float or array
        Absolute pressure on the surface, and of the liquid's vapour, Pa.
    density : float or array
        kg/m³.
    level : float or array
        Of the surface above the pump, m.
    head_loss : float or array
        Of the suction line, of the thickest and coldest slurry, m.
    acceleration_head : float or array
        Of a reciprocating pump, m.
    """
    from_surface = npsh_available(surface_pressure, vapour_pressure, density, 0.0, acceleration_head)
    return from_surface + level - np.asarray(head_loss)


def level_for_npsh(
    npsh: FloatOrArray,
    surface_pressure: FloatOrArray,
    vapour_pressure: FloatOrArray,
    density: FloatOrArray,
    head_loss: FloatOrArray,
) -> Array:
    """Level of the surface above the pump [m] that makes a wanted NPSH available; as :func:`npsh_of_vessel`."""
    return npsh - npsh_of_vessel(surface_pressure, vapour_pressure, density, 0.0, head_loss)


def npsh_asked(npsh_required: FloatOrArray) -> Array:
    """NPSH asked for: that required and its margin, ``NPSHr + max(1 m, 0.3 NPSHr)`` [m]."""
    required = np.asarray(npsh_required, dtype=np.float64)
    return required + np.maximum(LEAST_MARGIN, MARGIN_SHARE * required)


def suction_yield_pressure(length: FloatOrArray, diameter: FloatOrArray, yield_stress: FloatOrArray) -> Array:
    """``4 tau_y L/D`` [Pa]: what level and pressure of the source must overcome, summed over the suction pipes."""
    return np.asarray(4.0 * np.asarray(yield_stress) * length / np.asarray(diameter))
