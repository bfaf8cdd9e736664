"""Solve a case: the line at its flows, its limits, its cautions, the methods behind it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields
from itertools import pairwise

import numpy as np

from pipeflow.arrays import Array, known
from pipeflow.case.model import Case
from pipeflow.friction import Regime
from pipeflow.friction.laminar import BUCKINGHAM_REINER, HAGEN_POISEUILLE, METZNER_REED, RABINOWITSCH_MOONEY
from pipeflow.friction.methods import critical_criterion, turbulent_method
from pipeflow.friction.solver import critical_velocities
from pipeflow.friction.transition import TRANSITION_LINE
from pipeflow.line.elements import Equipment, Pipe
from pipeflow.line.fittings import DEFAULT_METHOD, EXIT, METHODS, fittings
from pipeflow.line.kinetics import KINETIC_FACTORS
from pipeflow.line.losses import CONTRACTION, EXPANSION
from pipeflow.line.route import LineFlow
from pipeflow.rheology import Rheology
from pipeflow.sources import Source
from pipeflow.study.cautions import cautions
from pipeflow.study.checks import checks
from pipeflow.study.flows import DESIGN, line_at, one_pipe, pipes_of
from pipeflow.study.profile import profile_of
from pipeflow.study.readings.answers import rheology_answers, rheology_cautions, rheology_checks, rheology_methods
from pipeflow.study.result import ElementResult, MethodSpread, MethodUse, Result, Totals


def solve(case: Case) -> Result:
    """Solve a case and its scenarios.

    Parameters
    ----------
    case : Case

    Returns
    -------
    Result
        Elements and totals at design flow; checks and cautions over the minimum, design and maximum flow.
    """
    flows = (case.flow.design, case.flow.minimum, case.flow.maximum)
    line = line_at(case, np.array(flows))
    elements = tuple(_elements(case, line))
    profile = profile_of(case, line)
    rheology = rheology_answers(case, line, flows)
    return Result(
        case=case,
        elements=elements,
        totals=_totals(line),
        spread=_spread(line, elements),
        profile=profile,
        checks=tuple(rheology_checks(rheology, checks(case, line))),
        cautions=(*rheology_cautions(case, rheology), *cautions(case, line, elements, profile)),
        methods=(*_methods(case, elements), *rheology_methods(case, rheology)),
        scenarios={name: solve(scenario) for name, scenario in case.scenarios.items()},
        rheology=rheology,
    )


def _elements(case: Case, line: LineFlow) -> Iterator[ElementResult]:
    band = _critical_band(case)
    pipe_indices = iter(range(line.velocity.shape[-1]))
    losses = iter(line.equipment_loss[DESIGN])
    for index, element in enumerate(case.route):
        yield from _pump(case, index)
        if isinstance(element, Equipment):
            yield ElementResult(element.name, "equipment", equipment_loss=float(next(losses)))
        else:
            yield _pipe(case, element, line, next(pipe_indices), band)
    yield from _pump(case, len(case.route))


def _pump(case: Case, index: int) -> Iterator[ElementResult]:
    """The pump, where the route has it before the element of this index."""
    if case.pump_place is not None and case.pump_place.position == index:
        yield ElementResult(case.pump_place.name, "pump")


def _critical_band(case: Case) -> Array:
    """Lowest and highest end of laminar flow of each pipe over the criteria, m/s."""
    pipes = pipes_of(case)
    if not pipes:
        return np.empty((2, 0))
    diameter = np.array([pipe.diameter for pipe in pipes])
    found = critical_velocities(diameter, case.fluid.density, case.fluid.rheology)
    each = np.stack(list(found.values()))
    return np.stack([np.fmin.reduce(each), np.fmax.reduce(each)])


def _pipe(case: Case, pipe: Pipe, line: LineFlow, index: int, band: Array) -> ElementResult:
    flow = one_pipe(line, DESIGN, index)
    velocity = float(line.velocity[DESIGN, index])
    dynamic_pressure = case.fluid.density * velocity**2 / 2.0
    regime = Regime(int(flow.regime))
    return ElementResult(
        name=pipe.name,
        kind="pipe",
        rise=float(pipe.rise),
        friction_loss=float(line.friction_loss[DESIGN, index]),
        friction_loss_upper=float(line.friction_loss_upper[DESIGN, index]),
        fitting_loss=float(line.fitting_loss[DESIGN, index]),
        reducer_loss=float(line.reducer_loss[DESIGN, index]),
        size=case.sizes.get(pipe.name),
        diameter=float(pipe.diameter),
        length=float(pipe.length),
        roughness=float(pipe.roughness),
        velocity=velocity,
        regime=regime.name.lower().replace("_", " "),
        method=_method_key(case, regime),
        reynolds_mr=float(flow.reynolds_mr),
        reynolds_critical=known(flow.reynolds_critical),
        critical_velocity=known(flow.critical_velocity),
        critical_velocity_lowest=known(band[0, index]),
        critical_velocity_highest=known(band[1, index]),
        turbulent_velocity=known(flow.turbulent_velocity),
        friction_factor_fanning=known(flow.wall_shear_stress / dynamic_pressure) if dynamic_pressure else None,
        wall_shear_stress=known(flow.wall_shear_stress),
        wall_shear_rate=known(flow.wall_shear_rate),
        local_flow_index=known(flow.local_flow_index),
    )


def _laminar_source(rheology: Rheology) -> Source:
    known = {"newtonian": HAGEN_POISEUILLE, "bingham": BUCKINGHAM_REINER}
    return known.get(rheology.key, RABINOWITSCH_MOONEY)


def _method_key(case: Case, regime: Regime) -> str:
    if regime == Regime.TURBULENT:
        return turbulent_method(case.fluid.rheology, case.methods.turbulent).source.key
    return TRANSITION_LINE.key if regime == Regime.TRANSITIONAL else _laminar_source(case.fluid.rheology).key


def _totals(line: LineFlow) -> Totals:
    """Sum what is laid out element by element, take the rest as it stands."""
    figures = {field.name: getattr(line, field.name)[DESIGN] for field in fields(Totals)}
    return Totals(**{name: float(figure.sum()) for name, figure in figures.items()})


def _spread(line: LineFlow, elements: tuple[ElementResult, ...]) -> MethodSpread:
    if not any(element.regime in ("turbulent", "transitional") for element in elements):
        return MethodSpread({}, {})
    found = {key: float(loss[DESIGN]) for key, loss in line.head_loss_by_method.items() if np.isfinite(loss[DESIGN])}
    return MethodSpread(found, line.left_out)


def _methods(case: Case, elements: tuple[ElementResult, ...]) -> Iterator[MethodUse]:
    rheology = case.fluid.rheology
    pipes = [element for element in elements if element.kind == "pipe"]
    if pipes:
        yield MethodUse(METZNER_REED, "Reynolds number and local index")
        yield MethodUse(critical_criterion(rheology, case.methods.critical).source, "end of laminar flow")
    turbulent = turbulent_method(rheology, case.methods.turbulent).source
    for regimes, source, used_for in (
        (("laminar", "transitional"), _laminar_source(rheology), "laminar friction"),
        (("transitional",), TRANSITION_LINE, "friction in the transition"),
        (("turbulent", "transitional"), turbulent, "turbulent friction"),
    ):
        names = [pipe.name for pipe in pipes if pipe.regime in regimes]
        if names:
            yield MethodUse(source, f"{used_for} in {', '.join(names)}")
    yield from _losses_by_bore(case)
    preferred = case.methods.fittings or DEFAULT_METHOD
    used = {key for pipe in pipes_of(case) for key in pipe.fittings}
    for method in METHODS.values():
        keys = sorted(key for key in used if fittings()[key].method(preferred) is method)
        if keys:
            yield MethodUse(method, ", ".join(keys))


def _losses_by_bore(case: Case) -> Iterator[MethodUse]:
    """Methods of the losses where the bore changes, and where the line ends in a vessel."""
    pipes = pipes_of(case)
    changes = list(pairwise(pipes))
    wider = [after.name for before, after in changes if after.diameter > before.diameter]
    narrower = [after.name for before, after in changes if after.diameter < before.diameter]
    if wider:
        yield MethodUse(EXPANSION, f"change of bore before {', '.join(wider)}")
    if narrower:
        yield MethodUse(CONTRACTION, f"change of bore before {', '.join(narrower)}")
    if wider or any(EXIT in pipe.fittings for pipe in pipes):
        yield MethodUse(KINETIC_FACTORS, "kinetic head lost at exits and expansions")
