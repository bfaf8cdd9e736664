"""Fittings, sizes and velocity profiles in print, by id and source (07_ and 10_ in this folder)."""

from __future__ import annotations

import numpy as np
from examples import FOOT, GRAVITY, INCH, Ours, Quantities, departs, example, formula, published, rounded_inputs
from scipy.integrate import quad
from scipy.optimize import brentq

from pipeflow.line.catalogue import find_size
from pipeflow.line.elements import Fluid, Pipe, Vessel
from pipeflow.line.fittings import fittings, resistance
from pipeflow.line.kinetics import generalized_power_law_factors
from pipeflow.line.losses import contraction_constants
from pipeflow.line.route import solve
from pipeflow.rheology import Newtonian

WATER = Fluid(1000.0, Newtonian(1e-3))


def energy_factor(plug: float, n: float) -> float:
    """Kinetic-energy factor of laminar flow."""
    return float(generalized_power_law_factors(np.asarray(plug), np.asarray(n)).energy)


@published("FI-CR1-3.6")
def sudden_enlargement() -> Quantities:
    """Coulson & Richardson vol. 1, 1999, Example 3.6, p. 88; read in a public reworking (water assumed)."""
    line = solve(7.2 / 3600, WATER, [Pipe("narrow", 0.040, 1.0), Pipe("wide", 0.050, 1.0)])
    return {"h": line.reducer_loss[1] / (1000 * GRAVITY) * 1000}


@published("FI-ALPHA-PL")
def kinetic_energy_of_power_laws() -> Quantities:
    """``alpha = 3(3n+1)^2/((2n+1)(5n+3))``, a standard result; from memory (confidence high)."""
    by_formula = {
        f"alpha_n{n}": formula(
            energy_factor(0.0, n), 3 * (3 * n + 1) ** 2 / ((2 * n + 1) * (5 * n + 3)), "the formula itself"
        )
        for n in (0.2, 0.3, 0.7, 1.5)
    }
    return {
        "alpha_n1": energy_factor(0.0, 1.0),
        "alpha_n0": energy_factor(0.0, 1e-12),
        "alpha_n0.5": energy_factor(0.0, 0.5),
        **by_formula,
    }


@published("FI-ALPHA-BH")
def kinetic_energy_of_bingham() -> Quantities:
    """Without a plug it is Newtonian; from memory (confidence high)."""
    return {"alpha_phi0": energy_factor(0.0, 1.0)}


@published("FI-2K3K-eval")
def two_and_three_constant_methods() -> Quantities:
    """Hooper 1981, Darby 1999; constants from memory (high). No worked value is printed: the formula is.

    ``K = K1/Re + Kinf (1 + 1/ID)`` and ``K = Km/Re + Ki (1 + Kd/Dn^0.3)`` with the constants the entry lists.
    """
    found: Quantities = {}
    for method, laminar, turbulent in (
        ("hooper-2k", 800, 0.20 * (1 + 1 / 4.026)),
        ("darby-3k", 800, 0.071 * (1 + 4.2 / 4**0.3)),
    ):
        constants = resistance({"elbow_90_long_radius": 1}, 4.026 * INCH, 4.0, method)
        assert constants[0] == laminar
        assert abs(float(constants[1]) / turbulent - 1) < 1e-12
        for reynolds in (10.0, 1e3, 1e5):
            name = f"K at Re {reynolds:g}, {method}"
            found[name] = formula(
                _elbow(method, reynolds), laminar / reynolds + turbulent, "no worked value is printed"
            )
    return found


def _elbow(method: str, reynolds: float) -> float:
    """Loss coefficient of the elbow of 4 in by solving a line of it alone, in water."""
    diameter = 4.026 * INCH
    velocity = reynolds * 1e-3 / (1000 * diameter)
    elbow = Pipe("elbow", diameter, 0.0, nominal_diameter=4.0, fittings={"elbow_90_long_radius": 1})
    line = solve(velocity * np.pi / 4 * diameter**2, WATER, [elbow], fittings=method)
    return float(line.fitting_loss[0] / (500 * velocity**2))


@published("FI-CENG-5-2")
def draining_of_a_tank() -> Quantities:
    """Cengel & Cimbala 2006, Example 5-2; from memory (confidence high).

    The velocity of the jet at each level is that at which a line of an outlet without length needs no head (Torricelli
    1643); the time is the integral of ``(D_tank/D_jet)^2 dh/V``.
    """
    jet = 0.5 * INCH
    outlet = [Pipe("outlet", jet, 0.0, fittings={"exit": 1})]

    def head_needed(velocity: float, level: float) -> float:
        flow = velocity * np.pi / 4 * jet**2
        line = solve(flow, WATER, outlet, Vessel(level=level), Vessel(discharge="free"))
        return float(line.total_head)

    def velocity(level: float) -> float:
        return float(brentq(head_needed, 1.0, 20.0, (level,), xtol=1e-10))

    assert abs(velocity(3.0) / np.sqrt(2 * GRAVITY * 3.0) - 1) < 1e-9
    per_velocity, _ = quad(lambda level: 1 / velocity(level), 2 * FOOT, 4 * FOOT, epsrel=1e-8)
    return {"time": (3 * FOOT / jet) ** 2 * per_velocity}


@published("FI-EDWARDS")
def edwards_laminar_constants() -> Quantities:
    """Edwards, Jadallah & Smith 1985, as tabulated by Steffe 1996; from memory (confidence medium).

    Fittings hold the constant itself. The contractions were recalled with two pairs of area ratios: the program's
    ``160 (1-s)`` is asked to lie between them, as is its distance from them.
    """
    entry = example("FI-EDWARDS")
    constants = {
        f"A_{key}": Ours(
            fittings()[key].constants("edwards-darby", 0.1, 4.0)[0], "taken over", "the program holds the constant", 0.0
        )
        for key in ("elbow_90", "gate_valve", "globe_valve")
    }
    contractions: Quantities = {}
    for name, ratio, other in (("A_contraction_0.445", 0.445, 0.22), ("A_contraction_0.660", 0.660, 0.445)):
        ours, by_other = (float(contraction_constants(s)[0]) for s in (ratio, other))
        assert 0.5 < ours / entry.value(name) < 1.0
        assert 1.0 < by_other / entry.value(name) < 1.6
        why = f"the area ratio is recalled as {ratio} and as {other}; 160 (1-s) lies below for the first, above for the"
        contractions[name] = departs(ours, f"{why} second")
        contractions[f"{name}, A2/A1 = {other}"] = departs(by_other, "the other reading of the area ratio")
    return constants | contractions


@published("PD-CHECK")
def bores_of_worked_examples() -> Quantities:
    """Bores that de Nevers Ex. 6.1, Geankoplis Ex. 2.10-7 and 2.10-6 and Steffe & Singh print; read."""

    def bore(name: str) -> float:
        size = find_size(name)
        assert size is not None
        return size.inside_diameter

    printed = example("PD-CHECK").printed["NPS2_sch40_ft"]
    return {
        "NPS3_sch40_in": bore("NPS 3 Sch 40") / INCH,
        "NPS4_sch40_m": bore("NPS 4 Sch 40"),
        "NPS2_sch40_ft": rounded_inputs(
            bore("NPS 2 Sch 40") / FOOT, 1.0001 * (printed.precision or 0.0), "0.17225 ft cut to 0.1722"
        ),
        "BPE_1.5in_m": bore("BPE 1-1/2"),
    }
