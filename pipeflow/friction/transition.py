"""From laminar to turbulent flow: one rising curve of wall shear stress against velocity.

The four steps are those of ``docs/theory.md``: the laminar edge where Slatter's Re_3 reaches its critical value, the
candidate turbulent edge at 4000/2100 of the Reynolds number there, its correction so that the curve keeps rising, and a
straight line in ln V - ln tau_w between the two.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.friction.criteria import Criterion, log_reynolds_mr
from pipeflow.friction.laminar import TubeLaw, Wall
from pipeflow.friction.turbulent import Bore, TurbulentMethod
from pipeflow.rootfind import find_root, take
from pipeflow.sources import Source

LOG_BAND = float(np.log(4000.0 / 2100.0))
TURNING_LADDERS = (57, 17, 17, 17, 17)

TRANSITION_LINE = Source(
    key="transition-line",
    title="Straight line in ln V - ln tau_w from the laminar edge to the turbulent edge",
    citation="Own construction of this program, docs/theory.md: one rising curve, no jump",
    confidence="medium",
    note="flow in the transition is unsteady; no published method predicts its loss closely",
)


@dataclass(frozen=True, eq=False)
class Edges:
    """Where laminar flow ends and turbulent flow may begin; logarithms, of SI values; nan where there is no transition.

    Attributes
    ----------
    log_excess, log_velocity, log_reynolds : Array
        End of laminar flow: ln(tau_w - tau_y), ln V and ln Re_MR there.
    band_log_excess, band_log_velocity : Array
        Candidate start of turbulent flow: the velocity of 4000/2100 times that Re_MR, and its laminar wall stress.
    """

    log_excess: Array
    log_velocity: Array
    log_reynolds: Array
    band_log_excess: Array
    band_log_velocity: Array


def transition_edges(law: TubeLaw, bore: Bore, start: Array, criterion: Criterion) -> Edges:
    """Steps 1 and 2 of the transition, looked for from any laminar wall stress ``start = ln(tau_w - tau_y)``."""
    edge = find_root(_criterion_excess, start, _reynolds_slope(law.wall(start)), (law, bore, criterion))
    at_edge = law.wall(edge)
    log_reynolds = log_reynolds_mr(at_edge, bore)
    slope = _reynolds_slope(at_edge)
    band = find_root(_reynolds_excess, edge + LOG_BAND / slope, slope, (law, bore, log_reynolds + LOG_BAND))
    log_eighth = np.log(bore.diameter / 8.0)
    return Edges(
        edge,
        at_edge.log_bulk_rate + log_eighth,
        log_reynolds,
        band,
        law.wall(band).log_bulk_rate + log_eighth,
    )


def _criterion_excess(log_excess: Array, law: TubeLaw, bore: Bore, criterion: Criterion) -> tuple[Array, None]:
    return criterion.excess(law.wall(log_excess), law, bore), None


def _reynolds_excess(log_excess: Array, law: TubeLaw, bore: Bore, target: Array) -> tuple[Array, Array]:
    wall = law.wall(log_excess)
    return log_reynolds_mr(wall, bore) - target, _reynolds_slope(wall)


def _reynolds_slope(wall: Wall) -> Array:
    """``d ln Re_MR/d ln(tau_w - tau_y)``; not positive where the fluid thickens too fast ever to leave laminar flow."""
    return 2.0 * wall.slope - wall.sheared


@dataclass(frozen=True, eq=False)
class TurbulentBranch:
    """Step 3: the part of a turbulent law that continues the laminar curve.

    Attributes
    ----------
    log_excess : Array
        ln(tau_w - tau_y) above which its roots are looked for.
    log_velocity : Array
        ln V at which fully turbulent flow begins.
    governed_by_law : array of bool
        The law reaches that velocity above ``log_excess``; else the branch begins at ``log_excess`` itself.
    """

    method: TurbulentMethod
    law: TubeLaw
    bore: Bore
    log_excess: Array
    log_velocity: Array
    governed_by_law: NDArray[np.bool_]

    @classmethod
    def after(cls, edges: Edges, method: TurbulentMethod, law: TubeLaw, bore: Bore) -> TurbulentBranch:
        """Find where the branch begins: the law's root, the laminar stress at the candidate, or its turning point."""
        lowest = edges.band_log_excess
        if not method.rising:
            lowest = np.maximum(lowest, last_turning_point(method, law, bore))
        at_lowest = _log_velocity(lowest, method, law, bore)
        by_law = ~(at_lowest >= edges.band_log_velocity)
        begin = np.where(by_law, edges.band_log_velocity, at_lowest)
        return cls(method, law, bore, lowest, begin, by_law)

    def log_excess_at(self, log_velocity: Array) -> Array:
        """``ln(tau_w - tau_y)`` at ``ln V``, which is not below :attr:`log_velocity`."""
        friction = 0.003 * self.bore.density * np.exp(2.0 * log_velocity) - self.law.yield_stress
        start = np.maximum(np.log(np.maximum(friction, 1e-300)), self.log_excess)
        unneeded = ~self.governed_by_law & (log_velocity <= self.log_velocity)
        start = np.where(unneeded, np.nan, start)
        slope = 0.55 * self.law.wall(start).sheared
        columns = (self.method, self.law, self.bore, log_velocity)
        root = find_root(_turbulent_excess, start, slope, columns, self.log_excess)
        return np.where(unneeded, self.log_excess, root)


def _log_velocity(log_excess: Array, method: TurbulentMethod, law: TubeLaw, bore: Bore) -> Array:
    velocity = method.velocity(law.wall(log_excess), law, bore)
    return np.log(np.where(velocity > 0, velocity, np.nan))


def _turbulent_excess(
    log_excess: Array, method: TurbulentMethod, law: TubeLaw, bore: Bore, target: Array
) -> tuple[Array, None]:
    return _log_velocity(log_excess, method, law, bore) - target, None


def last_turning_point(method: TurbulentMethod, law: TubeLaw, bore: Bore) -> Array:
    """``ln(tau_w - tau_y)`` above which the velocity of a turbulent law only rises; -inf where it always does.

    With n' taken at the turbulent wall stress, n' -> 0 at the plug bends the curve back: roots below are false. Looked
    for on a ladder of stresses, and on finer ones between the rungs about it. Without a yield stress it always rises.
    """
    turning = np.full(law.yield_stress.shape, -np.inf)
    yielding = np.flatnonzero(law.yield_stress > 0)
    if yielding.size:
        turning[yielding] = _turning_point(method, take(law, yielding), take(bore, yielding))
    return turning


def _turning_point(method: TurbulentMethod, law: TubeLaw, bore: Bore) -> Array:
    low, high = np.log(law.yield_stress) - 5.0, np.log(law.yield_stress) + 9.0
    found = np.zeros(low.shape, dtype=bool)
    column = np.arange(low.size)
    for rungs in TURNING_LADDERS:
        ladder = low + np.linspace(0.0, 1.0, rungs)[:, None] * (high - low)
        each = np.tile(column, rungs)
        law_at_rungs = take(law, each)
        velocity = method.velocity(law_at_rungs.wall(ladder.ravel()), law_at_rungs, take(bore, each))
        falling = ~(np.diff(velocity.reshape(ladder.shape), axis=0) > 0)
        found |= falling.any(axis=0)
        last = rungs - 2 - np.argmax(falling[::-1], axis=0)
        low, high = ladder[last, column], ladder[np.minimum(last + 2, rungs - 1), column]
    return np.where(found, high, -np.inf)
