"""The page of a fitted sheet in a terminal: 80 columns of plain text."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from textwrap import fill

import numpy as np

from pipeflow.arrays import Array
from pipeflow.report.text import PARAMETER_UNITS
from pipeflow.rheology.fitting import ModelFit
from pipeflow.rheology.readings import Sample
from pipeflow.rheology.sheet import FitResult
from pipeflow.units import format_value, significant

WIDTH = 80
HALF = 10
"""Characters either side of the middle of the picture of residuals."""
_MOST_POINTS = 60


def fit_page(file: str, result: FitResult) -> str:
    """Write the page of a fitted sheet."""
    return "\n".join(_page(file, result)) + "\n"


def _page(file: str, result: FitResult) -> Iterator[str]:
    sample = result.curve.sample
    yield fill(sample.name or "Flow curve", WIDTH)
    yield file
    yield from _table(list(_about(sample)), right=())
    for note in sample.notes:
        if not note.startswith("the column "):
            yield fill(note, WIDTH)
    if result.curve.corrections:
        yield from _heading("Corrections of the readings")
        yield from (_item(text, "- ") for text in result.curve.corrections)
    yield from _heading("Readings" + (f" against {result.fit.selected}" if result.fit.selected else ""))
    yield from _points(result)
    yield from _heading("Models compared")
    yield from _models(result)
    yield from _heading("Selected")
    yield from _selected(result)
    if result.cautions:
        yield from _heading("Cautions")
        yield from (_item(text, "! ") for text in result.cautions)
    yield from _heading("Methods")
    for source in result.methods:
        note = f" Note: {source.note}." if source.note else ""
        yield _item(f"{source.key}: {source.title}. {source.citation}.{note}", "- ")


def _heading(text: str) -> Iterator[str]:
    yield ""
    yield text
    yield "-" * len(text)


def _item(text: str, mark: str) -> str:
    return fill(text, WIDTH, initial_indent=mark, subsequent_indent=" " * len(mark))


def _table(rows: Sequence[Sequence[str]], right: Iterable[int]) -> Iterator[str]:
    if not rows:
        return
    aligned = set(right)
    widths = [max(len(row[column]) for row in rows) for column in range(len(rows[0]))]
    for row in rows:
        cells = (text.rjust(width) if column in aligned else text.ljust(width)
                 for column, (text, width) in enumerate(zip(row, widths, strict=True)))  # fmt: skip
        yield "  ".join(cells).rstrip()


def _about(sample: Sample) -> Iterator[tuple[str, str]]:
    dimensions = {
        "temperature": "temperature",
        "density": "density",
        "particle_size": "mm",
        "particle_density": "density",
        "static_yield_stress": "stress",
        "rest_time": "time",
        "dwell_time": "time",
    }
    for name in ("date", "instrument", "solids", "shear_history", *dimensions):
        value = getattr(sample, name)
        if value:
            shown = format_value(value, dimensions[name]) if name in dimensions else str(value)
            yield name.replace("_", " "), shown


def _points(result: FitResult) -> Iterator[str]:
    rows: list[tuple[str, ...]] = [("line", "1/s", "Pa", "model", "missed", "low" + " " * (2 * HALF - 6) + " high")]
    missed = _missed(result)
    scale = float(np.max(np.abs(missed[result.curve.kept]))) if missed is not None else 0.0
    shown = min(len(result.curve.left_out), _MOST_POINTS)
    rows += [_point(result, missed, scale, index) for index in range(shown)]
    yield from _table(rows, right=range(5))
    if shown < len(result.curve.left_out):
        yield f"and {len(result.curve.left_out) - shown} more readings"
    if scale > 0:
        yield f"The picture reaches {scale:.2%} either side; readings above the model to the right."
    reasons = dict.fromkeys(reason for reason in result.curve.left_out if reason)
    yield from (_item(f"left out: {reason}", "x ") for reason in reasons)


def _missed(result: FitResult) -> Array | None:
    """Relative distance of each reading from the model."""
    if result.rheology is None:
        return None
    curve = result.curve
    return np.asarray(curve.shear_stress / result.rheology.shear_stress(curve.shear_rate) - 1.0)


def _point(result: FitResult, missed: Array | None, scale: float, index: int) -> tuple[str, ...]:
    curve = result.curve
    rate, stress = significant(float(curve.shear_rate[index])), significant(float(curve.shear_stress[index]))
    line = str(curve.lines[index])
    if missed is None:
        return line, rate, stress, "-", "-", ""
    fitted = float(curve.shear_stress[index] / (1.0 + missed[index]))
    picture = "left out" if curve.left_out[index] else _picture(float(missed[index]), scale)
    return line, rate, stress, significant(fitted), f"{missed[index]:+.2%}", picture


def _picture(missed: float, scale: float) -> str:
    """Draw a point on a line with its middle marked."""
    place = HALF + (round(HALF * missed / scale) if scale > 0 else 0)
    drawn = [" "] * (2 * HALF + 1)
    drawn[HALF] = "|"
    drawn[min(max(place, 0), 2 * HALF)] = "o"
    return "".join(drawn).rstrip()


def _models(result: FitResult) -> Iterator[str]:
    fits = result.fit.models
    lowest = min((fit.aicc for fit in fits if fit.aicc is not None), default=0.0)
    rows: list[tuple[str, ...]] = [("", "model", "RMSE Pa", "relative", "R2", "AICc", "above lowest")]
    rows += [_model_row(fit, lowest, result.fit.selected) for fit in fits]
    yield from _table(rows, right=(2, 3, 4, 5, 6))
    yield ""
    for fit in fits:
        text = ", ".join(_shown(name, value) for name, value in (fit.parameters or {}).items())
        yield _item(f"{fit.model}: {text or 'not identified: ' + fit.reason}", "  ")


def _model_row(fit: ModelFit, lowest: float, selected: str | None) -> tuple[str, ...]:
    if fit.parameters is None:
        return "", fit.model, "-", "-", "-", "-", "-"
    mark = "*" if fit.model == selected else ""
    relative = "-" if fit.rmse_relative is None else f"{fit.rmse_relative:.2%}"
    r_squared = "-" if fit.r_squared is None else f"{fit.r_squared:.5f}"
    above = "-" if fit.aicc is None else f"{fit.aicc - lowest:.1f}"
    aicc = "-" if fit.aicc is None else f"{fit.aicc:.1f}"
    return mark, fit.model, significant(fit.rmse or 0.0), relative, r_squared, aicc, above


def _shown(name: str, value: float) -> str:
    return f"{name.replace('_', ' ')} {significant(value)} {PARAMETER_UNITS[name]}".rstrip()


def _selected(result: FitResult) -> Iterator[str]:
    found, fit = result.fit, result.selected
    if fit is None or fit.parameters is None or fit.intervals is None:
        yield fill(f"None: {found.why}.", WIDTH)
        return
    yield fill(f"{fit.model}: {found.why}.", WIDTH)
    if found.rivals:
        yield fill(f"Of {fit.model} and {', '.join(found.rivals)} take the one with the higher loss for design.", WIDTH)
    rows: list[tuple[str, ...]] = [("", "value", "95 % interval", "")]
    rows += [_parameter_row(fit, name) for name in fit.parameters]
    yield from _table(rows, right=(1,))
    scatter = "a share of the stress" if found.error == "relative" else "the same in Pa at every stress"
    robust = "; outlying readings weigh less" if found.robust else ""
    yield fill(f"Scatter is taken as {scatter}{robust}.", WIDTH)
    low, high = result.curve.tested
    yield fill(
        f"Tested over {significant(low)} .. {significant(high)} 1/s: to be used between these wall shear rates; "
        f"beyond {significant(1.5 * high)} 1/s it is a guess.",
        WIDTH,
    )


def _parameter_row(fit: ModelFit, name: str) -> tuple[str, ...]:
    low, high = (fit.intervals or {})[name]
    value = (fit.parameters or {})[name]
    return (
        name.replace("_", " "),
        significant(value),
        f"{significant(low)} .. {significant(high)}",
        PARAMETER_UNITS[name],
    )
