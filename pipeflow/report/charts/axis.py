"""Round ends of an axis, for any chart."""

from __future__ import annotations

import math

LEAST_SPAN = 0.05
"""An axis spans at least this share of its values: what differs by less is drawn as one height."""


def round_ends(lowest: float, highest: float, most: int = 8) -> tuple[float, float, float]:
    """Round ends of an axis that holds two values, and the step of its ticks: 1, 2 or 5 of a power of ten.

    Examples
    --------
    >>> round_ends(0.0, 187.0)
    (0.0, 200.0, 50.0)
    """
    span = max(highest - lowest, LEAST_SPAN * max(abs(lowest), abs(highest))) or 1.0
    power = 10.0 ** math.floor(math.log10(span / most))
    step = next(size * power for size in (1.0, 2.0, 5.0, 10.0) if size * power * most >= span * (1.0 - 1e-9))
    low, high = math.floor(lowest / step + 1e-9), math.ceil(highest / step - 1e-9)
    return low * step, max(high, low + 1) * step, step


def decade_ends(lowest: float, highest: float) -> tuple[float, float, list[float]]:
    """Ends of a logarithmic axis at 1, 2 or 5 of a power of ten, and its ticks.

    Examples
    --------
    >>> decade_ends(7.0, 180.0)
    (5.0, 200.0, [5.0, 10.0, 20.0, 50.0, 100.0, 200.0])
    """
    first, last = math.floor(math.log10(lowest)), math.ceil(math.log10(highest))
    every = [size * 10.0**power for power in range(first - 1, last + 1) for size in (1.0, 2.0, 5.0)]
    low = max((tick for tick in every if tick <= lowest * (1.0 + 1e-9)), default=every[0])
    high = min((tick for tick in every if tick >= highest * (1.0 - 1e-9)), default=every[-1])
    within = [tick for tick in every if low <= tick <= high]
    if math.log10(high / low) > 3.0:
        within = [tick for tick in within if tick in (low, high) or math.isclose(math.log10(tick) % 1.0, 0.0)]
    return low, high, within
