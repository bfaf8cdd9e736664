"""Which duties of a pump a chart can tell apart."""

from __future__ import annotations

from pipeflow.study.pumping.result import DutyPoint, PumpOnLine

ALIKE = 0.01
"""Duties whose flows and heads are within this share of each other are drawn as one."""


def upper_apart(pump: PumpOnLine) -> DutyPoint | None:
    """The duty on the upper system curve, where a chart shows it beside that on the central one."""
    central, upper = pump.duty, pump.duty_upper
    if central is None or upper is None:
        return upper
    pairs = ((central.flow, upper.flow), (central.head, upper.head))
    return upper if any(abs(high - low) > ALIKE * abs(low) for low, high in pairs) else None
