"""What a case file may say: its keys, what each may hold, and what makes physical sense."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Annotated, Any, Final

from pydantic import Discriminator, Field, Tag, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.fields import (
    AbsolutePressure,
    Flow,
    FlowValue,
    MassFlow,
    Name,
    Pressure,
    Rise,
    Text,
    at_odds,
    choice,
    lacks,
    needs,
    said,
)
from pipeflow.case.fluid_part import FluidPart
from pipeflow.case.later import later
from pipeflow.case.limits_part import LimitsPart
from pipeflow.case.model import PumpPlace
from pipeflow.case.part import FAILED, InputPart, Part
from pipeflow.case.route_part import ElementPart, PipePart, PumpPlacePart
from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.methods import TURBULENT
from pipeflow.line.fittings import METHODS as FITTING_METHODS
from pipeflow.units import echo

if TYPE_CHECKING:
    from pipeflow.case.job_part import JobPart
    from pipeflow.case.limits_part import PipeWallPart, RestartPart
    from pipeflow.case.pumps_part import PumpPart
    from pipeflow.case.sizing_part import SizingPart
else:
    JobPart = later("job_part", "JobPart")
    PipeWallPart = later("limits_part", "PipeWallPart")
    RestartPart = later("limits_part", "RestartPart")
    PumpPart = later("pumps_part", "PumpPart")
    SizingPart = later("sizing_part", "SizingPart")

DEPOSITION: Final = ("durand", "wasp", "oroskar-turian", "thomas-sublayer")
METHOD_KEYS: Final[dict[str, tuple[str, ...]]] = {
    "turbulent": tuple(TURBULENT),
    "critical": tuple(CRITERIA),
    "fittings": tuple(FITTING_METHODS),
    "deposition": DEPOSITION,
}
"""The methods a case may ask for, by the key it asks with."""

DISCHARGES: Final = ("submerged", "free")
MAX_ELEMENTS = 500
MAX_PUMPS = 20
MAX_SCENARIOS = 50
VACUUM: Final = -101_325.0 * 1.1
"""Gauge pressure below which no place on earth has a vacuum, Pa."""
ALTITUDES: Final = (-2_000.0, 9_000.0)
"""Where the standard atmosphere holds, up to the highest summit, m."""
ATMOSPHERES: Final = (25e3, 200e3)
"""Atmospheric pressures that no mine or summit is outside of, Pa."""

_FLOWS: Final = ("minimum", "design", "maximum")


def _in_order(value: FlowValue | None, info: ValidationInfo) -> FlowValue | None:
    """Hold a flow against the one below it."""
    key = "minimum" if info.field_name == "design" else "design"
    lower: FlowValue | None = info.data.get(key)
    if lower is None or value is None:
        return value
    if lower.is_mass != value.is_mass:
        kinds = ("a volume flow", "a mass flow")
        this, other = kinds[value.is_mass], kinds[lower.is_mass]
        raise at_odds(f"this is {this}, but '{key}' is {other}; give all of them by mass or all by volume")
    if lower.value > value.value:
        raise at_odds(f"less than '{key}'; minimum <= design <= maximum is needed")
    return value


def _fluid(info: ValidationInfo) -> FluidPart | None:
    """Give the fluid of the case; None if it has a fault of its own."""
    return (info.context or {}).get("fluid")


class DrySolidsPart(Part):
    """The dry solids the line must carry."""

    minimum: MassFlow | None = None
    design: MassFlow
    maximum: MassFlow | None = None

    _ordered = check("design", "maximum")(_in_order)


DrySolids = Annotated[
    Annotated[DrySolidsPart, Tag("<map>")] | Annotated[MassFlow, Tag("<one>")],
    Discriminator(lambda value: "<map>" if isinstance(value, dict) else "<one>"),
]


class FlowPart(InputPart):
    """The flows the line must carry, of the slurry or of its solids."""

    dry_solids: DrySolids | None = None
    minimum: Flow | None = None
    design: Annotated[Flow | None, Field(validate_default=True)] = None
    maximum: Flow | None = None

    _ordered = check("design", "maximum")(_in_order)

    @check("dry_solids")
    @classmethod
    def _of_solids_known(cls, value: Any, info: ValidationInfo) -> Any:
        fluid = _fluid(info)
        if value is not None and fluid is not None and fluid.solids is None:
            raise said("dry solids are a flow of slurry only where 'fluid.solids' gives their fraction")
        return value

    @check(*_FLOWS)
    @classmethod
    def _given_one_way(cls, value: FlowValue | None, info: ValidationInfo) -> FlowValue | None:
        is_dry = info.data.get("dry_solids", FAILED) is not None
        if value is None and info.field_name == "design" and not is_dry:
            raise lacks("dry_solids")
        told = any(info.data.get(key, FAILED) for key in _FLOWS[: _FLOWS.index(str(info.field_name))])
        if value is not None and is_dry and not told:
            raise at_odds("'dry_solids' is given too; the flow of the solids or that of the slurry is needed")
        return value


FlowOrPart = Annotated[
    Annotated[FlowPart, Tag("<map>")] | Annotated[Flow, Tag("<one>")],
    Discriminator(lambda value: "<map>" if isinstance(value, dict) else "<one>"),
]


class VesselPart(InputPart):
    """One end of the line."""

    pressure: Pressure = 0.0
    level: Rise = 0.0

    @check("pressure")
    @classmethod
    def _no_better_than_vacuum(cls, value: float) -> float:
        if value < VACUUM:
            raise at_odds("below full vacuum; pressures are gauge, 0 is the atmosphere")
        return value


class SourcePart(VesselPart):
    """The end the line flows from."""

    lowest_level: Rise | None = None

    @check("lowest_level")
    @classmethod
    def _not_above_the_usual(cls, value: float | None, info: ValidationInfo) -> float | None:
        level = info.data.get("level")
        if value is not None and level is not None and value > level:
            raise at_odds(f"above 'level', {level:g} m")
        return value


class DestinationPart(VesselPart):
    """The end the line flows to."""

    discharge: Annotated[str, choice("discharge", lambda: DISCHARGES)] = "submerged"


class SitePart(InputPart):
    """Where the line stands."""

    altitude: Rise | None = None
    atmospheric_pressure: Annotated[AbsolutePressure | None, Field(validate_default=True)] = None

    @check("altitude")
    @classmethod
    def _on_earth(cls, value: float | None) -> float | None:
        if value is not None and not ALTITUDES[0] <= value <= ALTITUDES[1]:
            where = f"must be from {ALTITUDES[0]:g} m to {ALTITUDES[1]:g} m"
            raise at_odds(f"{where}; elsewhere give 'atmospheric_pressure'")
        return value

    @check("atmospheric_pressure")
    @classmethod
    def _one_of_two(cls, value: float | None, info: ValidationInfo) -> float | None:
        has_altitude = info.data.get("altitude", FAILED) is not None
        if value is not None and not ATMOSPHERES[0] <= value <= ATMOSPHERES[1]:
            raise at_odds("no place on earth has it; an absolute pressure is needed, as 81 kPa")
        if has_altitude and value is not None:
            raise at_odds("'altitude' is given too; one of the two is needed")
        if not has_altitude and value is None:
            message = "missing; give 'altitude' (1850 m) or 'atmospheric_pressure' (81 kPa)"
            raise needs("altitude", "atmospheric_pressure", message=message)
        return value


class MethodsPart(Part):
    """Methods asked for by key."""

    turbulent: Annotated[str, choice("method", lambda: METHOD_KEYS["turbulent"])] | None = None
    critical: Annotated[str, choice("method", lambda: METHOD_KEYS["critical"])] | None = None
    fittings: Annotated[str, choice("method", lambda: METHOD_KEYS["fittings"])] | None = None
    deposition: Annotated[str, choice("method", lambda: METHOD_KEYS["deposition"])] | None = None

    @check("turbulent", "critical")
    @classmethod
    def _made_for_the_fluid(cls, value: str | None, info: ValidationInfo) -> str | None:
        fluid = _fluid(info)
        if value is None or fluid is None:
            return value
        known = TURBULENT if info.field_name == "turbulent" else CRITERIA
        model = fluid.rheology.key
        if model not in known[value].models:
            fitting = ", ".join(key for key, method in known.items() if model in method.models)
            raise at_odds(f"not made for {model} fluids; those that are: {fitting}")
        return value

    @check("turbulent")
    @classmethod
    def _with_what_it_needs(cls, value: str | None, info: ValidationInfo) -> str | None:
        fluid = _fluid(info)
        if value is None or fluid is None or not TURBULENT[value].needs_particle_size:
            return value
        if fluid.solids is None or fluid.solids.d85 is None:
            raise at_odds("needs the size of the solids, 'fluid.solids.d85'")
        return value


def pump_place(route: Sequence[ElementPart]) -> PumpPlace | None:
    """Where the route says its pump stands; None if it does not."""
    places = (PumpPlace(part.name, index) for index, part in enumerate(route) if isinstance(part, PumpPlacePart))
    return next(places, None)


class CasePart(Part):
    """The whole file; the scenarios are read apart, each as the case with its changes made."""

    title: Name
    revision: Name | None = None
    notes: Text | None = None
    job: JobPart | None = None
    fluid: FluidPart
    flow: FlowOrPart
    site: SitePart | None = None
    source: SourcePart | None = None
    destination: DestinationPart | None = None
    route: Annotated[list[ElementPart], Field(min_length=1, max_length=MAX_ELEMENTS)]
    limits: LimitsPart = Field(default_factory=LimitsPart.model_construct)
    restart: RestartPart | None = None
    pipe_wall: PipeWallPart | None = None
    sizing: SizingPart | None = None
    methods: MethodsPart = Field(default_factory=MethodsPart.model_construct)
    pumps: Annotated[list[PumpPart], Field(max_length=MAX_PUMPS)] = Field(default_factory=list)
    uncertainty: Any = None
    scenarios: Any = None

    @check("fluid")
    @classmethod
    def _known_to_what_follows(cls, value: FluidPart, info: ValidationInfo) -> FluidPart:
        if info.context is not None:
            info.context["fluid"] = value
        return value

    @check("route")
    @classmethod
    def _with_one_pump(cls, value: list[ElementPart]) -> list[ElementPart]:
        pumps = [index for index, element in enumerate(value) if isinstance(element, PumpPlacePart)]
        if len(pumps) > 1:
            named = echo(value[pumps[0]].name)
            raise at_odds(f"the pump is {named}; several that run in series stand under 'pumps'", pumps[1], "pump")
        if len(pumps) == len(value):
            raise at_odds("a pump alone; a pipe or equipment is needed", 0, "pump")
        return value

    @check("restart")
    @classmethod
    def _pump_on_the_route(cls, value: RestartPart | None, info: ValidationInfo) -> RestartPart | None:
        route: list[ElementPart] = info.data.get("route", [])
        after = value.pump_after if value else None
        if after is None or not route:
            return value
        place, names = pump_place(route), [element.name for element in route]
        before = names[place.position - 1] if place and place.position else None
        if place is not None and after != before:
            where = f"after {echo(before)}" if before else "at its start"
            raise at_odds(f"but the route has its pump, {echo(place.name)}, {where}", "pump_after")
        if after not in names:
            raise at_odds(f"no element of the route is named {echo(after)}", "pump_after")
        return value

    @check("sizing")
    @classmethod
    def _pipes_of_the_route(cls, value: SizingPart | None, info: ValidationInfo) -> SizingPart | None:
        elements = info.data.get("route", ())
        names = [element.name for element in elements if isinstance(element, PipePart)]
        unknown = [name for name in (value and value.pipes) or () if name not in names]
        if unknown and elements:
            raise at_odds(f"no pipe of the route is named {echo(unknown[0])}", "pipes")
        return value
