"""What an engineer must be told beside the numbers; the same words for several pipes are said once."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from pipeflow.case.model import Case
from pipeflow.friction import PipeFlow, Regime, Status, solve_pipes
from pipeflow.friction.methods import critical_criterion, turbulent_method
from pipeflow.line.catalogue import MATERIALS
from pipeflow.line.elements import Fluid, Pipe
from pipeflow.line.fittings import DEFAULT_METHOD, ENDS, METHODS, fittings, notes
from pipeflow.line.losses import EXPANSION
from pipeflow.line.route import LineFlow
from pipeflow.operability.transition import criteria_caution, flat_band_caution, transition_cautions
from pipeflow.operability.validity import range_cautions, tested_rate_cautions
from pipeflow.rheology import Casson, HerschelBulkley
from pipeflow.rheology.models import GeneralizedPowerLaw
from pipeflow.sources import Source
from pipeflow.study.flows import distinct_flows, one_pipe, pipes_of
from pipeflow.study.result import ElementResult, ProfileResult


def cautions(case: Case, line: LineFlow, elements: tuple[ElementResult, ...], profile: ProfileResult) -> Iterator[str]:
    """Every caution of a solved case, those about its input first."""
    yield from _about_input(case)
    yield from _about_profile(profile)
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
        new = "new stainless tube" if material == "sanitary" else f"new {material} pipe"
        yield f"{', '.join(names)}: roughness {roughness:g} mm, of {new}, is assumed"
    named = {key for pipe in pipes_of(case) for key in pipe.fittings}
    if case.source and case.destination and not named & ENDS:
        yield "the line joins two vessels, but no entrance or exit loss is among its fittings"
    if case.flow.design == 0:
        yield "at rest: the losses shown are the limit as the flow starts, what a yield stress holds back"
    yield from notes(sorted(named), case.methods.fittings or DEFAULT_METHOD)


def _about_profile(profile: ProfileResult) -> Iterator[str]:
    slack = profile.slack_upper
    if slack and slack.share:
        by = "a vacuum, which no line can hold" if profile.slack_by_vacuum else "the pressure of the vapour"
        places, governing = ", ".join(slack.share), slack.governed_by
        yield (
            f"slack flow: {places} partly filled behind {governing}, where the pressure would fall below {by}; the "
            f"pump must give {slack.head_required:.4g} m, not {slack.head_without:.4g} m; nothing is recovered after it"
        )
    elif profile.pump_head_upper < 0:
        spare = -profile.pump_head_upper
        yield f"the line runs by gravity: {spare:.4g} m must be throttled at this flow, or it runs faster"
    if slack is None and profile.lowest_pressure < 0:
        lowest, keys = profile.lowest_pressure / 1e3, " and ".join(profile.needed_for_slack)
        yield (
            f"the pressure falls to {lowest:.3g} kPa gauge at {profile.lowest_pressure_at}; slack flow and boiling are "
            f"not checked: give {keys}"
        )


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
    for source, regimes in _sources_with_ranges(case, pipe):
        for flow in flows:
            if flow.regime in regimes:
                yield from range_cautions(source, _variables(case, pipe, flow))
    if case.tested_shear_rate:
        rates = [float(flow.wall_shear_rate) for flow in flows]
        yield from tested_rate_cautions(min(rates), max(rates), case.tested_shear_rate)


def _sources_with_ranges(case: Case, pipe: Pipe) -> Iterator[tuple[Source, tuple[Regime, ...]]]:
    """Methods in use in a pipe, and the regimes in which their ranges matter."""
    moving = (Regime.LAMINAR, Regime.TRANSITIONAL, Regime.TURBULENT)
    yield turbulent_method(case.fluid.rheology, case.methods.turbulent).source, (Regime.TURBULENT,)
    yield critical_criterion(case.fluid.rheology, case.methods.critical).source, moving
    pipes = pipes_of(case)
    after = pipes.index(pipe) + 1
    if after < len(pipes) and pipes[after].diameter > pipe.diameter:
        yield EXPANSION, moving
    preferred = case.methods.fittings or DEFAULT_METHOD
    for key in pipe.fittings:
        bounds = tuple(fittings()[key].ranges(preferred))
        if bounds:
            yield replace(METHODS[preferred], key=f"{preferred} for {key}", ranges=bounds), moving


def _variables(case: Case, pipe: Pipe, flow: PipeFlow) -> dict[str, float]:
    """The variables that ranges of methods are given in; n' where the flow is, at the wall stress it has."""
    variables = {
        "Re_MR": float(flow.reynolds_mr),
        "n'": float(flow.wall_flow_index),
        "eps/D": float(pipe.roughness / pipe.diameter),
    }
    number = hedstrom_number(case.fluid, pipe)
    return variables if number is None else {**variables, "He": number}


def hedstrom_number(fluid: Fluid, pipe: Pipe) -> float | None:
    """``(rho D²/tau_y)(tau_y/K)^(2/n)``, with n = 1 for a Casson fluid; None for a law that has no such number."""
    law = fluid.rheology
    if isinstance(law, Casson):
        law = HerschelBulkley(law.yield_stress, law.casson_viscosity, 1.0)
    if not isinstance(law, GeneralizedPowerLaw) or not law.yield_stress:
        return None
    full = law.as_herschel_bulkley()
    strain = (full.yield_stress / full.consistency) ** (2.0 / full.flow_index)
    return float(fluid.density * pipe.diameter**2 / full.yield_stress * strain)


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
