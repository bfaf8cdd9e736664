"""What a duty is held against: the flow wanted, the best-efficiency flow, NPSH, motor, torque, relief, restart."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace

from pipeflow.case.model import Case, Pump
from pipeflow.operability.limits import at_least, at_most, not_checked
from pipeflow.study.curve_result import DutyPoint
from pipeflow.units import format_si
from pipeflow.verdict import Check

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
    """Hold the power asked for, the lower efficiency and the margin in it, against a motor that is there."""
    asked = [duty.motor_power for duty in duties if duty.motor_power is not None]
    if pump.motor_power is None or not asked:
        return None
    value = max(asked) / pump.number
    basis = f"by the lower of the two efficiencies, {pump.motor_margin:.0%} spare"
    return at_most("motor_power", value, value, pump.motor_power, "W", basis)


def npsh_check(pump: Pump, worst: DutyPoint | None, needs: tuple[str, ...], asked: float | None) -> Check:
    """Hold NPSH available against what is asked for with its margin, at the highest flow and the lowest level."""
    basis = (
        "at the pump's inlet, lowest level and highest flow, upper figure; asked: NPSH required + max(1 m, 0.3 of it)"
    )
    available = worst.npsh_available if worst else None
    if worst is not None and worst.npsh_required is None:
        needs = (*needs, f"npsh_required in {pump.curve}")
    if needs or worst is None or available is None or asked is None:
        return not_checked("npsh", needs, "m", "NPSH available against required", available)
    return at_least("npsh", available, asked, "m", f"{basis} (common practice); the maker states the margin")


def torque_check(pump: Pump, torque: float | None) -> Check | None:
    """Hold the torque against the limit of the shaft."""
    if pump.torque_limit is None or torque is None:
        return None
    return at_most("torque", torque, torque, pump.torque_limit, "N.m", "at the highest pressure of a duty")


def restart_check(required: float, credit: float | None, basis: str) -> Check:
    """Hold the head that sets the line going against what the pump may be credited with, m."""
    said = f"to set the full line going, the factor in it; {basis}; local codes and a licensed engineer settle how"
    if credit is None:
        return not_checked("restart_head", ("efficiency of the curve",), "m", said, required)
    return at_most("restart_head", required, required, credit, "m", said)


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
