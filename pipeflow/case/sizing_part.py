"""How the line is to be sized: which pipes vary, over which sizes, and what pipe and energy cost."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.fields import Length, Name, Number, Size, at_odds, needs, said, wrong_choice
from pipeflow.case.part import FAILED, EndsPart, InputPart, Part
from pipeflow.line.catalogue import PipeSize, series_names, sizes_of
from pipeflow.units import echo

MAX_PRICES = 200


def _series(name: str) -> str:
    found = sizes_of(name)
    if not found:
        raise wrong_choice(name, "pipe series", series_names())
    return found[0].series


class BoresPart(EndsPart):
    """Bores that a free diameter is looked for between."""

    minimum: Length
    maximum: Length


class PricePart(Part):
    """What a metre of one size costs, laid."""

    size: Size
    per_metre: Annotated[Number, Field(gt=0)]


class CostPart(InputPart):
    """What pipe and energy cost, in one currency."""

    prices: Annotated[list[PricePart], Field(max_length=MAX_PRICES)] = Field(default_factory=list)
    price_at_100_mm: Annotated[Number, Field(gt=0)] | None = None
    price_exponent: Annotated[Number, Field(gt=0, le=5)] = 1.3
    energy_price_per_kwh: Annotated[Number, Field(gt=0)]
    hours_per_year: Annotated[Number, Field(gt=0, le=8784)]
    interest_rate: Annotated[Number, Field(gt=0, lt=1)]
    years: Annotated[Number, Field(gt=0, le=100)]
    pump_efficiency: Annotated[Number, Field(gt=0, le=1)]
    maintenance: Annotated[Number, Field(ge=0, le=1)] = 0.0

    @property
    def has_price(self) -> bool:
        """Whether anything is said of the price of pipe."""
        return bool(self.prices) or self.price_at_100_mm is not None


class SizingPart(Part):
    """How the line is to be sized."""

    series: Name | None = None
    bores: BoresPart | None = None
    smallest: Size | None = None
    largest: Size | None = None
    pipes: Annotated[list[Name], Field(min_length=1, max_length=500)] | None = None
    cost: CostPart | None = None

    @check("series")
    @classmethod
    def _known(cls, value: str | None) -> str | None:
        return None if value is None else _series(value)

    @check("bores")
    @classmethod
    def _one_way(cls, value: BoresPart | None, info: ValidationInfo) -> BoresPart | None:
        if value is not None and info.data.get("series", FAILED) not in (None, FAILED):
            raise said("'series' is given too; sizes of a series or a free diameter, one of the two, is needed")
        return value

    @check("smallest", "largest")
    @classmethod
    def _of_the_series(cls, value: PipeSize | None, info: ValidationInfo) -> PipeSize | None:
        if value is None:
            return value
        series, smallest = info.data.get("series"), info.data.get("smallest")
        if series is None and info.data.get("series", FAILED) is not FAILED:
            raise needs("series", message="needs 'series', the sizes it is one of")
        if series and value.series != series:
            raise at_odds(f"not a size of {echo(series)}")
        if smallest is not None and smallest.inside_diameter > value.inside_diameter:
            raise at_odds("narrower than 'smallest'; no size is left")
        return value

    @check("cost")
    @classmethod
    def _with_a_price(cls, value: CostPart | None) -> CostPart | None:
        if value is not None and not value.has_price:
            raise said("needs the price of pipe: 'prices' of sizes, or 'price_at_100_mm'")
        return value
