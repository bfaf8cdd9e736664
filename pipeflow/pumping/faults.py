"""What is wrong with the points of a pump curve, worded, with the row each fault belongs to."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array
from pipeflow.pumping.curve import WaterCurve

FEWEST_POINTS = 3
DROOP_SHARE = 0.4
"""Share of the last flow up to which a head may rise with the flow (a droop near shut-off)."""


@dataclass(frozen=True)
class Fault:
    """One fault of a curve.

    Attributes
    ----------
    row : int or None
        Index of the row, from 0; None where it is the curve's as a whole.
    column : str
        ``flow``, ``head``, ``pressure``, ``efficiency`` or ``npsh_required``.
    message : str
        What is wrong, and what is accepted.
    is_caution : bool
        The curve may be used, and the user is told.
    """

    row: int | None
    column: str
    message: str
    is_caution: bool = False


def faults(curve: WaterCurve) -> tuple[Fault, ...]:
    """Find every fault of a curve of head against flow; of errors none may be left before it is read.

    Examples
    --------
    >>> flow, head = np.array([0.0, 0.01, 0.01]), np.array([20.0, 18.0, 15.0])
    >>> [(fault.row, fault.message) for fault in faults(WaterCurve(flow, head))]
    [(2, 'the flow is that of the row before; flows must rise from row to row')]
    """
    found = tuple(_of_columns(curve))
    return found or tuple(_of_shape(curve))


def _of_columns(curve: WaterCurve) -> Iterator[Fault]:
    if len(curve.flow) < FEWEST_POINTS:
        yield Fault(None, "flow", f"the curve has {len(curve.flow)} points; at least {FEWEST_POINTS} are needed")
    columns = (("head", curve.head), ("efficiency", curve.efficiency), ("npsh_required", curve.npsh_required))
    yield from negatives("flow", curve.flow)
    yield from not_rising("flow", curve.flow)
    for name, values in columns:
        if values is None:
            continue
        if len(values) != len(curve.flow):
            yield Fault(None, name, f"{len(values)} values for {len(curve.flow)} flows")
        yield from negatives(name, values)
    yield from above_one(curve.efficiency)


def negatives(column: str, values: Sequence[float] | Array) -> Iterator[Fault]:
    """Name the rows with a value below zero or none at all."""
    for row, value in enumerate(values):
        if not np.isfinite(value):
            yield Fault(row, column, "no number")
        elif value < 0:
            yield Fault(row, column, "the value is below zero")


def not_rising(column: str, values: Sequence[float] | Array) -> Iterator[Fault]:
    """Name the rows that do not lie above the row before."""
    for row in range(1, len(values)):
        if values[row] == values[row - 1]:
            yield Fault(row, column, f"the {column} is that of the row before; {column}s must rise from row to row")
        elif values[row] < values[row - 1]:
            yield Fault(
                row, column, f"the {column} is below that of the row before; {column}s must rise from row to row"
            )


def above_one(efficiency: Sequence[float] | Array | None) -> Iterator[Fault]:
    """Name the rows with an efficiency above 1."""
    for row, value in enumerate(() if efficiency is None else efficiency):
        if value > 1:
            hint = "; for per cent write its unit, %" if value <= 100 else ""
            yield Fault(row, "efficiency", f"the efficiency is above 1{hint}")


def _of_shape(curve: WaterCurve) -> Iterator[Fault]:
    """Faults of the way a head goes with the flow, and of an efficiency without a peak."""
    rises = [row for row in range(1, len(curve.head)) if curve.head[row] > curve.head[row - 1]]
    if len(rises) == len(curve.head) - 1:
        yield Fault(None, "head", "the head rises over the whole curve; that of a pump falls as the flow grows")
        return
    for row in rises:
        if curve.flow[row] > DROOP_SHARE * curve.flow[-1]:
            said = f"the head rises with the flow above {DROOP_SHARE:.0%} of the last flow, where that of a pump falls"
            yield Fault(row, "head", said)
    if rises and curve.flow[rises[-1]] <= DROOP_SHARE * curve.flow[-1]:
        said = "the head droops towards shut-off: a line may be met at two flows, and the lower is not stable"
        yield Fault(rises[-1], "head", said, is_caution=True)
    if curve.is_best_at_end:
        row = int(np.argmax(np.asarray(curve.efficiency)))
        said = "the efficiency is highest in an end row: the best-efficiency point may lie outside the curve"
        yield Fault(row, "efficiency", said, is_caution=True)
