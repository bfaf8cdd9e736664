"""What a rerun says of pumps: what moved of each, which holds no longer and why, which ranks first."""

from __future__ import annotations

from collections.abc import Iterator

from pipeflow.record.changes import Change, CheckChange
from pipeflow.record.pump_comparison import Candidate, DutyComparison, PumpsComparison
from pipeflow.report.rerun_rows import COLUMNS, WORDS, check_rows, figures
from pipeflow.report.text import paragraph, table

Row = tuple[str, ...]

DUTY = {
    "flow_m3_s": ("duty flow", "m3/h"),
    "head_m": ("head", "m"),
    "shaft_power_W": ("shaft power", "kW"),
    "npsh_available_m": ("NPSH available", "m"),
    "npsh_required_m": ("NPSH required", "m"),
}
"""The words and the unit for each figure of a duty."""
WITH_THE_DUTY = ("duty_flow", "best_efficiency_share", "motor_power")
"""Checks of what the rows of a duty tell; shown where their status changes."""


def pump_lines(pumps: PumpsComparison, tolerance: float, width: int) -> Iterator[str]:
    """Say what moved beyond the tolerance; nothing where nothing did."""
    if not pumps.is_beyond(tolerance):
        return
    if pumps.added or pumps.gone:
        yield ""
    for names, what in ((pumps.added, "new"), (pumps.gone, "gone")):
        if names:
            yield paragraph(f"Pumps {what}: {', '.join(names)}.", width, "  ")
    for one in pumps.candidates:
        rows = [row for duty in pumps.duties if duty.pump == one.name for row in _rows(duty, tolerance)]
        rows += _motor(one, tolerance)
        if rows:
            yield ""
            columns = (f"pump {one.name}", *COLUMNS)
            yield from (f"  {text}" for text in table(columns, rows, words=WORDS, width=width - 2))
        yield from (paragraph(text, width, "  ") for text in _verdict(one))
    if pumps.first_before != pumps.first_after:
        first = [name or "none" for name in (pumps.first_before, pumps.first_after)]
        yield paragraph(f"First in rank of the pumps that hold: {' → '.join(first)}.", width, "  ")


def _rows(duty: DutyComparison, tolerance: float) -> Iterator[Row]:
    """The condition, and what moved in it below."""
    if not duty.is_beyond(tolerance):
        return
    yield (duty.condition, *("" for _ in COLUMNS))
    checks = [check for check in duty.checks if check.is_beyond(tolerance)]
    yield from _figures(duty, tolerance, npsh=not any(check.name == "npsh" and _has_figures(check) for check in checks))
    for check in checks:
        if check.name not in WITH_THE_DUTY or check.before != check.after:
            yield from check_rows(check, tolerance, "  ")


def _has_figures(check: CheckChange) -> bool:
    return None not in (check.value.before, check.value.after, check.limit.before, check.limit.after)


def _figures(duty: DutyComparison, tolerance: float, *, npsh: bool) -> Iterator[Row]:
    """Speed and duty by the upper figure, on which pumps are judged, or by the central one where only that moved."""
    moved = {one.name: one for one in duty.figures if one.is_beyond(tolerance)}
    speed = moved.get("speed_upper_rad_s") or moved.get("speed_rad_s")
    if speed:
        yield _row("speed", speed, "rpm")
    for key, (words, unit) in DUTY.items():
        change = moved.get(f"duty_upper.{key}") or moved.get(f"duty.{key}")
        if change and (npsh or not key.startswith("npsh")):
            yield _row(words, change, unit)
        elif not change and f"duty_maximum.{key}" in moved:
            yield _row(f"{words}, maximum flow", moved[f"duty_maximum.{key}"], unit)


def _row(words: str, change: Change, unit: str) -> Row:
    return (f"  {words}, {unit}", *figures(change, unit), "", "")


def _motor(one: Candidate, tolerance: float) -> Iterator[Row]:
    if None not in (one.held, one.holds) and one.motor.is_beyond(tolerance):
        yield ("standard motor, kW", *figures(one.motor, "kW"), "", "")


def _verdict(one: Candidate) -> Iterator[str]:
    """Whether it holds, where it did not or was not there, and why it does not."""
    if one.holds is None or one.held == one.holds:
        return
    words = {True: "holds", False: "out"}
    change = words[one.holds] if one.held is None else f"{words[one.held]} → {words[one.holds]}"
    yield f"{one.name}: {change}{': ' if one.reasons else ''}{'; '.join(one.reasons)}."
