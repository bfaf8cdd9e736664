"""Pumps on a line as parts of a JSON document: SI numbers, the unit at the end of each key."""

from __future__ import annotations

from typing import Any, Final

from pipeflow.documents import laid_out
from pipeflow.study.pumping.result import Condition, CurveResult, PumpOnLine
from pipeflow.verdict import Check

UNITS: Final = {
    "flow": "m3_s",
    "flow_from": "m3_s",
    "flow_to": "m3_s",
    "laminar_until": "m3_s",
    "turbulent_from": "m3_s",
    "deposition_flow": "m3_s",
    "total_head": "m",
    "total_head_upper": "m",
    "pump_head": "m",
    "pump_head_upper": "m",
    "static_head": "m",
    "head": "m",
    "npsh_available": "m",
    "npsh_required": "m",
    "shaft_power": "W",
    "motor_power": "W",
    "standard_motor": "W",
    "speed": "rad_s",
    "speed_upper": "rad_s",
    "viscosity_head": "Pa_s",
    "viscosity_efficiency": "Pa_s",
    "shear_rate": "1_s",
    "velocity": "m_s",
    "volume": "m3",
    "time": "s",
}
_OF_A_PUMP: Final = ("name", "speed", "speed_upper", "duty", "duty_upper", "duty_maximum")
_OF_A_CHECK: Final = ("name", "status", "value", "value_upper", "limit", "unit")


def pumps_document(result: CurveResult) -> dict[str, Any]:
    """Lay out what a record holds of the pumps of a case: ranking, duties and checks, without the curves drawn."""
    return {
        "ranking": [laid_out(one, UNITS) for one in result.ranking],
        "conditions": [_condition(one) for one in result.conditions],
    }


def _condition(one: Condition) -> dict[str, Any]:
    return {"name": one.name, "kind": one.kind, "pumps": [_pump(pump) for pump in one.pumps]}


def _pump(pump: PumpOnLine) -> dict[str, Any]:
    return {**laid_out(pump, UNITS, _OF_A_PUMP), "checks": [_check(check) for check in pump.checks]}


def _check(check: Check) -> dict[str, Any]:
    return laid_out(check, {}, _OF_A_CHECK)
