"""What the boundaries of a map leave between them: by row in intervals, and in the plane as areas."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from pipeflow.study.ranges.boundaries import Crossings, Figure, Key
from pipeflow.study.ranges.contours import Edge, rings
from pipeflow.study.ranges.limits_over import REGIMES
from pipeflow.study.ranges.pumps_over import is_candidate

Ring = tuple[tuple[float, float], ...]
"""Points (flow, value) around an area, the area to the left; a hole runs the other way round."""


@dataclass(frozen=True)
class Interval:
    """Flows, m³/s, between which every limit is kept; what ends them, empty where the map does."""

    low: float
    high: float
    low_by: str
    high_by: str


@dataclass(frozen=True)
class Window:
    """Where every limit is kept by one figure."""

    found: Crossings
    figure: Figure

    @cached_property
    def keys(self) -> tuple[Key, ...]:
        """What the window rests on: every limit, and that some pump serves."""
        return tuple(
            key
            for key in self.found.excess
            if key[1] == self.figure and key[0] not in REGIMES and not is_candidate(key[0])
        )

    @cached_property
    def beyond(self) -> NDArray[np.bool_]:
        """Whether a point of the grid is outside, of shape (rows, columns)."""
        every = [self.found.excess[key] > 0 for key in self.keys]
        return np.any([*every, np.zeros((self.found.y.size, self.found.x.size), dtype=bool)], axis=0)  # type: ignore[no-any-return]

    def intervals(self, row: int) -> Iterator[Interval]:
        """Flows of a row that are inside; each end is the root of the limit that comes last, or first."""
        beyond, flow = self.beyond[row], self.found.x
        low: tuple[float, str] | None = None if beyond[0] else (float(flow[0]), "")
        for i in np.flatnonzero(beyond[1:] != beyond[:-1]):
            share, name = self._end((1, row, int(i)))
            at = float(flow[i] + share * (flow[i + 1] - flow[i]))
            if low is not None:
                yield Interval(low[0], at, low[1], name)
            low = (at, name) if low is None else None
        if low is not None:
            yield Interval(low[0], float(flow[-1]), low[1], "")

    def closed_by(self, row: int) -> tuple[str, ...]:
        """What leaves no flow of a row: limits that fail all along it, or else the few that do so together.

        Empty where there is some flow.
        """
        if not self.beyond[row].all():
            return ()
        over = {name: self.found.excess[name, figure][row] > 0 for name, figure in self.keys}
        alone = tuple(name for name, is_over in over.items() if is_over.all())
        return alone or tuple(_covering(over))

    def areas(self) -> tuple[Ring, ...]:
        """The lines around what is inside."""
        return tuple(tuple(self._place(edge) for edge in ring) for ring in rings(~self.beyond))

    def _end(self, edge: Edge) -> tuple[float, str]:
        """Share of an edge at which the window ends, and the limit that ends it."""
        axis, j, i = edge
        last = (j + (axis == 0), i + (axis == 1))
        is_leaving = bool(self.beyond[j, i])
        ends = []
        for key in self.keys:
            here, there = (float(self.found.excess[key][at]) for at in ((j, i), last))
            if (here > 0) == is_leaving and (there > 0) != is_leaving:
                # a field that is looked at along its rows has no root between them
                ends.append((self.found.roots[key].get(edge, here / (here - there)), key[0]))
        return max(ends) if is_leaving else min(ends)

    def _place(self, edge: Edge) -> tuple[float, float]:
        """Where a line crosses an edge; beyond the map it keeps to the rim."""
        axis, j, i = edge
        x, y = self.found.x, self.found.y
        last = (j + (axis == 0), i + (axis == 1))
        if min(j, i) < 0 or last[0] >= y.size or last[1] >= x.size:
            return float(x[np.clip(max(i, 0), 0, x.size - 1)]), float(y[np.clip(max(j, 0), 0, y.size - 1)])
        share = self._end(edge)[0]
        return float(x[i] + share * (x[last[1]] - x[i])), float(y[j] + share * (y[last[0]] - y[j]))


def _covering(over: Mapping[str, NDArray[np.bool_]]) -> Iterator[str]:
    """Names that between them hold everywhere, the one that holds at most places first."""
    left = np.ones_like(next(iter(over.values())))
    while left.any():
        name = max(over, key=lambda name: np.count_nonzero(over[name] & left))
        yield name
        left = left & ~over[name]
