"""Pressure that sets a stopped line of a yield-stress fluid moving again."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.operability.limits import at_most, not_checked
from pipeflow.operability.state import LineState
from pipeflow.sources import Source
from pipeflow.verdict import Check

RESTART = Source(
    key="restart-yield",
    title="Pressure to restart a stopped line: the whole column yields at once at its static yield stress",
    citation="force balance 4 L tau_s/D, each pipe",
    confidence="exact",
    note="an upper figure for a gel that does not compress; the factor 1.3 on it is common practice (1.2 to 1.5)",
)
RESTART_FACTOR = 1.3
STATIC_RATIO = 2.0
"""Static over dynamic yield stress where it was not measured; 1.2 to 5 are found (common practice)."""


def yield_pressure(
    length: FloatOrArray,
    diameter: FloatOrArray,
    static_yield_stress: FloatOrArray,
    laminar_resistance: FloatOrArray = 0.0,
) -> Array:
    """``(4 L/D + K_laminar/16) tau_s`` [Pa]: what must be overcome before the contents of a pipe move.

    Parameters
    ----------
    length, diameter : float or array
        m.
    static_yield_stress : float or array
        Pa, after the rest that is meant.
    laminar_resistance : float or array
        Sum of the laminar constants of the fittings; their loss at rest is ``K_laminar tau/16``.
    """
    along = 4.0 * np.asarray(length) / np.asarray(diameter)
    return np.asarray((along + np.asarray(laminar_resistance) / 16.0) * static_yield_stress)


def demand_along(yielding: Array, weight_of_rise: Array, at_end: FloatOrArray) -> Array:
    """Gauge pressure asked for at the start of each pipe of a stopped line to move it, and at its end, Pa.

    From the end backwards; a crest asks for no less than the atmosphere.

    Parameters
    ----------
    yielding, weight_of_rise : Array
        Pressure that yields the contents of each pipe, and ``rho g`` times its rise, Pa; the last axis is that of the
        pipes in flow order.
    at_end : float or Array
        Pressure at the end of the line, Pa, of the shape before that axis.
    """
    own = np.asarray(yielding + weight_of_rise)
    demand = [np.broadcast_to(np.asarray(at_end, dtype=np.float64), own.shape[:-1])]
    for pipe in reversed(range(own.shape[-1])):
        demand.append(np.maximum(demand[-1] + own[..., pipe], 0.0))
    return np.stack(demand[::-1], axis=-1)


@dataclass(frozen=True)
class Stopped:
    """A stopped line.

    Attributes
    ----------
    static_yield_stress : float
        Pa.
    is_measured : bool
        Not worked out from the dynamic yield stress.
    factor : float
        On the pressure that yields the contents.
    pump_position : int
        Number of elements before the pump.
    """

    static_yield_stress: float
    is_measured: bool
    factor: float = RESTART_FACTOR
    pump_position: int = 0

    @classmethod
    def of(cls, measured: float | None, dynamic: float, factor: float | None, pump_position: int) -> Stopped:
        """Take the static yield stress as measured, else twice the dynamic one."""
        stress = STATIC_RATIO * dynamic if measured is None else measured
        return cls(stress, measured is not None, factor or RESTART_FACTOR, pump_position)

    def yielding(self, state: LineState) -> Array:
        """Pressure that yields the contents of each pipe, the factor on it, Pa."""
        return self.factor * yield_pressure(
            state.length, state.diameter, self.static_yield_stress, state.laminar_resistance
        )

    def demand(self, state: LineState) -> Array:
        """Gauge pressure asked for at the start of each pipe to move the full line, Pa; the last is that at its end.

        From the end backwards; a crest asks for no less than the atmosphere, since no siphon draws a stopped line on.
        """
        weight = state.density * STANDARD_GRAVITY
        last = state.destination
        rise = np.array([pipe.rise for pipe in state.pipes], dtype=np.float64)
        return demand_along(
            self.yielding(state), weight * rise, last.pressure + weight * np.asarray(last.head_of_level)
        )

    def required(self, state: LineState) -> float:
        """Pressure the pump must add to restart the full line, Pa."""
        source = state.source
        given = float(source.pressure) + state.density * STANDARD_GRAVITY * float(source.level)
        return float(self.demand(state)[0]) - given

    @property
    def said(self) -> str:
        """Word where the yield stress comes from."""
        stress = f"tau_s {self.static_yield_stress:.4g} Pa"
        return f"{stress} as given" if self.is_measured else f"{stress}, twice the dynamic yield stress, not measured"


def restart_checks(state: LineState, stopped: Stopped, credited: float | None) -> Iterator[Check]:
    """Hold the pressure that restarts the line against the pump's credit, Pa, and the suction side to the source."""
    value = stopped.required(state)
    basis = (
        f"4 L tau_s/D of the full line, {stopped.said}, times {stopped.factor:g} (common practice), and its rise to "
        "the end or to a crest, whichever asks for more"
    )
    if credited is None:
        yield not_checked("restart_pressure", ("limits.restart_pressure",), "Pa", basis, value, RESTART.key)
    else:
        said = (
            f"{basis}; credit 80 % of the least corrected pump head from 0 to 40 % of best-efficiency flow, never the "
            "shut-off head on water; local codes and a licensed engineer settle how it is restarted"
        )
        yield _no_better(at_most("restart_pressure", value, value, credited, "Pa", said, RESTART.key), stopped)
    if stopped.pump_position:
        yield _no_better(_suction(state, stopped), stopped)


def _suction(state: LineState, stopped: Stopped) -> Check:
    before = [element.name for element in state.route[: stopped.pump_position]]
    here = np.array([name in before for name in state.names])
    rise = sum(float(pipe.rise) for pipe, is_here in zip(state.pipes, here, strict=True) if is_here)
    weight = state.density * STANDARD_GRAVITY
    available = float(state.source.pressure) + weight * (float(state.source.level) - rise)
    needed = float(stopped.yielding(state)[here].sum())
    basis = f"suction side, against level and pressure of the source; {stopped.said}, times {stopped.factor:g}"
    return at_most("restart_suction", needed, needed, available, "Pa", basis, RESTART.key)


def _no_better(check: Check, stopped: Stopped) -> Check:
    """Keep a check on a yield stress that was not measured from being ok."""
    return check if stopped.is_measured or check.status != "ok" else replace(check, status="caution")
