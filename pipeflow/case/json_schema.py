"""The case file as JSON Schema, for editors; generated from what the program reads by.

``python -m pipeflow.case.json_schema > docs/case.schema.json`` writes it anew. What depends on several values together
is left to the program.
"""

from __future__ import annotations

import json
import re
import sys
import types
from collections.abc import Iterable
from typing import Annotated, Any, Final, Union, get_args, get_origin

from pydantic import BeforeValidator, PlainValidator
from pydantic.fields import FieldInfo

from pipeflow import units
from pipeflow.case.dependence_part import UnknownLawPart
from pipeflow.case.descriptions import DESCRIPTIONS
from pipeflow.case.fields import (
    NAME_LENGTH,
    Choice,
    FlowReader,
    Quantity,
    RangeReader,
    Words,
    fitting_keys,
    read_answer,
    read_fractions,
    read_number,
    read_size,
    read_whole,
)
from pipeflow.case.fluid_part import FluidPart, SolidsPart
from pipeflow.case.later import Later
from pipeflow.case.part import Part
from pipeflow.case.places import EXAMPLES, PARTS_AT, at_place
from pipeflow.case.rheology_part import RHEOLOGY_PARTS, UnknownModelPart
from pipeflow.case.route_part import EquipmentPart, PipePart
from pipeflow.case.schema import MAX_SCENARIOS, CasePart, FlowPart, SitePart
from pipeflow.case.uncertainty_part import MAX_UNCERTAIN
from pipeflow.line.catalogue import size_names
from pipeflow.line.fittings import fittings

Schema = dict[str, Any]

PLACES: Final = {part: place for place, part in PARTS_AT.items()} | {PARTS_AT[("pumps",)]: ("pumps",)}
UNWRITTEN: Final = (UnknownModelPart, UnknownLawPart)
"""Parts that stand for what cannot be read."""


def _either(*keys: str) -> Schema:
    return {"oneOf": [{"required": [key]} for key in keys]}


RELATIONS: Final[dict[type[Part], Schema]] = {
    FluidPart: {"anyOf": [{"required": ["density"]}, {"required": ["solids", "liquid"]}]},
    SolidsPart: _either("mass_fraction", "volume_fraction"),
    FlowPart: _either("design", "dry_solids"),
    SitePart: _either("altitude", "atmospheric_pressure"),
    PipePart: _either("size", "diameter"),
    EquipmentPart: {"dependentRequired": {"exponent": ["at_flow"]}},
}
"""What is asked of the keys of a map together."""

_FRACTION: Final = r"\+?0?\.[0-9]+"
_BOUNDS: Final = {"gt": "exclusiveMinimum", "ge": "minimum", "lt": "exclusiveMaximum", "le": "maximum"}
_SPELLINGS: Final = {
    "3": r"(?:\^?3|³)",
    "2": r"(?:\^?2|²)",
    "1": "[1¹]",
    "-": "[-⁻]",
    ".": "[.·⋅*]",
    "µ": "[µμ]",
}


class Writer:
    """Writes the schema part by part; what is named once is referred to."""

    def __init__(self) -> None:
        self.definitions: dict[str, Schema] = {}

    def document(self) -> Schema:
        """Write the whole."""
        case = self._map(CasePart)
        case["properties"]["scenarios"] |= self._scenarios()
        case["properties"]["uncertainty"] |= self._uncertainty()
        about = "the fluid, the flow, the line and what the line must keep to; docs/case-file.md explains every key"
        head = {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "pipeflow case file"}
        return {**head, **case, "description": about, "$defs": dict(sorted(self.definitions.items()))}

    def _named(self, name: str, schema: Schema) -> Schema:
        self.definitions.setdefault(name, schema)
        return {"$ref": f"#/$defs/{name}"}

    def _map(self, part: type[Part]) -> Schema:
        required = [key for key, field in part.model_fields.items() if field.is_required()]
        return {
            "type": "object",
            "description": (part.__doc__ or "").strip().rstrip("."),
            "additionalProperties": False,
            **({"required": required} if required else {}),
            "properties": {key: self._property(part, key, field) for key, field in part.model_fields.items()},
            **RELATIONS.get(part, {}),
        }

    def _property(self, part: type[Part], key: str, field: FieldInfo) -> Schema:
        place = (*PLACES[part], key)
        told: Schema = {"description": at_place(DESCRIPTIONS, place)}
        example = at_place(EXAMPLES, place)
        model = next((name for name, of in RHEOLOGY_PARTS.items() if of is part), None)
        if key == "model" and model is not None:
            return told | {"const": model}
        if example and not example.startswith(("{", "[")):
            told["examples"] = [float(example) if re.fullmatch(units.NUMBER, example) else example]
        return told | self._of(field.annotation, field.metadata)

    def _of(self, annotation: Any, metadata: Iterable[Any]) -> Schema:
        """Write what a type accepts."""
        marks = list(_flat(metadata))
        reader = next((mark.func for mark in marks if isinstance(mark, BeforeValidator | PlainValidator)), None)
        origin, inner = get_origin(annotation), get_args(annotation)
        if origin is Annotated:
            return self._of(inner[0], [*inner[1:], *marks])
        if reader is not None and origin not in (Union, types.UnionType):
            return self._read_by(reader, _bounds(marks))
        if origin in (Union, types.UnionType):
            return self._union(inner)
        if origin is list:
            lengths = {"minItems": "min_length", "maxItems": "max_length"}
            found = {key: getattr(mark, name) for key, name in lengths.items() for mark in marks if hasattr(mark, name)}
            return {"type": "array", **found, "items": self._of(inner[0], [])}
        if origin is dict:
            return self._named("fittings", self._fittings(inner[1]))
        if isinstance(annotation, type) and issubclass(annotation, Part):
            return self._named(_name(annotation), self._map(annotation))
        return {}

    def _union(self, members: Iterable[Any]) -> Schema:
        written = [member for member in members if member is not type(None) and not _is_unwritten(member)]
        if len(written) == 1:
            return self._of(written[0], [])
        return {"anyOf": [self._of(member, []) for member in written]}

    def _read_by(self, reader: Any, bounds: Schema) -> Schema:
        match reader:
            case Quantity():
                return self._quantity(reader.dimensions, bounds)
            case FlowReader():
                return self._quantity(reader.dimensions, {"minimum": 0})
            case Words():
                kinds = ["string", "number", "boolean"]
                return {"type": kinds, "pattern": r"\S", "maxLength": reader.longest}
            case Choice():
                return {"enum": list(reader.options())}
            case RangeReader():
                return self._range(reader)
            case Later():
                return self._of(reader.part, [])
        if reader in (read_number, read_whole):
            return {"type": "number" if reader is read_number else "integer", **bounds}
        if reader is read_answer:
            return {"type": "boolean"}
        if reader is read_fractions:
            title = "lower and upper fraction of solids by mass, as 0.48 .. 0.58"
            pattern = rf"^ *{_FRACTION} *\.\. *{_FRACTION} *$"
            return self._named("fractions", {"title": title, "type": "string", "pattern": pattern})
        assert reader is read_size
        named = {
            "anyOf": [
                {"enum": list(size_names())},
                {"pattern": r"^\s*([Nn][Pp][Ss]|[Oo][Dd]|[Bb][Pp][Ee]|[Dd][Ii][Nn])"},
            ]
        }
        return self._named("size", {"type": "string", **named})

    def _quantity(self, dimensions: tuple[str, ...], bounds: Schema) -> Schema:
        sign = " above 0" if "exclusiveMinimum" in bounds else " of 0 or more" if "minimum" in bounds else ""
        name = " or ".join(dimensions) + sign
        number = units.NUMBER if not sign else units.NUMBER.replace("[+-]?", r"\+?", 1)
        nonzero = r"(?!\+?[0.]+(?![0-9.]))" if sign == " above 0" else ""
        spelt = "|".join(dict.fromkeys(_spelt(text) for dimension in dimensions for text in units.UNITS[dimension]))
        schema = {
            "type": "string",
            "title": f"{name}, with its unit: {units.accepted(*dimensions)}",
            "pattern": f"^ *{nonzero}{number} *(?:{spelt}) *$",
        }
        return self._named(f"quantity of {name}".replace(" ", "_"), schema)

    def _range(self, reader: RangeReader) -> Schema:
        number = units.NUMBER.replace("[+-]?", r"\+?", 1) if reader.floor == 0 else units.NUMBER
        spelt = "|".join(_spelt(text) for text in units.UNITS[reader.dimension])
        schema = {"type": "string", "pattern": rf"^ *{number} *(?:(?:{spelt}) *)?\.\. *{number} *(?:{spelt}) *$"}
        title = f"lower and upper {reader.dimension}, as {reader.example}"
        return self._named(f"{reader.dimension}s".replace(" ", "_"), {**schema, "title": title})

    def _fittings(self, count: Any) -> Schema:
        each = self._named("count", self._of(count, []))
        properties = {key: {"description": fittings()[key].description, **each} for key in fitting_keys()}
        return {"type": "object", "additionalProperties": False, "properties": properties}

    def _uncertainty(self) -> Schema:
        number = units.NUMBER
        forms = rf"(?:(?:±|\+/?-|normal) *{number}.*|uniform *{number}.*\.\. *{number}.*)"
        told = "'± 10 %' or '± 0.5 Pa', 'uniform 8 .. 14 Pa', 'normal 5 %' (a standard deviation)"
        value = {"type": "string", "title": told, "pattern": rf"^\s*{forms}$"}
        places = r"^(fluid|flow|source|destination|route|restart)\b"
        return {
            "type": "object",
            "maxProperties": MAX_UNCERTAIN,
            "propertyNames": {"pattern": places},
            "additionalProperties": value,
        }

    def _scenarios(self) -> Schema:
        changes: dict[str, list[Schema]] = {}
        patterns: dict[str, list[Schema]] = {
            r"^route\[.+\]$": [{"$ref": f"#/$defs/{_name(part)}"} for part in (PipePart, EquipmentPart)],
            r"^route\[.+\]\.fittings\..+$": [{"$ref": "#/$defs/count"}],
            r"^pumps\[.+\]$": [{"$ref": "#/$defs/pump"}],
        }
        for place, part in PARTS_AT.items():
            if place == ("sizing", "cost", "prices"):
                continue
            below = "properties" if part is CasePart else f"$defs/{_name(part)}/properties"
            for key in part.model_fields:
                path, is_pattern = _path((*place, key))
                known = (patterns if is_pattern else changes).setdefault(path, [])
                known.append({"$ref": f"#/{below}/{key}"})
        del changes["scenarios"], changes["uncertainty"]
        return {
            "type": "object",
            "maxProperties": MAX_SCENARIOS,
            "propertyNames": {"pattern": r"\S", "maxLength": NAME_LENGTH},
            "additionalProperties": {
                "type": "object",
                "additionalProperties": False,
                "properties": {path: _or_left_out(schemas) for path, schemas in changes.items()},
                "patternProperties": {path: _or_left_out(schemas) for path, schemas in patterns.items()},
            },
        }


def _flat(metadata: Iterable[Any]) -> Iterable[Any]:
    for mark in metadata:
        if isinstance(mark, FieldInfo):
            yield from mark.metadata
        else:
            yield mark


def _bounds(marks: Iterable[Any]) -> Schema:
    return {word: getattr(mark, name) for mark in marks for name, word in _BOUNDS.items() if hasattr(mark, name)}


def _is_unwritten(member: Any) -> bool:
    return get_origin(member) is Annotated and get_args(member)[0] in UNWRITTEN


def _name(part: type[Part]) -> str:
    return re.sub(r"(?<=[a-z])(?=[A-Z])", "_", part.__name__.removesuffix("Part")).lower()


def _spelt(unit: str) -> str:
    return "".join(_SPELLINGS.get(char, re.escape(char) if char != " " else " ") for char in unit)


def _path(place: tuple[str, ...]) -> tuple[str, bool]:
    """Write a place as the key path of a scenario: as it stands, or as a pattern where an item is named in it."""
    steps = [step for step in place if not step.startswith("<")]
    if steps[0] in ("route", "pumps") and len(steps) > 1:
        return rf"^{steps[0]}\[.+\]\.{'.'.join(steps[1:])}$", True
    return ".".join(steps), False


def _or_left_out(schemas: list[Schema]) -> Schema:
    return {"anyOf": [*schemas, {"type": "null"}]}


def text() -> str:
    """Write the schema as the file in ``docs`` holds it."""
    return json.dumps(Writer().document(), indent=1, ensure_ascii=False) + "\n"


if __name__ == "__main__":
    sys.stdout.write(text())
