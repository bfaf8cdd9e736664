"""A case run again as a JSON document: SI numbers, the unit at the end of each key, null for what has no value."""

from __future__ import annotations

from typing import Any

from pipeflow.record.changes import Change, CheckChange
from pipeflow.record.comparison import TOTALS, LineComparison
from pipeflow.record.explanation import Explanation
from pipeflow.record.pump_comparison import Candidate, PumpsComparison
from pipeflow.record.rerun import Rerun
from pipeflow.report.rerun_page import explained


def rerun_document(found: Rerun, tolerance: float) -> dict[str, Any]:
    """Lay a case run again out as the document that ``rerun --json`` prints."""
    comparison = found.comparison
    laid_out: dict[str, Any] = {
        "file": found.file,
        "title": found.title,
        "outcome": found.outcome,
        "said": list(found.said),
        "moved": found.moved,
        "inputs_changed": found.inputs_changed,
        "accepted": found.accepted,
        "tolerance": tolerance,
        "fails": list(found.fails),
        "program": {name: {"before": old, "after": new} for name, (old, new) in found.program.items()},
        "changed_without_effect": list(found.without_effect),
        "changed_within_tolerance": list(found.within_tolerance),
        "lacks_pumps": found.lacks_pumps,
    }
    if comparison is not None:
        own, *scenarios = (_line(line, found, tolerance) for line in comparison.lines)
        laid_out |= own
        laid_out["scenarios"] = {line.scenario: one for line, one in zip(comparison.lines[1:], scenarios, strict=True)}
        laid_out["scenarios_added"] = list(comparison.scenarios_added)
        laid_out["scenarios_gone"] = list(comparison.scenarios_gone)
        laid_out["pumps"] = comparison.pumps and _pumps(comparison.pumps, tolerance)
    return laid_out


def _line(line: LineComparison, found: Rerun, tolerance: float) -> dict[str, Any]:
    explanation = found.explanations.get(line.scenario)
    return {
        "totals": {total.name: _change(total, tolerance) for total in line.totals},
        "checks": [_check(check, tolerance) for check in line.checks],
        "explanation": explanation and _explanation(line, explanation, tolerance),
        "not_explained": found.unexplained.get(line.scenario),
    }


def _change(change: Change, tolerance: float) -> dict[str, Any]:
    return {
        "before": change.before,
        "after": change.after,
        "change": change.relative,
        "moved": change.is_beyond(tolerance),
    }


def _check(check: CheckChange, tolerance: float) -> dict[str, Any]:
    return {
        "name": check.name,
        "unit": check.unit,
        "status_before": check.before,
        "status_after": check.after,
        "moved": check.is_beyond(tolerance),
        "newly_fails": check.newly_fails,
        "value": _change(check.value, tolerance),
        "value_upper": _change(check.value_upper, tolerance),
        "limit": _change(check.limit, tolerance),
    }


def _pumps(pumps: PumpsComparison, tolerance: float) -> dict[str, Any]:
    """Lay the pumps out: each with its figures and checks by condition; those added and gone have none."""
    return {
        "moved": pumps.is_beyond(tolerance),
        "added": list(pumps.added),
        "gone": list(pumps.gone),
        "first_before": pumps.first_before,
        "first_after": pumps.first_after,
        "candidates": {one.name: _candidate(one, pumps, tolerance) for one in pumps.candidates},
    }


def _candidate(one: Candidate, pumps: PumpsComparison, tolerance: float) -> dict[str, Any]:
    return {
        "holds_before": one.held,
        "holds_after": one.holds,
        "reasons": list(one.reasons),
        one.motor.name: _change(one.motor, tolerance),
        "conditions": {
            duty.condition: {
                "figures": {figure.name: _change(figure, tolerance) for figure in duty.figures},
                "checks": [_check(check, tolerance) for check in duty.checks],
            }
            for duty in pumps.duties
            if duty.pump == one.name
        },
    }


def _explanation(line: LineComparison, explanation: Explanation, tolerance: float) -> dict[str, Any]:
    """Lay out the part of each group in each total; the parts of a total add up to its change."""
    return {
        "parts": {
            key: dict(zip(explanation.groups, map(float, explanation.parts[:, column]), strict=True))
            for column, key in enumerate(TOTALS)
        },
        "orders": "all" if explanation.orders is None else explanation.orders,
        "text": [explained(total, explanation) for total in line.totals if total.is_beyond(tolerance)],
    }
