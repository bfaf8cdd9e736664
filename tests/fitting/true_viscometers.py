"""Viscometers worked out from the velocity profile of the true fluid; nothing here is taken from the project.

A fluid is its own shear rate at a stress. A tube: the velocity is the integral of the shear rate from the wall inwards,
the flow that of the velocity over the section. Cylinders: the angular velocity is integrated across the gap, where the
stress falls as 1/r².
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.integrate import quad, solve_ivp

from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology


@dataclass(frozen=True)
class Fluid:
    """``tau_y + k rate**n``, or Casson's law."""

    tau_y: float
    k: float
    n: float = 1.0
    casson: bool = False

    def rate(self, stress: float) -> float:
        if stress <= self.tau_y:
            return 0.0
        if self.casson:
            return (np.sqrt(stress) - np.sqrt(self.tau_y)) ** 2 / self.k
        return ((stress - self.tau_y) / self.k) ** (1.0 / self.n)

    def stress(self, rate: float) -> float:
        if self.casson:
            return (np.sqrt(self.tau_y) + np.sqrt(self.k * rate)) ** 2
        return self.tau_y + self.k * rate**self.n

    def rheology(self) -> Rheology:
        if self.casson:
            return Casson(self.tau_y, self.k)
        if self.tau_y == 0:
            return Newtonian(self.k) if self.n == 1 else PowerLaw(self.k, self.n)
        return Bingham(self.tau_y, self.k) if self.n == 1 else HerschelBulkley(self.tau_y, self.k, self.n)


FLUIDS = {
    "thinning 0.3": Fluid(0.0, 4.0, 0.3),
    "thinning 0.3 with yield": Fluid(12.0, 2.0, 0.3),
    "thinning 0.6 with yield": Fluid(8.0, 0.5, 0.6),
    "newtonian": Fluid(0.0, 0.3),
    "bingham": Fluid(6.0, 0.05),
    "casson": Fluid(5.0, 0.1, casson=True),
    "thickening 1.5": Fluid(0.0, 0.01, 1.5),
    "thickening 1.5 with yield": Fluid(8.0, 0.01, 1.5),
}


def tube_flow(rate: Callable[[float], float], tau_y: float, wall_stress: float, diameter: float) -> float:
    """Flow in m³/s without slip: ``∫ 2 pi r u dr``, u itself an integral; exchanged to ``∫ pi r² (-du/dr) dr``."""
    radius = diameter / 2.0
    plug = radius * min(tau_y / wall_stress, 1.0)

    def shell(r: float) -> float:
        return np.pi * r * r * rate(wall_stress * r / radius)

    return quad(shell, plug, radius, epsrel=1e-11, epsabs=0.0, limit=400)[0]


def cylinder_speed(fluid: Fluid, bob_stress: float, bob: float, cup: float) -> float:
    """Speed in rad/s: ``d omega/dr = -rate(tau_b (R_b/r)²)/r`` from the cup, which stands, to the bob."""
    edge = min(cup, bob * np.sqrt(bob_stress / fluid.tau_y)) if fluid.tau_y > 0 else cup
    turned = solve_ivp(
        lambda r, _: [-fluid.rate(bob_stress * (bob / r) ** 2) / r], (edge, bob), [0.0], rtol=1e-10, atol=1e-14
    )
    return float(turned.y[0, -1])
