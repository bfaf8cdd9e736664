"""Head loss over one input in plain text, 80 columns."""

from __future__ import annotations

import numpy as np
import plotille

from pipeflow.report.charts.axis import round_ends
from pipeflow.report.sweep_text import figure_and_unit, labelled
from pipeflow.study.ranges.sweeping import Sweep
from pipeflow.units import significant

COLUMNS, ROWS = 62, 15
_EVERY = 7


def losses_in_terminal(sweep: Sweep) -> str:
    """Draw the central and the upper figure; ``x`` marks where a limit fails."""
    axis = sweep.axes[0]
    across = np.array(axis.values)
    upper, central = sweep.grid("head_loss_upper"), sweep.grid("head_loss")
    known = np.concatenate([upper[np.isfinite(upper)], central[np.isfinite(central)], [0.0]])
    low, high, _ = round_ends(float(known.min()), float(known.max()) or 1.0, most=4)
    canvas = plotille.Canvas(COLUMNS, ROWS, float(across[0]), low, float(across[-1]), high)
    for line in (central, upper):
        for start in range(len(across) - 1):
            if np.isfinite(line[start : start + 2]).all():
                canvas.line(across[start], line[start], across[start + 1], line[start + 1])
    for value, head, point in zip(across, upper, sweep.points, strict=True):
        if point.status == "fail" and np.isfinite(head):
            canvas.text(float(value), float(head), "x")
    rows = canvas.plot().replace("\u2800", " ").split("\n")
    ends = [figure_and_unit(axis.variable, value, 3)[0] for value in (axis.values[0], axis.values[-1])]
    label = labelled(axis.variable)
    return "\n".join(
        (
            "head loss, m: central and upper figure" + ("; x: a limit fails" if sweep.fails else ""),
            *(_labelled(row, index, low, high) for index, row in enumerate(rows)),
            " " * 9 + "+" + "-" * COLUMNS,
            " " * 10 + ends[0] + label[:40].center(COLUMNS - len(ends[0]) - len(ends[1])) + ends[1],
        )
    )


def _labelled(row: str, index: int, low: float, high: float) -> str:
    head = high - (high - low) * index / (ROWS - 1)
    return f"{significant(head, 3) if index % _EVERY == 0 else '':>8} |{row}".rstrip()
