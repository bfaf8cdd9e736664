"""Lines on a grid between what holds and what does not."""

from __future__ import annotations

import numpy as np
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from pipeflow.study.boundaries import crossings
from pipeflow.study.contours import chains, crossed_edges


def test_a_step_is_one_line():
    beyond = np.array([[False, True, True], [False, True, True], [False, False, True]])
    assert list(chains(beyond)) == [[(1, 0, 0), (1, 1, 0), (0, 1, 1), (1, 2, 1)]]


def test_an_island_is_a_closed_line():
    beyond = np.zeros((3, 3), dtype=bool)
    beyond[1, 1] = True
    (line,) = chains(beyond)
    assert line[0] == line[-1]
    assert len(line) == 5


@given(arrays(bool, st.tuples(st.integers(2, 6), st.integers(2, 6))))
def test_every_crossed_edge_is_on_one_line_once(beyond):
    lines = list(chains(beyond))
    on_lines = [edge for line in lines for edge in (line[:-1] if line[0] == line[-1] and len(line) > 1 else line)]
    assert sorted(on_lines) == sorted(crossed_edges(beyond))


class Circle:
    """Beyond outside a circle of radius 1, and a jump at x = 0.3."""

    def excess(self, x, y):
        return {("circle", "central"): x**2 + y**2 - 1.0, ("jump", "central"): np.where(x > 0.3, 1.0, -1.0)}


def test_the_points_of_a_boundary_are_roots_though_it_is_crossed_twice_along_a_row():
    grid = np.linspace(-1.5, 1.5, 12)
    circle, jump = crossings(Circle(), grid, grid).boundaries()
    (line,) = circle.lines
    assert line[0] == line[-1]
    assert np.abs(np.hypot(*np.array(line).T) - 1.0).max() < 1e-9
    assert np.abs(np.array(jump.lines[0])[:, 0] - 0.3).max() < 1e-7


def test_between_rows_is_looked_only_where_no_row_crosses():
    grid = np.linspace(-1.5, 1.5, 12)
    found = crossings(Circle(), grid, grid, along_rows=True)
    assert {axis for axis, _, _ in found.roots["circle", "central"]} == {1}

    class Flat:
        def excess(self, x, y):
            return {("flat", "central"): y - 0.2}

    (flat,) = crossings(Flat(), grid, grid, along_rows=True).boundaries()
    assert np.abs(np.array(flat.lines[0])[:, 1] - 0.2).max() < 1e-9
