"""An invented pump, and strategies for random ones."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from pipeflow.pumping.curve import WaterCurve
from pipeflow.rheology import Bingham, HerschelBulkley, Newtonian, PowerLaw, Rheology

RPM = np.pi / 30
SPEED = 1480 * RPM
FLOW = np.array([0.0, 40.0, 80.0, 120.0, 160.0, 200.0]) / 3600
HEAD = np.array([48.0, 47.5, 45.0, 41.0, 35.0, 27.0])
EFFICIENCY = np.array([0.0, 0.42, 0.63, 0.72, 0.70, 0.60])
REQUIRED = np.array([2.0, 2.0, 2.2, 2.8, 3.8, 5.0])


def invented(**changes: object) -> WaterCurve:
    """A pump of 120 m³/h and 41 m."""
    columns = {"efficiency": EFFICIENCY, "npsh_required": REQUIRED, "speed": SPEED} | changes
    return WaterCurve(FLOW, HEAD, **columns)  # type: ignore[arg-type]


@st.composite
def pumps(draw: st.DrawFn) -> WaterCurve:
    """A pump of random size, shape and speed, up to a head that droops a little near shut-off."""
    points = draw(st.integers(4, 9))
    share = np.linspace(0.0, 1.0, points)
    fall, droop = draw(st.floats(0.1, 0.9)), draw(st.floats(0.0, 0.2))
    shape = 1.0 + droop * np.sin(np.pi * np.minimum(share / 0.4, 1.0)) - fall * share**2
    peak = draw(st.floats(0.4, 0.85))
    efficiency = 0.75 * (1.0 - ((share - 0.7) / 0.7) ** 2) * peak / 0.85
    flow, head = draw(st.floats(5.0, 500.0)) / 3600, draw(st.floats(8.0, 100.0))
    speed = draw(st.floats(500.0, 3000.0)) * RPM
    return WaterCurve(flow * share, head * shape, np.maximum(efficiency, 0.0), 2.0 + 3.0 * share, speed)


@st.composite
def slurries(draw: st.DrawFn) -> Rheology:
    """A fluid of one of the models."""
    stress, k = draw(st.floats(0.0, 80.0)), 10.0 ** draw(st.floats(-3.0, 0.5))
    index = draw(st.floats(0.2, 1.2))
    return draw(
        st.sampled_from([Newtonian(k), PowerLaw(k, index), Bingham(stress, k), HerschelBulkley(stress, k, index)])
    )
