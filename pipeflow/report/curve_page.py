"""The page of a system curve and its pumps in a terminal: 80 columns of plain text."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace

import numpy as np

from pipeflow.case.model import FlowRange
from pipeflow.report.text import heading, paragraph, table
from pipeflow.study.pumping.ranking import against
from pipeflow.study.pumping.result import (
    Condition,
    CorrectionResult,
    CurveResult,
    DutyPoint,
    Flush,
    PumpOnLine,
    Ranked,
    SystemCurve,
)
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.units import format_value, significant, to_display
from pipeflow.verdict import Check

ROWS = 14
"""Rows of evenly spaced flows that the page shows of a system curve, beside those stated."""
DUTY_COLUMNS = (
    "condition", "flow\nm3/h", "head\nm", "eff.\n%", "shaft\nkW", "of best\nflow %", "NPSHa\nm", "NPSHr\nm", "",
)  # fmt: skip
GRAVEST_FIRST = ("fail", "caution", "not checked")
MARK = {"ok": "ok", "not checked": "not checked", "caution": "caution", "fail": "FAIL"}


def curve_page(result: CurveResult) -> str:
    """Write the page."""
    return "\n".join(_page(result)) + "\n"


def _page(result: CurveResult) -> Iterator[str]:
    case = result.case
    yield paragraph(case.title + (f", revision {case.revision}" if case.revision else ""))
    yield case.file
    yield from heading("System curve: head asked of the pump, m of what flows")
    yield from _system(result)
    yield from heading("Chart")
    from pipeflow.report.charts import terminal_chart

    yield terminal_chart(result).rstrip("\n")
    for index, pump in enumerate(result.own.pumps):
        yield from heading(f"Pump: {pump.name}")
        yield from _pump(pump, [(one, one.pumps[index]) for one in result.conditions])
    if result.own.pumps:
        yield from _conditions(result)
        yield from heading("Ranking")
        yield from _ranking(result.ranking)
    if result.cautions:
        yield from heading("Cautions")
        yield from (paragraph(caution, mark="! ") for caution in result.cautions)
    yield from heading("Methods")
    yield from (
        paragraph(f"{use.source.key}: {use.used_for}. {use.source.citation}.", mark="- ") for use in result.methods
    )
    yield from heading("Before relying on this")
    yield paragraph(SAFETY_NOTICE)


def _system(result: CurveResult) -> Iterator[str]:
    own, system = result.own, result.own.system
    columns = ["flow\nm3/h", "static", "central", "upper", "regime", ""]
    spread = any(one.kind == "scenario" for one in result.conditions)
    if spread:
        columns[4:4] = ["lowest of\nscenarios", "highest of\nscenarios"]
    rows = []
    for at in _rows_shown(system, own.case.flow):
        row = [_number(system.flow[at], "m3/h"), _number(system.static_head[at])]
        row += [_number(system.pump_head[at]), _number(system.pump_head_upper[at])]
        row += [_number(result.envelope_low[at]), _number(result.envelope_high[at])] if spread else []
        rows.append([*row, system.regime[at], _stated(system.flow[at], own.case.flow)])
    yield from table(columns, rows, words=(len(columns) - 2, len(columns) - 1))
    yield ""
    for text in boundaries(own):
        yield paragraph(text, mark="  ")


def _rows_shown(system: SystemCurve, flows: FlowRange) -> list[int]:
    """Places of evenly spaced flows, of those stated, and of the boundaries of the regimes."""
    every = np.array(system.flow)
    wanted = [*np.linspace(0.0, every[-1], ROWS), flows.minimum, flows.design, flows.maximum]
    wanted += [edge for edge in (system.laminar_until, system.turbulent_from) if edge]
    return sorted({int(np.abs(every - flow).argmin()) for flow in wanted})


def _stated(flow: float, flows: FlowRange) -> str:
    names = [name for name in ("design", "minimum", "maximum") if np.isclose(flow, getattr(flows, name), rtol=1e-9)]
    return names[0] if names else ""


def boundaries(one: Condition) -> Iterator[str]:
    """Where the regime changes, where solids settle, and where the curve is flat."""
    system = one.system
    yield from _about_head(one)
    if system.laminar_until:
        yield f"Laminar in every pipe up to {format_value(system.laminar_until, 'm3/h')}."
    if system.turbulent_from:
        yield f"Turbulent in every pipe from {format_value(system.turbulent_from, 'm3/h')}."
    if system.deposition_flow:
        deposition = format_value(system.deposition_flow, "m3/h")
        yield f"Solids may settle out below {deposition}, by a formula for turbulent flow; in laminar flow at any."
    for band in system.flat_bands:
        ends = " to ".join(format_value(flow, "m3/h") for flow in (band.flow_from, band.flow_to))
        yield f"Flat from {ends} in {band.pipe}: there a small error in head is a large one in flow."


def _about_head(one: Condition) -> Iterator[str]:
    """Where a high point asks for more than the destination, and where the line asks for no pump."""
    system = one.system
    heads = zip(system.flow, system.total_head, system.pump_head, strict=True)
    raised = [flow for flow, total, pump in heads if pump - total > 1e-6]
    if raised:
        ends = " to ".join(format_value(flow, "m3/h") for flow in (raised[0], raised[-1]))
        yield f"A high point of the route asks for more than the destination, {ends}; behind it the line runs slack."
    idle = [flow for flow, head in zip(system.flow, system.pump_head_upper, strict=True) if head <= 0 < flow]
    if idle:
        yield f"Up to {format_value(idle[-1], 'm3/h')} the line asks for no head: it runs by itself."


def _pump(pump: PumpOnLine, everywhere: Sequence[tuple[Condition, PumpOnLine]]) -> Iterator[str]:
    yield paragraph(f"{pump.kind}{speeds_text(everywhere)}")
    rows = [row for condition, one in everywhere for row in duty_rows(condition.name, one)]
    yield from table(DUTY_COLUMNS, rows, words=(0, 8))
    if pump.correction:
        yield paragraph(correction_text(pump.correction), mark="  ")
    for mark, text in findings(everywhere):
        yield paragraph(text, mark=f"{mark} " if mark == "!" else f"{mark:<12}")


def speeds_text(everywhere: Sequence[tuple[Condition, PumpOnLine]]) -> str:
    """``, 888.5 rpm; thick 1002 rpm``: the speed in the case, and in the conditions that ask for another."""
    own, *others = [(condition.name, _speeds(pump)) for condition, pump in everywhere]
    if not own[1]:
        return ""
    apart = [f"{name} {speeds}" for name, speeds in others if speeds != own[1]]
    return f", {own[1]}" + (f"; {', '.join(apart)}" if apart else "")


def _speeds(pump: PumpOnLine) -> str:
    """Speed on the central system curve, and on the upper one where it differs."""
    both = [format_value(speed, "rpm") for speed in (pump.speed, pump.speed_upper) if speed]
    return " or ".join(dict.fromkeys(both)) + (" (upper figure)" if len(set(both)) > 1 else "")


def duty_rows(condition: str, pump: PumpOnLine) -> Iterator[tuple[str, ...]]:
    """Where a pump meets the line in one condition, by the central and the upper figure."""
    worst = next((s for s in ("fail", "caution", "not checked") if any(c.status == s for c in pump.checks)), "ok")
    if pump.duty is None and pump.duty_upper is None:
        yield condition, *("-",) * 7, MARK[worst]
        return
    if pump.duty is not None:
        yield condition, *_figures(pump.duty), MARK[worst]
    if pump.duty_upper is not None and pump.duty_upper != pump.duty:
        yield "  upper figure", *_figures(pump.duty_upper), ""
    if pump.duty_maximum is not None:
        yield "  maximum flow", *_figures(pump.duty_maximum), ""
    for other in pump.others:
        kind = "stable" if other.stable else "unstable"
        yield f"  also, {kind}", *_figures(other), ""


def _figures(duty: DutyPoint) -> Iterator[str]:
    yield _number(duty.flow, "m3/h")
    yield _number(duty.head)
    yield _number(duty.efficiency, percent=True)
    yield _number(duty.shaft_power, "kW")
    yield _number(duty.best_efficiency_share, percent=True)
    yield _number(duty.npsh_available, digits=3)
    yield _number(duty.npsh_required, digits=3)


def correction_text(found: CorrectionResult) -> str:
    """How a water curve was corrected, and by how much."""
    if found.head_factor is None:
        return found.note or "Not corrected."
    if found.method == "none":
        return "Not corrected: what flows counts as no thicker in this pump than the water of its test."
    factors = f"head x {found.head_factor:.3f}, flow x {found.flow_factor:.3f}"
    if found.efficiency_factor is not None:
        factors += f", efficiency x {found.efficiency_factor:.3f}"
    if found.efficiency_factor_for_motor is not None and found.efficiency_factor_for_motor != found.efficiency_factor:
        factors += f" (x {found.efficiency_factor_for_motor:.3f} by tau/gamma, which the motor covers)"
    viscosities = _viscosities(found)
    note = f" {found.note}" if found.note else ""
    return f"Corrected by {found.method}: {factors}{viscosities}.{note}"


def _viscosities(found: CorrectionResult) -> str:
    """The two viscosities a correction by viscosity rests on, and their shear rate."""
    if found.method == "cave" or found.viscosity_head is None or found.viscosity_efficiency is None:
        return ""
    head, efficiency = (format_value(v, "mPa.s") for v in (found.viscosity_head, found.viscosity_efficiency))
    at = f", at {significant(found.shear_rate, 3)} 1/s" if found.shear_rate is not None else ""
    return f"; for the head by tau/gamma, {head}, for the efficiency by dtau/dgamma, {efficiency}{at}"


def findings(everywhere: Sequence[tuple[Condition, PumpOnLine]]) -> Iterator[tuple[str, str]]:
    """Checks that call for thought, and cautions, with their marks; what several conditions have alike is said once."""
    checks: dict[tuple[str, str, str], list[tuple[str, Check]]] = {}
    cautions: dict[str, list[str]] = {}
    for condition, pump in everywhere:
        for check in pump.checks:
            if check.status != "ok":
                checks.setdefault((check.status, check.name, check.basis), []).append((condition.name, check))
        for caution in pump.cautions:
            cautions.setdefault(caution, []).append(condition.name)
    for (status, name, basis), found in sorted(checks.items(), key=lambda item: GRAVEST_FIRST.index(item[0][0])):
        yield MARK[status], f"{name.replace('_', ' ')}: {_figures_found(found)}; {basis}"
    said = " ".join(basis for _, _, basis in checks)
    for caution, names in cautions.items():
        if caution in said:
            continue
        where = "" if len(names) == len(everywhere) else f" ({', '.join(names)})"
        yield "!", f"{caution}{where}"


def _figures_found(found: Sequence[tuple[str, Check]]) -> str:
    """``the case 124 m3/h, thick 111 m3/h, at least 140 m3/h``: figures by condition, a limit they share once."""
    if len({(check.limit, check.sense) for _, check in found}) > 1:
        return "; ".join(f"{condition} {against(check)}" for condition, check in found)
    *before, (last, check) = found
    return ", ".join(
        [*(f"{condition} {against(replace(one, limit=None))}" for condition, one in before), f"{last} {against(check)}"]
    )


def _conditions(result: CurveResult) -> Iterator[str]:
    flushes = [(one, flush) for one in result.conditions for flush in one.flushes]
    if not flushes and not any(one.cautions for one in result.conditions):
        return
    yield from heading("Start-up, flush and restart")
    for one, flush in flushes:
        yield paragraph(flush_text(one, flush), mark="- ")
    for one in result.conditions:
        yield from (paragraph(f"{one.name}: {caution}", mark="! ") for caution in one.cautions)


def flush_text(one: Condition, flush: Flush) -> str:
    """What one pump makes of the line in one condition."""
    velocity, volume, time = (significant(each, 3) for each in (flush.velocity, flush.volume, flush.time / 60.0))
    slowest = f"{flush.pump} on {one.name}: {velocity} m/s in the slowest pipe"
    return f"{slowest}; the line holds {volume} m3, displaced once in {time} min."


def ranking_rows(ranking: Sequence[Ranked]) -> Iterator[tuple[str, tuple[str, ...]]]:
    """Each candidate in its rank with its verdict, and why it is out."""
    for one in ranking:
        shaft, each = ("shaft", "motor") if one.number == 1 else (f"{one.number} shafts together", "each motor")
        power = f", {format_value(one.shaft_power, 'kW')} at the {shaft}" if one.shaft_power else ""
        motor = f", {each} {format_value(one.standard_motor, 'kW', 3)}" if one.standard_motor else ""
        verdict = "holds in every condition" if one.holds else "out"
        unsure = f"; not checked: {', '.join(one.not_checked)}" if one.not_checked else ""
        yield f"{one.name}: {verdict}{power}{motor}{unsure}", one.reasons


def _ranking(ranking: Sequence[Ranked]) -> Iterator[str]:
    for place, (verdict, reasons) in enumerate(ranking_rows(ranking), 1):
        yield paragraph(verdict, mark=f"{place}. ")
        yield from (paragraph(reason, mark="   - ") for reason in reasons)


def _number(value: float | None, unit: str = "", digits: int = 4, percent: bool = False) -> str:
    if value is None:
        return "-"
    if percent:
        return significant(100.0 * value, 3)
    return significant(to_display(value, unit) if unit else value, digits)
