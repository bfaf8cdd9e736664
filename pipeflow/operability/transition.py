"""How far a pipe runs from the transition between laminar and turbulent flow."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace

import numpy as np

from pipeflow.arrays import Array
from pipeflow.friction import PipeFlow, Regime
from pipeflow.operability.limits import at_least
from pipeflow.operability.state import LineState
from pipeflow.verdict import Check

MARGIN = 0.2
"""Share of the velocity at an edge of the transition within which a pipe is near it (common practice)."""
FLAT_SLOPE = 0.5
"""Slope of ln tau_w against ln V below which the transition band is called flat: head says little about flow."""


def transition_cautions(at: Mapping[str, tuple[float, PipeFlow]]) -> Iterator[str]:
    """Say where one pipe stands in or near its transition.

    Parameters
    ----------
    at : mapping of str to (float, PipeFlow)
        Velocity, m/s, and flow of that one pipe, by the name of each flow of the line, as ``design flow``.
    """
    inside = [flow for flow, (_, pipe) in at.items() if pipe.regime == Regime.TRANSITIONAL]
    near = [flow for flow, (velocity, pipe) in at.items() if flow not in inside and _is_near(velocity, pipe)]
    pipe = next(iter(at.values()))[1]
    band = f"laminar to {pipe.critical_velocity:.2f} m/s, turbulent from {pipe.turbulent_velocity:.2f} m/s"
    if inside:
        yield f"transitional at {_listed(inside)} ({band}); the loss is not settled there and may swing"
    if near:
        yield f"within {MARGIN:.0%} of the transition at {_listed(near)} ({band})"


def _is_near(velocity: float, pipe: PipeFlow) -> bool:
    if pipe.regime == Regime.LAMINAR:
        return bool(velocity > (1.0 - MARGIN) * pipe.critical_velocity)
    return bool(pipe.regime == Regime.TURBULENT and velocity < (1.0 + MARGIN) * pipe.turbulent_velocity)


def _listed(flows: list[str]) -> str:
    return " and ".join([", ".join(flows[:-1]), flows[-1]] if len(flows) > 1 else flows)


def criteria_caution(velocities: Sequence[float], lowest: float | None, highest: float | None) -> Iterator[str]:
    """Say so where published criteria disagree on whether a velocity, m/s, is still laminar."""
    if lowest is None or highest is None:
        return
    if any(lowest < velocity < highest for velocity in velocities):
        yield f"published criteria put the end of laminar flow anywhere from {lowest:.2f} to {highest:.2f} m/s"


def flat_band_caution(velocities: Array, stresses: Array) -> Iterator[str]:
    """Say so where the transition band between two edges, m/s and Pa, is nearly flat."""
    slope = np.log(stresses[1] / stresses[0]) / np.log(velocities[1] / velocities[0])
    if slope <= FLAT_SLOPE:
        yield "its transition band is nearly flat: a small error in head is a large one in flow"


def margins(velocity: Array, pipes: PipeFlow) -> Array:
    """Velocity at the end of laminar flow over the velocity, or that over the start of turbulent flow; < 1 between."""
    return np.fmax(pipes.critical_velocity / velocity, velocity / pipes.turbulent_velocity)


def margin_check(state: LineState) -> Check | None:
    """Hold every flow of the range away from the transition; closer than the margin, or across it, is a caution."""
    places = dict.fromkeys((state.minimum, 0, state.maximum))
    with np.errstate(divide="ignore", invalid="ignore"):
        each = margins(state.line.velocity, state.line.pipes)[list(places)]
    if np.all(np.isnan(each)):
        return None
    row, worst = (int(place) for place in np.unravel_index(int(np.nanargmin(each)), each.shape))
    flow = list(places)[row]
    name = {state.minimum: "minimum", state.maximum: "maximum"}.get(flow, "design")
    regime = Regime(int(state.regimes(flow)[worst])).name.lower()
    pipe, velocity = state.line.pipes, float(state.line.velocity[flow, worst])
    across = [
        pipe_name
        for pipe_name, low, high in zip(
            state.names, state.regimes(state.minimum), state.regimes(state.maximum), strict=True
        )
        if low == Regime.LAMINAR and high == Regime.TURBULENT
    ]
    basis = (
        f"{state.named(worst, name)}, {regime} at {velocity:.3g} m/s; laminar to "
        f"{pipe.critical_velocity[flow, worst]:.3g} m/s, turbulent from "
        f"{pipe.turbulent_velocity[flow, worst]:.3g} m/s; a factor of 1.2 from either is common practice"
    )
    if across:
        basis += f"; from minimum to maximum flow the transition is crossed in {', '.join(across)}"
    found = at_least("transition_margin", float(each[row, worst]), 1.0 + MARGIN, "", basis, below="caution")
    return replace(found, status="caution") if across else found
