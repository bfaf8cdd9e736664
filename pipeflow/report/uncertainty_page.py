"""How sure the answer is, as a section of a page: 80 columns of plain text, with a tornado of bars."""

from __future__ import annotations

import math
from collections.abc import Iterator
from textwrap import wrap
from typing import Final

from pipeflow.report.text import WIDTH, columns_of, heading, paragraph, table
from pipeflow.report.uncertainty_notes import input_notes, known_to, limit_notes, percent, uncertainty_cautions
from pipeflow.study.sampling.inputs import READINGS, UncertainInput
from pipeflow.study.sampling.uncertainty import Bar, Estimate, Index, Odds, Spread, UncertaintyResult
from pipeflow.units import format_si, significant

NAMES: Final = {"head_loss": "head loss", "total_head": "total head", "hydraulic_power": "hydraulic power"}
BAR: Final = 30
"""Columns of the widest bar of a tornado."""
LEAST_SHARE: Final = 0.005
"""Share of the variance below which a factor is not shown."""
LONGEST: Final = 24
"""Columns of a tolerance as written; a longer one takes several lines."""


def uncertainty_page(result: UncertaintyResult) -> str:
    """Write the section."""
    return "\n".join(_page(result)) + "\n"


def _page(result: UncertaintyResult) -> Iterator[str]:
    yield from heading("How sure is the answer")
    scenarios = " Of the case itself; its scenarios are not sampled." if result.case.scenarios else ""
    drawn = f"{result.samples} samples, drawn twice (seed {result.seed})"
    yield paragraph(f"{drawn}, {result.evaluations} lines solved at design flow.{scenarios}")
    yield ""
    rows = [row for one in result.inputs for row in _input_rows(one)]
    yield from table(("uncertain", "known to", "from 5 to 95 %"), rows, words=(0, 1, 2))
    for note in input_notes(result):
        yield paragraph(note, mark="  - ")
    yield from heading("Figures at design flow, over the samples")
    yield from table(
        ("", "5 %", "50 %", "95 %", "mean", "standard\ndeviation", "error of\nthese"),
        [figure_row(spread) for spread in result.figures.values()],
    )
    yield from _limits(result)
    yield from _sensitivities(result.figures["head_loss"])
    yield from _sensitivities(result.figures["hydraulic_power"])
    yield from _tornado(result)
    yield ""
    for caution in uncertainty_cautions(result):
        yield paragraph(caution, mark="  - ")


def _input_rows(one: UncertainInput) -> Iterator[tuple[str, str, str]]:
    first, *more = wrap(known_to(one), LONGEST)
    yield one.name, first, one.covers
    yield from (("", line, "") for line in more)


def figure_row(spread: Spread) -> tuple[str, ...]:
    """Write one figure: name, quantiles, mean, standard deviation, and the largest standard error of the quantiles."""
    quantiles = (spread.p5, spread.p50, spread.p95)
    figures = (*quantiles, spread.mean, spread.deviation)
    error = max(one.error for one in quantiles)
    shown = (format_si(one.value, spread.unit) for one in figures)
    return NAMES[spread.name], *shown, _error(error, spread.unit)


def _error(error: float, unit: str) -> str:
    return f"± {significant(error / (1e3 if unit == 'W' else 1.0), 1)}" if math.isfinite(error) else "–"


def _limits(result: UncertaintyResult) -> Iterator[str]:
    if result.limits:
        yield from heading("Probability that a limit fails")
        rows = [odds_row(odds, result) for odds in result.limits]
        yield from table(("limit", "", "fails in", "± error", ""), rows, words=(0, 4))
        for note in limit_notes(result):
            yield paragraph(note, mark="  - ")
    if result.not_sampled:
        names = ", ".join(name.replace("_", " ") for name in result.not_sampled)
        yield paragraph(f"Not sampled, judged at the stated inputs alone: {names}.")


def odds_row(odds: Odds, result: UncertaintyResult) -> tuple[str, ...]:
    """Write one limit: name, what it is, the share that fails, its standard error, the basis.

    Deposition is not judged where some pipe is not turbulent, so that no sample can fail there.
    """
    if odds.name == "deposition" and result.not_turbulent >= 1.0:
        return odds.name, "", "not judged", "", "not turbulent"
    bound = "at least" if odds.is_least else "at most"
    limit = "" if odds.name == "deposition" else f"{bound} {format_si(odds.limit, odds.unit)}"
    share = odds.probability
    if share.value == 0:
        return odds.name.replace("_", " "), limit, f"none of {2 * result.samples}", "", odds.basis
    return odds.name.replace("_", " "), limit, percent(share.value), percent(share.error), odds.basis


def _sensitivities(spread: Spread) -> Iterator[str]:
    yield from heading(f"What the spread of the {NAMES[spread.name]} comes from")
    shown = [index for index in spread.indices if index.total.value >= LEAST_SHARE]
    if not shown:
        yield paragraph("It does not vary with the inputs that are uncertain.")
        return
    rows = [index_row(index) for index in shown]
    yield from table(("", "by itself", "", "with others", ""), rows)
    left = [index.factor for index in spread.indices if index.total.value < LEAST_SHARE]
    if left:
        yield paragraph(f"Below half a per cent: {', '.join(left)}.")


def index_row(index: Index) -> tuple[str, ...]:
    """Write one factor: share of the variance by itself and in all, each with its standard error."""
    return index.factor, *_share(index.first), *_share(index.total)


def _share(estimate: Estimate) -> tuple[str, str]:
    return f"{100.0 * estimate.value:.1f} %", f"± {100.0 * estimate.error:.1f}"


def _tornado(result: UncertaintyResult) -> Iterator[str]:
    middle = result.median["head_loss"]
    bars = [bar for bar in result.tornado if bar.width("head_loss") > 1e-6 * abs(middle)]
    if not bars:
        return
    yield from heading(f"Head loss with one input changed, all others at their medians: {significant(middle)} m")
    yield from tornado_lines(bars, middle)
    yield paragraph("'-' towards the head loss with the input at its 5 %, '+' with it at its 95 %.")
    if any(bar.factor == READINGS for bar in bars):
        yield paragraph("What is fitted to readings scatters together: the 5 and 95 % it makes by itself.")


def tornado_lines(bars: list[Bar], middle: float, figure: str = "head_loss") -> Iterator[str]:
    """Draw the bars, the middle one above another."""
    ends = [end for bar in bars for end in (bar.low[figure], bar.high[figure]) if math.isfinite(end)]
    least, most = min([middle, *ends]), max([middle, *ends])
    names = max(columns_of(bar.factor) for bar in bars)
    room = min(names, WIDTH - BAR - 20)
    for bar in bars:
        low, high = sorted((bar.low[figure], bar.high[figure]))
        if columns_of(bar.factor) > room:
            yield bar.factor
        name = bar.factor if columns_of(bar.factor) <= room else ""
        drawn = _drawn(bar.low[figure], bar.high[figure], middle, (least, most))
        yield f"{name}{' ' * (room - columns_of(name))} {significant(low):>8} {drawn} {significant(high):<8}".rstrip()


def _drawn(low: float, high: float, middle: float, ends: tuple[float, float]) -> str:
    scale = (BAR - 1) / (ends[1] - ends[0]) if ends[1] > ends[0] else 0.0
    centre = round((middle - ends[0]) * scale)
    cells = [" "] * BAR
    for end, mark in ((low, "-"), (high, "+")):
        place = round((end - ends[0]) * scale) if math.isfinite(end) else centre
        for cell in range(min(place, centre), max(place, centre) + 1):
            cells[cell] = mark
    cells[centre] = "|"
    return "".join(cells)
