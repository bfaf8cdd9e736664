"""The candidate pumps of a case over flow and another input: what each can give, at its highest speed and throttled."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Final

import numpy as np
from numpy.typing import NDArray

from pipeflow import sizing
from pipeflow.arrays import Array
from pipeflow.case.model import Case, Pump
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.route import LineFlow
from pipeflow.pumping.displacement import DisplacementPump
from pipeflow.pumping.slurry_curve import ESTABLISHED_SHARE, SlurryCurve
from pipeflow.pumping.suction import npsh_asked
from pipeflow.study.flows import DESIGN
from pipeflow.study.pumping.demand import Demand, Heads
from pipeflow.study.pumping.machines import Machine, made
from pipeflow.study.ranges.boundaries import FIGURES, JUMP, Key
from pipeflow.study.ranges.limits_over import with_static_yield_stress
from pipeflow.study.ranges.points import case_at, points

PUMPS: Final = "pumps"
"""Name of what is asked of the candidates together: that one of them serves."""
CANDIDATE: Final = "pump "
"""What the names of boundaries of one candidate begin with."""


def is_candidate(name: str) -> bool:
    """Whether a boundary is of one candidate."""
    return name.startswith(CANDIDATE)


@dataclass(frozen=True)
class _Candidate:
    """One pump in what the line holds: at its highest speed, and at its lowest for the least flow."""

    pump: Pump
    machine: Machine
    slowest: Machine
    ends: tuple[float, float]
    best_at_slowest: float | None
    is_able: bool

    @classmethod
    def of(cls, pump: Pump, case: Case) -> _Candidate:
        low, high = pump.speed_minimum or pump.speed, pump.speed_maximum or pump.speed
        machine = made(pump, case, high)
        slowest = machine if low == high else made(pump, case, low)
        is_able = isinstance(machine, DisplacementPump) or not machine.refusal
        best = None if isinstance(slowest, DisplacementPump) or slowest.method == "none" else slowest.best_flow
        return cls(pump, machine, slowest, machine.ends if is_able else (np.nan, np.nan), best, is_able)

    def asked(self, flow: Array, heads: Heads, weight: float) -> Iterator[tuple[Key, Array]]:
        """What is asked of it, for either figure; what does not rest on the head is alike in both.

        ``weight`` is density times gravity, N/m³.
        """
        rest = {"established": self._least(flow), "NPSH": self._npsh(flow, heads, weight)} if self.is_able else {}
        for figure in FIGURES:
            head = heads.central if figure == "central" else heads.upper
            over = self._gives(flow, head, weight) if self.is_able else np.full(flow.shape, JUMP)
            yield (f"{CANDIDATE}{self.pump.name} gives", figure), over
            for name, over_it in rest.items():
                if over_it is not None:
                    yield (f"{CANDIDATE}{self.pump.name} {name}", figure), over_it

    def _gives(self, flow: Array, head: Array, weight: float) -> Array:
        """Head asked for over what it gives at that flow; of a displacement pump flow over what it gives."""
        if isinstance(self.machine, SlurryCurve):
            given = self.machine.state(flow).head
            over = head / np.where(given > 0, given, np.nan) - 1.0
            return np.where(np.isfinite(over), over, np.where(flow < self.ends[0], -JUMP, JUMP))
        pressure = weight * head
        given = self.machine.state(np.maximum(pressure, self.ends[0])).flow  # below its first row it gives no less
        over = flow / np.where(given > 0, given, np.nan) - 1.0
        over = np.where((pressure > self.ends[1]) | ~np.isfinite(over), JUMP, over)
        relief = self.pump.relief_pressure
        return over if relief is None else np.maximum(over, pressure / relief - 1.0)

    def _least(self, flow: Array) -> Array | None:
        """How far a flow is below the least at which the corrected head may be credited, over that flow."""
        if self.best_at_slowest is None:
            return None
        over = 1.0 - flow / (ESTABLISHED_SHARE * self.best_at_slowest)
        state = self.slowest.state(flow)
        is_beyond = ~state.established & ~(flow > self.best_at_slowest)
        return np.where((over > 0) == is_beyond, over, np.where(is_beyond, JUMP, -JUMP))

    def _npsh(self, flow: Array, heads: Heads, weight: float) -> Array | None:
        """NPSH asked for, with its margin, less that available, over the former; None where one is not known."""
        unknown = np.all(np.isnan(heads.npsh_available)) or not self.pump.table.npsh_required
        if unknown or self.pump.reciprocating is not None:
            return None
        parameter = flow if isinstance(self.machine, SlurryCurve) else weight * heads.upper
        over = 1.0 - heads.npsh_available / npsh_asked(self.machine.state(parameter).npsh_required)
        return np.where(np.isfinite(over), over, np.where(flow > self.ends[1], JUMP, -JUMP))


@dataclass(frozen=True)
class _Row:
    """The line and its candidates at one value of the input."""

    weight: float
    demand: Demand
    candidates: tuple[_Candidate, ...]


@dataclass(frozen=True)
class PumpsOver:
    """What the candidates cannot give, over flow and an input, by its key path."""

    case: Case
    path: str
    _rows: dict[float, _Row] = field(default_factory=dict)

    def excess(self, x: Array, y: Array) -> dict[Key, Array]:
        """How far each candidate is beyond what it gives at points of flow and input, and the best of them."""
        found: dict[Key, Array] = {}
        with np.errstate(all="ignore"):
            line = points(self.case, with_static_yield_stress(self.case, self.path, y), flow=x).line
            for value in np.unique(y):
                here = np.flatnonzero(y == value)
                for key, over in self._along(float(value), x[here], _at_design(line, here)).items():
                    found.setdefault(key, np.full(x.shape, -JUMP))[here] = over
        return found

    def _along(self, value: float, flow: Array, line: LineFlow) -> dict[Key, Array]:
        row = self._row(value)
        heads = row.demand.of_line(line)
        each = [dict(one.asked(flow, heads, row.weight)) for one in row.candidates]
        found = {key: over for own in each for key, over in own.items()}
        for figure in FIGURES:
            hardest = [np.max([over for (_, of), over in own.items() if of == figure], axis=0) for own in each]
            found[PUMPS, figure] = np.min(hardest, axis=0)
        return found

    def _row(self, value: float) -> _Row:
        if value not in self._rows:
            given = with_static_yield_stress(self.case, self.path, np.asarray(value))
            case = case_at(self.case, {path: float(one) for path, one in given.items()})
            candidates = tuple(_Candidate.of(pump, case) for pump in case.pumps)
            self._rows[value] = _Row(float(case.fluid.density) * STANDARD_GRAVITY, Demand(case), candidates)
        return self._rows[value]


def _at_design(line: LineFlow, here: NDArray[np.intp]) -> LineFlow:
    """Pick points of a line of shape (points, 3), at the first of their flows."""
    return sizing.at(line, (here, DESIGN))  # type: ignore[arg-type]
