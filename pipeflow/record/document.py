"""A result as a JSON document: SI numbers, the unit at the end of each key, null for what has no value."""

from __future__ import annotations

from typing import Any

from pipeflow.documents import laid_out
from pipeflow.sources import Source
from pipeflow.study.readings.document import rheology_document
from pipeflow.study.result import SAFETY_NOTICE, MethodUse, Result

_UNITS = {
    "rise": "m",
    "diameter": "m",
    "length": "m",
    "roughness": "m",
    "velocity": "m_s",
    "critical_velocity": "m_s",
    "critical_velocity_lowest": "m_s",
    "critical_velocity_highest": "m_s",
    "turbulent_velocity": "m_s",
    "wall_shear_stress": "Pa",
    "wall_shear_rate": "1_s",
    "friction_loss": "Pa",
    "friction_loss_upper": "Pa",
    "fitting_loss": "Pa",
    "reducer_loss": "Pa",
    "equipment_loss": "Pa",
    "head_loss": "m",
    "head_loss_upper": "m",
    "static_head": "m",
    "total_head": "m",
    "total_head_upper": "m",
    "pressure_required": "Pa",
    "pressure_required_upper": "Pa",
    "distance": "m",
    "elevation": "m",
    "head": "m",
    "head_upper": "m",
    "pressure": "Pa",
    "pressure_upper": "Pa",
    "head_required": "m",
    "head_without": "m",
    "pump_head": "m",
    "pump_head_upper": "m",
    "pump_pressure": "Pa",
    "pump_pressure_upper": "Pa",
    "lowest_pressure": "Pa",
}


def document(result: Result) -> dict[str, Any]:
    """Lay a result out as the document that ``--json`` prints and records store."""
    case = result.case
    told: dict[str, Any] = {
        "title": case.title,
        "revision": case.revision,
        "file": case.file,
        "density_kg_m3": float(case.fluid.density),
        "assumed_inputs": list(case.assumed),
        "flow_m3_s": case.flow.design,
        "flow_minimum_m3_s": case.flow.minimum,
        "flow_maximum_m3_s": case.flow.maximum,
        "elements": [laid_out(element, _UNITS) for element in result.elements],
        "totals": laid_out(result.totals, _UNITS),
        "method_spread": {"head_loss_m": result.spread.head_loss, "left_out": result.spread.left_out},
        "profile": laid_out(result.profile, _UNITS),
        "checks": [laid_out(check, _UNITS) for check in result.checks],
        "cautions": list(result.cautions),
        **rheology_document(case, result.rheology),
        "methods": [_method(use) for use in result.methods],
        "safety_notice": SAFETY_NOTICE,
    }
    if result.scenarios:
        told["scenarios"] = {name: document(scenario) for name, scenario in result.scenarios.items()}
    return told


def _method(use: MethodUse) -> dict[str, Any]:
    source: Source = use.source
    return {
        "key": source.key,
        "title": source.title,
        "citation": source.citation,
        "range": [str(bound) for bound in source.ranges],
        "confidence": source.confidence,
        "note": source.note,
        "used_for": use.used_for,
    }
