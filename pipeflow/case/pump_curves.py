"""The CSV of a pump's curve: read with its units, held against what a pump can do.

Apart from the schema, since a case without pumps needs none of it; each curve is remembered until its file changes.
"""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache
from typing import Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.files import file_state
from pipeflow.case.model import PumpTable
from pipeflow.case.tables import Column, Table, read_table
from pipeflow.errors import InputError, Problem
from pipeflow.pumping.curve import WaterCurve
from pipeflow.pumping.faults import FEWEST_POINTS, Fault, above_one, faults, negatives, not_rising
from pipeflow.units import echo

MAX_POINTS: Final = 200
KEYS: Final = ("pump", "date", "note")
"""What the lines before the header may say."""
_BESIDE: Final = {
    "efficiency": Column(per_cent=True),
    "npsh_required": Column(("length",)),
}
COLUMNS: Final = {
    "centrifugal": {"flow": Column(("volume flow",)), "head": Column(("length",)), **_BESIDE},
    "positive-displacement": {"flow": Column(("volume flow",)), "pressure": Column(("pressure",)), **_BESIDE},
}
"""The columns of a curve by the kind of pump; the first two are required."""
_FOREIGN: Final = {
    "head": "a positive-displacement pump's curve has 'pressure [kPa]'; a head would depend on the liquid",
    "pressure": "a centrifugal pump's curve has 'head [m]', which is that of any liquid of low viscosity",
}
_CURVES_KEPT: Final = 64
ONE_PER_CENT: Final = 0.01


def read_curve(path: str, kind: str) -> PumpTable:
    """Read a curve, or remember it.

    Parameters
    ----------
    path : str
        A CSV file as ``docs/case-file.md`` says.
    kind : str
        Kind of pump, a key of :data:`COLUMNS`.

    Returns
    -------
    PumpTable
        A centrifugal pump's by rising flow, a positive-displacement pump's by rising pressure.

    Raises
    ------
    InputError
        With everything wrong with the file.
    """
    found = _outcome(path, file_state(path), kind)
    if isinstance(found, PumpTable):
        return found
    raise InputError(list(found))


def faults_of(path: str, kind: str) -> tuple[Problem, ...]:
    """Give everything wrong with a curve."""
    found = _outcome(path, file_state(path), kind)
    return () if isinstance(found, PumpTable) else found


@lru_cache(maxsize=_CURVES_KEPT)
def _outcome(path: str, state: tuple[int, int], kind: str) -> PumpTable | tuple[Problem, ...]:
    try:
        table = read_table(path, COLUMNS[kind], KEYS, _FOREIGN)
    except InputError as error:
        return tuple(error.problems)
    found = tuple(_problems(table, kind))
    if found:
        return tuple(sorted(found, key=lambda problem: (problem.line or 0, problem.column or 0)))
    return PumpTable(**{name: tuple(float(value) for value in values) for name, values in table.numbers.items()})


def _problems(table: Table, kind: str) -> Iterator[Problem]:
    required = list(COLUMNS[kind])[:2]
    missing = [name for name in required if name not in table.numbers]
    for name in missing:
        yield Problem(table.file, table.header_line, 1, name, "this column is missing")
    points = table.lines.size
    if points > MAX_POINTS:
        line = int(table.lines[MAX_POINTS])
        yield Problem(table.file, line, 1, "", f"{points} points; a curve has at most {MAX_POINTS}")
    elif not missing:
        yield from _in_fractions(table)
        found = _of_head(table) if kind == "centrifugal" else _of_pressure(table)
        yield from (_problem(table, fault) for fault in _said_once(table, found) if not fault.is_caution)


def _in_fractions(table: Table) -> Iterator[Problem]:
    """Tell efficiencies that are all at most 1 % for what they are: fractions under the head of per cents."""
    efficiency = table.numbers.get("efficiency")
    if efficiency is None or not table.units["efficiency"] or not 0 < efficiency.max() <= ONE_PER_CENT:
        return
    cell = table.cells["efficiency"][int(efficiency.argmax())]
    message = "the highest efficiency is 1 % or less; fractions stand under efficiency without a unit"
    yield Problem(table.file, cell.line, cell.column, "efficiency", f"found {echo(cell.text)}; {message}")


def _of_head(table: Table) -> Iterator[Fault]:
    numbers = table.numbers
    curve = WaterCurve(numbers["flow"], numbers["head"], numbers.get("efficiency"), numbers.get("npsh_required"))
    yield from faults(curve)


def _of_pressure(table: Table) -> Iterator[Fault]:
    """Faults of a curve whose flow falls, by the slip, as the pressure rises."""
    numbers = table.numbers
    if table.lines.size < FEWEST_POINTS:
        said = f"the curve has {table.lines.size} points; at least {FEWEST_POINTS} are needed"
        yield Fault(None, "pressure", said)
    for name, values in numbers.items():
        yield from negatives(name, values)
    yield from not_rising("pressure", numbers["pressure"])
    yield from _gaining(numbers["flow"])
    yield from above_one(numbers.get("efficiency"))


def _gaining(flow: Array) -> Iterator[Fault]:
    for row in 1 + np.flatnonzero(np.diff(flow) > 0):
        yield Fault(int(row), "flow", "the flow grows with the pressure; slip makes it fall")


def _said_once(table: Table, found: Iterator[Fault]) -> Iterator[Fault]:
    """Leave out all but the first of per cents that stand under no unit, which is one mistake."""
    is_said = False
    for fault in found:
        is_per_cent = _is_above_one(table, fault) and not table.units["efficiency"]
        if not (is_per_cent and is_said):
            yield fault
        is_said |= is_per_cent


def _is_above_one(table: Table, fault: Fault) -> bool:
    return fault.column == "efficiency" and fault.row is not None and table.numbers["efficiency"][fault.row] > 1


def _problem(table: Table, fault: Fault) -> Problem:
    if fault.row is None:
        return Problem(table.file, table.header_line, 1, fault.column, fault.message)
    cell = table.cells[fault.column][fault.row]
    message = fault.message
    if _is_above_one(table, fault):
        most = "100 or less" if table.units["efficiency"] else "1 or less; per cents stand under efficiency [%]"
        message = f"must be {most}"
    return Problem(table.file, cell.line, cell.column, fault.column, f"found {echo(cell.text)}; {message}")
