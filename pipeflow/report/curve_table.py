"""System curves as a table for a spreadsheet: every point of every condition, units in the header."""

from __future__ import annotations

import csv
import io

from pipeflow.study.pumping.result import CurveResult
from pipeflow.units import to_display

HEADER = (
    "condition", "flow [m3/h]", "total_head [m]", "total_head_upper [m]", "static_head [m]", "pump_head [m]",
    "pump_head_upper [m]", "regime",
)  # fmt: skip


def curve_table(result: CurveResult) -> str:
    """Write the table, numbers to nine digits."""
    written = io.StringIO()
    writer = csv.writer(written, lineterminator="\n")
    writer.writerow(HEADER)
    for condition in result.conditions:
        system = condition.system
        flows = (to_display(flow, "m3/h") for flow in system.flow)
        heads = (system.total_head, system.total_head_upper, system.static_head, system.pump_head)
        for flow, *row, regime in zip(flows, *heads, system.pump_head_upper, system.regime, strict=True):
            writer.writerow([_inert(condition.name), *(f"{value:.9g}" for value in (flow, *row)), regime])
    return written.getvalue()


def _inert(name: str) -> str:
    """Keep a spreadsheet from taking a name for a formula."""
    return f"'{name}" if name.startswith(("=", "+", "-", "@")) else name
