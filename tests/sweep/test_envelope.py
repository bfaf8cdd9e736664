"""The duty envelope: its window and its boundaries against ``solve``, and against pumps set on the line."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from swept_lines import BINGHAM, FOLLOWING, LIMITED, NEWTONIAN, SETTLING, STATIC, line

from pipeflow.case.axes import Axis
from pipeflow.case.loading import load_case
from pipeflow.case.variables import variable
from pipeflow.errors import InputError
from pipeflow.report.envelope_page import envelope_page
from pipeflow.study.pumping.on_line import pumps_on_line
from pipeflow.study.ranges import envelope as study
from pipeflow.study.ranges.envelope import envelope
from pipeflow.study.solving import solve

CASES = Path(__file__).parents[2] / "cases"


@pytest.fixture(autouse=True)
def _small_grid(monkeypatch):
    monkeypatch.setattr(study, "COLUMNS", 17)
    monkeypatch.setattr(study, "ROWS", 5)


def walled() -> str:
    return f"{LIMITED}pipe_wall: {{pressure_rating: 330 kPa, shut_in_pressure: 100 kPa}}\n"


LINES = {
    "bingham": line(BINGHAM, more=LIMITED),
    "static": line(BINGHAM, more=LIMITED + STATIC),
    "following": line(FOLLOWING, more=LIMITED),
    "settling": line(SETTLING, "90 m3/h", "limits: {head_loss: 20 m, velocity: {minimum: 0.9 m/s}}\n"),
    "walled": line(BINGHAM, more=walled()),
    "by mass": line(BINGHAM, "{minimum: 100 t/h, design: 120 t/h, maximum: 140 t/h}", LIMITED),
}
_FOUND: dict[str, study.Envelope] = {}


def envelope_of(name: str) -> study.Envelope:
    """The envelope of a line, worked out once."""
    if name not in _FOUND:
        _FOUND[name] = envelope(LINES[name])
    return _FOUND[name]


@pytest.fixture
def found(request) -> study.Envelope:
    return envelope_of(request.param)


every_line = pytest.mark.parametrize("found", list(LINES), indirect=True)


def standing(case) -> str:
    """What ``solve`` says of a case: by its statuses alone."""
    checks = solve(case).checks
    if any(check.status == "fail" for check in checks):
        return "outside"
    alone = [c for c in checks if c.status == "caution" and c.value_upper is not None and c.limit is not None]
    return "central" if any(c.value_upper > c.limit for c in alone) else "inside"


def by_intervals(row, flow) -> str:
    if any(one.low < flow < one.high for one in row.upper):
        return "inside"
    return "central" if any(one.low < flow < one.high for one in row.central) else "outside"


@every_line
def test_the_window_agrees_with_solve_on_random_points(found):
    random = np.random.default_rng(7)
    ends = found.flow.values[0], found.flow.values[-1]
    seen = set()
    for row in found.rows:
        for flow in random.uniform(*ends, 8):
            expected = standing(found.case_at(float(flow), row.value))
            assert by_intervals(row, flow) == expected, (row.value, flow)
            seen.add(expected)
    assert {"inside", "outside"} <= seen


def within(rings, flow, value) -> bool:
    """Whether a point lies within closed lines, by how often a ray from it crosses them."""
    crossed = 0
    for ring in rings:
        for (x0, y0), (x1, y1) in zip(ring, (*ring[1:], ring[0]), strict=True):
            if (y0 > value) != (y1 > value) and flow < x0 + (value - y0) / (y1 - y0) * (x1 - x0):
                crossed += 1
    return crossed % 2 == 1


@every_line
def test_the_areas_drawn_agree_with_solve_on_random_points(found):
    """Between the rows too; near a boundary, which is drawn straight from row to row, nothing is asked."""
    random, asked = np.random.default_rng(3), 0
    for _ in range(16):
        flow = random.uniform(found.flow.values[0], found.flow.values[-1])
        value = random.uniform(found.up.values[0], found.up.values[-1])
        near = {standing(found.case_at(flow * share, value)) for share in (0.95, 1.0, 1.05)}
        if len(near) == 1:
            (expected,) = near
            assert within(found.areas["upper"], flow, value) is (expected == "inside")
            assert within(found.areas["central"], flow, value) is (expected != "outside")
            asked += 1
    assert asked > 5


@every_line
def test_the_grid_of_the_window_agrees_with_solve(found):
    random = np.random.default_rng(11)
    for _ in range(12):
        j, i = int(random.integers(len(found.up.values))), int(random.integers(len(found.flow.values)))
        assert found.window[j][i] == standing(found.case_at(found.flow.values[i], found.up.values[j]))


@every_line
def test_either_side_of_every_end_solve_changes_its_mind_by_the_check_named(found):
    for row in found.rows:
        for one in row.central:
            for flow, name, inward in ((one.low, one.low_by, 1.0), (one.high, one.high_by, -1.0)):
                if name:
                    inside, outside = (found.case_at(flow * (1.0 + inward * step), row.value) for step in (1e-5, -1e-5))
                    assert standing(inside) != "outside"
                    assert name in [check.name for check in solve(outside).checks if check.status == "fail"]


@every_line
def test_boundaries_of_limits_are_where_the_figure_is_the_limit(found):
    names = ("head_loss", "velocity_minimum", "velocity_maximum", "restart_pressure", "pipe_wall")
    tried = 0
    for boundary in found.boundaries:
        for flow, value in boundary.lines[0][::3] if boundary.name in names else ():
            check = next(c for c in solve(found.case_at(flow, value)).checks if c.name == boundary.name)
            figure = check.value if boundary.figure == "central" or check.value_upper is None else check.value_upper
            assert figure == pytest.approx(check.limit, rel=1e-5), boundary.name
            tried += 1
    assert tried >= 2


@every_line
def test_the_edges_of_the_transition_are_those_of_the_governing_pipe(found):
    for name, key in (("laminar until", "critical_velocity"), ("turbulent from", "turbulent_velocity")):
        for boundary in (one for one in found.boundaries if one.name == name):
            for flow, value in boundary.lines[0]:
                (pipe,) = (e for e in solve(found.case_at(flow, value)).elements if e.name == found.governing_pipe)
                assert pipe.velocity == pytest.approx(getattr(pipe, key), rel=1e-5)


@every_line
def test_what_closes_a_row_fails_at_every_flow_of_it(found):
    random = np.random.default_rng(5)
    for row in found.rows:
        assert bool(row.closed_by["central"]) is not bool(row.central)
        assert bool(row.closed_by["upper"]) is not bool(row.upper)
        for flow in random.uniform(found.flow.values[0], found.flow.values[-1], 3) if not row.central else ():
            failing = {check.name for check in solve(found.case_at(flow, row.value)).checks if check.status == "fail"}
            assert failing & {*row.closed_by["central"]}, (row.value, flow)


def test_limits_that_leave_no_flow_between_them_are_both_named():
    found = envelope(line(BINGHAM, more="limits: {head_loss: 5 m, velocity: {minimum: 1.4 m/s}}\n"))
    assert set(found.rows[0].closed_by["central"]) == {"head_loss", "velocity_minimum"}
    assert "none, closed by head loss and velocity minimum" in " ".join(envelope_page(found).split())


def test_a_limit_that_the_flow_does_not_touch_is_told_by_the_other_input():
    """230 kPa = 1.3 * 2 tau 4 L/D + rho g 5 m."""
    found = envelope_of("bingham")
    by_name = {one.name: one for one in found.boundaries}
    stress = (230e3 - 1300.0 * 9.80665 * 5.0) / (1.3 * 2.0 * 4.0 * 400.0 / 0.15)
    assert by_name["restart_pressure"].level == pytest.approx(stress, rel=1e-6)
    assert by_name["restart_pressure"].side == "above"
    assert by_name["head_loss"].level is None
    page = " ".join(envelope_page(found).split())
    assert "restart pressure, at most 230.0 kPa: from yield stress 5.995 Pa" in page
    assert re.search(r"velocity maximum, at most 2\.200 m/s: at 140\.0 m3/h over the map", page)
    assert "at yield stress 12.00 Pa: none, closed by restart pressure" in page


def test_deposition_bounds_the_turbulent_side_only():
    found = envelope_of("settling")
    assert "deposition" in {boundary.name for boundary in found.boundaries}
    low = {one.low_by for row in found.rows for one in row.upper}
    assert "deposition" in low
    assert any("solids may settle there, whatever the map shows" in caution for caution in found.cautions)


def test_every_root_is_found_though_some_figures_jump():
    """Solids that settle out of turbulent flow only: the check jumps where the flow turns turbulent."""
    for name in ("following", "settling"):
        points = [point for one in envelope_of(name).boundaries for line in one.lines for point in line]
        assert np.isfinite(points).all()
        assert np.isfinite([(one.low, one.high) for row in envelope_of(name).rows for one in row.upper]).all()


def test_the_static_yield_stress_follows_in_proportion():
    at = envelope_of("static").case_at(0.02, 12.0)
    assert at.fluid.rheology.yield_stress == 12.0
    assert at.restart.static_yield_stress == pytest.approx(22.0)
    assert at.flow.minimum == at.flow.maximum == 0.02


def test_what_it_is_drawn_over():
    assert envelope_of("following").up.variable.path == "fluid.solids.mass_fraction"
    assert envelope_of("following").up.values[0] == pytest.approx(0.3)
    assert LINES["settling"].solids is not None
    assert envelope_of("settling").up.variable.path == "fluid.rheology.yield_stress"
    assert study.up_variable(line(NEWTONIAN)).path == "fluid.rheology.viscosity"


def test_energy_is_that_of_solve():
    found = envelope_of("following")
    flow, value = found.flow.values[3], found.up.values[1]
    at = found.case_at(flow, value)
    loss = solve(at).totals.head_loss_upper * at.fluid.density * 9.80665
    expected = loss / (400.0 * at.fluid.density * value) / 3.6
    assert found.energy[1][3] == pytest.approx(expected, rel=1e-9)


def test_a_line_at_rest_has_none():
    with pytest.raises(InputError, match="a line at rest has no envelope"):
        envelope(replace(line(), flow=replace(line().flow, minimum=0.0, design=0.0, maximum=0.0)))


def test_pumps_end_the_window_where_they_meet_the_upper_curve():
    case = load_case(CASES / "thickener-underflow.yaml")
    stress = variable(case, "fluid.rheology.yield_stress")
    found = envelope(case, Axis(stress, (0.025, 0.05)), Axis(stress, (8.0, 11.0)))
    lines = {(one.name, one.figure): one for one in found.boundaries}
    row = found.own
    at = found.case_at(case.flow.design, row.value)
    highest = []
    for pump in pumps_on_line(at, "case"):
        flows = [x for x, y in lines[f"pump {pump.name} gives", "upper"].lines[0] if y == row.value]
        assert flows == pytest.approx([pump.duty_upper.flow], rel=1e-6)
        highest.append(pump.duty_upper.flow)
    assert row.upper[-1].high == pytest.approx(max(highest), rel=1e-6)
    assert row.upper[-1].high_by == "pumps"
