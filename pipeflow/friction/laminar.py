"""Exact laminar flow in a tube, and the local quantities at its wall that every other law is written in.

The unknown is the logarithm of the excess stress, ``x = ln(tau_w - tau_y)``: it keeps its digits where the line is
nearly plugged, and the laws are nearly straight in it. All expressions below are sums of positive terms, so nothing
cancels from the plug to the power-law end.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from pipeflow.arrays import Array
from pipeflow.sources import Source

RABINOWITSCH_MOONEY = Source(
    key="laminar-exact",
    title="Laminar flow of any rheology, integrated over the section",
    citation="Rabinowitsch, Z. phys. Chem. A145, 1 (1929); Mooney, J. Rheol. 2, 210 (1931)",
    confidence="exact",
)
BUCKINGHAM_REINER = Source(
    key="buckingham-reiner",
    title="Laminar flow of a Bingham plastic",
    citation="Buckingham, Proc. ASTM 21, 1154 (1921); Reiner, Kolloid-Z. 39, 80 (1926)",
    confidence="exact",
)
HAGEN_POISEUILLE = Source(
    key="hagen-poiseuille",
    title="Laminar flow of a Newtonian liquid",
    citation="Hagen (1839); Poiseuille (1840)",
    confidence="exact",
)
METZNER_REED = Source(
    key="metzner-reed",
    title="Local n' and K' and the Reynolds number of any purely viscous fluid, Re_MR = 8 rho V²/tau_w,laminar",
    citation="Metzner & Reed, AIChE J. 1, 434 (1955)",
    confidence="exact",
)


@dataclass(frozen=True, eq=False)
class Wall:
    """The fluid at the pipe wall, for a wall shear stress ``tau_w``; arrays of one shape.

    Attributes
    ----------
    log_excess : Array
        ``ln(tau_w - tau_y)``, stresses in Pa.
    stress : Array
        ``tau_w``, Pa.
    plug, sheared : Array
        ``tau_y/tau_w`` and ``1 - tau_y/tau_w``.
    log_rate : Array
        Logarithm of the shear rate at the wall, 1/s.
    bulk_ratio : Array
        ``G/rate``, with ``G = 8V/D`` of laminar flow.
    """

    log_excess: Array
    stress: Array
    plug: Array
    sheared: Array
    log_rate: Array
    bulk_ratio: Array

    @property
    def log_bulk_rate(self) -> Array:
        """Logarithm of ``G = 8V/D`` of laminar flow at this wall stress."""
        return self.log_rate + np.log(self.bulk_ratio)

    @property
    def inverse_local_index(self) -> Array:
        """``1/n' = d ln G/d ln tau_w = 4 rate/G - 3`` (Metzner & Reed 1955), without differentiation."""
        return 4.0 / self.bulk_ratio - 3.0

    @property
    def slope(self) -> Array:
        """``d ln G/d ln(tau_w - tau_y)``, from the local index; finite at the plug."""
        return 4.0 * self.sheared / self.bulk_ratio - 3.0 * self.sheared


class TubeLaw(Protocol):
    """Laminar flow of one rheology in a tube; parameters are arrays of one shape with the wall states."""

    @property
    def yield_stress(self) -> Array:
        """Yield stress, Pa."""
        ...

    def wall(self, log_excess: Array) -> Wall:
        """State of the wall at ``ln(tau_w - tau_y)``."""
        ...

    def guess(self, log_bulk_rate: Array) -> Array:
        """Start for the root find of ``ln(tau_w - tau_y)`` at a given ``ln(8V/D)``."""
        ...

    def annulus(self, wall: Wall) -> tuple[Array, Array]:
        """Shear rate and stress of the sheared annulus over those at the wall (the Re_3 of Slatter)."""
        ...

    def dissipation_shape(self, wall: Wall) -> Array:
        """``alpha``: area under the rheogram up to the wall over that of a Newtonian fluid (Wilson & Thomas 1985)."""
        ...

    def flow_index(self, wall: Wall) -> Array:
        """Index n of the law past its yield stress, for criteria written in n."""
        ...


@dataclass(frozen=True, eq=False)
class GeneralizedPowerLawTube:
    """``tau = tau_y + K rate**n``: Buckingham–Reiner (n = 1) and its extension to Herschel–Bulkley fluids.

    ``G = 4 n rate (1-phi) [(1-phi)²/(3n+1) + 2 phi (1-phi)/(2n+1) + phi²/(n+1)]``
    """

    yield_stress: Array
    log_consistency: Array
    index: Array

    def wall(self, log_excess: Array) -> Wall:
        """State of the wall at ``ln(tau_w - tau_y)``."""
        n = self.index
        excess = np.exp(log_excess)
        stress = self.yield_stress + excess
        sheared = excess / stress
        plug = self.yield_stress / stress
        section = sheared * sheared / (3.0 * n + 1.0) + plug * sheared / (n + 0.5) + plug * plug / (n + 1.0)
        log_rate = (log_excess - self.log_consistency) / n
        return Wall(log_excess, stress, plug, sheared, log_rate, 4.0 * n * sheared * section)

    def guess(self, log_bulk_rate: Array) -> Array:
        """Power-law stress, raised so that it is right again for a nearly plugged line."""
        n = self.index
        log_power_law = self.log_consistency + n * (log_bulk_rate + np.log((3.0 * n + 1.0) / (4.0 * n)))
        plugging = self.yield_stress * np.exp(-log_power_law) * (n + 1.0) / (3.0 * n + 1.0)
        return log_power_law + n / (n + 1.0) * np.log1p(plugging)

    def annulus(self, wall: Wall) -> tuple[Array, Array]:
        """Shear rate and stress of the sheared annulus over those at the wall."""
        n = self.index
        rate = 4.0 * n * (wall.plug / (n + 0.5) + wall.sheared / (3.0 * n + 1.0)) / (1.0 + wall.plug)
        return rate, wall.plug + wall.sheared * rate**n

    def dissipation_shape(self, wall: Wall) -> Array:
        """``2 (1 + n phi)/(1 + n)``."""
        return 2.0 * (1.0 + self.index * wall.plug) / (1.0 + self.index)

    def flow_index(self, wall: Wall) -> Array:
        """The parameter n."""
        return self.index


@dataclass(frozen=True, eq=False)
class CassonTube:
    """Casson's law, with ``s = sqrt(tau_y/tau_w)`` and the factor ``(1 - s)**3`` of its section integral taken out.

    ``G = (tau_w/mu_c) (1 - 16/7 s + 4/3 s² - s⁸/21)``
    """

    yield_stress: Array
    log_viscosity: Array

    def wall(self, log_excess: Array) -> Wall:
        """State of the wall at ``ln(tau_w - tau_y)``."""
        excess = np.exp(log_excess)
        stress = self.yield_stress + excess
        sheared = excess / stress
        plug = self.yield_stress / stress
        s = np.sqrt(plug)
        open_root = sheared / (1.0 + s)  # 1 - s
        polynomial = 21.0 + s * (15.0 + s * (10.0 + s * (6.0 + s * (3.0 + s))))
        log_rate = 2.0 * log_excess - np.log(stress) - 2.0 * np.log1p(s) - self.log_viscosity
        return Wall(log_excess, stress, plug, sheared, log_rate, open_root * polynomial / 21.0)

    def guess(self, log_bulk_rate: Array) -> Array:
        """Newtonian stress, raised by a share of the yield stress as the line plugs."""
        viscous = np.exp(log_bulk_rate + self.log_viscosity)
        return np.log(viscous + 2.0 * np.cbrt(viscous * self.yield_stress**2))

    def annulus(self, wall: Wall) -> tuple[Array, Array]:
        """Shear rate and stress of the sheared annulus over those at the wall."""
        s = np.sqrt(wall.plug)
        polynomial = 21.0 + s * (36.0 + s * (46.0 + s * (52.0 + s * 13.0)))
        rate = polynomial / (21.0 * (1.0 + s) ** 2 * (1.0 + wall.plug))
        return rate, (s + wall.sheared / (1.0 + s) * np.sqrt(rate)) ** 2

    def dissipation_shape(self, wall: Wall) -> Array:
        """``1 + 2/3 s + 1/3 s²``."""
        return 1.0 + (2.0 * np.sqrt(wall.plug) + wall.plug) / 3.0

    def flow_index(self, wall: Wall) -> Array:
        """1: past its yield stress the law bends towards a Newtonian fluid."""
        return np.ones_like(wall.stress)
