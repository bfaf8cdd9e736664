"""The elements of a route: pipes with their fittings, equipment, and the place of the pump."""

from __future__ import annotations

from typing import Annotated, Final

from pydantic import AfterValidator, Discriminator, Field, Tag, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.fields import (
    Count,
    Flow,
    FlowValue,
    Length,
    Name,
    Number,
    PressureLoss,
    Rise,
    Roughness,
    Size,
    Time,
    at_odds,
    choice,
    fitting_keys,
    needs,
    wrong_choice,
)
from pipeflow.case.part import FAILED, InputPart, Part
from pipeflow.line.catalogue import MATERIALS, PipeSize
from pipeflow.units import echo

RELATIVE_ROUGHNESS_MAX = 0.1
ELEMENT_KEYS: Final = ("pipe", "equipment", "pump")
"""The keys an element starts with."""


def _new(name: str, info: ValidationInfo) -> str:
    """Refuse a name given before among its like; the context of a validation remembers the names."""
    names = (info.context or {})["pump" if info.field_name == "name" else "element"]
    if name in names:
        raise at_odds(f"the name {echo(name)} is taken above; names must be unique")
    names.add(name)
    return name


NewName = Annotated[Name, AfterValidator(_new)]


def _fitting(key: str) -> str:
    if key not in fitting_keys():
        raise wrong_choice(key, "fitting", fitting_keys())
    return key


class PipePart(InputPart):
    """A length of pipe of one bore."""

    pipe: NewName
    size: Size | None = None
    diameter: Annotated[Length | None, Field(validate_default=True)] = None
    length: Length
    rise: Rise = 0.0
    material: Annotated[str, choice("material", lambda: tuple(MATERIALS))] | None = None
    roughness: Annotated[Roughness | None, Field(validate_default=True)] = None
    fittings: dict[Annotated[str, AfterValidator(_fitting)], Count] = Field(default_factory=dict)
    loss_coefficient: Annotated[Number, Field(ge=0, le=1e6)] = 0.0
    hold_time: Time | None = None

    @check("diameter")
    @classmethod
    def _one_of_two(cls, value: float | None, info: ValidationInfo) -> float | None:
        has_size = info.data.get("size", FAILED) is not None
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
    def name(self) -> str:
        """The name of the element."""
        return self.pipe

    @property
    def bore(self) -> float:
        """Inside diameter, m."""
        return self.size.inside_diameter if self.size else self.diameter or 0.0


class EquipmentPart(InputPart):
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
        if value is not None and info.data.get("at_flow", FAILED) is None:
            raise needs("at_flow", message="an exponent needs 'at_flow', the flow of the stated loss")
        return value

    @property
    def name(self) -> str:
        """The name of the element."""
        return self.equipment


class PumpPlacePart(Part):
    """Where the pump stands: it parts suction and discharge, and loses nothing."""

    pump: NewName

    @property
    def name(self) -> str:
        """The name of the element."""
        return self.pump


def _element_tag(value: object) -> str | None:
    if not isinstance(value, dict):
        return None
    return next((f"<{key}>" for key in value if key in ELEMENT_KEYS), None)


ElementPart = Annotated[
    Annotated[PipePart, Tag("<pipe>")]
    | Annotated[EquipmentPart, Tag("<equipment>")]
    | Annotated[PumpPlacePart, Tag("<pump>")],
    Discriminator(_element_tag),
]
