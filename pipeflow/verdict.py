"""What a study says about a line beside its numbers: checks against limits."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Status = Literal["ok", "caution", "fail", "not checked"]
Sense = Literal["at most", "at least"]


@dataclass(frozen=True)
class Check:
    """One limit held against one computed value.

    ``value`` and ``limit`` are in ``unit`` (None where the check could not be made); ``basis`` says in words what was
    compared, at which flow, and on whose authority. ``value_upper`` is the figure a limit is judged on where it
    differs. ``sense`` tells which side of the limit is allowed, ``source`` the key of the published method behind the
    figure, and ``needs`` the case keys without which the check could not be made.
    """

    name: str
    status: Status
    value: float | None
    limit: float | None
    unit: str
    basis: str
    value_upper: float | None = None
    sense: Sense = "at most"
    source: str = ""
    needs: tuple[str, ...] = ()
