"""The section on how sure the answer is, for a case that says how uncertain its inputs are, or rests on readings."""

from __future__ import annotations

from collections.abc import Iterator

from markupsafe import Markup

from pipeflow.report.charts import tornado_chart_svg
from pipeflow.report.html.blocks import Block, Chart, Items, Section, Subsection, Text, section, table
from pipeflow.report.uncertainty_notes import input_notes, known_to, limit_notes, uncertainty_cautions
from pipeflow.report.uncertainty_page import figure_row, index_row, odds_row
from pipeflow.study.sampling.line import HEAD_LOSS
from pipeflow.study.sampling.uncertainty import UncertaintyResult

FIGURE_COLUMNS = ("", "5 %", "50 %", "95 %", "mean", "standard\ndeviation", "error of\nthese")
INDEX_COLUMNS = ("input", "by itself", "", "with others", "")


def uncertainty_sections(found: UncertaintyResult | None) -> Iterator[Section]:
    """Give the section; none where nothing was sampled."""
    if found is not None:
        yield from section("uncertainty", "How sure the answer is", _uncertainty(found))


def _uncertainty(found: UncertaintyResult) -> Iterator[Block]:
    yield Text(
        f"{found.samples} samples of the uncertain inputs, drawn twice (seed {found.seed}), of the case itself at "
        "design flow; more are drawn by pipeflow solve --uncertainty."
    )
    inputs = [(one.name, known_to(one), one.covers) for one in found.inputs]
    yield from table("What is uncertain", ("input", "known to", "from 5 to 95 %"), inputs, range(3))
    yield from _notes(input_notes(found))
    figures = [figure_row(spread) for spread in found.figures.values()]
    yield from table("Figures over the samples", FIGURE_COLUMNS, figures, (0,))
    limits = [odds_row(odds, found) for odds in found.limits]
    columns = ("limit", "", "fails in", "± error", "judged")
    if limits:
        yield Subsection("Probability that a limit fails")
        yield from table("Probability that a limit fails", columns, limits, (0, 1, 4))
        yield from _notes(limit_notes(found))
    shares = [index_row(index) for index in found.figures[HEAD_LOSS].indices]
    yield Subsection("What the spread of the head loss comes from")
    yield from table("Share of the variance of the head loss", INDEX_COLUMNS, shares, (0,))
    chart = tornado_chart_svg(found)
    if chart:
        yield Chart(
            Markup(chart),
            "Head loss with one input changed, all others at their medians: hatched to its 5 %, filled to its 95 %.",
        )
    yield Items(tuple(uncertainty_cautions(found)))


def _notes(notes: Iterator[str]) -> Iterator[Items]:
    told = tuple(notes)
    if told:
        yield Items(told)
