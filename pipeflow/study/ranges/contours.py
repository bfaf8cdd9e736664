"""Lines on a grid between points where something holds and points where it does not."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

Edge = tuple[int, int, int]
"""Axis along which it runs (0 down the rows, 1 along a row), and the row and column of its first point."""


def crossed_edges(beyond: NDArray[np.bool_]) -> list[Edge]:
    """Edges of the grid whose two points differ: along the rows first."""
    along = np.argwhere(beyond[:, 1:] != beyond[:, :-1])
    down = np.argwhere(beyond[1:, :] != beyond[:-1, :])
    return [(1, int(j), int(i)) for j, i in along] + [(0, int(j), int(i)) for j, i in down]


def chains(beyond: NDArray[np.bool_]) -> Iterator[list[Edge]]:
    """Join the crossed edges to lines, cell by cell; a closed line ends with the edge it began with."""
    links: dict[Edge, list[Edge]] = {edge: [] for edge in crossed_edges(beyond)}
    rows, columns = beyond.shape
    for j in range(rows - 1):
        for i in range(columns - 1):
            for one, other in _pairs(beyond, j, i):
                links[one].append(other)
                links[other].append(one)
    left = dict(links)
    ends = [edge for edge, others in links.items() if len(others) < 2]
    for start in [*ends, *links]:
        if start in left:
            yield _walked(start, links, left)


def _pairs(beyond: NDArray[np.bool_], j: int, i: int) -> list[tuple[Edge, Edge]]:
    """Pairs of crossed edges of a cell that a line joins; of four, the points beyond are kept apart."""
    bottom, right, top, left = (1, j, i), (0, j, i + 1), (1, j + 1, i), (0, j, i)
    corners = beyond[j, i], beyond[j, i + 1], beyond[j + 1, i + 1], beyond[j + 1, i]
    around = (bottom, right, top, left)
    crossed = [edge for k, edge in enumerate(around) if corners[k] != corners[(k + 1) % 4]]
    if len(crossed) == 4:
        return [(left, bottom), (right, top)] if corners[0] else [(bottom, right), (top, left)]
    return [(crossed[0], crossed[1])] if crossed else []


def _walked(start: Edge, links: dict[Edge, list[Edge]], left: dict[Edge, list[Edge]]) -> list[Edge]:
    line, here = [start], start
    del left[start]
    while True:
        onward = [edge for edge in links[here] if edge in left]
        if not onward:
            break
        here = onward[0]
        line.append(here)
        del left[here]
    return [*line, start] if len(line) > 2 and start in links[here] else line


def rings(inside: NDArray[np.bool_]) -> Iterator[list[Edge]]:
    """Closed lines around what is inside, that to their left; along the rim they cross edges that leave the grid.

    The first point of such an edge may have the row or column -1.
    """
    padded = np.pad(inside, 1)
    for chain in chains(padded):
        ring = [(axis, j - 1, i - 1) for axis, j, i in chain]
        yield ring if _is_left(padded, chain) else ring[::-1]


def _is_left(padded: NDArray[np.bool_], chain: list[Edge]) -> bool:
    """Whether what is inside lies to the left of the first step of a chain."""
    (axis, j, i), after = chain[0], chain[1]
    first = np.array(_middle(chain[0]))
    step = np.array(_middle(after)) - first
    lies = (i, j) if padded[j, i] else (i + (axis == 1), j + (axis == 0))
    across = np.array(lies) - first
    return bool(step[0] * across[1] - step[1] * across[0] > 0)


def _middle(edge: Edge) -> tuple[float, float]:
    """Middle of an edge: column, row."""
    axis, j, i = edge
    return i + 0.5 * (axis == 1), j + 0.5 * (axis == 0)
