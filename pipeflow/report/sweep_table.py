"""Sweeps and boundaries of an envelope as tables for a spreadsheet, units in the header."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence

from pipeflow.report.sweep_text import figure_and_unit, unit_of
from pipeflow.study.ranges.envelope import Envelope
from pipeflow.study.ranges.sweeping import Sweep, SweptPoint
from pipeflow.units import to_display

FIGURES = (
    ("velocity", "m/s"), ("head_loss", "m"), ("head_loss_upper", "m"), ("total_head", "m"), ("total_head_upper", "m"),
    ("pressure_required", "kPa"), ("pressure_required_upper", "kPa"), ("power", "kW"), ("power_upper", "kW"),
)  # fmt: skip


def sweep_csv(sweep: Sweep) -> str:
    """Write every point of a sweep, numbers to nine digits."""
    header = [_headed(axis.variable.path, unit_of(axis.variable)) for axis in sweep.axes]
    header += [_headed(name, unit) for name, unit in FIGURES]
    per = "t of dry solids and km" if sweep.case.solids else "t of slurry and km"
    header += [f"specific_energy [kWh per {per}]", "regime", "status", "limit"]
    return _written(header, (_row(sweep, point) for point in sweep.points))


def _row(sweep: Sweep, point: SweptPoint) -> list[str]:
    values = [figure_and_unit(axis.variable, value, 9)[0] for axis, value in zip(sweep.axes, point.values, strict=True)]
    figures = [f"{to_display(getattr(point, name), unit):.9g}" for name, unit in FIGURES]
    worst = point.worst
    return [*values, *figures, f"{point.specific_energy:.9g}", point.regime, point.status, worst.name if worst else ""]


def envelope_csv(envelope: Envelope) -> str:
    """Write the points of every boundary of an envelope, in order along its lines."""
    header = ["boundary", "figure", "line", "flow [m3/h]",
              _headed(envelope.up.variable.path, unit_of(envelope.up.variable))]  # fmt: skip
    rows = (
        [_inert(one.name), one.figure, str(number), f"{to_display(x, 'm3/h'):.9g}",
         figure_and_unit(envelope.up.variable, y, 9)[0]]
        for one in envelope.boundaries for number, line in enumerate(one.lines, 1) for x, y in line
    )  # fmt: skip
    return _written(header, rows)


def _written(header: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    written = io.StringIO()
    writer = csv.writer(written, lineterminator="\n")
    writer.writerow(header)
    writer.writerows(rows)
    return written.getvalue()


def _headed(name: str, unit: str) -> str:
    return f"{name} [{unit}]" if unit else name


def _inert(name: str) -> str:
    """Keep a spreadsheet from taking a name for a formula."""
    return f"'{name}" if name.startswith(("=", "+", "-", "@")) else name
