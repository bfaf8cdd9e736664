"""What changed between two results of a case, laid out as documents: totals, checks, scenarios."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, fields
from typing import Any

from pipeflow.case.model import Limits

Document = dict[str, Any]

TOTALS = (
    "head_loss_m",
    "head_loss_upper_m",
    "total_head_m",
    "total_head_upper_m",
    "pressure_required_Pa",
    "pressure_required_upper_Pa",
)
"""The totals that are compared, by their keys in a result."""
NOISE = {"m": 1e-9, "Pa": 1e-5}
"""Differences below these are rounding, whatever they are of the figure: heads that cancel leave such."""
STATED = frozenset(field.name for field in fields(Limits))
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


@dataclass(frozen=True)
class LineComparison:
    """The case itself, or one scenario by its name, before and after."""

    scenario: str
    totals: tuple[Change, ...]
    checks: tuple[CheckChange, ...]

    def moved_totals(self, tolerance: float) -> tuple[Change, ...]:
        """Totals that moved by more than the tolerance."""
        return tuple(total for total in self.totals if total.is_beyond(tolerance))

    def moved_checks(self, tolerance: float) -> tuple[CheckChange, ...]:
        """Checks that moved by more than the tolerance, or changed their status."""
        return tuple(check for check in self.checks if check.is_beyond(tolerance))

    def is_beyond(self, tolerance: float) -> bool:
        """Whether anything moved."""
        return bool(self.moved_totals(tolerance) or self.moved_checks(tolerance))


@dataclass(frozen=True)
class Comparison:
    """Two results of one case: the case itself first, then the scenarios that both have."""

    lines: tuple[LineComparison, ...]
    scenarios_added: tuple[str, ...]
    scenarios_gone: tuple[str, ...]

    def is_beyond(self, tolerance: float) -> bool:
        """Whether anything moved, scenarios that came or went among it."""
        return bool(self.scenarios_added or self.scenarios_gone) or any(
            line.is_beyond(tolerance) for line in self.lines
        )


def compare(before: Document, after: Document) -> Comparison:
    """Hold two result documents of a case against each other; the first may come from a file, and be lacking."""
    old, new = _scenarios(before), _scenarios(after)
    both = [name for name in new if name in old]
    return Comparison(
        lines=(_line("", before, after), *(_line(name, old[name], new[name]) for name in both)),
        scenarios_added=tuple(name for name in new if name not in old),
        scenarios_gone=tuple(name for name in old if name not in new),
    )


def failing(document: Document) -> tuple[str, ...]:
    """Checks that fail, those of scenarios with the scenario's name."""
    own = [str(check.get("name")) for check in _checks(document).values() if check.get("status") == "fail"]
    of_scenarios = (f"{name}: {check}" for name, one in _scenarios(document).items() for check in failing(one))
    return (*own, *of_scenarios)


def _scenarios(document: Document) -> dict[str, Document]:
    found = document.get("scenarios")
    return {name: one for name, one in found.items() if isinstance(one, dict)} if isinstance(found, dict) else {}


def _line(scenario: str, before: Document, after: Document) -> LineComparison:
    old, new = before.get("totals"), after.get("totals")
    totals = (Change(key, _figure(old, key), _figure(new, key), NOISE[key.rpartition("_")[2]]) for key in TOTALS)
    return LineComparison(scenario, tuple(totals), tuple(_check_changes(_checks(before), _checks(after))))


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


def _check_changes(
    before: dict[tuple[str, int], Document], after: dict[tuple[str, int], Document]
) -> Iterator[CheckChange]:
    for key in dict.fromkeys((*after, *before)):
        old, new = before.get(key, {}), after.get(key, {})
        unit = str(new.get("unit") or old.get("unit") or "")
        value, upper, limit = (
            Change(name, _figure(old, name), _figure(new, name), NOISE.get(unit, 0.0))
            for name in ("value", "value_upper", "limit")
        )
        yield CheckChange(key[0], unit, _status(old), _status(new), value, upper, limit)


def _status(check: Document) -> str | None:
    return str(check["status"]) if "status" in check else None


def _figure(document: Any, key: str) -> float | None:
    value = document.get(key) if isinstance(document, dict) else None
    if isinstance(value, bool) or not isinstance(value, int | float):
        return None
    return float(value) if math.isfinite(value) else None
