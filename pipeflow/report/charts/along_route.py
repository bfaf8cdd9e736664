"""The chart of the line along its route: grade lines, elevation, the step at the pump, and the gauge pressure below."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.report.charts.axis import round_ends
from pipeflow.report.charts.canvas import (
    GREY,
    INK,
    PALE,
    WIDTH,
    as_svg,
    canvas,
    drawing,
    panel,
    set_ends,
    set_sides,
    shortened,
)
from pipeflow.report.charts.labels import POINTS_PER_INCH, Above, Beside, Placer, left_room, size_of
from pipeflow.study.profile import atmospheric_pressure
from pipeflow.study.result import ProfilePoint, Result
from pipeflow.units import significant

LEFT, RIGHT, MAIN, PRESSURE, OVER, UNDER, BETWEEN = 0.66, 1.5, 2.8, 1.1, 0.45, 0.5, 0.2
NAME = "route"
UPPER_DASHES = (8, 2.5)


def route_chart(result: Result) -> str:
    """Draw the chart."""
    with drawing(NAME):
        return as_svg(_figure(result), NAME, "Head and pressure along the route", list(_described(result)))


def _described(result: Result) -> Iterator[str]:
    profile = result.profile
    yield "Hydraulic grade line and elevation of the pipe in metres of the slurry, and gauge pressure, at design flow."
    yield f"Highest at {profile.highest_point}; lowest at {profile.lowest_point}."
    yield f"The pump gives {significant(profile.pump_head, 3)} m, upper {significant(profile.pump_head_upper, 3)} m."
    named = [f"{number} {element.name}" for number, element in enumerate(result.elements, start=1)]
    yield f"Elements in flow order: {'; '.join(named)}."


def _walked(result: Result) -> list[ProfilePoint]:
    """The points of the route in order, the place right after the pump among them."""
    points, before = result.profile.points, result.profile.before_pump
    return [*points[1 : before + 1], result.profile.after_pump, *points[before + 1 : -1]]


def _grade(case: Case, points: Sequence[ProfilePoint], upper: bool = False) -> Array:
    """Elevation and pressure head, m."""
    weight = float(case.fluid.density) * STANDARD_GRAVITY
    return np.array([one.elevation + (one.pressure_upper if upper else one.pressure) / weight for one in points])


def _vapour(case: Case, points: Sequence[ProfilePoint]) -> Array | None:
    """Grade below which the liquid boils, m; None where it is not known."""
    atmosphere = atmospheric_pressure(case)
    if atmosphere is None or case.liquid is None or case.liquid.vapour_pressure is None:
        return None
    head = (case.liquid.vapour_pressure - atmosphere) / (float(case.fluid.density) * STANDARD_GRAVITY)
    return np.array([one.elevation + head for one in points])


def _figure(result: Result) -> Figure:
    figure = canvas(UNDER + PRESSURE + BETWEEN + MAIN + OVER)
    points = _walked(result)
    axes, below = _panels(figure, result, points)
    ends = round_ends(0.0, max(one.distance for one in points))
    for each in (axes, below):
        set_ends(each.xaxis, ends)
    axes.tick_params(labelbottom=False)
    below.set_xlabel("distance along the route, m")
    _heads(axes, result, points)
    _pressures(below, points)
    return figure


def _panels(figure: Figure, result: Result, points: Sequence[ProfilePoint]) -> tuple[Axes, Axes]:
    """Panels of heads and of pressures with their vertical axes, as far from the edge as these need."""
    axes, below = panel(figure, LEFT, UNDER + PRESSURE + BETWEEN, 1.0, MAIN), panel(figure, LEFT, UNDER, 1.0, PRESSURE)
    set_ends(axes.yaxis, _ends_of_heads(result, points))
    set_ends(below.yaxis, _ends_of_pressures(points))
    axes.set_ylabel("head, m of the slurry")
    below.set_ylabel("pressure,\nkPa gauge")
    left = max(LEFT, left_room(axes), left_room(below))
    for each in (axes, below):
        set_sides(each, left, RIGHT)
    return axes, below


def _ends_of_heads(result: Result, points: Sequence[ProfilePoint]) -> tuple[float, float, float]:
    case, vapour = result.case, _vapour(result.case, points)
    surfaces = [result.profile.points[0].elevation, result.profile.points[-1].elevation]
    grades = (_grade(case, points), _grade(case, points, upper=True), *([] if vapour is None else [vapour]))
    known = np.concatenate([[one.elevation for one in points], *grades, surfaces])
    return round_ends(float(np.nanmin(known)), float(np.nanmax(known)))


def _ends_of_pressures(points: Sequence[ProfilePoint]) -> tuple[float, float, float]:
    every = [pressure / 1e3 for one in points for pressure in (one.pressure, one.pressure_upper)]
    return round_ends(min(0.0, *every), max(every), 5)


def _heads(axes: Axes, result: Result, points: Sequence[ProfilePoint]) -> None:
    case = result.case
    distance = [one.distance for one in points]
    elevation = np.array([one.elevation for one in points])
    central, upper, vapour = _grade(case, points), _grade(case, points, upper=True), _vapour(case, points)
    surfaces = [result.profile.points[0].elevation, result.profile.points[-1].elevation]
    beside, placer = Beside(axes), Placer(axes)
    apart = bool(np.any(np.abs(upper - central) > 5e-3 * max(float(np.nanmax(np.abs(central))), 1e-9)))
    lines: list[tuple[Array, str, float, Any, str]] = [
        (elevation, "pipe", 2.6, (None, None), GREY),
        (central, "grade line, central" if apart else "grade line", 1.6, (None, None), INK),
    ]
    if apart:
        lines.append((upper, "grade line, upper", 1.2, UPPER_DASHES, INK))
    if vapour is not None:
        lines.append((vapour, "boils below", 0.9, (1, 2), INK))
    for heights, name, thick, dashes, color in lines:
        axes.plot(distance, heights, color=color, linewidth=thick, dashes=dashes)
        beside.add(distance[-1], float(heights[-1]), name)
        placer.avoid(distance, list(heights))
    _surfaces(axes, placer, surfaces, distance[-1])
    _slack(axes, result)
    beside.draw()
    _points_named(axes, placer, result, points)
    _elements(axes, result)


def _surfaces(axes: Axes, placer: Placer, surfaces: Sequence[float], end: float) -> None:
    for at, level, name in ((0.0, surfaces[0], "source level"), (end, surfaces[1], "destination level")):
        axes.plot([at], [level], marker=7, markersize=7, color=INK, clip_on=False)
        placer.name(at, level, f"{name} {significant(level, 3)}")


def _slack(axes: Axes, result: Result) -> None:
    """The stretches that run partly filled, drawn over the pipe."""
    slack, points = result.profile.slack_upper, result.profile.points
    for name, share in (slack.share if slack else {}).items():
        start, end = (point for point in points if point.element == name)
        across = [start.distance, start.distance + share * (end.distance - start.distance)]
        up = [start.elevation, start.elevation + share * (end.elevation - start.elevation)]
        axes.plot(across, up, color="white", linewidth=1.6, linestyle=(0, (2, 2)))


def _points_named(axes: Axes, placer: Placer, result: Result, points: Sequence[ProfilePoint]) -> None:
    profile = result.profile
    after = profile.after_pump
    heads = (significant(profile.pump_head, 3), significant(profile.pump_head_upper, 3))
    given = heads[0] if heads[0] == heads[1] else f"{heads[0]}, upper {heads[1]}"
    step = (_grade(result.case, [profile.points[profile.before_pump], after]).sum()) / 2.0
    placer.name(after.distance, float(step), f"pump +{given} m")
    high, low = max(points, key=lambda one: one.elevation), min(points, key=lambda one: one.elevation)
    if high.elevation > low.elevation:
        for one, word in ((high, "high"), (low, "low")):
            axes.plot([one.distance], [one.elevation], "o", markersize=4.5, color=INK, markerfacecolor="white")
            placer.name(one.distance, one.elevation, f"{word} {significant(one.elevation, 3)}")


def _elements(axes: Axes, result: Result) -> None:
    """Names of the elements over the panel; where they do not fit their numbers, as in the table of the route."""
    ends: dict[str, list[float]] = {}
    for point in result.profile.points[2:-1]:
        ends.setdefault(point.element, []).append(point.distance)
    room = axes.get_position().width * WIDTH * POINTS_PER_INCH + 120.0
    names = [shortened(name, 18) for name in ends]
    if sum(size_of(name)[0] + 8.0 for name in names) > room:
        names = [str(number) for number in range(1, len(ends) + 1)]
    above = Above(axes)
    for places, name in zip(ends.values(), names, strict=True):
        above.add((places[0] + places[-1]) / 2.0, name)
        for place in places:
            axes.axvline(place, color=PALE, linewidth=0.5, zorder=0.5)
    above.draw(12.0)


def _pressures(axes: Axes, points: Sequence[ProfilePoint]) -> None:
    distance = [one.distance for one in points]
    central, upper = ([getattr(one, name) / 1e3 for one in points] for name in ("pressure", "pressure_upper"))
    beside = Beside(axes)
    axes.plot(distance, central, color=INK, linewidth=1.6)
    apart = any(abs(high - low) > 5e-3 * max(abs(high), 1.0) for low, high in zip(central, upper, strict=True))
    beside.add(distance[-1], central[-1], "central" if apart else "pressure")
    if apart:
        axes.plot(distance, upper, color=INK, linewidth=1.2, dashes=UPPER_DASHES)
        beside.add(distance[-1], upper[-1], "upper")
    axes.axhline(0.0, color=GREY, linewidth=0.8)
    beside.draw()
