"""A rheology given by viscometer readings: the sheet is fitted while the case is read."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from typing import Annotated, Final

from pydantic import Discriminator, Field, Tag, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.dependence_part import Conditions, hold_against
from pipeflow.case.fields import Answer, Name, ShearRates, choice, said
from pipeflow.case.part import InputPart, Part
from pipeflow.case.viscometer import load_readings
from pipeflow.errors import InputError
from pipeflow.rheology import Rheology
from pipeflow.rheology.forms import FORMS
from pipeflow.rheology.series import FluidSeries, fluid_series
from pipeflow.rheology.sheet import FitOptions, FitResult, UnfitError, fit_sheet

FITTED_MODELS: Final = tuple(form.key for form in FORMS)
"""The models that are fitted to readings."""

MAX_SHEETS: Final = 20
_SHEETS_KEPT = 64


class UsePart(Part):
    """Which readings of a sheet to use."""

    shear_rate: ShearRates


Sheets = Annotated[
    Annotated[Name, Tag("<one>")] | Annotated[list[Name], Field(min_length=2, max_length=MAX_SHEETS), Tag("<several>")],
    Discriminator(lambda value: "<several>" if isinstance(value, list) else "<one>"),
]


class FlowCurvePart(InputPart):
    """A rheology given by readings, and how they are to be fitted."""

    model: Annotated[str, choice("model", lambda: FITTED_MODELS)] | None = None
    use: UsePart | None = None
    extrapolate: Answer = False
    flow_curve: Sheets

    @check("flow_curve")
    @classmethod
    def _fitted(cls, value: str | list[str], info: ValidationInfo) -> str | list[str]:
        """Find the sheets beside the case and fit them, so that every fault is told; give their paths."""
        folder = (info.context or {}).get("folder", Path())
        paths = [str(folder / name) for name in ([value] if isinstance(value, str) else value)]
        if {"model", "use"} <= info.data.keys():
            use: UsePart | None = info.data["use"]
            rates = use.shear_rate if use else None
            below = [()] if isinstance(value, str) else [(index,) for index in range(len(paths))]
            results = [_told(path, rates, info.data["model"], place) for path, place in zip(paths, below, strict=True)]
            if len(results) > 1:
                _join(tuple(results), info.data["model"])
        return paths[0] if isinstance(value, str) else paths

    @property
    def files(self) -> tuple[str, ...]:
        """Paths of the sheets."""
        return (self.flow_curve,) if isinstance(self.flow_curve, str) else tuple(self.flow_curve)

    @property
    def results(self) -> tuple[FitResult, ...]:
        """The fit of each sheet, remembered from when the case was checked."""
        use = self.use.shear_rate if self.use else None
        return tuple(_fit(path, _state(path), use, self.model) for path in self.files)

    @property
    def series(self) -> FluidSeries | None:
        """The fluid that several sheets make; None for one."""
        return _join(self.results, self.model) if len(self.files) > 1 else None

    @property
    def key(self) -> str:
        """Name of the model."""
        series = self.series
        return series.model if series else str(self.results[0].fit.selected)

    @property
    def tested(self) -> tuple[float, float]:
        """Shear rates of the readings used, 1/s: those that every sheet covers."""
        lows, highs = zip(*(result.curve.tested for result in self.results), strict=True)
        return (max(lows), min(highs)) if max(lows) < min(highs) else (min(lows), min(highs))

    def hold_against(self, conditions: Conditions) -> None:
        """Refuse conditions that the sheets do not reach."""
        series = self.series
        if series is not None:
            hold_against(series.variable, series.tested, conditions, self.extrapolate, ("flow_curve",))

    def rheology(self, conditions: Conditions | None = None) -> Rheology:
        """Give the model selected; several sheets need the conditions."""
        series = self.series
        if series is None:
            law = self.results[0].rheology
            assert law is not None
            return law
        condition = conditions.of(series.variable) if conditions else None
        assert condition is not None
        law = series.at(condition)
        return type(law)(**{name: float(value) for name, value in vars(law).items()})


def _state(path: str) -> tuple[int, int]:
    """Size and time of a file, by which a change of it shows; a file that is none is told when it is read."""
    try:
        status = Path(path).stat()
    except (OSError, ValueError):
        return (0, 0)
    return status.st_size, status.st_mtime_ns


def _join(results: tuple[FitResult, ...], model: str | None) -> FluidSeries:
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


def _told(path: str, use: tuple[float, float] | None, model: str | None, below: tuple[int, ...]) -> FitResult:
    """Fit a sheet, or refuse it at its place in the case."""
    try:
        return _fit(path, _state(path), use, model)
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
