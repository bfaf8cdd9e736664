"""Between which values of one input a limit fails: roots, against ``solve`` on either side and closed forms."""

from __future__ import annotations

import re

import numpy as np
import pytest
from swept_lines import BINGHAM, FOLLOWING, LIMITED, NEWTONIAN, SETTLING, line

from pipeflow.case.axes import Axis
from pipeflow.case.variables import variable
from pipeflow.report.charts import sweep_chart_svg
from pipeflow.report.sweep_document import sweep_document
from pipeflow.report.sweep_page import limits_over, sweep_page
from pipeflow.study.ranges.points import case_at
from pipeflow.study.ranges.sweeping import sweep
from pipeflow.study.solving import solve

THREE_FLOWS = "{minimum: 60 m3/h, design: 80 m3/h, maximum: 100 m3/h}"


def over(case, path, low, high, count=9):
    return sweep(case, [Axis(variable(case, path), tuple(np.linspace(low, high, count).tolist()))])


def test_the_onset_is_where_the_loss_meets_its_limit():
    """Laminar: the loss is linear in the viscosity, so that the onset lies between the points swept."""
    case = line(NEWTONIAN, "20 m3/h", "limits: {head_loss: 3 m}\n")
    found = over(case, "fluid.rheology.viscosity", 0.1, 1.3, 4)
    one = 128.0 * 400.0 * (20.0 / 3600.0) / (np.pi * 0.15**4) / (1000.0 * 9.80665)
    (run,) = (run for run in found.runs if run.check.status == "fail")
    assert (run.check.name, run.high) == ("head_loss", 1.3)
    assert run.low == pytest.approx(3.0 / one, rel=1e-8)
    assert run.low not in found.axes[0].values
    assert f"head loss: {run.low:.4f} to 1.300 Pa.s" in dict(limits_over(found))["FAIL"]


RANGES = {
    "yield stress": (BINGHAM, LIMITED, "fluid.rheology.yield_stress", (2.0, 12.0)),
    "flow": (BINGHAM, LIMITED, "flow", (0.008, 0.05)),
    "solids": (FOLLOWING, LIMITED, "fluid.solids.mass_fraction", (0.31, 0.41)),
    "settling": (SETTLING, "limits: {head_loss: 20 m, velocity: {minimum: 0.9 m/s}}\n", "flow", (0.01, 0.05)),
}


@pytest.mark.parametrize("name", RANGES)
def test_either_side_of_every_end_solve_changes_its_mind(name):
    fluid, more, path, (low, high) = RANGES[name]
    case = line(fluid, more=more)
    found = over(case, path, low, high)
    seen = set()
    for run in found.runs:
        for end, inward in ((run.low, 1.0), (run.high, -1.0)):
            if low < end < high:
                at = (case_at(case, {path: end * (1.0 + inward * step)}) for step in (1e-6, -1e-6))
                inside, outside = ({one.name: one.status for one in solve(each).checks} for each in at)
                assert inside[run.check.name] == run.check.status
                assert outside.get(run.check.name) != run.check.status
                seen.add(run.check.status)
    assert "fail" in seen


def test_every_point_that_fails_is_within_a_run():
    found = over(line(more=LIMITED), "flow", 0.008, 0.05)
    for point in found.points:
        names = {check.name for check in point.checks if check.status == "fail"}
        assert names == {run.check.name for run in found.runs
                         if run.check.status == "fail" and run.low <= point.values[0] <= run.high}  # fmt: skip
    document = sweep_document(found)
    assert [one["from"] for one in document["limits"]] == [run.low for run in found.runs]


def test_the_flow_that_a_loss_is_judged_at_is_said_where_it_is_not_the_one_shown():
    found = over(line(BINGHAM, THREE_FLOWS, LIMITED), "fluid.rheology.yield_stress", 2.0, 20.0)
    page = " ".join(sweep_page(found).split())
    assert "head loss, at maximum flow:" in page
    assert "each at the flow that is hardest on it, losses at the maximum" in page
    chart = sweep_chart_svg(found)
    assert len(re.findall("at maximum flow", chart)) == 2
    one_flow = over(line(more=LIMITED), "fluid.rheology.yield_stress", 2.0, 20.0)
    assert "at maximum flow" not in sweep_chart_svg(one_flow)
    assert "at maximum flow" not in sweep_page(one_flow)


def test_the_chart_is_hatched_from_the_onset():
    case = line(BINGHAM, THREE_FLOWS, LIMITED)
    few, many = (over(case, "fluid.rheology.yield_stress", 2.0, 20.0, count) for count in (5, 21))
    said = [re.findall(r"head loss fails from ([\d.]+)", sweep_chart_svg(one)) for one in (few, many)]
    assert said[0] == said[1] != []
