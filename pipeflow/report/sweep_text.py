"""Words and figures that the pages, tables and charts of sweeps and envelopes share."""

from __future__ import annotations

import re
from collections.abc import Container, Sequence

from pipeflow.case.model import Case
from pipeflow.report.text import WIDTH, columns_of, table
from pipeflow.study.ranges.boundaries import Boundary
from pipeflow.study.ranges.sweeping import Axis, Variable
from pipeflow.units import NUMBER, format_value, significant

NAMES = {
    "fluid.solids.mass_fraction": "solids, fraction by mass",
    "fluid.solids.volume_fraction": "solids, fraction by volume",
    "flow": "flow",
    "flow.dry_solids": "dry solids",
    "fluid.rheology.yield_stress": "yield stress",
}
"""What an input is called on a page; another by its key path."""
NARROW = 6
"""Places of a figure in a table that would otherwise be too wide."""
_FIGURE = re.compile(rf"({NUMBER})([Fc ]?)")
AT_MAXIMUM = "at maximum flow"
"""What checks of the losses of the whole line say they are of."""


def name_of(variable: Variable) -> str:
    """Name an input for a reader."""
    path = variable.path
    if path in NAMES:
        return NAMES[path]
    return path.removeprefix("fluid.rheology.").replace("_", " ") if path.startswith("fluid.rheology.") else path


def figure_and_unit(variable: Variable, value: float, digits: int = 4) -> tuple[str, str]:
    """A value in the unit an engineer reads it in, and that unit."""
    if not variable.dimension:
        return significant(value, digits), ""
    figure, _, unit = format_value(value, variable.unit, digits).partition(" ")
    return figure, unit


def unit_of(variable: Variable) -> str:
    """Unit an input is shown in."""
    return figure_and_unit(variable, variable.value)[1]


def labelled(variable: Variable) -> str:
    """``yield stress, Pa``: what stands on an axis."""
    unit = unit_of(variable)
    return f"{name_of(variable)}, {unit}" if unit else name_of(variable)


def told(axis: Axis) -> str:
    """``yield stress 5.000 to 20.00 Pa, 21 points``."""
    low, high = (figure_and_unit(axis.variable, value)[0] for value in (axis.values[0], axis.values[-1]))
    unit = unit_of(axis.variable)
    return f"{name_of(axis.variable)} {low} to {high}{f' {unit}' if unit else ''}, {len(axis.values)} points"


def energy_unit(case: Case) -> str:
    """Unit of the specific energy: of dry solids where the case has them."""
    return "kWh per t of dry solids and km" if case.solids else "kWh per t of slurry and km"


def boundary_name(boundary: Boundary) -> str:
    """Name a boundary for a reader: the figure is told where the two differ."""
    name = boundary.name.replace("_", " ")
    return f"{name}, upper figure" if boundary.figure == "upper" else name


def title_of(case: Case) -> str:
    """Title and revision."""
    return case.title + (f", revision {case.revision}" if case.revision else "")


def fitting(columns: Sequence[str], rows: Sequence[Sequence[str]], words: Container[int] = (0,)) -> list[str]:
    """Lines of a table that fits a page: figures in fewer digits, or with an exponent, where it would not."""
    lines = list(table(columns, rows, words))
    if fits(lines):
        return lines
    heads = ["\n".join(narrowed(part) for part in column.split("\n")) for column in columns]
    return list(table(heads, [[narrowed(cell) for cell in row] for row in rows], words))


def fits(lines: Sequence[str]) -> bool:
    """Whether lines are no wider than a page."""
    return all(columns_of(line) <= WIDTH for line in lines)


def narrowed(cell: str) -> str:
    """Write a figure in no more than :data:`NARROW` places, a mark after it kept; words stay.

    Examples
    --------
    >>> narrowed("1.064e+14F"), narrowed("6730000"), narrowed("12.34"), narrowed("limits")
    ('1.1e14F', '6.7e6', '12.34', 'limits')
    """
    match = _FIGURE.fullmatch(cell)
    if match is None or len(match[1]) <= NARROW:
        return cell
    for digits in (3, 2):
        shorter = significant(float(match[1]), digits)
        if len(shorter) <= NARROW:
            return shorter + match[2]
    figure, _, exponent = f"{float(match[1]):.1e}".partition("e")
    return f"{figure}e{int(exponent)}{match[2]}"
