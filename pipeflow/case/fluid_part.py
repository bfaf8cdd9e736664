"""What flows: the slurry or paste, and what it is mixed of."""

from __future__ import annotations

from typing import Annotated, Any, Final

from pydantic import Field, ValidationInfo
from pydantic import field_validator as check

from pipeflow.case.dependence_part import Conditions
from pipeflow.case.fields import (
    AbsolutePressure,
    Density,
    Fraction,
    Length,
    SpecificHeat,
    Temperature,
    Viscosity,
    at_odds,
    lacks,
    needs,
)
from pipeflow.case.part import FAILED, InputPart
from pipeflow.case.rheology_part import RheologyPart
from pipeflow.rheology import mixture

DENSITY_TOLERANCE: Final = 0.01
"""Relative difference of the density stated and the one solids and liquid make beyond which they are at odds."""

LIGHTEST_LIQUID: Final = 400.0
"""Density below which nothing that carries solids is liquid, kg/m³."""


class SolidsPart(InputPart):
    """The solids of a slurry: how much, and how fine."""

    density: Density
    mass_fraction: Fraction | None = None
    volume_fraction: Annotated[Fraction | None, Field(validate_default=True)] = None
    d50: Length | None = None
    d85: Length | None = None
    fraction_below_45um: Fraction | None = None

    @check("volume_fraction")
    @classmethod
    def _one_of_two(cls, value: float | None, info: ValidationInfo) -> float | None:
        has_mass = info.data.get("mass_fraction", FAILED) is not None
        if has_mass and value is not None:
            raise at_odds("'mass_fraction' is given too; one of the two is needed")
        if not has_mass and value is None:
            message = "missing; give 'mass_fraction' (0.55) or 'volume_fraction' (0.3)"
            raise needs("mass_fraction", "volume_fraction", message=message)
        return value

    @check("d85")
    @classmethod
    def _no_finer_than_the_median(cls, value: float | None, info: ValidationInfo) -> float | None:
        d50 = info.data.get("d50")
        if value is not None and d50 is not None and value < d50:
            raise at_odds("less than 'd50'; 85 % of the solids are finer than d85")
        return value

    def of_the_volume(self, mixture_density: float) -> float:
        """Volume fraction of the solids, in a slurry of a density in kg/m³."""
        if self.volume_fraction is not None:
            return self.volume_fraction
        return float(mixture.volume_fraction(self.mass_fraction or 0.0, self.density, mixture_density))

    def of_the_mass(self, mixture_density: float) -> float:
        """Mass fraction of the solids, in a slurry of a density in kg/m³."""
        if self.mass_fraction is not None:
            return self.mass_fraction
        return float(mixture.mass_fraction(self.volume_fraction or 0.0, self.density, mixture_density))

    def mixed_density(self, liquid_density: float) -> float:
        """Density of the slurry with a liquid of a density in kg/m³."""
        if self.mass_fraction is not None:
            return float(mixture.density_by_mass(self.mass_fraction, self.density, liquid_density))
        return float(mixture.density_by_volume(self.volume_fraction or 0.0, self.density, liquid_density))


class LiquidPart(InputPart):
    """The liquid that carries the solids."""

    density: Density | None = None
    viscosity: Viscosity | None = None
    vapour_pressure: AbsolutePressure | None = None


class FluidPart(InputPart):
    """What flows."""

    solids: SolidsPart | None = None
    liquid: LiquidPart | None = None
    density: Annotated[Density | None, Field(validate_default=True)] = None
    temperature: Temperature | None = None
    specific_heat: SpecificHeat | None = None
    rheology: RheologyPart

    @check("density")
    @classmethod
    def _as_mixed(cls, value: float | None, info: ValidationInfo) -> float | None:
        if not {"solids", "liquid"} <= info.data.keys():
            return value
        solids: SolidsPart | None = info.data["solids"]
        liquid: LiquidPart | None = info.data["liquid"]
        if value is None:
            _refuse_unless_mixed(solids, liquid)
        elif solids is not None:
            _refuse_if_at_odds(value, solids, liquid)
        return value

    @check("temperature")
    @classmethod
    def _above_absolute_zero(cls, value: float | None) -> float | None:
        if value is not None and value <= 0:
            raise at_odds("not above absolute zero, -273.15 °C")
        return value

    @check("rheology")
    @classmethod
    def _where_it_was_tested(cls, value: Any, info: ValidationInfo) -> Any:
        """Hold laws of the solids or the temperature against those of the case, where these have no fault."""
        if {"solids", "liquid", "density", "temperature"} <= info.data.keys():
            given = (info.data[key] for key in ("solids", "liquid", "density", "temperature"))
            value.hold_against(_conditions(*given))
        return value

    @property
    def conditions(self) -> Conditions:
        """What the parameters of the rheology may follow."""
        return _conditions(self.solids, self.liquid, self.density, self.temperature)

    @property
    def mixed_density(self) -> float | None:
        """Density in kg/m³ that solids and liquid make; None where they are not both known."""
        if self.solids is None or self.liquid is None or self.liquid.density is None:
            return None
        return self.solids.mixed_density(self.liquid.density)

    @property
    def slurry_density(self) -> float:
        """Density in kg/m³: as stated, or else as mixed."""
        return self.density or self.mixed_density or 0.0


def _conditions(
    solids: SolidsPart | None, liquid: LiquidPart | None, density: float | None, temperature: float | None
) -> Conditions:
    if solids is None:
        return Conditions(None, temperature)
    mixed = solids.mixed_density(liquid.density) if liquid is not None and liquid.density is not None else None
    return Conditions(solids.of_the_mass(mixed or density or 0.0), temperature)


def _refuse_unless_mixed(solids: SolidsPart | None, liquid: LiquidPart | None) -> None:
    if solids is None and liquid is None:
        raise lacks("solids", "liquid")
    if solids is None:
        raise needs("density", "solids", message="density is missing; give it, or 'solids' to work it out from")
    if liquid is None or liquid.density is None:
        message = "density is missing; give it, or the density of the 'liquid' to work it out from"
        raise needs("density", "liquid", message=message)


def _refuse_if_at_odds(stated: float, solids: SolidsPart, liquid: LiquidPart | None) -> None:
    """Hold the density stated against the solids: with their liquid, or else by what they leave to it."""
    if liquid is not None and liquid.density is not None:
        mixed = solids.mixed_density(liquid.density)
        if abs(stated / mixed - 1.0) > DENSITY_TOLERANCE:
            both = f"solids and liquid make {mixed:.5g} kg/m3, this is {stated:.5g} kg/m3"
            raise at_odds(f"{both}: more than 1 % apart; correct one, or leave this one out")
        return
    share = solids.of_the_volume(stated)
    if share >= 1.0 or mixture.liquid_density(share, solids.density, stated) < LIGHTEST_LIQUID:
        raise at_odds("too light to hold these solids: what they leave for the liquid is lighter than any")
