"""Pipe flow worked out a second time at 30 digits, from definitions alone.

Nothing here is taken from the project: a fluid is its own ``tau(rate)``; laminar flow is the Rabinowitsch–Mooney
integral in its by-parts form, ``8V/D = 4/3 rate_w - 4/(3 tau_w^3) Int_0^rate_w tau^3 d rate`` (Rabinowitsch 1929,
Mooney 1931), done by quadrature; turbulent laws stand in their classical implicit form in f and Re and are
bisected. All of these formulas are from memory of the papers named at each.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import mpmath as mp
import numpy as np

from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

DIGITS = 30
mp.mp.dps = DIGITS
MODELS = ("newtonian", "power-law", "bingham", "herschel-bulkley", "casson")


@dataclass(frozen=True)
class Fluid:
    """``tau_y``, ``k`` and ``n`` are floats, as the project is given them; ``n`` is 1 where the model has none."""

    model: str
    tau_y: float
    k: float
    n: float

    def stress(self, rate: Any) -> Any:
        """The definition of the model: shear stress at a shear rate."""
        if self.model == "casson":
            return (mp.sqrt(self.tau_y) + mp.sqrt(self.k * mp.mpf(rate))) ** 2
        return mp.mpf(self.tau_y) + self.k * mp.mpf(rate) ** mp.mpf(self.n)

    def rheology(self) -> Rheology:
        if self.model == "newtonian":
            return Newtonian(self.k)
        if self.model == "power-law":
            return PowerLaw(self.k, self.n)
        if self.model == "bingham":
            return Bingham(self.tau_y, self.k)
        if self.model == "casson":
            return Casson(self.tau_y, self.k)
        return HerschelBulkley(self.tau_y, self.k, self.n)


def bisect(function: Callable[[Any], Any], low: Any, high: Any) -> Any:
    """Root of a rising function: bisection to 1e-3, then chords through the bracket (Illinois) to 24 digits."""
    low, high = mp.mpf(low), mp.mpf(high)
    while high - low > 1e-3:
        middle = (low + high) / 2
        low, high = (middle, high) if function(middle) < 0 else (low, middle)
    at_low, at_high, kept = function(low), function(high), 0
    for _ in range(60):
        chord = high - at_high * (high - low) / (at_high - at_low)
        value = function(chord)
        if abs(value) < mp.mpf(10) ** -22:
            break
        if value < 0:
            at_high, kept = (at_high / 2, -1) if kept == -1 else (at_high, -1)
            low, at_low = chord, value
        else:
            at_low, kept = (at_low / 2, 1) if kept == 1 else (at_low, 1)
            high, at_high = chord, value
    return chord


def bulk_rate(fluid: Fluid, wall_rate: Any) -> Any:
    """``G = 8V/D`` of laminar flow at a shear rate at the wall."""
    wall_rate = mp.mpf(wall_rate)
    wall_stress = fluid.stress(wall_rate)
    cubes = mp.quad(lambda share: (fluid.stress(wall_rate * share) / wall_stress) ** 3, [0, 1])
    return mp.mpf(4) / 3 * wall_rate * (1 - cubes)


def local_index(fluid: Fluid, wall_rate: Any) -> Any:
    """``n' = d ln tau_w/d ln G`` by numerical differentiation of both along the wall shear rate."""
    at = mp.log(wall_rate)
    step = mp.mpf(10) ** -8
    slopes = []
    for quantity in (fluid.stress, lambda rate: bulk_rate(fluid, rate)):
        values = [mp.log(quantity(mp.exp(at + shift * step))) for shift in (-2, -1, 1, 2)]
        slopes.append((values[0] - 8 * values[1] + 8 * values[2] - values[3]) / (12 * step))
    return slopes[0] / slopes[1]


def plug_velocity(fluid: Fluid, wall_rate: Any, diameter: float) -> Any:
    """``Int rate dr`` from the plug to the wall, by parts: ``R (rate_w - Int tau d rate/tau_w)``."""
    wall_rate = mp.mpf(wall_rate)
    area = mp.quad(lambda share: fluid.stress(wall_rate * share), [0, 1]) / fluid.stress(wall_rate)
    return mp.mpf(diameter) / 2 * wall_rate * (1 - area)


def annulus_reynolds(fluid: Fluid, wall_rate: Any, diameter: float, density: float) -> Any:
    """Re_3 (Slatter 1994) from its definition: the flow less that of the plug, over the area left."""
    wall_stress = fluid.stress(wall_rate)
    radius = mp.mpf(diameter) / 2
    plug = fluid.tau_y / wall_stress
    flow = mp.pi * radius**3 * bulk_rate(fluid, wall_rate) / 4
    plug_area, area = mp.pi * (radius * plug) ** 2, mp.pi * radius**2
    velocity = (flow - plug_velocity(fluid, wall_rate, diameter) * plug_area) / (area - plug_area)
    return 8 * density * velocity**2 / fluid.stress(8 * velocity / (diameter * (1 - plug)))


def dodge_metzner_factor(reynolds: Any, n: Any, relative_roughness: Any = 0) -> Any:
    """Fanning factor of Dodge & Metzner (1959), AIChE J. 5, 189, bisected in ln f.

    With roughness: times ``f_RP(eps)/f_RP(0)``, both by the bracket of Reed & Pilehvari (1993), SPE 25456, at the f
    sought (the project's own joining of the two; the formulas are recalled, medium confidence for the second).
    """
    n = mp.mpf(n)

    return mp.exp(bisect(lambda log_f: _dodge_metzner_excess(mp.exp(log_f), reynolds, n, relative_roughness), -14, 1))


def _dodge_metzner_excess(f: Any, reynolds: Any, n: Any, relative_roughness: Any) -> Any:
    group = reynolds * f ** (1 - n / 2)
    smooth = 4 / n ** mp.mpf("0.75") * mp.log10(group) - mp.mpf("0.4") / n ** mp.mpf("1.2")
    film = mp.mpf("1.26") ** (n ** mp.mpf("-1.2")) / group ** (n ** mp.mpf("-0.75"))
    if film >= 1 or smooth <= 0:
        return mp.mpf(-1)
    effective = relative_roughness * (3 * n + 1) / (4 * n)
    rough_over_smooth = mp.log10(mp.mpf("0.27") * effective + film) / mp.log10(film)
    return smooth * rough_over_smooth - 1 / mp.sqrt(f)


def colebrook_factor(reynolds: Any, relative_roughness: Any) -> Any:
    """Darcy factor of Colebrook (1939) as White and others print it (3.7 and 2.51), bisected in ln f."""
    rough = mp.mpf(relative_roughness) / mp.mpf("3.7")

    def excess(log_f: Any) -> Any:
        root = mp.exp(log_f / 2)
        return -2 * mp.log10(rough + mp.mpf("2.51") / (reynolds * root)) - 1 / root

    return mp.exp(bisect(excess, -9, 3))


def colebrook_velocity(stress: Any, viscosity: Any, diameter: float, density: float, roughness: float) -> Any:
    """Velocity at which a Newtonian liquid has this wall stress, bisected on the implicit Colebrook equation."""
    rough = mp.mpf(roughness) / diameter / mp.mpf("3.7")

    def excess(log_velocity: Any) -> Any:
        velocity = mp.exp(log_velocity)
        factor = 8 * stress / (density * velocity**2)
        reynolds = density * velocity * diameter / viscosity
        return 1 / mp.sqrt(factor) + 2 * mp.log10(rough + mp.mpf("2.51") / (reynolds * mp.sqrt(factor)))

    return mp.exp(bisect(excess, -15, 25))


def rheogram_ratio(fluid: Fluid, wall_rate: Any) -> Any:
    """``alpha`` of Wilson & Thomas (1985): area under the rheogram over that of a Newtonian fluid, by quadrature."""
    wall_rate = mp.mpf(wall_rate)
    area = mp.quad(lambda share: fluid.stress(wall_rate * share), [0, 1])
    return 2 * area / fluid.stress(wall_rate)


def plug_blunting(plug: Any) -> Any:
    """``Omega`` of Thomas & Wilson (1987): mean of ``2.5 ln y+`` less that of the profile cut flat over the plug."""
    profile = lambda share: 2 * share * mp.mpf("2.5") * mp.log(1 - share)  # noqa: E731
    flat = lambda share: 2 * share * mp.mpf("2.5") * mp.log(1 - plug)  # noqa: E731
    return mp.quad(profile, [0, plug]) - mp.quad(flat, [0, plug])


def wilson_thomas_velocity(
    fluid: Fluid, wall_rate: Any, diameter: float, density: float, roughness: float = 0.0
) -> Any:
    """Wilson & Thomas (1985), Can. J. Chem. Eng. 63, 539, the Newtonian part by Colebrook at the secant viscosity."""
    stress = fluid.stress(wall_rate)
    alpha = rheogram_ratio(fluid, wall_rate)
    gain = mp.mpf("11.6") * (alpha - 1) - mp.mpf("2.5") * mp.log(alpha)
    if fluid.tau_y > 0:
        gain -= plug_blunting(fluid.tau_y / stress)
    newtonian = colebrook_velocity(stress, stress / wall_rate, diameter, density, roughness)
    return newtonian + mp.sqrt(stress / density) * gain


def dodge_metzner_velocity(
    fluid: Fluid, wall_rate: Any, diameter: float, density: float, roughness: float = 0.0
) -> Any:
    """Dodge & Metzner with n' and K' taken at this (turbulent) wall stress, bisected for the velocity."""
    stress = fluid.stress(wall_rate)
    n = local_index(fluid, wall_rate)
    consistency = stress / bulk_rate(fluid, wall_rate) ** n

    def excess(log_velocity: Any) -> Any:
        velocity = mp.exp(log_velocity)
        reynolds = density * velocity ** (2 - n) * diameter**n / (8 ** (n - 1) * consistency)
        factor = 2 * stress / (density * velocity**2)
        return -_dodge_metzner_excess(factor, reynolds, n, mp.mpf(roughness) / diameter)

    return mp.exp(bisect(excess, -15, 25))


def random_fluid(model: str, rng: np.random.Generator, wall_rate: float, plug: float, highest_n: float = 2.0) -> Fluid:
    """A fluid of this model whose ``tau_y/tau_w`` at the wall shear rate is about ``plug``."""
    n = float(rng.uniform(0.1, highest_n)) if model in ("power-law", "herschel-bulkley") else 1.0
    stress = 10.0 ** rng.uniform(-3, 3)
    if model in ("newtonian", "power-law"):
        return Fluid(model, 0.0, stress / wall_rate**n, n)
    if model == "casson":
        return Fluid(model, plug * stress, stress * (1 - plug**0.5) ** 2 / wall_rate, 1.0)
    return Fluid(model, plug * stress, stress * (1 - plug) / wall_rate**n, n)
