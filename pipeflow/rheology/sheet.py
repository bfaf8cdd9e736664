"""One sheet of readings, one fitted rheology: the curve, the models, and what makes them doubtful."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array
from pipeflow.rheology.fitting import AKAIKE, LEAST_READINGS, CurveFit, ModelFit, fit_curve
from pipeflow.rheology.flowcurve import FlowCurve, flow_curve
from pipeflow.rheology.forms import ErrorModel
from pipeflow.rheology.models import Rheology
from pipeflow.rheology.quality import lines_of
from pipeflow.rheology.readings import Readings
from pipeflow.sources import Source

_FALLING = "the stress does not rise with the shear rate, as slip, settling or a changing sample give; no law fits"


class UnfitError(ValueError):
    """Readings that no model can be fitted to; the message says why."""


@dataclass(frozen=True)
class FitOptions:
    """How a sheet is to be fitted.

    Attributes
    ----------
    use : tuple of float or None
        Shear rates to use, 1/s.
    model : str or None
        The model to take, whatever the readings support.
    error : str
        ``relative`` or ``absolute`` scatter.
    robust : bool
        Weigh outlying readings down.
    """

    use: tuple[float, float] | None = None
    model: str | None = None
    error: ErrorModel = "relative"
    robust: bool = False


@dataclass(frozen=True)
class FitResult:
    """A sheet, its flow curve and the models fitted to it.

    ``cautions`` are those of the readings and of the model selected.
    """

    curve: FlowCurve
    fit: CurveFit
    cautions: tuple[str, ...]
    methods: tuple[Source, ...]

    @property
    def selected(self) -> ModelFit | None:
        """The model to be used."""
        return self.fit.of(self.fit.selected) if self.fit.selected else None

    @property
    def rheology(self) -> Rheology | None:
        """The fluid to be used."""
        return self.selected.law if self.selected else None


def fit_sheet(readings: Readings, options: FitOptions | None = None) -> FitResult:
    """Fit every model to a sheet of readings.

    Raises
    ------
    UnfitError
        Too few readings are left to fit, or their stress does not rise.
    """
    options = options or FitOptions()
    curve = flow_curve(readings, options.use)
    kept = curve.kept
    if kept.sum() < LEAST_READINGS or np.unique(curve.shear_rate[kept]).size < 2:
        raise UnfitError(_too_few(curve))
    if np.polyfit(np.log(curve.shear_rate[kept]), np.log(curve.shear_stress[kept]), 1)[0] <= 0:
        raise UnfitError(_FALLING)
    found = fit_curve(
        curve.shear_rate[kept],
        curve.shear_stress[kept],
        resolution=curve.resolution[kept],
        error=options.error,
        robust=options.robust,
        model=options.model,
    )
    methods = (*curve.sources, AKAIKE)
    return FitResult(curve, found, tuple(_cautions(curve, found)), methods)


def _too_few(curve: FlowCurve) -> str:
    low, high = curve.shear_rate.min(), curve.shear_rate.max()
    left = int(curve.kept.sum())
    return (
        f"{left} of {curve.kept.size} readings are left to fit, which run from {low:.4g} to {high:.4g} 1/s; "
        f"at least {LEAST_READINGS} are needed"
    )


def _cautions(curve: FlowCurve, found: CurveFit) -> Iterator[str]:
    yield from curve.cautions
    selected = found.of(found.selected) if found.selected else None
    if selected is None or selected.law is None:
        yield f"no model is selected: {found.why}"
        return
    yield from selected.notes
    yield from _about_scatter(curve, selected)
    yield from _about_sample(curve, selected.law)
    yield from (note for note in curve.sample.notes if note.startswith("the column "))


def _about_scatter(curve: FlowCurve, selected: ModelFit) -> Iterator[str]:
    rate, law = curve.shear_rate[curve.kept], selected.law
    if selected.residuals is None or law is None:
        return
    scatter = float(np.sqrt(np.mean(selected.residuals**2)))
    far = np.abs(selected.residuals) > np.maximum(4.0 * np.median(np.abs(selected.residuals)) * 1.4826, 1e-3)
    if far.any():
        yield f"far from the curve: {lines_of(curve.lines[curve.kept], far)}"
    below = curve.shear_stress[curve.kept] < np.asarray(law.yield_stress) * (1.0 - 3.0 * scatter)
    if below.any():
        yield f"stresses below the yield stress, as slip or settling give: {lines_of(curve.lines[curve.kept], below)}"
    pure = _pure_error(np.log(rate), selected.residuals)
    if pure is not None and scatter > 2.0 * pure > 0:
        yield f"the readings scatter by {scatter:.1%} about the model, but repeat to {pure:.1%}: none fits well"


def _pure_error(log_rate: Array, residuals: Array) -> float | None:
    """Scatter of readings repeated at one rate; None without enough of them."""
    groups = np.unique(np.round(log_rate, 6), return_inverse=True)[1]
    counts = np.bincount(groups)
    freedom = int(np.sum(counts - 1))
    if freedom < 3:
        return None
    means = np.bincount(groups, residuals) / counts
    return float(np.sqrt(np.sum((residuals - means[groups]) ** 2) / freedom))


def _about_sample(curve: FlowCurve, law: Rheology) -> Iterator[str]:
    sample = curve.sample
    if sample.static_yield_stress is not None:
        rest = f" after a rest of {sample.rest_time:g} s" if sample.rest_time else ""
        ratio = (
            sample.static_yield_stress / float(np.asarray(law.yield_stress)) if np.asarray(law.yield_stress) > 0 else 0
        )
        times = f", {ratio:.2g} times the fitted yield stress" if ratio else ""
        yield f"static yield stress {sample.static_yield_stress:.4g} Pa{rest}{times}: a restart needs that"
    if sample.shear_history == "fresh":
        yield "the sample was fresh: in the line it is sheared on, and its stresses may fall"
    elif sample.shear_history == "sheared":
        yield "the sample had been sheared: fresh or rested, its stresses may be higher"
