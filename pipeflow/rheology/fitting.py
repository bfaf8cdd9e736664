"""Fit the rheological models to a flow curve, say how sure each parameter is, and which model the readings support."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.rheology.forms import FORMS, INDEX_BOUNDS, LOG_K_BOUND, ErrorModel, Form, Problem
from pipeflow.rheology.least_squares import HUBER, solve
from pipeflow.rheology.models import Rheology
from pipeflow.sources import Source

LEAST_READINGS = 4
"""With fewer, no two models can be compared."""

DECISIVE = 2.0
"""Differences of AICc up to this decide nothing (Burnham & Anderson 2002)."""

FINEST_RESOLUTION = 1e-6
"""Relative resolution no instrument prints beyond."""

_TIED = np.log(10.0)
"""A consistency unknown to a factor of ten either way is not identified."""

AKAIKE = Source(
    key="aicc",
    title="Choice among models, AICc = N ln(SSE/N) + 2k + 2k(k+1)/(N-k-1), the variance counted in k",
    citation="Akaike, IEEE Trans. Autom. Control 19, 716 (1974); Hurvich & Tsai, Biometrika 76, 297 (1989)",
    note="differences below 2 are not decisive; the model with fewer parameters is then taken",
)


@dataclass(frozen=True)
class ModelFit:
    """One model fitted to a flow curve.

    Attributes
    ----------
    model : str
        Its name.
    law : Rheology or None
        The fluid; None where the readings do not identify it, ``reason`` then says why.
    parameters, standard_errors : dict or None
        By name, SI units.
    intervals : dict or None
        The 95 % interval of each parameter.
    covariance : Array or None
        Of the parameters in their order, SI units.
    log_covariance : Array or None
        Of the unknowns the intervals are worked out in: the yield stress (Casson: its root), ln K, n.
    rmse, rmse_relative : float or None
        Root mean square of ``tau - model`` [Pa], and of ``ln(tau/model)``.
    r_squared : float or None
        ``1 - SSE/SST`` of the stresses in Pa.
    aicc : float or None
        None where there are too few readings for this number of parameters.
    residuals : Array or None
        ``ln(tau/model)`` of each reading.
    notes : tuple of str
        What the readings do not tell about the parameters.
    """

    model: str
    law: Rheology | None = None
    parameters: dict[str, float] | None = None
    standard_errors: dict[str, float] | None = None
    intervals: dict[str, tuple[float, float]] | None = None
    covariance: Array | None = None
    log_covariance: Array | None = None
    rmse: float | None = None
    rmse_relative: float | None = None
    r_squared: float | None = None
    aicc: float | None = None
    residuals: Array | None = None
    reason: str = ""
    notes: tuple[str, ...] = ()


@dataclass(frozen=True)
class CurveFit:
    """All models fitted to one curve; ``selected`` is None where the readings cannot compare them."""

    models: tuple[ModelFit, ...]
    selected: str | None
    why: str
    rivals: tuple[str, ...]
    error: ErrorModel
    robust: bool

    def of(self, model: str) -> ModelFit:
        """The fit of one model."""
        return next(fit for fit in self.models if fit.model == model)


def fit_curve(
    shear_rate: Array,
    shear_stress: Array,
    *,
    resolution: FloatOrArray = 0.0,
    error: ErrorModel = "relative",
    robust: bool = False,
    model: str | None = None,
) -> CurveFit:
    """Fit every model to a flow curve and select one.

    Parameters
    ----------
    shear_rate, shear_stress : Array
        Above 0, 1/s and Pa; :data:`LEAST_READINGS` or more.
    resolution : float or Array
        Half the last printed digit of each stress, relative to it; a residual below it counts as it.
    error : str
        ``relative``: the scatter is a share of the stress; ``absolute``: it is the same in Pa everywhere.
    robust : bool
        Weigh outlying readings down.
    model : str or None
        Take this model, whatever the readings support.

    Examples
    --------
    >>> rate = np.array([10.0, 30.0, 100.0, 300.0, 1000.0])
    >>> fit_curve(rate, 5.0 + 0.02 * rate).selected
    'bingham'
    """
    floor = np.broadcast_to(np.maximum(resolution, FINEST_RESOLUTION), shear_stress.shape)
    fits = tuple(
        _fit_form(Problem.of(form, shear_rate, shear_stress, error), shear_rate, shear_stress, floor, robust)
        for form in FORMS
    )
    selected, why, rivals = _select(fits) if model is None else _named(fits, model)
    return CurveFit(fits, selected, why, rivals, error, robust)


def _fit_form(problem: Problem, rate: Array, stress: Array, floor: Array, robust: bool) -> ModelFit:
    form = problem.form
    too_few = _too_few(form, rate)
    if too_few:
        return ModelFit(form.key, reason=too_few)
    solution = solve(problem, robust=robust)
    floor = floor if problem.error == "relative" else floor * problem.y
    scatter = _Scatter.of(problem, solution.theta, floor, robust)
    reason = _unidentified(problem, solution.theta, scatter)
    if reason:
        return ModelFit(form.key, reason=reason)
    return _described(problem, solution.theta, scatter, rate, stress)


def _too_few(form: Form, rate: Array) -> str:
    distinct = np.unique(rate).size
    needed = len(form.free) + 1
    if distinct >= needed:
        return ""
    return f"{len(form.free)} parameters need readings at {needed} shear rates or more, there are {distinct}"


@dataclass(frozen=True)
class _Scatter:
    """Scatter about a form, and the covariance of its free unknowns that follows."""

    sum_of_squares: float
    covariance: Array
    freedom: int

    @classmethod
    def of(cls, problem: Problem, theta: Array, floor: Array, robust: bool) -> _Scatter:
        """Take the residuals, none below the resolution, and the slopes at the least misfit."""
        residuals = problem.residuals(theta)
        sizes = np.maximum(np.abs(residuals), floor)
        slopes = problem.jacobian(theta)
        freedom = residuals.size - theta.size
        total, inflation = _huber_sum(sizes, residuals) if robust else (float(sizes @ sizes), 1.0)
        scale = np.sqrt(np.maximum(np.sum(slopes**2, axis=0), np.finfo(float).tiny))
        inverse = np.linalg.pinv((slopes / scale).T @ (slopes / scale), rcond=1e-15, hermitian=True)
        return cls(total, inverse / np.outer(scale, scale) * total / freedom * inflation, freedom)


def _huber_sum(sizes: Array, residuals: Array) -> tuple[float, float]:
    """Twice Huber's loss summed, and what the weighing costs the covariance (Huber 1981, section 7.6)."""
    bound = max(HUBER * 1.4826 * float(np.median(np.abs(residuals))), float(np.min(sizes)))
    inside = sizes <= bound
    loss = np.where(inside, sizes**2, 2.0 * bound * sizes - bound**2)
    clipped = np.minimum(sizes, bound)
    kept = float(np.mean(inside))
    return float(loss.sum()), float(clipped @ clipped / loss.sum()) / kept**2


def _unidentified(problem: Problem, theta: Array, scatter: _Scatter) -> str:
    """Say why the parameters are not told by the readings, or nothing."""
    _, log_k, n = problem.complete(theta)
    lower, upper = INDEX_BOUNDS
    if log_k <= -0.99 * LOG_K_BOUND or (2 in problem.form.free and n <= lower * 1.01):
        return "the stress does not rise with the shear rate"
    if n >= upper * 0.999:
        return f"the readings rise more steeply than with a flow index of {upper:g}"
    if 2 in problem.form.free:
        error = np.sqrt(_to_parameters(problem, scatter.covariance)[-2, -2])
        if student(scatter.freedom) * error > _TIED:
            return "consistency and flow index are tied: the readings leave both open, rates farther apart would tell"
    return ""


def _to_parameters(problem: Problem, covariance: Array) -> Array:
    """Covariance of (yield stress or its root, ln K, n) in SI units, from that of the scaled unknowns."""
    free = list(problem.form.free)
    scale = np.sqrt(problem.stress_scale) if problem.form.is_casson else problem.stress_scale
    turn = np.diag([scale, 1.0, 1.0])
    turn[1, 2] = -np.log(problem.rate_scale)
    turned = turn[np.ix_(free, free)]
    return np.asarray(turned @ covariance @ turned.T)


def _described(problem: Problem, theta: Array, scatter: _Scatter, rate: Array, stress: Array) -> ModelFit:
    law, parameters = problem.law(theta), problem.parameters(theta)
    covariance = _to_parameters(problem, scatter.covariance)
    slopes = np.array([_slope(problem.form, name, value) for name, value in parameters.items()])
    natural = covariance * np.outer(slopes, slopes)
    errors = np.sqrt(np.diag(natural))
    fitted = law.shear_stress(rate)
    missed, relative = stress - fitted, np.log(stress / fitted)
    intervals = _intervals(problem.form, parameters, np.sqrt(np.diag(covariance)), student(scatter.freedom))
    return ModelFit(
        model=problem.form.key,
        law=law,
        parameters=parameters,
        standard_errors={name: float(error) for name, error in zip(parameters, errors, strict=True)},
        intervals=intervals,
        covariance=natural,
        log_covariance=covariance,
        rmse=float(np.sqrt(np.mean(missed**2))),
        rmse_relative=float(np.sqrt(np.mean(relative**2))),
        r_squared=_r_squared(missed, stress),
        aicc=aicc(scatter.sum_of_squares, rate.size, len(parameters) + 1),
        residuals=relative,
        notes=tuple(_open_questions(law, intervals, rate)),
    )


def _slope(form: Form, name: str, value: float) -> float:
    """Derivative of a parameter by the unknown its interval is worked out in."""
    if name == "yield_stress":
        return 2.0 * float(np.sqrt(value)) if form.is_casson else 1.0
    return 1.0 if name == "flow_index" else value


def _intervals(
    form: Form, parameters: dict[str, float], errors: Array, quantile: float
) -> dict[str, tuple[float, float]]:
    found = {}
    for (name, value), error in zip(parameters.items(), errors, strict=True):
        there, back = _scale_of(form, name)
        middle, half = there(value), quantile * float(error)
        found[name] = (back(middle - half), back(middle + half))
    return found


def _scale_of(form: Form, name: str) -> tuple[Callable[[float], float], Callable[[float], float]]:
    """The scale on which a parameter scatters evenly, and the way back, kept within what is physical."""
    if name == "yield_stress" and form.is_casson:
        return (lambda value: float(np.sqrt(value))), (lambda root: max(root, 0.0) ** 2)
    if name in ("yield_stress", "flow_index"):
        return (lambda value: value), (lambda value: max(value, 0.0))
    return (lambda value: float(np.log(value))), (lambda log: float(np.exp(min(log, 700.0))))


def _r_squared(missed: Array, stress: Array) -> float | None:
    about_mean = float(np.sum((stress - stress.mean()) ** 2))
    return 1.0 - float(missed @ missed) / about_mean if about_mean > 0 else None


def _open_questions(law: Rheology, intervals: dict[str, tuple[float, float]], rate: Array) -> list[str]:
    notes = []
    if "yield_stress" in intervals and intervals["yield_stress"][0] <= 0:
        share = float(np.asarray(law.yield_stress)) / float(law.shear_stress(rate.min()))
        notes.append(
            f"the yield stress cannot be told from zero: it is {share:.0%} of the stress at the lowest rate read; "
            "readings at lower rates would tell"
        )
    low, high = intervals.get("flow_index", (1.0, 1.0))
    if high - low > 1.0:
        notes.append("the flow index is hardly determined: readings over a wider range of rates would tell")
    return notes


def student(freedom: int) -> float:
    """97.5 % quantile of Student's distribution."""
    from scipy.special import stdtrit

    return float(stdtrit(freedom, 0.975))


def aicc(sum_of_squares: float, readings: int, parameters: int) -> float | None:
    """Akaike's criterion for small samples; ``parameters`` counts the variance. None where it is not defined."""
    spare = readings - parameters - 1
    if spare <= 0:
        return None
    penalty = 2.0 * parameters + 2.0 * parameters * (parameters + 1) / spare
    return float(readings * np.log(sum_of_squares / readings) + penalty)


def _select(fits: tuple[ModelFit, ...]) -> tuple[str | None, str, tuple[str, ...]]:
    """The lowest AICc; of those within :data:`DECISIVE` of it, the one with fewest parameters.

    None where a model of more parameters comes far closer, but the readings are too few for its AICc.
    """
    ranked = sorted((fit for fit in fits if fit.aicc is not None), key=_aicc_of)
    if not ranked:
        return None, "the readings identify no model", ()
    lowest = _aicc_of(ranked[0])
    near = [fit for fit in ranked if _aicc_of(fit) - lowest <= DECISIVE]
    chosen = min(near, key=lambda fit: (len(fit.parameters or {}), _aicc_of(fit)))
    closer = _far_closer(chosen, fits)
    if closer is not None:
        why = (
            f"{closer.model} comes within {closer.rmse_relative:.2%} of the readings, {chosen.model} within "
            f"{chosen.rmse_relative:.2%}, and they are too few to compare the two; take more, or name a model"
        )
        return None, why, ()
    rivals = tuple(fit.model for fit in near if fit is not chosen)
    return chosen.model, _reason_of(chosen, ranked, rivals), rivals


def _far_closer(chosen: ModelFit, fits: tuple[ModelFit, ...]) -> ModelFit | None:
    """Find a model without an AICc that leaves less than half the scatter."""
    open_fits = [fit for fit in fits if fit.aicc is None and fit.rmse_relative is not None]
    closest = min(open_fits, key=lambda fit: fit.rmse_relative or 0.0, default=None)
    if closest is None or (closest.rmse_relative or 0.0) >= 0.5 * (chosen.rmse_relative or 0.0):
        return None
    return closest


def _aicc_of(fit: ModelFit) -> float:
    return np.inf if fit.aicc is None else fit.aicc


def _reason_of(chosen: ModelFit, ranked: list[ModelFit], rivals: tuple[str, ...]) -> str:
    if rivals:
        fewer = all(len(fit.parameters or {}) > len(chosen.parameters or {}) for fit in ranked if fit.model in rivals)
        rule = "fewest parameters" if fewer else "fewest parameters and the lowest AICc among those"
        return f"{', '.join(rivals)} within {DECISIVE:g} in AICc, which decides nothing; {rule}"
    if len(ranked) == 1:
        return "the only model the readings identify"
    ahead = _aicc_of(ranked[1]) - _aicc_of(ranked[0])
    return f"lowest AICc, {ahead:.1f} below {ranked[1].model}"


def _named(fits: tuple[ModelFit, ...], model: str) -> tuple[str | None, str, tuple[str, ...]]:
    fit = next(fit for fit in fits if fit.model == model)
    best, _, _ = _select(fits)
    if fit.parameters is None:
        return None, f"{model} was asked for, but {fit.reason}", ()
    also = "which the readings support too" if best == model else f"the readings support {best}"
    return model, f"asked for; {also}", () if best in (model, None) else (str(best),)
