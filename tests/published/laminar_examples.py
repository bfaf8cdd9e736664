"""Laminar examples of textbooks, by id, source and page (01_, 02_ and the laminar part of 05_ in this folder)."""

from __future__ import annotations

from math import isclose

import numpy as np
from examples import FOOT, GALLON, GRAVITY, INCH, POUND, PSI, Quantities, example, published, rounded_inputs
from scipy.integrate import quad
from scipy.optimize import brentq

from pipeflow.friction import Regime, bulk_velocity, solve_pipes, wall_shear_stress
from pipeflow.line.elements import Fluid, Pipe
from pipeflow.line.route import solve
from pipeflow.rheology import Bingham, Casson, Newtonian, PowerLaw


def consistency(tube_consistency: float, n: float) -> float:
    """``K = K'/((3n+1)/(4n))^n`` of a power law."""
    return tube_consistency / ((3 * n + 1) / (4 * n)) ** n


@published("PL-GEAN-3.5-1")
def geankoplis_3_5_1() -> Quantities:
    """Geankoplis 1993, Example 3.5-1, p. 158; read in a public reworking of the example."""
    flow = solve_pipes(0.0728, 0.0524, 1041.0, PowerLaw(consistency(15.23, 0.40), 0.40))
    loss = 4 * flow.wall_shear_stress * 14.9 / 0.0524
    assert flow.regime == Regime.LAMINAR
    return {"dp": loss, "Re_gen": flow.reynolds_mr, "F": loss / 1041.0}


@published("PL-CR1-3.10")
def coulson_richardson_3_10_power_law() -> Quantities:
    """Coulson & Richardson vol. 1, 1999, Example 3.10, p. 127; read in a public reworking.

    Centre line to mean by the textbook ``u_max/V = (3n+1)/(n+1)``.
    """
    fluid = PowerLaw(10.0, 0.2)
    velocity = 1.0 * (0.2 + 1) / (3 * 0.2 + 1)
    slow, fast = (float(fluid.shear_stress(rate)) for rate in (10.0, 50.0))
    viscosity = (fast - slow) / 40.0
    return {
        "dp": 4 * wall_shear_stress(velocity, 0.04, 1000.0, fluid) * 200 / 0.04,
        "plastic_viscosity": viscosity,
        "yield_stress": slow - 10 * viscosity,
    }


@published("PL-CR1-3.11")
def coulson_richardson_3_11() -> Quantities:
    """Coulson & Richardson vol. 1, 1999, Example 3.11, p. 129; read in a public reworking."""
    thinning = PowerLaw(0.1 * 1000 ** (1 - 1 / 3), 1 / 3)
    assert isclose(float(thinning.apparent_viscosity(1000.0)), 0.1, rel_tol=1e-12)
    stress = 1e5 * 0.025 / (4 * 20)
    velocities = [bulk_velocity(stress, 0.025, 1000.0, law) for law in (thinning, Newtonian(0.1))]
    return {"Q_ratio": velocities[0] / velocities[1]}


@published("PL-CHHA-3.1")
def chhabra_richardson_3_1() -> Quantities:
    """Chhabra & Richardson 2008, Example 3.1; from memory (confidence high)."""
    fluid, flow = Fluid(1075.0, PowerLaw(3.0, 0.5)), 2500 / 3600 / 1075
    narrow, wide = (solve(flow, fluid, [Pipe("pipe", diameter, 10.0)]) for diameter in (0.025, 0.037))
    centre = narrow.velocity[0] * (3 * 0.5 + 1) / (0.5 + 1)
    return {"dp_25mm": narrow.pressure_loss, "u_centre": centre, "dp_37mm": wide.pressure_loss}


@published("PL-STSI-3")
def steffe_singh_case_3() -> Quantities:
    """Steffe & Singh 1997, Case 3; from memory (confidence high)."""
    flow = solve_pipes(1.66, 0.0348, 1250.0, PowerLaw(5.2, 0.45))
    return {"Re_PL": flow.reynolds_mr, "f_fanning": 2 * flow.wall_shear_stress / (1250 * 1.66**2)}


@published("BH-CHHA-3.2")
def chhabra_richardson_3_2() -> Quantities:
    """Chhabra & Richardson 2008, Example 3.2; from memory (confidence medium).

    The mean velocity that belongs to the centre line comes from the profile, by quadrature.
    """
    fluid, radius = Bingham(15.0, 0.150), 0.02
    centre = lambda stress: stress * radius / (2 * 0.150) * (1 - 15 / stress) ** 2  # noqa: E731
    stress = brentq(lambda stress: centre(stress) - 0.6, 16.0, 100.0)
    shear_rate = lambda share: max(stress * share - 15.0, 0.0) / 0.150  # noqa: E731
    mean = quad(lambda share: radius * share**2 * shear_rate(share), 0, 1, points=[15 / stress])[0]
    at_10, at_100 = (float(fluid.shear_stress(rate)) for rate in (10.0, 100.0))
    n = np.log10(at_100 / at_10)
    loss = 4 * wall_shear_stress(mean, 0.04, 1000.0, fluid) * 200 / 0.04
    return {"n": n, "m": at_10 / 10**n, "dp": loss}


@published("CA-F")
def casson_flow_function() -> Quantities:
    """``8 mu V/(D tau_w)`` at tau_y/tau_w = 0.2, the closed form of many texts; from memory (confidence high)."""
    return {"F_formula": 8 * bulk_velocity(1.0, 0.1, 1e-9, Casson(0.2, 1.0)) / 0.1}


@published("LA-STSI-1")
def steffe_singh_case_1() -> Quantities:
    """Steffe & Singh 1997, Case 1; from memory (confidence high)."""
    flow = solve_pipes(1.66, 0.0348, 1250.0, Newtonian(0.34))
    return {"Re": flow.reynolds_mr, "f_fanning": 2 * flow.wall_shear_stress / (1250 * 1.66**2)}


@published("NE-GEAN-2.10-1")
def geankoplis_2_10_1() -> Quantities:
    """Geankoplis 1993, Example 2.10-1, p. 85; read in a public reworking.

    The velocity is worked out from the printed loss of 640 Pa, as in the book, and the loss from that velocity.
    """
    printed = example("NE-GEAN-2.10-1").value("dp")
    velocity = bulk_velocity(printed * 0.00222 / (4 * 0.317), 0.00222, 875.0, Newtonian(0.00113))
    flow = solve_pipes(velocity, 0.00222, 875.0, Newtonian(0.00113))
    return {
        "dp, of the manometer": 0.0655 * 996 * GRAVITY,
        "dp": 4 * flow.wall_shear_stress * 0.317 / 0.00222,
        "V": velocity,
        "Q": velocity * np.pi / 4 * 0.00222**2,
        "Re": flow.reynolds_mr,
    }


@published("NE-GEAN-2.10-8")
def geankoplis_2_10_8() -> Quantities:
    """Geankoplis 1993, Example 2.10-8, p. 100; read in a public reworking. Entry length is not ours."""
    return {"Re": solve_pipes(0.10, 0.010, 998.2, Newtonian(1.005e-3)).reynolds_mr}


@published("NE-DENEV-6.1")
def de_nevers_6_1() -> Quantities:
    """de Nevers 2005, Example 6.1, p. 180; read in a public reworking."""
    fluid = Fluid(62.3 * POUND / FOOT**3, Newtonian(0.050))
    line = solve(50 * GALLON / 60, fluid, [Pipe("pipe", 3.068 * INCH, 100 * FOOT)])
    assert line.pipes.regime[0] == Regime.LAMINAR
    return {"dp_per_100ft": line.pressure_loss / PSI}


@published("NE-BROD-10.1")
def brodkey_10_1() -> Quantities:
    """Brodkey & Hershey 1988, Example 10.1, p. 405; read in a public reworking.

    The book rounds on its way (4.38 Pa over 8530 1/s): its last digit is met only with the half digits of the three
    printed inputs, 8.265e-4 m to the fourth power, 0.9364 psi/ft and 28.36 cm3/min.
    """
    entry = example("NE-BROD-10.1")
    diameter, flow, density = 8.265e-4, 28.36e-6 / 60, 1000 * (0.88412 - 0.92248e-3 * 30)
    velocity = flow / (np.pi / 4 * diameter**2)
    measured = 0.9364 * PSI / FOOT * diameter / 4
    at_unit_viscosity = float(wall_shear_stress(velocity, diameter, 1e-6, Newtonian(1.0)))
    half_digits = 4 * 0.0005 / 8.265 + 0.00005 / 0.9364 + 0.005 / 28.36
    printed = entry.printed["mu"]
    viscosity = rounded_inputs(
        measured / at_unit_viscosity,
        (printed.precision or 0.0) + half_digits * printed.value,
        f"half digits of the three printed inputs: {100 * half_digits:.2g} %",
    )
    return {"mu": viscosity, "Re": solve_pipes(velocity, diameter, density, Newtonian(printed.value)).reynolds_mr}


@published("NE-BROD-10.3")
def brodkey_10_3() -> Quantities:
    """Brodkey & Hershey 1988, Example 10.3, p. 414; read in a public reworking."""
    flow = solve_pipes(1 / 60, 0.06, 1000.0, Newtonian(1e-3))
    factor = 2 * flow.wall_shear_stress / (1000 / 3600)
    return {"Re": flow.reynolds_mr, "f_fanning": factor, "dp": 4 * flow.wall_shear_stress * 300 / 0.06}
