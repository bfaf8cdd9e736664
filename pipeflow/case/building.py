"""What a case file says, as the frozen dataclasses the rest of the program works with."""

from __future__ import annotations

from pipeflow.case.fields import FlowValue
from pipeflow.case.model import Case, FlowRange, Limits, Methods, Pump
from pipeflow.case.schema import (
    CasePart,
    EquipmentPart,
    FlowPart,
    LimitsPart,
    ModelPart,
    PipePart,
    VesselPart,
)
from pipeflow.line.catalogue import INCH, MATERIALS
from pipeflow.line.elements import Element, Equipment, Fluid, Pipe, Vessel
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

_LAWS: dict[str, type[Rheology]] = {law.key: law for law in (Newtonian, PowerLaw, Bingham, HerschelBulkley, Casson)}


def build_case(part: CasePart, file: str) -> Case:
    """Make the case, without its scenarios, of a file found to be right."""
    density = part.fluid.density
    pipes = [element for element in part.route if isinstance(element, PipePart)]
    model = part.fluid.rheology
    return Case(
        file=file,
        title=part.title,
        revision=part.revision or "",
        notes=part.notes or "",
        fluid=Fluid(density, _law(model)),
        flow=_flow_range(part.flow, density),
        source=_vessel(part.source),
        destination=_vessel(part.destination),
        route=tuple(_element(element, density) for element in part.route),
        limits=_limits(part.limits),
        methods=Methods(**part.methods.model_dump()),
        sizes={pipe.pipe: pipe.size.name for pipe in pipes if pipe.size},
        default_roughness={pipe.pipe: _material(pipe) for pipe in pipes if pipe.roughness is None},
        tested_shear_rate=model.tested,
        pumps=tuple(Pump(**pump.model_dump()) for pump in part.pumps),
    )


def _law(part: ModelPart) -> Rheology:
    return _LAWS[part.model](**part.model_dump(exclude={"model", "tested"}))


def _flow_range(flow: FlowPart | FlowValue, density: float) -> FlowRange:
    if isinstance(flow, FlowValue):
        flow = FlowPart.model_construct(design=flow)
    design = flow.design.volume(density)
    minimum, maximum = (end.volume(density) if end else design for end in (flow.minimum, flow.maximum))
    return FlowRange(minimum, design, maximum)


def _vessel(part: VesselPart | None) -> Vessel | None:
    return None if part is None else Vessel(part.pressure, part.level)


def _element(part: PipePart | EquipmentPart, density: float) -> Element:
    if isinstance(part, EquipmentPart):
        at_flow = part.at_flow.volume(density) if part.at_flow else None
        exponent = 2.0 if part.exponent is None else part.exponent
        return Equipment(part.equipment, part.pressure_loss, at_flow, exponent)
    return Pipe(
        name=part.pipe,
        diameter=part.bore,
        length=part.length,
        rise=part.rise,
        roughness=MATERIALS[_material(part)].roughness if part.roughness is None else part.roughness,
        nominal_diameter=part.size.nominal_diameter if part.size else part.bore / INCH,
        fittings=part.fittings,
    )


def _material(part: PipePart) -> str:
    return part.size.material if part.size else part.material or "steel"


def _limits(part: LimitsPart) -> Limits:
    return Limits(part.head_loss, part.pressure_loss, part.velocity.minimum, part.velocity.maximum)
