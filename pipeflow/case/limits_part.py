"""What a line must keep to, and what its checks need to know: restart after a stop, wall of the pipe."""

from __future__ import annotations

from typing import Annotated, Final

from pydantic import Field, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.fields import (
    Length,
    Name,
    Number,
    PressureLoss,
    Roughness,
    ShearRate,
    Stress,
    TemperatureDifference,
    Time,
    Velocity,
    at_odds,
    choice,
    needs,
)
from pipeflow.case.part import FAILED, InputPart, Part

WALL_CODES: Final = ("B31.3", "B31.4")

PositivePressure = Annotated[PressureLoss, Field(gt=0)]
Share = Annotated[Number, Field(gt=0, le=1)]


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
    pressure_loss: PositivePressure | None = None
    velocity: VelocityPart = Field(default_factory=VelocityPart.model_construct)
    wall_shear_rate: Annotated[ShearRate, Field(gt=0)] | None = None
    wall_shear_stress: Stress | None = None
    temperature_rise: TemperatureDifference | None = None
    restart_pressure: PositivePressure | None = None


class RestartPart(InputPart):
    """How the line stands after a stop."""

    static_yield_stress: Stress | None = None
    factor: Annotated[Number, Field(ge=1, le=5)] | None = None
    pump_after: Name | None = None


class PipeWallPart(InputPart):
    """What holds the pressure, from the code and the maker; nothing of a code is built in."""

    code: Annotated[str, choice("wall code", lambda: WALL_CODES)] | None = None
    allowable_stress: PositivePressure | None = None
    yield_strength: PositivePressure | None = None
    design_factor: Share | None = None
    joint_factor: Share | None = None
    weld_factor: Share | None = None
    coefficient_y: Annotated[Number, Field(ge=0, le=0.7)] | None = None
    mill_tolerance: Annotated[Number, Field(ge=0, lt=0.5)] = 0.0
    corrosion_allowance: Roughness = 0.0
    wear_allowance: Roughness = 0.0
    pressure_rating: PositivePressure | None = None
    temperature_derating: Share | None = None
    shut_in_pressure: PressureLoss | None = None
    closure_time: Time | None = None
    bulk_modulus: PositivePressure | None = None
    elastic_modulus: PositivePressure | None = None

    @check("allowable_stress", "yield_strength", "design_factor")
    @classmethod
    def _of_its_code(cls, value: float | None, info: ValidationInfo) -> float | None:
        code = info.data.get("code", FAILED)
        wanted = "B31.3" if info.field_name == "allowable_stress" else "B31.4"
        if value is not None and code is None:
            raise needs("code", message=f"needs 'code: {wanted}', whose form it belongs to")
        if value is not None and code not in (wanted, FAILED):
            raise at_odds(f"belongs to {wanted}, not to {code}")
        return value
