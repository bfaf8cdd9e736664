"""Stated limits held against computed figures."""

from __future__ import annotations

import math

from pipeflow.verdict import Check, Status


def at_most(name: str, central: float, upper: float, limit: float, unit: str, basis: str, source: str = "") -> Check:
    """Hold a figure to its highest allowed value: judged on the upper figure; central passes alone is a caution."""
    if math.isnan(central) or math.isnan(upper):
        return Check(name, "fail", None, limit, unit, f"{basis}: no figure was found", source=source)
    status: Status = "ok" if upper <= limit else "caution" if central <= limit else "fail"
    return Check(name, status, central, limit, unit, basis, upper if upper > central else None, source=source)


def at_least(
    name: str, value: float, limit: float, unit: str, basis: str, source: str = "", below: Status = "fail"
) -> Check:
    """Hold a figure to its lowest allowed value; ``below`` is the status of a figure under it."""
    if math.isnan(value):
        return Check(name, below, None, limit, unit, f"{basis}: no figure was found", None, "at least", source)
    return Check(name, "ok" if value >= limit else below, value, limit, unit, basis, None, "at least", source)


def not_checked(
    name: str, needs: tuple[str, ...], unit: str, basis: str, value: float | None = None, source: str = ""
) -> Check:
    """Say which case keys a check needs; never passes."""
    said = f"{basis}; needs {' and '.join(needs)}"
    return Check(name, "not checked", value, None, unit, said, source=source, needs=needs)
