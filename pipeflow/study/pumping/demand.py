"""What a line asks of its pump at any flow, and what it leaves at the pump's inlet."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.profile import Profile
from pipeflow.line.route import LineFlow
from pipeflow.line.site import SEA_LEVEL_PRESSURE
from pipeflow.study.flows import line_at, pump_position
from pipeflow.study.profile import atmospheric_pressure, read_along


def heads_along(case: Case, line: LineFlow) -> Profile:
    """Read the line at its nodes, high points asking for what they need.

    Where the pressure of air or vapour is not known no line holds less than a vacuum at sea level, as ``solve`` has it.
    """
    vapour = case.liquid.vapour_pressure if case.liquid else None
    return read_along(case, line, atmospheric_pressure(case) or SEA_LEVEL_PRESSURE, vapour or 0.0)


@dataclass(frozen=True)
class Heads:
    """Heads at several flows, m: what the pump must give, central and upper, and what it finds at its inlet.

    ``npsh_available`` is at the lowest level of the source, ``inlet`` the gauge head at the level stated, both by the
    upper figure.
    """

    central: Array
    upper: Array
    npsh_available: Array
    inlet: Array


@dataclass(frozen=True)
class Demand:
    """The line of a case as its pump sees it; what has been solved once is kept.

    NPSH available is nan where the pressure of air or vapour is not known.
    """

    case: Case
    _kept: dict[bytes, Heads] = field(default_factory=dict)

    def central(self, flow: Array) -> Array:
        """Head asked for by the central method, m; the others are not solved for it."""
        return heads_along(self.case, line_at(self.case, flow, with_edges=False, with_upper=False)).central.pump_head

    def upper(self, flow: Array) -> Array:
        """Head asked for by the highest method, m."""
        return self.at(flow).upper

    def at(self, flow: Array) -> Heads:
        """Solve the line at flows, m³/s."""
        flow = np.ascontiguousarray(flow, dtype=np.float64)
        key = flow.tobytes()
        if key not in self._kept:
            self._kept[key] = self._solved(flow)
        return self._kept[key]

    def _solved(self, flow: Array) -> Heads:
        return self.of_line(line_at(self.case, flow, with_edges=False))

    def of_line(self, line: LineFlow) -> Heads:
        """Read the line of the case, solved at several flows."""
        found = heads_along(self.case, line)
        inlet = 2 * pump_position(self.case) + 1
        above = found.upper.total_head[..., inlet] - found.elevation[..., inlet]
        available = above - self._drawn_down() + self._air_over_vapour()
        return Heads(found.central.pump_head, found.upper.pump_head, available, above)

    def _drawn_down(self) -> float:
        """Fall of the source from its level to its lowest, m."""
        if self.case.source is None or self.case.lowest_level is None:
            return 0.0
        return float(self.case.source.level) - self.case.lowest_level

    def _air_over_vapour(self) -> float:
        air, liquid = atmospheric_pressure(self.case), self.case.liquid
        if air is None or liquid is None or liquid.vapour_pressure is None:
            return np.nan
        return (air - liquid.vapour_pressure) / (float(self.case.fluid.density) * STANDARD_GRAVITY)
