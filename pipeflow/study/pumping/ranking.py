"""Candidate pumps in their order: those that hold in every condition first, then by power."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from pipeflow.study.pumping.result import Condition, PumpOnLine, Ranked
from pipeflow.units import format_si
from pipeflow.verdict import Check


def ranked(conditions: Sequence[Condition]) -> tuple[Ranked, ...]:
    """Rank the candidates; the first condition is the case itself, whose power settles between those that hold."""
    every = [_ranked(index, conditions) for index in range(len(conditions[0].pumps))]
    return tuple(sorted(every, key=_order))


def _order(one: Ranked) -> tuple[bool, float]:
    return not one.holds, math.inf if one.shaft_power is None else one.shaft_power


def _ranked(index: int, conditions: Sequence[Condition]) -> Ranked:
    own = conditions[0].pumps[index]
    reasons = tuple(reason for condition in conditions for reason in _reasons(condition.name, condition.pumps[index]))
    duty = own.duty_upper or own.duty
    power, number = duty.shaft_power if duty else None, conditions[0].case.pumps[index].number
    checks = (check for condition in conditions for check in condition.pumps[index].checks)
    unsure = dict.fromkeys(check.name.replace("_", " ") for check in checks if check.status == "not checked")
    return Ranked(own.name, not reasons, power, _motor(index, conditions), reasons, number, tuple(unsure))


def _motor(index: int, conditions: Sequence[Condition]) -> float | None:
    """Give the largest of the standard motors that the duties ask for, W; a gel unbroken at full flow is none."""
    pumps = [condition.pumps[index] for condition in conditions if condition.kind != "restart"]
    duties = [duty for pump in pumps for duty in (pump.duty, pump.duty_upper, pump.duty_maximum) if duty]
    return max((duty.standard_motor for duty in duties if duty.standard_motor), default=None)


def _reasons(condition: str, pump: PumpOnLine) -> Iterator[str]:
    yield from (f"{condition}: {_worded(check)}" for check in pump.checks if check.status == "fail")


def _worded(check: Check) -> str:
    name = check.name.replace("_", " ")
    return f"{name}, {check.basis}" if check.value is None else f"{name} {against(check)}"


def against(check: Check) -> str:
    """Word what a check found against its limit; the figure it is judged on."""
    if check.value is None:
        return "no figure"
    value = format_si(check.value if check.value_upper is None else check.value_upper, check.unit)
    return value if check.limit is None else f"{value}, {check.sense} {format_si(check.limit, check.unit)}"
