"""Over which values of one input a check fails or calls for thought: between two points the change is a root."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.case.axes import Axis
from pipeflow.case.model import Case
from pipeflow.rootfind import find_between
from pipeflow.study.ranges.boundaries import JUMP, excess_of
from pipeflow.study.ranges.points import points
from pipeflow.verdict import Check

Bad = Literal["fail", "caution"]


@dataclass(frozen=True)
class Run:
    """Values of an input over which a check has one status.

    Attributes
    ----------
    check : Check
        As it is at the first point of the sweep within.
    low, high : float
        Ends, SI: those of the range, or where the status changes.
    """

    check: Check
    low: float
    high: float


class _Change(NamedTuple):
    name: str
    status: Bad
    after: int
    """The status changes between this point and the next."""


def runs_over(case: Case, axis: Axis, checked: Sequence[Sequence[Check]]) -> tuple[Run, ...]:
    """Give the runs of every check, those that fail first; what changes twice between two points is not seen.

    Parameters
    ----------
    case : Case
    axis : Axis
    checked : sequence of sequence of Check
        The checks at every value of the axis.
    """
    by_name = [{check.name: check for check in found} for found in checked]
    names = dict.fromkeys(name for one in by_name for name in one)
    asked: list[tuple[str, Bad]] = [(name, status) for status in ("fail", "caution") for name in names]
    chosen = {key: np.array([_is(one.get(key[0]), key[1]) for one in by_name]) for key in asked}
    changes = [_Change(*key, int(at)) for key, has in chosen.items() for at in np.flatnonzero(has[1:] != has[:-1])]
    ends = dict(zip(changes, _ends(case, axis, by_name, changes).tolist(), strict=True))
    return tuple(run for key in asked for run in _runs(axis, by_name, key, chosen[key], ends))


def _is(check: Check | None, status: Bad) -> bool:
    return check is not None and check.status == status


def _runs(
    axis: Axis,
    by_name: Sequence[dict[str, Check]],
    key: tuple[str, Bad],
    chosen: NDArray[np.bool_],
    ends: dict[_Change, float],
) -> Iterator[Run]:
    padded = np.concatenate([[False], chosen, [False]]).astype(int)
    firsts, lasts = np.flatnonzero(np.diff(padded) > 0), np.flatnonzero(np.diff(padded) < 0) - 1
    for first, last in zip(firsts.tolist(), lasts.tolist(), strict=True):
        low = ends.get(_Change(*key, first - 1), axis.values[first])
        yield Run(by_name[first][key[0]], low, ends.get(_Change(*key, last), axis.values[last]))


def _ends(case: Case, axis: Axis, by_name: Sequence[dict[str, Check]], changes: Sequence[_Change]) -> Array:
    """Where each change is, SI."""
    first = np.array([change.after for change in changes], dtype=int)
    start, step = axis.array[first], np.diff(axis.array)[first]
    here, there = (
        np.array([_beyond(by_name[change.after + further], change) for change in changes]) for further in (0, 1)
    )

    def residual(share: Array, rows: NDArray[np.intp]) -> Array:
        solved = points(case, {axis.variable.path: start[rows] + share * step[rows]})
        found = ({check.name: check for check in solved.checks(at)} for at in range(rows.size))
        return np.array([_beyond(one, changes[int(row)]) for one, row in zip(found, rows, strict=True)])

    share = find_between(residual, np.zeros(first.size), np.ones(first.size), here, there)
    known = np.where(np.isfinite(share), share, np.where(here > 0, 0.0, 1.0))
    return np.asarray(start + known * step)


def _beyond(found: dict[str, Check], change: _Change) -> float:
    """Above 0 where the check has the status: by how much for one that fails."""
    check = found.get(change.name)
    if check is not None and change.status == "fail":
        return excess_of(check)["central"]
    return JUMP if _is(check, change.status) else -JUMP
