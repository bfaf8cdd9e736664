"""System curves and their pumps as a JSON document: SI numbers, the unit at the end of each key, null for no value."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from pipeflow.documents import key_of, laid_out, plain
from pipeflow.study.pumping.document import UNITS
from pipeflow.study.pumping.result import Condition, CurveResult, SystemCurve
from pipeflow.study.result import SAFETY_NOTICE

_COLUMNS = ("flow", "total_head", "total_head_upper", "pump_head", "pump_head_upper", "static_head", "regime")


def curve_document(result: CurveResult) -> dict[str, Any]:
    """Lay the system curves of a case and its pumps out as the document that ``curve --json`` prints."""
    case, own = result.case, result.own
    told: dict[str, Any] = {
        "title": case.title,
        "revision": case.revision,
        "file": case.file,
        "density_kg_m3": float(case.fluid.density),
        "flow_m3_s": case.flow.design,
        "flow_minimum_m3_s": case.flow.minimum,
        "flow_maximum_m3_s": case.flow.maximum,
        **_condition(own),
        "envelope": {
            "flow_m3_s": list(own.system.flow),
            "low_m": list(result.envelope_low),
            "high_m": list(result.envelope_high),
        },
        "ranking": [laid_out(one, UNITS) for one in result.ranking],
        "selected": next((one.name for one in result.ranking if one.holds), None),
        "cautions": [*result.cautions, *_cautions(own)],
        "methods": [
            {"key": use.source.key, "citation": use.source.citation, "used_for": use.used_for} for use in result.methods
        ],
        "safety_notice": SAFETY_NOTICE,
    }
    if len(result.conditions) > 1:
        told["scenarios"] = {
            one.name: {**_condition(one), "cautions": list(_cautions(one))} for one in result.conditions[1:]
        }
    return told


def _condition(one: Condition) -> dict[str, Any]:
    system = one.system
    return {
        "kind": one.kind,
        "system": _rows(system),
        "boundaries": {
            key_of(name, UNITS): getattr(system, name)
            for name in ("laminar_until", "turbulent_from", "deposition_flow")
        },
        "flat_bands": [laid_out(band, UNITS) for band in system.flat_bands],
        "pumps": [laid_out(pump, UNITS) for pump in one.pumps],
        "flushes": [laid_out(flush, UNITS) for flush in one.flushes],
    }


def _cautions(one: Condition) -> Iterator[str]:
    yield from one.cautions
    yield from (f"{pump.name}: {caution}" for pump in one.pumps for caution in pump.cautions)


def _rows(system: SystemCurve) -> list[dict[str, Any]]:
    columns = zip(*(getattr(system, name) for name in _COLUMNS), strict=True)
    return [
        {key_of(name, UNITS): plain(value, UNITS) for name, value in zip(_COLUMNS, row, strict=True)} for row in columns
    ]
