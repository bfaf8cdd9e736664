"""What rests on the rheology, in the lines of a terminal page: the fit, rival laws, rates beyond those tested."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import PurePath
from typing import TYPE_CHECKING

from pipeflow.case.model import Followed, shown_condition
from pipeflow.report.text import PARAMETER_UNITS, WIDTH, heading, paragraph, table
from pipeflow.study.result import Result
from pipeflow.study.rheology_result import BeyondTested, LawLoss
from pipeflow.units import format_value, significant

if TYPE_CHECKING:
    from pipeflow.rheology.sheet import FitResult


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
        yield from (paragraph(_sheet(*each), width, "- ") for each in zip(case.readings, case.sheets, strict=True))
    if case.followed:
        yield from heading("Parameters by solids or temperature", width)
        heads = ("", "law", "value", "", "at", "tested")
        yield from table(heads, [_followed_row(followed) for followed in case.followed], (0, 1, 3), width)
    if answers.by_law:
        yield from heading("Laws the readings do not tell apart, at design flow", width)
        columns = ("", "loss\nkPa", "upper\nkPa", "difference\nkPa")
        yield from table(columns, [_law_row(law, answers.by_law[0]) for law in answers.by_law], width=width)
        if answers.for_design:
            yield paragraph(f"For design take {answers.for_design.model}, the highest loss.", width, "  ")
    if answers.beyond:
        yield from heading("Wall shear rates far beyond those tested", width)
        heads = ("", "highest\n1/s", "loss\nkPa", "upper\nkPa", "by tangent\nkPa", "upper\nkPa")
        yield from table(heads, [_beyond_row(beyond) for beyond in answers.beyond], width=width)
        tested = significant(answers.highest_tested)
        note = f"Tested to {tested} 1/s. The tangent carries the law straight on from there; either answer is a guess."
        yield paragraph(note, width, "  ")


def _fit(fitted: FitResult, file: str, width: int) -> Iterator[str]:
    fit = fitted.selected
    if fit is None or fit.parameters is None or fit.standard_errors is None or fit.intervals is None:
        return
    yield paragraph(f"{file}: {fit.model}, {fitted.fit.why}.", width)
    rows = [
        (
            name.replace("_", " "),
            f"{significant(value)} {PARAMETER_UNITS[name]}".rstrip(),
            significant(fit.standard_errors[name], 2),
            " .. ".join(significant(end) for end in fit.intervals[name]),
        )
        for name, value in fit.parameters.items()
    ]
    yield from table(("", "value", "standard error", "95 % interval"), rows, words=(0, 1), width=width)
    low, high = fitted.curve.tested
    scatter = f"scatter {fit.rmse_relative:.2%}" if fit.rmse_relative is not None else ""
    used = f"{int(fitted.curve.kept.sum())} of {fitted.curve.kept.size} readings"
    yield paragraph(f"{used} over {significant(low)} .. {significant(high)} 1/s, {scatter}.", width, "  ")


def _sheet(file: str, fitted: FitResult) -> str:
    sample, (low, high) = fitted.curve.sample, fitted.curve.tested
    solids = [] if sample.solids is None else [f"solids {sample.solids:g}"]
    warm = [] if sample.temperature is None else [format_value(sample.temperature, "temperature")]
    rates = f"{significant(low)} .. {significant(high)} 1/s"
    return ", ".join([f"{PurePath(file).name}: {fitted.fit.selected}", *solids, *warm, rates])


def _followed_row(followed: Followed) -> tuple[str, ...]:
    law, name = followed.law, followed.parameter
    shown = [shown_condition(law.variable, value) for value in (followed.condition, *law.tested)]
    ends = " .. ".join(shown[1:])
    return name.replace("_", " "), law.key, significant(followed.value), PARAMETER_UNITS[name], shown[0], ends


def _law_row(law: LawLoss, taken: LawLoss) -> tuple[str, ...]:
    difference = "" if law is taken else f"{(law.pressure_loss - taken.pressure_loss) / 1e3:+.4g}"
    return law.model, _kpa(law.pressure_loss), _kpa(law.pressure_loss_upper), difference


def _beyond_row(beyond: BeyondTested) -> tuple[str, ...]:
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
