"""What rests on the rheology, in the lines of a terminal page: the fit, rival laws, rates beyond those tested."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import PurePath
from typing import TYPE_CHECKING

from pipeflow.case.model import Followed, shown_condition
from pipeflow.report.text import PARAMETER_UNITS, WIDTH, heading, paragraph, table
from pipeflow.study.readings.result import BeyondTested, LawLoss, RheologyAnswers
from pipeflow.study.result import Result
from pipeflow.units import format_value, significant

if TYPE_CHECKING:
    from pipeflow.rheology.fitting import ModelFit
    from pipeflow.rheology.sheet import FitResult


FOLLOWED_COLUMNS = ("", "law", "value", "", "at", "tested")
LAW_COLUMNS = ("", "loss\nkPa", "upper\nkPa", "difference\nkPa")
BEYOND_COLUMNS = ("", "highest\n1/s", "loss\nkPa", "upper\nkPa", "by tangent\nkPa", "upper\nkPa")
PARAMETER_COLUMNS = ("", "value", "standard error", "95 % interval")


def rheology_lines(result: Result, width: int = WIDTH) -> Iterator[str]:
    """Lines of the sections that apply; none for a rheology given by its parameters and kept to."""
    for text in _sections(result, width):
        yield from text.split("\n")


def _sections(result: Result, width: int) -> Iterator[str]:
    case, answers = result.case, result.rheology
    if case.fitted is not None:
        yield from heading("Rheology from readings", width)
        yield from _fit(case.fitted, case.readings[0], width)
    elif case.sheets:
        yield from heading("Rheology from readings", width)
        yield from (paragraph(sheet_text(*each), width, "- ") for each in zip(case.readings, case.sheets, strict=True))
    if case.followed:
        yield from heading("Parameters by solids or temperature", width)
        yield from table(FOLLOWED_COLUMNS, [followed_row(followed) for followed in case.followed], (0, 1, 3), width)
    if answers.by_law:
        yield from heading("Laws the readings do not tell apart, at design flow", width)
        yield from table(LAW_COLUMNS, [law_row(law, answers.by_law[0]) for law in answers.by_law], width=width)
        if answers.for_design:
            yield paragraph(f"For design take {answers.for_design.model}, the highest loss.", width, "  ")
    if answers.beyond:
        yield from heading("Wall shear rates far beyond those tested", width)
        yield from table(BEYOND_COLUMNS, [beyond_row(beyond) for beyond in answers.beyond], width=width)
        yield paragraph(beyond_note(answers), width, "  ")


def beyond_note(answers: RheologyAnswers) -> str:
    """What the answers past the rates tested are worth."""
    tested = significant(answers.highest_tested)
    return f"Tested to {tested} 1/s. The tangent carries the law straight on from there; either answer is a guess."


def _fit(fitted: FitResult, file: str, width: int) -> Iterator[str]:
    fit = fitted.selected
    if fit is None or fit.parameters is None or fit.standard_errors is None or fit.intervals is None:
        return
    yield paragraph(f"{file}: {fit.model}, {fitted.fit.why}.", width)
    yield from table(PARAMETER_COLUMNS, list(parameter_rows(fit)), words=(0, 1), width=width)
    yield paragraph(used_text(fitted), width, "  ")


def parameter_rows(fit: ModelFit) -> Iterator[tuple[str, ...]]:
    """Each parameter of a fitted model with its error and its interval."""
    errors, intervals = fit.standard_errors or {}, fit.intervals or {}
    for name, value in (fit.parameters or {}).items():
        yield (
            name.replace("_", " "),
            f"{significant(value)} {PARAMETER_UNITS[name]}".rstrip(),
            significant(errors[name], 2),
            " .. ".join(significant(end) for end in intervals[name]),
        )


def used_text(fitted: FitResult) -> str:
    """How many readings a fit rests on, and over which rates."""
    fit = fitted.selected
    low, high = fitted.curve.tested
    scatter = f"scatter {fit.rmse_relative:.2%}" if fit and fit.rmse_relative is not None else ""
    used = f"{int(fitted.curve.kept.sum())} of {fitted.curve.kept.size} readings"
    return f"{used} over {significant(low)} .. {significant(high)} 1/s, {scatter}."


def sheet_text(file: str, fitted: FitResult) -> str:
    """One sheet of readings in brief."""
    sample, (low, high) = fitted.curve.sample, fitted.curve.tested
    solids = [] if sample.solids is None else [f"solids {sample.solids:g}"]
    warm = [] if sample.temperature is None else [format_value(sample.temperature, "temperature")]
    rates = f"{significant(low)} .. {significant(high)} 1/s"
    return ", ".join([f"{PurePath(file).name}: {fitted.fit.selected}", *solids, *warm, rates])


def followed_row(followed: Followed) -> tuple[str, ...]:
    """A parameter, the law it follows, its value, and where that was tested."""
    law, name = followed.law, followed.parameter
    shown = [shown_condition(law.variable, value) for value in (followed.condition, *law.tested)]
    ends = " .. ".join(shown[1:])
    return name.replace("_", " "), law.key, significant(followed.value), PARAMETER_UNITS[name], shown[0], ends


def law_row(law: LawLoss, taken: LawLoss) -> tuple[str, ...]:
    """The losses by one law, and how far they are from those of the law taken."""
    difference = "" if law is taken else f"{(law.pressure_loss - taken.pressure_loss) / 1e3:+.4g}"
    return law.model, _kpa(law.pressure_loss), _kpa(law.pressure_loss_upper), difference


def beyond_row(beyond: BeyondTested) -> tuple[str, ...]:
    """Losses at one flow past the rates tested, by the law and by its tangent."""
    return (
        f"{beyond.at}, {format_value(beyond.flow, 'volume flow')}: {', '.join(beyond.pipes)}",
        significant(beyond.wall_shear_rate, 3),
        _kpa(beyond.pressure_loss),
        _kpa(beyond.pressure_loss_upper),
        _kpa(beyond.pressure_loss_tangent),
        _kpa(beyond.pressure_loss_tangent_upper),
    )


def _kpa(value: float | None) -> str:
    return "-" if value is None else significant(value / 1e3)
