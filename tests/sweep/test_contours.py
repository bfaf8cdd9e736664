"""Lines on a grid between what holds and what does not."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from pipeflow.rootfind import find_between
from pipeflow.study.ranges.boundaries import crossings
from pipeflow.study.ranges.contours import chains, crossed_edges, rings


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


JUMPS = {
    "straight": lambda x: x - 0.3,
    "steep": lambda x: np.expm1(40.0 * (x - 0.3)),
    "flat": lambda x: (x - 0.3) ** 9,
    "jump": lambda x: np.where(x > 0.3, 1.0, -1.0),
    "jump to nearly zero": lambda x: np.where(x > 0.3, 0.02 * (x - 0.3) + 1e-3, -1.0),
    "from nearly zero": lambda x: np.where(x > 0.3, 1.0, 0.02 * (x - 0.3) - 1e-3),
    "falling": lambda x: 0.3 - x,
}


@pytest.mark.parametrize("name", JUMPS)
def test_a_change_of_sign_is_found_in_few_steps(name):
    function, asked = JUMPS[name], []

    def residual(x, rows):
        asked.append(x.size)
        return function(x)

    ends = np.zeros(3), np.array([1.0, 0.6, 0.31])
    found = find_between(residual, *ends, function(ends[0]), function(ends[1]))
    # (x - 0.3)^9 is 0 to rounding over a stretch about its root
    assert found == pytest.approx(0.3, abs=1e-3 if name == "flat" else 2e-9)
    assert len(asked) <= 70


def test_ends_at_the_root_and_no_brackets_at_all():
    found = find_between(lambda x, rows: x, np.array([0.0]), np.array([1.0]), np.array([0.0]), np.array([1.0]))
    assert found == pytest.approx(0.0, abs=1e-8)
    assert find_between(lambda x, rows: x, np.empty(0), np.empty(0), np.empty(0), np.empty(0)).size == 0


def area(ring) -> float:
    """Signed area of a ring through the middles of its edges, above 0 the left way round."""
    x, y = np.array([(i + 0.5 * (axis == 1), j + 0.5 * (axis == 0)) for axis, j, i in ring]).T
    return 0.5 * float(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1)))


@given(arrays(bool, st.tuples(st.integers(1, 6), st.integers(1, 6))))
def test_rings_are_closed_and_run_left_around_what_is_inside(inside):
    padded = np.pad(inside, 1)
    found = list(rings(inside))
    assert all(ring[0] == ring[-1] for ring in found)
    # a cell with k points inside has an area of k/4 within the lines through the middles of its edges, less 1/8 of
    # each corner cut off or added
    cells = padded[:-1, :-1].astype(int) + padded[1:, :-1] + padded[:-1, 1:] + padded[1:, 1:]
    diagonal = (cells == 2) & (padded[:-1, :-1] == padded[1:, 1:])
    expected = np.select([diagonal, cells == 1, cells == 2, cells == 3, cells == 4], [0.25, 0.125, 0.5, 0.875, 1.0])
    assert sum(area(ring) for ring in found) == pytest.approx(float(expected.sum()))


def test_a_hole_runs_the_other_way_round():
    inside = np.ones((5, 5), dtype=bool)
    inside[2, 2] = False
    assert sorted(np.sign([area(ring) for ring in rings(inside)])) == [-1.0, 1.0]
