"""What viscosity does to a rotodynamic pump: the equations of ANSI/HI 9.6.7.

SI floats or arrays, which broadcast. A parameter B of 40 or more gives nan: the method does not reach there.
"""

from __future__ import annotations

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Range, Source

HI_VISCOSITY = Source(
    key="hi-9.6.7",
    title="Head, flow and efficiency of a rotodynamic pump in a viscous liquid",
    citation="ANSI/HI 9.6.7-2010, Effects of Liquid Viscosity on Rotodynamic Pump Performance, the parameter B method",
    ranges=(
        Range("B", None, 40.0),
        Range("viscosity in mm²/s", 1.0, 3000.0),
        Range("best-efficiency flow in m³/h", 3.0, 260.0),
        Range("best-efficiency head of a stage in m", 6.0, 130.0),
        Range("specific speed (1/min, m³/s, m)", None, 60.0),
    ),
    note=(
        "for Newtonian liquids, radial impellers, open or closed; up to 4000 mm²/s allowed; the standard excludes "
        "slurries: with an equivalent viscosity it is an estimate that the pump's maker must confirm"
    ),
)
HI_NPSH = Source(
    key="hi-9.6.7-npsh",
    title="NPSH required in a viscous liquid",
    citation="ANSI/HI 9.6.7-2010: NPSH_W {1 + A (1/C_H - 1) 274 000 NPSH_BEP-W/(Q_BEP^0.667 N^1.33)}, m³/h, rpm, m",
    confidence="medium",
    note="A = 0.1 for an end suction, 0.5 for a side inlet",
)
HIGHEST_B = 40.0
INLET = {"end": 0.1, "side": 0.5}
"""The factor A of the NPSH correction, by the inlet of the pump."""
HOUR, RPM, CENTISTOKE = 3600.0, 30.0 / np.pi, 1e6
"""From m³/s to m³/h, from rad/s to 1/min, from m²/s to mm²/s: the units of the published forms."""


def viscosity_parameter(
    kinematic_viscosity: FloatOrArray, flow: FloatOrArray, head: FloatOrArray, speed: FloatOrArray
) -> Array:
    """``B = 16.5 nu^0.5 H^0.0625/(Q^0.375 N^0.25)``, with nu in mm²/s, H in m, Q in m³/h and N in 1/min.

    Parameters
    ----------
    kinematic_viscosity : float or array
        m²/s.
    flow, head : float or array
        Best-efficiency flow on water, m³/s, and head of one stage there, m.
    speed : float or array
        rad/s.

    Examples
    --------
    >>> speed = 2950 * np.pi / 30
    >>> round(float(viscosity_parameter(120e-6, 110 / 3600, 77.0, speed)), 2)
    5.52
    """
    viscous = np.sqrt(CENTISTOKE * np.asarray(kinematic_viscosity))
    size = (HOUR * np.asarray(flow)) ** 0.375 * (RPM * np.asarray(speed)) ** 0.25
    return 16.5 * viscous * np.asarray(head) ** 0.0625 / size


def preselection_parameter(
    kinematic_viscosity: FloatOrArray, viscous_flow: FloatOrArray, viscous_head: FloatOrArray
) -> Array:
    """``B = 2.80 nu^0.5/(Q_vis^0.25 H_vis^0.125)`` from the duty alone, with nu in mm²/s, Q in m³/h, H in m.

    Parameters
    ----------
    kinematic_viscosity, viscous_flow, viscous_head : float or array
        m²/s; the flow, m³/s, and the head of one stage, m, that are wanted in the viscous liquid.
    """
    viscous = np.sqrt(CENTISTOKE * np.asarray(kinematic_viscosity))
    return 2.80 * viscous / ((HOUR * np.asarray(viscous_flow)) ** 0.25 * np.asarray(viscous_head) ** 0.125)


def preselected_water_duty(
    kinematic_viscosity: FloatOrArray, viscous_flow: FloatOrArray, viscous_head: FloatOrArray
) -> tuple[Array, Array]:
    """Flow [m³/s] and head [m] on water of a pump that gives a wanted duty in the viscous liquid at its best point."""
    factor = flow_factor(preselection_parameter(kinematic_viscosity, viscous_flow, viscous_head))
    return viscous_flow / factor, viscous_head / factor


def flow_factor(b: FloatOrArray) -> Array:
    """``C_Q = 2.71^(-0.165 (log10 B)^3.15)``, also C_H at the best-efficiency flow; the base is 2.71, not e.

    1 up to B = 1, nan from B = 40.
    """
    exponent = -0.165 * np.log10(np.maximum(_within(b), 1.0)) ** 3.15
    return np.asarray(2.71**exponent)


def head_factor(b: FloatOrArray, flow_ratio: FloatOrArray) -> Array:
    """``C_H = 1 - (1 - C_BEP-H) (Q_W/Q_BEP-W)^0.75``: 1 at shut-off, nan from where it would leave no head.

    Parameters
    ----------
    b : float or array
    flow_ratio : float or array
        Flow over best-efficiency flow, both on water.
    """
    share = np.asarray(flow_ratio, dtype=np.float64)
    factor = 1.0 - (1.0 - flow_factor(b)) * np.where(share >= 0, share, np.nan) ** 0.75
    return np.where(factor > 0, factor, np.nan)


def efficiency_factor(b: FloatOrArray) -> Array:
    """``C_eta = B^(-0.0547 B^0.69)``; 1 up to B = 1, where the form would exceed it, and nan from B = 40."""
    bounded = np.maximum(_within(b), 1.0)
    return np.asarray(bounded ** (-0.0547 * bounded**0.69))


def npsh_factor(
    best_head_factor: FloatOrArray,
    best_npsh_required: FloatOrArray,
    best_flow: FloatOrArray,
    speed: FloatOrArray,
    inlet: str = "end",
) -> Array:
    """NPSH required in the viscous liquid over that on water.

    Parameters
    ----------
    best_head_factor : float or array
        C_H at the best-efficiency flow.
    best_npsh_required, best_flow : float or array
        On water at the best-efficiency point, m and m³/s.
    speed : float or array
        rad/s.
    inlet : str
        ``end`` or ``side``.
    """
    size = (HOUR * np.asarray(best_flow)) ** 0.667 * (RPM * np.asarray(speed)) ** 1.33
    loss = 1.0 / np.asarray(best_head_factor) - 1.0
    return np.asarray(1.0 + INLET[inlet] * loss * 274_000.0 * best_npsh_required / size)


def specific_speed(speed: FloatOrArray, flow: FloatOrArray, head: FloatOrArray) -> Array:
    """``N Q^0.5/H^0.75`` with N in 1/min, Q in m³/s, H of one stage in m; arguments in SI."""
    return np.asarray(RPM * np.asarray(speed) * np.sqrt(flow) / np.asarray(head) ** 0.75)


def _within(b: FloatOrArray) -> Array:
    given = np.asarray(b, dtype=np.float64)
    return np.where(given < HIGHEST_B, given, np.nan)
