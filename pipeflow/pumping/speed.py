"""The speed at which a pump gives a wanted duty."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from pipeflow.arrays import FloatOrArray
from pipeflow.pumping.state import PumpState

BISECTIONS = 50
AGREEMENT = 1e-9

TOO_SLOW = "at its highest speed the pump does not give the wanted head at the wanted flow"
TOO_FAST = "at its lowest speed the pump gives more than the wanted head at the wanted flow"
OFF_THE_CURVE = "no speed allowed brings the wanted flow and head onto the pump's curve"


class CurveAtSpeed(Protocol):
    """A curve of head against flow at one speed."""

    @property
    def ends(self) -> tuple[float, float]:
        """First and last flow, m³/s."""

    def state(self, flow: FloatOrArray) -> PumpState:
        """What the pump gives at flows [m³/s]."""


@dataclass(frozen=True)
class SpeedFound:
    """A speed, rad/s, or the reason why there is none."""

    speed: float | None
    reason: str = ""


def speed_for(
    flow: float, head: float, curve_at: Callable[[float], CurveAtSpeed], speeds: tuple[float, float]
) -> SpeedFound:
    """Find the speed at which the curve goes through a wanted duty.

    Parameters
    ----------
    flow, head : float
        m³/s, and m of the fluid.
    curve_at : callable
        Speed [rad/s] -> the curve, corrected, at it.
    speeds : (float, float)
        Lowest and highest speed allowed, rad/s.

    Returns
    -------
    SpeedFound
        Head of the curve within 1e-9 of the wanted one.
    """

    def excess(speed: float) -> float:
        return _excess(curve_at(speed), flow, head)

    at_most, at_least = excess(speeds[1]), excess(speeds[0])
    if at_most < 0:
        return SpeedFound(None, TOO_SLOW if np.isfinite(at_most) else OFF_THE_CURVE)
    if at_least > 0:
        return SpeedFound(None, TOO_FAST if np.isfinite(at_least) else OFF_THE_CURVE)
    speed = _root(excess, speeds)
    met = abs(excess(speed)) <= AGREEMENT * abs(head)
    return SpeedFound(speed) if met else SpeedFound(None, OFF_THE_CURVE)


def _excess(curve: CurveAtSpeed, flow: float, head: float) -> float:
    """Head of the pump less the wanted one, m; past the curve's last flow, or without a figure, it is too slow."""
    given = float(curve.state(np.asarray(flow)).head)
    if np.isfinite(given):
        return given - head
    return np.inf if flow < curve.ends[0] else -np.inf


def _root(excess: Callable[[float], float], speeds: tuple[float, float]) -> float:
    """Bisect until both ends have figures, then go on by Brent's method."""
    low, high = speeds
    below, above = excess(low), excess(high)
    for _ in range(BISECTIONS):
        if np.isfinite(below) and np.isfinite(above):
            break
        middle = 0.5 * (low + high)
        value = excess(middle)
        if value < 0:
            low, below = middle, value
        else:
            high, above = middle, value
    if not (np.isfinite(below) and np.isfinite(above)):
        return low if np.isfinite(below) else high
    return _brent(excess, low, high)


def _brent(excess: Callable[[float], float], low: float, high: float) -> float:
    from scipy.optimize import brentq

    return float(brentq(excess, low, high, xtol=1e-14 * high, rtol=1e-14)) if low < high else low
