"""A result as a JSON document: SI numbers, the unit at the end of each key, null for what has no value."""

from __future__ import annotations

import math
from dataclasses import fields
from typing import Any

from pipeflow.sources import Source
from pipeflow.study.result import (
    SAFETY_NOTICE,
    ElementResult,
    MethodUse,
    ProfilePoint,
    ProfileResult,
    Result,
    SlackResult,
    Totals,
)
from pipeflow.study.rheology_document import rheology_document
from pipeflow.verdict import Check

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
    laid_out: dict[str, Any] = {
        "title": case.title,
        "revision": case.revision,
        "file": case.file,
        "density_kg_m3": float(case.fluid.density),
        "assumed_inputs": list(case.assumed),
        "flow_m3_s": case.flow.design,
        "flow_minimum_m3_s": case.flow.minimum,
        "flow_maximum_m3_s": case.flow.maximum,
        "elements": [_fields(element) for element in result.elements],
        "totals": _fields(result.totals),
        "method_spread": {"head_loss_m": result.spread.head_loss, "left_out": result.spread.left_out},
        "profile": _profile(result.profile),
        "checks": [_fields(check) for check in result.checks],
        "cautions": list(result.cautions),
        **rheology_document(case, result.rheology),
        "methods": [_method(use) for use in result.methods],
        "safety_notice": SAFETY_NOTICE,
    }
    if result.scenarios:
        laid_out["scenarios"] = {name: document(scenario) for name, scenario in result.scenarios.items()}
    return laid_out


def _fields(item: ElementResult | Totals | ProfileResult | ProfilePoint | SlackResult | Check) -> dict[str, Any]:
    return {_key(field.name): _finite(getattr(item, field.name)) for field in fields(item)}


def _key(name: str) -> str:
    return f"{name}_{_UNITS[name]}" if name in _UNITS else name


def _finite(value: Any) -> Any:
    return None if isinstance(value, float) and not math.isfinite(value) else value


def _profile(profile: ProfileResult) -> dict[str, Any]:
    return {
        **_fields(profile),
        "points": [_fields(point) for point in profile.points],
        "after_pump": _fields(profile.after_pump),
        "slack": profile.slack and _fields(profile.slack),
        "slack_upper": profile.slack_upper and _fields(profile.slack_upper),
    }


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
