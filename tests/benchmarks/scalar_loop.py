"""The same equations pipe by pipe, as one would write them with ``math`` and ``scipy.optimize.brentq``.

Laminar flow of Bingham, Herschel-Bulkley and Casson fluids, Slatter's edge, the band edge, Wilson & Thomas with its
Newtonian part by Colebrook & White, and the straight line between; an edge is looked for only where it is needed.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, inf, log, log1p, log10, sqrt

from scipy.optimize import brentq

CRITICAL, BAND = 2100.0, log(4000.0 / 2100.0)
RATIO_AT_1 = 3.0**1.5 / 16.0


def critical_without_plug(n: float) -> float:
    m = max(n, 0.416)
    ratio = m / (1.0 + 3.0 * m) ** 2 * (2.0 + m) ** ((2.0 + m) / (1.0 + m))
    return CRITICAL * ratio / RATIO_AT_1 * ((3.0 * n + 1.0) / (4.0 * n)) ** n


def root(function, guess: float, lowest: float = -inf) -> float:
    """Bracket a rising function by steps that double, then ``brentq``."""
    low = high = guess
    step = 0.5
    while function(high) < 0.0:
        low, high, step = high, high + step, 2.0 * step
    step = 0.5
    while function(low) > 0.0:
        high, low, step = low, max(low - step, lowest), 2.0 * step
    return low if low == high else brentq(function, low, high)


@dataclass(frozen=True, slots=True)
class Pipe:
    casson: bool
    tau_y: float
    k: float
    n: float
    diameter: float
    density: float
    roughness: float

    def laminar(self, x: float) -> tuple[float, float, float]:
        """Wall stress, logarithm of the wall shear rate, and logarithm of 8V/D, at ``x = ln(tau_w - tau_y)``."""
        excess = exp(x)
        stress = self.tau_y + excess
        open_, plug = excess / stress, self.tau_y / stress
        if self.casson:
            s = sqrt(plug)
            log_rate = 2.0 * x - log(stress) - 2.0 * log1p(s) - log(self.k)
            section = open_ / (1.0 + s) * (21.0 + s * (15.0 + s * (10.0 + s * (6.0 + s * (3.0 + s))))) / 21.0
        else:
            n = self.n
            log_rate = (x - log(self.k)) / n
            section = (
                4.0 * n * open_ * (open_ * open_ / (3.0 * n + 1.0) + plug * open_ / (n + 0.5) + plug * plug / (n + 1.0))
            )
        return stress, log_rate, log_rate + log(section)

    def slatter(self, x: float) -> float:
        stress, log_rate, _ = self.laminar(x)
        plug, open_ = self.tau_y / stress, exp(x) / stress
        n = self.n
        if self.casson:
            s = sqrt(plug)
            rate = (21.0 + s * (36.0 + s * (46.0 + s * (52.0 + s * 13.0)))) / (21.0 * (1.0 + s) ** 2 * (1.0 + plug))
            relative = (s + open_ / (1.0 + s) * sqrt(rate)) ** 2
        else:
            rate = 4.0 * n * (plug / (n + 0.5) + open_ / (3.0 * n + 1.0)) / (1.0 + plug)
            relative = plug + open_ * rate**n
        velocity_squared = (self.diameter * open_ * rate) ** 2 / 8.0
        reynolds = log(self.density * velocity_squared / (stress * relative)) + 2.0 * log_rate
        return reynolds - log(CRITICAL * plug + critical_without_plug(n) * open_)

    def log_reynolds(self, x: float) -> float:
        stress, _, log_bulk = self.laminar(x)
        return log(self.density * self.diameter**2 / (8.0 * stress)) + 2.0 * log_bulk

    def turbulent(self, x: float) -> float:
        """ln V of Wilson & Thomas, -inf where it gives none."""
        stress, log_rate, _ = self.laminar(x)
        plug = self.tau_y / stress
        alpha = 1.0 + (2.0 * sqrt(plug) + plug) / 3.0 if self.casson else 2.0 * (1.0 + self.n * plug) / (1.0 + self.n)
        u = sqrt(stress / self.density)
        film = 2.51 / sqrt(8.0) * exp(log(stress / (self.density * u * self.diameter)) - log_rate)
        newtonian = -2.0 * sqrt(8.0) * log10(self.roughness / (3.7 * self.diameter) + film)
        blunting = -2.5 * (x - log(stress)) - 2.5 * plug * (1.0 + 0.5 * plug)
        velocity = u * (newtonian + 11.6 * (alpha - 1.0) - 2.5 * log(alpha) - blunting)
        return log(velocity) if velocity > 0.0 else -1e3


def wall_stress(pipe: Pipe, velocity: float) -> float:
    log_eighth = log(pipe.diameter / 8.0)
    log_velocity = log(velocity)
    log_bulk = log_velocity - log_eighth
    power_law = log(pipe.k) + pipe.n * log_bulk
    laminar = root(lambda x: pipe.laminar(x)[2] - log_bulk, power_law)
    if pipe.slatter(laminar) <= 0.0:
        return pipe.laminar(laminar)[0]
    edge = root(pipe.slatter, laminar)
    target = pipe.log_reynolds(edge) + BAND
    band = root(lambda x: pipe.log_reynolds(x) - target, edge)
    first, candidate = (pipe.laminar(x)[2] + log_eighth for x in (edge, band))
    at_band = pipe.turbulent(band)
    begin = max(candidate, at_band)
    if log_velocity >= begin:
        return pipe.laminar(root(lambda x: pipe.turbulent(x) - log_velocity, max(band, laminar), band))[0]
    second = band if at_band >= candidate else root(lambda x: pipe.turbulent(x) - candidate, band, band)
    share = (log_velocity - first) / (begin - first)
    stress_1, stress_2 = pipe.laminar(edge)[0], pipe.laminar(second)[0]
    return exp(log(stress_1) + share * log(stress_2 / stress_1))
