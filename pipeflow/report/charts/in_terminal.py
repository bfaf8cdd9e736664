"""The system curve and its pumps in plain text, 80 columns, told apart by letters."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
import plotille

from pipeflow.arrays import Array
from pipeflow.report.charts.axis import round_ends
from pipeflow.report.text import WIDTH, paragraph
from pipeflow.study.pumping.result import CurveResult, DutyPoint, PumpOnLine
from pipeflow.units import significant, to_display

COLUMNS, ROWS = 62, 21
_EVERY = 5
_MARGIN = 10


def system_in_terminal(result: CurveResult) -> str:
    """Draw the upper curve of the case and of every other condition, and every pump; a letter stands on each line."""
    lines = list(_lines(result))
    heads = np.concatenate([line[2][np.isfinite(line[2])] for line in lines])
    _, flow, _ = round_ends(0.0, max(float(line[1].max()) for line in lines))
    low, high, _ = round_ends(float(heads.min(initial=0.0)), float(heads.max(initial=1.0)), most=4)
    canvas = plotille.Canvas(COLUMNS, ROWS, 0.0, low, flow, high)
    for _, across, up in lines:
        _curve(canvas, across, up)
    duties = [duty for pump in result.own.pumps for duty in (pump.duty, pump.duty_upper) if duty]
    taken = {_cell(canvas, to_display(duty.flow, "m3/h"), duty.head) for duty in duties}
    for letter, across, up in lines:
        _letter(canvas, letter, across, up, taken)
    for duty in duties:
        canvas.text(to_display(duty.flow, "m3/h"), duty.head, "@")
    # a cell without dots is a letter of its own to plotille
    rows = canvas.plot().replace("\u2800", " ").split("\n")
    return "\n".join((*_framed(rows, low, high, flow), *_key(result)))


def _lines(result: CurveResult) -> Iterator[tuple[str, Array, Array]]:
    for index, condition in enumerate(result.conditions):
        yield _letter_of(index), _flows(condition.system.flow), np.array(condition.system.pump_head_upper)
    for index, pump in enumerate(result.own.pumps):
        curve = pump.drawn or pump.water
        if curve:
            yield str(index + 1), _flows(curve.flow), np.array(curve.head)


def _letter_of(index: int) -> str:
    return "abcdefghijklmnopqrstuvwxyz"[index % 26]


def _flows(flow: Sequence[float]) -> Array:
    return np.array([to_display(one, "m3/h") for one in flow])


def _curve(canvas: plotille.Canvas, across: Array, up: Array) -> None:
    for start in range(len(across) - 1):
        if np.isfinite(up[start : start + 2]).all():
            canvas.line(across[start], up[start], across[start + 1], up[start + 1])


def _letter(canvas: plotille.Canvas, letter: str, across: Array, up: Array, taken: set[tuple[int, int]]) -> None:
    """Stand a letter on a line at three places, each moved along it past what is ``taken``; it then is.

    Curves on top of each other so carry their letters side by side.
    """
    places = (0.2, 0.55, 0.9) if letter.isalpha() else (0.1, 0.45, 0.8)
    for share in places:
        for at in _along(share, float(across[-1])):
            head = float(np.interp(at, across, up)) if len(across) > 1 else float(up[0])
            if np.isfinite(head) and (cell := _cell(canvas, at, head)) not in taken:
                taken.add(cell)
                canvas.text(at, head, letter)
                break


def _along(share: float, end: float) -> Iterator[float]:
    """Flows from a share of the last one on, a column at a time, then back from there."""
    column = end / COLUMNS
    yield share * end
    if column > 0:
        yield from np.arange(share * end + column, end, column).tolist()
        yield from np.arange(share * end - column, 0.0, -column).tolist()


def _cell(canvas: plotille.Canvas, at: float, head: float) -> tuple[int, int]:
    """Column and row that plotille writes a text at."""
    across = (at - canvas.xmin) / (canvas.xmax - canvas.xmin) * 2 * COLUMNS
    up = (head - canvas.ymin) / (canvas.ymax - canvas.ymin) * 4 * ROWS
    return round(across) // 2, round(up) // 4


def _framed(rows: Sequence[str], low: float, high: float, flow: float) -> Iterator[str]:
    """Put the rows between their axes; heads at every fifth row, the flow at both ends and the middle."""
    yield "head, m"
    for index, row in enumerate(rows):
        head = high - (high - low) * index / max(len(rows) - 1, 1)
        yield f"{significant(head, 3) if index % _EVERY == 0 else '':>8} |{row}".rstrip()
    yield " " * 9 + "+" + "-" * COLUMNS
    middle, end = significant(flow / 2.0, 3), f"{significant(flow, 3)} m3/h"
    yield " " * _MARGIN + "0" + middle.center(COLUMNS - 2 * len(end)).rjust(COLUMNS - len(end) - 1) + end


def _key(result: CurveResult) -> Iterator[str]:
    """What each letter stands for, and the flows that matter."""
    yield ""
    for index, condition in enumerate(result.conditions):
        yield paragraph(f"{condition.name}, upper figure", WIDTH, f"  {_letter_of(index)}  ")
    for index, pump in enumerate(result.own.pumps):
        yield paragraph(_pump_text(pump), WIDTH, f"  {index + 1}  ")
    if any(pump.duty or pump.duty_upper for pump in result.own.pumps):
        yield "  @  where a pump meets the line"
    own = result.own.system
    for name, flow in (
        ("laminar until", own.laminar_until),
        ("turbulent from", own.turbulent_from),
        ("settling below", own.deposition_flow),
    ):
        if flow is not None:
            yield f"     {name} {_flow(flow)}"
    for band in own.flat_bands:
        text = f"{band.pipe}: the head hardly rises from {_flow(band.flow_from)} to {_flow(band.flow_to)}"
        yield paragraph(text, WIDTH, "     ")


def _flow(flow: float) -> str:
    return f"{significant(to_display(flow, 'm3/h'), 3)} m3/h"


def _pump_text(pump: PumpOnLine) -> str:
    names: dict[str, list[str]] = {}
    for name, duty in (("central", pump.duty), ("upper", pump.duty_upper)):
        if duty:
            names.setdefault(_duty_text(duty), []).append(name)
    duties = [f"{' and '.join(each)} {text}" for text, each in names.items()]
    return f"{pump.name}: {'; '.join(duties) or 'does not meet the curve'}"


def _duty_text(duty: DutyPoint) -> str:
    return f"{_flow(duty.flow)} at {significant(duty.head, 3)} m"
