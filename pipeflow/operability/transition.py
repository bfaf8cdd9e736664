"""How far a pipe runs from the transition between laminar and turbulent flow."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from pipeflow.friction import PipeFlow, Regime

MARGIN = 0.2
"""Share of the velocity at an edge of the transition within which a pipe is near it (common practice)."""
FLAT_SLOPE = 0.5
"""Slope of ln tau_w against ln V below which the transition band is called flat: head says little about flow."""


def transition_cautions(name: str, at: Mapping[str, tuple[float, PipeFlow]]) -> list[str]:
    """Say where one pipe stands in or near its transition.

    Parameters
    ----------
    name : str
        The pipe.
    at : mapping of str to (float, PipeFlow)
        Velocity, m/s, and flow of that one pipe, by the name of each flow of the line, as ``design flow``.
    """
    inside = [flow for flow, (_, pipe) in at.items() if pipe.regime == Regime.TRANSITIONAL]
    near = [flow for flow, (velocity, pipe) in at.items() if flow not in inside and _is_near(velocity, pipe)]
    pipe = next(iter(at.values()))[1]
    band = f"laminar to {pipe.critical_velocity:.2f} m/s, turbulent from {pipe.turbulent_velocity:.2f} m/s"
    found = []
    if inside:
        found.append(
            f"{name}: transitional at {_listed(inside)} ({band}); the loss is not settled there: expect it to swing"
        )
    if near:
        found.append(f"{name}: within {MARGIN:.0%} of the transition at {_listed(near)} ({band})")
    return found


def _is_near(velocity: float, pipe: PipeFlow) -> bool:
    if pipe.regime == Regime.LAMINAR:
        return bool(velocity > (1.0 - MARGIN) * pipe.critical_velocity)
    if pipe.regime == Regime.TURBULENT:
        return bool(velocity < (1.0 + MARGIN) * pipe.turbulent_velocity)
    return False


def flat_band_caution(name: str, velocities: tuple[float, float], stresses: tuple[float, float]) -> list[str]:
    """Say so where the transition band between two edges is nearly flat."""
    slope = np.log(stresses[1] / stresses[0]) / np.log(velocities[1] / velocities[0])
    if slope > FLAT_SLOPE:
        return []
    return [f"{name}: its transition band is nearly flat; a small error in head is a large one in flow"]


def _listed(flows: list[str]) -> str:
    return " and ".join([", ".join(flows[:-1]), flows[-1]] if len(flows) > 1 else flows)
