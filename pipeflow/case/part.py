"""A map of the case file, and what every map that carries inputs may say of them."""

from __future__ import annotations

from typing import Annotated, Final

from pydantic import BaseModel, ConfigDict, ValidationInfo, field_validator

from pipeflow.case.fields import at_odds, choice

ASSUMED: Final = "assumed"
STATUSES: Final = ("measured", "vendor", ASSUMED)
FAILED: Final = object()
"""Stands for the value of a key that has a fault of its own."""


class Part(BaseModel):
    """A map of the case file.

    The values come as written (:class:`pipeflow.case.nodes.Scalar`). A relation between keys is checked at the later of
    them, so that each fault is found whatever else is wrong.
    """

    model_config = ConfigDict(extra="forbid", frozen=True, arbitrary_types_allowed=True, defer_build=True)


class InputPart(Part):
    """A map of inputs: where they come from may be said."""

    status: Annotated[str, choice("status", lambda: STATUSES)] | None = None


class EndsPart(Part):
    """A map of two ends, ``minimum`` and ``maximum``, of a quantity that a part derived from it names."""

    @field_validator("maximum", check_fields=False)
    @classmethod
    def _above_the_minimum(cls, value: float, info: ValidationInfo) -> float:
        minimum = info.data.get("minimum")
        if minimum is not None and value <= minimum:
            raise at_odds("must be more than 'minimum'")
        return value
