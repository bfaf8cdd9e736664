"""A fitted sheet as a JSON document: SI numbers, the unit at the end of each key, null for what has no value."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import fields
from typing import Any, Final

from pipeflow.rheology.fitting import ModelFit
from pipeflow.rheology.readings import Sample
from pipeflow.rheology.sheet import FitResult
from pipeflow.sources import Source

UNITS: Final = {
    "viscosity": "Pa_s",
    "plastic_viscosity": "Pa_s",
    "casson_viscosity": "Pa_s",
    "yield_stress": "Pa",
    "consistency": "Pa_sn",
}
"""The unit at the end of the key of each parameter that has one."""

_SAMPLE_UNITS: Final = {
    "temperature": "K",
    "density": "kg_m3",
    "particle_density": "kg_m3",
    "particle_size": "m",
    "dwell_time": "s",
    "static_yield_stress": "Pa",
    "rest_time": "s",
}


def fit_document(file: str, result: FitResult) -> dict[str, Any]:
    """Lay a fitted sheet out as the document that ``pipeflow fit --json`` prints."""
    found = result.fit
    return {
        "file": file,
        "sample": _sample(result.curve.sample),
        "models": [_model(fit) for fit in found.models],
        "selected": found.selected,
        "why": found.why,
        "rivals": list(found.rivals),
        "error_model": found.error,
        "robust": found.robust,
        "tested_shear_rate_1_s": list(result.curve.tested),
        "points": list(_points(result)),
        "corrections": list(result.curve.corrections),
        "cautions": list(result.cautions),
        "methods": [_method(source) for source in result.methods],
    }


def with_unit(name: str) -> str:
    """Give the key of a parameter: its name and its unit."""
    return f"{name}_{UNITS[name]}" if name in UNITS else name


def _model(fit: ModelFit) -> dict[str, Any]:
    laid_out: dict[str, Any] = {
        "model": fit.model,
        "parameters": _keyed(fit.parameters),
        "standard_errors": _keyed(fit.standard_errors),
        "intervals_95": _keyed(fit.intervals),
        "covariance": None if fit.covariance is None else [[_finite(value) for value in row] for row in fit.covariance],
        "rmse_Pa": _finite(fit.rmse),
        "rmse_relative": _finite(fit.rmse_relative),
        "r_squared": _finite(fit.r_squared),
        "aicc": _finite(fit.aicc),
        "notes": list(fit.notes),
    }
    return {**laid_out, "reason": fit.reason} if fit.reason else laid_out


def _keyed(values: dict[str, Any] | None) -> dict[str, Any] | None:
    if values is None:
        return None
    return {with_unit(name): _finite(value) for name, value in values.items()}


def _finite(value: Any) -> Any:
    if value is None or isinstance(value, tuple):
        return None if value is None else [_finite(end) for end in value]
    return float(value) if math.isfinite(value) else None


def _points(result: FitResult) -> Iterator[dict[str, Any]]:
    curve, law = result.curve, result.rheology
    for index, reason in enumerate(curve.left_out):
        rate, stress = float(curve.shear_rate[index]), float(curve.shear_stress[index])
        fitted = None if law is None else float(law.shear_stress(rate))
        yield {
            "line": int(curve.lines[index]),
            "shear_rate_1_s": _finite(rate),
            "shear_stress_Pa": _finite(stress),
            "newtonian_shear_rate_1_s": _finite(float(curve.plain_rate[index])),
            "fitted_stress_Pa": _finite(fitted),
            "used": not reason,
            **({"left_out": reason} if reason else {}),
        }


def _sample(sample: Sample) -> dict[str, Any]:
    values = {field.name: getattr(sample, field.name) for field in fields(sample)}
    keyed = {
        f"{name}_{_SAMPLE_UNITS[name]}" if name in _SAMPLE_UNITS else name: value for name, value in values.items()
    }
    return {**keyed, "notes": list(sample.notes)}


def _method(source: Source) -> dict[str, Any]:
    return {"key": source.key, "title": source.title, "citation": source.citation, "note": source.note}
