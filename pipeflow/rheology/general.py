"""Rheological models given as ``tau(rate)`` without an inverse in closed form, and Ellis', given as ``rate(tau)``.

Parameters, shear rates and stresses behave as in :mod:`pipeflow.rheology.models`. A law whose stress falls somewhere
describes no fluid in steady flow: :meth:`GeneralRheology.is_rising` tells, and its shear rates are nan.
"""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.rheology.models import Rheology, not_negative
from pipeflow.rootfind import find_root

COMPLEX_STEP = 1e-30
DECADES = np.arange(-10.0, 12.25, 0.25)
"""Shear rates, as powers of ten of 1/s, at which a law must rise."""


class GeneralRheology(Rheology):
    """Any law ``tau(rate)``: a model gives its formula, the rest is worked out here.

    To add a law, derive a frozen dataclass of float-or-array parameters and write :meth:`excess` with functions that
    take complex numbers too.
    """

    yield_stress: FloatOrArray = 0.0

    @abstractmethod
    def excess(self, rate: Any) -> Any:
        """``tau - tau_y`` [Pa] at a shear rate [1/s], real or complex."""

    def shear_stress(self, shear_rate: FloatOrArray) -> Array:
        """Shear stress [Pa] at a shear rate [1/s]."""
        return np.asarray(self.yield_stress + self.excess(not_negative(shear_rate)))

    def log_slope(self, rate: FloatOrArray) -> Array:
        """``d ln(tau - tau_y)/d ln rate``, by a complex step: exact to rounding."""
        turned = np.asarray(rate) * np.exp(1j * COMPLEX_STEP)
        return np.asarray(np.angle(self.excess(turned)) / COMPLEX_STEP)

    def differential_viscosity(self, shear_rate: FloatOrArray) -> Array:
        """Slope of the curve, ``d tau/d rate`` [Pa.s], at a shear rate [1/s] above zero."""
        rate = not_negative(shear_rate)
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(self.log_slope(rate) * self.excess(rate) / rate)

    def is_rising(self) -> NDArray[np.bool_]:
        """Whether the stress rises with the rate from 1e-10 to 1e12 1/s; in the shape of the parameters."""
        with np.errstate(all="ignore"):
            return np.all([self.log_slope(10.0**decade) > 0 for decade in DECADES], axis=0)

    def shear_rate(self, shear_stress: FloatOrArray) -> Array:
        """Shear rate [1/s] at a shear stress [Pa], zero up to the yield stress; nan for a law that is not rising."""
        given = not_negative(shear_stress) - np.asarray(self.yield_stress)
        values = [getattr(self, field.name) for field in fields(self)]  # type: ignore[arg-type]
        shape = np.broadcast_shapes(given.shape, *(np.shape(value) for value in values))
        law = type(self)(*(np.broadcast_to(value, shape).reshape(-1) for value in values))
        excess = np.broadcast_to(given, shape).reshape(-1)
        with np.errstate(all="ignore"):
            rate = np.exp(law.log_rate(np.log(np.where(law.is_rising(), excess, np.nan))))
        return np.where(excess <= 0, 0.0, rate).reshape(shape)

    def log_rate(self, log_excess: Array) -> Array:
        """Logarithm of the shear rate [1/s] at ``ln(tau - tau_y)``, for one-dimensional arrays of one length."""
        start = np.where(np.isfinite(log_excess), 0.0, np.nan)
        return find_root(_stress_residual, start, np.ones_like(start), (self, log_excess))

    def _viscosity_at_rest(self) -> Array:
        tiny = 1e-12
        return np.asarray(self.shear_stress(tiny) / tiny)


def _stress_residual(log_rate: Array, law: GeneralRheology, log_excess: Array) -> tuple[Array, Array]:
    turned = law.excess(np.exp(log_rate + 1j * COMPLEX_STEP))
    return np.log(turned.real) - log_excess, np.angle(turned) / COMPLEX_STEP


@dataclass(frozen=True)
class Cross(GeneralRheology):
    """``tau = [eta_inf + (eta_0 - eta_inf)/(1 + (lambda rate)**m)] rate`` (Cross 1965).

    Viscosities in Pa.s, the time constant lambda in s; m is 1 - n of the power law it tends to.
    """

    zero_shear_viscosity: FloatOrArray
    infinite_shear_viscosity: FloatOrArray
    time_constant: FloatOrArray
    exponent: FloatOrArray

    key = "cross"

    def excess(self, rate: Any) -> Any:
        """``tau`` [Pa]."""
        high, low = np.asarray(self.zero_shear_viscosity), self.infinite_shear_viscosity
        return (low + (high - low) / (1.0 + (self.time_constant * rate) ** self.exponent)) * rate


@dataclass(frozen=True)
class Carreau(GeneralRheology):
    """``tau = {eta_inf + (eta_0 - eta_inf) [1 + (lambda rate)**a]**((n-1)/a)} rate`` (Carreau 1972; Yasuda 1979).

    Viscosities in Pa.s, the time constant lambda in s; a = 2 is Carreau's own.
    """

    zero_shear_viscosity: FloatOrArray
    infinite_shear_viscosity: FloatOrArray
    time_constant: FloatOrArray
    flow_index: FloatOrArray
    transition_exponent: FloatOrArray = 2.0

    key = "carreau"

    def excess(self, rate: Any) -> Any:
        """``tau`` [Pa]."""
        high, low, a = (
            np.asarray(self.zero_shear_viscosity),
            self.infinite_shear_viscosity,
            self.transition_exponent,
        )
        fall = (1.0 + (self.time_constant * rate) ** a) ** ((np.asarray(self.flow_index) - 1.0) / a)
        return (low + (high - low) * fall) * rate


@dataclass(frozen=True)
class Sisko(GeneralRheology):
    """``tau = eta_inf rate + K rate**n`` (Sisko 1958); eta_inf in Pa.s, K in Pa.s^n."""

    infinite_shear_viscosity: FloatOrArray
    consistency: FloatOrArray
    flow_index: FloatOrArray

    key = "sisko"

    def excess(self, rate: Any) -> Any:
        """``tau`` [Pa]."""
        return self.infinite_shear_viscosity * rate + self.consistency * rate**self.flow_index


@dataclass(frozen=True)
class RobertsonStiff(GeneralRheology):
    """``tau = A (rate + C)**B`` (Robertson & Stiff 1976); A in Pa.s^B, C in 1/s, yield stress ``A C**B``."""

    consistency: FloatOrArray
    flow_index: FloatOrArray
    rate_offset: FloatOrArray

    key = "robertson-stiff"

    @property
    def yield_stress(self) -> FloatOrArray:  # type: ignore[override]
        """``A C**B``, Pa."""
        return np.asarray(self.consistency * np.asarray(self.rate_offset) ** self.flow_index)

    def excess(self, rate: Any) -> Any:
        """``tau - A C**B`` [Pa], written so that it keeps its digits at low rates."""
        b, offset = np.asarray(self.flow_index), np.asarray(self.rate_offset)
        with np.errstate(divide="ignore", invalid="ignore"):
            shifted = self.consistency * offset**b * np.expm1(b * np.log1p(rate / offset))
        return np.where(offset > 0, shifted, self.consistency * rate**b)


@dataclass(frozen=True)
class Ellis(Rheology):
    """``rate = (tau/eta_0) [1 + (tau/tau_half)**(alpha-1)]``; ``tau_half`` [Pa] is where the viscosity is half eta_0.

    Alpha = 1 is a Newtonian fluid of half ``eta_0``, not of ``eta_0``.
    """

    zero_shear_viscosity: FloatOrArray
    half_stress: FloatOrArray
    exponent: FloatOrArray

    key = "ellis"
    yield_stress = 0.0

    def shear_rate(self, shear_stress: FloatOrArray) -> Array:
        """Shear rate [1/s] at a shear stress [Pa], as the law gives it."""
        stress = not_negative(shear_stress)
        thinning = (stress / self.half_stress) ** (np.asarray(self.exponent) - 1.0)
        return np.asarray(stress / self.zero_shear_viscosity * (1.0 + thinning))

    def shear_stress(self, shear_rate: FloatOrArray) -> Array:
        """Shear stress [Pa] at a shear rate [1/s], found numerically."""
        shape = np.broadcast_shapes(*(np.shape(value) for value in (shear_rate, *vars(self).values())))
        rate = np.broadcast_to(not_negative(shear_rate), shape).reshape(-1)
        law = Ellis(*(np.broadcast_to(value, shape).reshape(-1) for value in vars(self).values()))
        with np.errstate(all="ignore"):
            log_rate = np.log(rate)
            start = log_rate + np.log(law.zero_shear_viscosity)
            stress = np.exp(find_root(_ellis_residual, start, np.ones_like(start), (law, log_rate)))
        return np.where(rate == 0, 0.0, stress).reshape(shape)

    def differential_viscosity(self, shear_rate: FloatOrArray) -> Array:
        """Slope of the curve, ``d tau/d rate`` [Pa.s], at a shear rate [1/s]."""
        stress = self.shear_stress(shear_rate)
        alpha = np.asarray(self.exponent)
        thinning = (stress / self.half_stress) ** (alpha - 1.0)
        return np.asarray(self.zero_shear_viscosity / (1.0 + alpha * thinning))

    def _viscosity_at_rest(self) -> Array:
        alpha, viscosity = np.asarray(self.exponent), np.asarray(self.zero_shear_viscosity)
        return np.where(alpha > 1, viscosity, np.where(alpha == 1, viscosity / 2.0, 0.0))


def _ellis_residual(log_stress: Array, law: Ellis, log_rate: Array) -> tuple[Array, Array]:
    thinning = np.exp((law.exponent - 1.0) * (log_stress - np.log(law.half_stress)))
    slope = 1.0 + (law.exponent - 1.0) * thinning / (1.0 + thinning)
    return log_stress - np.log(law.zero_shear_viscosity) + np.log1p(thinning) - log_rate, slope
