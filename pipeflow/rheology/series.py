"""Sheets of one fluid at several solids contents or temperatures: each parameter as a law of that condition."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import FloatOrArray
from pipeflow.rheology.conditions import FittedDependence, Variable, best_dependence
from pipeflow.rheology.forms import FORMS
from pipeflow.rheology.models import Rheology
from pipeflow.rheology.sheet import FitResult, UnfitError


@dataclass(frozen=True)
class FluidSeries:
    """One model whose parameters follow a condition.

    Attributes
    ----------
    model : str
    variable : str
        ``solids`` (a fraction) or ``temperature`` (K).
    tested : tuple of float
        Lowest and highest condition of the sheets.
    laws : dict
        The law of each parameter but the flow index.
    flow_index : float or None
        Mean of the sheets, which hardly differ; None for a model without.
    flow_index_spread : float
        Largest difference from that mean.
    """

    model: str
    variable: Variable
    tested: tuple[float, float]
    laws: dict[str, FittedDependence]
    flow_index: float | None
    flow_index_spread: float

    def holds(self, condition: FloatOrArray) -> bool:
        """Whether every condition lies within those tested."""
        return all(fitted.law.holds(condition) for fitted in self.laws.values())

    def at(self, condition: FloatOrArray) -> Rheology:
        """Give the fluid at a condition, or at each of an array of them."""
        parameters = {name: fitted.law.value(condition) for name, fitted in self.laws.items()}
        law = next(form.law for form in FORMS if form.key == self.model)
        return law(**parameters, **({} if self.flow_index is None else {"flow_index": self.flow_index}))


def fluid_series(results: Sequence[FitResult], variable: Variable, model: str | None = None) -> FluidSeries:
    """Join fitted sheets into one fluid.

    Parameters
    ----------
    results : sequence of FitResult
        Sheets that state the condition, at two values of it or more.
    variable : str
        ``solids`` or ``temperature``.
    model : str or None
        The model; without it the one that most sheets select.

    Raises
    ------
    UnfitError
        A sheet does not state the condition or does not identify the model, or a parameter is 0 in one.
    """
    conditions = np.array([_condition(result, variable) for result in results])
    model = model or _commonest(results)
    found = [result.fit.of(model).parameters for result in results]
    if any(parameters is None for parameters in found):
        raise UnfitError(f"not every sheet identifies the parameters of {model}")
    rows = [parameters for parameters in found if parameters is not None]
    indices = np.array([row["flow_index"] for row in rows if "flow_index" in row])
    names = [name for name in rows[0] if name != "flow_index"]
    try:
        laws = {name: best_dependence(variable, conditions, np.array([row[name] for row in rows])) for name in names}
    except ValueError as error:
        raise UnfitError(str(error)) from None
    mean = float(indices.mean()) if indices.size else None
    spread = float(np.max(np.abs(indices - indices.mean()))) if indices.size else 0.0
    tested = (float(conditions.min()), float(conditions.max()))
    return FluidSeries(model, variable, tested, laws, mean, spread)


def _condition(result: FitResult, variable: Variable) -> float:
    sample = result.curve.sample
    value = sample.solids if variable == "solids" else sample.temperature
    if value is None:
        raise UnfitError(f"the sheet of {sample.name or 'a sample'} does not state its {variable}")
    return value


def _commonest(results: Sequence[FitResult]) -> str:
    selected = [result.fit.selected for result in results if result.fit.selected]
    if not selected:
        raise UnfitError("no sheet selects a model")
    return max(dict.fromkeys(selected), key=selected.count)
