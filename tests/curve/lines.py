"""A small line with a pump, written as a case and its curve files."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from pathlib import Path

from scipy.interpolate import PchipInterpolator

from pipeflow.case.model import Case, FlowRange, PumpTable

GRAVITY = 9.80665
WATER = (
    "{density: 998.2 kg/m3, rheology: {model: newtonian, viscosity: 1.002 mPa.s}, liquid: {vapour_pressure: 2.3 kPa}}"
)
SLURRY = (
    "{density: 1420 kg/m3, liquid: {vapour_pressure: 2.3 kPa}, rheology: {model: herschel-bulkley, "
    "yield_stress: 9.5 Pa, consistency: 0.62 Pa.s^n, flow_index: 0.58}}"
)
ROWS = ((0, 31, 1, 2), (60, 28.5, 50, 2.2), (100, 24, 70, 2.6), (140, 16, 66, 3.4))
HEADS = {
    "centrifugal": ("flow [m3/h]", "head [m]", "efficiency [%]", "npsh_required [m]"),
    "positive-displacement": ("pressure [kPa]", "flow [m3/h]", "efficiency [%]"),
}


def line_with(
    folder: Path,
    fluid: str = SLURRY,
    flow: str = "flow: {minimum: 70 m3/h, design: 90 m3/h, maximum: 100 m3/h}",
    *,
    kind: str = "centrifugal",
    rows: Sequence[Sequence[object]] = ROWS,
    pumps: Mapping[str, Sequence[Sequence[object]]] | None = None,
    speed: str = "1480 rpm",
    more: str = "",
    ends: str = "source: {level: 3.2 m}\ndestination: {level: 2 m}",
    limits: str = "",
    scenarios: str = "",
    npsh: bool = True,
) -> Path:
    """Write the case and its curves; give the path of the case."""
    named = pumps or {"candidate": rows}
    text = f"""\
title: A line of two pipes
fluid: {fluid}
{flow}
site: {{altitude: 620 m}}
{ends}
route:
  - pipe: suction line
    size: NPS 8 Sch 40
    length: 6 m
    rise: -1 m
    fittings: {{entrance: 1}}
  - pump: feed pump
  - pipe: discharge line
    size: NPS 6 Sch 40
    length: 220 m
    rise: 14 m
    fittings: {{elbow_90: 4, exit: 1}}
{limits}
{scenarios}pumps:
"""
    for name, table in named.items():
        text += f"  - name: {name}\n    kind: {kind}\n    speed: {speed}\n    curve: {name}.csv\n"
        text += "".join(f"    {line}\n" for line in more.splitlines())
        header = HEADS[kind][: len(table[0])]
        lines = [", ".join(header), *(", ".join(str(cell) for cell in row) for row in table)]
        (folder / f"{name}.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")
    path = folder / "line.yaml"
    path.write_text(text, encoding="utf-8")
    return path


def at_flow(case: Case, flow: float) -> Case:
    """The case at one flow, m³/s."""
    return replace(case, flow=FlowRange(flow, flow, flow), scenarios={})


def pump_head_on_water(table: PumpTable, flow: float) -> float:
    """Head of the curve as drawn, m."""
    return float(PchipInterpolator(table.flow, table.head)(flow))
