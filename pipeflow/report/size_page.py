"""The page of a sizing in a terminal: 80 columns of plain text."""

from __future__ import annotations

import math
from collections.abc import Iterator

from pipeflow.report.text import heading, paragraph, table
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.study.sizes.sizing import Candidate, SizingResult
from pipeflow.study.sizes.solve_for import Answer
from pipeflow.units import format_si, format_value, significant, to_display

WIDTH = 80
COLUMNS = (
    "size", "bore\nmm", "head\nloss m", "upper\nm", "V\nm/s", "Re_MR", "Re_MR\ncrit.", "wall\nPa", "flow", "",
)  # fmt: skip
REGIMES = {"laminar": "lam.", "transitional": "trans.", "turbulent": "turb."}
BESIDE = 4
"""Sizes shown on either side of those that pass."""
EXTRAS = (
    ("deposition_margin", "V over\ndeposit", ""),
    ("restart_pressure", "restart\nkPa", "kPa"),
    ("rating", "wall\nkPa", "kPa"),
    ("residence_time", "fastest\ns", "s"),
    ("cost_per_year", "cost\na year", ""),
)
"""Columns of the second table, shown where some size has the figure."""


def size_page(result: SizingResult) -> str:
    """Write the page of a sizing."""
    return "\n".join(_page(result)) + "\n"


def _page(result: SizingResult) -> Iterator[str]:
    case = result.case
    yield paragraph(case.title + (f", revision {case.revision}" if case.revision else ""))
    yield case.file
    over = result.series or "a free bore"
    yield paragraph(f"Sizing of {', '.join(result.pipes)} over {over}.")
    yield from heading(f"Sizes at design flow, {format_value(case.flow.design, 'volume flow')}; head loss at maximum")
    near = near_sizes(result)
    yield from table(COLUMNS, [candidate_row(one) for one in near], words=(0, 8, 9))
    extras = [extra for extra in EXTRAS if any(getattr(one, extra[0]) is not None for one in near)]
    if extras:
        yield ""
        rows = [(one.size, *(_number(getattr(one, name), unit) for name, _, unit in extras)) for one in near]
        yield from table(("size", *(head for _, head, _ in extras)), rows)
    if len(near) < len(result.candidates):
        yield paragraph(f"{len(result.candidates)} sizes were tried; those not shown fail by more.")
    yield from heading("Why sizes fail")
    yield from _reasons(result)
    yield from heading("Size to choose")
    yield from _choice(result)
    yield from heading("Before relying on this")
    yield paragraph(SAFETY_NOTICE)


def candidate_row(one: Candidate) -> tuple[str, ...]:
    """One size: what it loses and how it runs."""
    verdict = "FAIL" if not one.passes else "caution" if one.cautions else "ok"
    return (
        one.size,
        _number(one.diameter, "mm"),
        _number(one.head_loss_maximum, "m", 3),
        _number(one.head_loss_upper, "m", 3),
        _number(one.velocity, "m/s", 3),
        _number(one.reynolds_mr, "", 3),
        _number(one.reynolds_critical, "", 3),
        _number(one.wall_shear_stress, "", 3),
        REGIMES.get(one.regime, one.regime),
        verdict,
    )


def _number(value: float | None, unit: str, digits: int = 4) -> str:
    if value is None or not math.isfinite(value):
        return "-"
    return significant(to_display(value, unit) if unit else value, digits)


def near_sizes(result: SizingResult) -> list[Candidate]:
    """Give the sizes that pass, or the nearest, and a few on either side."""
    shown_for = [one for one in result.candidates if one.passes or one is result.nearest]
    places = [result.candidates.index(one) for one in shown_for]
    return list(result.candidates[max(min(places, default=0) - BESIDE, 0) : max(places, default=0) + BESIDE + 1])


def failing_sizes(result: SizingResult) -> Iterator[tuple[str, str]]:
    """The sizes shown that fail, and why."""
    for one in near_sizes(result):
        if not one.passes:
            yield one.size, "; ".join(one.fails).replace("_", " ")


def _reasons(result: SizingResult) -> Iterator[str]:
    failing = [paragraph(why, mark=f"{size}: ") for size, why in failing_sizes(result)]
    yield from failing or ["None does."]


def _choice(result: SizingResult) -> Iterator[str]:
    for mark, text in choice_texts(result):
        yield paragraph(text, mark=mark)


def choice_texts(result: SizingResult) -> Iterator[tuple[str, str]]:
    """Which size to choose, what it costs to be wrong by one, what to mind, each with its mark."""
    if result.selected is None:
        near = result.nearest
        if near:
            yield "", f"None passes. Nearest is {near.size}, blocked by {'; '.join(near.fails).replace('_', ' ')}."
    else:
        yield "", f"{result.selected.size}, the smallest that passes."
        yield from (("- ", text) for text in _neighbours(result, result.selected))
        yield from (("! ", caution.replace("_", " ")) for caution in result.selected.cautions)
    if result.economy:
        economy = result.economy
        equal = ", ".join(name for name in economy.equal if name != economy.size)
        near_by = f"; within 5 % of it: {equal}" if equal else ""
        yield "", f"Cheapest of those that pass: {economy.size}, {significant(economy.cost_per_year)} a year{near_by}."
        if economy.without_price:
            yield "", f"No price is given for {', '.join(economy.without_price)}."
    yield from (("- ", note.replace("_", " ")) for note in result.notes)


def _neighbours(result: SizingResult, selected: Candidate) -> Iterator[str]:
    """What it costs to be wrong by one size."""
    place = result.candidates.index(selected)
    for step, word in ((-1, "smaller"), (1, "larger")):
        if 0 <= place + step < len(result.candidates):
            other = result.candidates[place + step]
            change = ""
            if selected.head_loss_upper:
                change = f": head loss {other.head_loss_upper / selected.head_loss_upper - 1.0:+.0%}"
            cost = ""
            if other.cost_per_year and selected.cost_per_year:
                cost = f", {other.cost_per_year / selected.cost_per_year - 1.0:+.0%} a year"
            passes = "passes" if other.passes else "fails"
            yield f"One size {word}, {other.size}{change}{cost}; it {passes}."


def answer_page(answer: Answer) -> str:
    """Write the page of an answer of ``--solve-for``."""
    return "\n".join(_answer(answer)) + "\n"


def _answer(answer: Answer) -> Iterator[str]:
    yield paragraph(answer.case.title)
    yield answer.case.file
    yield from heading(f"The most {answer.quantity.replace('-', ' ')} the line takes")
    limit = answer.limit.replace("_", " ")
    if answer.value is None:
        yield paragraph(f"None: {limit} is not met at any ({answer.scenario}).")
    elif answer.value >= answer.highest:
        yield paragraph(f"{_quantity(answer, answer.value)} and perhaps more: no limit is met up to there.")
    else:
        yield paragraph(f"{_quantity(answer, answer.value)}, settled by {limit} ({answer.scenario}).")
    yield paragraph(f"The case has {_quantity(answer, answer.present)}. Varied: {answer.note}.")
    yield ""
    rows = [(name.replace("_", " "), _met_at(answer, value)) for name, value in answer.each.items()]
    yield from table(("limit reached at", ""), rows)
    yield from heading("Before relying on this")
    yield paragraph(SAFETY_NOTICE)


def _met_at(answer: Answer, value: float) -> str:
    if not math.isfinite(value) or value <= 0:
        return "nowhere"
    return "not reached" if value >= answer.highest else _quantity(answer, value)


def _quantity(answer: Answer, value: float) -> str:
    return format_si(value, answer.unit)
