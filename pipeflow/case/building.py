"""What a case file says, as the frozen dataclasses the rest of the program works with."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from pipeflow.case.fields import FlowValue
from pipeflow.case.flow_curve_part import FlowCurvePart
from pipeflow.case.fluid_part import FluidPart
from pipeflow.case.limits_part import LimitsPart
from pipeflow.case.model import (
    Case,
    Cost,
    FlowRange,
    Followed,
    Job,
    Limits,
    Liquid,
    Methods,
    Pump,
    Reciprocating,
    Restart,
    Site,
    Sizing,
    Solids,
)
from pipeflow.case.part import ASSUMED, InputPart, Part
from pipeflow.case.route_part import EquipmentPart, PipePart, PumpPlacePart
from pipeflow.case.schema import CasePart, FlowPart, VesselPart, pump_place
from pipeflow.line.catalogue import INCH, MATERIALS
from pipeflow.line.elements import Element, Equipment, Fluid, Pipe, Vessel
from pipeflow.operability.pressures import WallInputs
from pipeflow.rheology import mixture

if TYPE_CHECKING:
    from pipeflow.case.job_part import JobPart
    from pipeflow.case.pumps_part import PumpPart
    from pipeflow.case.sizing_part import CostPart, SizingPart


def build_case(part: CasePart, file: str) -> Case:
    """Make the case, without its scenarios, of a file found to be right."""
    density = part.fluid.slurry_density
    pipes = [element for element in part.route if isinstance(element, PipePart)]
    solids, rheology = _solids(part.fluid), part.fluid.rheology
    sheets = rheology.results if isinstance(rheology, FlowCurvePart) else ()
    return Case(
        file=file,
        title=part.title,
        revision=part.revision or "",
        notes=part.notes or "",
        fluid=Fluid(density, rheology.rheology(part.fluid.conditions)),
        flow=_flow_range(part.flow, density, solids),
        source=_vessel(part.source),
        destination=_vessel(part.destination),
        route=tuple(_element(element, density) for element in part.route if not isinstance(element, PumpPlacePart)),
        limits=_limits(part.limits),
        restart=Restart(**_inputs(part.restart)) if part.restart else Restart(),
        pipe_wall=WallInputs(**_inputs(part.pipe_wall)) if part.pipe_wall else None,
        sizing=_sizing(part.sizing) if part.sizing else Sizing(),
        methods=Methods(**_inputs(part.methods)),
        sizes={pipe.pipe: pipe.size.name for pipe in pipes if pipe.size},
        default_roughness={pipe.pipe: _material(pipe) for pipe in pipes if pipe.roughness is None},
        tested_shear_rate=rheology.tested,
        fitted=sheets[0] if len(sheets) == 1 else None,
        readings=rheology.files if isinstance(rheology, FlowCurvePart) else (),
        sheets=sheets,
        followed=tuple(_followed(part.fluid)),
        pumps=tuple(_pump(pump) for pump in part.pumps),
        pump_place=pump_place(part.route),
        lowest_level=part.source.lowest_level if part.source else None,
        job=_job(part.job),
        solids=solids,
        liquid=_liquid(part.fluid, solids),
        site=Site(**_inputs(part.site)) if part.site else None,
        temperature=part.fluid.temperature,
        specific_heat=part.fluid.specific_heat,
        hold_times={pipe.pipe: pipe.hold_time for pipe in pipes if pipe.hold_time},
        density_is_mixed=part.fluid.density is None,
        flow_given_as=_flow_given_as(part.flow),
        at_mass_flow=tuple(_at_mass_flow(part)),
        assumed=tuple(path for path, inputs in _inputs_by_path(part) if inputs.status == ASSUMED),
    )


def _inputs(part: Part, *apart: str) -> dict[str, Any]:
    """Give what a map says, but for its status and the keys that are read apart."""
    return {key: value for key, value in part if key not in ("status", *apart)}


def _job(part: JobPart | None) -> Job:
    given = _inputs(part) if part else {}
    return Job(**{key: text for key, text in given.items() if text is not None})


def _inputs_by_path(part: CasePart) -> Iterator[tuple[str, InputPart]]:
    """Give every map that may say where its inputs come from, by key path."""
    fluid = part.fluid
    named = {
        "fluid": fluid,
        "fluid.solids": fluid.solids,
        "fluid.liquid": fluid.liquid,
        "fluid.rheology": fluid.rheology,
        "flow": part.flow,
        "site": part.site,
        "source": part.source,
        "destination": part.destination,
        "restart": part.restart,
        "pipe_wall": part.pipe_wall,
        "sizing.cost": part.sizing and part.sizing.cost,
        **{f"route[{element.name}]": element for element in part.route},
        **{f"pumps[{pump.name}]": pump for pump in part.pumps},
    }
    yield from ((path, inputs) for path, inputs in named.items() if isinstance(inputs, InputPart))


def _solids(fluid: FluidPart) -> Solids | None:
    if fluid.solids is None:
        return None
    # a density stated a little off the mixed one must not make the two fractions contradict each other
    density = fluid.mixed_density or fluid.slurry_density
    fractions: dict[str, float | str] = {
        "fraction_given_by": "" if fluid.solids.volume_fraction is None else "volume",
        "mass_fraction": fluid.solids.of_the_mass(density),
        "volume_fraction": fluid.solids.of_the_volume(density),
    }
    return Solids(**_inputs(fluid.solids) | fractions)


def _followed(fluid: FluidPart) -> Iterator[Followed]:
    rheology, conditions = fluid.rheology, fluid.conditions
    if isinstance(rheology, FlowCurvePart):
        series = rheology.series
        laws = {name: fitted.law for name, fitted in series.laws.items()} if series else {}
    else:
        laws = {name: part.dependence() for name, part in rheology.laws.items()}
    for name, law in laws.items():
        condition = conditions.of(law.variable)
        assert condition is not None
        yield Followed(name, law, condition, float(law.value(condition)))


def _liquid(fluid: FluidPart, solids: Solids | None) -> Liquid | None:
    if fluid.liquid is None:
        return None
    liquid = Liquid(**_inputs(fluid.liquid))
    if liquid.density is None and solids is not None:
        left = float(mixture.liquid_density(solids.volume_fraction, solids.density, fluid.slurry_density))
        return replace(liquid, density=left)
    return liquid


def _flow_range(flow: FlowPart | FlowValue, density: float, solids: Solids | None) -> FlowRange:
    dry = flow.dry_solids if isinstance(flow, FlowPart) else None
    given = flow if dry is None else dry
    if isinstance(given, FlowValue):
        given = FlowPart.model_construct(design=given)
    share = solids.mass_fraction if dry is not None and solids is not None else 1.0
    ends = given.minimum or given.design, given.design, given.maximum or given.design
    return FlowRange(*(end.volume(density * share) for end in ends if end))


def _flow_given_as(flow: FlowPart | FlowValue) -> str:
    if isinstance(flow, FlowValue):
        return "mass" if flow.is_mass else ""
    if flow.dry_solids is not None:
        return "dry solids"
    return "mass" if flow.design is not None and flow.design.is_mass else ""


def _at_mass_flow(part: CasePart) -> Iterator[str]:
    equipment = (element for element in part.route if isinstance(element, EquipmentPart))
    yield from (element.name for element in equipment if element.at_flow is not None and element.at_flow.is_mass)


def _vessel(part: VesselPart | None) -> Vessel | None:
    return None if part is None else Vessel(**_inputs(part, "lowest_level"))


def _pump(part: PumpPart) -> Pump:
    speeds, impeller, motor = part.variable_speed, part.impeller, part.motor
    apart = ("variable_speed", "impeller", "motor", "reciprocating", "speed", "curve_speed")
    return Pump(
        table=part.table,
        speed=part.running_speed,
        curve_speed=part.curve_speed or part.speed,
        speed_minimum=speeds.minimum if speeds else None,
        speed_maximum=speeds.maximum if speeds else None,
        impeller_diameter=impeller.diameter if impeller else None,
        trimmed_diameter=impeller.trimmed_to if impeller else None,
        outlet_width=impeller.outlet_width if impeller else None,
        motor_power=motor.power if motor else None,
        motor_margin=motor.margin if motor else Pump.motor_margin,
        reciprocating=Reciprocating(**_inputs(part.reciprocating)) if part.reciprocating else None,
        **_inputs(part, *apart),
    )


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
        loss_coefficient=part.loss_coefficient,
    )


def _material(part: PipePart) -> str:
    return part.size.material if part.size else part.material or "steel"


def _limits(part: LimitsPart) -> Limits:
    beside = _inputs(part, "velocity")
    return Limits(velocity_minimum=part.velocity.minimum, velocity_maximum=part.velocity.maximum, **beside)


def _sizing(part: SizingPart) -> Sizing:
    return Sizing(
        series=part.series,
        smallest=part.smallest.name if part.smallest else None,
        largest=part.largest.name if part.largest else None,
        bores=(part.bores.minimum, part.bores.maximum) if part.bores else None,
        pipes=tuple(part.pipes or ()),
        cost=_cost(part.cost) if part.cost else None,
    )


def _cost(part: CostPart) -> Cost:
    prices = {price.size.name: price.per_metre for price in part.prices}
    return Cost(prices=prices, **_inputs(part, "prices"))
