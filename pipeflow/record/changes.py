"""One figure or check of two results laid out as documents, before and after."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, fields
from typing import Any

from pipeflow.case.model import Limits

Document = dict[str, Any]

NOISE = {"m": 1e-9, "Pa": 1e-5, "m3_s": 1e-11, "m3/s": 1e-11, "W": 1e-5, "rad_s": 1e-9, "N.m": 1e-9}
"""Differences below these are rounding, whatever they are of the figure: heads that cancel leave such, and roots."""
STATED = frozenset((*(field.name for field in fields(Limits)), "duty_flow", "motor_power", "torque"))
"""Checks whose limit is an input of the case; the limits of the others are figures too."""


@dataclass(frozen=True)
class Change:
    """One figure before and after, SI; None where there is none."""

    name: str
    before: float | None
    after: float | None
    noise: float = 0.0

    @property
    def difference(self) -> float | None:
        """After less before; None where one of the two has no figure."""
        return None if self.before is None or self.after is None else self.after - self.before

    @property
    def relative(self) -> float | None:
        """Change as a fraction of the figure before; None where that is none or zero."""
        difference = self.difference
        if difference is None or not self.before:
            return 0.0 if self.before == self.after else None
        return difference / abs(self.before)

    def is_beyond(self, tolerance: float) -> bool:
        """Whether it moved by more than a fraction of what it was."""
        difference = self.difference
        if difference is None:
            return self.before is not self.after
        return abs(difference) > max(tolerance * abs(self.before or 0.0), self.noise)


@dataclass(frozen=True)
class CheckChange:
    """One check before and after; a status is None where there was or is no such check."""

    name: str
    unit: str
    before: str | None
    after: str | None
    value: Change
    value_upper: Change
    limit: Change

    @property
    def newly_fails(self) -> bool:
        """It fails now, and did not."""
        return self.after == "fail" and self.before != "fail"

    def is_beyond(self, tolerance: float) -> bool:
        """Whether its status changed, or a figure moved by more than the tolerance; a stated limit is none."""
        figures = (self.value, self.value_upper) if self.name in STATED else (self.value, self.value_upper, self.limit)
        return self.before != self.after or any(figure.is_beyond(tolerance) for figure in figures)


def check_changes(before: Document, after: Document) -> Iterator[CheckChange]:
    """Hold the checks of two documents against each other, by their names."""
    held, found = _checks(before), _checks(after)
    for key in dict.fromkeys((*found, *held)):
        old, new = held.get(key, {}), found.get(key, {})
        unit = str(new.get("unit") or old.get("unit") or "")
        value, upper, limit = (
            Change(name, figure_of(old, name), figure_of(new, name), NOISE.get(unit, 0.0))
            for name in ("value", "value_upper", "limit")
        )
        yield CheckChange(key[0], unit, _status(old), _status(new), value, upper, limit)


def failing_checks(document: Document) -> Iterator[str]:
    """Names of the checks that fail."""
    return (name for (name, _), check in _checks(document).items() if check.get("status") == "fail")


def _checks(document: Document) -> dict[tuple[str, int], Document]:
    """Checks by name, and by their place among those of one name."""
    listed = document.get("checks")
    met: Counter[str] = Counter()
    found = {}
    for check in listed if isinstance(listed, list) else []:
        if isinstance(check, dict):
            name = str(check.get("name"))
            found[name, met[name]] = check
            met[name] += 1
    return found


def _status(check: Document) -> str | None:
    return str(check["status"]) if "status" in check else None


def figure_of(document: Any, key: str) -> float | None:
    """Give a figure of a document that may be anything; None where it is no number."""
    value = document.get(key) if isinstance(document, dict) else None
    if isinstance(value, bool) or not isinstance(value, int | float):
        return None
    return float(value) if math.isfinite(value) else None
