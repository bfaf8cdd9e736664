"""What a duty is held against: the flow wanted, the best-efficiency flow, NPSH, motor, torque, relief, restart."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import replace

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case, Pump
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.elements import Pipe, Vessel
from pipeflow.operability.limits import at_least, at_most, not_checked
from pipeflow.pumping.duty import LINE_ASKS_MORE, RUN_OUT
from pipeflow.pumping.suction import SUCTION_YIELD, suction_yield_pressure
from pipeflow.study.checks import allowed_pressures, stopped_line
from pipeflow.study.flows import pump_position
from pipeflow.study.profile import atmospheric_pressure
from pipeflow.study.pumping.conditions import restart_pressure
from pipeflow.study.pumping.result import DutyPoint
from pipeflow.units import format_si
from pipeflow.verdict import Check

SystemHead = Callable[[Array], Array]
PREFERRED = (0.7, 1.2)
"""Share of the best-efficiency flow within which a rotodynamic pump runs well (ANSI/HI 9.6.3, from memory)."""
CREDITED = 0.8
"""Share of the least head of the corrected curve that a restart may count on (common practice)."""


def flow_check(case: Case, duty: DutyPoint | None, upper: DutyPoint | None, reason: str) -> Check:
    """Hold the flow of a pump, judged on the upper system curve, against the design flow."""
    wanted = case.flow.design
    if duty is None and upper is None:
        return Check("duty_flow", "fail", None, wanted, "m3/s", reason, sense="at least")
    central, least = (None if one is None else one.flow for one in (duty, upper))
    basis = "on the upper system curve, against design flow"
    if least is None:
        said = f"only on the central system curve; on the upper one {reason}"
        return Check(
            "duty_flow",
            "caution" if (central or 0.0) >= wanted else "fail",
            central,
            wanted,
            "m3/s",
            said,
            sense="at least",
        )
    found = at_least("duty_flow", least, wanted * (1.0 - 1e-9), "m3/s", basis)
    found = replace(found, limit=wanted)
    return replace(found, status="caution") if found.status == "fail" and (central or 0.0) >= wanted else found


def water_check(reason: str, last_power: float | None) -> Check:
    """Say that the line full of water holds no duty: a pump that would run out can still be started throttled.

    ``last_power`` is that at the last flow of its curve, W.
    """
    if reason == RUN_OUT:
        takes = "" if last_power is None else f", where it takes {format_si(last_power, 'W')} at the shaft"
        said = f"{reason}{takes}; it is started, flushed and tested throttled"
        return Check("run_out", "caution", None, None, "", said)
    so = "; it cannot flush the line by itself" if reason == LINE_ASKS_MORE else ""
    return Check("duty_on_water", "caution", None, None, "", f"{reason}{so}")


def fill_check(case: Case, shut_off: float) -> Check | None:
    """Hold the lift over the crest of an empty line, m, against the head of the pump at its first flow.

    A line once full may run as a siphon; until then nothing behind the crest helps.
    """
    rises = [float(element.rise) if isinstance(element, Pipe) else 0.0 for element in case.route]
    heights: Array = np.cumsum(rises)[pump_position(case) :]
    if not heights.size or not np.isfinite(shut_off):
        return None
    source = case.source or Vessel()
    filled = float(source.level) + float(source.pressure) / (float(case.fluid.density) * STANDARD_GRAVITY)
    lift = max(float(heights.max()) - filled, 0.0)
    basis = "from the level of the source over the highest point after the pump, no siphon yet; against its first head"
    return at_most("fill_head", lift, lift, shut_off, "m", basis)


def established_check(duties: Sequence[DutyPoint]) -> Check | None:
    """Refuse to credit a head that the correction does not establish."""
    if all(duty.established for duty in duties):
        return None
    share = min(duty.best_efficiency_share or 0.0 for duty in duties)
    basis = "the corrected head below 40 % of best-efficiency flow is not established, and not credited"
    return Check("duty_established", "fail", share, 0.4, "", basis, sense="at least")


def share_check(duties: Sequence[DutyPoint]) -> Check | None:
    """Hold the flow against the best-efficiency flow; outside the preferred region is a caution."""
    shares = [duty.best_efficiency_share for duty in duties if duty.best_efficiency_share is not None]
    if not shares:
        return None
    worst = max(shares, key=lambda share: max(PREFERRED[0] - share, share - PREFERRED[1]))
    basis = "share of best-efficiency flow; 70 to 120 % is the preferred region (ANSI/HI 9.6.3, from memory)"
    if worst > PREFERRED[1]:
        over = at_most("best_efficiency_share", worst, worst, PREFERRED[1], "", basis)
        return replace(over, status="caution")
    return at_least("best_efficiency_share", worst, PREFERRED[0], "", basis, below="caution")


def motor_check(pump: Pump, duties: Sequence[DutyPoint]) -> Check | None:
    """Hold the power asked for at the duties against a motor that is there."""
    return motor_at(pump, max((duty.motor_power for duty in duties if duty.motor_power is not None), default=None))


def motor_at(pump: Pump, asked: float | None, where: str = "") -> Check | None:
    """Hold a power asked for, W, the lower efficiency and the margin in it, against a motor that is there."""
    if pump.motor_power is None:
        return None
    each = "each motor, " if pump.number > 1 else ""
    basis = f"{each}by the lower of the two efficiencies, {pump.motor_margin:.0%} spare{where}"
    if asked is None:
        return not_checked("motor_power", (_efficiency_at_duty(pump),), "W", basis)
    return at_most("motor_power", asked, asked, pump.motor_power, "W", basis)


def needs_of_npsh(case: Case) -> dict[str, bool]:
    """Case keys that NPSH available rests on, and whether the case gives them."""
    vapour = case.liquid is not None and case.liquid.vapour_pressure is not None
    return {"site": atmospheric_pressure(case) is not None, "fluid.liquid.vapour_pressure": vapour}


def npsh_check(available: float | None, asked: float, needs: tuple[str, ...]) -> Check:
    """Hold NPSH available against what is asked for with its margin, m, at the highest flow and the lowest level."""
    basis = (
        "at the inlet, the higher of duty and maximum flow, lowest level, upper figure, against NPSH required + "
        "max(1 m, 0.3 of it) (common practice)"
    )
    if needs or available is None:
        return not_checked("npsh", needs, "m", basis, available)
    return at_least("npsh", available, asked, "m", basis)


def torque_check(pump: Pump, torque: float | None, where: str = "at the highest pressure of a duty") -> Check | None:
    """Hold the torque against the limit of the shaft."""
    if pump.torque_limit is None:
        return None
    if torque is None:
        return not_checked("torque", (_efficiency_at_duty(pump),), "N.m", where)
    return at_most("torque", torque, torque, pump.torque_limit, "N.m", where)


def _efficiency_at_duty(pump: Pump) -> str:
    """What a power that has no figure needs: a row of no efficiency says nothing of the power there."""
    return f"an efficiency above 0 in {pump.curve} on both sides of the duty"


def restart_check(required: float, credit: float | None, basis: str, *, is_established: bool) -> Check:
    """Hold the head that sets the line going against what the pump may give, m.

    Where the head at low flow is not established the check is a caution at best.
    """
    said = f"to set the full line going, the factor in it; {basis}; local codes and a licensed engineer settle how"
    if credit is None:
        return not_checked("restart_head", ("a curve from no flow on, with its efficiency",), "m", said, required)
    found = at_most("restart_head", required, required, credit, "m", said)
    if found.status == "ok" and not is_established:
        return replace(found, status="caution", basis=f"{said}; not established there, the vendor must confirm it")
    return found


def suction_yield_check(case: Case) -> Check | None:
    """Hold level and pressure of the source over the pump against the yield stress of the suction line at rest, Pa."""
    stopped, before = stopped_line(case), case.route[: pump_position(case)]
    suction = [element for element in before if isinstance(element, Pipe)]
    if stopped is None or not suction:
        return None
    stress, source = stopped.factor * stopped.static_yield_stress, case.source or Vessel()
    held = sum(float(suction_yield_pressure(pipe.length, pipe.diameter, stress)) for pipe in suction)
    pushed = _at_rest(case, float(source.level) if case.lowest_level is None else case.lowest_level)
    basis = (
        "lowest level and pressure of the source over the pump, against the static yield stress of the suction line, "
        "the factor in it: below that nothing flows to the pump by itself"
    )
    return at_least("suction_yield", pushed, held, "Pa", basis, SUCTION_YIELD.key, below="caution")


def relief_above_duty(pump: Pump, pressure: float) -> Check | None:
    """Hold the relief setting above the highest gauge pressure of a duty, Pa: below it the valve stands open."""
    if pump.relief_pressure is None:
        return None
    basis = "setting, above the highest pressure at the pump's outlet at a duty, gauge, at which it must stay shut"
    return at_least("relief_above_duty", pump.relief_pressure, pressure, "Pa", basis)


def relief_checks(pump: Pump, restart: float | None, allowed: float | None) -> Iterator[Check]:
    """Hold the relief setting above the pressure of a restart and below what the pipe holds, Pa."""
    if pump.relief_pressure is None:
        basis = "a positive-displacement pump against a closed valve rises until something breaks; relief is needed"
        yield not_checked("relief", ("pumps.relief_pressure",), "Pa", basis)
        return
    if restart is not None:
        basis = f"setting, {format_si(pump.relief_pressure, 'Pa')}, above the pressure of a restart"
        yield at_least("relief_above_restart", pump.relief_pressure, restart, "Pa", basis)
    if allowed is None:
        yield not_checked("relief_below_rating", ("pipe_wall",), "Pa", "setting, below what the pipe holds")
    else:
        basis = "setting, below what the weakest pipe holds"
        yield at_most("relief_below_rating", pump.relief_pressure, pump.relief_pressure, allowed, "Pa", basis)


def pressures_around(case: Case) -> tuple[float | None, float | None]:
    """Gauge pressure at the pump's outlet at a restart, and what the weakest pipe after it holds, Pa.

    None where not known.
    """
    names = {element.name for element in case.route[pump_position(case) :]}
    held = [limit for name, limit in allowed_pressures(case).items() if name in names]
    added, source = restart_pressure(case), case.source or Vessel()
    restart = None if added is None else added + max(_at_rest(case, float(source.level)), 0.0)
    return restart, min(held) if held and not any(np.isnan(held)) else None


def _at_rest(case: Case, level: float) -> float:
    """Gauge pressure that a level of the source, m above the route's start, puts on the pump at rest, Pa."""
    rise = sum(float(one.rise) for one in case.route[: pump_position(case)] if isinstance(one, Pipe))
    pressure = float(case.source.pressure) if case.source else 0.0
    return pressure + float(case.fluid.density) * STANDARD_GRAVITY * (level - rise)
