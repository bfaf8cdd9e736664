"""What a study gives: frozen dataclasses in SI units."""

from __future__ import annotations

from dataclasses import dataclass, field

from pipeflow.case.model import Case
from pipeflow.sources import Source
from pipeflow.study.readings.result import RheologyAnswers
from pipeflow.verdict import Check

SAFETY_NOTICE = (
    "A pressurised slurry line can hurt people. A blocked or stopped line may need far more pressure to restart than "
    "to run, and may hold pressure after the pump stops: fit relief, isolation and a way to depressurise, and prove "
    "it empty before opening it. Hot or corrosive contents need their own precautions. These figures are an aid to "
    "design: local codes and the judgement of a licensed engineer take precedence."
)


@dataclass(frozen=True)
class ElementResult:
    """One element at design flow; None where a figure has no meaning for the element or the flow.

    ``reducer_loss`` is the part of ``fitting_loss`` due to the change of bore from the pipe before.
    ``critical_velocity`` is the end of laminar flow by the method chosen, ``critical_velocity_lowest`` and ``_highest``
    by all criteria that know the rheology.
    """

    name: str
    kind: str
    rise: float = 0.0
    friction_loss: float = 0.0
    friction_loss_upper: float = 0.0
    fitting_loss: float = 0.0
    reducer_loss: float = 0.0
    equipment_loss: float = 0.0
    size: str | None = None
    diameter: float | None = None
    length: float | None = None
    roughness: float | None = None
    velocity: float | None = None
    regime: str | None = None
    method: str | None = None
    reynolds_mr: float | None = None
    reynolds_critical: float | None = None
    critical_velocity: float | None = None
    critical_velocity_lowest: float | None = None
    critical_velocity_highest: float | None = None
    turbulent_velocity: float | None = None
    friction_factor_fanning: float | None = None
    wall_shear_stress: float | None = None
    wall_shear_rate: float | None = None
    local_flow_index: float | None = None


@dataclass(frozen=True)
class Totals:
    """The line at design flow: losses in Pa, heads in metres of the slurry."""

    friction_loss: float
    friction_loss_upper: float
    fitting_loss: float
    equipment_loss: float
    head_loss: float
    head_loss_upper: float
    static_head: float
    total_head: float
    total_head_upper: float
    pressure_required: float
    pressure_required_upper: float


@dataclass(frozen=True)
class MethodUse:
    """A published method that the result rests on, and what for."""

    source: Source
    used_for: str


@dataclass(frozen=True)
class MethodSpread:
    """Head loss at design flow by each turbulent method of the family, m, and why others are not among them."""

    head_loss: dict[str, float]
    left_out: dict[str, str]


@dataclass(frozen=True)
class ProfilePoint:
    """One place of the line at design flow: heads in m of the slurry above the route's start, gauge pressures in Pa."""

    element: str
    place: str
    distance: float
    elevation: float
    head: float
    head_upper: float
    pressure: float
    pressure_upper: float


@dataclass(frozen=True)
class SlackResult:
    """Head that the high points ask for, m, which place governs, and the share of each element that runs slack."""

    head_required: float
    head_without: float
    governed_by: str
    share: dict[str, float]


@dataclass(frozen=True)
class ProfileResult:
    """The line along its route, with its high and low points.

    ``pump_after`` names the element before the pump, None is the start of the route; ``before_pump`` is the index of
    its point, ``after_pump`` the same place past it, before the entrance of the next element. ``pump_head`` is what it
    must give, m: the total head, or more where a high point governs; ``pump_pressure`` the same, Pa. ``slack`` is None
    where it could not be checked; ``needed_for_slack`` names the keys it needs. ``slack_by_vacuum`` tells that it was
    checked against a vacuum at sea level for want of them. Pressures in Pa, gauge.
    """

    points: tuple[ProfilePoint, ...]
    pump_after: str | None
    before_pump: int
    after_pump: ProfilePoint
    pump_head: float
    pump_head_upper: float
    pump_pressure: float
    pump_pressure_upper: float
    highest_point: str
    lowest_point: str
    lowest_pressure: float
    lowest_pressure_at: str
    highest_pressure_at: str
    slack: SlackResult | None
    slack_upper: SlackResult | None
    slack_by_vacuum: bool
    needed_for_slack: tuple[str, ...]


@dataclass(frozen=True)
class Result:
    """What is known of one case; the scenarios are results of their own."""

    case: Case
    elements: tuple[ElementResult, ...]
    totals: Totals
    spread: MethodSpread
    profile: ProfileResult
    checks: tuple[Check, ...]
    cautions: tuple[str, ...]
    methods: tuple[MethodUse, ...]
    scenarios: dict[str, Result]
    rheology: RheologyAnswers = field(default_factory=RheologyAnswers)

    @property
    def fails(self) -> bool:
        """A check fails, of the case itself or of one of its scenarios."""
        own = any(check.status == "fail" for check in self.checks)
        return own or any(result.fails for result in self.scenarios.values())
