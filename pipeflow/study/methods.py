"""The methods a case may choose from, laid out for pages."""

from __future__ import annotations

from dataclasses import dataclass

from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.laminar import BUCKINGHAM_REINER, HAGEN_POISEUILLE, METZNER_REED, RABINOWITSCH_MOONEY
from pipeflow.friction.methods import FAMILY, TURBULENT
from pipeflow.friction.transition import TRANSITION_LINE
from pipeflow.friction.turbulent import ALL_MODELS
from pipeflow.line.fittings import METHODS as FITTINGS
from pipeflow.line.kinetics import KINETIC_FACTORS
from pipeflow.line.losses import CONTRACTION, EXPANSION
from pipeflow.line.site import STANDARD_ATMOSPHERE
from pipeflow.operability.deposition import FORMULAS
from pipeflow.operability.energy import SPECIFIC_ENERGY
from pipeflow.operability.entrance import LANGHAAR, POOLE_RIDLEY, TURBULENT_ENTRANCE
from pipeflow.operability.pipe_wall import B31_3, B31_4, JOUKOWSKY, RATED
from pipeflow.operability.product import HEATING
from pipeflow.operability.residence import FASTEST_PARTICLE
from pipeflow.operability.restart import RESTART
from pipeflow.operability.settling import (
    LAMINAR_TRANSPORT,
    RICHARDSON_ZAKI,
    SCHILLER_NAUMANN,
    STATIC_SUSPENSION,
    STEINOUR,
    STOKES,
)
from pipeflow.pumping.correction import HI_NPSH, HI_VISCOSITY
from pipeflow.pumping.curve import AFFINITY, INTERPOLATION, TRIM
from pipeflow.pumping.displacement import ACCELERATION, GAP_SLIP, SLIP
from pipeflow.pumping.equivalent import (
    APPARENT_FOR_HEAD,
    DIFFERENTIAL_FOR_EFFICIENCY,
    OUTLET_PASSAGE,
    TWICE_THE_SPEED,
)
from pipeflow.pumping.motor import STANDARD_MOTORS
from pipeflow.pumping.solids import CAVE
from pipeflow.pumping.suction import NPSH, NPSH_MARGIN, SUCTION_YIELD
from pipeflow.rheology.conditions import ARRHENIUS, SOLIDS_LAWS
from pipeflow.rheology.fitting import AKAIKE
from pipeflow.rheology.instruments import KRIEGER_MARON, RABINOWITSCH
from pipeflow.rheology.quality import TAYLOR
from pipeflow.rheology.tube_viscometer import BAGLEY, MOONEY_SLIP
from pipeflow.sources import Source

SLURRIES = "turbulent flow of settling solids in a Newtonian liquid"
OPERABILITY = (
    LAMINAR_TRANSPORT, STATIC_SUSPENSION, STOKES, SCHILLER_NAUMANN, RICHARDSON_ZAKI, STEINOUR, LANGHAAR, POOLE_RIDLEY,
    TURBULENT_ENTRANCE, HEATING, RESTART, B31_3, B31_4, RATED, JOUKOWSKY, FASTEST_PARTICLE,
    SPECIFIC_ENERGY,
)  # fmt: skip

FLOW_CURVES = (RABINOWITSCH, KRIEGER_MARON, BAGLEY, MOONEY_SLIP, TAYLOR, AKAIKE, ARRHENIUS, SOLIDS_LAWS)
PUMPS = (
    INTERPOLATION, AFFINITY, TRIM, HI_VISCOSITY, HI_NPSH, APPARENT_FOR_HEAD, DIFFERENTIAL_FOR_EFFICIENCY,
    TWICE_THE_SPEED, OUTLET_PASSAGE, CAVE, SLIP, GAP_SLIP, ACCELERATION, NPSH, NPSH_MARGIN, SUCTION_YIELD,
    STANDARD_MOTORS,
)  # fmt: skip
PUMPED = {
    AFFINITY: "water",
    TRIM: "water",
    HI_VISCOSITY: "Newtonian liquids; slurries as an estimate",
    HI_NPSH: "Newtonian liquids; slurries as an estimate",
    CAVE: "settling solids in water",
    GAP_SLIP: "power-law fluids",
}


@dataclass(frozen=True)
class Choice:
    """One method: its record, the fluids it is for in words, whether it is in the family of the upper figure."""

    source: Source
    fluids: str = "any fluid"
    in_family: bool = False


@dataclass(frozen=True)
class Section:
    """Methods of one kind; ``case_key`` is the key of a case that chooses among them, if any does."""

    title: str
    case_key: str
    choices: tuple[Choice, ...]


def method_sections() -> tuple[Section, ...]:
    """Every method of the program, by kind."""
    laminar = (
        (RABINOWITSCH_MOONEY, "any fluid"),
        (BUCKINGHAM_REINER, "bingham"),
        (HAGEN_POISEUILLE, "newtonian"),
        (METZNER_REED, "any fluid"),
    )
    return (
        Section("Laminar flow", "", tuple(Choice(source, fluids) for source, fluids in laminar)),
        Section(
            "Turbulent flow",
            "methods.turbulent",
            tuple(Choice(m.source, _fluids(m.models), m in FAMILY) for m in TURBULENT.values()),
        ),
        Section(
            "End of laminar flow",
            "methods.critical",
            tuple(Choice(c.source, _fluids(c.models)) for c in CRITERIA.values()),
        ),
        Section("Transition", "", (Choice(TRANSITION_LINE),)),
        Section("Fittings", "methods.fittings", tuple(Choice(source) for source in FITTINGS.values())),
        Section("Changes of bore and exits", "", tuple(Choice(s) for s in (EXPANSION, CONTRACTION, KINETIC_FACTORS))),
        Section("Site", "", (Choice(STANDARD_ATMOSPHERE),)),
        Section(
            "Deposition of solids", "methods.deposition", tuple(Choice(f.source, SLURRIES) for f in FORMULAS.values())
        ),
        Section("Other checks", "", tuple(Choice(source) for source in OPERABILITY)),
        Section("Pumps", "", tuple(Choice(source, PUMPED.get(source, "any fluid")) for source in PUMPS)),
        Section("Flow curves, solids and temperature", "", tuple(Choice(source) for source in FLOW_CURVES)),
    )


def _fluids(models: frozenset[str]) -> str:
    return "any fluid" if models == ALL_MODELS else ", ".join(sorted(models))
