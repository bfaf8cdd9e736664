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
from pipeflow.sources import Source


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
    laminar = (RABINOWITSCH_MOONEY, BUCKINGHAM_REINER, HAGEN_POISEUILLE, METZNER_REED)
    return (
        Section("Laminar flow", "", tuple(Choice(source) for source in laminar)),
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
    )


def _fluids(models: frozenset[str]) -> str:
    return "any fluid" if models == ALL_MODELS else ", ".join(sorted(models))
