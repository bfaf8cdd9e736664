"""Sections on the system curve with its pumps, and on the sizes tried."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from markupsafe import Markup

from pipeflow.report.charts import system_chart_svg
from pipeflow.report.charts.duties import upper_apart
from pipeflow.report.curve_page import (
    DUTY_COLUMNS,
    boundaries,
    correction_text,
    duty_rows,
    findings,
    flush_text,
    ranking_rows,
    speeds_text,
)
from pipeflow.report.html.blocks import Block, Chart, Items, Section, Subsection, Text, section, table
from pipeflow.report.size_page import COLUMNS, candidate_row, choice_texts, failing_sizes, near_sizes
from pipeflow.study.design_file import DesignFile
from pipeflow.study.pumping.result import CurveResult, PumpOnLine
from pipeflow.study.sizes.sizing import SizingResult
from pipeflow.units import format_value

LINES_OF_PUMPS = "Pumps: curves with marks as corrected, dashed where not established, thin grey on water"


def pump_sections(found: DesignFile) -> Iterator[Section]:
    """Give the sections on system curve and sizes."""
    title = "System curve and pumps" if found.curve.own.pumps else "System curve"
    yield from section("system", title, _system(found.curve))
    if found.sizing is not None:
        yield from section("sizes", f"Sizes of {', '.join(found.sizing.pipes)}", _sizes(found.sizing))
    else:
        yield from section("sizes", "Sizes", (Text(f"No sizes were tried. {found.why_not_sized}."),))


def _system(result: CurveResult) -> Iterator[Block]:
    yield Chart(Markup(system_chart_svg(result)), _about_chart(result))
    about = tuple(boundaries(result.own))
    if about:
        yield Items(about)
    if not result.own.pumps:
        yield Text("The case names no pumps.")
        return
    yield Subsection("Ranking")
    rows = [(verdict, *reasons) for verdict, reasons in ranking_rows(result.ranking)]
    yield Items(tuple(" — ".join(row) for row in rows), ordered=True)
    for index in range(len(result.own.pumps)):
        yield from _pump(result, index)
    flushes = tuple(flush_text(one, flush) for one in result.conditions for flush in one.flushes)
    notes = tuple(f"{one.name}: {caution}" for one in result.conditions for caution in one.cautions)
    if flushes or notes:
        yield Subsection("Start-up, flush and restart")
        yield Items((*flushes, *notes))
    for caution in result.cautions:
        yield Text(caution, "strong")


def _about_chart(result: CurveResult) -> str:
    shaded = "; the shaded band holds the case and its scenarios" if len(result.conditions) > 1 else ""
    beside = f"Head the line asks of its pump, by flow{shaded}. Conditions beside the case by their upper figure."
    return f"{beside} {LINES_OF_PUMPS}{_about_marks(result.own.pumps)}." if result.own.pumps else beside


def _about_marks(pumps: Sequence[PumpOnLine]) -> str:
    """Say what the marks of the duties are, of those that are drawn."""
    if any(upper_apart(pump) for pump in pumps):
        moves = any(pump.speed != pump.speed_upper for pump in pumps)
        faster = ", there at the speed that it asks for" if moves else ""
        return f"; full marks are duties on the central curve, empty ones on the upper{faster}"
    return "; full marks are duties, on the central curve and the upper alike" if any(p.duty for p in pumps) else ""


def _pump(result: CurveResult, index: int) -> Iterator[Block]:
    pump = result.own.pumps[index]
    everywhere = [(one, one.pumps[index]) for one in result.conditions]
    yield Subsection(f"Pump: {pump.name}")
    correction = f" {correction_text(pump.correction)}" if pump.correction else ""
    yield Text(f"{pump.kind}{speeds_text(everywhere)}.{correction}")
    rows = [row for condition, one in everywhere for row in duty_rows(condition.name, one)]
    yield from table(f"Duties of {pump.name}", DUTY_COLUMNS, rows, (0, 8))
    found = tuple(text if mark == "!" else f"{mark.upper()}: {text}" for mark, text in findings(everywhere))
    if found:
        yield Items(found)


def _sizes(result: SizingResult) -> Iterator[Block]:
    over = f"over {result.series}" if result.series else "by a free bore"
    flow = format_value(result.case.flow.design, "volume flow")
    yield Text(f"Tried {over}, at design flow, {flow}; head loss at maximum flow.")
    shown = near_sizes(result)
    yield from table("Sizes tried", COLUMNS, [candidate_row(one) for one in shown], (0, 8, 9))
    if len(shown) < len(result.candidates):
        yield Text(f"{len(result.candidates)} sizes were tried; those not shown fail by more.")
    failing = tuple(f"{size}: {why}" for size, why in failing_sizes(result))
    if failing:
        yield Subsection("Why sizes fail")
        yield Items(failing)
    yield Subsection("Size to choose")
    yield Items(tuple(text for _, text in choice_texts(result)))
