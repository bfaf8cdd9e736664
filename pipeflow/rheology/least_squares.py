"""Bounded least squares of few unknowns, with robust weights where asked for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.rheology.forms import Problem

HUBER = 1.345
"""Residuals beyond this many standard deviations count linearly: 95 % efficient on normal errors (Huber 1964)."""

_NORMAL_MAD = 1.4826
_ITERATIONS = 300
_ROBUST_ITERATIONS = 30
_TIGHT = 1e-13


class Misfit(Protocol):
    """Residuals of bounded unknowns."""

    @property
    def lower(self) -> Array:
        """Lower bounds."""
        ...

    @property
    def upper(self) -> Array:
        """Upper bounds."""
        ...

    def residuals(self, theta: Array) -> Array:
        """What is to be made small."""
        ...

    def jacobian(self, theta: Array) -> Array:
        """Derivatives of the residuals, a column for each unknown."""
        ...


@dataclass(frozen=True)
class Solution:
    """The unknowns at the least misfit, and the weights the readings had in it."""

    theta: Array
    weights: Array


def solve(problem: Problem, *, robust: bool = False, start: Array | None = None) -> Solution:
    """Meet the readings as well as the form can.

    Parameters
    ----------
    problem : Problem
    robust : bool
        Weigh outlying readings down (Huber's weights about the median scatter).
    start : Array or None
        Unknowns known to be near; without them the starts are scanned for.
    """
    weights = np.ones_like(problem.x)
    theta = _best(problem, weights, start)
    for _ in range(_ROBUST_ITERATIONS if robust else 0):
        before = weights
        weights = huber_weights(problem.residuals(theta))
        theta = _best(problem, weights, theta)
        if np.max(np.abs(weights - before)) < 1e-6:
            break
    return Solution(theta, weights)


def huber_weights(residuals: Array) -> Array:
    """1 for readings within the scatter, falling as 1/residual beyond."""
    size = np.abs(residuals)
    bound = HUBER * _NORMAL_MAD * float(np.median(size))
    return np.where(size > bound, bound / np.where(size > 0, size, 1.0), 1.0) if bound > 0 else np.ones_like(size)


def _best(problem: Problem, weights: Array, start: Array | None) -> Array:
    starts = problem.starts(weights) if start is None else iter([start])
    found = [descend(problem, theta, weights) for theta in starts]
    return min(found, key=lambda theta: _misfit(problem, theta, weights))


def _misfit(problem: Misfit, theta: Array, weights: Array) -> float:
    value = float(weights @ problem.residuals(theta) ** 2)
    return value if np.isfinite(value) else np.inf


def descend(problem: Misfit, theta: Array, weights: Array, tight: float = _TIGHT) -> Array:
    """Go down from a start by damped Gauss-Newton steps inside the bounds (Levenberg 1944, Marquardt 1963)."""
    damping, misfit = 1e-3, _misfit(problem, theta, weights)
    for _ in range(_ITERATIONS):
        step = _step(problem, theta, weights, damping)
        new = np.clip(theta + step, problem.lower, problem.upper)
        with np.errstate(all="ignore"):
            reached = _misfit(problem, new, weights)
        stalled = damping < 1e-2 and 0 <= misfit - reached <= tight * misfit
        small = stalled or np.max(np.abs(new - theta) / (np.abs(theta) + 1e-6)) < tight
        if reached <= misfit:
            theta, misfit, damping = new, reached, max(damping * 0.1, 1e-12)
        else:
            damping *= 8.0
        if small or damping > 1e10:
            break
    return theta


def _step(problem: Misfit, theta: Array, weights: Array, damping: float) -> Array:
    slopes = problem.jacobian(theta)
    gradient = slopes.T @ (weights * problem.residuals(theta))
    free = ~_held(problem, theta, gradient)
    slopes = slopes[:, free]
    normal = slopes.T @ (weights[:, None] * slopes)
    step = np.zeros_like(theta)
    damped = normal + damping * np.diag(np.diag(normal) + 1e-12)
    step[free] = -np.linalg.lstsq(damped, gradient[free], rcond=None)[0]
    return step


def _held(problem: Misfit, theta: Array, gradient: Array) -> NDArray[np.bool_]:
    """Unknowns at a bound that the misfit pushes them against."""
    at_lower = (theta <= problem.lower) & (gradient > 0)
    return np.asarray(at_lower | (theta >= problem.upper) & (gradient < 0))
