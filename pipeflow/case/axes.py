"""A range of one input as a command line gives it: ``fluid.solids.mass_fraction=0.45..0.58``, ``flow=80..160 m3/h``."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.case.variables import Variable, VariableError, variable
from pipeflow.errors import InputError, Problem
from pipeflow.units import UnitError, accepted, echo, split_range

FORM = "PATH=FROM..TO"


@dataclass(frozen=True)
class Axis:
    """An input and the values it takes, SI, rising."""

    variable: Variable
    values: tuple[float, ...]

    @property
    def array(self) -> Array:
        """The values."""
        return np.array(self.values)


def axis(case: Case, text: str, points: int, command: str, own: Variable | None = None) -> Axis:
    """Read a range of an input, its points evenly spaced.

    Parameters
    ----------
    case : Case
    text : str
        ``PATH=FROM..TO``; the unit may stand once, at the end.
    points : int
    command : str
        What an error is said to be of.
    own : Variable, optional
        An input of the command's own, before those of the case.

    Raises
    ------
    InputError
        The text is none, the path cannot be varied, or a value is not possible.
    """
    path, sign, ends = (part.strip() for part in text.rpartition("="))
    if not sign:
        message = f"found {echo(text)}; an input and its range are needed, {FORM}, as 'flow=80..160 m3/h'"
        raise InputError([Problem(command, None, None, "", message)])
    known: Variable | None = None
    try:
        known = own if own is not None and path == own.path else variable(case, path)
        low, high = _ends(known, ends)
    except VariableError as error:
        raise InputError([Problem(command, None, None, known.path if known else "", str(error))]) from None
    return Axis(known, tuple(np.linspace(low, high, points).tolist()))


def flow_and_other(case: Case, ranges: Sequence[str], command: str) -> tuple[Axis | None, Axis | None]:
    """Read the ends of a volume flow of the slurry, and of one other input; None where one is not given.

    Raises
    ------
    InputError
        As :func:`axis`; or there are two of the flow, or two of the others.
    """
    flow = Variable("flow", "volume flow", case.flow.design)
    axes = [axis(case, text, 2, command, flow) for text in ranges]
    flows = [one for one in axes if one.variable is flow]
    others = [one for one in axes if one.variable is not flow]
    if any(one.variable.path.startswith("flow.") for one in others):
        message = "the flow here is the volume flow of the slurry, minimum and maximum alike: 'flow=80..160 m3/h'"
        raise InputError([Problem(command, None, None, "", message)])
    if len(flows) > 1 or len(others) > 1:
        found = " and ".join(one.variable.path for one in axes)
        raise InputError([Problem(command, None, None, "", f"found {found}; one is the flow, one another input")])
    return (flows or [None])[0], (others or [None])[0]  # type: ignore[list-item]


def refuse_one_quantity_twice(axes: Sequence[Axis], command: str) -> None:
    """Refuse two ranges of one input.

    Raises
    ------
    InputError
        An input has two ranges, or both fractions of the solids have one.
    """
    paths = [one.variable.path for one in axes]
    fractions = [path for path in paths if path.startswith("fluid.solids.") and path.endswith("_fraction")]
    if len(set(paths)) < len(paths) or len(fractions) > 1:
        message = f"found {' and '.join(paths)}; they are one quantity: vary it once"
        raise InputError([Problem(command, None, None, "", message)])


def _ends(known: Variable, text: str) -> tuple[float, float]:
    example = f"5 .. 20 {accepted(known.dimension).partition(',')[0]}" if known.dimension else "0.45 .. 0.58"
    try:
        ends = split_range(text, example)
    except UnitError as error:
        raise VariableError(str(error)) from None
    low, high = (known.read(f"{number} {unit}".strip()) for number, unit in ends)
    if not low < high:
        raise VariableError(f"found {echo(text)}; the lower end comes first and differs from the upper")
    return low, high
