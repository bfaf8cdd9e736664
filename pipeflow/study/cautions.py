"""What an engineer must be told beside the numbers; the same words for several pipes are said once."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from pipeflow.case.model import Case
from pipeflow.friction import PipeFlow, Regime, Status, solve_pipes
from pipeflow.friction.methods import turbulent_method
from pipeflow.line.catalogue import MATERIALS
from pipeflow.line.elements import Pipe
from pipeflow.line.fittings import ENDS
from pipeflow.line.route import LineFlow
from pipeflow.operability.transition import criteria_caution, flat_band_caution, transition_cautions
from pipeflow.operability.validity import range_cautions, tested_rate_cautions
from pipeflow.study.flows import distinct_flows, one_pipe, pipes_of
from pipeflow.study.result import ElementResult


def cautions(case: Case, line: LineFlow, elements: tuple[ElementResult, ...]) -> Iterator[str]:
    """Every caution of a solved case, those about its input first."""
    yield from _about_input(case)
    names_by_text: dict[str, list[str]] = {}
    for name, text in _about_pipes(case, line, elements):
        names = names_by_text.setdefault(text, [])
        if name not in names:
            names.append(name)
    for text, names in names_by_text.items():
        yield f"{', '.join(names)}: {text}"


def _about_input(case: Case) -> Iterator[str]:
    if case.assumed:
        yield f"assumed, not measured: {', '.join(case.assumed)}"
    for material in dict.fromkeys(case.default_roughness.values()):
        names = [pipe for pipe, of in case.default_roughness.items() if of == material]
        roughness = MATERIALS[material].roughness * 1e3
        yield f"{', '.join(names)}: roughness {roughness:g} mm, of new {material}, is assumed"
    named = {key for pipe in pipes_of(case) for key in pipe.fittings}
    if case.source and case.destination and not named & ENDS:
        yield "the line joins two vessels, but no entrance or exit loss is among its fittings"
    if case.flow.design == 0:
        yield "at rest: the losses shown are those that must be overcome before anything moves"
    if case.pumps:
        yield "the pumps of the case are read, but not yet set against the system curve"


def _about_pipes(case: Case, line: LineFlow, elements: tuple[ElementResult, ...]) -> Iterator[tuple[str, str]]:
    results = [element for element in elements if element.kind == "pipe"]
    for index, (pipe, result) in enumerate(zip(pipes_of(case), results, strict=True)):
        at = {
            name: (float(line.velocity[flow, index]), one_pipe(line, flow, index))
            for flow, name in enumerate(distinct_flows(case))
            if line.pipes.status[flow, index] == Status.CONVERGED
        }
        for text in _about_pipe(case, pipe, at, result):
            yield pipe.name, text


def _about_pipe(case: Case, pipe: Pipe, at: dict[str, tuple[float, PipeFlow]], result: ElementResult) -> Iterator[str]:
    if not at:
        return
    flows = [flow for _, flow in at.values()]
    yield from transition_cautions(at)
    yield from criteria_caution(
        [velocity for velocity, _ in at.values()], result.critical_velocity_lowest, result.critical_velocity_highest
    )
    if any(flow.regime == Regime.TRANSITIONAL for flow in flows):
        yield from _flat_band(case, pipe, flows[0])
    source = turbulent_method(case.fluid.rheology, case.methods.turbulent).source
    for flow in flows:
        if flow.regime == Regime.TURBULENT:
            yield from range_cautions(source, _variables(pipe, flow))
    if case.tested_shear_rate:
        rates = [float(flow.wall_shear_rate) for flow in flows]
        yield from tested_rate_cautions(min(rates), max(rates), case.tested_shear_rate)


def _variables(pipe: Pipe, flow: PipeFlow) -> dict[str, float]:
    """The variables that ranges of methods are given in."""
    return {
        "Re_MR": float(flow.reynolds_mr),
        "n'": float(flow.local_flow_index),
        "eps/D": float(pipe.roughness / pipe.diameter),
    }


def _flat_band(case: Case, pipe: Pipe, flow: PipeFlow) -> Iterator[str]:
    edges = np.array([flow.critical_velocity, flow.turbulent_velocity])
    stresses = solve_pipes(
        edges,
        pipe.diameter,
        case.fluid.density,
        case.fluid.rheology,
        roughness=pipe.roughness,
        method=case.methods.turbulent,
        critical=case.methods.critical,
        particle_size=case.particle_size,
    ).wall_shear_stress
    yield from flat_band_caution(edges, stresses)
