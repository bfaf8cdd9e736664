"""The tolerance as a user writes it: a percentage with its sign."""

from __future__ import annotations

import re

from pipeflow.errors import InputError, Problem
from pipeflow.units import echo

_PERCENTAGE = re.compile(r"\+?(\d+(?:\.\d*)?|\.\d+)\s*%")


def tolerance_of(text: str) -> float:
    """Read a percentage as a fraction; a bare number could be either, and is refused.

    Raises
    ------
    InputError
        It is no percentage from 0 to 100.

    Examples
    --------
    >>> tolerance_of("0.1%"), tolerance_of("2 %")
    (0.001, 0.02)
    """
    match = _PERCENTAGE.fullmatch(text.strip())
    value = float(match.group(1)) if match else None
    if value is None or value > 100:
        message = f"found {echo(text)}; accepted: a percentage from 0 to 100, as 0.1%"
        raise InputError([Problem("--tolerance", None, None, "", message)])
    return value / 100
