"""Whether the methods and the rheology were used where they were published or measured to hold."""

from __future__ import annotations

from collections.abc import Mapping

from pipeflow.sources import Source

TOLERANCE = 1e-9
"""Relative; rounding of a figure on the bound itself is not a caution."""


def range_cautions(name: str, source: Source, values: Mapping[str, float]) -> list[str]:
    """Say which variables of a method's published range are left; ``name`` is the pipe."""
    return [
        f"{name}: {source.key} is outside its range {bound} ({bound.variable} is {values[bound.variable]:.3g})"
        for bound in source.ranges
        if bound.variable in values and not bound.holds(values[bound.variable], TOLERANCE)
    ]


def tested_rate_cautions(name: str, lowest: float, highest: float, tested: tuple[float, float]) -> list[str]:
    """Say where the wall shear rates of a pipe, 1/s, leave those the rheology was measured over."""
    span = f"the tested {tested[0]:.4g} to {tested[1]:.4g} 1/s"
    found = []
    if highest > tested[1]:
        found.append(
            f"{name}: wall shear rate up to {highest:.3g} 1/s is {highest / tested[1]:.2g} times the highest of {span}"
        )
    if lowest < tested[0]:
        found.append(f"{name}: wall shear rate down to {lowest:.3g} 1/s is below {span}")
    return found
