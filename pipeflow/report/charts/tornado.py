"""The tornado of a case: how far the head loss moves with each uncertain input, all others at their medians."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from matplotlib.axes import Axes
from matplotlib.figure import Figure

from pipeflow.report.charts.axis import round_ends
from pipeflow.report.charts.canvas import (
    FILL,
    INK,
    SMALL,
    as_svg,
    canvas,
    drawing,
    panel,
    set_ends,
    shortened,
)
from pipeflow.report.charts.labels import POINTS_PER_INCH, size_of
from pipeflow.study.sampling.line import HEAD_LOSS
from pipeflow.study.sampling.uncertainty import Bar, UncertaintyResult
from pipeflow.units import significant

LEFT, RIGHT, UNDER, OVER, ROW = 2.3, 0.6, 0.5, 0.12, 0.3
OFF = 3.0
"""Points between a bar and its figure."""
NAME = "tornado"
LEAST = 1e-6
"""Share of the head loss below which a bar is none."""


def tornado_chart(result: UncertaintyResult) -> str:
    """Draw the chart; empty where no input moves the head loss."""
    bars = moving(result)
    if not bars:
        return ""
    with drawing(NAME):
        title = f"Head loss by each uncertain input: {result.case.title}"
        return as_svg(_figure(bars, result.median[HEAD_LOSS]), NAME, title, list(_described(bars, result)))


def moving(result: UncertaintyResult) -> list[Bar]:
    """Bars of the inputs that move the head loss, the widest first."""
    middle = abs(result.median[HEAD_LOSS])
    return [bar for bar in result.tornado if bar.width(HEAD_LOSS) > LEAST * middle]


def _described(bars: Sequence[Bar], result: UncertaintyResult) -> Iterator[str]:
    yield f"All inputs at their medians: {significant(result.median[HEAD_LOSS])} m."
    for bar in bars:
        low, high = (significant(end) for end in (bar.low[HEAD_LOSS], bar.high[HEAD_LOSS]))
        yield f"{bar.factor} at its 5 %: {low} m, at its 95 %: {high} m."


def _figure(bars: Sequence[Bar], middle: float) -> Figure:
    figure = canvas(UNDER + OVER + ROW * len(bars))
    axes = panel(figure, LEFT, UNDER, figure.get_size_inches()[0] - LEFT - RIGHT, ROW * len(bars))
    ends = [end for bar in bars for end in (bar.low[HEAD_LOSS], bar.high[HEAD_LOSS]) if math.isfinite(end)]
    set_ends(axes.xaxis, round_ends(min([middle, *ends]), max([middle, *ends]), 6))
    for row, bar in enumerate(bars):
        _drawn(axes, -row, bar, middle)
    _make_room(axes, ends, middle)
    axes.axvline(middle, color=INK, linewidth=1.2)
    axes.set_ylim(-len(bars) + 0.5, 0.5)
    axes.set_yticks([-row for row in range(len(bars))], labels=[shortened(bar.factor, 34) for bar in bars])
    axes.tick_params(axis="y", length=0)
    axes.grid(visible=False, axis="y")
    axes.set_xlabel("head loss, m of the slurry")
    return figure


def _make_room(axes: Axes, ends: Sequence[float], middle: float) -> None:
    """Begin the axis farther left where the figure of a bar would else stand on the name of its input."""
    low, high = axes.get_xlim()
    width = axes.get_window_extent().width * POINTS_PER_INCH / axes.figure.dpi
    for end in ends:
        share = (size_of(significant(end))[0] + 2.0 * OFF) / width
        if end < middle:
            low = min(low, (end - share * high) / (1.0 - share))
    axes.set_xlim(low, high)


def _drawn(axes: Axes, row: int, bar: Bar, middle: float) -> None:
    """Draw the way to the 5 % hatched and that to the 95 % filled, each end with its figure."""
    low, high = bar.low[HEAD_LOSS], bar.high[HEAD_LOSS]
    for end, fill, hatch in ((low, "none", "/////"), (high, FILL, None)):
        if math.isfinite(end):
            axes.barh(
                row, end - middle, left=middle, height=0.6, facecolor=fill, edgecolor=INK, linewidth=0.7, hatch=hatch
            )
    for end in (low, high):
        if math.isfinite(end):
            is_left = end < middle
            place = "right" if is_left else "left"
            axes.annotate(significant(end), (end, row), (-OFF if is_left else OFF, 0), textcoords="offset points",
                          ha=place, va="center", fontsize=SMALL, annotation_clip=False)  # fmt: skip
