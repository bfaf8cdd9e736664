"""The ``uncertainty`` of a case: how uncertain its inputs are, by key path, each as a short text.

Read apart from the schema, since a tolerance in per cent is one of the value that the case gives.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from typing import Final, NoReturn

from pipeflow import units
from pipeflow.case.model import Case, Uncertain
from pipeflow.case.nodes import Finding, Mapping, Node, Scalar, join, kind
from pipeflow.case.variables import Bounds, Variable, VariableError, variables
from pipeflow.case.variables import variable as look_up

MAX_UNCERTAIN: Final = 50
HOME: Final = "uncertainty"
FORMS: Final = "'± 10 %' or '± 0.5 Pa', 'uniform 8 .. 14 Pa', 'normal 5 %' (a standard deviation)"
_FRACTIONS: Final = ("fluid.solids.mass_fraction", "fluid.solids.volume_fraction")

_WRITTEN = re.compile(r"(±|\+/?-|normal(?![a-z])|uniform(?![a-z])) *(.*)")
_SHARE = re.compile(rf"({units.NUMBER}) *%")


class _TextError(Exception):
    """A text that is no distribution of the input; the message says why."""


def read_uncertainty(tree: Node, case: Case | None) -> tuple[tuple[Uncertain, ...], list[Finding]]:
    """Read the uncertainty of a case.

    Parameters
    ----------
    tree : Node
        The whole case file.
    case : Case or None
        What it says; None where it cannot be used, and the form of the texts is all that is looked at.

    Returns
    -------
    tuple
        The uncertain inputs in file order, and what is wrong.
    """
    node = tree.values.get(HOME) if isinstance(tree, Mapping) else None
    if node is None or node.faulty:
        return (), []
    if not isinstance(node, Mapping):
        found = "no value" if isinstance(node, Scalar) and node.is_null else f"found a {kind(node)}"
        message = f"{found}; a map of tolerances by key path is needed, as {{fluid.density: ± 2 %}}"
        return (), [Finding(node.line, node.column, HOME, message)]
    if len(node.values) > MAX_UNCERTAIN:
        message = f"{len(node.values)} uncertain inputs; at most {MAX_UNCERTAIN} are accepted"
        return (), [Finding(node.line, node.column, HOME, message)]
    return _read_all(node, case)


def _read_all(node: Mapping, case: Case | None) -> tuple[tuple[Uncertain, ...], list[Finding]]:
    found: list[Uncertain] = []
    wrong = list(_both_fractions(node))
    known = variables(case) if case is not None else {}
    for path, value in node.values.items():
        if value.faulty:
            continue
        place: Node = value
        try:
            written = _text_of(value)
            if case is None:
                _form(written)
                continue
            place = node.keys[path]
            variable = known.get(path) or look_up(case, path)
            place = value
            found.append(distribution(variable, written))
        except (_TextError, VariableError) as error:
            wrong.append(Finding(place.line, place.column, join(HOME, path), str(error)))
    return tuple(found), wrong


def _both_fractions(node: Mapping) -> Iterator[Finding]:
    if all(path in node.keys for path in _FRACTIONS):
        later = max((node.keys[path] for path in _FRACTIONS), key=lambda key: (key.line, key.column))
        message = "mass and volume fraction of the solids are one quantity; give one of them"
        yield Finding(later.line, later.column, join(HOME, later.text), message)


def _text_of(node: Node) -> str:
    if not isinstance(node, Scalar):
        raise _TextError(f"found a {kind(node)}; the whole key path is one key, and its value {FORMS}")
    if node.is_null:
        raise _TextError(f"no value; {FORMS} is needed")
    return node.text.strip()


def _form(text: str) -> tuple[str, str]:
    """Tell what kind of distribution a text is, and what is said of its size."""
    match = _WRITTEN.fullmatch(text)
    if match is None:
        meant = f"; did you mean '± {text}'" if re.match(rf"{units.NUMBER} *[^. ]*$", text) else ""
        raise _TextError(f"found {units.echo(text)}{meant}{'?' if meant else ';'} accepted: {FORMS}")
    sign, size = match.groups()
    return sign if sign in ("normal", "uniform") else "±", size.strip()


def distribution(variable: Variable, text: str) -> Uncertain:
    """Read the distribution of one input.

    A bare tolerance is a rectangular distribution (JCGM 100:2008, 4.3.7), the figure of a normal one its standard
    deviation; per cent are of the value of the case.
    """
    form, size = _form(text)
    if form == "uniform":
        low, high = _range(variable, size, text)
        middle, spread = (low + high) / 2.0, (high - low) / 2.0
    else:
        middle, spread = variable.value, _size(variable, size, text)
    shape = "normal" if form == "normal" else "rectangular"
    bounds = variable.bounds
    if shape == "rectangular" and not _reaches(bounds, middle - spread, middle + spread):
        raise _TextError(f"found {units.echo(text)}; no value of it is possible: {bounds.refusal(middle)}")
    return Uncertain(variable.path, shape, middle, spread, bounds.lower, bounds.upper, text)


def _reaches(bounds: Bounds, low: float, high: float) -> bool:
    return high > bounds.lower and low < bounds.upper


def _size(variable: Variable, size: str, text: str) -> float:
    """Half the width of a tolerance, or the standard deviation, SI."""
    if math.isnan(variable.value):
        raise _TextError(
            f"found {units.echo(text)}; the case gives no value to vary about: give it, or a 'uniform' range"
        )
    share = _SHARE.fullmatch(size)
    found = float(share[1]) / 100.0 if share else _absolute(variable, size, text)
    if not found > 0:
        raise _TextError(f"found {units.echo(text)}; a tolerance must be above 0")
    if share:
        found *= abs(_scalable(variable, text))
    if not math.isfinite(found):
        raise _TextError(f"found {units.echo(text)}; the number is too large")
    return found


def _scalable(variable: Variable, text: str) -> float:
    if variable.dimension == "temperature":
        raise _TextError(f"found {units.echo(text)}; per cent of a temperature say nothing: give it in K")
    if variable.value == 0:
        raise _TextError(
            f"found {units.echo(text)}; the case has 0 here, per cent of which are nothing: give it outright"
        )
    return variable.value


def _absolute(variable: Variable, size: str, text: str) -> float:
    dimension = "temperature difference" if variable.dimension == "temperature" else variable.dimension
    try:
        return units.parse(size, dimension) if dimension else units.parse_number(size)
    except units.UnitError as error:
        _refuse(error, size, text)


def _range(variable: Variable, size: str, text: str) -> tuple[float, float]:
    try:
        low, high = units.parse_range(size, variable.dimension) if variable.dimension else _numbers(size)
    except units.UnitError as error:
        _refuse(error, size, text)
    if not low <= variable.value <= high and not math.isnan(variable.value):
        raise _TextError(
            f"found {units.echo(text)}; the value of the case, {variable.shown(variable.value)}, is outside"
        )
    return low, high


def _numbers(size: str) -> tuple[float, float]:
    ends = units.split_range(size, "0.5 .. 0.6")
    low, high = (units.parse_number(f"{number} {unit}".strip()) for number, unit in ends)
    if not low < high:
        raise units.UnitError(f"found {units.echo(size)}; the lower end comes first and differs from the upper")
    return low, high


def _refuse(error: units.UnitError, size: str, text: str) -> NoReturn:
    """Raise the message about the size as one about the whole text."""
    message = str(error).replace(units.echo(size), units.echo(text), 1)
    raise _TextError(message) from None
