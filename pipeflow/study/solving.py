"""One case, one result: everything computed for a page, nothing printed."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, fields

import numpy as np

from pipeflow.case.model import Case
from pipeflow.friction import PipeFlow, Regime, Status, solve_pipes
from pipeflow.friction.laminar import BUCKINGHAM_REINER, HAGEN_POISEUILLE, METZNER_REED, RABINOWITSCH_MOONEY
from pipeflow.friction.methods import critical_criterion, turbulent_method
from pipeflow.friction.transition import TRANSITION_LINE
from pipeflow.line import route
from pipeflow.line.catalogue import MATERIALS
from pipeflow.line.elements import Equipment, Pipe
from pipeflow.line.fittings import DEFAULT_METHOD, ENDS, METHODS, fittings
from pipeflow.line.route import LineFlow
from pipeflow.operability.limits import at_least, at_most
from pipeflow.operability.transition import flat_band_caution, transition_cautions
from pipeflow.operability.validity import range_cautions, tested_rate_cautions
from pipeflow.rheology import Rheology
from pipeflow.sources import Source
from pipeflow.verdict import Check

DESIGN, MINIMUM, MAXIMUM = 0, 1, 2
FLOW_NAMES = ("design flow", "minimum flow", "maximum flow")

SAFETY_NOTICE = (
    "A pressurised slurry line can hurt people. A blocked or stopped line may need far more pressure to restart than to "
    "run, and may hold pressure after the pump stops: fit relief, isolation and a way to depressurise, and prove it "
    "empty before opening it. Hot or corrosive contents need their own precautions. These figures are an aid to "
    "design: local codes and the judgement of a licensed engineer take precedence."
)


@dataclass(frozen=True)
class ElementResult:
    """One element at design flow, SI units; None where a figure has no meaning for the element or the flow."""

    name: str
    kind: str
    rise: float = 0.0
    friction_loss: float = 0.0
    friction_loss_upper: float = 0.0
    fitting_loss: float = 0.0
    equipment_loss: float = 0.0
    size: str | None = None
    diameter: float | None = None
    length: float | None = None
    roughness: float | None = None
    velocity: float | None = None
    regime: str | None = None
    method: str | None = None
    reynolds_mr: float | None = None
    reynolds_critical: float | None = None
    critical_velocity: float | None = None
    turbulent_velocity: float | None = None
    friction_factor_fanning: float | None = None
    wall_shear_stress: float | None = None
    wall_shear_rate: float | None = None
    local_flow_index: float | None = None


@dataclass(frozen=True)
class Totals:
    """The line at design flow: losses in Pa, heads in metres of the slurry."""

    friction_loss: float
    friction_loss_upper: float
    fitting_loss: float
    equipment_loss: float
    head_loss: float
    head_loss_upper: float
    static_head: float
    total_head: float
    total_head_upper: float
    pressure_required: float
    pressure_required_upper: float


@dataclass(frozen=True)
class MethodUse:
    """A published method that the result rests on, and what for."""

    source: Source
    used_for: str


@dataclass(frozen=True)
class Result:
    """What is known of one case.

    ``fails`` tells whether a check fails, here or in a scenario.
    """

    case: Case
    elements: tuple[ElementResult, ...]
    totals: Totals
    checks: tuple[Check, ...]
    cautions: tuple[str, ...]
    methods: tuple[MethodUse, ...]
    scenarios: dict[str, Result]

    @property
    def fails(self) -> bool:
        """A check fails, of the case itself or of one of its scenarios."""
        return any(check.status == "fail" for check in self.checks) or any(
            result.fails for result in self.scenarios.values()
        )


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
    flows = np.array([case.flow.design, case.flow.minimum, case.flow.maximum])
    line = route.solve(
        flows,
        case.fluid,
        case.route,
        case.source,
        case.destination,
        turbulent=case.methods.turbulent,
        critical=case.methods.critical,
        fittings=case.methods.fittings,
    )
    elements = tuple(_elements(case, line))
    return Result(
        case=case,
        elements=elements,
        totals=_totals(line),
        checks=tuple(_checks(case, line)),
        cautions=tuple(dict.fromkeys(_cautions(case, line))),
        methods=tuple(_methods(case, elements)),
        scenarios={name: solve(scenario) for name, scenario in case.scenarios.items()},
    )


def _elements(case: Case, line: LineFlow) -> Iterator[ElementResult]:
    pipes = equipment = 0
    for element in case.route:
        if isinstance(element, Equipment):
            loss = np.broadcast_to(line.equipment_loss, (3, line.equipment_loss.shape[-1]))[DESIGN, equipment]
            yield ElementResult(element.name, "equipment", equipment_loss=float(loss))
            equipment += 1
        else:
            yield _pipe(case, element, line, pipes)
            pipes += 1


def _pipe(case: Case, pipe: Pipe, line: LineFlow, index: int) -> ElementResult:
    flow = _one(line, DESIGN, index)
    velocity = float(line.velocity[DESIGN, index])
    dynamic = case.fluid.density * velocity**2 / 2.0
    return ElementResult(
        name=pipe.name,
        kind="pipe",
        rise=float(pipe.rise),
        friction_loss=float(line.friction_loss[DESIGN, index]),
        friction_loss_upper=float(line.friction_loss_upper[DESIGN, index]),
        fitting_loss=float(line.fitting_loss[DESIGN, index]),
        size=case.sizes.get(pipe.name),
        diameter=float(pipe.diameter),
        length=float(pipe.length),
        roughness=float(pipe.roughness),
        velocity=velocity,
        regime=Regime(int(flow.regime)).name.lower().replace("_", " "),
        method=_method_key(case, Regime(int(flow.regime))),
        reynolds_mr=float(flow.reynolds_mr),
        reynolds_critical=_number(flow.reynolds_critical),
        critical_velocity=_number(flow.critical_velocity),
        turbulent_velocity=_number(flow.turbulent_velocity),
        friction_factor_fanning=_number(flow.wall_shear_stress / dynamic) if dynamic else None,
        wall_shear_stress=_number(flow.wall_shear_stress),
        wall_shear_rate=_number(flow.wall_shear_rate),
        local_flow_index=_number(flow.local_flow_index),
    )


def _number(value: np.ndarray) -> float | None:
    return float(value) if np.isfinite(value) else None


def _one(line: LineFlow, flow: int, pipe: int) -> PipeFlow:
    """Pick one pipe at one flow."""
    return PipeFlow(*(getattr(line.pipes, field.name)[flow, pipe] for field in fields(PipeFlow)))


def _laminar_source(rheology: Rheology) -> Source:
    known = {"newtonian": HAGEN_POISEUILLE, "bingham": BUCKINGHAM_REINER}
    return known.get(rheology.key, RABINOWITSCH_MOONEY)


def _method_key(case: Case, regime: Regime) -> str:
    rheology = case.fluid.rheology
    if regime == Regime.TURBULENT:
        return turbulent_method(rheology, case.methods.turbulent).source.key
    return TRANSITION_LINE.key if regime == Regime.TRANSITIONAL else _laminar_source(rheology).key


def _totals(line: LineFlow) -> Totals:
    each_pipe_or_equipment = ("friction_loss", "friction_loss_upper", "fitting_loss", "equipment_loss")
    return Totals(**{
        field.name: float(getattr(line, field.name)[DESIGN].sum() if field.name in each_pipe_or_equipment
                          else getattr(line, field.name)[DESIGN])
        for field in fields(Totals)
    })  # fmt: skip


def _checks(case: Case, line: LineFlow) -> Iterator[Check]:
    limits = case.limits
    highest = f"at maximum flow, {case.flow.maximum * 3600.0:.4g} m3/h"
    if np.any(line.pipes.status == Status.NO_ROOT):
        yield Check("solution", "fail", None, None, "", "no wall shear stress was found for some pipe and flow")
    for name, unit, limit, central, upper in (
        ("head_loss", "m", limits.head_loss, line.head_loss, line.head_loss_upper),
        ("pressure_loss", "Pa", limits.pressure_loss, line.pressure_loss, line.pressure_loss_upper),
    ):
        if limit is not None:
            yield at_most(name, float(central[MAXIMUM]), float(upper[MAXIMUM]), limit, unit, highest)
    velocity = line.velocity
    if limits.velocity_minimum is not None and velocity.shape[-1]:
        slowest = int(velocity[MINIMUM].argmin())
        basis = f"at minimum flow, {case.flow.minimum * 3600.0:.4g} m3/h, in {_pipes(case)[slowest].name}"
        yield at_least("velocity_minimum", float(velocity[MINIMUM, slowest]), limits.velocity_minimum, "m/s", basis)
    if limits.velocity_maximum is not None and velocity.shape[-1]:
        fastest = int(velocity[MAXIMUM].argmax())
        value = float(velocity[MAXIMUM, fastest])
        basis = f"{highest}, in {_pipes(case)[fastest].name}"
        yield at_most("velocity_maximum", value, value, limits.velocity_maximum, "m/s", basis)


def _pipes(case: Case) -> list[Pipe]:
    return [element for element in case.route if isinstance(element, Pipe)]


def _cautions(case: Case, line: LineFlow) -> Iterator[str]:
    yield from _input_cautions(case)
    for index, pipe in enumerate(_pipes(case)):
        at = {
            name: (float(line.velocity[flow, index]), _one(line, flow, index))
            for flow, name in enumerate(_distinct_flows(case))
            if line.pipes.status[flow, index] == Status.CONVERGED
        }
        if not at:
            continue
        yield from transition_cautions(pipe.name, at)
        yield from _flat_band(case, pipe, [flow for _, flow in at.values()])
        yield from _range_cautions(case, pipe, [flow for _, flow in at.values()])


def _distinct_flows(case: Case) -> tuple[str, ...]:
    """Names of the flows to speak of; a case with one flow has one."""
    return FLOW_NAMES[:1] if case.flow.minimum == case.flow.maximum else FLOW_NAMES


def _input_cautions(case: Case) -> Iterator[str]:
    pipes = _pipes(case)
    for material in dict.fromkeys(case.default_roughness.values()):
        names = [pipe for pipe, of in case.default_roughness.items() if of == material]
        roughness = MATERIALS[material].roughness * 1e3
        yield f"roughness {roughness:g} mm, of new {material}, is assumed for {', '.join(names)}"
    named = {key for pipe in pipes for key in pipe.fittings}
    if case.source and case.destination and not named & ENDS:
        yield "the line joins two vessels, but no entrance or exit loss is among its fittings"
    if case.flow.design == 0:
        yield "at rest: the losses shown are those that must be overcome before anything moves"
    if case.pumps:
        yield "the pumps of the case are read, but not yet set against the system curve"


def _flat_band(case: Case, pipe: Pipe, flows: list[PipeFlow]) -> list[str]:
    inside = [flow for flow in flows if flow.regime == Regime.TRANSITIONAL]
    if not inside:
        return []
    edges = np.array([inside[0].critical_velocity, inside[0].turbulent_velocity])
    at_edges = solve_pipes(
        edges, pipe.diameter, case.fluid.density, case.fluid.rheology,
        roughness=pipe.roughness, method=case.methods.turbulent, critical=case.methods.critical,
    ).wall_shear_stress  # fmt: skip
    return flat_band_caution(pipe.name, (edges[0], edges[1]), (at_edges[0], at_edges[1]))


def _range_cautions(case: Case, pipe: Pipe, flows: list[PipeFlow]) -> Iterator[str]:
    source = turbulent_method(case.fluid.rheology, case.methods.turbulent).source
    for flow in flows:
        if flow.regime == Regime.TURBULENT:
            values = {
                "Re_MR": float(flow.reynolds_mr),
                "n'": float(flow.local_flow_index),
                "eps/D": float(pipe.roughness / pipe.diameter),
            }
            yield from range_cautions(pipe.name, source, values)
    rates = [float(flow.wall_shear_rate) for flow in flows]
    if case.tested_shear_rate:
        yield from tested_rate_cautions(pipe.name, min(rates), max(rates), case.tested_shear_rate)


def _methods(case: Case, elements: tuple[ElementResult, ...]) -> Iterator[MethodUse]:
    rheology = case.fluid.rheology
    pipes = [element for element in elements if element.kind == "pipe"]
    if pipes:
        yield MethodUse(METZNER_REED, "Reynolds number and local index")
        yield MethodUse(critical_criterion(rheology, case.methods.critical).source, "end of laminar flow")
    for key, source, used_for in (
        ("laminar", _laminar_source(rheology), "friction in laminar flow"),
        ("transitional", TRANSITION_LINE, "friction in the transition"),
        (
            "turbulent",
            turbulent_method(rheology, case.methods.turbulent).source,
            "friction in turbulent flow",
        ),
    ):
        names = [pipe.name for pipe in pipes if pipe.regime == key or pipe.regime == "transitional"]
        if names:
            yield MethodUse(source, f"{used_for}: {', '.join(names)}")
    preferred = case.methods.fittings or DEFAULT_METHOD
    used = {key for pipe in _pipes(case) for key in pipe.fittings}
    for method in METHODS.values():
        keys = sorted(key for key in used if fittings()[key].method(preferred) is method)
        if keys:
            yield MethodUse(method, ", ".join(keys))
