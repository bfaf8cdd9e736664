"""How a parameter of a fluid follows its solids content or temperature: laws given, or fitted to several sheets.

A law holds over the range it was tested. Outside it gives a value too, which the border refuses unless the case says
that it wants it.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import ClassVar, Final, Literal

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Source

GAS_CONSTANT: Final = 8.31446261815324
"""J/(mol.K) (SI 2019)."""

ARRHENIUS = Source(
    key="arrhenius",
    title="Consistency or viscosity with temperature, K = K_ref exp[(E/R)(1/T - 1/T_ref)]",
    citation="Arrhenius, Z. phys. Chem. 4, 226 (1889); for foods Rao, J. Texture Stud. 8, 135 (1977)",
    note="yield stresses often follow temperature less; the flow index hardly",
)

SOLIDS_LAWS = Source(
    key="solids-laws",
    title="Yield stress, consistency or viscosity with the solids fraction, a C^b or a exp(b C)",
    citation="empirical forms of slurry practice, without a single source; b of 3 to 6 is usual for yield stresses",
    note="not to be carried above the solids tested; pH, salts or dispersant shift it tenfold at equal solids",
)

Variable = Literal["solids", "temperature"]


@dataclass(frozen=True)
class Dependence(ABC):
    """One parameter against one condition; ``tested`` is the range of the condition it rests on."""

    tested: tuple[float, float]

    key: ClassVar[str]
    variable: ClassVar[Variable]

    @abstractmethod
    def value(self, condition: FloatOrArray) -> Array:
        """The parameter, in its SI unit, at a solids fraction or a temperature [K]."""

    def holds(self, condition: FloatOrArray) -> bool:
        """Whether every condition is within the tested range."""
        low, high = self.tested
        slack = 1e-9 * (high - low)
        given = np.asarray(condition)
        return bool(np.all((given >= low - slack) & (given <= high + slack)))


@dataclass(frozen=True)
class PowerDependence(Dependence):
    """``a C**b`` of the solids fraction C; ``a`` in the parameter's unit."""

    a: float
    b: float

    key = "power"
    variable = "solids"

    def value(self, condition: FloatOrArray) -> Array:
        """The parameter at a solids fraction."""
        return np.asarray(self.a * np.asarray(condition, dtype=np.float64) ** self.b)


@dataclass(frozen=True)
class ExponentialDependence(Dependence):
    """``a exp(b C)`` of the solids fraction C; ``a`` in the parameter's unit."""

    a: float
    b: float

    key = "exponential"
    variable = "solids"

    def value(self, condition: FloatOrArray) -> Array:
        """The parameter at a solids fraction."""
        return np.asarray(self.a * np.exp(self.b * np.asarray(condition, dtype=np.float64)))


@dataclass(frozen=True)
class ArrheniusDependence(Dependence):
    """``reference exp[(E/R)(1/T - 1/T_ref)]``; the energy E in J/mol, temperatures in K."""

    reference: float
    activation_energy: float
    reference_temperature: float

    key = "arrhenius"
    variable = "temperature"

    def value(self, condition: FloatOrArray) -> Array:
        """The parameter at a temperature [K]."""
        inverse = 1.0 / np.asarray(condition, dtype=np.float64) - 1.0 / self.reference_temperature
        return np.asarray(self.reference * np.exp(self.activation_energy / GAS_CONSTANT * inverse))


@dataclass(frozen=True)
class FittedDependence:
    """A law fitted to a parameter at several conditions.

    Attributes
    ----------
    law : Dependence
    slope, slope_error : float
        ``b`` or the activation energy [J/mol], and its standard error (0 where two points make the law).
    slope_interval : tuple of float or None
        95 %; None without points to spare.
    scatter : float
        Root mean square of ``ln(value/law)``.
    r_squared : float
        Of the logarithms.
    """

    law: Dependence
    slope: float
    slope_error: float
    slope_interval: tuple[float, float] | None
    scatter: float
    r_squared: float


def fit_dependence(kind: str, conditions: Array, values: Array) -> FittedDependence:
    """Fit a law to a parameter at several conditions, by least squares of its logarithm.

    Parameters
    ----------
    kind : str
        ``power``, ``exponential`` or ``arrhenius``.
    conditions : Array
        Solids fractions, or temperatures [K]; two or more that differ.
    values : Array
        The parameter, above 0.

    Raises
    ------
    ValueError
        Fewer than two conditions, a value not above 0, or no such law.
    """
    if np.unique(conditions).size < 2 or not np.all(values > 0):
        raise ValueError("a dependence needs values above 0 at two conditions or more")
    from pipeflow.rheology.fitting import student

    x = _abscissa(kind, conditions)
    middle = float(x.mean())
    slope, level = np.polyfit(x - middle, np.log(values), 1)
    left = np.log(values) - level - slope * (x - middle)
    freedom = values.size - 2
    error = float(np.sqrt(left @ left / freedom / np.sum((x - middle) ** 2))) if freedom else 0.0
    spread = float(np.sum((np.log(values) - np.log(values).mean()) ** 2))
    scale = GAS_CONSTANT if kind == "arrhenius" else 1.0
    half = student(freedom) * error * scale if freedom else 0.0
    energy = float(slope) * scale
    return FittedDependence(
        law=_law(kind, conditions, float(level), float(slope), middle),
        slope=energy,
        slope_error=error * scale,
        slope_interval=(energy - half, energy + half) if freedom else None,
        scatter=float(np.sqrt(np.mean(left**2))),
        r_squared=1.0 - float(left @ left) / spread if spread > 0 else 1.0,
    )


def best_dependence(variable: Variable, conditions: Array, values: Array) -> FittedDependence:
    """Fit the laws of a condition and take the one with the least scatter."""
    kinds = ("arrhenius",) if variable == "temperature" else ("power", "exponential")
    return min((fit_dependence(kind, conditions, values) for kind in kinds), key=lambda fitted: fitted.scatter)


def _abscissa(kind: str, conditions: Array) -> Array:
    if kind == "power":
        return np.log(conditions)
    if kind == "exponential":
        return np.asarray(conditions, dtype=np.float64)
    if kind == "arrhenius":
        return 1.0 / np.asarray(conditions, dtype=np.float64)
    raise ValueError(f"no such law: {kind}")


def _law(kind: str, conditions: Array, level: float, slope: float, middle: float) -> Dependence:
    tested = (float(np.min(conditions)), float(np.max(conditions)))
    if kind == "arrhenius":
        return ArrheniusDependence(tested, float(np.exp(level)), slope * GAS_CONSTANT, 1.0 / middle)
    a = float(np.exp(level - slope * middle))
    return PowerDependence(tested, a, slope) if kind == "power" else ExponentialDependence(tested, a, slope)
