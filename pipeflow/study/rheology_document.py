"""What rests on the rheology as parts of a JSON document: the fit behind it, rival laws, rates beyond those tested."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any, Final

from pipeflow.case.model import Case
from pipeflow.study.fit_document import fit_document
from pipeflow.study.rheology_result import BeyondTested, LawLoss, RheologyAnswers

_KEYS: Final = {
    "pressure_loss": "pressure_loss_Pa",
    "pressure_loss_upper": "pressure_loss_upper_Pa",
    "pressure_loss_tangent": "pressure_loss_tangent_Pa",
    "pressure_loss_tangent_upper": "pressure_loss_tangent_upper_Pa",
    "flow": "flow_m3_s",
    "wall_shear_rate": "wall_shear_rate_1_s",
}


def rheology_document(case: Case, answers: RheologyAnswers) -> dict[str, Any]:
    """Lay out the keys that are there: ``rheology_fit``, ``rheology_rivals``, ``beyond_tested_shear_rate``."""
    laid_out: dict[str, Any] = {}
    if case.fitted is not None:
        document = fit_document(case.readings[0], case.fitted)
        laid_out["rheology_fit"] = {key: value for key, value in document.items() if key != "points"}
    if answers.by_law:
        highest, taken = answers.for_design, answers.by_law[0]
        laid_out["rheology_rivals"] = {
            "laws": [_law(law, taken) for law in answers.by_law],
            "for_design": highest and highest.model,
        }
    if answers.beyond:
        laid_out["beyond_tested_shear_rate"] = [_keyed(beyond) for beyond in answers.beyond]
    return laid_out


def _law(law: LawLoss, taken: LawLoss) -> dict[str, Any]:
    return {**_keyed(law), "difference_Pa": law.pressure_loss - taken.pressure_loss}


def _keyed(item: LawLoss | BeyondTested) -> dict[str, Any]:
    return {
        _KEYS.get(name, name): list(value) if isinstance(value, tuple) else value
        for name, value in asdict(item).items()
    }
