"""The fit of a sheet of readings, from what the command line was given."""

from __future__ import annotations

from typing import Final

from pipeflow.errors import InputError, Problem
from pipeflow.rheology.forms import FORMS
from pipeflow.rheology.readings import Readings
from pipeflow.rheology.sheet import FitOptions, FitResult, UnfitError, fit_sheet
from pipeflow.units import UnitError, echo, parse_range

MODELS: Final = tuple(form.key for form in FORMS)
ERRORS: Final = ("relative", "absolute")

__all__ = ["ERRORS", "MODELS", "FitOptions", "FitResult", "fit", "options_from"]


def fit(readings: Readings, file: str, options: FitOptions | None = None) -> FitResult:
    """Fit every model to the readings of a file.

    Raises
    ------
    InputError
        The readings cannot be fitted.
    """
    try:
        return fit_sheet(readings, options)
    except UnfitError as error:
        raise InputError([Problem(file, None, None, "", str(error))]) from None


def options_from(use: str, model: str, error: str, robust: bool) -> FitOptions:
    """Read options as typed; an empty text is one not given.

    Raises
    ------
    InputError
        With everything wrong with them.
    """
    problems, rates = [], None
    try:
        rates = parse_range(use, "shear rate") if use else None
    except UnitError as refused:
        problems.append(Problem("--use", None, None, "", str(refused)))
    for option, text, known in (("--model", model, MODELS), ("--error", error, ERRORS)):
        if text and text not in known:
            problems.append(Problem(option, None, None, "", f"found {echo(text)}; accepted: {', '.join(known)}"))
    if problems:
        raise InputError(problems)
    return FitOptions(rates, model or None, "absolute" if error == "absolute" else "relative", robust)
