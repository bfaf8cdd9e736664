"""Rheological parameters that follow the solids content or the temperature, by a law stated in the case."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Annotated, Any, Final, Union

import numpy as np
from pydantic import ConfigDict, Discriminator, Field, Tag

from pipeflow.case.fields import (
    LARGEST,
    SMALLEST,
    Answer,
    Consistency,
    Energy,
    Fractions,
    Number,
    Stress,
    Temperature,
    Temperatures,
    Viscosity,
    YieldStress,
    at_odds,
    choice,
)
from pipeflow.case.later import later
from pipeflow.case.model import shown_condition
from pipeflow.case.nodes import Scalar
from pipeflow.case.part import Part
from pipeflow.rheology.conditions import (
    ArrheniusDependence,
    Dependence,
    ExponentialDependence,
    PowerDependence,
    Variable,
)

LAWS: Final = ("power", "exponential", "arrhenius")
_WHERE: Final = {"solids": "fluid.solids", "temperature": "fluid.temperature"}
_Warm = Annotated[Temperature, Field(gt=0)]


@dataclass(frozen=True)
class Conditions:
    """What a law may follow: solids fraction by mass, temperature in K; None where the case does not say."""

    solids: float | None
    temperature: float | None

    def of(self, variable: Variable) -> float | None:
        """Give one of them."""
        return self.solids if variable == "solids" else self.temperature


class LawPart(Part):
    """What every law of a parameter has."""

    law: str
    extrapolate: Answer = False

    def dependence(self) -> Dependence:
        """Make the law."""
        raise NotImplementedError

    def at(self, conditions: Conditions) -> float:
        """Give the parameter, SI."""
        law = self.dependence()
        condition = conditions.of(law.variable)
        assert condition is not None
        with np.errstate(all="ignore"):
            return float(law.value(condition))

    def hold_against(self, conditions: Conditions, *place: str) -> None:
        """Refuse conditions that are not known, outside the range tested, or give no figure to compute with."""
        law = self.dependence()
        hold_against(law.variable, law.tested, conditions, self.extrapolate, (*place, "tested"))
        value = self.at(conditions)
        if not SMALLEST <= value <= LARGEST:
            raise at_odds("with these coefficients the parameter is too large or too small to compute with", *place)


def hold_against(
    variable: Variable, tested: tuple[float, float], conditions: Conditions, extrapolate: bool, place: tuple[str, ...]
) -> None:
    """Refuse a condition that the case does not give, or that lies outside the range tested."""
    condition = conditions.of(variable)
    if condition is None:
        raise at_odds(f"this is followed over '{_WHERE[variable]}', which the case does not give", *place)
    low, high = tested
    slack = 1e-9 * (high - low)
    if not extrapolate and not low - slack <= condition <= high + slack:
        here, *ends = (shown_condition(variable, value) for value in (condition, low, high))
        outside = f"the fluid has {variable} of {here}, tested over {ends[0]} .. {ends[1]}"
        raise at_odds(f"{outside}; 'extrapolate: true' carries on from there, with a caution", *place)


class _OfSolids(LawPart):
    """A law of the solids fraction by mass."""

    b: Number
    tested: Fractions


class _PowerPart(_OfSolids):
    law: Annotated[str, choice("law", lambda: LAWS[:1])]

    def dependence(self) -> Dependence:
        return PowerDependence(self.tested, self.a, self.b)  # type: ignore[attr-defined]


class _ExponentialPart(_OfSolids):
    law: Annotated[str, choice("law", lambda: LAWS[1:2])]

    def dependence(self) -> Dependence:
        return ExponentialDependence(self.tested, self.a, self.b)  # type: ignore[attr-defined]


class _ArrheniusPart(LawPart):
    law: Annotated[str, choice("law", lambda: LAWS[2:])]
    reference_temperature: _Warm
    activation_energy: Energy
    tested: Temperatures

    def dependence(self) -> Dependence:
        reference: float = self.reference  # type: ignore[attr-defined]
        return ArrheniusDependence(self.tested, reference, self.activation_energy, self.reference_temperature)


class StressPowerPart(_PowerPart):
    """A yield stress as a power of the solids fraction by mass."""

    a: Stress


class StressExponentialPart(_ExponentialPart):
    """A yield stress as an exponential of the solids fraction by mass."""

    a: Stress


class StressArrheniusPart(_ArrheniusPart):
    """A yield stress by temperature."""

    reference: Stress


class ViscosityPowerPart(_PowerPart):
    """A viscosity as a power of the solids fraction by mass."""

    a: Viscosity


class ViscosityExponentialPart(_ExponentialPart):
    """A viscosity as an exponential of the solids fraction by mass."""

    a: Viscosity


class ViscosityArrheniusPart(_ArrheniusPart):
    """A viscosity by temperature."""

    reference: Viscosity


class ConsistencyPowerPart(_PowerPart):
    """A consistency as a power of the solids fraction by mass."""

    a: Consistency


class ConsistencyExponentialPart(_ExponentialPart):
    """A consistency as an exponential of the solids fraction by mass."""

    a: Consistency


class ConsistencyArrheniusPart(_ArrheniusPart):
    """A consistency by temperature."""

    reference: Consistency


class UnknownLawPart(Part):
    """A law of no known name: nothing but the name is looked at."""

    model_config = ConfigDict(extra="ignore")

    law: Annotated[str, choice("law", lambda: LAWS)]


LAW_PARTS: Final[dict[str, dict[str, type[LawPart]]]] = {
    "stress": {"power": StressPowerPart, "exponential": StressExponentialPart, "arrhenius": StressArrheniusPart},
    "viscosity": {
        "power": ViscosityPowerPart,
        "exponential": ViscosityExponentialPart,
        "arrhenius": ViscosityArrheniusPart,
    },
    "consistency": {
        "power": ConsistencyPowerPart,
        "exponential": ConsistencyExponentialPart,
        "arrhenius": ConsistencyArrheniusPart,
    },
}
"""The laws a parameter may follow, by its dimension."""


FOLLOWING: Final = {
    "yield_stress": "stress",
    "viscosity": "viscosity",
    "plastic_viscosity": "viscosity",
    "casson_viscosity": "viscosity",
    "consistency": "consistency",
}
"""The parameters that may follow a law, with their dimension."""


def _tag(value: Any) -> str:
    if not isinstance(value, dict):
        return "<one>"
    law = value.get("law")
    name = law.text if isinstance(law, Scalar) else ""
    return f"<{name}>" if name in LAWS else "<other>"


def _or_law(value: Any, dimension: str) -> Any:
    """Give the type of a parameter that may be a value or a law."""
    parts = LAW_PARTS[dimension].items()
    return Annotated[
        Union[
            Annotated[value, Tag("<one>")],
            *(Annotated[later("dependence_part", part.__name__), Tag(f"<{law}>")] for law, part in parts),
            Annotated[UnknownLawPart, Tag("<other>")],
        ],
        Discriminator(_tag),
    ]


if TYPE_CHECKING:
    YieldStressOrLaw = float | LawPart
    ViscosityOrLaw = float | LawPart
    ConsistencyOrLaw = float | LawPart
else:
    YieldStressOrLaw = _or_law(YieldStress, "stress")
    ViscosityOrLaw = _or_law(Viscosity, "viscosity")
    ConsistencyOrLaw = _or_law(Consistency, "consistency")
