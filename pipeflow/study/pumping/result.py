"""What the study of a system curve and its pumps gives: frozen dataclasses in SI units."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from pipeflow.case.model import Case
from pipeflow.study.result import MethodUse
from pipeflow.verdict import Check

Kind = Literal["case", "scenario", "water", "restart"]


@dataclass(frozen=True)
class FlatBand:
    """A pipe whose head hardly rises with the flow in its transition: between which flows, m³/s, and by how much."""

    pipe: str
    flow_from: float
    flow_to: float
    exponent: float


@dataclass(frozen=True)
class SystemCurve:
    """Head that a line asks of its pump, by flow.

    Attributes
    ----------
    flow : tuple of float
        m³/s, rising; the first is 0, where the heads are the limit as the flow starts.
    total_head, total_head_upper : tuple of float
        Losses and static head by the central and the highest method, m of what flows.
    pump_head, pump_head_upper : tuple of float
        The same, or more where a high point of the route asks for more, m.
    static_head : tuple of float
        m.
    regime : tuple of str
        The regime of the pipes, ``mixed`` where they differ.
    laminar_until, turbulent_from : float or None
        Flow at which the first pipe leaves laminar flow, and from which all are turbulent; None off the curve.
    deposition_flow : float or None
        Flow at which solids begin to settle out in some pipe; None where not known.
    flat_bands : tuple of FlatBand
    """

    flow: tuple[float, ...]
    total_head: tuple[float, ...]
    total_head_upper: tuple[float, ...]
    pump_head: tuple[float, ...]
    pump_head_upper: tuple[float, ...]
    static_head: tuple[float, ...]
    regime: tuple[str, ...]
    laminar_until: float | None = None
    turbulent_from: float | None = None
    deposition_flow: float | None = None
    flat_bands: tuple[FlatBand, ...] = ()


@dataclass(frozen=True)
class DrawnCurve:
    """A pump's curve as drawn, columns of one length; where ``established`` is False a figure is not credited."""

    flow: tuple[float, ...]
    head: tuple[float, ...]
    efficiency: tuple[float | None, ...]
    npsh_required: tuple[float | None, ...]
    established: tuple[bool, ...]


@dataclass(frozen=True)
class DutyPoint:
    """Where a pump's curve meets the line's.

    Attributes
    ----------
    flow, head : float
        m³/s, m of what flows.
    efficiency, shaft_power : float or None
        Fraction; W, ``rho g Q H/efficiency``.
    efficiency_for_motor, motor_power, standard_motor : float or None
        The lower efficiency of the two ways to correct it, the power the motor must have with its margin, and the next
        standard size, W.
    best_efficiency_share : float or None
        Flow over the corrected flow of best efficiency.
    npsh_available, npsh_required : float or None
        m.
    stable : bool
        The line's head rises faster with the flow than the pump's.
    established : bool
        Within the flows where the corrected curve may be credited.
    """

    flow: float
    head: float
    efficiency: float | None
    shaft_power: float | None
    efficiency_for_motor: float | None
    motor_power: float | None
    standard_motor: float | None
    best_efficiency_share: float | None
    npsh_available: float | None
    npsh_required: float | None
    stable: bool
    established: bool


@dataclass(frozen=True)
class CorrectionResult:
    """How a pump's water curve was corrected: factors at the duty, and what they rest on; None where not known.

    ``parameter_head`` and ``parameter_efficiency`` are B of the two equivalent viscosities, Pa.s, at ``shear_rate``.
    """

    method: str
    head_factor: float | None
    flow_factor: float | None
    efficiency_factor: float | None
    efficiency_factor_for_motor: float | None = None
    parameter_head: float | None = None
    parameter_efficiency: float | None = None
    viscosity_head: float | None = None
    viscosity_efficiency: float | None = None
    shear_rate: float | None = None
    note: str = ""


@dataclass(frozen=True)
class PumpOnLine:
    """One candidate on one system curve.

    Attributes
    ----------
    speed, speed_upper : float or None
        The speeds it runs at on the central and the upper system curve, rad/s: where it may vary, those that give the
        design flow.
    water, drawn : DrawnCurve or None
        Its curve on water at that speed, and as corrected for what flows.
    duty, duty_upper : DutyPoint or None
        On the central and the upper system curve; None where the curves do not meet.
    duty_maximum : DutyPoint or None
        Of a pump of variable speed, at the speed that gives maximum flow on the upper system curve.
    others : tuple of DutyPoint
        Further intersections with the central curve.
    checks : tuple of Check
    cautions : tuple of str
        Reasons among them where there is no duty.
    methods : tuple of MethodUse
    """

    name: str
    kind: str
    speed: float | None
    speed_upper: float | None
    water: DrawnCurve | None
    drawn: DrawnCurve | None
    correction: CorrectionResult | None
    duty: DutyPoint | None
    duty_upper: DutyPoint | None
    others: tuple[DutyPoint, ...]
    checks: tuple[Check, ...]
    cautions: tuple[str, ...]
    methods: tuple[MethodUse, ...]
    duty_maximum: DutyPoint | None = None


@dataclass(frozen=True)
class Flush:
    """The line flushed by one pump: velocity in the slowest pipe, m/s, volume of the line, m³, and time for it, s."""

    pump: str
    velocity: float
    volume: float
    time: float


@dataclass(frozen=True)
class Condition:
    """The line in one state: the case itself, a scenario of it, full of water, or set going after a stop."""

    name: str
    kind: Kind
    case: Case
    system: SystemCurve
    pumps: tuple[PumpOnLine, ...]
    flushes: tuple[Flush, ...] = ()
    cautions: tuple[str, ...] = ()


@dataclass(frozen=True)
class Ranked:
    """A candidate in its rank: whether it holds in every condition, and why not.

    ``shaft_power`` is that of the case itself, all ``number`` pumps together, ``standard_motor`` the size of each motor
    that covers every condition with the margin, W. ``not_checked`` names the checks that lacked an input.
    """

    name: str
    holds: bool
    shaft_power: float | None
    standard_motor: float | None
    reasons: tuple[str, ...]
    number: int = 1
    not_checked: tuple[str, ...] = ()


@dataclass(frozen=True)
class CurveResult:
    """The system curves of a case, its pumps on them, and their ranking; the first condition is the case itself.

    ``envelope_low`` and ``envelope_high`` are the heads between which case and scenarios lie, upper figures in the
    latter, at the flows of the first condition, m.
    """

    conditions: tuple[Condition, ...]
    envelope_low: tuple[float, ...]
    envelope_high: tuple[float, ...]
    ranking: tuple[Ranked, ...]
    cautions: tuple[str, ...]
    methods: tuple[MethodUse, ...]

    @property
    def own(self) -> Condition:
        """The case itself."""
        return self.conditions[0]

    @property
    def case(self) -> Case:
        """The case as the file gives it."""
        return self.own.case

    @property
    def fails(self) -> bool:
        """There are candidates, and none of them holds in every condition."""
        return bool(self.ranking) and not any(one.holds for one in self.ranking)
