"""Sweeps of one and two inputs: closed forms, every point against ``solve``, limits, the report's solids."""

from __future__ import annotations

import math

import numpy as np
import pytest
from swept_lines import BINGHAM, FOLLOWING, LIMITED, NEWTONIAN, SETTLING, line

from pipeflow.case.axes import Axis
from pipeflow.case.variables import variable
from pipeflow.operability.energy import specific_energy
from pipeflow.report.html.about_solids import solids_sections
from pipeflow.report.html.blocks import Table
from pipeflow.study.ranges.points import case_at, points
from pipeflow.study.ranges.sweeping import solids_sweep, sweep
from pipeflow.study.solving import solve

SOLIDS = "fluid.solids.mass_fraction"
GRAVITY = 9.80665


def over(case, **ranges):
    axes = [Axis(variable(case, path), tuple(np.linspace(*ends).tolist())) for path, ends in ranges.items()]
    return sweep(case, axes)


def test_laminar_loss_is_linear_in_the_viscosity():
    case = line(NEWTONIAN, "20 m3/h")
    found = over(case, **{"fluid.rheology.viscosity": (0.3, 1.2, 7)})
    flow, bore, length = 20.0 / 3600.0, 0.15, 400.0
    expected = 128.0 * np.array(found.axes[0].values) * length * flow / (np.pi * bore**4) / (1000.0 * GRAVITY)
    assert {point.regime for point in found.points} == {"laminar"}
    assert found.grid("head_loss") == pytest.approx(expected, rel=1e-9)
    assert found.grid("head_loss_upper") == pytest.approx(expected, rel=1e-9)


def test_laminar_loss_goes_with_the_fourth_power_of_the_bore():
    found = over(line(NEWTONIAN, "20 m3/h"), **{"route[long pipe].diameter": (0.1, 0.2, 5)})
    scaled = found.grid("head_loss") * np.array(found.axes[0].values) ** 4
    assert scaled == pytest.approx(scaled[0], rel=1e-9)


def test_power_and_energy_are_those_of_the_losses():
    case = line(FOLLOWING)
    (point,) = over(case, **{SOLIDS: (0.38, 0.38, 1)}).points
    at = case_at(case, {SOLIDS: 0.38})
    totals = solve(at).totals
    flow, density = 100.0 / 3600.0, at.fluid.density
    assert point.power_upper == pytest.approx(totals.pressure_required_upper * flow, rel=1e-9)
    per_second = totals.head_loss_upper * density * GRAVITY * flow / 3.6e6
    tonnes_per_second = flow * density * 0.38 / 1e3
    assert point.specific_energy == pytest.approx(per_second / tonnes_per_second / 0.4, rel=1e-9)


def test_the_energy_is_2_73_of_the_gradient_over_solids():
    """2.73 i/(S_s C_v), i in metres of water, or 2.73 j/C_w, j in metres of slurry: docs/sweep.md, with its numbers."""
    water, solids, volume_share, gradient = 1000.0, 2650.0, 0.20, 0.040
    density = water + volume_share * (solids - water)
    share, of_slurry = volume_share * solids / density, gradient * water / density
    printed = 2.73 * gradient / (solids / water * volume_share)
    assert [density, share, of_slurry] == pytest.approx([1330.0, 0.398, 0.0301], abs=5e-4)
    assert printed == pytest.approx(0.206, abs=5e-4)
    assert 2.73 * of_slurry / share == pytest.approx(printed, rel=1e-12)
    # 9.80665/3.6 is 2.724: handbooks round it up
    assert specific_energy(gradient * water * GRAVITY, 1.0, density, share) == pytest.approx(printed, rel=0.0025)


@pytest.mark.parametrize("fluid", [BINGHAM, FOLLOWING, SETTLING], ids=["bingham", "following", "settling"])
@pytest.mark.parametrize("flow", ["60 m3/h", "{minimum: 40 m3/h, design: 60 m3/h, maximum: 90 m3/h}", "80 t/h"])
def test_every_point_is_what_solve_finds(fluid, flow):
    case = line(fluid, flow, LIMITED)
    lengths = np.array([100.0, 400.0, 900.0])
    inputs = {"flow": case.flow.design * np.array([0.4, 1.0, 1.7]), "route[long pipe].length": lengths}
    if flow.endswith("t/h"):
        inputs["flow"] = inputs["flow"] * case.fluid.density
    if fluid is FOLLOWING:
        inputs[SOLIDS] = np.array([0.32, 0.40, 0.41])
    found = points(case, inputs)
    for index in range(3):
        own = case_at(case, {path: float(values[index]) for path, values in inputs.items()})
        result = solve(own)
        for check, other in zip(found.checks(index), result.checks, strict=True):
            assert (check.name, check.status, check.basis) == (other.name, other.status, other.basis)
            figures = [math.nan if one.value is None else one.value for one in (check, other)]
            assert figures[0] == pytest.approx(figures[1], rel=1e-9, nan_ok=True), check.name
        assert found.line.total_head_upper[index, 0] == pytest.approx(result.totals.total_head_upper, rel=1e-11)


def test_the_case_at_its_own_values_is_the_case():
    for fluid in (BINGHAM, FOLLOWING, SETTLING, NEWTONIAN):
        case = line(fluid, more=LIMITED)
        assert case_at(case, {}) == case


def test_a_pipe_of_another_bore_is_no_longer_of_its_size():
    case = line()
    text = {"route[long pipe].diameter": 0.2}
    assert case_at(case, text).route[0].diameter == 0.2
    assert "long pipe" not in case_at(case, text).sizes


def test_two_inputs_give_every_combination_the_second_fastest():
    found = over(line(more=LIMITED), **{"fluid.rheology.yield_stress": (2.0, 10.0, 3), "flow": (0.01, 0.04, 4)})
    assert found.shape == (3, 4)
    assert [point.values for point in found.points[:2]] == [(2.0, 0.01), (2.0, 0.02)]
    one = over(line(more=LIMITED), flow=(0.01, 0.04, 4))
    assert found.grid("head_loss").shape == (3, 4)
    assert one.grid("head_loss") == pytest.approx(
        over(line(more=LIMITED), **{"fluid.rheology.yield_stress": (6.0, 6.0, 1), "flow": (0.01, 0.04, 4)})
        .grid("head_loss")
        .ravel()
    )


def test_the_boundaries_of_two_inputs_are_roots():
    case = line(more=LIMITED)
    found = over(case, **{"fluid.rheology.yield_stress": (2.0, 10.0, 4), "flow": (0.01, 0.05, 6)})
    by_name = {(one.name, one.figure): one for one in found.boundaries}
    assert {"head_loss", "velocity_minimum", "velocity_maximum"} <= {name for name, _ in by_name}
    for name in ("head_loss", "velocity_maximum"):
        for stress, flow in by_name[name, "central"].lines[0]:
            checks = solve(case_at(case, {"fluid.rheology.yield_stress": stress, "flow": flow})).checks
            check = next(one for one in checks if one.name == name)
            assert check.value == pytest.approx(check.limit, rel=1e-6)


def test_solids_to_either_side_for_the_report():
    found = solids_sweep(line(FOLLOWING))
    assert found is not None
    assert [point.values[0] for point in found.points] == pytest.approx([0.38, 0.39, 0.40, 0.41])
    assert "0.42 are outside the range tested, 0.3 .. 0.415" in found.cautions[-1]
    middle = solve(line(FOLLOWING)).totals
    assert found.points[2].total_head_upper == pytest.approx(middle.total_head_upper, rel=1e-11)
    assert solids_sweep(line(SETTLING)) is None
    assert solids_sweep(line(BINGHAM)) is None


def test_what_is_carried_on_or_left_is_said():
    found = over(line(FOLLOWING), **{SOLIDS: (0.35, 0.5, 4)})
    assert [point.is_carried_on for point in found.points] == [False, False, True, True]
    assert "carried on past the solids tested, 0.3 .. 0.415" in found.cautions[0]
    assert any("does not follow the solids" in one for one in over(line(SETTLING), **{SOLIDS: (0.1, 0.3, 2)}).cautions)
    assert not over(line(SETTLING), **{"route[long pipe].length": (1.0, 2.0, 2)}).cautions


def test_the_page_of_the_design_file_shows_them():
    (shown,) = solids_sections(solids_sweep(line(FOLLOWING, more=LIMITED)))
    tables = [block for block in shown.blocks if isinstance(block, Table)]
    assert [row[0] for row in tables[0].rows] == ["0.3800", "0.3900", "0.4000", "0.4100"]
    assert {len(row) for row in tables[0].rows} == {len(tables[0].heads)}
    assert "outside the range tested" in shown.blocks[-1].text
    assert not list(solids_sections(solids_sweep(line(SETTLING))))
