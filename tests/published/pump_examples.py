"""Pumps in print, by id and source (08_ in this folder)."""

from __future__ import annotations

import numpy as np
from examples import FOOT, GALLON, GRAVITY, Quantities, chart, published
from scipy.optimize import brentq

from pipeflow.pumping.correction import efficiency_factor, flow_factor, head_factor, viscosity_parameter
from pipeflow.pumping.curve import WaterCurve, at_speed
from pipeflow.pumping.duty import duties
from pipeflow.pumping.motor import shaft_power
from pipeflow.pumping.solids import cave
from pipeflow.pumping.suction import level_for_npsh, npsh_available

RPM = np.pi / 30
HORSEPOWER = 745.699872
ROUNDED_GRAVITY = 9.81


def weighed(density: float) -> float:
    """Density that weighs here what the given one weighs with the book's g of 9.81 m/s²."""
    return density * ROUNDED_GRAVITY / GRAVITY


@published("PU-HI-1")
def viscous_performance() -> Quantities:
    """ANSI/HI 9.6.7, worked example; from memory (confidence high).

    The equations give B = 5.52; the example carries 5.50, and its factors are worked out from that.
    """
    carried = 5.50
    return {
        "B": viscosity_parameter(120e-6, 110 / 3600, 77.0, 2950 * RPM),
        "C_Q": flow_factor(carried),
        "C_H_BEP": head_factor(carried, 1.0),
        "C_eta": efficiency_factor(carried),
        **{f"C_H_{share}": head_factor(carried, share / 100) for share in (60, 80, 120)},
    }


@published("PU-ABUL-22.10")
def benzene_with_suction_lift() -> Quantities:
    """Abulencia & Theodore 2009, Example 22.10, p. 306; read in a public reworking."""
    velocity = 0.003 / (np.pi / 4 * 0.03**2)
    dynamic = velocity**2 / (2 * GRAVITY)
    pressure = 101325 - 865 * GRAVITY * (1.8 + dynamic)
    return {
        "dyn_head": dynamic,
        "P_suction": pressure,
        "NPSH": npsh_available(pressure, 26200.0, 865.0, velocity),
    }


@published("PU-SCHA-9.6")
def drawing_down_a_tank() -> Quantities:
    """Schaschke 1998, Example 9.6, p. 247; read in a public reworking. The pump stands 3 m above the tank's bottom."""
    level = float(level_for_npsh(5.0, 0.94 * 101.3e3, 18e3, weighed(970.0), 0.5))
    volume = (2.5 - (3.0 + level)) * np.pi / 4 * 3.0**2
    return {"volume": volume, "time": volume / 5}


@published("PU-SCHA-9.8")
def lowest_level() -> Quantities:
    """Schaschke 1998, Example 9.8, p. 251; read in a public reworking. NPSH required is 2.8 N_s^1.33 H there."""
    return {"level": level_for_npsh(2.8 * 0.14**1.33 * 30.0, 50e3, 7.38e3, 992.0, 0.2)}


@published("PU-SCHA-9.10")
def slower_pump() -> Quantities:
    """Schaschke 1998, Example 9.10, p. 255; read in a public reworking.

    The speed at which the head of 34 m becomes 23 m. The flows of the two points are not in that ratio.
    """
    curve = WaterCurve(np.array([0.0, 0.0066, 0.01]), np.array([40.0, 34.0, 25.0]), speed=1200 * RPM)
    return {"N2": brentq(lambda turns: at_speed(curve, turns * RPM).head[1] - 23.0, 500.0, 1200.0)}


@published("PU-CR1-8.2")
def reboiler_pump() -> Quantities:
    """Coulson & Richardson vol. 1, 1999, Example 8.2, p. 343; read in a public reworking. The liquid boils."""
    velocity = 0.0004 / (np.pi / 4 * 0.025**2)
    friction = 4 * 0.0028 * (10 / 0.025) * velocity**2 / GRAVITY
    return {"height": level_for_npsh(2.0, 1e5, 1e5, 800.0, friction)}


@published("PU-CR1-8.8")
def pump_on_a_system() -> Quantities:
    """Coulson & Richardson vol. 1, 1999, Example 8.8, p. 370; read in a public reworking. Drawn by hand there."""
    curve = WaterCurve(np.array([28.0, 39.0, 50.0, 56.0, 59.0]) * 1e-4, np.array([23.2, 21.3, 18.9, 15.2, 11.0]))
    duty = duties(lambda flow: (flow, curve.head_at(flow)), curve.ends, lambda flow: 10 + 2.205e5 * flow**2).duty
    assert duty is not None
    power = shaft_power(duty.flow, duty.head, 1000.0, 0.50) / 1e3
    why = "a crossing of straight lines between the points; 2 % as the entry says; the cubic passes above the lines"
    return {"Q": duty.flow, "power": chart(power, 0.02 * 1.74, why)}


@published("PU-GEAN-3.3-1")
def brake_horsepower() -> Quantities:
    """Geankoplis 1993, Example 3.3-1, p. 135; read in a public reworking."""
    return {"bhp": shaft_power(40 * GALLON / 60, 38.5 * FOOT, 1000.0, 0.60) / HORSEPOWER}


@published("PU-SCHA-9.11")
def power_of_a_scaled_pump() -> Quantities:
    """Schaschke 1998, Example 9.11, p. 257; read in a public reworking."""
    return {"P": shaft_power(0.05, 27.958, weighed(1000.0), 0.80)}


@published("PU-CAVE")
def head_with_sand() -> Quantities:
    """Cave 1976; from memory (confidence medium)."""
    return {"HR": cave(0.211e-3, 2.65, 0.30)}
