"""The methods a case may choose from, the default of each rheology, and the family that makes its upper figure."""

from __future__ import annotations

from typing import TypeVar

from pipeflow.friction.alternatives import (
    CLAPP,
    HANKS,
    HEDSTROM,
    IRVINE,
    SLATTER_TURBULENT,
    TOMITA,
    TORRANCE,
)
from pipeflow.friction.criteria import CRITERIA, DEFAULT_CRITERION, Criterion
from pipeflow.friction.turbulent import COLEBROOK_WHITE, DODGE_METZNER, WILSON_THOMAS, TurbulentMethod
from pipeflow.rheology import Rheology

M = TypeVar("M", TurbulentMethod, Criterion)

TURBULENT = {
    method.source.key: method
    for method in (
        COLEBROOK_WHITE,
        DODGE_METZNER,
        WILSON_THOMAS,
        TORRANCE,
        SLATTER_TURBULENT,
        IRVINE,
        CLAPP,
        TOMITA,
        HEDSTROM,
        HANKS,
    )
}
DEFAULT = {
    "newtonian": COLEBROOK_WHITE,
    "power-law": DODGE_METZNER,
}
FAMILY = (DODGE_METZNER, WILSON_THOMAS, TORRANCE, SLATTER_TURBULENT, HANKS, IRVINE, CLAPP)
LEFT_OUT_OF_FAMILY = {
    "tomita": "it adds nothing, within some per cent of wilson-thomas",
    "hedstrom": "an estimate of the upper bound, not a correlation",
}
"""Why a method that fits the rheology is never in the family."""


def turbulent_method(rheology: Rheology, key: str | None = None) -> TurbulentMethod:
    """Look the correlation up that ``key`` names, or the default of the rheology.

    Raises
    ------
    ValueError
        For an unknown key, or a method that was not made for the rheology.
    """
    if key is None:
        return DEFAULT.get(rheology.key, WILSON_THOMAS)
    return _chosen(TURBULENT, "turbulent method", rheology, key)


def critical_criterion(rheology: Rheology, key: str | None = None) -> Criterion:
    """Look the criterion for the end of laminar flow up, by its key, or the default; errors as above."""
    if key is None:
        return DEFAULT_CRITERION
    return _chosen(CRITERIA, "critical criterion", rheology, key)


def _chosen(known: dict[str, M], what: str, rheology: Rheology, key: str) -> M:
    if key not in known:
        raise ValueError(f"unknown {what} {key!r}; known are {', '.join(known)}")
    method = known[key]
    if rheology.key not in method.models:
        fitting = ", ".join(key for key, other in known.items() if rheology.key in other.models)
        raise ValueError(f"{key} does not apply to a {rheology.key} fluid; {fitting} do")
    return method
