"""Root finds, element by element, all at once: of increasing functions, the one of the physics; and between two points.

The second is for functions that may jump or turn, of which no more is known than a point on either side.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, is_dataclass, replace
from typing import Any, TypeVar

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array

T = TypeVar("T")

MAXIMUM_ITERATIONS = 100
LONGEST_STEP = 4.0
STEP_PRODUCT = 1e-15
"""Two steps in a row whose product is below this leave an error of that order (superlinear convergence)."""


def take(item: T, index: NDArray[Any] | slice) -> T:
    """Pick elements of an array, or of every array of a dataclass."""
    if isinstance(item, np.ndarray):
        return item[index]  # type: ignore[return-value]
    if is_dataclass(item) and not isinstance(item, type):
        return replace(item, **{f.name: take(getattr(item, f.name), index) for f in fields(item)})
    return item


def find_root(
    residual: Callable[..., tuple[Array, Array | None]],
    start: Array,
    slope: Array,
    columns: tuple[Any, ...],
    lower: Array | float = -np.inf,
) -> Array:
    """Solve ``residual(x) = 0`` for increasing functions, each in its own bracket.

    Newton's method where the residual gives its slope, else the secant, guarded by the bracket found so far. Elements
    that have converged leave the work.

    Parameters
    ----------
    residual : callable
        ``residual(x, *columns) -> (value, slope or None)``; nan stands for "below the root".
    start, slope : Array
        First guess and the slope expected there.
    columns : tuple
        Arrays and dataclasses of arrays of the shape of ``start``, handed to ``residual``.
    lower : Array or float
        The root is looked for above this.

    Returns
    -------
    Array
        The roots, nan where none was found; elements whose start is not finite are left out at once.
    """
    root = np.full(start.shape, np.nan)
    active = np.flatnonzero(np.isfinite(start))
    x, slope, low = (np.broadcast_to(array, start.shape)[active] for array in (start, slope, lower))
    columns = columns if active.size == start.size else tuple(take(column, active) for column in columns)
    x = np.where(x > low, x, low + 1e-3)
    high = np.full(x.shape, np.inf)
    step_before = np.ones(x.shape)
    value_before = np.full(x.shape, np.nan)
    for _ in range(MAXIMUM_ITERATIONS if active.size else 0):
        value, exact_slope = residual(x, *columns)
        if exact_slope is not None:
            slope = exact_slope
        else:
            secant = (value - value_before) / step_before
            slope = np.where(secant > 0, secant, slope)
        above = value >= 0
        low, high = np.where(above, low, x), np.where(above, x, high)
        new = _inside(x, value / slope, low, high)
        step = new - x
        done = (np.abs(step * step_before) < STEP_PRODUCT) & np.isfinite(value) | (value == 0)
        if exact_slope is not None:
            done |= step * step < STEP_PRODUCT
        x, step_before, value_before = new, step, value
        if done.any():
            root[active[done]] = x[done]
            left = np.flatnonzero(~done)  # numpy picks by index much faster than by mask
            active = active[left]
            if not active.size:
                break
            x, slope, low, high, step_before, value_before = (
                array[left] for array in (x, slope, low, high, step_before, value_before)
            )
            columns = tuple(take(column, left) for column in columns)
    return root


def _inside(x: Array, correction: Array, low: Array, high: Array) -> Array:
    """Take the step, shortened to :data:`LONGEST_STEP`; bisect, or walk up, where it leaves the bracket."""
    new = x - np.clip(correction, -LONGEST_STEP, LONGEST_STEP)
    outside = ~((new >= low) & (new <= high))
    if not outside.any():
        return new
    fallback = np.where(
        np.isfinite(low) & np.isfinite(high),
        0.5 * (low + high),
        np.where(np.isfinite(low), np.maximum(x, low) + 1.0, high - 1.0),
    )
    return np.where(outside, fallback, new)


def find_between(
    residual: Callable[[Array, NDArray[np.intp]], Array],
    low: Array,
    high: Array,
    at_low: Array,
    at_high: Array,
    tolerance: float = 1e-9,
) -> Array:
    """Find where functions change sign between two points, whether they pass through zero or jump over it.

    Chandrupatla's method (Advances in Engineering Software 28, 145, 1997; from memory): inverse quadratic steps where
    they are safe, else bisection, so that a jump takes no more steps than halving does.

    Parameters
    ----------
    residual : callable
        ``residual(x, rows) -> value`` at points of the elements of these rows; never nan.
    low, high : Array
        Ends of each bracket.
    at_low, at_high : Array
        Values there, of opposite sign or zero.
    tolerance : float
        On x.

    Returns
    -------
    Array
        Within ``tolerance`` of the change of sign; nan where it was not reached.
    """
    root = np.full(low.shape, np.nan)
    rows = np.arange(low.size)
    a, b, fa, fb = (np.array(one, dtype=np.float64) for one in (low, high, at_low, at_high))
    share = np.full(low.shape, 0.5)
    for _ in range(MAXIMUM_ITERATIONS):
        if not rows.size:
            break
        x = a + share * (b - a)
        value = residual(x, rows)
        same = np.sign(value) == np.sign(fa)
        c, fc = np.where(same, a, b), np.where(same, fa, fb)
        b, fb = np.where(same, b, a), np.where(same, fb, fa)
        a, fa = x, value
        with np.errstate(divide="ignore", invalid="ignore"):
            least = tolerance / np.abs(b - a)
            share = np.clip(_step(a, b, c, fa, fb, fc), least, 1.0 - least)
        done = (least > 0.5) | (fa == 0)
        root[rows[done]] = np.where(np.abs(fa) < np.abs(fb), a, b)[done]
        left = np.flatnonzero(~done)
        rows = rows[left]
        a, b, fa, fb, share = (one[left] for one in (a, b, fa, fb, share))
    return root


def _step(a: Array, b: Array, c: Array, fa: Array, fb: Array, fc: Array) -> Array:
    """Share of the way from a to b: by the inverse quadratic through three points where it is safe, else half."""
    xi, phi = (a - b) / (c - b), (fa - fb) / (fc - fb)
    safe = (phi**2 < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
    quadratic = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
    return np.where(safe & np.isfinite(quadratic), quadratic, 0.5)
