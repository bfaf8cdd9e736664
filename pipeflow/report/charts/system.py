"""The chart of the system curve: the line in every condition, the pumps on it, their efficiency and suction below."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.report.charts.axis import round_ends
from pipeflow.report.charts.canvas import (
    DASHES,
    FILL,
    GREY,
    INK,
    MARKS,
    PALE,
    SMALL,
    as_svg,
    canvas,
    drawing,
    panel,
    set_ends,
    set_sides,
    shortened,
)
from pipeflow.report.charts.duties import upper_apart
from pipeflow.report.charts.labels import Above, Beside, Placer, left_room
from pipeflow.study.pumping.result import Condition, CurveResult, DrawnCurve, DutyPoint, PumpOnLine
from pipeflow.units import significant, to_display

LEFT, RIGHT = 0.62, 1.62
MAIN, SMALL_PANEL, BETWEEN, OVER, UNDER = 3.6, 0.8, 0.22, 0.6, 0.5
ALIKE = 5e-3
"""Central and upper curves within this share of each other are drawn as one."""
NAME = "system"


def system_chart(result: CurveResult) -> str:
    """Draw the chart."""
    with drawing(NAME):
        return as_svg(_figure(result), NAME, f"System curve: {result.own.case.title}", list(described(result)))


def described(result: CurveResult) -> Iterator[str]:
    """What the chart shows, in sentences."""
    own = result.own
    flow = _flows(own.system.flow)
    yield (
        f"Head in metres against flow from 0 to {significant(flow[-1])} m3/h for {len(result.conditions)} "
        f"condition{'s' if len(result.conditions) > 1 else ''} of the line."
    )
    for pump in own.pumps:
        upper = upper_apart(pump)
        both = "central curve" if upper or not pump.duty_upper else "central curve and on the upper"
        for figure, duty in ((both, pump.duty), ("upper curve", upper)):
            if duty:
                yield f"{pump.name} on the {figure}: {_duty_text(duty)}."
        if not pump.duty and not pump.duty_upper:
            yield f"{pump.name} does not meet the curve."


def _flows(flow: Sequence[float]) -> Array:
    return np.array([to_display(one, "m3/h") for one in flow])


def _duty_text(duty: DutyPoint) -> str:
    return f"{significant(to_display(duty.flow, 'm3/h'), 3)} m³/h, {significant(duty.head, 3)} m"


def _figure(result: CurveResult) -> Figure:
    pumps = [pump for pump in result.own.pumps if pump.drawn or pump.water]
    below = [kind for kind, has in (("efficiency", _has_efficiency(pumps)), ("npsh", _has_npsh(pumps))) if has]
    under = UNDER + len(below) * (SMALL_PANEL + BETWEEN)
    figure = canvas(under + MAIN + OVER)
    axes = panel(figure, LEFT, under, 1.0, MAIN)
    across, up = _ends(result, pumps)
    set_ends(axes.xaxis, across)
    set_ends(axes.yaxis, up)
    axes.set_ylabel("head, m of what flows")
    left = max(LEFT, left_room(axes))
    set_sides(axes, left, RIGHT)
    _draw_line(axes, result, pumps)
    panels = [axes]
    for index, kind in enumerate(below):
        small = panel(figure, LEFT, under - (index + 1) * (SMALL_PANEL + BETWEEN), 1.0, SMALL_PANEL)
        set_sides(small, left, RIGHT)
        set_ends(small.xaxis, across)
        (_draw_efficiency if kind == "efficiency" else _draw_npsh)(small, pumps)
        panels.append(small)
    for upper in panels[:-1]:
        upper.tick_params(labelbottom=False)
    panels[-1].set_xlabel("flow, m³/h")
    return figure


def _has_efficiency(pumps: Sequence[PumpOnLine]) -> bool:
    return any(value is not None for pump in pumps for value in _shown(pump).efficiency)


def _has_npsh(pumps: Sequence[PumpOnLine]) -> bool:
    return any(value is not None for pump in pumps for value in _shown(pump).npsh_required)


def _shown(pump: PumpOnLine) -> DrawnCurve:
    """The corrected curve of a pump, or that on water where there is none."""
    curve = pump.drawn or pump.water
    assert curve is not None
    return curve


def _ends(result: CurveResult, pumps: Sequence[PumpOnLine]) -> tuple[tuple[float, float, float], ...]:
    flows = [one.system.flow[-1] for one in result.conditions] + [_shown(pump).flow[-1] for pump in pumps]
    heads = [head for one in result.conditions for head in (*one.system.pump_head, *one.system.pump_head_upper)]
    heads += [head for pump in pumps for curve in (pump.drawn, pump.water) if curve for head in curve.head]
    known = np.array([head for head in heads if np.isfinite(head)] or [0.0])
    lowest = min(float(known.min()), 0.0)
    return round_ends(0.0, to_display(max(flows), "m3/h")), round_ends(lowest, float(known.max()))


def _draw_line(axes: Axes, result: CurveResult, pumps: Sequence[PumpOnLine]) -> None:
    beside, placer = Beside(axes), Placer(axes)
    if len(result.envelope_low) == len(result.own.system.flow) and _is_band(result):
        flow = _flows(result.own.system.flow)
        axes.fill_between(flow, result.envelope_low, result.envelope_high, facecolor=FILL, linewidth=0.0)
    _draw_own(axes, beside, placer, result.own)
    for index, condition in enumerate(result.conditions[1:]):
        _draw_condition(axes, beside, placer, condition, index)
    for index, pump in enumerate(pumps):
        _draw_pump(axes, beside, placer, pump, index)
    beside.draw()
    _mark_flows(axes, result, placer)
    for index, pump in enumerate(pumps):
        _mark_duties(axes, placer, pump, index)


def _is_band(result: CurveResult) -> bool:
    low, high = np.array(result.envelope_low), np.array(result.envelope_high)
    return bool(np.any(high - low > ALIKE * np.abs(high)))


def _draw_own(axes: Axes, beside: Beside, placer: Placer, own: Condition) -> None:
    curve, flow = own.system, _flows(own.system.flow)
    central, upper = np.array(curve.pump_head), np.array(curve.pump_head_upper)
    apart = bool(np.any(upper - central > ALIKE * np.abs(central)))
    axes.plot(flow, central, color=INK, linewidth=2.0, marker="o" if len(flow) == 1 else "")
    beside.add(flow[-1], central[-1], "the case, central" if apart else "the case", SMALL)
    placer.avoid(list(flow), list(central))
    if apart:
        axes.plot(flow, upper, color=INK, linewidth=1.2, dashes=(8, 2.5))
        beside.add(flow[-1], upper[-1], "the case, upper", SMALL)
        placer.avoid(list(flow), list(upper))
    axes.axhline(curve.static_head[0], color=GREY, linewidth=0.8, dashes=(1, 2))
    right = axes.get_xlim()[1]
    beside.add(right, curve.static_head[0], f"static {significant(curve.static_head[0], 3)} m")
    placer.avoid([0.0, right], [curve.static_head[0]] * 2)


def _draw_condition(axes: Axes, beside: Beside, placer: Placer, condition: Condition, index: int) -> None:
    """One scenario, or the line full of water or after a stop, by its upper figure."""
    flow, head = _flows(condition.system.flow), condition.system.pump_head_upper
    mark = MARKS[index % len(MARKS)] if index >= len(DASHES) else ""
    axes.plot(flow, head, color=GREY, linewidth=0.9, linestyle=DASHES[index % len(DASHES)], marker=mark, markersize=4,
              markerfacecolor="white", markeredgewidth=0.6, markevery=(5 * index % 30, 30))  # fmt: skip
    beside.add(flow[-1], head[-1], shortened(condition.name, 22))
    placer.avoid(list(flow), list(head))


def _draw_pump(axes: Axes, beside: Beside, placer: Placer, pump: PumpOnLine, index: int) -> None:
    mark = MARKS[index % len(MARKS)]
    if pump.water:
        axes.plot(_flows(pump.water.flow), pump.water.head, color=PALE, linewidth=0.7)
        placer.avoid(list(_flows(pump.water.flow)), pump.water.head, 3.0)
    curve = _shown(pump)
    flow, head = _flows(curve.flow), np.array(curve.head)
    every = max(len(flow) // 8, 1)
    for established, dashes in ((True, ()), (False, (3, 2))):
        part = np.where(_reached(curve.established, established), head, np.nan)
        axes.plot(flow, part, color=INK, linewidth=1.1, dashes=dashes or (None, None), marker=mark, markersize=3.5,
                  markerfacecolor="white", markeredgewidth=0.7, markevery=every)  # fmt: skip
    suffix = "" if pump.drawn else ", on water"
    beside.add(flow[-1], head[-1], f"{_mark_text(mark)} {shortened(pump.name, 20)}{suffix}")
    placer.avoid(list(flow), list(head))


def _reached(established: Sequence[bool], wanted: bool) -> NDArray[np.bool_]:
    """Where a stretch of a curve is drawn: with the point its neighbour ends at, so that no gap is left."""
    here = np.array(established) == wanted
    if not wanted:
        here = here | np.concatenate([here[1:], [False]]) | np.concatenate([[False], here[:-1]])
    return np.asarray(here, dtype=np.bool_)


def _mark_text(mark: str) -> str:
    shapes = {"o": "○", "s": "□", "^": "△", "D": "◇", "v": "▽", "P": "✚", "X": "✖", "<": "◁", ">": "▷", "h": "⬡",
              "p": "⬠", "*": "☆"}  # fmt: skip
    return shapes[mark]


def _mark_flows(axes: Axes, result: CurveResult, placer: Placer) -> None:
    """The flows of the case over the panel, and where the regime changes and solids settle over those."""
    own, asked = result.own.system, result.own.case.flow
    above = Above(axes)
    if asked.minimum == asked.maximum:
        flows = [("design", asked.design)]
    else:
        flows = [("minimum", asked.minimum), ("design", asked.design), ("maximum", asked.maximum)]
    edges = [
        ("laminar until", own.laminar_until),
        ("turbulent from", own.turbulent_from),
        ("settling below", own.deposition_flow),
    ]
    foot, top = axes.get_ylim()
    for marks, dashes in ((flows, (None, None)), (edges, (4, 2, 1, 2))):
        for name, flow in marks:
            if flow is not None and to_display(flow, "m3/h") <= axes.get_xlim()[1]:
                at = to_display(flow, "m3/h")
                axes.axvline(at, color=GREY, linewidth=0.6, dashes=dashes, zorder=1)
                placer.avoid([at, at], [foot, top], 1.0)
                above.add(at, f"{name}\n{significant(at, 3)}")
    _mark_flat(axes, result)
    above.draw(8.0)


def _mark_flat(axes: Axes, result: CurveResult) -> None:
    """A bar at the foot for the stretch where the head hardly rises with the flow."""
    for band in result.own.system.flat_bands:
        start, end = to_display(band.flow_from, "m3/h"), to_display(band.flow_to, "m3/h")
        if start < axes.get_xlim()[1]:
            seen = min(end, axes.get_xlim()[1])
            axes.axvspan(start, seen, ymax=0.035, facecolor="white", edgecolor=INK, hatch="////", linewidth=0.6)


def _mark_duties(axes: Axes, placer: Placer, pump: PumpOnLine, index: int) -> None:
    central, upper = pump.duty, upper_apart(pump)
    for duty, face, word in ((central, INK, " central" if upper else ""), (upper, "white", " upper")):
        if duty:
            at = to_display(duty.flow, "m3/h")
            mark = MARKS[index % len(MARKS)]
            axes.plot([at], [duty.head], mark, markersize=7, color=INK, markerfacecolor=face, zorder=5)
            placer.name(at, duty.head, f"{shortened(pump.name, 22)}{word}\n{_duty_text(duty)}")
    for other in pump.others:
        axes.plot([to_display(other.flow, "m3/h")], [other.head], marker="x", markersize=6, color=INK, linestyle="")
        placer.name(to_display(other.flow, "m3/h"), other.head, "stable" if other.stable else "not stable")


def _draw_efficiency(axes: Axes, pumps: Sequence[PumpOnLine]) -> None:
    columns = [[np.nan if value is None else 100.0 * value for value in _shown(pump).efficiency] for pump in pumps]
    set_ends(axes.yaxis, round_ends(0.0, float(np.nanmax(np.concatenate(columns))), 4))
    axes.set_ylabel("efficiency, %")
    _draw_below(axes, pumps, columns, "efficiency")


def _draw_npsh(axes: Axes, pumps: Sequence[PumpOnLine]) -> None:
    columns = [[np.nan if value is None else value for value in _shown(pump).npsh_required] for pump in pumps]
    available = [duty.npsh_available for pump in pumps for duty in (pump.duty, pump.duty_upper)
                 if duty and duty.npsh_available is not None]  # fmt: skip
    set_ends(
        axes.yaxis, round_ends(min(0.0, *available, 0.0), float(np.nanmax([*np.concatenate(columns), *available])), 4)
    )
    axes.set_ylabel("NPSH, m")
    _draw_below(axes, pumps, columns, "required")
    placer = Placer(axes)
    for pump, column in zip(pumps, columns, strict=True):
        placer.avoid(list(_flows(_shown(pump).flow)), column)
    for pump in pumps:
        if pump.duty and pump.duty.npsh_available is not None:
            at = to_display(pump.duty.flow, "m3/h")
            axes.plot([at], [pump.duty.npsh_available], marker="_", markersize=10, markeredgewidth=2.0, color=INK)
            placer.name(at, pump.duty.npsh_available, f"available {significant(pump.duty.npsh_available, 2)}")


def _draw_below(axes: Axes, pumps: Sequence[PumpOnLine], columns: Sequence[Sequence[float]], what: str) -> None:
    beside = Beside(axes)
    for index, (pump, column) in enumerate(zip(pumps, columns, strict=True)):
        flow = _flows(_shown(pump).flow)
        mark = MARKS[index % len(MARKS)]
        axes.plot(flow, column, color=INK, linewidth=1.0, marker=mark, markersize=3.5, markerfacecolor="white",
                  markeredgewidth=0.7, markevery=max(len(flow) // 8, 1))  # fmt: skip
        known = [place for place, value in enumerate(column) if np.isfinite(value)]
        if known:
            beside.add(flow[known[-1]], column[known[-1]], f"{_mark_text(mark)} {shortened(pump.name, 14)}")
        for duty in (pump.duty, pump.duty_upper):
            if duty and what == "efficiency" and duty.efficiency is not None:
                axes.plot([to_display(duty.flow, "m3/h")], [100.0 * duty.efficiency], mark, markersize=6, color=INK)
    beside.draw()
