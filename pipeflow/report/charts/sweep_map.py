"""The map of a sweep of two inputs: head loss in lines of equal value, boundaries of limits, points that hold."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from pipeflow.report.charts.canvas import GREY, as_svg, drawing, shortened
from pipeflow.report.charts.map_parts import contours, draw_boundaries, map_axes, said_below, shown
from pipeflow.report.sweep_text import boundary_name, told
from pipeflow.study.ranges.sweeping import Sweep

NAME = "sweep"


def sweep_map(sweep: Sweep) -> str:
    """Draw the map."""
    first, second = sweep.axes
    with drawing(NAME):
        figure, axes = map_axes(first, second)
        across, up = (shown(axis.variable, axis.values) for axis in sweep.axes)
        contours(axes, across, up, sweep.grid("head_loss_upper").T, 12)
        variables = first.variable, second.variable
        draw_boundaries(axes, sweep.boundaries, variables, lambda one: shortened(boundary_name(one), 44))
        holds = np.array([point.status != "fail" for point in sweep.points]).reshape(sweep.shape)
        x, y = (grid[holds] for grid in np.meshgrid(across, up, indexing="ij"))
        axes.plot(x, y, ".", color=GREY, markersize=3.0, zorder=3)
        said_below(figure, ["thin lines: head loss in m by the upper figure; dots: points where every limit holds"])
        return as_svg(figure, NAME, f"Sweep: {sweep.case.title}", list(_described(sweep)))


def _described(sweep: Sweep) -> Iterator[str]:
    yield "Head loss of the line in metres over two inputs."
    yield from (f"{told(axis)}." for axis in sweep.axes)
    for number, boundary in enumerate(sweep.boundaries, 1):
        yield f"{number}: {boundary_name(boundary)}."
