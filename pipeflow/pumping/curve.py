"""The curve of a rotodynamic pump as measured on water: checked, read between its points, scaled.

Heads are metres of whatever is pumped. The curve is never read past its first and last point.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.sources import Range, Source

AFFINITY = Source(
    key="affinity",
    title="A rotodynamic pump at another speed",
    citation="affinity laws: Q ~ N, H ~ N², P ~ N³",
    note=(
        "for the water curve, before any correction; the efficiency is kept, though it falls slowly with the speed; "
        "NPSH required by N², common practice, which is low below some half of the speed"
    ),
)
TRIM = Source(
    key="impeller-trim",
    title="A rotodynamic pump with its impeller cut down",
    citation="Q ~ D, H ~ D², its outlet width kept (a pump similar throughout has Q ~ D³, H ~ D²)",
    ranges=(Range("D/D_0", 0.8, 1.0),),
    confidence="medium",
    note="common practice to a fifth of the diameter; efficiency is kept, though it falls; the maker's curve is right",
)
INTERPOLATION = Source(
    key="monotone-cubic",
    title="A pump curve between its points",
    citation="Fritsch & Butland (1984), SIAM J. Sci. Stat. Comput. 5, 300: monotone piecewise cubics",
    confidence="exact",
    note="no overshoot; nothing past the first and last point",
)
ROUNDING = 1e-12
"""Share of the last flow by which rounding may pass an end of the curve."""


@dataclass(frozen=True, eq=False)
class WaterCurve:
    """A pump curve as measured on water; arrays of one length.

    Attributes
    ----------
    flow : Array
        m³/s, strictly rising.
    head : Array
        Of the whole pump, m of the liquid pumped.
    efficiency : Array or None
        Fraction.
    npsh_required : Array or None
        m.
    speed : float or None
        Speed the curve was measured at, rad/s.
    stages : int
        Impellers in series in the pump.
    """

    flow: Array
    head: Array
    efficiency: Array | None = None
    npsh_required: Array | None = None
    speed: float | None = None
    stages: int = 1

    @property
    def ends(self) -> tuple[float, float]:
        """First and last flow, m³/s."""
        return float(self.flow[0]), float(self.flow[-1])

    def head_at(self, flow: FloatOrArray) -> Array:
        """Head [m] at a flow [m³/s], nan outside the curve."""
        return self._head(self._within(flow))

    def efficiency_at(self, flow: FloatOrArray) -> Array:
        """Efficiency at a flow [m³/s], nan outside the curve or without one."""
        return self._efficiency(self._within(flow))

    def npsh_required_at(self, flow: FloatOrArray) -> Array:
        """NPSH required [m] at a flow [m³/s], nan outside the curve or without one."""
        return self._npsh_required(self._within(flow))

    @cached_property
    def best_flow(self) -> float | None:
        """Best-efficiency flow [m³/s], None without an efficiency.

        The vertex of the parabola through the best row and its two neighbours, since the interpolant has its peak at
        the row itself; an end row where that is the best one.
        """
        if self.efficiency is None:
            return None
        row = int(np.argmax(self.efficiency))
        if row in (0, self.flow.size - 1):
            return float(self.flow[row])
        return _vertex(self.flow[row - 1 : row + 2], self.efficiency[row - 1 : row + 2])

    @cached_property
    def best_head(self) -> float | None:
        """Head at the best-efficiency flow, m; None without an efficiency."""
        return None if self.best_flow is None else float(self.head_at(self.best_flow))

    @property
    def is_best_at_end(self) -> bool:
        """Whether the efficiency is highest in the first or last row, so that the curve does not show its peak."""
        return self.efficiency is not None and int(np.argmax(self.efficiency)) in (0, self.flow.size - 1)

    def _within(self, flow: FloatOrArray) -> Array:
        """Give flows rounded onto the ends from just past them, nan from further out."""
        given = np.asarray(flow, dtype=np.float64)
        first, last = self.ends
        nearest = np.clip(given, first, last)
        return np.where(np.abs(given - nearest) <= ROUNDING * last, nearest, np.nan)

    @cached_property
    def _head(self) -> Callable[[Array], Array]:
        return interpolant(self.flow, self.head)

    @cached_property
    def _efficiency(self) -> Callable[[Array], Array]:
        return interpolant(self.flow, self.efficiency)

    @cached_property
    def _npsh_required(self) -> Callable[[Array], Array]:
        return interpolant(self.flow, self.npsh_required)


def interpolant(x: Array, y: Array | None) -> Callable[[Array], Array]:
    """Monotone cubic through the points, nan outside; nan everywhere where there are none."""
    if y is None:
        return lambda at: np.full(np.shape(at), np.nan)
    from scipy.interpolate import PchipInterpolator

    cubic = PchipInterpolator(x, y, extrapolate=False)
    return lambda at: np.asarray(cubic(at), dtype=np.float64)


def _vertex(x: Array, y: Array) -> float:
    """Where the parabola through three points with the highest in the middle has its top."""
    left, right = (y[1] - y[0]) / (x[1] - x[0]), (y[2] - y[1]) / (x[2] - x[1])
    if left == right:
        return float(x[1])
    return float(0.5 * (x[0] + x[1]) + 0.5 * (x[2] - x[0]) * left / (left - right))


def at_speed(curve: WaterCurve, speed: float) -> WaterCurve:
    """Scale a curve to another speed [rad/s] by the affinity laws; one without a speed is taken as measured at it."""
    ratio = 1.0 if curve.speed is None else speed / curve.speed
    return replace(_scaled(curve, ratio, ratio**2, ratio**2), speed=speed)


def trimmed(curve: WaterCurve, ratio: float) -> WaterCurve:
    """Scale a curve to an impeller cut to ``ratio`` of its diameter.

    NPSH required is a matter of the inlet, which is not cut. It keeps its value row by row, so that at one flow it is
    that of a higher flow of the uncut pump: no less where it rises with the flow.
    """
    return _scaled(curve, ratio, ratio**2, 1.0)


def _scaled(curve: WaterCurve, flow: float, head: float, npsh: float) -> WaterCurve:
    required = None if curve.npsh_required is None else npsh * curve.npsh_required
    return replace(curve, flow=flow * curve.flow, head=head * curve.head, npsh_required=required)


def in_series(curve: WaterCurve, number: int) -> WaterCurve:
    """Add the heads of equal pumps one after another; NPSH required is that of the first.

    A correction for viscosity asks for the curve of one pump: it is made before pumps are put together.
    """
    return _scaled(replace(curve, stages=number * curve.stages), 1.0, float(number), 1.0)


def in_parallel(curve: WaterCurve, number: int) -> WaterCurve:
    """Add the flows of equal pumps side by side.

    A correction for viscosity asks for the curve of one pump: it is made before pumps are put together.
    """
    return _scaled(curve, float(number), 1.0, 1.0)
