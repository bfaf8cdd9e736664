"""Candidate pumps set on one system curve: where they run there, and what speaks against it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from pipeflow.arrays import known
from pipeflow.case.model import Case, FlowRange, Pump
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.operability.validity import range_cautions
from pipeflow.pumping.curve import AFFINITY, INTERPOLATION, TRIM
from pipeflow.pumping.displacement import ACCELERATION, DEAD_HEAD, SLIP, DisplacementPump, acceleration_head
from pipeflow.pumping.duty import Duties, Intersection, duties
from pipeflow.pumping.faults import faults
from pipeflow.pumping.motor import STANDARD_MOTORS, motor_power, standard_motor
from pipeflow.pumping.slurry_curve import ESTABLISHED_SHARE, SlurryCurve
from pipeflow.pumping.suction import NPSH, NPSH_MARGIN, npsh_asked
from pipeflow.sources import Source
from pipeflow.study.flows import pipes_of, pump_position
from pipeflow.study.pumping import checks as pump_checks
from pipeflow.study.pumping.conditions import restart_pressure
from pipeflow.study.pumping.demand import Demand
from pipeflow.study.pumping.machines import (
    CENTRIFUGAL,
    Machine,
    all_on_water,
    at_low_flow,
    made,
    settled_speeds,
    thinner_than_tested,
    water_curve,
)
from pipeflow.study.pumping.result import CorrectionResult, DrawnCurve, DutyPoint, Kind, PumpOnLine
from pipeflow.study.result import MethodUse
from pipeflow.units import format_value
from pipeflow.verdict import Check

DRAWN_POINTS = 81


def pumps_on_line(case: Case, kind: Kind) -> tuple[PumpOnLine, ...]:
    """Set every pump of a case on its line; ``kind`` says what the case stands for, and so what is asked of a pump."""
    demand = Demand(case)
    return tuple(_Candidate(pump, case, kind, demand).on_line() for pump in case.pumps)


@dataclass(frozen=True)
class _Candidate:
    """One pump on one line."""

    pump: Pump
    case: Case
    kind: Kind
    demand: Demand

    def on_line(self) -> PumpOnLine:
        """Find where the pump runs, and hold it against what is asked."""
        is_restart = self.kind == "restart"
        speed, speed_upper = settled_speeds(self.pump, self.case, self.demand, for_restart=is_restart)
        machine, upper = made(self.pump, self.case, speed), made(self.pump, self.case, speed_upper)
        refusal = self._refusal(machine)
        found = Duties((), refusal) if refusal else self._meets(machine, self.demand.central)
        found_upper = Duties((), refusal) if refusal else self._meets(upper, self.demand.upper)
        duty, duty_upper = self._duty(machine, found.duty), self._duty(upper, found_upper.duty)
        others = (self._duty(machine, one) for one in found.intersections if one is not found.duty)
        reason = found_upper.reason or found.reason
        return PumpOnLine(
            name=self.pump.name,
            kind=self.pump.kind,
            speed=speed,
            speed_upper=speed_upper,
            water=None if self.pump.kind != CENTRIFUGAL else _drawn_on_water(self.pump, speed),
            drawn=None if refusal else _drawn(machine),
            correction=_correction(machine, duty, refusal) if isinstance(machine, SlurryCurve) else None,
            duty=duty,
            duty_upper=duty_upper,
            others=tuple(one for one in others if one is not None),
            checks=tuple(self._checks(upper, duty, duty_upper, reason)),
            cautions=tuple(self._cautions(machine, duty, found, found_upper)),
            methods=tuple(self._methods(machine)),
            duty_maximum=self._at_maximum,
        )

    @cached_property
    def _at_maximum(self) -> DutyPoint | None:
        """Duty of a variable speed that is to give maximum flow on the upper system curve, or comes nearest to it."""
        most = self.case.flow.maximum
        if self.pump.speed_maximum is None or self.kind not in ("case", "scenario") or most <= self.case.flow.design:
            return None
        fastest = replace(self.case, flow=FlowRange(most, most, most))
        machine = made(self.pump, self.case, settled_speeds(self.pump, fastest, self.demand, for_restart=False)[1])
        return None if self._refusal(machine) else self._duty(machine, self._meets(machine, self.demand.upper).duty)

    def _refusal(self, machine: Machine) -> str:
        if isinstance(machine, DisplacementPump) or not machine.refusal:
            return ""
        return "its speed is not given, which the correction needs" if self.pump.speed is None else machine.refusal

    def _meets(self, machine: Machine, system_head: pump_checks.SystemHead) -> Duties:
        return duties(machine.flow_and_head, machine.ends, system_head)

    def _duty(self, machine: Machine, crossing: Intersection | None) -> DutyPoint | None:
        if crossing is None:
            return None
        state = machine.state(np.array([crossing.parameter]))
        lower, power = known(state.efficiency_lower), known(state.shaft_power_upper)
        motor = None if power is None else float(motor_power(power / self.pump.number, self.pump.motor_margin))
        best = machine.best_flow if isinstance(machine, SlurryCurve) else None
        return DutyPoint(
            flow=crossing.flow,
            head=crossing.head,
            efficiency=known(state.efficiency),
            shaft_power=known(state.shaft_power),
            efficiency_for_motor=lower,
            motor_power=motor,
            standard_motor=None if motor is None else standard_motor(motor),
            best_efficiency_share=crossing.flow / best if best else None,
            npsh_available=self._npsh_available(machine, crossing.flow),
            npsh_required=known(state.npsh_required),
            stable=crossing.is_stable,
            established=bool(state.established[0]),
        )

    def _npsh_available(self, machine: Machine, flow: float) -> float | None:
        available = self.demand.at(np.array([flow])).npsh_available
        return known(available - self._acceleration(machine, flow))

    def _acceleration(self, machine: Machine, flow: float) -> float:
        """Head that the strokes of a pump of pistons take from the suction line, m."""
        strokes, speed = self.pump.reciprocating, getattr(machine, "speed", None)
        if strokes is None or speed is None:
            return 0.0
        names = [element.name for element in self.case.route[: pump_position(self.case)]]
        suction = [pipe for pipe in pipes_of(self.case) if pipe.name in names]
        heads = (
            acceleration_head(
                pipe.length, flow / (np.pi / 4.0 * pipe.diameter**2), speed, strokes.cylinders, strokes.constant
            )
            for pipe in suction
        )
        return float(sum(heads, start=np.zeros(())))

    def _checks(
        self, machine: Machine, duty: DutyPoint | None, upper: DutyPoint | None, reason: str
    ) -> Iterator[Check]:
        both = [one for one in (duty, upper) if one is not None]
        if self.kind == "restart":
            yield from self._restart(machine)
            return
        if self.kind == "water" and duty is None:
            yield pump_checks.water_check(reason, known(machine.state(np.array([machine.ends[1]])).shaft_power_upper))
        if self.kind == "water":
            yield from filter(None, [self._fills()])
        else:
            yield pump_checks.flow_check(self.case, duty, upper, reason)
            yield from filter(None, [pump_checks.established_check(both), pump_checks.share_check(both)])
        both += filter(None, [self._at_maximum])
        if both:
            yield self._npsh(machine, both)
            yield from filter(None, [pump_checks.motor_check(self.pump, both), *self._of_displacement(machine, both)])
        if self.kind == "case" and isinstance(machine, DisplacementPump):
            yield from pump_checks.relief_checks(self.pump, *pump_checks.pressures_around(self.case))

    def _fills(self) -> Check | None:
        """Whether a rotodynamic pump at its highest speed fills the line with water over its crest."""
        machine = made(self.pump, self.case, self.pump.speed_maximum or self.pump.speed)
        if isinstance(machine, DisplacementPump) or machine.refusal:
            return None
        first = machine.ends[0]
        found = pump_checks.fill_check(self.case, float(machine.state(np.array([first])).head[0]))
        is_unsure = first > 0 and found is not None and found.status == "fail"  # it gives more at shut-off
        return replace(found, status="caution") if is_unsure and found else found

    def _npsh(self, machine: Machine, both: list[DutyPoint]) -> Check:
        """At the highest flow of a duty, or at maximum flow where the pump's curve reaches it."""
        needs = tuple(key for key, known in pump_checks.needs_of_npsh(self.case).items() if not known)
        if not self.pump.table.npsh_required:
            needs = (*needs, f"npsh_required in {self.pump.curve}")
        highest = max(both, key=lambda one: one.flow)
        flow, available = highest.flow, highest.npsh_available
        required = max((one.npsh_required or 0.0 for one in both), default=0.0)
        if isinstance(machine, SlurryCurve) and flow < self.case.flow.maximum * (1.0 - 1e-9) <= machine.ends[1]:
            flow = self.case.flow.maximum
            required = known(machine.state(np.array([flow])).npsh_required) or required
            available = self._npsh_available(machine, flow)
        return pump_checks.npsh_check(available, float(npsh_asked(required)), needs)

    def _of_displacement(self, machine: Machine, both: list[DutyPoint]) -> Iterator[Check | None]:
        """Torque and relief at the highest pressure of a duty."""
        if isinstance(machine, DisplacementPump):
            weight = machine.density * STANDARD_GRAVITY
            added = weight * max(one.head for one in both)
            found = weight * float(self.demand.at(np.array([one.flow for one in both])).inlet.max())
            yield pump_checks.torque_check(self.pump, known(machine.torque(added)))
            yield pump_checks.relief_above_duty(self.pump, added + max(found, 0.0))

    def _restart(self, machine: Machine) -> Iterator[Check]:
        """Hold the head that sets the line going against what the pump may be credited with at low flow."""
        pressure = restart_pressure(self.case)
        weight = float(self.case.fluid.density) * STANDARD_GRAVITY
        if pressure is None:
            return
        if isinstance(machine, DisplacementPump):
            limit, basis = self.pump.relief_pressure, "against the relief setting"
            credit = None if limit is None else limit / weight
            yield from self._strength_at(machine, pressure)
        else:
            basis = "against 80 % of the least corrected head from 0 to 40 % of best-efficiency flow"
            credit = _credit(at_low_flow(machine))
        established = isinstance(machine, DisplacementPump) or machine.method == "none"
        yield pump_checks.restart_check(pressure / weight, credit, basis, is_established=established)
        yield from filter(None, [pump_checks.suction_yield_check(self.case)])

    def _strength_at(self, machine: DisplacementPump, pressure: float) -> Iterator[Check]:
        """Hold torque and motor of a positive-displacement pump against a pressure it must start against, Pa."""
        where, power = "at the pressure of a restart", known(machine.state(pressure).shaft_power_upper)
        asked = None if power is None else float(motor_power(power / self.pump.number, self.pump.motor_margin))
        torque = pump_checks.torque_check(self.pump, known(machine.torque(pressure)), where)
        yield from filter(None, [torque, pump_checks.motor_at(self.pump, asked, f", {where} and this speed")])

    def _cautions(self, machine: Machine, duty: DutyPoint | None, found: Duties, upper: Duties) -> Iterator[str]:
        if self.kind == "restart":
            return
        yield from filter(None, dict.fromkeys([found.reason, upper.reason]))
        if self.kind == "water":
            return
        if found.is_ambiguous:
            yield (
                f"the curves cross {len(found.intersections)} times: how the pump is started decides where it runs; "
                "where the line's curve falls past the pump's the flow does not hold"
            )
        yield from self._about_speed(duty)
        yield from self._about_maximum()
        flows = self.case.flow
        if duty is not None and duty.flow > flows.maximum * (1.0 + 1e-6) > 0:
            less = (
                "slow it, never throttle it" if isinstance(machine, DisplacementPump) else "throttle, trim or slow it"
            )
            yield f"it gives more than maximum flow, {format_value(flows.maximum, 'm3/h')}: {less}"
        if isinstance(machine, DisplacementPump):
            yield DEAD_HEAD
            if thinner_than_tested(self.pump, self.case):
                yield "what flows may be thinner in the gaps than the liquid of the curve: more slips, and less flows"
            return
        yield from (fault.message for fault in faults(water_curve(self.pump)) if fault.is_caution)
        for source in machine.sources:
            yield from range_cautions(source, machine.values_in_range)

    def _about_speed(self, duty: DutyPoint | None) -> Iterator[str]:
        """Say that a variable speed ends before the one that gives the design flow."""
        ends, wanted = (self.pump.speed_minimum, self.pump.speed_maximum), self.case.flow.design
        if None in ends or duty is None or wanted <= 0 or abs(duty.flow / wanted - 1.0) <= 1e-6:
            return
        end = "lowest" if duty.flow > wanted else "highest"
        more = "more" if duty.flow > wanted else "less"
        yield f"at the {end} speed of its range it gives {more} than design flow, {format_value(wanted, 'm3/h')}"

    def _about_maximum(self) -> Iterator[str]:
        """Say that the range of a variable speed ends before maximum flow."""
        found, wanted = self._at_maximum, self.case.flow.maximum
        if found is not None and found.flow < wanted * (1.0 - 1e-6):
            given, most = format_value(found.flow, "m3/h"), format_value(wanted, "m3/h")
            yield f"its highest speed gives {given} on the upper system curve, less than maximum flow, {most}"

    def _methods(self, machine: Machine) -> Iterator[MethodUse]:
        for source in self._sources(machine):
            yield MethodUse(source, "pumps")

    def _sources(self, machine: Machine) -> Iterator[Source]:
        if isinstance(machine, SlurryCurve):
            yield INTERPOLATION
            yield from machine.sources
            if self.pump.curve_speed is not None and self.pump.curve_speed != machine.water.speed:
                yield AFFINITY
            if self.pump.trimmed_diameter is not None:
                yield TRIM
        else:
            yield SLIP
        if self.pump.reciprocating is not None:
            yield ACCELERATION
        yield from (NPSH, NPSH_MARGIN, STANDARD_MOTORS)


def _credit(machine: SlurryCurve) -> float | None:
    """Head that a restart may count on, m; None without a best-efficiency flow or a figure at every low flow."""
    if machine.best_flow is None:
        return None
    head = machine.state(np.linspace(machine.ends[0], ESTABLISHED_SHARE * machine.best_flow, DRAWN_POINTS)).head
    return known(pump_checks.CREDITED * head.min())


def _correction(machine: SlurryCurve, duty: DutyPoint | None, refusal: str) -> CorrectionResult:
    flow = duty.flow if duty is not None else machine.best_flow
    if refusal or flow is None:
        return CorrectionResult("none", None, None, None, note=refusal or machine.derating.reason)
    found = machine.correction(np.array([flow]))
    viscous = machine.method != "none"
    return CorrectionResult(
        method=machine.method,
        head_factor=known(found.head_factor),
        flow_factor=known(found.flow_factor),
        efficiency_factor=known(found.efficiency_factor),
        efficiency_factor_for_motor=known(found.efficiency_factor_lower),
        parameter_head=known(found.b_head),
        parameter_efficiency=known(found.b_efficiency),
        viscosity_head=known(found.viscosity.apparent * machine.density),
        viscosity_efficiency=known(found.viscosity.differential * machine.density),
        shear_rate=known(found.viscosity.shear_rate),
        note=machine.derating.reason if viscous else "",
    )


def _drawn(machine: Machine) -> DrawnCurve:
    """The pump's curve in what the line holds, by rising flow; points without a figure are left out."""
    state = machine.state(np.linspace(*machine.ends, DRAWN_POINTS))
    order = [at for at in np.argsort(state.flow) if np.isfinite(state.head[at])]
    return DrawnCurve(
        flow=tuple(float(state.flow[at]) for at in order),
        head=tuple(float(state.head[at]) for at in order),
        efficiency=tuple(known(state.efficiency[at]) for at in order),
        npsh_required=tuple(known(state.npsh_required[at]) for at in order),
        established=tuple(bool(state.established[at]) for at in order),
    )


def _drawn_on_water(pump: Pump, speed: float | None) -> DrawnCurve:
    curve = all_on_water(pump, speed)
    flow = np.linspace(*curve.ends, DRAWN_POINTS)
    return DrawnCurve(
        flow=tuple(flow.tolist()),
        head=tuple(curve.head_at(flow).tolist()),
        efficiency=tuple(known(value) for value in curve.efficiency_at(flow)),
        npsh_required=tuple(known(value) for value in curve.npsh_required_at(flow)),
        established=(True,) * flow.size,
    )
