"""What rests on the rheology as parts of a JSON document: the fit behind it, rival laws, rates beyond those tested."""

from __future__ import annotations

from dataclasses import asdict, fields
from typing import TYPE_CHECKING, Any, Final

from pipeflow.case.model import Case, Followed
from pipeflow.study.readings.fit_document import fit_document, with_unit
from pipeflow.study.readings.result import BeyondTested, LawLoss, RheologyAnswers

if TYPE_CHECKING:
    from pipeflow.rheology.sheet import FitResult

_KEYS: Final = {
    "pressure_loss": "pressure_loss_Pa",
    "pressure_loss_upper": "pressure_loss_upper_Pa",
    "pressure_loss_tangent": "pressure_loss_tangent_Pa",
    "pressure_loss_tangent_upper": "pressure_loss_tangent_upper_Pa",
    "flow": "flow_m3_s",
    "wall_shear_rate": "wall_shear_rate_1_s",
}


def rheology_document(case: Case, answers: RheologyAnswers) -> dict[str, Any]:
    """Lay out the keys that are there: the fit or fits, the laws, rivals, rates beyond those tested."""
    laid_out: dict[str, Any] = {}
    if case.fitted is not None:
        laid_out["rheology_fit"] = _fit(case.readings[0], case.fitted)
    elif case.sheets:
        laid_out["rheology_fits"] = [_fit(*each) for each in zip(case.readings, case.sheets, strict=True)]
    if case.followed:
        laid_out["rheology_laws"] = [_followed(followed) for followed in case.followed]
    if answers.by_law:
        highest, taken = answers.for_design, answers.by_law[0]
        laid_out["rheology_rivals"] = {
            "laws": [_law(law, taken) for law in answers.by_law],
            "for_design": highest and highest.model,
        }
    if answers.beyond:
        laid_out["beyond_tested_shear_rate"] = [_keyed(beyond) for beyond in answers.beyond]
    return laid_out


def _fit(file: str, fitted: FitResult) -> dict[str, Any]:
    return {key: value for key, value in fit_document(file, fitted).items() if key != "points"}


def _followed(followed: Followed) -> dict[str, Any]:
    """Lay a law out; its coefficients in SI units, the energy in J/mol, temperatures in K."""
    law = followed.law
    coefficients = {field.name: getattr(law, field.name) for field in fields(law) if field.name != "tested"}
    return {
        "parameter": followed.parameter,
        "law": law.key,
        "follows": law.variable,
        "coefficients": coefficients,
        "tested": list(law.tested),
        "at": followed.condition,
        with_unit(followed.parameter): followed.value,
        "extrapolated": followed.is_carried_on,
    }


def _law(law: LawLoss, taken: LawLoss) -> dict[str, Any]:
    return {**_keyed(law), "difference_Pa": law.pressure_loss - taken.pressure_loss}


def _keyed(item: LawLoss | BeyondTested) -> dict[str, Any]:
    return {
        _KEYS.get(name, name): list(value) if isinstance(value, tuple) else value
        for name, value in asdict(item).items()
    }
