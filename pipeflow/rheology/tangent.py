"""A law carried on past the last reading by its tangent: the second answer where a pipe shears faster than tested.

A law that thins stays above its tangent nowhere, so that the tangent is the higher stress; the truth may lie elsewhere.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, Final

import numpy as np

from pipeflow.arrays import FloatOrArray
from pipeflow.rheology.general import GeneralRheology
from pipeflow.rheology.models import Casson, GeneralizedPowerLaw, Rheology

FAR: Final = 1.5
"""Wall shear rates beyond this many times the highest tested are a guess."""


@dataclass(frozen=True)
class TangentPowerLaw(GeneralRheology):
    """``tau_y + K rate**n`` up to ``last_rate`` [1/s], a straight line of the same slope from there."""

    yield_stress: FloatOrArray = field()
    consistency: FloatOrArray
    flow_index: FloatOrArray
    last_rate: FloatOrArray

    key = "tangent"

    def excess(self, rate: Any) -> Any:
        """``tau - tau_y`` [Pa]."""
        last, n = np.asarray(self.last_rate), np.asarray(self.flow_index)
        at_last = self.consistency * last**n
        beyond = at_last * (1.0 + n * (rate - last) / last)
        return np.where(np.real(rate) <= last, self.consistency * rate**n, beyond)


@dataclass(frozen=True)
class TangentCasson(GeneralRheology):
    """Casson's law up to ``last_rate`` [1/s], a straight line of the same slope from there."""

    yield_stress: FloatOrArray = field()
    casson_viscosity: FloatOrArray
    last_rate: FloatOrArray

    key = "tangent"

    def excess(self, rate: Any) -> Any:
        """``tau - tau_y`` [Pa]."""
        last = np.asarray(self.last_rate)
        slope = self.casson_viscosity + np.sqrt(self.yield_stress * np.asarray(self.casson_viscosity) / last)
        return np.where(np.real(rate) <= last, self._law(rate), self._law(last) + slope * (rate - last))

    def _law(self, rate: Any) -> Any:
        viscous = np.asarray(self.casson_viscosity) * rate
        return viscous + 2.0 * np.sqrt(self.yield_stress * viscous)


def continued_by_tangent(law: Rheology, last_rate: FloatOrArray) -> GeneralRheology:
    """Carry a law on past a shear rate by its tangent there.

    Parameters
    ----------
    law : Rheology
        One of the five models of a case.
    last_rate : float or Array
        Highest shear rate tested, 1/s.

    Raises
    ------
    TypeError
        Another law.

    Examples
    --------
    >>> from pipeflow.rheology import PowerLaw
    >>> float(continued_by_tangent(PowerLaw(2.0, 0.5), 100.0).shear_stress(300.0))
    40.0
    """
    if isinstance(law, GeneralizedPowerLaw):
        same = law.as_herschel_bulkley()
        return TangentPowerLaw(same.yield_stress, same.consistency, same.flow_index, last_rate)
    if isinstance(law, Casson):
        return TangentCasson(law.yield_stress, law.casson_viscosity, last_rate)
    raise TypeError(f"no tangent is known for {type(law).__name__}")


def is_far(wall_shear_rate: FloatOrArray, tested: tuple[float, float]) -> bool:
    """Whether any wall shear rate lies beyond :data:`FAR` times the highest tested."""
    return bool(np.any(np.asarray(wall_shear_rate) > FAR * tested[1]))
