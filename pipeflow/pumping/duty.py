"""Where a pump and a line agree: every crossing of their curves, and the speed that makes them cross at a wanted flow.

A pump is a function of one parameter that gives flow and head: the flow itself for a rotodynamic pump, the pressure for
one of positive displacement. The system is a function of the flow. Both take and give arrays.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array

PumpCurve = Callable[[Array], tuple[Array, Array]]
SystemCurve = Callable[[Array], Array]

SCAN_POINTS = 257
ZOOM_POINTS = 33
ZOOMS = 4
SIDE = 1e-6
"""Share of the pump's curve by which the sides of a crossing are looked at."""
CLOSE = 1e-13
"""Share of the head within which a crossing is met."""
AGREEMENT = 1e-9
"""Share of the head within which the curves are said to meet where they touch, or at an end of the pump's."""

LINE_ASKS_MORE = "the pump gives less head than the line asks for at every point of its curve"
RUN_OUT = (
    "the pump gives more head than the line asks for up to the last flow of its curve: it would run out past the curve"
)
BELOW_FIRST = "the line asks for less head than the first point of the pump's curve"
NO_FIGURE = "pump and line have no figures at one and the same flow"
GAP = "the curves pass each other where pump or line has no figure"


@dataclass(frozen=True)
class Intersection:
    """One crossing of a pump's curve and a line's.

    Attributes
    ----------
    parameter : float
        Where it lies on the pump's curve.
    flow, head : float
        m³/s, and m of the fluid.
    is_stable : bool
        The head the line asks for rises above what the pump gives as the flow grows: the flow returns after a
        disturbance.
    residual : float
        Head of the pump less that of the line, m.
    """

    parameter: float
    flow: float
    head: float
    is_stable: bool
    residual: float


@dataclass(frozen=True)
class Duties:
    """Every crossing in the order of flow, and the reason where there is none."""

    intersections: tuple[Intersection, ...]
    reason: str = ""

    @property
    def duty(self) -> Intersection | None:
        """The stable crossing at the largest flow."""
        stable = [one for one in self.intersections if one.is_stable]
        return stable[-1] if stable else None

    @property
    def is_ambiguous(self) -> bool:
        """Whether the curves cross more than once, so that the way it is started decides where the pump runs."""
        return len(self.intersections) > 1


def duties(pump: PumpCurve, ends: tuple[float, float], system_head: SystemCurve) -> Duties:
    """Find every crossing of a pump's curve and a line's.

    A dense scan, looked at more closely where the curves come near without crossing, then a bracketed root find of all
    crossings at once; some 20 calls of the system in all.

    Parameters
    ----------
    pump : callable
        Parameter -> (flow, head); nan where it has no figure.
    ends : (float, float)
        First and last parameter, both part of the curve.
    system_head : callable
        Flow -> head; nan where it has no figure.

    Returns
    -------
    Duties
        Crossings to within 1e-12 of the head where the curves can be computed that closely.
    """
    search = _Search(pump, ends, system_head)
    at = np.linspace(*ends, SCAN_POINTS)
    gap = search.gap(at)
    if not np.isfinite(gap).any():
        return Duties((), NO_FIGURE)
    at, gap = search.closer(at, gap)
    places = np.unique(np.concatenate([search.crossings(at, gap), search.touches(at, gap)]))
    found = sorted(search.intersections(_apart(places, at)), key=lambda one: (one.flow, one.head))
    return Duties(tuple(found), "" if found else search.reason(at, gap))


@dataclass(frozen=True)
class _Search:
    """A pump and a system, and the gap between them."""

    pump: PumpCurve
    ends: tuple[float, float]
    system_head: SystemCurve

    def gap(self, at: Array) -> Array:
        """Head of the pump less that of the system, m."""
        flow, head = self.pump(at)
        return head - self.system_head(flow)

    def closer(self, at: Array, gap: Array) -> tuple[Array, Array]:
        """Add points about the places where the gap comes nearest to zero without a change of sign."""
        for _ in range(ZOOMS):
            turns = _near_misses(gap)
            if not turns.size:
                break
            between = np.linspace(at[turns - 1], at[turns + 1], ZOOM_POINTS).ravel()
            new = np.setdiff1d(between, at)
            order = np.argsort(np.concatenate([at, new]), kind="stable")
            at, gap = np.concatenate([at, new])[order], np.concatenate([gap, self.gap(new)])[order]
        return at, gap

    def crossings(self, at: Array, gap: Array) -> Array:
        """Parameters at which the gap changes its sign."""
        left = np.flatnonzero(gap[:-1] * gap[1:] < 0)
        exact = at[gap == 0]
        if not left.size:
            return exact
        from scipy.optimize.elementwise import find_root

        closest = 4 * float(np.finfo(float).eps)
        met = CLOSE * float(np.abs(self.pump(at[left])[1]).min())
        found = find_root(
            self.gap,
            (at[left], at[left + 1]),
            tolerances={"xatol": 0.0, "xrtol": closest, "fatol": met, "frtol": 0.0},
        )
        return np.concatenate([np.asarray(found.x), exact])

    def touches(self, at: Array, gap: Array) -> Array:
        """Parameters at which the curves meet to rounding without crossing: at an end, or tangent to each other."""
        _, head = self.pump(at)
        met = np.abs(gap) <= AGREEMENT * np.abs(head)
        ends = np.zeros(at.shape, dtype=bool)
        ends[[0, -1]] = True
        ends[_near_misses(gap)] = True
        beside = np.zeros(at.shape, dtype=bool)
        signs = np.flatnonzero(gap[:-1] * gap[1:] < 0)
        beside[signs], beside[signs + 1] = True, True
        return at[met & ends & ~beside]

    def intersections(self, places: Array) -> list[Intersection]:
        """Crossings at these parameters, in their order."""
        if not places.size:
            return []
        flow, head = self.pump(places)
        residual = head - self.system_head(flow)
        columns = zip(places, flow, head, self._stable(places), residual, strict=True)
        return [Intersection(float(p), float(q), float(h), bool(s), float(r)) for p, q, h, s, r in columns]

    def _stable(self, places: Array) -> NDArray[np.bool_]:
        """Whether the gap passes from above to below as the flow grows; a flow that does not grow is a vertical curve.

        At an end of the pump's curve the side within it decides.
        """
        step = SIDE * (self.ends[1] - self.ends[0])
        before, after = self._beside(places - step), self._beside(places + step)
        here = self.pump(places)[0]
        grows = np.where(np.isnan(after[1]), here, after[1]) > np.where(np.isnan(before[1]), here, before[1])
        falls = ~(before[0] <= 0) & ~(after[0] >= 0)
        rises = ~(before[0] >= 0) & ~(after[0] <= 0)
        return np.where(grows, falls, rises)

    def _beside(self, at: Array) -> tuple[Array, Array]:
        """Gap and flow, nan outside the pump's curve."""
        inside = np.where((at >= self.ends[0]) & (at <= self.ends[1]), at, np.nan)
        flow, head = self.pump(inside)
        return head - self.system_head(flow), flow

    def reason(self, at: Array, gap: Array) -> str:
        """Say why the curves do not meet."""
        known = np.isfinite(gap)
        if (gap[known] < 0).all():
            return LINE_ASKS_MORE
        if not (gap[known] > 0).all():
            return GAP
        flow, _ = self.pump(at[known][[0, -1]])
        return RUN_OUT if flow[1] > flow[0] else BELOW_FIRST


def _near_misses(gap: Array) -> NDArray[np.intp]:
    """Inner points where the gap is nearest to zero, all on one side of it, and may reach it before the next point."""
    before, size, after = np.abs(gap[:-2]), np.abs(gap[1:-1]), np.abs(gap[2:])
    lowest = (size <= before) & (size <= after) & (2.0 * size <= np.maximum(before, after))
    one_side = (gap[:-2] * gap[1:-1] > 0) & (gap[1:-1] * gap[2:] > 0)
    return 1 + np.flatnonzero(lowest & one_side)


def _apart(places: Array, at: Array) -> Array:
    """Drop places that are one to rounding, or were not found."""
    places = places[np.isfinite(places)]
    keep = np.diff(places, prepend=-np.inf) > 1e-12 * np.abs(at).max()
    return places[keep]
