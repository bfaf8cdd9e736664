"""What is uncertain about a case, as factors: inputs of its ``uncertainty``, its readings, the method of friction."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case, Uncertain
from pipeflow.case.variables import PARAMETERS, variable
from pipeflow.errors import InputError, Problem
from pipeflow.rheology.fitting import ModelFit, student
from pipeflow.sources import Source
from pipeflow.study.flows import pipes_of
from pipeflow.uncertainty import Correlated, Distribution, Factor, Independent, Normal, Rectangular

if TYPE_CHECKING:
    from pipeflow.rheology.sheet import FitResult
    from pipeflow.uncertainty.factors import Scale

METHOD: Final = "method of friction"
READINGS: Final = "readings"
"""Names of the factors that are no inputs of the file."""
RHEOLOGY: Final = "fluid.rheology."
NORMAL_95: Final = 1.959963984540054
"""97.5 % quantile of the standard normal."""

METHOD_SPREAD = Source(
    key="method-spread-factor",
    title="Method of turbulent friction as a factor: central (upper/central)^u in every pipe, one u from 0 to 1",
    citation="a choice of this program: nothing tells which published method a given slurry follows",
    confidence="medium",
    note="the central method is its lower edge, so that the spread it makes is upwards",
)


@dataclass(frozen=True)
class UncertainInput:
    """One factor, as a page tells it.

    Attributes
    ----------
    name : str
    said : str
        What is known of it.
    covers : str
        What it runs over.
    impossible : float
        Share of the distribution stated that is not possible, and is left out.
    of_case : str
        What the case gives.
    above : float
        Share of the distribution above what the case gives.
    """

    name: str
    said: str
    covers: str
    impossible: float = 0.0
    of_case: str = ""
    above: float = 0.5


def factors_of(case: Case) -> tuple[tuple[Factor, ...], tuple[UncertainInput, ...]]:
    """Give the factors of a case, and what to say of each.

    Raises
    ------
    InputError
        Nothing of the case is uncertain.
    """
    found = [*_of_block(case), *_of_readings(case), *_of_method(case)]
    if not found:
        message = "nothing in the case is uncertain; give it inputs with their tolerances (docs/uncertainty.md)"
        raise InputError([Problem(case.file, None, None, "uncertainty", message)])
    factors, told = zip(*found, strict=True)
    return factors, told


def _of_block(case: Case) -> Iterator[tuple[Factor, UncertainInput]]:
    for uncertain in case.uncertainty:
        distribution = _distribution(uncertain)
        known = variable(case, uncertain.path)
        covers = _range(*(known.shown(float(distribution.quantile(share))) for share in (0.05, 0.95)))
        told = UncertainInput(
            name=uncertain.path,
            said=uncertain.text,
            covers=covers,
            impossible=distribution.impossible,
            of_case=known.shown(known.value),
            above=0.5 if math.isnan(known.value) else 1.0 - distribution.below(known.value),
        )
        yield Independent(uncertain.path, distribution), told


def _range(low: str, high: str) -> str:
    """Write two values, the unit once where it is one."""
    number, _, unit = low.partition(" ")
    return f"{number if high.endswith(f' {unit}') else low} .. {high}"


def _distribution(uncertain: Uncertain) -> Distribution:
    least, most = uncertain.least, uncertain.most
    if uncertain.kind == "normal":
        return Normal(uncertain.middle, uncertain.spread, least, most)
    return Rectangular(uncertain.middle - uncertain.spread, uncertain.middle + uncertain.spread, least, most)


def _of_method(case: Case) -> Iterator[tuple[Factor, UncertainInput]]:
    if pipes_of(case) and case.fluid.rheology.key != "newtonian":
        told = UncertainInput(METHOD, "published methods", "central .. upper figure")
        yield Independent(METHOD, Rectangular(0.0, 1.0)), told


def _of_readings(case: Case) -> Iterator[tuple[Factor, UncertainInput]]:
    """Scatter of the fitted parameters, unless the case says itself how uncertain one of them is."""
    if not case.sheets or instead_of_readings(case):
        return
    model = case.fluid.rheology.key
    fits = [sheet.fit.of(model) for sheet in case.sheets]
    sheets = [sheet_factor(fit) for fit in fits]
    if len(sheets) == 1:
        yield sheets[0], UncertainInput(READINGS, "the fit", "parameters as they scatter")
        return
    factor = SeriesFactor(READINGS, tuple(sheets), _weights(case))
    yield factor, UncertainInput(READINGS, f"the fits of {len(sheets)} sheets", "parameters as they scatter")


def instead_of_readings(case: Case) -> tuple[str, ...]:
    """Give the parameters listed as uncertain in a case with readings, whose scatter is left out for them."""
    listed = (uncertain.path for uncertain in case.uncertainty if uncertain.path.startswith(RHEOLOGY))
    return tuple(listed) if case.sheets else ()


def sheet_factor(fit: ModelFit) -> Correlated:
    """Parameters fitted to one sheet, in the unknowns that scatter evenly: yield stress (its root: Casson), ln K, n.

    Normal, with the covariance of the fit widened so that its 95 % interval is that of the fit, Student's.
    """
    parameters, covariance = fit.parameters or {}, fit.log_covariance
    assert covariance is not None
    assert fit.residuals is not None
    names = tuple(parameters)
    scales = tuple(_scale(fit, name) for name in names)
    middle = np.array([_unknown(parameters[name], scale) for name, scale in zip(names, scales, strict=True)])
    bounds = [PARAMETERS[name][1] for name in names]
    is_plain = np.array([scale == "plain" for scale in scales])
    least = np.array([bound.lower for bound in bounds])
    widened = student(fit.residuals.size - len(names)) / NORMAL_95
    return Correlated(
        READINGS,
        tuple(f"{RHEOLOGY}{name}" for name in names),
        middle,
        covariance * widened**2,
        scales,
        np.where(is_plain | np.array([scale == "root" for scale in scales]), least, -np.inf),
        np.where(is_plain, [bound.upper for bound in bounds], np.inf),
    )


def _scale(fit: ModelFit, name: str) -> Scale:
    if name == "yield_stress":
        return "root" if fit.model == "casson" else "plain"
    return "plain" if name == "flow_index" else "logarithm"


def _unknown(value: float, scale: Scale) -> float:
    if scale == "logarithm":
        return float(np.log(value))
    return float(np.sqrt(value)) if scale == "root" else value


@dataclass(frozen=True, eq=False)
class SeriesFactor(Factor):
    """Parameters of one fluid from several sheets, each of which scatters by itself.

    The law through the sheets is linear in the logarithms: ``weights`` of them give its value at the condition of the
    case. The flow index is the mean of the sheets.
    """

    sheets: tuple[Correlated, ...]
    weights: dict[str, Array]

    @property
    def columns(self) -> int:
        """Those of all sheets."""
        return sum(sheet.columns for sheet in self.sheets)

    def values(self, uniform: Array) -> dict[str, Array]:
        """The parameters at the condition of the case."""
        parts = np.split(uniform, np.cumsum([sheet.columns for sheet in self.sheets])[:-1], axis=1)
        each = [sheet.values(part) for sheet, part in zip(self.sheets, parts, strict=True)]
        return {name: self._joined(name, [values[name] for values in each]) for name in self.sheets[0].inputs}

    def _joined(self, name: str, values: Sequence[Array]) -> Array:
        if name not in self.weights:
            return np.asarray(np.mean(values, axis=0))
        with np.errstate(divide="ignore"):
            return np.asarray(np.exp(self.weights[name] @ np.log(values)))


def _weights(case: Case) -> dict[str, Array]:
    """Weight of each sheet's logarithm in the law of each parameter, at the condition of the case."""
    found = {}
    for followed in case.followed:
        conditions = np.array([_condition(sheet, followed.law.variable) for sheet in case.sheets])
        x, here = (_abscissa(followed.law.key, values) for values in (conditions, np.array(followed.condition)))
        away = x - x.mean()
        found[f"{RHEOLOGY}{followed.parameter}"] = 1.0 / x.size + (here - x.mean()) * away / np.sum(away**2)
    return found


def _condition(sheet: FitResult, by: str) -> float:
    sample = sheet.curve.sample
    value = sample.solids if by == "solids" else sample.temperature
    assert value is not None
    return value


def _abscissa(law: str, conditions: Array) -> Array:
    if law == "power":
        return np.log(conditions)
    return 1.0 / conditions if law == "arrhenius" else conditions
