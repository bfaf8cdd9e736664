"""How long the fastest particle stays in a hold tube."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from pipeflow.arrays import Array, FloatOrArray
from pipeflow.friction import Regime
from pipeflow.line.kinetics import laminar_state
from pipeflow.line.route import with_pipe_axis
from pipeflow.operability.limits import at_least
from pipeflow.operability.state import LineState
from pipeflow.sources import Source
from pipeflow.verdict import Check

FASTEST_PARTICLE = Source(
    key="fastest-particle",
    title="Least residence time of a hold tube, by the fastest particle",
    citation="L/u_max, the velocity profile integrated; at least 2 V in laminar and 1.25 V in turbulent flow, as is "
    "the practice of thermal processing",
    confidence="high",
    note="a plug or shear thinning is not credited; particles of a size of their own may outrun the liquid",
)
LAMINAR_LEAST, TURBULENT_LEAST = 2.0, 1.25


def fastest_over_mean(laminar_ratio: FloatOrArray, turbulent: FloatOrArray) -> Array:
    """``u_max/V`` that a residence time is worked out with.

    Parameters
    ----------
    laminar_ratio : float or array
        ``u_max/V`` of the laminar profile; above 2 for a fluid that thickens.
    turbulent : bool or array
        Whether the flow is fully turbulent; in the transition it is taken as laminar.
    """
    laminar = np.maximum(LAMINAR_LEAST, laminar_ratio)
    return np.where(turbulent, TURBULENT_LEAST, laminar)


def residence_times(state: LineState) -> Array:
    """Time of the fastest particle in each pipe at maximum flow, s."""
    ratio = laminar_state(state.line.pipes, with_pipe_axis(state.fluid.rheology)).maximum_velocity[state.maximum]
    turbulent = state.regimes(state.maximum) == Regime.TURBULENT
    fastest = fastest_over_mean(ratio, turbulent) * state.line.velocity[state.maximum]
    return np.asarray(state.length / fastest)


def residence_checks(state: LineState, least: Mapping[str, float]) -> Iterator[Check]:
    """Hold the hold tubes, by name, to their least residence times, s."""
    times = residence_times(state)
    for name, limit in least.items():
        time = float(times[state.names.index(name)])
        basis = (
            f"fastest particle at maximum flow, in {name}; at least 2 V laminar, 1.25 V turbulent; a process authority "
            "settles the process"
        )
        yield at_least("residence_time", time, limit, "s", basis, FASTEST_PARTICLE.key)
