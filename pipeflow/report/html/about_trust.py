"""Sections on how far the figures can be relied on: checks, scenarios, assumed inputs, cautions, methods."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from pipeflow.report.html.blocks import Block, Items, Section, Subsection, Text, section, table
from pipeflow.report.rows import MARK, SCENARIO_COLUMNS, against_limit, scenario_rows, spaced
from pipeflow.study.assumed import AssumedInput
from pipeflow.study.design_file import DesignFile
from pipeflow.study.result import SAFETY_NOTICE, MethodUse, Result
from pipeflow.units import significant
from pipeflow.verdict import Check

CHECK_COLUMNS = ("check", "status", "value, limit", "basis", "source")
METHOD_COLUMNS = ("method", "used for", "citation", "range", "transcription")
ASSUMED_COLUMNS = ("input", "why", "step", "total head\nm, raised", "total head\nm, lowered")


def trust_sections(found: DesignFile) -> Iterator[Section]:
    """Give the sections on what the figures are worth, in the order they are read."""
    result = found.result
    yield from section("checks", "Checks", _checks(result))
    yield from section("scenarios", "Scenarios side by side, at design flow", _scenarios(result))
    yield from section("assumed", "Assumed inputs, by their effect on the head", _assumed(found.assumed))
    yield from section("cautions", "Cautions", _cautions(result))
    yield from section("methods", "Methods", _methods(found))


def safety_section() -> Iterator[Section]:
    """Give the notice that ends the page."""
    yield from section("safety", "Before relying on this", (Text(SAFETY_NOTICE, "strong"),))


def _checks(result: Result) -> Iterator[Block]:
    if not result.checks:
        yield Text("The case states no limit, so none was checked.")
    yield from table(
        "Checks of the line", CHECK_COLUMNS, [_check_row(check) for check in result.checks], range(5), "checks"
    )


def _check_row(check: Check) -> tuple[str, ...]:
    return spaced(check.name), MARK[check.status], against_limit(check), check.basis, check.source


def _scenarios(result: Result) -> Iterator[Block]:
    if not result.scenarios:
        return
    yield from table("The case and its scenarios", SCENARIO_COLUMNS, scenario_rows(result), (0, 5, 6))
    for name, scenario in result.scenarios.items():
        rows = [_check_row(check) for check in scenario.checks if check.status != "ok"]
        own = tuple(caution for caution in scenario.cautions if caution not in result.cautions)
        if rows or own:
            yield Subsection(f"Scenario: {name}")
        yield from table(f"Checks of scenario {name} that call for thought", CHECK_COLUMNS, rows, range(5), "checks")
        if own:
            yield Items(own)


def _assumed(inputs: Iterable[AssumedInput]) -> Iterator[Block]:
    rows = [(one.path, one.why, f"± {one.step}", _change(one.raised), _change(one.lowered)) for one in inputs]
    if not rows:
        yield Text("The case marks no input as assumed, and no default roughness stands in for one.")
        return
    yield Text(
        "Each is raised and lowered by its step alone; the change is that of the upper total head at design flow."
    )
    yield from table("Assumed inputs, the strongest first", ASSUMED_COLUMNS, rows, (0, 1, 2))


def _change(change: float | None) -> str:
    if change is None:
        return "no solution"
    return "0" if abs(change) < 5e-7 else f"{'+' if change > 0 else '−'}{significant(abs(change), 3)}"


def _cautions(result: Result) -> Iterator[Block]:
    yield Items(result.cautions) if result.cautions else Text("None.")


def _methods(found: DesignFile) -> Iterator[Block]:
    scenarios = [use for one in found.result.scenarios.values() for use in one.methods]
    uses: dict[str, MethodUse] = {}
    for use in (*found.result.methods, *scenarios, *found.curve.methods):
        uses.setdefault(use.source.key, use)
    yield Text("Figures rest on these. Ranges in SI units; leaving one is a caution above.")
    rows = [_method_row(use) for use in uses.values()]
    yield from table("Methods with their sources", METHOD_COLUMNS, rows, range(5), "methods")


def _method_row(use: MethodUse) -> tuple[str, ...]:
    source = use.source
    note = f" Note: {source.note}." if source.note else ""
    ranges = " and ".join(str(bound) for bound in source.ranges) or "none stated"
    return source.key, use.used_for, f"{source.citation}.{note}", ranges, source.confidence
