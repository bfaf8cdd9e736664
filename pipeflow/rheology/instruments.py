"""From what an instrument shows to the shear rate at its wall, without a model being imposed.

A tube shows ``8V/D``, concentric cylinders show ``2 Omega``; the shear rate at the wall differs from it by a factor
that depends on the fluid. The factor is worked out for the law that fits the readings best, by integrating its flow
through the instrument at the reading itself; where the readings leave that law by more than their scatter, the slope of
what is left over corrects the factor (the rule of Rabinowitsch and Mooney for tubes, of Krieger and Maron for
cylinders).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Protocol

import numpy as np

from pipeflow.arrays import Array
from pipeflow.quadrature import gauss_legendre
from pipeflow.rheology.fitting import FINEST_RESOLUTION, aicc
from pipeflow.rheology.forms import FORMS, Form, Problem
from pipeflow.rheology.least_squares import solve
from pipeflow.rheology.models import Rheology
from pipeflow.rootfind import find_root
from pipeflow.sources import Source

RABINOWITSCH = Source(
    key="rabinowitsch-mooney",
    title="Shear rate at the wall of a tube, (3 + 1/n')/4 of 8V/D with n' the slope of ln tau_w on ln 8V/D",
    citation="Rabinowitsch, Z. phys. Chem. A145, 1 (1929); Mooney, J. Rheol. 2, 210 (1931)",
    confidence="exact",
)
KRIEGER_MARON = Source(
    key="krieger-maron",
    title="Shear rate at the bob of concentric cylinders from the slope of ln tau_b on ln speed",
    citation="Krieger & Maron, J. Appl. Phys. 25, 72 (1954); Yang & Krieger, J. Rheol. 22, 413 (1978)",
)

BASES = tuple(form for form in FORMS if form.key in ("herschel-bulkley", "casson"))
"""The laws that hold the others within them."""

_ROUNDS = 60
_SETTLED = 1e-11
_CLEARLY = 10.0
_DEGREE = 3
_POINTS = 80


class Instrument(Protocol):
    """How the shear rate at the wall shows."""

    def shown(self, law: Rheology, rate: Array) -> Array:
        """What the instrument shows over the shear rate at its wall, for a law at that rate."""
        ...

    def factor(self, slope: Array) -> Array:
        """Shear rate at the wall over what is shown, for a local power law of that slope."""
        ...


@dataclass(frozen=True)
class Tube:
    """``8V/D``: the by-parts integral ``G/rate_w = 4/3 ∫ [1 - (tau/tau_w)³] dt`` over ``t = rate/rate_w``."""

    def shown(self, law: Rheology, rate: Array) -> Array:
        """``8V/D`` over the wall rate."""
        nodes, weights = gauss_legendre(_POINTS)
        # t = u^4 draws the points to the middle of the tube, where tau is not smooth
        relative = law.shear_stress(rate[:, None] * nodes**4) / law.shear_stress(rate)[:, None]
        return np.asarray(4.0 / 3.0 * ((1.0 - relative**3) @ (weights * 4.0 * nodes**3)))

    def factor(self, slope: Array) -> Array:
        """``(3 + 1/n')/4``."""
        return (3.0 + 1.0 / slope) / 4.0


@dataclass(frozen=True)
class Cylinders:
    """``2 Omega = ∫ rate dtau/tau`` from the cup, or from the yield stress where that is higher, to the bob."""

    radius_ratio: float

    def shown(self, law: Rheology, rate: Array) -> Array:
        """``2 Omega`` over the rate at the bob."""
        bob = law.shear_stress(rate)
        low = np.maximum(bob / self.radius_ratio**2, law.yield_stress)
        span = (bob - low)[:, None]
        nodes, weights = gauss_legendre(_POINTS)
        stress = low[:, None] + span * nodes**2
        return np.asarray((law.shear_rate(stress) / stress * span) @ (weights * 2.0 * nodes) / rate)

    def factor(self, slope: Array) -> Array:
        """``(2/s)/(1 - alpha**(-2/s))`` over ``2 Omega``."""
        return (2.0 / slope) / -np.expm1(-2.0 / slope * np.log(self.radius_ratio))


@dataclass(frozen=True)
class Corrected:
    """Shear rates at the wall [1/s], the law they rest on and how the readings scatter about it (``ln tau``)."""

    rate: Array
    law: Rheology
    residuals: Array
    follows_law: bool
    theta: Array
    form: Form


def wall_rates(shown: Array, stress: Array, instrument: Instrument, resolution: Array) -> Corrected:
    """Give the shear rate at the wall of every reading.

    Parameters
    ----------
    shown, stress : Array
        ``8V/D`` or ``2 Omega`` [1/s], and the stress at the wall [Pa].
    instrument : Instrument
    resolution : Array
        Relative; scatter below it is none.
    """
    best = min((settle(form, shown, stress, instrument) for form in BASES), key=_misfit)
    return _beyond_the_law(best, shown, stress, instrument, resolution)


def _misfit(found: Corrected) -> float:
    return float(found.residuals @ found.residuals)


def settle(form: Form, shown: Array, stress: Array, instrument: Instrument) -> Corrected:
    """Fit a law to the rates, take the rates from the law, until neither changes."""
    found = Corrected(shown, form.law(*np.ones(len(form.free))), shown, True, np.empty(0), form)
    for _ in range(_ROUNDS):
        problem = Problem.of(found.form, found.rate, stress)
        theta = solve(problem, start=_known_start(found, problem)).theta
        law = problem.law(theta)
        rate = rates_of_law(law, shown, instrument)
        settled = bool(np.max(np.abs(np.log(rate / found.rate))) < _SETTLED)
        found = replace(found, rate=rate, law=law, theta=theta, residuals=np.log(stress / law.shear_stress(rate)))
        if settled:
            break
    return found


def _known_start(found: Corrected, problem: Problem) -> Array | None:
    """The law found before as a start; its scales change with the rates, which a start may ignore."""
    return np.clip(found.theta, problem.lower, problem.upper) if found.theta.size else None


def rates_of_law(law: Rheology, shown: Array, instrument: Instrument) -> Array:
    """Shear rate at the wall at which a law shows what the instrument showed."""

    def residual(log_rate: Array, log_shown: Array) -> tuple[Array, None]:
        return log_rate + np.log(instrument.shown(law, np.exp(log_rate))) - log_shown, None

    with np.errstate(all="ignore"):
        log_shown = np.log(shown)
        return np.exp(find_root(residual, log_shown, np.ones_like(log_shown), (log_shown,)))


def _beyond_the_law(
    found: Corrected, shown: Array, stress: Array, instrument: Instrument, resolution: Array
) -> Corrected:
    """Correct the rates where the readings leave the law by more than their scatter."""
    log_shown = np.log(shown) - np.mean(np.log(shown))
    if np.unique(shown).size <= _DEGREE + 3 or not _leaves(found.residuals, log_shown, resolution):
        return found
    trend = np.polynomial.Polynomial.fit(log_shown, found.residuals, _DEGREE)
    slope = _law_slope(found, instrument)
    bent = np.maximum(slope + trend.deriv()(log_shown), 0.05 * slope)
    rate = found.rate * instrument.factor(bent) / instrument.factor(slope)
    return replace(found, rate=rate, follows_law=False)


def _leaves(residuals: Array, log_shown: Array, resolution: Array) -> bool:
    floor = np.maximum(resolution, FINEST_RESOLUTION)
    trend = np.polynomial.Polynomial.fit(log_shown, residuals, _DEGREE)
    plain, bent = (np.maximum(np.abs(left), floor) for left in (residuals, residuals - trend(log_shown)))
    with_law = aicc(float(plain @ plain), residuals.size, 1)
    with_trend = aicc(float(bent @ bent), residuals.size, _DEGREE + 2)
    return with_law is not None and with_trend is not None and with_law - with_trend > _CLEARLY


def _law_slope(found: Corrected, instrument: Instrument) -> Array:
    """``d ln tau/d ln shown`` of the law at the readings."""
    step = 1e-4
    low, high = found.rate * np.exp(-step), found.rate * np.exp(step)
    rise = np.log(found.law.shear_stress(high) / found.law.shear_stress(low))
    run = 2.0 * step + np.log(instrument.shown(found.law, high) / instrument.shown(found.law, low))
    return np.asarray(rise / run)
