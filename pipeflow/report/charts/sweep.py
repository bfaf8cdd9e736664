"""The chart of a sweep of one input: head loss, pressure and energy by it, hatched where a limit fails."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from pipeflow.arrays import Array
from pipeflow.report.charts.axis import round_ends
from pipeflow.report.charts.canvas import (
    GREY,
    INK,
    SMALL,
    as_svg,
    canvas,
    drawing,
    panel,
    set_ends,
    shortened,
)
from pipeflow.report.charts.labels import Above, Beside
from pipeflow.report.charts.map_parts import printed, shown
from pipeflow.report.sweep_text import AT_MAXIMUM, told
from pipeflow.study.ranges.sweeping import Sweep
from pipeflow.units import significant

LEFT, RIGHT, UNDER, OVER, OVER_NONE, MAIN, SMALL_PANEL, BETWEEN = 0.8, 1.36, 0.5, 0.5, 0.12, 2.6, 0.9, 0.18
ALIKE = 5e-3
NAME = "sweep"


def sweep_chart(sweep: Sweep, name: str = NAME) -> str:
    """Draw the chart; ``name`` keeps identifiers of charts on one page apart."""
    with drawing(name):
        return as_svg(_figure(sweep), name, f"Sweep: {sweep.case.title}", list(_described(sweep)))


def _described(sweep: Sweep) -> Iterator[str]:
    yield f"The line over {told(sweep.axes[0])}: head loss, pressure required and energy of the losses."
    first, last = sweep.points[0], sweep.points[-1]
    for point in (first, last):
        value = shown(sweep.axes[0].variable, point.values)[0]
        yield f"At {significant(float(value))}: head loss {significant(point.head_loss_upper)} m, upper figure."
    for text, start, end in _failing(sweep):
        yield f"{text} fails from {significant(start)} to {significant(end)}."


def _figure(sweep: Sweep) -> Figure:
    has_energy = bool(np.isfinite(sweep.grid("specific_energy")).any())
    below = 2 if has_energy else 1
    base = UNDER + below * (SMALL_PANEL + BETWEEN)
    figure = canvas(base + MAIN + (OVER if sweep.fails else OVER_NONE))
    width = figure.get_size_inches()[0] - LEFT - RIGHT
    across = shown(sweep.axes[0].variable, sweep.axes[0].values)
    main = panel(figure, LEFT, base, width, MAIN)
    panels = [main] + [panel(figure, LEFT, base - (k + 1) * (SMALL_PANEL + BETWEEN), width, SMALL_PANEL)
                       for k in range(below)]  # fmt: skip
    for axes in panels:
        set_ends(axes.xaxis, round_ends(float(across[0]), float(across[-1])))
        axes.set_xlim(float(across[0]), float(across[-1]))
    for axes in panels[:-1]:
        axes.tick_params(labelbottom=False)
    panels[-1].set_xlabel(printed(sweep.axes[0].variable))
    limit = _limit(sweep)
    _pair(main, across, sweep.grid("head_loss"), sweep.grid("head_loss_upper"), limit, 7)
    main.set_ylabel("head loss, m of the slurry")
    _mark_failing(main, sweep)
    central, upper = (sweep.grid(name) / 1e3 for name in ("pressure_required", "pressure_required_upper"))
    _pair(panels[1], across, central, upper, None, 4)
    panels[1].set_ylabel("pressure\nrequired, kPa")
    if has_energy:
        _pair(panels[2], across, sweep.grid("specific_energy"), None, None, 4)
        panels[2].set_ylabel("energy,\nkWh/(t·km)")
    return figure


@dataclass(frozen=True)
class _Limit:
    """A limit of the head loss; ``judged`` is the central figure held against it, where that is of another flow."""

    value: float
    judged: Array | None


def _limit(sweep: Sweep) -> _Limit | None:
    limit = sweep.case.limits.head_loss
    if limit is None:
        return None
    found = [next((one.value for one in point.checks if one.name == "head_loss"), None) for point in sweep.points]
    return _Limit(limit, np.array(found, dtype=np.float64) if sweep.has_other_flows else None)


def _pair(axes: Axes, across: Array, central: Array, upper: Array | None, limit: _Limit | None, most: int) -> None:
    """Draw a figure, by both methods where they differ, and its limit."""
    judged = None if limit is None else limit.judged
    known = np.concatenate([one[np.isfinite(one)] for one in (central, upper, judged) if one is not None])
    high = max([*known.tolist(), limit.value if limit else 0.0], default=1.0)
    set_ends(axes.yaxis, round_ends(min([0.0, *known.tolist()]), high or 1.0, most))
    axes.set_xlim(float(across[0]), float(across[-1]))
    beside = Beside(axes)
    apart = upper is not None and bool(np.nanmax(np.abs(upper - central)) > ALIKE * np.nanmax(np.abs(central)))
    axes.plot(across, central, color=INK, linewidth=1.8)
    beside.add(float(across[-1]), float(central[-1]), "central" if apart else "upper and central" if upper is not None
               else "upper figure", SMALL)  # fmt: skip
    if apart and upper is not None:
        axes.plot(across, upper, color=INK, linewidth=1.2, dashes=(8, 2.5))
        beside.add(float(across[-1]), float(upper[-1]), "upper", SMALL)
    if judged is not None:
        axes.plot(across, judged, color=GREY, linewidth=1.0, dashes=(3, 1.5))
        beside.add(float(across[-1]), float(judged[-1]), f"central,\n{AT_MAXIMUM}", SMALL)
    if limit is not None:
        axes.axhline(limit.value, color=GREY, linewidth=0.9, dashes=(1, 2))
        where = "" if judged is None else f",\n{AT_MAXIMUM}"
        beside.add(float(across[-1]), limit.value, f"limit {significant(limit.value, 3)} m{where}", SMALL)
    beside.draw()


def _failing(sweep: Sweep) -> Iterator[tuple[str, float, float]]:
    """Each check that fails, and the values between which it does, in the unit of the axis."""
    for run in sweep.runs:
        if run.check.status == "fail":
            low, high = shown(sweep.axes[0].variable, [run.low, run.high])
            yield run.check.name.replace("_", " "), float(low), float(high)


def _mark_failing(axes: Axes, sweep: Sweep) -> None:
    """Hatch what fails, and name the limits over it."""
    above = Above(axes)
    names: dict[tuple[float, float], list[str]] = {}
    for text, low, high in _failing(sweep):
        names.setdefault((low, high), []).append(text)
    left, right = axes.get_xlim()
    for (low, high), texts in names.items():
        thin = 0.004 * (right - left) if low == high else 0.0
        axes.axvspan(max(low - thin, left), min(high + thin, right), facecolor="none", edgecolor="#b5b5b5",
                     hatch="////", linewidth=0.0, zorder=0)  # fmt: skip
        above.add((low + high) / 2.0, "fails:\n" + shortened(", ".join(texts), 40))
    above.draw(8.0)
