"""The rheological models: shear stress, shear rate and apparent viscosity of each law.

Parameters, shear rates and stresses are floats or numpy arrays in SI units and broadcast against each other. A negative
shear rate or stress, or a parameter outside its range, gives nan for that element alone.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from pipeflow.arrays import Array, FloatOrArray


class Rheology(ABC):
    """A purely viscous fluid: one curve of shear stress against shear rate."""

    key: ClassVar[str]
    """The name of the model in case files and results."""

    yield_stress: FloatOrArray
    """Stress below which nothing is sheared, Pa."""

    @abstractmethod
    def shear_stress(self, shear_rate: FloatOrArray) -> Array:
        """Shear stress [Pa] at a shear rate [1/s]; at zero rate the limit from above, the yield stress."""

    @abstractmethod
    def shear_rate(self, shear_stress: FloatOrArray) -> Array:
        """Shear rate [1/s] at a shear stress [Pa]; zero up to the yield stress."""

    def apparent_viscosity(self, shear_rate: FloatOrArray) -> Array:
        """Shear stress over shear rate [Pa.s] at a shear rate [1/s]; at zero rate its limit, inf for some."""
        rate = not_negative(shear_rate)
        with np.errstate(divide="ignore", invalid="ignore"):
            quotient = self.shear_stress(rate) / rate
        return np.where(rate > 0, quotient, self._viscosity_at_rest() + 0.0 * rate)

    @abstractmethod
    def differential_viscosity(self, shear_rate: FloatOrArray) -> Array:
        """Slope of the curve, ``d tau/d rate`` [Pa.s], at a shear rate [1/s] above zero."""

    @abstractmethod
    def _viscosity_at_rest(self) -> Array:
        """Give the limit of the apparent viscosity as the shear rate goes to zero."""


def not_negative(values: FloatOrArray) -> Array:
    """Give the values as an array, nan for those below zero."""
    array = np.asarray(values, dtype=np.float64)
    return np.where(array >= 0, array, np.nan)


class GeneralizedPowerLaw(Rheology):
    """``tau = tau_y + K rate**n``, of which Newtonian, power-law and Bingham fluids are the special cases.

    One implementation serves the four, so that each is exactly the limit of the general one.
    """

    @abstractmethod
    def as_herschel_bulkley(self) -> HerschelBulkley:
        """Give the same fluid with all three parameters named."""

    def shear_stress(self, shear_rate: FloatOrArray) -> Array:
        """``tau_y + K rate**n`` [Pa] at a shear rate [1/s]."""
        law = self.as_herschel_bulkley()
        return np.asarray(law.yield_stress + law.consistency * not_negative(shear_rate) ** law.flow_index)

    def shear_rate(self, shear_stress: FloatOrArray) -> Array:
        """``((tau - tau_y)/K)**(1/n)`` [1/s] at a shear stress [Pa], zero up to the yield stress."""
        law = self.as_herschel_bulkley()
        excess = np.maximum(not_negative(shear_stress) - law.yield_stress, 0.0)
        return np.asarray((excess / law.consistency) ** (1.0 / np.asarray(law.flow_index)))

    def differential_viscosity(self, shear_rate: FloatOrArray) -> Array:
        """``n K rate**(n-1)`` [Pa.s] at a shear rate [1/s]."""
        law = self.as_herschel_bulkley()
        n = np.asarray(law.flow_index)
        with np.errstate(divide="ignore"):
            return np.asarray(n * law.consistency * not_negative(shear_rate) ** (n - 1.0))

    def _viscosity_at_rest(self) -> Array:
        law = self.as_herschel_bulkley()
        n = np.asarray(law.flow_index)
        unyielded = (np.asarray(law.yield_stress) > 0) | (n < 1)
        return np.where(unyielded, np.inf, np.where(n > 1, 0.0, law.consistency))


@dataclass(frozen=True)
class Newtonian(GeneralizedPowerLaw):
    """``tau = mu rate``; ``viscosity`` in Pa.s."""

    viscosity: FloatOrArray

    key = "newtonian"
    yield_stress = 0.0

    def as_herschel_bulkley(self) -> HerschelBulkley:
        """No yield stress, n = 1, the viscosity for consistency."""
        return HerschelBulkley(0.0, self.viscosity, 1.0)


@dataclass(frozen=True)
class PowerLaw(GeneralizedPowerLaw):
    """``tau = K rate**n`` (Ostwald, de Waele); ``consistency`` in Pa.s^n."""

    consistency: FloatOrArray
    flow_index: FloatOrArray

    key = "power-law"
    yield_stress = 0.0

    def as_herschel_bulkley(self) -> HerschelBulkley:
        """No yield stress."""
        return HerschelBulkley(0.0, self.consistency, self.flow_index)


@dataclass(frozen=True)
class Bingham(GeneralizedPowerLaw):
    """``tau = tau_y + mu_p rate`` (Bingham 1922); ``yield_stress`` in Pa, ``plastic_viscosity`` in Pa.s."""

    yield_stress: FloatOrArray
    plastic_viscosity: FloatOrArray

    key = "bingham"

    def as_herschel_bulkley(self) -> HerschelBulkley:
        """Take n = 1, the plastic viscosity for consistency."""
        return HerschelBulkley(self.yield_stress, self.plastic_viscosity, 1.0)


@dataclass(frozen=True)
class HerschelBulkley(GeneralizedPowerLaw):
    """``tau = tau_y + K rate**n`` (Herschel & Bulkley 1926); ``yield_stress`` in Pa, ``consistency`` in Pa.s^n."""

    yield_stress: FloatOrArray
    consistency: FloatOrArray
    flow_index: FloatOrArray

    key = "herschel-bulkley"

    def as_herschel_bulkley(self) -> HerschelBulkley:
        """The fluid itself."""
        return self


@dataclass(frozen=True)
class Casson(Rheology):
    """``sqrt(tau) = sqrt(tau_y) + sqrt(mu_c rate)`` (Casson 1959); parameters in Pa and Pa.s, not their roots."""

    yield_stress: FloatOrArray
    casson_viscosity: FloatOrArray

    key = "casson"

    def shear_stress(self, shear_rate: FloatOrArray) -> Array:
        """``(sqrt(tau_y) + sqrt(mu_c rate))**2`` [Pa] at a shear rate [1/s]."""
        return np.asarray((np.sqrt(self.yield_stress) + np.sqrt(self.casson_viscosity * not_negative(shear_rate))) ** 2)

    def shear_rate(self, shear_stress: FloatOrArray) -> Array:
        """``(sqrt(tau) - sqrt(tau_y))**2 / mu_c`` [1/s] at a shear stress [Pa], zero up to the yield stress."""
        stress = np.maximum(not_negative(shear_stress), self.yield_stress)
        # the difference of roots, written so that it keeps its digits just above the yield stress
        root = (stress - self.yield_stress) / np.maximum(
            np.sqrt(stress) + np.sqrt(self.yield_stress), np.finfo(float).tiny
        )
        return np.asarray(root**2 / self.casson_viscosity)

    def differential_viscosity(self, shear_rate: FloatOrArray) -> Array:
        """``sqrt(mu_c tau/rate)`` [Pa.s] at a shear rate [1/s]."""
        return np.asarray(np.sqrt(self.casson_viscosity * self.apparent_viscosity(shear_rate)))

    def _viscosity_at_rest(self) -> Array:
        return np.where(np.asarray(self.yield_stress) > 0, np.inf, self.casson_viscosity)
