"""What one value of a case file may be: text, a number, a quantity with its unit, a name from a list.

Each type reads a scalar as written (:class:`pipeflow.case.nodes.Scalar`) and gives the value the field holds.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Annotated

from pydantic import BeforeValidator, Field, PlainValidator
from pydantic_core import PydanticCustomError

from pipeflow import units
from pipeflow.case.nodes import Scalar
from pipeflow.line.catalogue import PipeSize, find_size, size_names, table

NAME_LENGTH = 100
TEXT_LENGTH = 20_000
SMALLEST, LARGEST = 1e-15, 1e15
"""Sizes of an SI value beyond which the figure is a slip, and the arithmetic would overflow."""

_NUMBER = re.compile(units.NUMBER)


@dataclass(frozen=True)
class FlowValue:
    """A flow in SI units: volume flow in m³/s, or mass flow in kg/s."""

    value: float
    is_mass: bool

    def volume(self, density: float) -> float:
        """Give the volume flow at a density in kg/m³."""
        return self.value / density if self.is_mass else self.value


def said(message: str) -> PydanticCustomError:
    """Make an error whose message is complete."""
    return PydanticCustomError("said", "{message}", {"message": message})


def at_odds(message: str) -> PydanticCustomError:
    """Make an error for a value that does not go with another; what was found is put before it."""
    return PydanticCustomError("at_odds", "{message}", {"message": message})


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


def quantity(*dimensions: str) -> BeforeValidator:
    """Read a quantity with its unit to SI."""
    example = f"a quantity in {units.accepted(*dimensions)}"

    def to_si(value: object) -> float:
        scalar = _scalar(value, example)
        try:
            return _within_reach(units.parse(scalar.text, *dimensions), scalar.text)
        except units.UnitError as error:
            raise said(str(error)) from None

    return BeforeValidator(to_si)


def _flow(value: object) -> FlowValue:
    scalar = _scalar(value, f"a flow in {units.accepted('volume flow', 'mass flow')}")
    try:
        number, dimension = units.parse_with_dimension(scalar.text, "volume flow", "mass flow")
    except units.UnitError as error:
        raise said(str(error)) from None
    if number < 0:
        raise said(f"found {units.echo(scalar.text)}; must be 0 or more (flow runs along the route)")
    return FlowValue(_within_reach(number, scalar.text), dimension == "mass flow")


def _range(value: object) -> tuple[float, float]:
    scalar = _scalar(value, "a range of shear rates, as '5 .. 400 1/s',")
    try:
        low, high = units.parse_range(scalar.text, "shear rate")
    except units.UnitError as error:
        raise said(str(error)) from None
    if low < 0:
        raise said(f"found {units.echo(scalar.text)}; shear rates must be 0 or more")
    return _within_reach(low, scalar.text), _within_reach(high, scalar.text)


def _number(value: object) -> float:
    scalar = _scalar(value, "a bare number")
    if not (scalar.plain and _NUMBER.fullmatch(scalar.text)):
        raise said(f"found {units.echo(scalar.text)}; a bare number is needed (no unit, no quotes)")
    number = float(scalar.text)
    if not math.isfinite(number):
        raise said(f"found {units.echo(scalar.text)}; the number is too large")
    return number


def _text(longest: int, what: str, layout: str = "") -> Callable[[object], str]:
    def read(value: object) -> str:
        text = _scalar(value, what).text.strip()
        if not text:
            raise no_value(what)
        if len(text) > longest:
            raise said(f"found {len(text)} characters; at most {longest} are accepted")
        odd = next((char for char in text if not (char.isprintable() or char in layout)), None)
        if odd is not None:
            raise said(f"found the character {units.echo(odd)} in the text; printable text is needed")
        return text

    return read


def choice(what: str, options: Callable[[], Sequence[str]]) -> BeforeValidator:
    """Read a name that must be one of a list."""

    def read(value: object) -> str:
        text = _scalar(value, f"a {what}").text
        if text not in options():
            raise wrong_choice(text, what, options())
        return text

    return BeforeValidator(read)


def _size(value: object) -> PipeSize:
    text = _scalar(value, "a pipe size, as 'NPS 8 Sch 40',").text
    size = find_size(text)
    if size is None:
        raise wrong_choice(text, "pipe size", size_names())
    return size


@cache
def fitting_keys() -> tuple[str, ...]:
    """List the keys of the fittings whose loss constants are tabulated."""
    return tuple(row["key"] for row in table("fittings.csv"))


Name = Annotated[str, BeforeValidator(_text(NAME_LENGTH, "a name"))]
Text = Annotated[str, BeforeValidator(_text(TEXT_LENGTH, "a text", "\n\t"))]
Number = Annotated[float, BeforeValidator(_number)]
Count = Annotated[float, Field(ge=0, le=10_000), BeforeValidator(_number)]
FlowIndex = Annotated[float, Field(gt=0, le=2), BeforeValidator(_number)]
Flow = Annotated[FlowValue, PlainValidator(_flow)]
ShearRates = Annotated[tuple[float, float], PlainValidator(_range)]
Size = Annotated[PipeSize, PlainValidator(_size)]

Length = Annotated[float, Field(gt=0), quantity("length")]
Rise = Annotated[float, quantity("length")]
Roughness = Annotated[float, Field(ge=0), quantity("length")]
Density = Annotated[float, Field(gt=0), quantity("density")]
YieldStress = Annotated[float, Field(ge=0), quantity("stress")]
Viscosity = Annotated[float, Field(gt=0), quantity("viscosity")]
Consistency = Annotated[float, Field(gt=0), quantity("consistency")]
PressureLoss = Annotated[float, Field(ge=0), quantity("pressure")]
Pressure = Annotated[float, quantity("pressure")]
Velocity = Annotated[float, Field(ge=0), quantity("velocity")]
Speed = Annotated[float, Field(gt=0), quantity("rotational speed")]
