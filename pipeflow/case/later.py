"""Maps that few cases hold: their part of the schema is imported and built where a case first holds one."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from importlib import import_module
from typing import Annotated, Any

from pydantic import PlainValidator, ValidationInfo

from pipeflow.case.part import Part


@dataclass(frozen=True)
class Later:
    """Reads a map by a part of the schema that is fetched on first use."""

    module: str
    name: str

    @cached_property
    def part(self) -> type[Part]:
        """The part itself."""
        found: type[Part] = getattr(import_module(self.module), self.name)
        return found

    def __call__(self, value: object, info: ValidationInfo) -> Part:
        """Read one; what is wrong in it is told at its place, as if the part stood in the schema itself."""
        return self.part.model_validate(value, context=info.context)


def later(module: str, name: str) -> Any:
    """Say that a field is a map of a part of ``pipeflow.case``, given by its module and name.

    To be used beside the import of the same name for type checkers alone.
    """
    return Annotated[Any, PlainValidator(Later(f"pipeflow.case.{module}", name))]
