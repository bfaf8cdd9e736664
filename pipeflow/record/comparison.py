"""What changed between two results of a case, laid out as documents: totals, checks, scenarios, pumps."""

from __future__ import annotations

from dataclasses import dataclass

from pipeflow.record.changes import NOISE, Change, CheckChange, Document, check_changes, failing_checks, figure_of
from pipeflow.record.pump_comparison import NO_PUMP_HOLDS, PumpsComparison, compare_pumps, none_holds

TOTALS = (
    "head_loss_m",
    "head_loss_upper_m",
    "total_head_m",
    "total_head_upper_m",
    "pressure_required_Pa",
    "pressure_required_upper_Pa",
)
"""The totals that are compared, by their keys in a result."""


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
    """Two results of one case: the case itself first, then the scenarios that both have; its pumps, if any."""

    lines: tuple[LineComparison, ...]
    scenarios_added: tuple[str, ...]
    scenarios_gone: tuple[str, ...]
    pumps: PumpsComparison | None = None

    def is_beyond(self, tolerance: float) -> bool:
        """Whether anything moved, scenarios that came or went among it."""
        of_lines = any(line.is_beyond(tolerance) for line in self.lines)
        return bool(self.scenarios_added or self.scenarios_gone or of_lines or self.pumps_moved(tolerance))

    def pumps_moved(self, tolerance: float) -> bool:
        """Whether anything of the pumps moved."""
        return self.pumps is not None and self.pumps.is_beyond(tolerance)


def compare(before: Document, after: Document) -> Comparison:
    """Hold two result documents of a case against each other; the first may come from a file, and be lacking."""
    old, new = _scenarios(before), _scenarios(after)
    both = [name for name in new if name in old]
    return Comparison(
        lines=(_line("", before, after), *(_line(name, old[name], new[name]) for name in both)),
        scenarios_added=tuple(name for name in new if name not in old),
        scenarios_gone=tuple(name for name in old if name not in new),
        pumps=compare_pumps(before.get("pumps"), after.get("pumps")),
    )


def failing(document: Document) -> tuple[str, ...]:
    """Checks that fail, those of scenarios with the scenario's name; and that there are pumps and none holds."""
    of_scenarios = (f"{name}: {check}" for name, one in _scenarios(document).items() for check in failing(one))
    of_pumps = (NO_PUMP_HOLDS,) if none_holds(document.get("pumps")) else ()
    return (*failing_checks(document), *of_scenarios, *of_pumps)


def _scenarios(document: Document) -> dict[str, Document]:
    found = document.get("scenarios")
    return {name: one for name, one in found.items() if isinstance(one, dict)} if isinstance(found, dict) else {}


def _line(scenario: str, before: Document, after: Document) -> LineComparison:
    old, new = before.get("totals"), after.get("totals")
    totals = (Change(key, figure_of(old, key), figure_of(new, key), NOISE[key.rpartition("_")[2]]) for key in TOTALS)
    return LineComparison(scenario, tuple(totals), tuple(check_changes(before, after)))
