"""The flows a case is solved at, and one pipe picked out of a solved line."""

from __future__ import annotations

from dataclasses import fields
from typing import Protocol

from pipeflow.arrays import FloatOrArray
from pipeflow.case.model import Case, Methods
from pipeflow.friction import PipeFlow
from pipeflow.line import route
from pipeflow.line.elements import Element, Fluid, Pipe, Vessel
from pipeflow.line.route import LineFlow
from pipeflow.rheology import mixture

DESIGN, MINIMUM, MAXIMUM = 0, 1, 2
FLOW_NAMES = ("design flow", "minimum flow", "maximum flow")


class LineInputs(Protocol):
    """What holds a line: a case, or one some of whose inputs are arrays."""

    @property
    def fluid(self) -> Fluid:
        """What flows."""

    @property
    def route(self) -> tuple[Element, ...]:
        """The elements, in flow order."""

    @property
    def source(self) -> Vessel | None:
        """Where it comes from."""

    @property
    def destination(self) -> Vessel | None:
        """Where it goes."""

    @property
    def particle_size(self) -> FloatOrArray:
        """The d85 of the solids, m; nan where it is not known."""


def solved(
    line: LineInputs, methods: Methods, flow: FloatOrArray, *, with_edges: bool = True, with_upper: bool = True
) -> LineFlow:
    """Solve a line at these flows, m³/s, by the methods asked for, as :func:`pipeflow.line.route.solve` does."""
    return route.solve(
        flow,
        line.fluid,
        line.route,
        line.source,
        line.destination,
        turbulent=methods.turbulent,
        critical=methods.critical,
        fittings=methods.fittings,
        particle_size=line.particle_size,
        with_edges=with_edges,
        with_upper=with_upper,
    )


def line_at(case: Case, flow: FloatOrArray, *, with_edges: bool = True, with_upper: bool = True) -> LineFlow:
    """Solve the line of a case at these flows, m³/s; what it is solved with as :func:`pipeflow.line.route.solve`."""
    return solved(case, case.methods, flow, with_edges=with_edges, with_upper=with_upper)


def distinct_flows(case: Case) -> tuple[str, ...]:
    """Names of the flows to speak of: a case with one flow has one."""
    return FLOW_NAMES[:1] if case.flow.minimum == case.flow.maximum else FLOW_NAMES


def pipes_of(case: Case) -> list[Pipe]:
    """The pipes of the route, in flow order."""
    return [element for element in case.route if isinstance(element, Pipe)]


def one_pipe(line: LineFlow, flow: int, pipe: int) -> PipeFlow:
    """Pick one pipe at one of the flows."""
    return PipeFlow(*(getattr(line.pipes, field.name)[flow, pipe] for field in fields(PipeFlow)))


def dry_solids_flow(case: Case) -> float | None:
    """Dry solids at design flow, kg/s; None where the case names no solids."""
    if case.solids is None:
        return None
    return float(mixture.dry_solids_flow(case.flow.design, case.solids.mass_fraction, case.fluid.density))


def pump_position(case: Case) -> int:
    """Number of elements before the pump."""
    if case.pump_place is not None:
        return case.pump_place.position
    names = [element.name for element in case.route]
    after = case.restart.pump_after
    return 0 if after is None else names.index(after) + 1


def element_before_pump(case: Case) -> str | None:
    """Name of the element just before the pump; None where the pump stands at the start of the route."""
    position = pump_position(case)
    return case.route[position - 1].name if position else None
