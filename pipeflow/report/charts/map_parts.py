"""What the maps over two inputs have in common: axes, contours with their figures, numbered boundaries, their key."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from pipeflow.arrays import Array
from pipeflow.report.charts.axis import round_ends
from pipeflow.report.charts.canvas import DASHES, GREY, INK, SMALL, canvas, panel
from pipeflow.report.charts.labels import POINTS_PER_INCH, size_of
from pipeflow.report.sweep_text import labelled, unit_of
from pipeflow.study.ranges.boundaries import Boundary
from pipeflow.study.ranges.limits_over import REGIMES
from pipeflow.study.ranges.pumps_over import is_candidate
from pipeflow.study.ranges.sweeping import Axis, Variable
from pipeflow.units import significant, to_display

LEFT, RIGHT, UNDER, OVER, HEIGHT = 0.66, 2.3, 0.88, 0.15, 4.1
SAMPLE = 22.0
"""Length of the sample of a line in the key, points."""


def shown(variable: Variable, values: Sequence[float] | Array) -> Array:
    """Values in the unit of the axis."""
    unit = unit_of(variable)
    return np.array([to_display(float(value), unit) if unit else float(value) for value in values])


def printed(variable: Variable) -> str:
    """What stands on a printed axis."""
    return labelled(variable).replace("m3", "m³")


def said_below(figure: Figure, lines: Sequence[str]) -> None:
    """Say below the panel what is drawn in it."""
    wide, _ = figure.get_size_inches()
    text: dict[str, Any] = {"fontsize": SMALL, "color": GREY, "ha": "left", "va": "bottom", "linespacing": 1.25}
    figure.text(LEFT / wide, 0.012, "\n".join(lines), **text)


def map_axes(across: Axis, up: Axis) -> tuple[Figure, Axes]:
    """A panel over the two inputs, room for the key beside it."""
    figure = canvas(UNDER + HEIGHT + OVER)
    axes = panel(figure, LEFT, UNDER, figure.get_size_inches()[0] - LEFT - RIGHT, HEIGHT)
    for axis, given in ((axes.xaxis, across), (axes.yaxis, up)):
        ends = shown(given.variable, [given.values[0], given.values[-1]])
        _ticks(axis, float(ends[0]), float(ends[1]))
        axis.set_label_text(printed(given.variable))
    return figure, axes


def _ticks(axis: Any, low: float, high: float) -> None:
    """Ticks at round values between ends that are as they are."""
    first, _, step = round_ends(low, high, 7)
    every = np.arange(first, high + 0.5 * step, step)
    slack = 1e-9 * (high - low)
    axis.set_ticks([float(one) for one in every if low - slack <= one <= high + slack])
    (axis.axes.set_xlim if axis.axis_name == "x" else axis.axes.set_ylim)(low, high)


def contours(axes: Axes, across: Array, up: Array, values: Array, count: int) -> None:
    """Thin lines of equal value with their figures; ``values`` of shape (up, across)."""
    known = values[np.isfinite(values)]
    if known.size == 0 or np.ptp(known) <= 1e-9 * abs(float(known.max())):
        return
    low, high, step = round_ends(float(known.min()), float(known.max()), count)
    levels = [low + index * step for index in range(1, round((high - low) / step))]
    drawn = axes.contour(across, up, values, levels=levels, colors=[GREY], linewidths=0.5)
    places = list(_label_places(axes, drawn))
    if places:
        axes.clabel(drawn, fontsize=SMALL - 1.0, fmt=_level, inline=True, inline_spacing=2.0, manual=places)


def _level(level: float) -> str:
    return significant(level, 2)


def _label_places(axes: Axes, drawn: Any) -> Iterator[tuple[float, float]]:
    """A place on each line for its figure: the farthest from the edge, where it is not cut off."""
    figure: Any = axes.figure
    pixels = figure.dpi / POINTS_PER_INCH
    for level, lines in zip(drawn.levels, drawn.allsegs, strict=True):
        points = np.concatenate([np.empty((0, 2)), *lines])
        if len(points):
            at = axes.transData.transform(points)
            inside = np.minimum(at - axes.bbox.min, axes.bbox.max - at).min(axis=1)
            best = int(inside.argmax())
            if inside[best] > 0.6 * size_of(_level(level), SMALL)[0] * pixels:
                yield float(points[best, 0]), float(points[best, 1])


@dataclass(frozen=True)
class Look:
    """How a boundary is drawn."""

    color: str
    width: float
    dashes: Any


def look_of(boundary: Boundary, index: int) -> Look:
    """Limits in thick lines, the upper figure dashed; regimes grey; pumps by patterns."""
    if boundary.name in REGIMES:
        return Look(GREY, 1.1, DASHES[2] if boundary.name == REGIMES[0] else DASHES[1])
    if is_candidate(boundary.name):
        return Look(INK, 1.0, DASHES[index % len(DASHES)])
    return Look(INK, 1.8, (0, ()) if boundary.figure == "central" else DASHES[0])


def draw_boundaries(
    axes: Axes, boundaries: Sequence[Boundary], variables: tuple[Variable, Variable], name: Callable[[Boundary], str]
) -> None:
    """Draw every boundary with its number on it, and the key beside the panel."""
    entries: list[tuple[Look, str]] = []
    taken: list[tuple[float, float]] = []
    for index, boundary in enumerate(boundaries):
        look = look_of(boundary, index)
        for line in boundary.lines:
            x, y = (shown(variable, [point[at] for point in line]) for at, variable in enumerate(variables))
            axes.plot(x, y, color=look.color, linewidth=look.width, linestyle=look.dashes, zorder=4)
        longest = max(boundary.lines, key=len)
        _number(axes, [shown(variable, [point[at] for point in longest]) for at, variable in enumerate(variables)],
                str(index + 1), taken)  # fmt: skip
        entries.append((look, f"{index + 1} {name(boundary)}"))
    _key(axes, entries)


def _number(axes: Axes, line: Sequence[Array], text: str, taken: list[tuple[float, float]]) -> None:
    """Stand a number on a line, as far from the others as may be."""
    at = axes.transAxes.inverted().transform(axes.transData.transform(np.column_stack(line)))
    along = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(at, axis=0).T))]) if len(at) > 1 else np.zeros(1)
    places = [np.array([np.interp(share * along[-1], along, at[:, k]) for k in (0, 1)])
              for share in np.linspace(0.06, 0.94, 23)]  # fmt: skip
    best = max(places, key=lambda place: min([float(np.hypot(*(place - one))) for one in taken], default=1.0))
    taken.append((float(best[0]), float(best[1])))
    ring = {"boxstyle": "circle,pad=0.15", "facecolor": "white", "edgecolor": INK, "linewidth": 0.6}
    middle: dict[str, Any] = {"ha": "center", "va": "center", "fontsize": SMALL}
    axes.text(*taken[-1], text, transform=axes.transAxes, bbox=ring, zorder=8, **middle)


def _key(axes: Axes, entries: Sequence[tuple[Look, str]]) -> None:
    """Samples of the lines and their names, from the top down."""
    figure: Any = axes.figure
    wide, high = figure.get_size_inches() * POINTS_PER_INCH
    left = wide - RIGHT * POINTS_PER_INCH + 12.0
    top = high - OVER * POINTS_PER_INCH - 4.0
    room = wide - left - SAMPLE - 6.0
    for look, text in entries:
        lines = wrapped(text, room)
        middle = top - 0.6 * SMALL
        figure.add_artist(Line2D([left / wide, (left + SAMPLE) / wide], [middle / high] * 2, color=look.color,
                                 linewidth=look.width, linestyle=look.dashes))  # fmt: skip
        figure.text((left + SAMPLE + 5.0) / wide, top / high, "\n".join(lines), fontsize=SMALL, ha="left", va="top",
                    linespacing=1.15)  # fmt: skip
        top -= 1.2 * SMALL * len(lines) + 5.0


def wrapped(text: str, room: float, size: float = SMALL) -> list[str]:
    """Break a text into lines no wider than ``room`` points; a word too long is cut."""
    lines = [""]
    for word in text.split(" "):
        longer = f"{lines[-1]} {word}".strip()
        if size_of(longer, size)[0] <= room:
            lines[-1] = longer
        else:
            lines.append(_cut(word, room, size))
    return [line for line in lines if line]


def _cut(word: str, room: float, size: float) -> str:
    while size_of(word, size)[0] > room and len(word) > 2:
        word = f"{word[:-2]}…"
    return word
