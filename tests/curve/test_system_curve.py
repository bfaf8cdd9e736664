"""The system curve: one with ``solve``, rising, dense where it bends, and the envelope of the scenarios."""

from __future__ import annotations

import csv
import io
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from pipeflow import load_case, solve
from pipeflow.case.model import FlowRange
from pipeflow.report.curve_document import curve_document
from pipeflow.report.curve_page import curve_page
from pipeflow.report.curve_table import curve_table
from pipeflow.study.pumping.curve import curve

CASES = sorted((Path(__file__).parents[2] / "cases").glob("*.yaml"))


@pytest.fixture(scope="module", params=CASES, ids=lambda path: path.stem)
def result(request):
    return curve(load_case(request.param))


def at_flow(case, flow):
    return replace(case, flow=FlowRange(flow, flow, flow), scenarios={})


def test_each_row_is_what_solve_gives(result):
    """The same figures by the study of one flow, which shares no grid with the curve."""
    for condition in result.conditions:
        system = condition.system
        for place in range(0, len(system.flow), 17):
            totals = solve(at_flow(condition.case, system.flow[place])).totals
            assert system.total_head[place] == pytest.approx(totals.total_head, rel=1e-10)
            assert system.total_head_upper[place] == pytest.approx(totals.total_head_upper, rel=1e-10)
            assert system.static_head[place] == pytest.approx(totals.static_head, rel=1e-12)


def test_the_first_row_is_the_limit_of_no_flow(result):
    for condition in result.conditions:
        first = condition.system.total_head[0]
        assert condition.system.flow[0] == 0
        assert condition.system.regime[0] == "no flow"
        near = [
            solve(at_flow(condition.case, condition.case.flow.design * share)).totals.total_head
            for share in (1e-9, 1e-14)
        ]
        assert first <= near[1] <= near[0]
        assert near[1] == pytest.approx(first, rel=1e-4)


def test_the_curve_rises_and_has_no_jump(result):
    """Between neighbouring flows the losses grow by no more than the fifth power of the flow."""
    for condition in result.conditions:
        system, flow = condition.system, np.array(condition.system.flow)
        for head in (system.total_head, system.total_head_upper):
            loss = np.array(head) - np.array(system.static_head)
            assert np.all(np.diff(loss) > 0)
            ratio = np.diff(np.log(loss[1:])) / np.diff(np.log(flow[1:]))
            assert ratio.max() < 5.5
        assert np.all(np.array(system.total_head_upper) >= np.array(system.total_head))


def test_it_reaches_past_the_maximum_and_holds_the_stated_flows(result):
    flows = result.case.flow
    highest = max(one.case.flow.maximum for one in result.conditions)
    assert result.own.system.flow[-1] == pytest.approx(1.3 * highest)
    for stated in (flows.minimum, flows.design, flows.maximum):
        assert np.isclose(result.own.system.flow, stated, rtol=1e-12).any()


def test_it_is_dense_about_the_end_of_laminar_flow(result):
    for condition in result.conditions:
        edge, flow = condition.system.laminar_until, np.array(condition.system.flow)
        if edge is not None and edge < 0.95 * flow[-1]:
            near = np.abs(flow / edge - 1.0)
            assert np.count_nonzero(near < 0.03) >= 5
            before, after = flow[flow < edge * (1 - 1e-9)][-1], flow[flow > edge * (1 + 1e-9)][0]
            regimes = [solve(at_flow(condition.case, each)) for each in (before, after)]
            assert all(pipe.regime in ("laminar", None) for pipe in regimes[0].elements)
            assert any(pipe.regime in ("transitional", "turbulent") for pipe in regimes[1].elements)


def test_the_envelope_holds_every_scenario(result):
    for condition in result.conditions:
        if condition.kind in ("case", "scenario"):
            assert np.all(np.array(condition.system.pump_head) >= np.array(result.envelope_low))
            assert np.all(np.array(condition.system.pump_head_upper) <= np.array(result.envelope_high))


def test_the_table_holds_every_point(result):
    rows = list(csv.DictReader(io.StringIO(curve_table(result))))
    assert len(rows) == sum(len(one.system.flow) for one in result.conditions)
    system = result.own.system
    assert float(rows[5]["total_head [m]"]) == pytest.approx(system.total_head[5], rel=1e-8)
    assert float(rows[5]["flow [m3/h]"]) / 3600 == pytest.approx(system.flow[5], rel=1e-8)


def test_the_page_fits_a_terminal(result):
    page = curve_page(result)
    assert max(len(line) for line in page.splitlines()) <= 80
    assert "licensed" in page


def test_the_document_has_the_keys_agreed(result):
    laid_out = curve_document(result)
    for row in laid_out["system"]:
        assert set(row) >= {"flow_m3_s", "total_head_m", "total_head_upper_m", "static_head_m", "regime"}
    assert set(laid_out.get("scenarios", {})) == {one.name for one in result.conditions[1:]}


def test_a_line_at_rest_has_one_row():
    case = load_case(CASES[0])
    system = curve(at_flow(case, 0.0)).own.system
    assert system.flow == (0.0,)
    assert system.total_head[0] == solve(at_flow(case, 0.0)).totals.total_head
