"""The rheological models a case file may name, with their parameters."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, ClassVar, Final, Self, Union

from pydantic import BeforeValidator, ConfigDict, Discriminator, Field, Tag, ValidationInfo, model_validator
from pydantic import field_validator as check

from pipeflow.case.dependence_part import Conditions, ConsistencyOrLaw, LawPart, ViscosityOrLaw, YieldStressOrLaw
from pipeflow.case.fields import (
    Exponent,
    FlowIndex,
    LimitViscosity,
    Name,
    ShearRate,
    ShearRates,
    Stress,
    Time,
    Viscosity,
    at_odds,
    choice,
    read_number,
)
from pipeflow.case.flow_curve_part import FlowCurvePart
from pipeflow.case.later import later
from pipeflow.case.nodes import Scalar
from pipeflow.case.part import InputPart
from pipeflow.rheology import (
    Bingham,
    Carreau,
    Casson,
    Cross,
    Ellis,
    GeneralRheology,
    HerschelBulkley,
    Newtonian,
    PowerLaw,
    Rheology,
    RobertsonStiff,
    Sisko,
)

BESIDE_PARAMETERS: Final = frozenset({"model", "tested", "status"})
"""The keys of a rheology that are no parameters of its model."""


class ModelPart(InputPart):
    """What every rheological model has beside its parameters."""

    law: ClassVar[type[Rheology] | None] = None

    model: Name
    tested: ShearRates | None = None

    @property
    def key(self) -> str:
        """Name of the model."""
        return self.model

    @property
    def laws(self) -> dict[str, LawPart]:
        """The parameters that follow the solids or the temperature, by name."""
        given = {name: getattr(self, name) for name in type(self).model_fields}
        return {name: value for name, value in given.items() if isinstance(value, LawPart)}

    def hold_against(self, conditions: Conditions) -> None:
        """Refuse conditions the laws do not hold for."""
        for name, law in self.laws.items():
            law.hold_against(conditions, name)

    def rheology(self, conditions: Conditions | None = None) -> Rheology:
        """Make the law of the shear stress; the conditions are needed where parameters follow them."""
        assert self.law is not None
        parameters = {name: getattr(self, name) for name in type(self).model_fields if name not in BESIDE_PARAMETERS}
        for name, law in self.laws.items():
            assert conditions is not None
            parameters[name] = law.at(conditions)
        return self.law(**parameters)


class NewtonianPart(ModelPart):
    """Parameters of a Newtonian fluid."""

    law = Newtonian

    viscosity: ViscosityOrLaw


class PowerLawPart(ModelPart):
    """Parameters of a power-law fluid."""

    law = PowerLaw

    consistency: ConsistencyOrLaw
    flow_index: FlowIndex


class BinghamPart(ModelPart):
    """Parameters of a Bingham fluid."""

    law = Bingham

    yield_stress: YieldStressOrLaw
    plastic_viscosity: ViscosityOrLaw


class HerschelBulkleyPart(ModelPart):
    """Parameters of a Herschel-Bulkley fluid."""

    law = HerschelBulkley

    yield_stress: YieldStressOrLaw
    consistency: ConsistencyOrLaw
    flow_index: FlowIndex


class CassonPart(ModelPart):
    """Parameters of a Casson fluid."""

    law = Casson

    yield_stress: YieldStressOrLaw
    casson_viscosity: ViscosityOrLaw


class RobertsonStiffPart(ModelPart):
    """Parameters of a Robertson-Stiff fluid."""

    law = RobertsonStiff

    consistency: ConsistencyOrLaw
    flow_index: FlowIndex
    rate_offset: ShearRate


class SiskoPart(ModelPart):
    """Parameters of a Sisko fluid."""

    law = Sisko

    infinite_shear_viscosity: LimitViscosity
    consistency: ConsistencyOrLaw
    flow_index: FlowIndex


class EllisPart(ModelPart):
    """Parameters of an Ellis fluid."""

    law = Ellis

    zero_shear_viscosity: Viscosity
    half_stress: Stress
    exponent: Annotated[float, Field(ge=1, le=10), BeforeValidator(read_number)]


class TwoViscositiesPart(ModelPart):
    """Parameters of a fluid whose viscosity falls from one value to another."""

    zero_shear_viscosity: Viscosity
    infinite_shear_viscosity: LimitViscosity

    @check("infinite_shear_viscosity")
    @classmethod
    def _not_above_the_other(cls, value: float, info: ValidationInfo) -> float:
        if value > info.data.get("zero_shear_viscosity", value):
            raise at_odds("more than 'zero_shear_viscosity'; the model is one of falling viscosity")
        return value


class CrossPart(TwoViscositiesPart):
    """Parameters of a Cross fluid."""

    law = Cross

    time_constant: Time
    exponent: Exponent

    @model_validator(mode="after")
    def _rising(self) -> Self:
        law = self.rheology()
        if isinstance(law, GeneralRheology) and not law.is_rising():
            falls = "with these parameters the shear stress falls as the shear rate rises, which no fluid does"
            raise at_odds(f"{falls}; give an exponent of at most 1, or more infinite_shear_viscosity", "model")
        return self


class CarreauPart(TwoViscositiesPart):
    """Parameters of a Carreau fluid; its stress rises with any of them."""

    law = Carreau

    time_constant: Time
    flow_index: FlowIndex
    transition_exponent: Exponent = 2.0


RHEOLOGY_PARTS: Final[dict[str, type[ModelPart]]] = {
    "newtonian": NewtonianPart,
    "power-law": PowerLawPart,
    "bingham": BinghamPart,
    "herschel-bulkley": HerschelBulkleyPart,
    "casson": CassonPart,
    "robertson-stiff": RobertsonStiffPart,
    "cross": CrossPart,
    "carreau": CarreauPart,
    "sisko": SiskoPart,
    "ellis": EllisPart,
}


class UnknownModelPart(ModelPart):
    """A rheology of no known model: nothing but the name of the model is looked at."""

    model_config = ConfigDict(extra="ignore")

    model: Annotated[str, choice("model", lambda: tuple(RHEOLOGY_PARTS))]


def _tag(value: object) -> str:
    if not isinstance(value, dict):
        return "<other>"
    if "flow_curve" in value:
        return "<flow_curve>"
    model = value.get("model")
    name = model.text if isinstance(model, Scalar) else ""
    return f"<{name}>" if name in RHEOLOGY_PARTS else "<other>"


if TYPE_CHECKING:
    RheologyPart = ModelPart | FlowCurvePart
else:
    RheologyPart = Annotated[
        Union[
            *(
                Annotated[later("rheology_part", part.__name__), Tag(f"<{key}>")]
                for key, part in RHEOLOGY_PARTS.items()
            ),
            Annotated[later("flow_curve_part", "FlowCurvePart"), Tag("<flow_curve>")],
            Annotated[UnknownModelPart, Tag("<other>")],
        ],
        Discriminator(_tag),
    ]
