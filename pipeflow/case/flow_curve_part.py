"""A rheology given by viscometer readings: the sheet is fitted while the case is read."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from typing import Annotated, Final

from pydantic import Field, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.fields import Name, ShearRates, choice, said
from pipeflow.case.part import InputPart, Part
from pipeflow.case.viscometer import load_readings
from pipeflow.errors import InputError
from pipeflow.rheology import Rheology
from pipeflow.rheology.forms import FORMS
from pipeflow.rheology.sheet import FitOptions, FitResult, UnfitError, fit_sheet

FITTED_MODELS: Final = tuple(form.key for form in FORMS)
"""The models that are fitted to readings."""

_SHEETS_KEPT = 64


class UsePart(Part):
    """Which readings of a sheet to use."""

    shear_rate: ShearRates


class FlowCurvePart(InputPart):
    """A rheology given by readings, and how they are to be fitted."""

    model: Annotated[str, choice("model", lambda: FITTED_MODELS)] | None = None
    use: UsePart | None = None
    flow_curve: Annotated[Name, Field()]

    @check("flow_curve")
    @classmethod
    def _fitted(cls, value: str, info: ValidationInfo) -> str:
        """Find the sheet beside the case and fit it, so that every fault is told; give its path."""
        path = str((info.context or {}).get("folder", Path()) / value)
        if {"model", "use"} <= info.data.keys():
            use: UsePart | None = info.data["use"]
            _fit(path, _state(path), use.shear_rate if use else None, info.data["model"])
        return path

    @property
    def result(self) -> FitResult:
        """The fit, remembered from when the case was checked."""
        return _fit(self.flow_curve, _state(self.flow_curve), self.use.shear_rate if self.use else None, self.model)

    @property
    def tested(self) -> tuple[float, float]:
        """Shear rates of the readings used, 1/s."""
        return self.result.curve.tested

    def rheology(self) -> Rheology:
        """Give the model selected."""
        law = self.result.rheology
        assert law is not None
        return law


def _state(path: str) -> tuple[int, int]:
    """Size and time of a file, by which a change of it shows; a file that is none is told when it is read."""
    try:
        status = Path(path).stat()
    except (OSError, ValueError):
        return (0, 0)
    return status.st_size, status.st_mtime_ns


@lru_cache(maxsize=_SHEETS_KEPT)
def _fit(path: str, state: tuple[int, int], use: tuple[float, float] | None, model: str | None) -> FitResult:
    try:
        result = fit_sheet(load_readings(path), FitOptions(use=use, model=model))
    except InputError as error:
        raise said(_first_of(error)) from None
    except UnfitError as error:
        raise said(f"{path}: {error}") from None
    if result.rheology is None:
        raise said(f"{path}: no model can be selected; {result.fit.why}")
    return result


def _first_of(error: InputError) -> str:
    first, *more = (str(problem) for problem in error.problems)
    return f"{first}; and {len(more)} more, which 'pipeflow fit' lists" if more else first
