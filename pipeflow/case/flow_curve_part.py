"""A rheology given by viscometer readings: the sheet is fitted while the case is read."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Final

from pydantic import Discriminator, Field, Tag, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.dependence_part import Conditions, hold_against
from pipeflow.case.fields import Answer, Name, ShearRates, choice
from pipeflow.case.part import InputPart, Part
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

if TYPE_CHECKING:
    from pipeflow.rheology.series import FluidSeries
    from pipeflow.rheology.sheet import FitResult

FITTED_MODELS: Final = tuple(law.key for law in (Newtonian, PowerLaw, Bingham, HerschelBulkley, Casson))
"""The models that are fitted to readings."""

MAX_SHEETS: Final = 20


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
        from pipeflow.case import sheets

        folder = (info.context or {}).get("folder", Path())
        paths = [str(folder / name) for name in ([value] if isinstance(value, str) else value)]
        if {"model", "use"} <= info.data.keys():
            use: UsePart | None = info.data["use"]
            rates = use.shear_rate if use else None
            below = [()] if isinstance(value, str) else [(index,) for index in range(len(paths))]
            model = info.data["model"]
            results = [
                sheets.fitted_or_told(path, rates, model, place) for path, place in zip(paths, below, strict=True)
            ]
            if len(results) > 1:
                sheets.joined(tuple(results), model)
        return paths[0] if isinstance(value, str) else paths

    @property
    def files(self) -> tuple[str, ...]:
        """Paths of the sheets."""
        return (self.flow_curve,) if isinstance(self.flow_curve, str) else tuple(self.flow_curve)

    @property
    def results(self) -> tuple[FitResult, ...]:
        """The fit of each sheet, remembered from when the case was checked."""
        from pipeflow.case import sheets

        use = self.use.shear_rate if self.use else None
        return tuple(sheets.fitted(path, use, self.model) for path in self.files)

    @property
    def series(self) -> FluidSeries | None:
        """The fluid that several sheets make; None for one."""
        from pipeflow.case import sheets

        return sheets.joined(self.results, self.model) if len(self.files) > 1 else None

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
