"""The states a line must be pumped in: as designed, in every scenario, full of water, and set going after a stop."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields, replace
from typing import Any

import numpy as np

from pipeflow.case.model import Case, Liquid, Methods, Restart
from pipeflow.line.elements import Fluid
from pipeflow.rheology import Newtonian
from pipeflow.study.checks import state_of, stopped_line
from pipeflow.study.flows import line_at
from pipeflow.study.pumping.result import Kind

OWN = "the case"
WATER = "water"
RESTART = "restart after a stop"
WATER_DENSITY = 998.2
WATER_VISCOSITY = 1.002e-3
WATER_VAPOUR_PRESSURE = 2339.0
"""Of water at 20 °C, kg/m³, Pa.s, Pa absolute (IAPWS-95, from memory)."""


def conditions(case: Case) -> Iterator[tuple[str, Kind, Case]]:
    """Name each state, say of what kind it is, and give the case it makes; water and restart where there are pumps."""
    yield OWN, "case", case
    for name, scenario in case.scenarios.items():
        yield name, "scenario", scenario
    if case.pumps:
        taken = set(case.scenarios)
        yield _free(WATER, taken), "water", of_water(case)
        restarted = hardest_restart(case)
        if restarted is not None:
            yield _free(RESTART, taken), "restart", restarted


def _free(name: str, taken: set[str]) -> str:
    """Keep an automatic name apart from those the case gives its scenarios."""
    return f"{name} (automatic)" if name in taken else name


def of_water(case: Case) -> Case:
    """The line full of water at 20 °C: started up, flushed, or tested."""
    return replace(
        case,
        fluid=Fluid(WATER_DENSITY, Newtonian(WATER_VISCOSITY)),
        solids=None,
        liquid=Liquid(WATER_DENSITY, WATER_VISCOSITY, WATER_VAPOUR_PRESSURE),
        methods=Methods(fittings=case.methods.fittings),
        restart=Restart(pump_after=case.restart.pump_after),
        followed=(),
        scenarios={},
    )


def restart_pressure(case: Case) -> float | None:
    """Pressure the pump must add to set the full line going, the factor in it, Pa; None where nothing gels."""
    stopped = stopped_line(case)
    if stopped is None or stopped.static_yield_stress <= 0:
        return None
    flows = np.array([case.flow.design, case.flow.minimum, case.flow.maximum])
    return stopped.required(state_of(case, line_at(case, flows)))


def hardest_restart(case: Case) -> Case | None:
    """Of case and scenarios the one whose gel asks for most, with the static yield stress and its factor.

    A law without a yield stress of its own among its parameters is kept as it is.
    """
    asked = [(pressure, one) for one in (case, *case.scenarios.values()) if (pressure := restart_pressure(one))]
    if not asked:
        return None
    hardest = max(asked, key=lambda pair: pair[0])[1]
    stopped = stopped_line(hardest)
    if stopped is None or not is_gelled(hardest):
        return replace(hardest, scenarios={})
    parameters: dict[str, Any] = {"yield_stress": stopped.factor * stopped.static_yield_stress}
    gelled = replace(hardest.fluid.rheology, **parameters)  # type: ignore[type-var]
    rested = replace(hardest.restart, static_yield_stress=stopped.static_yield_stress, factor=stopped.factor)
    return replace(hardest, fluid=replace(hardest.fluid, rheology=gelled), restart=rested, scenarios={})


def is_gelled(case: Case) -> bool:
    """Whether the law of a case can take the static yield stress for its own."""
    return "yield_stress" in {field.name for field in fields(case.fluid.rheology)}  # type: ignore[arg-type]
