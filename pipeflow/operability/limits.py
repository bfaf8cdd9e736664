"""Stated limits held against computed figures."""

from __future__ import annotations

import math

from pipeflow.verdict import Check, Status


def at_most(name: str, central: float, upper: float, limit: float, unit: str, basis: str) -> Check:
    """Hold a figure to its highest allowed value: judged on the upper figure; central passes alone is a caution."""
    if math.isnan(central):
        return Check(name, "fail", None, limit, unit, f"{basis}: no figure was found")
    status: Status = "ok" if upper <= limit else "caution" if central <= limit else "fail"
    return Check(name, status, central, limit, unit, basis, upper if upper > central else None)


def at_least(name: str, value: float, limit: float, unit: str, basis: str) -> Check:
    """Hold a figure to its lowest allowed value."""
    return Check(name, "ok" if value >= limit else "fail", value, limit, unit, basis)
