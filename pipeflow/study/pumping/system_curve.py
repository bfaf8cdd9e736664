"""The head a line asks of its pump, by flow: from the start of flow to past the maximum, dense near the transition."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.friction import Regime
from pipeflow.line.route import LineFlow
from pipeflow.operability.deposition import FORMULAS, default_formula
from pipeflow.operability.transition import FLAT_SLOPE
from pipeflow.study.checks import carried_solids
from pipeflow.study.flows import line_at, pipes_of
from pipeflow.study.pumping.demand import heads_along
from pipeflow.study.pumping.result import FlatBand, SystemCurve

BEYOND = 1.3
"""How far past the maximum flow a system curve is drawn."""
STEPS = 52
AROUND = np.array([0.85, 0.92, 0.96, 0.98, 0.99, 1.0, 1.01, 1.02, 1.04, 1.08, 1.15])
"""Where the curve is looked at around the edges of a transition, as shares of their flow."""
WITHIN = np.linspace(0.1, 0.9, 9)
"""And between the edges."""


def flows_of_interest(cases: Sequence[Case]) -> Array:
    """Flows to look at, m³/s: evenly from 0 to past the highest maximum, around every transition, and those stated."""
    highest = max(case.flow.maximum for case in cases)
    if highest <= 0:
        return np.zeros(1)
    stated = [flow for case in cases for flow in (case.flow.minimum, case.flow.design, case.flow.maximum)]
    edges = np.concatenate([_edges(case) for case in cases])
    near = (edges[:, None] * AROUND).ravel()
    between = (edges[0::2, None] + (edges[1::2] - edges[0::2])[:, None] * WITHIN).ravel()
    last = BEYOND * highest
    every = np.concatenate([np.linspace(0.0, last, STEPS + 1), stated, near, between])
    return _without_doubles(every[np.isfinite(every) & (every <= last)], last)


def _without_doubles(flows: Array, last: float) -> Array:
    """Sort, and leave out what rounding alone tells from the flow before."""
    every = np.unique(flows)
    apart = np.diff(every, prepend=-last) > 1e-9 * last
    return np.asarray(every[apart])


def _edges(case: Case) -> Array:
    """Flows where each pipe leaves laminar flow and where it is turbulent, in turn, m³/s."""
    pipes = pipes_of(case)
    if not pipes:
        return np.empty(0)
    line = line_at(case, case.flow.design or case.flow.maximum or 1e-3, with_upper=False)
    area = np.pi / 4.0 * np.array([pipe.diameter for pipe in pipes]) ** 2
    both = [line.pipes.critical_velocity * area, line.pipes.turbulent_velocity * area]
    edges: Array = np.stack(both, axis=-1).ravel()
    return edges


def system_curve(case: Case, flow: Array) -> SystemCurve:
    """Solve the line at every flow, m³/s, in one call."""
    line = line_at(case, flow)
    found = heads_along(case, line)
    edges = _edges(case)
    first, last = edges[0::2], edges[1::2]
    return SystemCurve(
        flow=_plain(flow),
        total_head=_plain(line.total_head),
        total_head_upper=_plain(line.total_head_upper),
        pump_head=_plain(found.central.pump_head),
        pump_head_upper=_plain(found.upper.pump_head),
        static_head=_plain(line.static_head),
        regime=tuple(_regimes(line)),
        laminar_until=_within(first.min() if first.size else np.nan, flow),
        turbulent_from=_within(last.max() if last.size else np.nan, flow),
        deposition_flow=_deposition_flow(case, line),
        flat_bands=tuple(_flat_bands(case, edges)),
    )


def _plain(values: Array) -> tuple[float, ...]:
    return tuple(float(value) for value in values)


def _within(value: float, flow: Array) -> float | None:
    return float(value) if 0.0 < value <= flow[-1] else None


def _regimes(line: LineFlow) -> Iterator[str]:
    """Name the regime at each flow of the pipe that loses most; without pipes there is none."""
    if not line.velocity.shape[-1]:
        yield from ("no flow",) * len(line.total_head)
        return
    governing = line.friction_loss.argmax(axis=-1)
    regimes = np.take_along_axis(line.pipes.regime, governing[:, None], axis=-1)[:, 0]
    yield from (Regime(int(regime)).name.lower().replace("_", " ") for regime in regimes)


def _deposition_flow(case: Case, line: LineFlow) -> float | None:
    """Highest flow at which solids begin to settle out in some pipe, by the formula the checks take, m³/s."""
    solids, pipes = carried_solids(case), pipes_of(case)
    if solids is None or not pipes:
        return None
    bores = np.array([pipe.diameter for pipe in pipes])
    friction_velocity = np.sqrt(line.pipes.wall_shear_stress[-1] / float(case.fluid.density))
    keys = [
        case.methods.deposition or default_formula(solids.size, solids.viscosity, float(u)) for u in friction_velocity
    ]
    velocities = [FORMULAS[key].velocity(bore, solids) for key, bore in zip(keys, bores, strict=True)]
    return float((np.array(velocities) * np.pi / 4.0 * bores**2).max())


def _flat_bands(case: Case, edges: Array) -> Iterator[FlatBand]:
    """Transitions, between the flows of ``edges`` in turn, in which the stress hardly rises with the velocity."""
    pipes = pipes_of(case)
    if not pipes:
        return
    ends = np.where(np.isfinite(edges), edges, 0.0)
    stress = line_at(case, ends, with_edges=False, with_upper=False).pipes.wall_shear_stress
    for index, pipe in enumerate(pipes):
        low, high = (float(edge) for edge in edges[2 * index : 2 * index + 2])
        if not 0.0 < low < high:
            continue
        exponent = float(np.log(stress[2 * index + 1, index] / stress[2 * index, index]) / np.log(high / low))
        if exponent <= FLAT_SLOPE:
            yield FlatBand(pipe.name, low, high, exponent)
