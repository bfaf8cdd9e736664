"""Sheets of readings fitted for a case; each is remembered until its file changes.

Apart from the schema, since a case with given parameters needs none of the fitting.
"""

from __future__ import annotations

from functools import lru_cache
from typing import Final

from pipeflow.case.fields import said
from pipeflow.case.files import file_state
from pipeflow.case.viscometer import load_readings
from pipeflow.errors import InputError
from pipeflow.rheology.series import FluidSeries, fluid_series
from pipeflow.rheology.sheet import FitOptions, FitResult, UnfitError, fit_sheet

_SHEETS_KEPT: Final = 64


def fitted(path: str, use: tuple[float, float] | None, model: str | None) -> FitResult:
    """Fit a sheet, or remember the fit."""
    return _fit(path, file_state(path), use, model)


def joined(results: tuple[FitResult, ...], model: str | None) -> FluidSeries:
    """Join sheets by the condition in which they differ."""
    stated = {
        "solids": {result.curve.sample.solids for result in results},
        "temperature": {result.curve.sample.temperature for result in results},
    }
    differing = [name for name, values in stated.items() if len(values) > 1]
    if len(differing) != 1:
        both = "both solids and temperature" if differing else "neither solids nor temperature"
        raise said(f"the sheets differ in {both}; several make one fluid where they differ in one of the two")
    try:
        return fluid_series(results, "solids" if differing == ["solids"] else "temperature", model)
    except UnfitError as error:
        raise said(str(error)) from None


def fitted_or_told(path: str, use: tuple[float, float] | None, model: str | None, below: tuple[int, ...]) -> FitResult:
    """Fit a sheet, or refuse it at its place in the case."""
    try:
        return fitted(path, use, model)
    except InputError as error:
        raise said(_first_of(error), *below) from None
    except UnfitError as error:
        raise said(f"{path}: {error}", *below) from None


@lru_cache(maxsize=_SHEETS_KEPT)
def _fit(path: str, state: tuple[int, int], use: tuple[float, float] | None, model: str | None) -> FitResult:
    result = fit_sheet(load_readings(path), FitOptions(use=use, model=model))
    if result.rheology is None:
        raise UnfitError(f"no model can be selected; {result.fit.why}")
    return result


def _first_of(error: InputError) -> str:
    first, *more = (str(problem) for problem in error.problems)
    return f"{first}; and {len(more)} more, which 'pipeflow fit' lists" if more else first
