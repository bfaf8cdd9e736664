"""What one value of a case file may be: text, a number, a quantity with its unit, a name from a list.

Each reader takes a scalar as written (:class:`pipeflow.case.nodes.Scalar`) and gives the value the field holds. Readers
are objects that know what they accept, so that :mod:`pipeflow.case.json_schema` can say it too.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Annotated

from pydantic import BeforeValidator, Field, PlainValidator, ValidationError
from pydantic_core import PydanticCustomError

from pipeflow import units
from pipeflow.case.nodes import Scalar
from pipeflow.case.size_advice import advice as size_advice
from pipeflow.line.catalogue import PipeSize, find_size, size_names, table

NAME_LENGTH = 100
TEXT_LENGTH = 20_000
SMALLEST, LARGEST = 1e-15, 1e15
"""Sizes of an SI value beyond which the figure is a slip, and the arithmetic would overflow."""

_NUMBER = re.compile(units.NUMBER)
_COMMA = re.compile(r"[+-]?[0-9]*(,[0-9]+)+")


@dataclass(frozen=True)
class FlowValue:
    """A flow in SI units: volume flow in m³/s, or mass flow in kg/s."""

    value: float
    is_mass: bool

    def volume(self, density: float) -> float:
        """Give the volume flow at a density in kg/m³."""
        return self.value / density if self.is_mass else self.value


def said(message: str, *below: str | int) -> PydanticCustomError:
    """Make an error whose message is complete; ``below`` as for :func:`at_odds`."""
    return PydanticCustomError("said", "{message}", {"message": message, "below": below})


def several(messages: Sequence[str]) -> ValidationError:
    """Make an error of several faults of one value, each with its complete message."""
    return ValidationError.from_exception_data(
        "several", [{"type": said(message), "input": None} for message in messages]
    )


def at_odds(message: str, *below: str | int) -> PydanticCustomError:
    """Make an error for a value that does not go with another; what was found is put before it.

    ``below`` leads to the value where the error is raised for the map around it.
    """
    return PydanticCustomError("at_odds", "{message}", {"message": message, "below": below})


def lacks(*instead: str) -> PydanticCustomError:
    """Make the error of a required key for one that is required only without the keys that may stand instead."""
    return PydanticCustomError("missing", "missing", {"keys": instead})


def needs(*keys: str, message: str) -> PydanticCustomError:
    """Make an error for the lack of one of some keys of the same map."""
    return PydanticCustomError("needs", "{message}", {"message": message, "keys": keys})


def wrong_choice(found: str, what: str, options: Sequence[str]) -> PydanticCustomError:
    """Make an error for a name that is none of those accepted."""
    return PydanticCustomError("choice", "{found}", {"found": found, "what": what, "options": options})


def no_value(needed: str) -> PydanticCustomError:
    """Make an error for a key with nothing behind it."""
    return said(f"no value; {needed} is needed")


def _scalar(value: object, needed: str) -> Scalar:
    if not isinstance(value, Scalar):
        raise said(f"found a {'map' if isinstance(value, dict) else 'list'}; {needed} is needed")
    if value.is_null:
        raise no_value(needed)
    return value


def _within_reach(value: float, text: str) -> float:
    if value != 0 and not SMALLEST <= abs(value) <= LARGEST:
        raise said(f"found {units.echo(text)}; too {'large' if abs(value) > 1 else 'small'} to compute with")
    return value


@dataclass(frozen=True)
class Quantity:
    """Reads a quantity with its unit to SI."""

    dimensions: tuple[str, ...]

    def __call__(self, value: object) -> float:
        """Read one."""
        scalar = _scalar(value, f"a quantity in {units.accepted(*self.dimensions)}")
        try:
            return _within_reach(units.parse(scalar.text, *self.dimensions), scalar.text)
        except units.UnitError as error:
            raise said(str(error)) from None


@dataclass(frozen=True)
class FlowReader:
    """Reads a flow to SI, and keeps whether it is one of mass."""

    dimensions: tuple[str, ...]

    def __call__(self, value: object) -> FlowValue:
        """Read one."""
        scalar = _scalar(value, f"a flow in {units.accepted(*self.dimensions)}")
        try:
            number, dimension = units.parse_with_dimension(scalar.text, *self.dimensions)
        except units.UnitError as error:
            raise said(str(error)) from None
        if number < 0:
            raise said(f"found {units.echo(scalar.text)}; must be 0 or more (flow runs along the route)")
        return FlowValue(_within_reach(number, scalar.text), dimension == "mass flow")


@dataclass(frozen=True)
class RangeReader:
    """Reads a range of one dimension to SI; ``floor`` is what its lower end must not be below."""

    dimension: str
    example: str
    floor: float = 0.0

    def __call__(self, value: object) -> tuple[float, float]:
        """Read one."""
        scalar = _scalar(value, f"a range, as '{self.example}',")
        try:
            low, high = units.parse_range(scalar.text, self.dimension)
        except units.UnitError as error:
            raise said(str(error)) from None
        if low < self.floor:
            least = "0 or more" if self.floor == 0 else "above absolute zero"
            raise said(f"found {units.echo(scalar.text)}; {self.dimension}s must be {least}")
        return _within_reach(low, scalar.text), _within_reach(high, scalar.text)


def read_fractions(value: object) -> tuple[float, float]:
    """Read a range of fractions of solids."""
    text = _scalar(value, "a range of fractions, as '0.48 .. 0.58',").text
    match = re.fullmatch(rf" *({units.NUMBER}) *(?<!\.)\.\.(?!\.) *({units.NUMBER}) *", text)
    if match is None:
        raise said(f"found {units.echo(text)}; a range of fractions is needed, as '0.48 .. 0.58'")
    low, high = float(match[1]), float(match[2])
    if not 0 < low < high < 1:
        raise said(f"found {units.echo(text)}; two fractions above 0 and below 1 are needed, the lower end first")
    return low, high


def read_answer(value: object) -> bool:
    """Read true or false."""
    scalar = _scalar(value, "true or false")
    if not scalar.plain or scalar.text not in ("true", "false"):
        raise said(f"found {units.echo(scalar.text)}; true or false is needed")
    return scalar.text == "true"


def read_number(value: object) -> float:
    """Read a bare number."""
    scalar = _scalar(value, "a bare number")
    if scalar.plain and _COMMA.fullmatch(scalar.text):
        raise said(f"found {units.echo(scalar.text)}; {units.number_advice(scalar.text)}")
    if not (scalar.plain and _NUMBER.fullmatch(scalar.text)):
        raise said(f"found {units.echo(scalar.text)}; a bare number is needed (no unit, no quotes)")
    number = float(scalar.text)
    if not math.isfinite(number):
        raise said(f"found {units.echo(scalar.text)}; the number is too large")
    return number


def read_whole(value: object) -> int:
    """Read a whole number."""
    number = read_number(value)
    if number != int(number):
        raise said(f"found {units.echo(_scalar(value, 'a whole number').text)}; a whole number is needed")
    return int(number)


@dataclass(frozen=True)
class Words:
    """Reads a text of bounded length."""

    longest: int
    what: str
    layout: str = ""

    def __call__(self, value: object) -> str:
        """Read one."""
        text = _scalar(value, self.what).text.strip()
        if not text:
            raise no_value(self.what)
        if len(text) > self.longest:
            raise said(f"found {len(text)} characters; at most {self.longest} are accepted")
        odd = next((char for char in text if not (char.isprintable() or char in self.layout)), None)
        if odd is not None:
            raise said(f"found the character {units.echo(odd)} in the text; printable text is needed")
        return text


@dataclass(frozen=True)
class Choice:
    """Reads a name that must be one of a list."""

    what: str
    options: Callable[[], Sequence[str]]

    def __call__(self, value: object) -> str:
        """Read one."""
        text = _scalar(value, f"a {self.what}").text
        if text not in self.options():
            raise wrong_choice(text, self.what, self.options())
        return text


def read_size(value: object) -> PipeSize:
    """Read the name of a pipe size."""
    text = _scalar(value, "a pipe size, as 'NPS 8 Sch 40',").text
    size = find_size(text)
    meant = "" if size else size_advice(text)
    if meant:
        raise said(f"found {units.echo(text)}; {meant}")
    if size is None:
        raise wrong_choice(text, "pipe size", size_names())
    return size


def quantity(*dimensions: str) -> BeforeValidator:
    """Say that a field is a quantity of one of some dimensions."""
    return BeforeValidator(Quantity(dimensions))


def choice(what: str, options: Callable[[], Sequence[str]]) -> BeforeValidator:
    """Say that a field is a name from a list."""
    return BeforeValidator(Choice(what, options))


@cache
def fitting_keys() -> tuple[str, ...]:
    """List the keys of the fittings whose loss constants are tabulated."""
    return tuple(row["key"] for row in table("fittings.csv"))


read_name = Words(NAME_LENGTH, "a name")

Name = Annotated[str, BeforeValidator(read_name)]
Text = Annotated[str, BeforeValidator(Words(TEXT_LENGTH, "a text", "\n\t"))]
Number = Annotated[float, BeforeValidator(read_number)]
Whole = Annotated[int, BeforeValidator(read_whole)]
Count = Annotated[float, Field(ge=0, le=10_000), BeforeValidator(read_number)]
FlowIndex = Annotated[float, Field(gt=0, le=2), BeforeValidator(read_number)]
Exponent = Annotated[float, Field(gt=0, le=10), BeforeValidator(read_number)]
Fraction = Annotated[float, Field(gt=0, lt=1), BeforeValidator(read_number)]
Flow = Annotated[FlowValue, PlainValidator(FlowReader(("volume flow", "mass flow")))]
MassFlow = Annotated[FlowValue, PlainValidator(FlowReader(("mass flow",)))]
ShearRates = Annotated[tuple[float, float], PlainValidator(RangeReader("shear rate", "5 .. 400 1/s"))]
Temperatures = Annotated[tuple[float, float], PlainValidator(RangeReader("temperature", "15 .. 60 °C", SMALLEST))]
Fractions = Annotated[tuple[float, float], PlainValidator(read_fractions)]
Answer = Annotated[bool, PlainValidator(read_answer)]
Size = Annotated[PipeSize, PlainValidator(read_size)]

Length = Annotated[float, Field(gt=0), quantity("length")]
Rise = Annotated[float, quantity("length")]
Roughness = Annotated[float, Field(ge=0), quantity("length")]
Density = Annotated[float, Field(gt=0), quantity("density")]
YieldStress = Annotated[float, Field(ge=0), quantity("stress")]
Stress = Annotated[float, Field(gt=0), quantity("stress")]
Viscosity = Annotated[float, Field(gt=0), quantity("viscosity")]
LimitViscosity = Annotated[float, Field(ge=0), quantity("viscosity")]
Consistency = Annotated[float, Field(gt=0), quantity("consistency")]
ShearRate = Annotated[float, Field(ge=0), quantity("shear rate")]
Time = Annotated[float, Field(gt=0), quantity("time")]
PressureLoss = Annotated[float, Field(ge=0), quantity("pressure")]
Pressure = Annotated[float, quantity("pressure")]
AbsolutePressure = Annotated[float, Field(gt=0), quantity("absolute pressure")]
Velocity = Annotated[float, Field(ge=0), quantity("velocity")]
Speed = Annotated[float, Field(gt=0), quantity("rotational speed")]
Power = Annotated[float, Field(gt=0), quantity("power")]
Torque = Annotated[float, Field(gt=0), quantity("torque")]
Temperature = Annotated[float, quantity("temperature")]
TemperatureDifference = Annotated[float, Field(gt=0), quantity("temperature difference")]
SpecificHeat = Annotated[float, Field(gt=0), quantity("specific heat")]
Energy = Annotated[float, quantity("molar energy")]
