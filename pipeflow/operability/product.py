"""What the line does to the product: shear at the wall, heat of friction."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from pipeflow.operability.limits import at_most, not_checked
from pipeflow.operability.state import LineState
from pipeflow.sources import Source
from pipeflow.verdict import Check

HEATING = Source(
    key="viscous-heating",
    title="Rise of temperature by friction, no heat lost",
    citation="energy balance: dT = dp/(rho c_p)",
    confidence="exact",
)
RISE_UNTOLD = 5.0
"""Rise beyond which figures at one temperature no longer hold, K (common practice)."""


def shear_checks(state: LineState, rate: float | None, stress: float | None) -> Iterator[Check]:
    """Hold shear rate, 1/s, and stress, Pa, at the wall to their limits at maximum flow."""
    at = state.maximum
    pipes, upper = state.line.pipes, state.stress_upper[at]
    for name, unit, limit, central, highest in (
        ("wall_shear_rate", "1/s", rate, pipes.wall_shear_rate[at], state.fluid.rheology.shear_rate(upper)),
        ("wall_shear_stress", "Pa", stress, pipes.wall_shear_stress[at], upper),
    ):
        if limit is not None:
            worst = int(np.asarray(highest).argmax())
            most = max(float(highest[worst]), float(central[worst]))
            yield at_most(name, float(central[worst]), most, limit, unit, state.named(worst, "maximum"))


def heating_check(state: LineState, specific_heat: float | None, limit: float | None) -> Check | None:
    """Hold the heat of friction at maximum flow to its limit, K; without one, more than a few kelvin is a caution."""
    if specific_heat is None:
        basis = "rise of temperature by friction"
        if limit is None:
            return None
        return not_checked("temperature_rise", ("fluid.specific_heat",), "K", basis, None, HEATING.key)
    heat = state.density * specific_heat
    central, upper = (
        float(loss[state.maximum]) / heat for loss in (state.line.pressure_loss, state.line.pressure_loss_upper)
    )
    basis = "by friction from end to end at maximum flow, no heat lost"
    if limit is not None:
        return at_most("temperature_rise", central, upper, limit, "K", basis, HEATING.key)
    said = f"{basis}; no limit is stated: beyond 5 K figures at one temperature do not hold, common practice"
    found = at_most("temperature_rise", central, upper, RISE_UNTOLD, "K", said, HEATING.key)
    return found if found.status == "ok" else replace(found, status="caution")
