"""Candidate pumps: what drives them, how many run together, and the curve their maker states."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any, Final

from pydantic import Field, PrivateAttr, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.fields import (
    Length,
    Name,
    Number,
    Power,
    Speed,
    Torque,
    Viscosity,
    Whole,
    at_odds,
    choice,
    needs,
    several,
)
from pipeflow.case.files import why_no_file
from pipeflow.case.limits_part import PositivePressure
from pipeflow.case.part import FAILED, EndsPart, InputPart, Part
from pipeflow.case.route_part import NewName
from pipeflow.units import format_value

if TYPE_CHECKING:
    from pipeflow.case.model import PumpTable

CENTRIFUGAL: Final = "centrifugal"
POSITIVE: Final = "positive-displacement"
PUMP_KINDS: Final = (CENTRIFUGAL, POSITIVE)
ARRANGEMENTS: Final = ("series", "parallel")
INLETS: Final = ("end", "side")
MAX_TOGETHER = 20
MAX_STAGES = 50


class SpeedsPart(EndsPart):
    """Speeds that a drive can be set to."""

    minimum: Speed
    maximum: Speed


class ImpellerPart(Part):
    """The impeller of the curve, and what it is cut to."""

    diameter: Length
    trimmed_to: Length | None = None
    outlet_width: Length | None = None

    @check("trimmed_to", "outlet_width")
    @classmethod
    def _within_the_diameter(cls, value: float | None, info: ValidationInfo) -> float | None:
        diameter = info.data.get("diameter")
        if value is not None and diameter is not None and value > diameter:
            raise at_odds(f"more than 'diameter', {format_value(diameter, 'mm')}")
        return value


class MotorPart(Part):
    """The motor that is there."""

    power: Power
    margin: Annotated[Number, Field(ge=0, lt=1)] = 0.15


class ReciprocatingPart(Part):
    """Pistons or plungers, whose strokes jerk the liquid in the suction line."""

    cylinders: Annotated[Whole, Field(ge=1, le=3)]
    constant: Annotated[Number, Field(ge=1.4, le=2.5)]


class PumpPart(InputPart):
    """A candidate pump."""

    name: NewName
    kind: Annotated[str, choice("kind of pump", lambda: PUMP_KINDS)]
    curve: Name
    variable_speed: SpeedsPart | None = None
    speed: Speed | None = None
    curve_speed: Annotated[Speed | None, Field(validate_default=True)] = None
    number: Annotated[Whole, Field(ge=1, le=MAX_TOGETHER)] = 1
    arrangement: Annotated[str, choice("arrangement", lambda: ARRANGEMENTS)] = "parallel"
    stages: Annotated[Whole, Field(ge=1, le=MAX_STAGES)] = 1
    impeller: ImpellerPart | None = None
    inlet: Annotated[str, choice("inlet", lambda: INLETS)] = "end"
    motor: MotorPart | None = None
    relief_pressure: PositivePressure | None = None
    torque_limit: Torque | None = None
    test_viscosity: Viscosity | None = None
    reciprocating: ReciprocatingPart | None = None
    _path: str = PrivateAttr("")

    def model_post_init(self, context: dict[str, Any] | None) -> None:
        """Remember where the curve lies."""
        self._path = str(_folder(context) / self.curve)

    @check("stages", "impeller", "inlet")
    @classmethod
    def _of_a_centrifugal_pump(cls, value: Any, info: ValidationInfo) -> Any:
        return _only_of(CENTRIFUGAL, value, info)

    @check("relief_pressure", "torque_limit", "test_viscosity", "reciprocating")
    @classmethod
    def _of_a_positive_displacement_pump(cls, value: Any, info: ValidationInfo) -> Any:
        return _only_of(POSITIVE, value, info)

    @check("curve")
    @classmethod
    def _read(cls, value: str, info: ValidationInfo) -> str:
        """Read the curve beside the case, so that every fault of it is told."""
        path = _folder(info.context) / value
        why = why_no_file(path)
        if why:
            raise at_odds(f"{why}; the path of a file is needed, from the folder of the case file")
        if "kind" in info.data:
            from pipeflow.case.pump_curves import faults_of

            found = faults_of(str(path), info.data["kind"])
            if found:
                raise several([str(problem) for problem in found])
        return value

    @check("speed")
    @classmethod
    def _that_the_drive_can_give(cls, value: float | None, info: ValidationInfo) -> float | None:
        speeds: SpeedsPart | None = info.data.get("variable_speed")
        if value is not None and speeds and not speeds.minimum <= value <= speeds.maximum:
            ends = [format_value(end, "rpm") for end in (speeds.minimum, speeds.maximum)]
            raise at_odds(f"outside 'variable_speed', {ends[0]} to {ends[1]}")
        return value

    @check("curve_speed")
    @classmethod
    def _known_where_the_speed_varies(cls, value: float | None, info: ValidationInfo) -> float | None:
        if value is None and info.data.get("variable_speed") and info.data.get("speed", FAILED) is None:
            raise needs("curve_speed", "speed", message="'variable_speed' needs the speed of the curve, 'curve_speed'")
        return value

    @check("arrangement")
    @classmethod
    def _of_several(cls, value: str, info: ValidationInfo) -> str:
        if info.data.get("number", FAILED) == 1:
            raise needs("number", message=f"needs 'number', how many run in {value}: 2 or more")
        if value == "series" and info.data.get("kind") == POSITIVE:
            raise at_odds(f"{POSITIVE} pumps each set the flow; several run in parallel")
        return value

    @property
    def table(self) -> PumpTable:
        """The curve, remembered from when the case was checked."""
        from pipeflow.case.pump_curves import read_curve

        return read_curve(self._path, self.kind)

    @property
    def running_speed(self) -> float | None:
        """The speed it runs at, rad/s: that of the curve if not given, where the drive can give that one."""
        speeds, of_curve = self.variable_speed, self.curve_speed
        if self.speed is not None or of_curve is None:
            return self.speed
        return of_curve if speeds is None or speeds.minimum <= of_curve <= speeds.maximum else None


def _folder(context: dict[str, Any] | None) -> Path:
    """Where paths of the case start from."""
    folder: Path = (context or {}).get("folder", Path())
    return folder


def _only_of(kind: str, value: Any, info: ValidationInfo) -> Any:
    """Refuse a key of the other kind of pump."""
    found = info.data.get("kind", kind)
    if value is not None and found != kind:
        raise at_odds(f"belongs to {kind} pumps; this one is {found}")
    return value
