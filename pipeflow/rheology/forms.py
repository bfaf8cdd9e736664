"""The models as forms to be fitted, and the least-squares problem of one form.

Shear rates are taken relative to their geometric mean and stresses to theirs, so that a melt of 10^4 Pa.s and a gel of
index 0.1 pose the same problem. The unknowns are ``theta = (yield, ln K, n)``; a form holds those it does not have at
0 or 1. With the ratio ``s = tau_y/K`` in place of the yield stress every law is ``K g(x; s, n)``, and the best ``K`` of
a given ``(s, n)`` stands in closed form: the starts come from a scan over ``(s, n)`` alone.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from pipeflow.arrays import Array
from pipeflow.rheology.models import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

ErrorModel = Literal["relative", "absolute"]

INDEX_BOUNDS: Final = (0.01, 2.0)
"""Flow indices looked for: those a case file accepts, and no plateau below."""

LOG_K_BOUND: Final = 25.0
"""Consistencies looked for, relative to the readings: e to this power either way."""
_SCAN_POINTS = 200
_STARTS = 4
_INDICES = np.concatenate([np.geomspace(0.01, 0.3, 16), np.linspace(0.35, 2.0, 23)])
_RATIOS = np.concatenate([[0.0], np.geomspace(1e-4, 1e4, 41)])


@dataclass(frozen=True)
class Form:
    """A model to be fitted: its parameters, and which of ``(yield, ln K, n)`` are free."""

    law: type[Rheology]
    parameters: tuple[str, ...]
    free: tuple[int, ...]
    is_casson: bool = False

    @property
    def key(self) -> str:
        """The name of the model."""
        return self.law.key


FORMS: Final = (
    Form(Newtonian, ("viscosity",), (1,)),
    Form(PowerLaw, ("consistency", "flow_index"), (1, 2)),
    Form(Bingham, ("yield_stress", "plastic_viscosity"), (0, 1)),
    Form(HerschelBulkley, ("yield_stress", "consistency", "flow_index"), (0, 1, 2)),
    Form(Casson, ("yield_stress", "casson_viscosity"), (0, 1), is_casson=True),
)


@dataclass(frozen=True)
class Problem:
    """Readings to be met by a form.

    ``x`` and ``y`` are rate and stress over their geometric means ``rate_scale`` [1/s] and ``stress_scale`` [Pa];
    residuals are ``ln f - ln y`` (relative error) or ``f - y`` (absolute).
    """

    form: Form
    x: Array
    y: Array
    rate_scale: float
    stress_scale: float
    error: ErrorModel = "relative"

    @classmethod
    def of(cls, form: Form, rate: Array, stress: Array, error: ErrorModel = "relative") -> Problem:
        """Scale the readings."""
        scales = (float(np.exp(np.mean(np.log(values)))) for values in (rate, stress))
        rate_scale, stress_scale = scales
        return cls(form, rate / rate_scale, stress / stress_scale, rate_scale, stress_scale, error)

    @property
    def lower(self) -> Array:
        """Lower bounds of the free unknowns."""
        return np.array([0.0, -LOG_K_BOUND, INDEX_BOUNDS[0]])[list(self.form.free)]

    @property
    def upper(self) -> Array:
        """Upper bounds of the free unknowns."""
        return np.array([np.inf, LOG_K_BOUND, INDEX_BOUNDS[1]])[list(self.form.free)]

    def complete(self, theta: Array) -> Array:
        """All three unknowns of the free ones."""
        full = np.array([0.0, 0.0, 1.0])
        full[list(self.form.free)] = theta
        return full

    def stress(self, theta: Array, x: Array) -> Array:
        """Scaled stress at scaled rates."""
        start, log_k, n = self.complete(theta)
        if self.form.is_casson:
            return np.asarray((start + np.sqrt(np.exp(log_k) * x)) ** 2)
        return np.asarray(start + np.exp(log_k) * x**n)

    def residuals(self, theta: Array) -> Array:
        """What the form misses the readings by."""
        stress = self.stress(theta, self.x)
        return np.log(stress / self.y) if self.error == "relative" else stress - self.y

    def jacobian(self, theta: Array) -> Array:
        """Derivatives of the residuals by the free unknowns, a column each."""
        _, log_k, n = self.complete(theta)
        stress = self.stress(theta, self.x)
        if self.form.is_casson:
            viscous, root = np.sqrt(np.exp(log_k) * self.x), np.sqrt(stress)
            columns = np.stack([2.0 * root, root * viscous, np.zeros_like(root)], axis=-1)
        else:
            viscous = np.exp(log_k) * self.x**n
            columns = np.stack([np.ones_like(viscous), viscous, viscous * np.log(self.x)], axis=-1)
        free = columns[:, list(self.form.free)]
        return free / stress[:, None] if self.error == "relative" else free

    def law(self, theta: Array) -> Rheology:
        """The rheology in SI units."""
        return self.form.law(**self.parameters(theta))

    def parameters(self, theta: Array) -> dict[str, float]:
        """The parameters in SI units, by name."""
        start, log_k, n = self.complete(theta)
        start = start**2 if self.form.is_casson else start
        log_consistency = log_k + np.log(self.stress_scale) - n * np.log(self.rate_scale)
        values = (float(start * self.stress_scale), float(np.exp(log_consistency)), float(n))
        return {name: values[index] for name, index in zip(self.form.parameters, self.form.free, strict=True)}

    def starts(self, weights: Array) -> Iterator[Array]:
        """Unknowns to start from: the lowest valleys of the misfit over ``(s, n)``."""
        chosen = np.unique(np.linspace(0, self.x.size - 1, min(self.x.size, _SCAN_POINTS)).astype(int))
        order = np.argsort(self.x, kind="stable")[chosen]
        ratios = _RATIOS if 0 in self.form.free else _RATIOS[:1]
        indices = _INDICES if 2 in self.form.free else np.array([1.0])
        shape = self._shape(self.x[order], ratios[:, None, None], indices[:, None])
        log_k, misfit = self._best_scale(shape, self.y[order], weights[order])
        for i, j in _valleys(misfit)[:_STARTS]:
            start = np.sqrt(ratios[i] * np.exp(log_k[i, j])) if self.form.is_casson else ratios[i] * np.exp(log_k[i, j])
            yield np.clip(np.array([start, log_k[i, j], indices[j]])[list(self.form.free)], self.lower, self.upper)

    def _shape(self, x: Array, ratio: Array, n: Array) -> Array:
        if self.form.is_casson:
            return np.asarray((np.sqrt(ratio) + np.sqrt(x)) ** 2)
        return np.asarray(ratio + x**n)

    def _best_scale(self, shape: Array, y: Array, weights: Array) -> tuple[Array, Array]:
        """``ln K`` at its best, and the misfit left."""
        if self.error == "relative":
            gap = np.log(y) - np.log(shape)
            log_k = gap @ weights / weights.sum()
            return log_k, np.asarray((gap - log_k[..., None]) ** 2 @ weights)
        scale = shape * y @ weights / (shape**2 @ weights)
        return np.log(scale), np.asarray((y - scale[..., None] * shape) ** 2 @ weights)


def _valleys(misfit: Array) -> list[tuple[int, int]]:
    """Places no higher than their neighbours, the lowest first."""
    padded = np.pad(misfit, 1, constant_values=np.inf)
    rows, columns = misfit.shape
    around = [padded[1 + i : 1 + i + rows, 1 + j : 1 + j + columns] for i in (-1, 0, 1) for j in (-1, 0, 1)]
    found = np.argwhere(misfit <= np.minimum.reduce(around))
    return [(int(i), int(j)) for i, j in found[np.argsort(misfit[tuple(found.T)], kind="stable")]]
