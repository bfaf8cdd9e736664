"""The page of a sweep in a terminal: 80 columns of plain text."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from pipeflow.report.sweep_text import (
    AT_MAXIMUM,
    energy_unit,
    figure_and_unit,
    fits,
    fitting,
    name_of,
    title_of,
    told,
    unit_of,
)
from pipeflow.report.text import heading, paragraph
from pipeflow.study.ranges.runs import Run
from pipeflow.study.ranges.sweeping import Sweep, SweptPoint, Variable
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.units import significant, to_display
from pipeflow.verdict import Check

SHORT = {"laminar": "lam.", "transitional": "trans.", "turbulent": "turb.", "mixed": "mixed", "no flow": "rest"}
SHOWN = {"ok": "ok", "caution": "caution", "fail": "FAIL"}
MOST_COLUMNS = 9
"""Columns of figures of a grid that fit a page."""


def sweep_page(sweep: Sweep) -> str:
    """Write the page."""
    return "\n".join(_page(sweep)) + "\n"


def _page(sweep: Sweep) -> Iterator[str]:
    yield paragraph(title_of(sweep.case))
    yield sweep.case.file
    yield from (paragraph(told(axis), mark="  ") for axis in sweep.axes)
    if len(sweep.axes) == 1:
        yield from heading("The line over the range")
        yield from sweep_table(sweep)
        yield from heading("Chart")
        from pipeflow.report.charts import sweep_in_terminal

        yield sweep_in_terminal(sweep).rstrip("\n")
        yield from heading("Limits")
        found = [paragraph(text, mark=f"{status:<9}") for status, text in limits_over(sweep)]
        yield from found or ["Every limit that the case states holds over the whole range."]
    else:
        yield from _grid(sweep)
    if sweep.cautions:
        yield from heading("Cautions")
        yield from (paragraph(caution, mark="! ") for caution in sweep.cautions)
    yield from heading("Before relying on this")
    yield paragraph(SAFETY_NOTICE)


def sweep_table(sweep: Sweep) -> Iterator[str]:
    """Lines of the table of a sweep of one input, and what they are of."""
    (axis,) = sweep.axes
    per = "t.km"
    columns = (
        f"{unit_of(axis.variable) or 'value'}", "regime", "fastest\nm/s", "loss\nm", "upper\nm", "total\nhead\nm",
        "press.\nkPa", "power\nkW", f"kWh/\n{per}", "limits",
    )  # fmt: skip
    yield paragraph(f"by {name_of(axis.variable)}; at design flow")
    yield from fitting(columns, [tuple(sweep_row(sweep, point)) for point in sweep.points], words=(1, 9))
    yield paragraph(
        "Head loss by the central and the upper figure; total head, pressure required, hydraulic power and energy by "
        f"the upper. Energy of the losses, {energy_unit(sweep.case)}. Limits as solve judges them{_judged(sweep)}.",
        mark="  ",
    )


def _judged(sweep: Sweep) -> str:
    return ": each at the flow that is hardest on it, losses at the maximum" if sweep.has_other_flows else ""


def sweep_row(sweep: Sweep, point: SweptPoint) -> Iterator[str]:
    """Cells of one point of a sweep of one input."""
    yield figure_and_unit(sweep.axes[0].variable, point.values[0])[0]
    yield SHORT[point.regime]
    yield significant(point.velocity, 3)
    yield significant(point.head_loss)
    yield significant(point.head_loss_upper)
    yield significant(point.total_head_upper)
    yield significant(to_display(point.pressure_required_upper, "kPa"))
    yield significant(to_display(point.power_upper, "kW"))
    yield significant(point.specific_energy, 3)
    yield SHOWN[point.status]


def limits_over(sweep: Sweep) -> Iterator[tuple[str, str]]:
    """Where each check fails or calls for thought, the failing first: its status, and the values in words."""
    by_check: dict[tuple[str, str], list[Run]] = {}
    for run in sweep.runs:
        by_check.setdefault((run.check.name, run.check.status), []).append(run)
    for runs in by_check.values():
        check = runs[0].check
        values = ", ".join(_between(sweep.axes[0].variable, run) for run in runs)
        yield SHOWN[check.status], f"{check.name.replace('_', ' ')}{_sense(check)}{_flow_of(sweep, check)}: {values}"


def _between(variable: Variable, run: Run) -> str:
    (low, unit), (high, _) = (figure_and_unit(variable, value) for value in (run.low, run.high))
    said = f" {unit}" if unit else ""
    return f"at {low}{said}" if run.low == run.high else f"{low} to {high}{said}"


def _flow_of(sweep: Sweep, check: Check) -> str:
    """The flow that a check of the whole line is of, where the table is of another."""
    return f", {check.basis}" if sweep.has_other_flows and check.basis == AT_MAXIMUM else ""


def _sense(check: Check) -> str:
    is_central = check.status == "caution" and check.value_upper is not None
    return " (kept by the central figure alone)" if is_central else ""


def _grid(sweep: Sweep) -> Iterator[str]:
    """Head loss by the upper figure over two inputs, marked where a limit fails."""
    first, _ = sweep.axes
    yield from heading(f"Head loss, m, upper figure: {name_of(first.variable)} across")
    across = _chosen(len(first.values), MOST_COLUMNS)
    lines = _grid_table(sweep, across)
    while not fits(lines) and len(across) > 2:
        across = _chosen(len(first.values), len(across) - 1)
        lines = _grid_table(sweep, across)
    yield from lines
    yield paragraph("F a limit fails, c one is kept by the central figure alone.", mark="  ")
    if len(across) < len(first.values):
        yield paragraph(f"{len(across)} of {len(first.values)} columns; --csv writes every point.", mark="  ")
    yield from heading("Limits")
    yield from _share_of(sweep)


def _grid_table(sweep: Sweep, across: Sequence[int]) -> list[str]:
    first, second = sweep.axes
    heads = [figure_and_unit(first.variable, first.values[i])[0] for i in across]
    corner = f"{name_of(second.variable)}\n{unit_of(second.variable)}".rstrip("\n")
    rows = [
        [figure_and_unit(second.variable, value)[0], *(_cell(sweep, i, j) for i in across)]
        for j, value in enumerate(second.values)
    ]
    return fitting((corner, *(f"{head}\n{unit_of(first.variable)}".rstrip() for head in heads)), rows)


def _chosen(count: int, most: int) -> list[int]:
    """Places of the columns shown: evenly spread, the ends among them."""
    shown = min(count, most)
    return [round(index * (count - 1) / (shown - 1)) for index in range(shown)]


def _cell(sweep: Sweep, i: int, j: int) -> str:
    point = sweep.points[i * len(sweep.axes[1].values) + j]
    central_alone = any(check.status == "caution" and check.value_upper is not None for check in point.checks)
    mark = "F" if point.status == "fail" else "c" if central_alone else " "
    return f"{significant(point.head_loss_upper, 3)}{mark}"


def _share_of(sweep: Sweep) -> Iterator[str]:
    every = [check for point in sweep.points for check in point.checks]
    failing = dict.fromkeys(check.name for check in every if check.status == "fail")
    for name in failing:
        count = sum(check.name == name and check.status == "fail" for check in every)
        yield paragraph(f"{name.replace('_', ' ')}: at {count} of {len(sweep.points)} points", mark="FAIL  ")
    if not failing:
        yield "No limit fails at any point."
