"""A sizing as a JSON document: SI numbers, the unit at the end of each key, null for what has no value."""

from __future__ import annotations

from typing import Any

from pipeflow.documents import laid_out, plain
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.study.sizes.sizing import Candidate, SizingResult
from pipeflow.study.sizes.solve_for import Answer

_UNITS = {
    "diameter": "m",
    "head_loss": "m",
    "head_loss_maximum": "m",
    "head_loss_upper": "m",
    "velocity": "m_s",
    "velocity_minimum": "m_s",
    "velocity_maximum": "m_s",
    "wall_shear_stress": "Pa",
    "wall_shear_rate": "1_s",
    "restart_pressure": "Pa",
    "rating": "Pa",
    "residence_time": "s",
}


def size_document(result: SizingResult) -> dict[str, Any]:
    """Lay a sizing out as the document that ``size --json`` prints."""
    economy = result.economy
    return {
        "title": result.case.title,
        "revision": result.case.revision,
        "file": result.case.file,
        "series": result.series,
        "pipes": list(result.pipes),
        "candidates": [_candidate(one) for one in result.candidates],
        "selected": result.selected and result.selected.size,
        "nearest": result.nearest and {"size": result.nearest.size, "fails": list(result.nearest.fails)},
        "economy": economy
        and {
            "size": economy.size,
            "cost_per_year": economy.cost_per_year,
            "within_5_percent": list(economy.equal),
            "without_price": list(economy.without_price),
        },
        "notes": list(result.notes),
        "safety_notice": SAFETY_NOTICE,
    }


def _candidate(one: Candidate) -> dict[str, Any]:
    return {key: value for key, value in laid_out(one, _UNITS).items() if key != "excess"}


def answer_document(answer: Answer) -> dict[str, Any]:
    """Lay the answer of ``size --solve-for`` out as the document that ``--json`` prints."""
    return {
        "title": answer.case.title,
        "revision": answer.case.revision,
        "file": answer.case.file,
        "solve_for": answer.quantity,
        "value": answer.value,
        "present": answer.present,
        "unit": answer.unit,
        "limit": answer.limit,
        "scenario": answer.scenario,
        "note": answer.note,
        "each_limit": {name: plain(value, {}) for name, value in answer.each.items()},
    }
