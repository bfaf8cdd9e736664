"""Rows of the tables of a case run again: a figure before and after, and what it moved by."""

from __future__ import annotations

from collections.abc import Iterator

from pipeflow.record.changes import Change, CheckChange
from pipeflow.units import significant, to_display

COLUMNS = ("before", "after", "change", "then", "now")
WORDS = (0, 4, 5)
"""Columns of words, counted from the name of the row."""
STATUS = {"ok": "ok", "not checked": "not checked", "caution": "CAUTION", "fail": "FAIL", None: "none"}
READ_IN = {"Pa": "kPa", "m3/s": "m3/h", "W": "kW", "rad/s": "rpm"}
"""Units that a page gives in place of those of SI."""


def check_rows(check: CheckChange, tolerance: float, mark: str = "") -> Iterator[tuple[str, ...]]:
    """Give the figure judged, and the limit where that is a figure that moved."""
    unit = READ_IN.get(check.unit, check.unit)
    name = f"{mark}check: {check.name.replace('_', ' ')}{', ' if unit else ''}{unit}"
    yield (name, *figures(_judged(check), unit), STATUS.get(check.before, ""), STATUS.get(check.after, ""))
    if check.limit.is_beyond(tolerance):
        yield (f"{mark}  its limit", *figures(check.limit, unit), "", "")


def _judged(check: CheckChange) -> Change:
    """The figure that the limit is held against: the upper one where there is one."""
    before, after = (
        upper if upper is not None else central
        for central, upper in (
            (check.value.before, check.value_upper.before),
            (check.value.after, check.value_upper.after),
        )
    )
    return Change("value", before, after)


def figures(change: Change, unit: str) -> tuple[str, str, str]:
    """Give a figure before and after in a unit of the page, and what it moved by."""
    return _figure(change.before, unit), _figure(change.after, unit), _moved_by(change, unit)


def _figure(value: float | None, unit: str) -> str:
    if value is None:
        return ""
    text = significant(to_display(value, unit) if unit in READ_IN.values() else value)
    return f"−{text[1:]}" if text.startswith("-") else text


def _moved_by(change: Change, unit: str) -> str:
    """A percentage, or the difference where the sign changes or one of the two is nothing."""
    if change.difference is None or change.before is None or change.after is None:
        return ""
    if change.before * change.after <= 0 and change.difference:
        return f"{'+' if change.difference > 0 else ''}{_figure(change.difference, unit)}"
    percent = 100 * (change.relative or 0.0)
    return f"{signed(percent, 2 if abs(percent) < 10 else 1)} %" if round(percent, 2) else "0 %"


def signed(value: float, digits: int) -> str:
    """Write a number with its sign."""
    return f"{value:+.{digits}f}".replace("-", "−")
