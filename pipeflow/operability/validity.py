"""Whether the methods and the rheology were used where they were published or measured to hold."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from pipeflow.sources import Source

TOLERANCE = 1e-9
"""Relative; rounding of a figure on the bound itself is not a caution."""


def range_cautions(source: Source, values: Mapping[str, float]) -> Iterator[str]:
    """Say which variables of a method's published range are left."""
    for bound in source.ranges:
        value = values.get(bound.variable)
        if value is not None and not bound.holds(value, TOLERANCE):
            yield f"{source.key} is outside its range {bound} ({bound.variable} is {value:.3g})"


def tested_rate_cautions(lowest: float, highest: float, tested: tuple[float, float]) -> Iterator[str]:
    """Say where wall shear rates, 1/s, leave those the rheology was measured over."""
    span = f"the tested {tested[0]:.4g} to {tested[1]:.4g} 1/s"
    if highest > tested[1]:
        factor = highest / tested[1]
        yield f"wall shear rate up to {highest:.3g} 1/s is {factor:.2g} times the highest of {span}"
    if lowest < tested[0]:
        yield f"wall shear rate down to {lowest:.3g} 1/s is below {span}"
