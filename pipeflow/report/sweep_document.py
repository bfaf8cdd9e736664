"""Sweeps and envelopes as JSON documents: SI numbers, null for no value."""

from __future__ import annotations

import math
from typing import Any

from pipeflow.report.sweep_text import energy_unit
from pipeflow.study.ranges.boundaries import Boundary
from pipeflow.study.ranges.envelope import Envelope
from pipeflow.study.ranges.runs import Run
from pipeflow.study.ranges.sweeping import Axis, Sweep, SweptPoint
from pipeflow.study.ranges.window import Interval
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.verdict import Check

SI = {
    "volume flow": "m3/s", "mass flow": "kg/s", "stress": "Pa", "pressure": "Pa", "length": "m", "density": "kg/m3",
    "viscosity": "Pa.s", "consistency": "Pa.s^n", "temperature": "K", "time": "s", "shear rate": "1/s",
}  # fmt: skip


def sweep_document(sweep: Sweep) -> dict[str, Any]:
    """Lay a sweep out as the document that ``sweep --json`` prints."""
    return {
        "title": sweep.case.title,
        "revision": sweep.case.revision,
        "file": sweep.case.file,
        "axes": [_axis(axis) for axis in sweep.axes],
        "points": [_point(point) for point in sweep.points],
        "boundaries": [_boundary(one) for one in sweep.boundaries],
        "limits": [_run(run) for run in sweep.runs],
        "energy_unit": energy_unit(sweep.case),
        "cautions": list(sweep.cautions),
        "safety_notice": SAFETY_NOTICE,
    }


def envelope_document(envelope: Envelope) -> dict[str, Any]:
    """Lay a duty envelope out as the document that ``envelope --json`` prints."""
    return {
        "title": envelope.case.title,
        "revision": envelope.case.revision,
        "file": envelope.case.file,
        "axes": [_axis(envelope.flow), _axis(envelope.up)],
        "governing_pipe": envelope.governing_pipe or None,
        "boundaries": [_limited(one, envelope) for one in envelope.boundaries],
        "window": [list(row) for row in envelope.window],
        "areas": {
            figure: [[list(point) for point in ring] for ring in rings] for figure, rings in envelope.areas.items()
        },
        "specific_energy": [[_number(value) for value in row] for row in envelope.energy],
        "energy_unit": energy_unit(envelope.case),
        "rows": [
            {
                "value": row.value,
                "upper": [_interval(one) for one in row.upper],
                "central": [_interval(one) for one in row.central],
                "closed_by": {figure: list(names) for figure, names in row.closed_by.items()},
            }
            for row in envelope.rows
        ],
        "holds": envelope.holds,
        "cautions": list(envelope.cautions),
        "safety_notice": SAFETY_NOTICE,
    }


def _axis(axis: Axis) -> dict[str, Any]:
    unit = SI.get(axis.variable.dimension, "")
    return {"path": axis.variable.path, "unit": unit, "present": _number(axis.variable.value), "values": [*axis.values]}


def _point(point: SweptPoint) -> dict[str, Any]:
    worst = point.worst
    return {
        "values": list(point.values),
        "regime": point.regime,
        "velocity_m_s": _number(point.velocity),
        "head_loss_m": _number(point.head_loss),
        "head_loss_upper_m": _number(point.head_loss_upper),
        "total_head_m": _number(point.total_head),
        "total_head_upper_m": _number(point.total_head_upper),
        "pressure_required_Pa": _number(point.pressure_required),
        "pressure_required_upper_Pa": _number(point.pressure_required_upper),
        "power_W": _number(point.power),
        "power_upper_W": _number(point.power_upper),
        "specific_energy": _number(point.specific_energy),
        "status": point.status,
        "limit": worst.name if worst else None,
        "checks": [_check(check) for check in point.checks],
        "is_carried_on": point.is_carried_on,
    }


def _check(check: Check) -> dict[str, Any]:
    return {
        "name": check.name,
        "status": check.status,
        "value": _number(check.value),
        "value_upper": _number(check.value_upper),
        "limit": _number(check.limit),
        "unit": check.unit,
    }


def _run(run: Run) -> dict[str, Any]:
    return {"name": run.check.name, "status": run.check.status, "from": run.low, "to": run.high}


def _boundary(one: Boundary) -> dict[str, Any]:
    lines = [[[_number(x), _number(y)] for x, y in line] for line in one.lines]
    return {"name": one.name, "figure": one.figure, "lines": lines}


def _limited(one: Boundary, envelope: Envelope) -> dict[str, Any]:
    stated = envelope.limits.get(one.name)
    limit = {"limit": stated.limit, "unit": stated.unit, "sense": stated.sense} if stated else {"limit": None}
    return {**_boundary(one), **limit}


def _interval(one: Interval) -> dict[str, Any]:
    return {
        "low_m3_s": one.low,
        "high_m3_s": one.high,
        "low_by": one.low_by or None,
        "high_by": one.high_by or None,
    }


def _number(value: float | None) -> float | None:
    return None if value is None or not math.isfinite(value) else value
