"""What a case file may say: its keys, what each may hold, and what makes physical sense.

The values come as written (:class:`pipeflow.case.nodes.Scalar`). A relation between keys is checked at the
later of them, so that each fault is found whatever else is wrong.
"""

from __future__ import annotations

from typing import Annotated, Any, Final

from pydantic import (
    AfterValidator,
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Discriminator,
    Field,
    Tag,
    ValidationInfo,
)
from pydantic import field_validator as check

from pipeflow.case.fields import (
    Consistency,
    Count,
    Density,
    Flow,
    FlowIndex,
    FlowValue,
    Length,
    Name,
    Number,
    Pressure,
    PressureLoss,
    Rise,
    Roughness,
    ShearRates,
    Size,
    Speed,
    Text,
    Velocity,
    Viscosity,
    YieldStress,
    at_odds,
    choice,
    fitting_keys,
    needs,
    said,
    wrong_choice,
)
from pipeflow.case.nodes import Scalar
from pipeflow.line.catalogue import MATERIALS, PipeSize
from pipeflow.units import echo

METHOD_KEYS: Final[dict[str, tuple[str, ...]]] = {
    "turbulent": ("colebrook-white", "dodge-metzner", "wilson-thomas"),
    "critical": ("slatter",),
    "fittings": ("darby-3k", "hooper-2k"),
}
"""The methods a case may ask for, by the key it asks with."""

PUMP_KINDS: Final = ("centrifugal", "positive-displacement")
MAX_ELEMENTS = 500
MAX_PUMPS = 20
MAX_SCENARIOS = 50
RELATIVE_ROUGHNESS_MAX = 0.1
VACUUM: Final = -101_325.0 * 1.1
"""Gauge pressure below which no place on earth has a vacuum, Pa."""

_FAILED: Final = object()


class Part(BaseModel):
    """A map of the case file."""

    model_config = ConfigDict(extra="forbid", frozen=True, arbitrary_types_allowed=True)


class ModelPart(Part):
    """What every rheological model has beside its parameters."""

    model: Name
    tested: ShearRates | None = None


class NewtonianPart(ModelPart):
    """Parameters of a Newtonian fluid."""

    viscosity: Viscosity


class PowerLawPart(ModelPart):
    """Parameters of a power-law fluid."""

    consistency: Consistency
    flow_index: FlowIndex


class BinghamPart(ModelPart):
    """Parameters of a Bingham fluid."""

    yield_stress: YieldStress
    plastic_viscosity: Viscosity


class HerschelBulkleyPart(ModelPart):
    """Parameters of a Herschel-Bulkley fluid."""

    yield_stress: YieldStress
    consistency: Consistency
    flow_index: FlowIndex


class CassonPart(ModelPart):
    """Parameters of a Casson fluid."""

    yield_stress: YieldStress
    casson_viscosity: Viscosity


RHEOLOGY_PARTS: Final[dict[str, type[ModelPart]]] = {
    "newtonian": NewtonianPart,
    "power-law": PowerLawPart,
    "bingham": BinghamPart,
    "herschel-bulkley": HerschelBulkleyPart,
    "casson": CassonPart,
}


class UnknownModelPart(ModelPart):
    """A rheology of no known model: nothing but the name of the model is looked at."""

    model_config = ConfigDict(extra="ignore")

    model: Annotated[str, choice("model", lambda: tuple(RHEOLOGY_PARTS))]


def _no_flow_curve(value: object) -> str:
    raise said("fitting a flow curve is not part of this version; give 'model' and its parameters")


class FlowCurvePart(ModelPart):
    """A rheology given by readings, which waits for fitting."""

    model_config = ConfigDict(extra="ignore")

    model: Name = ""
    flow_curve: Annotated[str, BeforeValidator(_no_flow_curve)]


def _rheology_tag(value: object) -> str:
    if not isinstance(value, dict):
        return "<other>"
    if "flow_curve" in value:
        return "<flow_curve>"
    model = value.get("model")
    name = model.text if isinstance(model, Scalar) else ""
    return f"<{name}>" if name in RHEOLOGY_PARTS else "<other>"


RheologyPart = Annotated[
    Annotated[NewtonianPart, Tag("<newtonian>")]
    | Annotated[PowerLawPart, Tag("<power-law>")]
    | Annotated[BinghamPart, Tag("<bingham>")]
    | Annotated[HerschelBulkleyPart, Tag("<herschel-bulkley>")]
    | Annotated[CassonPart, Tag("<casson>")]
    | Annotated[FlowCurvePart, Tag("<flow_curve>")]
    | Annotated[UnknownModelPart, Tag("<other>")],
    Discriminator(_rheology_tag),
]


class FluidPart(Part):
    """What flows."""

    density: Density
    rheology: RheologyPart


class FlowPart(Part):
    """The flows the line must carry."""

    minimum: Flow | None = None
    design: Flow
    maximum: Flow | None = None

    @check("design", "maximum")
    @classmethod
    def _in_order(cls, value: FlowValue | None, info: ValidationInfo) -> FlowValue | None:
        key = "minimum" if info.field_name == "design" else "design"
        lower: FlowValue | None = info.data.get(key)
        if lower is None or value is None:
            return value
        if lower.is_mass != value.is_mass:
            raise at_odds(f"'{key}' is given otherwise; all mass flows or all volume flows are needed")
        if lower.value > value.value:
            raise at_odds(f"less than '{key}'; minimum <= design <= maximum is needed")
        return value


FlowOrPart = Annotated[
    Annotated[FlowPart, Tag("<map>")] | Annotated[Flow, Tag("<one>")],
    Discriminator(lambda value: "<map>" if isinstance(value, dict) else "<one>"),
]


class VesselPart(Part):
    """One end of the line."""

    pressure: Pressure = 0.0
    level: Rise = 0.0

    @check("pressure")
    @classmethod
    def _no_better_than_vacuum(cls, value: float) -> float:
        if value < VACUUM:
            raise at_odds("below full vacuum; pressures are gauge, 0 is the atmosphere")
        return value


def _new(name: str, info: ValidationInfo) -> str:
    """Refuse a name given before among its like; the context of a validation remembers the names."""
    context: dict[str, set[str]] = info.context or {}
    names = context["pump" if info.field_name == "name" else "element"]
    if name in names:
        raise at_odds(f"the name {echo(name)} is taken above; names must be unique")
    names.add(name)
    return name


NewName = Annotated[Name, AfterValidator(_new)]


def _fitting(key: str) -> str:
    if key not in fitting_keys():
        raise wrong_choice(key, "fitting", fitting_keys())
    return key


class PipePart(Part):
    """A length of pipe of one bore."""

    pipe: NewName
    size: Size | None = None
    diameter: Annotated[Length | None, Field(validate_default=True)] = None
    length: Length
    rise: Rise = 0.0
    material: Annotated[str, choice("material", lambda: tuple(MATERIALS))] | None = None
    roughness: Annotated[Roughness | None, Field(validate_default=True)] = None
    fittings: dict[Annotated[str, AfterValidator(_fitting)], Count] = Field(default_factory=dict)

    @check("diameter")
    @classmethod
    def _one_of_two(cls, value: float | None, info: ValidationInfo) -> float | None:
        has_size = info.data.get("size", _FAILED) is not None
        if has_size and value is not None:
            raise at_odds("'size' is given too; one of the two is needed")
        if not has_size and value is None:
            raise needs("size", "diameter", message="missing; give 'size' (NPS 8 Sch 40) or 'diameter' (inside)")
        return value

    @check("rise")
    @classmethod
    def _no_longer_than_the_pipe(cls, value: float, info: ValidationInfo) -> float:
        length = info.data.get("length")
        if length is not None and abs(value) > length * (1 + 1e-9):
            raise at_odds(f"rises more than the pipe is long ({length:.6g} m)")
        return value

    @check("material")
    @classmethod
    def _of_the_series(cls, value: str | None, info: ValidationInfo) -> str | None:
        size: PipeSize | None = info.data.get("size")
        if size is not None and value is not None and value != size.material:
            raise at_odds(f"but {size.name} is {size.material}; leave 'material' out")
        return value

    @check("roughness")
    @classmethod
    def _smaller_than_the_bore(cls, value: float | None, info: ValidationInfo) -> float | None:
        size: PipeSize | None = info.data.get("size")
        diameter = size.inside_diameter if size else info.data.get("diameter")
        default = MATERIALS[info.data.get("material") or (size.material if size else "steel")]
        roughness = default.roughness if value is None else value
        if diameter is not None and roughness > RELATIVE_ROUGHNESS_MAX * diameter:
            most = f"at most a tenth of the bore, {RELATIVE_ROUGHNESS_MAX * diameter * 1e3:.3g} mm"
            if value is None:
                raise needs("roughness", message=f"missing; {default.name}'s is too rough here: {most}")
            raise at_odds(f"too rough: {most}")
        return value

    @property
    def bore(self) -> float:
        """Inside diameter, m."""
        return self.size.inside_diameter if self.size else self.diameter or 0.0


class EquipmentPart(Part):
    """A loss stated by its maker."""

    equipment: NewName
    pressure_loss: PressureLoss
    at_flow: Flow | None = None
    exponent: Annotated[Number, Field(ge=0, le=4)] | None = None

    @check("at_flow")
    @classmethod
    def _not_at_rest(cls, value: FlowValue | None) -> FlowValue | None:
        if value is not None and value.value == 0:
            raise at_odds("must be above 0: the loss is stated at a flow")
        return value

    @check("exponent")
    @classmethod
    def _with_a_flow(cls, value: float | None, info: ValidationInfo) -> float | None:
        if value is not None and info.data.get("at_flow", _FAILED) is None:
            raise needs("at_flow", message="an exponent needs 'at_flow', the flow of the stated loss")
        return value


def _element_tag(value: object) -> str | None:
    if not isinstance(value, dict):
        return None
    return next((f"<{key}>" for key in value if key in ("pipe", "equipment")), None)


ElementPart = Annotated[
    Annotated[PipePart, Tag("<pipe>")] | Annotated[EquipmentPart, Tag("<equipment>")],
    Discriminator(_element_tag),
]


class VelocityPart(Part):
    """Bulk velocities the line must keep between."""

    minimum: Velocity | None = None
    maximum: Velocity | None = None

    @check("maximum")
    @classmethod
    def _above_the_minimum(cls, value: float | None, info: ValidationInfo) -> float | None:
        minimum = info.data.get("minimum")
        if value is not None and minimum is not None and value <= minimum:
            raise at_odds("must be more than 'minimum'")
        return value


class LimitsPart(Part):
    """What the line must keep to."""

    head_loss: Length | None = None
    pressure_loss: Annotated[PressureLoss, Field(gt=0)] | None = None
    velocity: VelocityPart = VelocityPart()


class MethodsPart(Part):
    """Methods asked for by key."""

    turbulent: Annotated[str, choice("method", lambda: METHOD_KEYS["turbulent"])] | None = None
    critical: Annotated[str, choice("method", lambda: METHOD_KEYS["critical"])] | None = None
    fittings: Annotated[str, choice("method", lambda: METHOD_KEYS["fittings"])] | None = None


class PumpPart(Part):
    """A candidate pump."""

    name: NewName
    kind: Annotated[str, choice("kind of pump", lambda: PUMP_KINDS)]
    speed: Speed | None = None
    curve_speed: Speed | None = None
    curve: Name


class CasePart(Part):
    """The whole file; the scenarios are read apart, each as the case with its changes made."""

    title: Name
    revision: Name | None = None
    notes: Text | None = None
    fluid: FluidPart
    flow: FlowOrPart
    source: VesselPart | None = None
    destination: VesselPart | None = None
    route: Annotated[list[ElementPart], Field(min_length=1, max_length=MAX_ELEMENTS)]
    limits: LimitsPart = LimitsPart()
    methods: MethodsPart = MethodsPart()
    pumps: Annotated[list[PumpPart], Field(max_length=MAX_PUMPS)] = Field(default_factory=list)
    scenarios: Any = None
