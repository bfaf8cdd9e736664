"""Laminar tube flow of laws without a closed form, by the Rabinowitsch–Mooney integral by parts; and Ellis' own."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array
from pipeflow.friction.laminar import Wall
from pipeflow.rheology import Ellis, GeneralRheology


def _double_exponential(step: float = 0.09, lower: float = -4.0, upper: float = 3.3) -> tuple[Array, Array]:
    """Nodes and weights of the double-exponential rule on (0, 1), closest together at the ends."""
    u = np.arange(lower, upper + step / 2.0, step)
    nodes = 1.0 / (1.0 + np.exp(-np.pi * np.sinh(u)))
    opposite = 1.0 / (1.0 + np.exp(np.pi * np.sinh(u)))
    return nodes, step * np.pi * np.cosh(u) * nodes * opposite


NODES, WEIGHTS = _double_exponential()


@dataclass(frozen=True, eq=False)
class ByPartsTube:
    """``G = 4/3 rate_w - 4/(3 tau_w³) ∫ tau³ d rate`` from rest to the wall: needs ``tau(rate)`` alone.

    A yield stress is in it by itself. Written as ``G/rate_w = 4/3 ∫ [1 - (tau/tau_w)³] dt`` over ``t = rate/rate_w``.
    """

    rheology: GeneralRheology
    yield_stress: Array

    def wall(self, log_excess: Array) -> Wall:
        """State of the wall at ``ln(tau_w - tau_y)``."""
        excess = np.exp(log_excess)
        stress = self.yield_stress + excess
        log_rate = self.rheology.log_rate(log_excess)
        relative = self._relative_stress(log_rate, stress)
        ratio = 4.0 / 3.0 * (WEIGHTS @ ((1.0 - relative) * (1.0 + relative + relative * relative)))
        return Wall(log_excess, stress, self.yield_stress / stress, excess / stress, log_rate, ratio)

    def guess(self, log_bulk_rate: Array) -> Array:
        """Stress of the law at the bulk rate itself."""
        return np.log(self.rheology.excess(np.exp(log_bulk_rate)))

    def annulus(self, wall: Wall) -> tuple[Array, Array]:
        """Shear rate and stress of the sheared annulus over those at the wall."""
        plug_flow = 4.0 * (1.0 - self.dissipation_shape(wall) / 2.0) * wall.plug**2
        ratio = (wall.bulk_ratio - plug_flow) / ((1.0 - wall.plug**2) * wall.sheared)
        return ratio, self.rheology.shear_stress(ratio * np.exp(wall.log_rate)) / wall.stress

    def dissipation_shape(self, wall: Wall) -> Array:
        """``2 ∫ (tau/tau_w) dt``."""
        return 2.0 * (WEIGHTS @ self._relative_stress(wall.log_rate, wall.stress))

    def flow_index(self, wall: Wall) -> Array:
        """Slope of the law past its yield stress, at the wall; without one the local n' of Metzner & Reed."""
        past_yield = self.rheology.log_slope(np.exp(wall.log_rate))
        return np.where(self.yield_stress > 0, past_yield, 1.0 / wall.inverse_local_index)

    def _relative_stress(self, log_rate: Array, stress: Array) -> Array:
        rates = NODES[:, None] * np.exp(log_rate)
        return (self.yield_stress + self.rheology.excess(rates)) / stress


@dataclass(frozen=True, eq=False)
class EllisTube:
    """``G = (tau_w/eta_0) [1 + 4/(alpha+3) (tau_w/tau_half)^(alpha-1)]``."""

    rheology: Ellis
    yield_stress: Array

    def wall(self, log_excess: Array) -> Wall:
        """State of the wall at ``ln tau_w``."""
        law, stress = self.rheology, np.exp(log_excess)
        thinning = self._thinning(log_excess)
        log_rate = log_excess - np.log(law.zero_shear_viscosity) + np.log1p(thinning)
        ratio = (1.0 + 4.0 / (law.exponent + 3.0) * thinning) / (1.0 + thinning)
        return Wall(log_excess, stress, np.zeros_like(stress), np.ones_like(stress), log_rate, ratio)

    def guess(self, log_bulk_rate: Array) -> Array:
        """Stress of the Newtonian end."""
        return log_bulk_rate + np.log(self.rheology.zero_shear_viscosity)

    def annulus(self, wall: Wall) -> tuple[Array, Array]:
        """Without a plug the annulus is the whole section: its rate is 8V/D."""
        rate = wall.bulk_ratio
        return rate, self.rheology.shear_stress(rate * np.exp(wall.log_rate)) / wall.stress

    def dissipation_shape(self, wall: Wall) -> Array:
        """``2 - 2 ∫ rate dtau/(tau_w rate_w)``, the integral in closed form."""
        thinning = self._thinning(wall.log_excess)
        return 2.0 - (1.0 + 2.0 / (self.rheology.exponent + 1.0) * thinning) / (1.0 + thinning)

    def flow_index(self, wall: Wall) -> Array:
        """The local n' of Metzner & Reed."""
        return 1.0 / wall.inverse_local_index

    def _thinning(self, log_stress: Array) -> Array:
        return np.exp((self.rheology.exponent - 1.0) * (log_stress - np.log(self.rheology.half_stress)))
