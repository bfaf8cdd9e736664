"""Where the names of lines and points stand: none on top of another."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.font_manager import FontProperties
from matplotlib.lines import Line2D
from matplotlib.textpath import TextToPath

from pipeflow.arrays import Array
from pipeflow.report.charts.canvas import GREY, SMALL, TEXT

_MEASURE = TextToPath()
_PADDING = 2.0
_AROUND = 12.0
"""Points between a panel, the figures of its ticks, the name of its axis and the edge of the chart."""
POINTS_PER_INCH = 72.0
Box = tuple[float, float, float, float]
"""Left, bottom, right and top, points."""


def size_of(text: str, size: float = SMALL) -> tuple[float, float]:
    """Width and height of a text of one or several lines, points."""
    lines = text.split("\n")
    font = FontProperties(size=size)
    widths = [_MEASURE.get_text_width_height_descent(line, font, ismath=False)[0] for line in lines]
    return float(max(widths)), 1.2 * size * len(lines)


def left_room(axes: Axes) -> float:
    """Width that ticks, their figures and the name of a vertical axis take left of a panel, inches."""
    axis: Any = axes.yaxis
    figures = axis.get_major_formatter().format_ticks(axis.get_ticklocs())
    widest = max((size_of(figure, TEXT)[0] for figure in figures), default=0.0)
    name = size_of(axis.get_label_text(), TEXT)[1] if axis.get_label_text() else 0.0
    return (widest + name + _AROUND) / POINTS_PER_INCH


def spread(wanted: Sequence[float], extents: Sequence[float], low: float, high: float) -> list[float]:
    """Middles of labels along a line, each as near as may be to where it is wanted, none on another.

    Parameters
    ----------
    wanted, extents : sequence of float
        Where each label should stand, and how long it is.
    low, high : float
        Ends of the line; labels keep within, unless there are too many.

    Examples
    --------
    >>> spread([10.0, 11.0], [4.0, 4.0], 0.0, 100.0)
    [8.5, 12.5]
    """
    order = sorted(range(len(wanted)), key=lambda index: wanted[index])
    groups: list[list[float]] = []  # first edge, length, and the sum of edges wanted of the labels that touch
    members: list[list[int]] = []
    for index in order:
        half = extents[index] / 2.0
        groups.append([wanted[index] - half, extents[index], wanted[index] - half, 1.0])
        members.append([index])
        _settle(groups[-1], low, high)
        while len(groups) > 1 and groups[-2][0] + groups[-2][1] > groups[-1][0]:
            _merge(groups)
            _settle(groups[-1], low, high)
            last = members.pop()
            members[-1] += last
    found = [0.0] * len(wanted)
    for (edge, *_), inside in zip(groups, members, strict=True):
        for index in inside:
            found[index] = edge + extents[index] / 2.0
            edge += extents[index]
    return found


def _merge(groups: list[list[float]]) -> None:
    _, length, edges, count = groups.pop()
    before = groups[-1]
    before[2] += edges - count * before[1]
    before[3] += count
    before[1] += length


def _settle(group: list[float], low: float, high: float) -> None:
    group[0] = max(min(group[2] / group[3], high - group[1]), low)


@dataclass
class Beside:
    """Names at the right edge of a panel, each with a thin line to the end of what it names."""

    axes: Axes
    names: list[tuple[float, float, str, float]] = field(default_factory=list)

    def add(self, x: float, y: float, text: str, size: float = SMALL) -> None:
        """Name what ends at a point of the data."""
        if np.isfinite(x) and np.isfinite(y):
            self.names.append((x, y, text, size))

    def draw(self, gap: float = 14.0) -> None:
        """Write the names, ``gap`` points off the panel."""
        box = _box_in_points(self.axes)
        ends = [_in_points(self.axes, x, y) for x, y, _, _ in self.names]
        heights = [size_of(text, size)[1] for _, _, text, size in self.names]
        wanted = [float(np.clip(y, box[1], box[3])) for _, y in ends]
        middles = spread(wanted, heights, box[1] - 6.0, box[3] + 6.0)
        for (x, y), middle, (_, _, text, size) in zip(ends, middles, self.names, strict=True):
            end = min(x, box[2])
            start = float(np.clip(y, box[1], box[3]))
            line(self.axes, [end + 1.0, box[2] + gap - 8.0, box[2] + gap - 2.0], [start, middle, middle])
            _write(self.axes, box[2] + gap, middle, text, size, "left")


@dataclass
class Above:
    """Names over a panel, each with a thin line down to the place of the axis it stands for."""

    axes: Axes
    names: list[tuple[float, str]] = field(default_factory=list)

    def add(self, x: float, text: str) -> None:
        """Name a place of the axis."""
        self.names.append((x, text))

    def draw(self, height: float, size: float = SMALL) -> None:
        """Write the names, their foot ``height`` points over the panel."""
        box = _box_in_points(self.axes)
        at = [_in_points(self.axes, x, 0.0)[0] for x, _ in self.names]
        widths = [size_of(text, size)[0] + 8.0 for _, text in self.names]
        middles = spread(at, widths, box[0] - 30.0, box[2] + 100.0)
        for x, middle, (_, text) in zip(at, middles, self.names, strict=True):
            line(
                self.axes, [x, x, middle, middle], [box[3], box[3] + 3.0, box[3] + height - 4.0, box[3] + height - 1.0]
            )
            lines = text.count("\n") + 1
            _write(self.axes, middle, box[3] + height + 0.6 * size * lines, text, size, "center")


def line(axes: Axes, across: Sequence[float], up: Sequence[float]) -> None:
    """Draw a thin line through points of the page, in points from the lower left corner of the figure."""
    figure: Any = axes.figure
    wide, high = figure.get_size_inches() * POINTS_PER_INCH
    places = [x / wide for x in across], [y / high for y in up]
    figure.add_artist(Line2D(*places, color=GREY, linewidth=0.5, transform=figure.transSubfigure))


def _write(axes: Axes, x: float, y: float, text: str, size: float, align: str, ground: str = "") -> None:
    figure: Any = axes.figure
    wide, high = figure.get_size_inches() * POINTS_PER_INCH
    box = {"facecolor": ground, "edgecolor": "none", "pad": 0.6} if ground else None
    figure.text(x / wide, y / high, text, fontsize=size, ha=align, va="center", linespacing=1.15, bbox=box, zorder=9)


def _points_per_pixel(axes: Axes) -> float:
    figure: Any = axes.figure
    return float(POINTS_PER_INCH / figure.dpi)


def _in_points(axes: Axes, x: float, y: float) -> tuple[float, float]:
    across, up = axes.transData.transform((x, y)) * _points_per_pixel(axes)
    return float(across), float(up)


def _box_in_points(axes: Axes) -> Box:
    left, bottom, right, top = np.asarray(axes.bbox.extents) * _points_per_pixel(axes)
    return float(left), float(bottom), float(right), float(top)


@dataclass
class Placer:
    """Names beside points within a panel, where they cover neither one another nor, if it can be had, a line."""

    axes: Axes
    taken: list[Box] = field(default_factory=list)
    lines: list[tuple[Array, float]] = field(default_factory=list)

    def avoid(self, x: Sequence[float], y: Sequence[float], weight: float = 6.0) -> None:
        """Keep names off a line of the data; ``weight`` tells how much it matters."""
        pixels = self.axes.transData.transform(np.column_stack([x, y])) * _points_per_pixel(self.axes)
        at = pixels[np.isfinite(pixels).all(axis=1)]
        if len(at) > 1:
            along = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(at, axis=0).T))])
            every = np.arange(0.0, along[-1], 3.0)
            at = np.column_stack([np.interp(every, along, at[:, 0]), np.interp(every, along, at[:, 1])])
        self.lines.append((at, weight))

    def name(self, x: float, y: float, text: str, size: float = SMALL) -> None:
        """Write a name near a point, with a thin line to it where it stands farther off."""
        at = _in_points(self.axes, x, y)
        wide, high = size_of(text, size)
        boxes = [
            (distance, self._beside(at, angle, distance, wide, high))
            for distance in (7.0, 16.0, 30.0, 48.0, 70.0, 95.0)
            for angle in range(0, 360, 15)
        ]
        distance, box = min(boxes, key=lambda pair: self._cost(pair[1]) + pair[0])
        self.taken.append(box)
        middle = ((box[0] + box[2]) / 2.0, (box[1] + box[3]) / 2.0)
        if distance > 10.0:
            near = (float(np.clip(at[0], box[0], box[2])), float(np.clip(at[1], box[1], box[3])))
            line(self.axes, [at[0], near[0]], [at[1], near[1]])
        _write(self.axes, *middle, text, size, "center", "white")

    def _beside(self, at: tuple[float, float], angle: int, distance: float, wide: float, high: float) -> Box:
        across, up = np.cos(np.radians(angle)), np.sin(np.radians(angle))
        x = at[0] + across * (distance + wide / 2.0)
        y = at[1] + up * (distance + high / 2.0)
        return (
            float(x - wide / 2.0 - _PADDING),
            float(y - high / 2.0),
            float(x + wide / 2.0 + _PADDING),
            float(y + high / 2.0),
        )

    def _cost(self, box: Box) -> float:
        left, bottom, right, top = _box_in_points(self.axes)
        outside = (
            max(left - box[0], 0.0) + max(bottom - box[1], 0.0) + max(box[2] - right, 0.0) + max(box[3] - top, 0.0)
        )
        covered = sum(
            max(min(box[2], other[2]) - max(box[0], other[0]), 0.0)
            * max(min(box[3], other[3]) - max(box[1], other[1]), 0.0)
            for other in self.taken
        )
        crossed = sum(
            weight * int(np.sum((at[:, 0] > box[0]) & (at[:, 0] < box[2]) & (at[:, 1] > box[1]) & (at[:, 1] < box[3])))
            for at, weight in self.lines
        )
        return 50.0 * outside + 20.0 * covered + crossed
