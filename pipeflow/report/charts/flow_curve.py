"""The chart of the flow curve: readings, the law taken and its rivals, and where on it the pipes of the line shear."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.report.charts.axis import decade_ends
from pipeflow.report.charts.canvas import (
    DASHES,
    FILL,
    GREY,
    INK,
    MARKS,
    as_svg,
    canvas,
    drawing,
    panel,
    set_decades,
    shortened,
)
from pipeflow.report.charts.labels import Above, Beside
from pipeflow.rheology import Rheology
from pipeflow.rheology.sheet import FitResult
from pipeflow.study.readings.wall_rates import WallRates, wall_rates
from pipeflow.study.result import Result
from pipeflow.units import significant

LEFT, RIGHT, MAIN, BAR, OVER, UNDER, BETWEEN = 0.62, 1.62, 3.1, 0.2, 0.55, 0.5, 0.12
NAME = "flow-curve"
_POINTS = 200


@dataclass(frozen=True)
class _Sheet:
    """One sheet of readings and how it is named."""

    name: str
    fit: FitResult


def flow_curve_chart(result: Result) -> str:
    """Draw the chart."""
    rates = [one for one in wall_rates(result.case) if np.isfinite(one.maximum) and one.maximum > 0]
    with drawing(NAME):
        return as_svg(_figure(result.case, rates), NAME, "Flow curve", list(_described(result.case, rates)))


def _described(case: Case, rates: Sequence[WallRates]) -> Iterator[str]:
    yield f"Shear stress against shear rate of the {case.fluid.rheology.key} law taken, on logarithmic axes."
    for sheet in _sheets(case):
        yield f"{int(sheet.fit.curve.kept.sum())} readings of {sheet.name}."
    if case.tested_shear_rate:
        low, high = (significant(rate, 3) for rate in case.tested_shear_rate)
        yield f"Tested from {low} to {high} 1/s."
    for one in rates:
        low, high = significant(one.minimum, 3), significant(one.maximum, 3)
        yield f"Wall shear rates of {', '.join(one.pipes)}: {low} to {high} 1/s."


def _sheets(case: Case) -> list[_Sheet]:
    return [_Sheet(name, fit) for name, fit in zip(case.readings, case.sheets, strict=False)]


def _figure(case: Case, rates: Sequence[WallRates]) -> Figure:
    sheets = _sheets(case)
    under = UNDER + (len(rates) * BAR + BETWEEN if rates else 0.0)
    figure = canvas(under + MAIN + OVER)
    width = figure.get_size_inches()[0] - LEFT - RIGHT
    axes = panel(figure, LEFT, under, width, MAIN)
    low, high = _rates_shown(case, sheets, rates)
    rate = np.geomspace(low, high, _POINTS)
    set_decades(axes.xaxis, decade_ends(low, high))
    set_decades(axes.yaxis, decade_ends(*_stresses_shown(case, sheets, rate)))
    axes.set_ylabel("shear stress, Pa")
    _draw(axes, case, sheets, rate)
    last = axes
    if rates:
        for one in (min(each.minimum for each in rates), max(each.maximum for each in rates)):
            axes.axvline(max(one, low), color=GREY, linewidth=0.5, zorder=1)
        last = panel(figure, LEFT, UNDER, width, len(rates) * BAR)
        set_decades(last.xaxis, decade_ends(low, high))
        _bars(last, rates, low)
        axes.tick_params(labelbottom=False)
    last.set_xlabel("shear rate, 1/s")
    return figure


def _rates_shown(case: Case, sheets: Sequence[_Sheet], rates: Sequence[WallRates]) -> tuple[float, float]:
    """Ends of the shear rates worth showing, 1/s."""
    shown = [rate for one in rates for rate in (one.minimum, one.design, one.maximum) if rate > 0]
    shown += [rate for rate in case.tested_shear_rate or () if rate > 0]
    for sheet in sheets:
        shown += [float(sheet.fit.curve.shear_rate.min()), float(sheet.fit.curve.shear_rate.max())]
    low, high, _ = decade_ends(min(shown, default=1.0), max(shown, default=1000.0))
    return (low, high) if high >= 10.0 * low else (low / 5.0, high * 2.0)


def _stresses_shown(case: Case, sheets: Sequence[_Sheet], rate: Array) -> tuple[float, float]:
    stress = np.concatenate(
        [case.fluid.rheology.shear_stress(rate), *(sheet.fit.curve.shear_stress for sheet in sheets)]
    )
    known = stress[np.isfinite(stress) & (stress > 0)]
    return (float(known.min()), float(known.max())) if known.size else (1.0, 10.0)


def _draw(axes: Axes, case: Case, sheets: Sequence[_Sheet], rate: Array) -> None:
    beside, above = Beside(axes), Above(axes)
    several = len(sheets) > 1
    for index, sheet in enumerate(sheets):
        _readings(axes, sheet.fit, MARKS[index % len(MARKS)])
        if several and sheet.fit.rheology is not None:
            _law(axes, sheet.fit.rheology, rate, None, DASHES[index % len(DASHES)])
            beside.add(rate[-1], _last(sheet.fit.rheology, rate), _sheet_name(sheet))
    if len(sheets) == 1:
        for index, rival in enumerate(sheets[0].fit.fit.rivals):
            law = sheets[0].fit.fit.of(rival).law
            if law is not None:
                _law(axes, law, rate, None, DASHES[(index + 1) % len(DASHES)])
                beside.add(rate[-1], _last(law, rate), f"{rival}, rival")
    law, tested = case.fluid.rheology, case.tested_shear_rate
    _law(axes, law, rate, tested, "-")
    beside.add(rate[-1], _last(law, rate), f"{law.key},\nas taken")
    if tested:
        for word, at in zip(("tested from", "tested to"), tested, strict=True):
            axes.axvline(at, color=INK, linewidth=0.6, dashes=(4, 2, 1, 2))
            above.add(at, f"{word}\n{significant(at, 3)}")
    beside.draw()
    above.draw(8.0)


def _last(law: Rheology, rate: Array) -> float:
    return float(law.shear_stress(rate[-1]))


def _sheet_name(sheet: _Sheet) -> str:
    sample = sheet.fit.curve.sample
    return shortened(
        sheet.name.rsplit("/", 1)[-1] if sample.solids is None else f"readings, solids {sample.solids:g}", 24
    )


def _readings(axes: Axes, fit: FitResult, mark: str) -> None:
    curve = fit.curve
    kept = curve.kept
    axes.plot(
        curve.shear_rate[kept], curve.shear_stress[kept], mark, markersize=4.5, color=INK, markerfacecolor="white"
    )
    axes.plot(curve.shear_rate[~kept], curve.shear_stress[~kept], "x", markersize=4.5, color=GREY)


def _law(axes: Axes, law: Rheology, rate: Array, tested: tuple[float, float] | None, style: object) -> None:
    """A law as drawn: thin if it is not the one taken, dashed where the one taken goes past what was tested."""
    stress = np.asarray(law.shear_stress(rate))
    if style != "-":
        axes.plot(rate, stress, color=GREY, linewidth=0.9, linestyle=style)
        return
    within = np.ones_like(rate, dtype=bool) if tested is None else (rate >= tested[0]) & (rate <= tested[1])
    axes.plot(rate, np.where(within, stress, np.nan), color=INK, linewidth=1.8)
    if not within.all():
        axes.plot(rate, np.where(within, np.nan, stress), color=INK, linewidth=1.4, dashes=(3, 2))


def _bars(axes: Axes, rates: Sequence[WallRates], lowest: float) -> None:
    """A bar for the wall shear rates of each bore, from minimum to maximum flow, the design flow across it."""
    beside = Beside(axes)
    axes.set_ylim(len(rates) - 0.5, -0.5)
    axes.set_yticks([])
    axes.spines["left"].set_visible(False)
    for index, one in enumerate(rates):
        start = max(one.minimum, lowest)
        axes.plot([start, one.maximum], [index, index], color=GREY, linewidth=4.5, solid_capstyle="butt")
        axes.plot([max(one.design, lowest)], [index], "|", markersize=10, markeredgewidth=1.6, color=INK)
        more = f" and {len(one.pipes) - 1} more" if len(one.pipes) > 1 else ""
        beside.add(one.maximum, index, shortened(f"wall, {one.pipes[0]}", 23 - len(more)) + more)
    beside.draw()
    axes.grid(visible=True, axis="x", color=FILL, linewidth=0.5)
