"""Where limits are met over two inputs of a case: each point of a boundary is a root of the line solved there."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Final, Literal, Protocol

import numpy as np
from numpy.typing import NDArray

from pipeflow.arrays import Array
from pipeflow.rootfind import find_between
from pipeflow.study.ranges.contours import Edge, chains, crossed_edges
from pipeflow.verdict import Check

Figure = Literal["central", "upper"]
Key = tuple[str, Figure]
"""Name of what is asked, and the figure it is judged on: the limit on the upper one, the window's end on either."""

FIGURES: Final[tuple[Figure, ...]] = ("central", "upper")
Side = Literal["", "above", "below"]
LEVEL: Final = 1e-6
"""Share within which the y of a level line are alike."""
JUMP: Final = 1.0
"""Stands for how far beyond a limit a point is where its figure does not say."""


class Field(Protocol):
    """What is asked of a line over a plane."""

    def excess(self, x: Array, y: Array) -> dict[Key, Array]:
        """How far every figure is beyond its limit at points, over the limit; above 0 where it is beyond."""


@dataclass(frozen=True)
class Boundary:
    """Where one figure meets its limit.

    Attributes
    ----------
    name : str
        Of the check, or of what else is asked.
    figure : str
        ``upper`` where the limit is met by the upper figure, past which only the central one keeps it; ``central``
        where the limit fails.
    lines : tuple of lines
        Points (x, y), SI, joined in order; nan where a root was not found.
    side : str
        Where the figure is beyond its limit, if every x is alike: ``above`` or ``below`` the line in y; else empty.
    """

    name: str
    figure: Figure
    lines: tuple[tuple[tuple[float, float], ...], ...]
    side: Side = ""

    @property
    def level(self) -> float | None:
        """The y of a line that is level; None for another."""
        every = [y for line in self.lines for _, y in line]
        return every[0] if self.side and np.ptp(every) <= LEVEL * abs(every[0]) else None


@dataclass(frozen=True)
class Crossings:
    """The plane on its grid, and the roots between its points.

    Attributes
    ----------
    x, y : Array
        Values along the columns and the rows.
    excess : dict of Key to Array
        Of shape (rows, columns).
    roots : dict of Key to dict of Edge to float
        Share of the edge at which the figure meets its limit.
    """

    x: Array
    y: Array
    excess: dict[Key, Array]
    roots: dict[Key, dict[Edge, float]]

    def place(self, key: Key, edge: Edge) -> tuple[float, float]:
        """Where a root is, SI."""
        axis, j, i = edge
        share = self.roots[key][edge]
        x, y = float(self.x[i]), float(self.y[j])
        if axis == 1:
            return x + share * (float(self.x[i + 1]) - x), y
        return x, y + share * (float(self.y[j + 1]) - y)

    def joined(self, other: Crossings) -> Crossings:
        """The crossings of two fields over one grid."""
        return replace(self, excess=self.excess | other.excess, roots=self.roots | other.roots)

    def boundaries(self) -> tuple[Boundary, ...]:
        """Every boundary; an upper one that is the central one over again is left out."""
        drawn = (key for key in self.excess if not _is_alike(self.excess, key))
        found = (Boundary(*key, self._lines(key), self._side(key)) for key in drawn)
        return tuple(one for one in found if one.lines)

    def _side(self, key: Key) -> Side:
        beyond = self.excess[key] > 0
        rows = beyond[:, 0]
        if np.any(beyond != rows[:, None]) or np.count_nonzero(rows[1:] != rows[:-1]) != 1:
            return ""
        return "above" if rows[-1] else "below"

    def _lines(self, key: Key) -> tuple[tuple[tuple[float, float], ...], ...]:
        every = chains(self.excess[key] > 0)
        lines = (tuple(self.place(key, edge) for edge in chain if edge in self.roots[key]) for chain in every)
        return tuple(line for line in lines if line)


def crossings(field: Field, x: Array, y: Array, *, along_rows: bool = False) -> Crossings:
    """Ask a field on a grid, and find every place between two of its points where a limit is met.

    Parameters
    ----------
    field : Field
    x, y : Array
        Rising; what changes twice between two neighbours is not seen.
    along_rows : bool
        Look between rows for what no row crosses only: for a field that is dear to ask at another y.
    """
    columns, rows = np.meshgrid(x, y)
    excess = {key: found.reshape(rows.shape) for key, found in field.excess(columns.ravel(), rows.ravel()).items()}
    asked = [
        (key, edge)
        for key, found in excess.items()
        if not _is_alike(excess, key)
        for edge in _edges(found > 0, along_rows)
    ]
    shares = _roots(field, x, y, excess, asked)
    roots: dict[Key, dict[Edge, float]] = {key: {} for key in excess}
    for (key, edge), share in zip(asked, shares, strict=True):
        roots[key][edge] = float(share)
    roots |= {key: roots[key[0], "central"] for key in excess if _is_alike(excess, key)}
    return Crossings(x, y, excess, roots)


def _is_alike(excess: Mapping[Key, Array], key: Key) -> bool:
    """Whether an upper figure is the central one all over."""
    name, figure = key
    return figure == "upper" and (name, "central") in excess and np.array_equal(excess[key], excess[name, "central"])


def _edges(beyond: NDArray[np.bool_], along_rows: bool) -> list[Edge]:
    every = crossed_edges(beyond)
    along = [edge for edge in every if edge[0] == 1]
    return along if along_rows and along else every


def _roots(field: Field, x: Array, y: Array, excess: Mapping[Key, Array], asked: Sequence[tuple[Key, Edge]]) -> Array:
    """Share of each edge at which its figure meets its limit."""
    if not asked:
        return np.empty(0)
    first = np.array([(j, i) for _, (_, j, i) in asked])
    last = np.array([(j + (axis == 0), i + (axis == 1)) for _, (axis, j, i) in asked])
    here, there = (
        np.array([excess[key][j, i] for (key, _), (j, i) in zip(asked, ends, strict=True)]) for ends in (first, last)
    )
    places = x[first[:, 1]], x[last[:, 1]], y[first[:, 0]], y[last[:, 0]]

    def residual(share: Array, row: NDArray[np.intp]) -> Array:
        x0, x1, y0, y1 = (one[row] for one in places)
        found = field.excess(x0 + share * (x1 - x0), y0 + share * (y1 - y0))
        return np.array([found[asked[int(one)][0]][at] for at, one in enumerate(row)])

    return find_between(residual, np.zeros(here.shape), np.ones(here.shape), here, there)


def excess_of(check: Check) -> dict[Figure, float]:
    """How far a check is beyond its limit by its central and its upper figure, over the limit; above 0 fails.

    Where the status does not follow from value and limit the excess is :data:`JUMP`, so that its sign is the status.
    """
    upper = check.value if check.value_upper is None else check.value_upper
    is_over = check.status == "fail" or (check.status == "caution" and _over(check, upper) > 0 and upper != check.value)
    return {
        "central": _with_sign(_over(check, check.value), check.status == "fail"),
        "upper": _with_sign(_over(check, upper), is_over),
    }


def _over(check: Check, value: float | None) -> float:
    if value is None or check.limit is None:
        return np.nan
    over = (value - check.limit) / (abs(check.limit) or 1.0)
    return -over if check.sense == "at least" else over


def _with_sign(over: float, is_beyond: bool) -> float:
    return over if (over > 0) == is_beyond and np.isfinite(over) else JUMP if is_beyond else -JUMP
