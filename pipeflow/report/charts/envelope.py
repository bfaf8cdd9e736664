"""The chart of a duty envelope: boundaries over flow and another input, the window hatched, energy in thin lines."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, Final

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import PathPatch
from matplotlib.path import Path

from pipeflow.report.charts.canvas import FILL, INK, PALE, as_svg, drawing, shortened
from pipeflow.report.charts.map_parts import contours, draw_boundaries, map_axes, said_below, shown
from pipeflow.report.sweep_text import boundary_name, energy_unit, name_of
from pipeflow.study.ranges.boundaries import Boundary, Figure
from pipeflow.study.ranges.envelope import Envelope
from pipeflow.study.ranges.limits_over import REGIMES
from pipeflow.units import format_si, significant, to_display

NAME = "envelope"
LOOKS: Final[tuple[tuple[Figure, str, str], ...]] = (("central", "....", "white"), ("upper", "////", FILL))
"""Hatch and ground of the window by each figure."""


def envelope_chart(envelope: Envelope) -> str:
    """Draw the chart."""
    with drawing(NAME):
        figure, axes = map_axes(envelope.flow, envelope.up)
        across, up = (shown(axis.variable, axis.values) for axis in (envelope.flow, envelope.up))
        _hatch(axes, envelope)
        contours(axes, across, up, np.array(envelope.energy), 9)
        variables = envelope.flow.variable, envelope.up.variable
        draw_boundaries(axes, drawn(envelope), variables, lambda one: named(one, envelope))
        _present(axes, envelope)
        said_below(figure, _said(envelope))
        return as_svg(figure, NAME, f"Duty envelope: {envelope.case.title}", list(_described(envelope)))


def drawn(envelope: Envelope) -> list[Boundary]:
    """The boundaries that are more than one point at the edge of the map."""
    return [one for one in envelope.boundaries if max(len(line) for line in one.lines) > 1]


def named(one: Boundary, envelope: Envelope) -> str:
    """Name a boundary with its limit, or the pipe whose regime it is of."""
    stated = envelope.limits.get(one.name)
    sign = "≤" if stated and stated.sense == "at most" else "≥"
    limit = f" {sign} {format_si(stated.limit, stated.unit)}" if stated and stated.limit is not None else ""
    limit = limit.replace(" ", "\u00a0").replace("\u00a0", " ", 1)
    pipe = f", {shortened(envelope.governing_pipe, 20)}" if one.name in REGIMES else ""
    return f"{shortened(boundary_name(one), 44)}{limit}{pipe}"


def _hatch(axes: Axes, envelope: Envelope) -> None:
    """The window by the central figure dotted, by the upper one hatched over it."""
    for figure, hatch, ground in LOOKS:
        rings = [np.array([*ring, ring[0]]) for ring in envelope.areas[figure]]
        if rings:
            variables = envelope.flow.variable, envelope.up.variable
            corners = [np.column_stack([shown(one, ring[:, at]) for at, one in enumerate(variables)]) for ring in rings]
            path = Path.make_compound_path(*(Path(ring, closed=True) for ring in corners))
            look: dict[str, Any] = {"facecolor": ground, "edgecolor": PALE, "hatch": hatch, "linewidth": 0.0}
            axes.add_patch(PathPatch(path, zorder=1, **look))


def _present(axes: Axes, envelope: Envelope) -> None:
    """The flows of the case at its own value."""
    asked = envelope.case.flow
    flows = shown(envelope.flow.variable, [asked.minimum, asked.design, asked.maximum])
    value = float(shown(envelope.up.variable, [envelope.up.variable.value])[0])
    axes.plot(flows[[0, 2]], [value, value], color=INK, linewidth=2.6, solid_capstyle="butt", zorder=6)
    axes.plot([flows[1]], [value], marker="D", markersize=6, color=INK, markerfacecolor="white", zorder=7)


def _said(envelope: Envelope) -> list[str]:
    return [
        "hatched: every limit holds; dotted: by the central figure alone; ◇ the case with its flows",
        f"thin lines: energy of the losses, {energy_unit(envelope.case)}",
    ]


def _described(envelope: Envelope) -> Iterator[str]:
    own = envelope.own
    yield f"Flow across, {name_of(envelope.up.variable)} upwards; the window where every limit holds is hatched."
    for one in own.upper:
        low, high = (significant(to_display(flow, "m3/h")) for flow in (one.low, one.high))
        yield f"At the value of the case from {low} to {high} m3/h."
    if not own.upper:
        yield "At the value of the case there is no flow at which every limit holds by the upper figure."
    for number, boundary in enumerate(drawn(envelope), 1):
        yield f"{number}: {named(boundary, envelope)}."
