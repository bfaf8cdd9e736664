"""Candidate pumps on a line: duties, what they are held against, and their ranking, checked by hand sums."""

from __future__ import annotations

import json
import math
from pathlib import Path
from xml.etree import ElementTree

import numpy as np
import pytest
from lines import GRAVITY, ROWS, WATER, at_flow, line_with, pump_head_on_water
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq
from typer.testing import CliRunner

from pipeflow import load_case, solve
from pipeflow.cli import app
from pipeflow.report.curve_page import boundaries, correction_text, ranking_rows, speeds_text
from pipeflow.study.pumping.curve import curve

RUN = CliRunner()


def by_name(result, name="the case", pump=0):
    return next(one for one in result.conditions if one.name == name).pumps[pump]


def check_of(pump, name):
    return next(check for check in pump.checks if check.name == name)


def test_a_curve_drawn_through_a_duty_is_found_there(tmp_path):
    """The line's own head at 90 m3/h is made a row of the curve; water needs no correction."""
    line = line_with(tmp_path, WATER, "flow: 90 m3/h", rows=[(0, 30), (90, 15), (150, 5)])
    head = solve(load_case(line)).totals.total_head
    line = line_with(tmp_path, WATER, "flow: 90 m3/h", rows=[(0, 2 * head), (90, repr(head)), (150, head / 3)])
    duty = by_name(curve(load_case(line))).duty
    assert duty.flow * 3600 == pytest.approx(90, rel=1e-9)
    assert duty.head == pytest.approx(head, rel=1e-9)
    assert duty.stable


@pytest.mark.parametrize("outlet", ["", "impeller: {diameter: 390 mm, outlet_width: 30 mm}"])
def test_the_duty_is_on_both_curves(tmp_path, outlet):
    """The line by ``solve`` at that flow; the pump by the published equations written out here."""
    case = load_case(line_with(tmp_path, more=outlet))
    result = curve(case)
    for condition in result.conditions[:1]:
        pump = condition.pumps[0]
        for duty, figure in ((pump.duty, "total_head"), (pump.duty_upper, "total_head_upper")):
            line_head = getattr(solve(at_flow(condition.case, duty.flow)).totals, figure)
            assert duty.head == pytest.approx(line_head, rel=1e-9)
            assert duty.head == pytest.approx(corrected_head(condition.case, duty.flow), rel=1e-9)


def corrected_head(case, flow):
    """ANSI/HI 9.6.7 with the apparent viscosity of the Herschel-Bulkley fluid, from the formulas alone."""
    pump, law = case.pumps[0], case.fluid.rheology
    table = pump.table
    rate = 2.0 * pump.speed
    if pump.outlet_width:
        gap, diameter = pump.outlet_width, pump.impeller_diameter
        rate = 8.0 * flow / (math.pi * diameter * gap) / (2.0 * gap)
    viscosity = (law.yield_stress + law.consistency * rate**law.flow_index) / rate
    water = PchipInterpolator(table.flow, table.head)
    best = best_flow(table)
    nu, revolutions = 1e6 * viscosity / case.fluid.density, pump.speed * 30 / math.pi
    b = 16.5 * nu**0.5 * float(water(best)) ** 0.0625 / ((3600 * best) ** 0.375 * revolutions**0.25)
    flow_factor = 2.71 ** (-0.165 * math.log10(b) ** 3.15)
    on_water = flow / flow_factor
    return float(water(on_water)) * (1 - (1 - flow_factor) * (on_water / best) ** 0.75)


def best_flow(table):
    """Top of the parabola through the best row and its neighbours."""
    row = int(np.argmax(table.efficiency))
    square, slope, _ = np.polyfit(table.flow[row - 1 : row + 2], table.efficiency[row - 1 : row + 2], 2)
    return -slope / (2 * square)


def test_shaft_power_is_the_product_of_what_is_shown(tmp_path):
    case = load_case(line_with(tmp_path))
    duty = by_name(curve(case)).duty
    power = case.fluid.density * GRAVITY * duty.flow * duty.head / duty.efficiency
    assert duty.shaft_power == pytest.approx(power, rel=1e-12)
    assert duty.motor_power >= duty.shaft_power * 1.15 * (1 - 1e-12)
    assert duty.standard_motor >= duty.motor_power


def test_npsh_available_is_the_sum_of_its_parts(tmp_path):
    """Site at 620 m, vapour 2.3 kPa, a suction line of one pipe before the pump, level 3.2 m drawn down to 1 m."""
    case = load_case(line_with(tmp_path, ends="source: {level: 3.2 m, lowest_level: 1 m}\ndestination: {level: 2 m}"))
    pump = by_name(curve(case))
    duty, suction = pump.duty, case.route[0]
    loss = solve(at_flow(case, duty.flow)).elements[0]
    weight = case.fluid.density * GRAVITY
    air = 101325 * (1 - 0.0065 * 620 / 288.15) ** (GRAVITY / (287.05287 * 0.0065))
    by_hand = (air - 2300) / weight + 1.0 - suction.rise - (loss.friction_loss_upper + loss.fitting_loss) / weight
    assert duty.npsh_available == pytest.approx(by_hand, rel=1e-9)


def test_npsh_is_not_checked_without_air_and_vapour(tmp_path):
    path = line_with(tmp_path)
    text = path.read_text(encoding="utf-8")
    path.write_text("\n".join(line for line in text.splitlines() if not line.startswith("site")), encoding="utf-8")
    check = check_of(by_name(curve(load_case(path))), "npsh")
    assert check.status == "not checked"
    assert check.needs == ("site",)


def test_npsh_that_lacks_its_margin_fails(tmp_path):
    rows = [(0, 31, 1, 9), (60, 28.5, 50, 9), (100, 24, 70, 9.5), (140, 16, 66, 10)]
    check = check_of(by_name(curve(load_case(line_with(tmp_path, rows=rows)))), "npsh")
    assert check.status == "fail"
    assert check.limit >= 9 * 1.3


def test_a_speed_that_varies_gives_the_design_flow(tmp_path):
    more = "variable_speed: {minimum: 700 rpm, maximum: 1900 rpm}"
    case = load_case(line_with(tmp_path, more=more))
    pump = by_name(curve(case))
    assert pump.duty.flow == pytest.approx(case.flow.design, rel=1e-9)
    assert pump.duty_upper.flow == pytest.approx(case.flow.design, rel=1e-9)
    assert 700 < pump.speed * 30 / math.pi <= pump.speed_upper * 30 / math.pi < 1900


def test_the_motor_of_a_variable_speed_covers_maximum_flow(tmp_path):
    """On water: at the speed found the affinity laws put the line's own head on the curve at maximum flow."""
    flow = "flow: {minimum: 70 m3/h, design: 90 m3/h, maximum: 110 m3/h}"
    more = "variable_speed: {minimum: 700 rpm, maximum: 1900 rpm}\nmotor: {power: 30 kW}"
    case = load_case(line_with(tmp_path, WATER, flow, more=more))
    result = curve(case)
    pump, table, most = by_name(result), case.pumps[0].table, 110 / 3600
    head = solve(at_flow(case, most)).totals.total_head_upper

    def excess(ratio):
        return ratio**2 * pump_head_on_water(table, most / ratio) - head

    ratio = brentq(excess, 0.8, 1.25)
    efficiency = float(PchipInterpolator(table.flow, table.efficiency)(most / ratio))
    assert pump.duty_maximum.flow == pytest.approx(most, rel=1e-9)
    assert check_of(pump, "motor_power").value == pytest.approx(1.15 * 998.2 * GRAVITY * most * head / efficiency)
    assert result.ranking[0].standard_motor == pump.duty_maximum.standard_motor > pump.duty.standard_motor
    required = ratio**2 * float(PchipInterpolator(table.flow, table.npsh_required)(most / ratio))
    assert check_of(pump, "npsh").limit == pytest.approx(required + 1)


def test_a_speed_too_low_at_its_highest_fails_with_the_flow_it_gives(tmp_path):
    more = "variable_speed: {minimum: 700 rpm, maximum: 1000 rpm}\ncurve_speed: 1480 rpm"
    rows = [(0, 37, 1, 2), (60, 35, 50, 2), (100, 31, 70, 3), (140, 25, 66, 4)]
    pump = by_name(curve(load_case(line_with(tmp_path, more=more, rows=rows, speed="900 rpm"))))
    assert pump.speed * 30 / math.pi == pytest.approx(1000)
    assert check_of(pump, "duty_flow").status == "fail"


def test_two_in_series_are_one_of_twice_the_head(tmp_path):
    """On water, which asks for no correction."""
    rows = [(0, 12, 1), (60, 11, 50), (100, 8.5, 70), (140, 4, 66)]
    doubled = [(q, 2 * h, e) for q, h, e in rows]
    two = line_with(tmp_path, WATER, "flow: 60 m3/h", rows=rows, more="number: 2\narrangement: series")
    first = by_name(curve(load_case(two))).duty
    one = line_with(tmp_path, WATER, "flow: 60 m3/h", rows=doubled)
    second = by_name(curve(load_case(one))).duty
    assert first.flow == pytest.approx(second.flow, rel=1e-10)
    assert first.shaft_power == pytest.approx(second.shaft_power, rel=1e-10)


def test_the_motor_of_each_of_two_pumps_covers_its_half(tmp_path):
    """``rho g Q H/eta`` of both on water, a half of it with its 15 % against one motor."""
    rows = [(0, 22, 1), (60, 21, 50), (100, 18.5, 70), (140, 14, 66)]
    more = "number: 2\narrangement: parallel\nmotor: {power: 5.5 kW}"
    result = curve(load_case(line_with(tmp_path, WATER, "flow: 60 m3/h", rows=rows, more=more)))
    pump = by_name(result)
    duty, check = pump.duty, check_of(pump, "motor_power")
    both = 998.2 * GRAVITY * duty.flow * duty.head / duty.efficiency
    assert check.value == pytest.approx(1.15 * both / 2, rel=1e-9)
    assert check.status == "fail"
    assert result.ranking[0].standard_motor == duty.standard_motor == pytest.approx(11000)
    (verdict, _) = next(ranking_rows(result.ranking))
    assert "at the 2 shafts together, each motor 11.0 kW" in verdict


def test_a_scenario_that_slows_the_pump_moves_its_curve(tmp_path):
    """The case gives a speed alone, that of the curve; the scenario runs at 0.9 of it, by the affinity laws."""
    scenarios = "scenarios:\n  slow: {'pumps[candidate].speed': 1332 rpm}\n"
    case = load_case(line_with(tmp_path, WATER, "flow: 60 m3/h", scenarios=scenarios))
    duty = by_name(curve(case), "slow").duty
    expected = 0.81 * pump_head_on_water(case.pumps[0].table, duty.flow / 0.9)
    assert duty.head == pytest.approx(expected, rel=1e-9)
    assert by_name(curve(case)).duty.head == pytest.approx(
        pump_head_on_water(case.pumps[0].table, by_name(curve(case)).duty.flow), rel=1e-9
    )


def test_a_range_of_speeds_too_small_is_told_and_the_speeds_are_shown(tmp_path):
    more = "variable_speed: {minimum: 1400 rpm, maximum: 1480 rpm}"
    result = curve(load_case(line_with(tmp_path, WATER, "flow: 40 m3/h", more=more)))
    assert any("at the lowest speed of its range it gives more" in caution for caution in by_name(result).cautions)
    slow = "variable_speed: {minimum: 700 rpm, maximum: 1900 rpm}"
    result = curve(load_case(line_with(tmp_path, more=slow)))
    everywhere = [(one, one.pumps[0]) for one in result.conditions]
    assert not any("of its range" in caution for caution in by_name(result).cautions)
    assert f"water {by_name(result, 'water').speed * 30 / math.pi:.0f} rpm" in speeds_text(everywhere)
    assert "affinity" in {use.source.key for use in by_name(result, "water").methods}


def test_a_siphon_is_not_credited_below_a_vacuum_without_a_site(tmp_path):
    """The same head as ``solve``, which knows that no line holds less than a vacuum."""
    path = line_with(tmp_path, WATER, ends="source: {level: 3.2 m}\ndestination: {level: -20 m}")
    text = path.read_text(encoding="utf-8").replace("site: {altitude: 620 m}\n", "")
    path.write_text(
        text.replace("pumps:", "  - {pipe: drop, size: NPS 6 Sch 40, length: 20 m}\npumps:"), encoding="utf-8"
    )
    case = load_case(path)
    system = curve(case).own.system
    at = int(np.argmin(np.abs(np.array(system.flow) - case.flow.design)))
    assert system.flow[at] == pytest.approx(case.flow.design, rel=1e-12)
    assert system.pump_head[at] > system.total_head[at] + 1
    assert system.pump_head[at] == pytest.approx(solve(case).profile.pump_head, rel=1e-9)
    assert next(boundaries(curve(case).own)).startswith("A high point of the route asks for more")


@pytest.mark.parametrize(("level", "status"), [(1.0, "caution"), (1.5, "ok")])
def test_a_gel_in_the_suction_line_holds_against_a_low_level(tmp_path, level, status):
    """200 Pa with its factor of 1.3 in 6 m of 202.7 mm: 30.8 kPa, against (level + 1 m) of 1420 kg/m3."""
    ends = f"source: {{level: 3.2 m, lowest_level: {level} m}}\ndestination: {{level: 2 m}}"
    path = line_with(tmp_path, ends=ends, limits="restart: {static_yield_stress: 200 Pa, factor: 1.3}")
    check = check_of(by_name(curve(load_case(path)), "restart after a stop"), "suction_yield")
    assert check.limit == pytest.approx(4 * 1.3 * 200 * 6 / 0.2027, rel=1e-3)
    assert check.value == pytest.approx(1420 * GRAVITY * (level + 1))
    assert check.status == status


@pytest.mark.parametrize(("shut_off", "status"), [(9.7, "fail"), (9.9, "ok")])
def test_a_pump_too_weak_to_fill_the_line_over_its_crest_is_out(tmp_path, shut_off, status):
    """The crest lies 13 m above the start, the source 3.2 m: 9.8 m to lift; as a siphon the line runs on less."""
    rows = [(0, shut_off, 1, 1), (60, 9.5, 50, 1.2), (140, 8, 70, 1.5), (200, 1, 60, 2)]
    path = line_with(tmp_path, WATER, "flow: 60 m3/h", rows=rows)
    drop = "  - {pipe: drop, size: NPS 6 Sch 40, length: 20 m, rise: -8 m}\npumps:"
    path.write_text(path.read_text(encoding="utf-8").replace("pumps:", drop), encoding="utf-8")
    result = curve(load_case(path))
    check = check_of(by_name(result, "water"), "fill_head")
    assert by_name(result).duty.head < 9.7
    assert check.value == pytest.approx(9.8)
    assert check.status == status
    assert any("fill head" in reason for reason in result.ranking[0].reasons) == (status == "fail")


def test_a_pump_that_is_not_corrected_says_so_and_what_was_not_checked(tmp_path):
    path = line_with(tmp_path, WATER, rows=[row[:3] for row in ROWS])
    result = curve(load_case(path))
    assert correction_text(by_name(result).correction).startswith("Not corrected")
    (verdict, _) = next(ranking_rows(result.ranking))
    assert "; not checked: npsh" in verdict


def test_a_pump_too_weak_on_water_is_not_said_to_be_throttled(tmp_path):
    """Into a vessel under pressure water asks for more head than the slurry."""
    fluid = "{density: 2000 kg/m3, rheology: {model: newtonian, viscosity: 1 mPa.s}}"
    ends = "source: {level: 3.2 m}\ndestination: {level: 2 m, pressure: 250 kPa}"
    pump = by_name(curve(load_case(line_with(tmp_path, fluid, "flow: 40 m3/h", ends=ends))), "water")
    assert pump.duty is None
    check = check_of(pump, "duty_on_water")
    assert "cannot flush" in check.basis
    assert "throttled" not in check.basis


def test_a_drooping_curve_may_cross_twice_and_the_stable_one_is_the_duty(tmp_path):
    """At rest the pump gives less than the static head, 28.5 m; past its droop it gives more."""
    rows = [(0, 27, 5), (20, 31, 30), (60, 36, 60), (100, 35.5, 70), (160, 22, 60)]
    ends = "source: {level: 0 m}\ndestination: {level: 15.5 m}"
    path = line_with(tmp_path, WATER, "flow: 60 m3/h", rows=rows, ends=ends)
    pump = by_name(curve(load_case(path)))
    assert pump.duty.stable
    assert [other.stable for other in pump.others] == [False]
    assert pump.others[0].flow < pump.duty.flow
    assert any("cross 2 times" in caution for caution in pump.cautions)


def test_curves_that_never_meet_have_a_reason(tmp_path):
    path = line_with(tmp_path, rows=[(0, 9, 1, 2), (60, 8, 50, 2), (100, 7, 70, 3), (140, 5, 66, 4)])
    run = RUN.invoke(app, ["curve", str(path), "--json"])
    laid_out = json.loads(run.stdout)
    assert run.exit_code == 1
    assert laid_out["pumps"][0]["duty"] is None
    assert laid_out["pumps"][0]["duty_upper"] is None
    assert any("less head than the line asks for" in caution for caution in laid_out["pumps"][0]["cautions"])
    assert any("less head than the line asks for" in caution for caution in laid_out["cautions"])
    assert laid_out["selected"] is None


def test_the_document_has_the_keys_agreed(tmp_path):
    run = RUN.invoke(app, ["curve", str(line_with(tmp_path)), "--json"])
    assert run.exit_code in (0, 1)
    pump = json.loads(run.stdout)["pumps"][0]
    duty = {"flow_m3_s", "head_m", "efficiency", "shaft_power_W", "npsh_available_m", "npsh_required_m"}
    assert set(pump["duty"]) >= duty
    assert set(pump["duty_upper"]) >= duty
    assert set(pump["correction"]) >= {"method", "head_factor", "flow_factor", "efficiency_factor"}
    assert set(json.loads(run.stdout)["scenarios"]) == {"water", "restart after a stop"}


def test_without_pumps_the_curve_alone(tmp_path):
    path = line_with(tmp_path)
    text = path.read_text(encoding="utf-8")
    path.write_text(text[: text.index("pumps:")], encoding="utf-8")
    run = RUN.invoke(app, ["curve", str(path), "--json"])
    assert run.exit_code == 0
    assert json.loads(run.stdout)["pumps"] == []
    assert "scenarios" not in json.loads(run.stdout)


def test_the_restart_asks_for_what_the_restart_check_of_solve_does(tmp_path):
    """The thickest scenario governs; the credit is four fifths of the least corrected head at low flow."""
    scenarios = "scenarios:\n  thick: {restart.static_yield_stress: 40 Pa}\n"
    case = load_case(line_with(tmp_path, limits="limits: {restart_pressure: 900 kPa}", scenarios=scenarios))
    check = check_of(by_name(curve(case), "restart after a stop"), "restart_head")
    of_solve = next(c for c in solve(case).scenarios["thick"].checks if c.name == "restart_pressure")
    assert check.value == pytest.approx(of_solve.value / (case.fluid.density * GRAVITY), rel=1e-12)
    heads = [corrected_head(case, share * best_flow(case.pumps[0].table)) for share in np.linspace(1e-6, 0.35, 20)]
    assert 0.75 * min(heads) < check.limit < 0.8 * max(heads) * 1.0001


def test_the_flush_is_the_duty_on_water(tmp_path):
    result = curve(load_case(line_with(tmp_path)))
    water = next(one for one in result.conditions if one.kind == "water")
    flush, duty = water.flushes[0], water.pumps[0].duty
    areas = [math.pi / 4 * pipe.diameter**2 for pipe in result.case.route]
    assert flush.velocity == pytest.approx(duty.flow / max(areas))
    assert flush.volume == pytest.approx(sum(a * pipe.length for a, pipe in zip(areas, result.case.route, strict=True)))
    assert flush.time == pytest.approx(flush.volume / duty.flow)
    assert duty.head == pytest.approx(pump_head_on_water(result.case.pumps[0].table, duty.flow), rel=1e-9)


def test_candidates_that_hold_come_first_then_by_power(tmp_path):
    strong = [(0, 36, 1, 2), (60, 33, 50, 2), (110, 27, 70, 3), (160, 15, 64, 4)]
    wasteful = [(q, h, e / 2, n) for q, h, e, n in strong]
    weak = [(0, 14, 1, 2), (60, 12, 50, 2), (110, 8, 70, 3)]
    case = load_case(line_with(tmp_path, pumps={"weak": weak, "wasteful": wasteful, "strong": strong}))
    result = curve(case)
    assert [one.name for one in result.ranking] == ["strong", "wasteful", "weak"]
    assert [one.holds for one in result.ranking] == [True, True, False]
    assert result.ranking[0].shaft_power < result.ranking[1].shaft_power
    assert any("duty flow" in reason for reason in result.ranking[2].reasons)


def test_a_slurry_beyond_the_correction_is_refused(tmp_path):
    fluid = "{density: 1420 kg/m3, rheology: {model: newtonian, viscosity: 20 Pa.s}}"
    pump = by_name(curve(load_case(line_with(tmp_path, fluid))))
    assert pump.duty is None
    assert pump.drawn is None
    assert any("40" in caution and "test" in caution for caution in pump.cautions)
    assert check_of(pump, "duty_flow").status == "fail"


class TestPositiveDisplacement:
    ROWS = ((0, 100, 60), (600, 96, 66), (1200, 90, 62), (2400, 76, 55))
    MORE = "relief_pressure: 1600 kPa\ntorque_limit: 3000 N.m"

    def line(self, folder: Path, more: str = MORE, **given: str) -> Path:
        return line_with(folder, kind="positive-displacement", rows=self.ROWS, speed="200 rpm", more=more, **given)

    def test_flow_and_power_at_the_duty(self, tmp_path):
        case = load_case(self.line(tmp_path))
        duty = by_name(curve(case)).duty
        table = case.pumps[0].table
        pressure = case.fluid.density * GRAVITY * duty.head
        assert duty.flow == pytest.approx(float(PchipInterpolator(table.pressure, table.flow)(pressure)), rel=1e-9)
        assert duty.head == pytest.approx(solve(at_flow(case, duty.flow)).totals.total_head, rel=1e-9)

    def test_relief_stands_between_restart_and_pipe(self, tmp_path):
        wall = "pipe_wall: {code: B31.3, allowable_stress: 138 MPa}"
        checks = by_name(curve(load_case(self.line(tmp_path, limits=wall)))).checks
        found = {check.name: check.status for check in checks}
        assert found["relief_above_restart"] == "ok"
        assert found["relief_below_rating"] == "ok"
        low = self.line(tmp_path, "relief_pressure: 100 kPa", limits=wall)
        assert check_of(by_name(curve(load_case(low))), "relief_above_restart").status == "fail"

    def test_without_relief_it_says_so(self, tmp_path):
        pump = by_name(curve(load_case(self.line(tmp_path, "number: 1"))))
        assert check_of(pump, "relief").status == "not checked"
        assert any("relief device" in caution for caution in pump.cautions)

    def test_torque_past_its_limit_fails(self, tmp_path):
        line = self.line(tmp_path, "relief_pressure: 1600 kPa\ntorque_limit: 100 N.m")
        assert check_of(by_name(curve(load_case(line))), "torque").status == "fail"

    def test_relief_below_the_pressure_it_runs_at_fails(self, tmp_path):
        """The valve feels what the pump adds and what it finds: level, less rise and losses of the suction line."""
        fluid = "{density: 1420 kg/m3, rheology: {model: newtonian, viscosity: 100 mPa.s}}"
        case = load_case(self.line(tmp_path, "relief_pressure: 200 kPa", fluid=fluid))
        pump = by_name(curve(case))
        check = check_of(pump, "relief_above_duty")
        weight, suction = case.fluid.density * GRAVITY, case.route[0]
        loss = solve(at_flow(case, pump.duty_upper.flow)).elements[0]
        found = 3.2 - suction.rise - (loss.friction_loss_upper + loss.fitting_loss) / weight
        assert check.limit == pytest.approx(weight * (pump.duty_upper.head + found), rel=1e-9)
        assert check.limit > check.value
        assert check.status == "fail"

    def test_a_power_without_a_figure_is_not_checked(self, tmp_path):
        """The row without efficiency is the one below the duty."""
        more = f"{self.MORE}\nmotor: {{power: 30 kW}}"
        rows = ((0, 100, 0), (1200, 90, 62), (2400, 76, 55))
        path = line_with(tmp_path, kind="positive-displacement", rows=rows, speed="200 rpm", more=more)
        pump = by_name(curve(load_case(path)))
        assert pump.duty.shaft_power is None
        assert [check_of(pump, name).status for name in ("motor_power", "torque")] == ["not checked"] * 2

    def test_it_is_never_told_to_be_throttled(self, tmp_path):
        pump = by_name(curve(load_case(self.line(tmp_path, flow="flow: 60 m3/h"))))
        said = next(caution for caution in pump.cautions if "more than maximum flow" in caution)
        assert said.endswith("slow it, never throttle it")

    def test_torque_and_motor_hold_at_a_restart_too(self, tmp_path):
        """``P = Q_th dp/eta_hm`` and ``T = P/omega`` at the pressure of the restart, from the rows by hand."""
        more = "relief_pressure: 1600 kPa\ntorque_limit: 500 N.m\nmotor: {power: 11 kW}"
        case = load_case(self.line(tmp_path, more))
        pump = by_name(curve(case), "restart after a stop")
        pressure = check_of(pump, "restart_head").value * case.fluid.density * GRAVITY
        table, displaced = case.pumps[0].table, 100 / 3600
        ratio = [displaced * e / q for e, q in zip(table.efficiency, table.flow, strict=True)]
        power = displaced * pressure / float(PchipInterpolator(table.pressure, ratio)(pressure))
        assert check_of(pump, "torque").value == pytest.approx(power / case.pumps[0].speed, rel=1e-9)
        assert check_of(pump, "torque").status == "fail"
        assert check_of(pump, "motor_power").value == pytest.approx(1.15 * power, rel=1e-9)
        assert check_of(pump, "motor_power").status == "fail"

    def test_speed_follows_the_flow_wanted(self, tmp_path):
        more = f"{self.MORE}\nvariable_speed: {{minimum: 50 rpm, maximum: 400 rpm}}"
        case = load_case(self.line(tmp_path, more))
        pump = by_name(curve(case))
        assert pump.duty.flow == pytest.approx(case.flow.design, rel=1e-9)


def test_files_are_written_and_refused(tmp_path):
    line = line_with(tmp_path)
    run = RUN.invoke(app, ["curve", str(line), "--csv", str(tmp_path / "out.csv"), "--svg", str(tmp_path / "out.svg")])
    assert run.exit_code in (0, 1)
    assert (tmp_path / "out.csv").read_text(encoding="utf-8").startswith("condition,flow [m3/h]")
    assert ElementTree.parse(tmp_path / "out.svg").getroot().tag.endswith("svg")
    nowhere = RUN.invoke(app, ["curve", str(line), "--csv", str(tmp_path / "no" / "out.csv")])
    assert nowhere.exit_code == 2
    assert "can't be written" in nowhere.stderr
    assert nowhere.stdout == ""


def test_a_restart_on_a_head_not_established_is_a_caution_at_best(tmp_path):
    """A pump of plenty of head at low flow in the slurry; on water the same figure would be sure."""
    rows = [(0, 90, 1, 2), (60, 80, 50, 2), (110, 62, 70, 3), (160, 30, 64, 4)]
    check = check_of(by_name(curve(load_case(line_with(tmp_path, rows=rows))), "restart after a stop"), "restart_head")
    assert check.value < check.limit
    assert check.status == "caution"
    assert "vendor must confirm" in check.basis


def test_slip_of_a_newtonian_liquid_goes_with_its_viscosity(tmp_path):
    """Twice as thin as the liquid of the curve: twice the slip at one pressure."""
    rows = ((0, 100, 60), (600, 96, 66), (1200, 92, 62))
    fluid = "{density: 1000 kg/m3, rheology: {model: newtonian, viscosity: 50 mPa.s}}"
    flows = []
    for more in ("relief_pressure: 900 kPa", "relief_pressure: 900 kPa\ntest_viscosity: 100 mPa.s"):
        path = line_with(tmp_path, fluid, kind="positive-displacement", rows=rows, speed="200 rpm", more=more)
        duty = by_name(curve(load_case(path))).duty
        flows.append((100 / 3600 - duty.flow) / (duty.head * 1000 * GRAVITY))
    assert flows[1] == pytest.approx(2 * flows[0], rel=1e-3)


@pytest.mark.parametrize(("option", "name"), [("--csv", "line.yaml"), ("--svg", "candidate.csv"), ("--csv", "old.svg")])
def test_no_file_of_another_kind_is_written_over(tmp_path, option, name):
    line = line_with(tmp_path)
    (tmp_path / "old.svg").write_text("<svg>mine</svg>", encoding="utf-8")
    before = (tmp_path / name).read_bytes()
    run = RUN.invoke(app, ["curve", str(line), option, str(tmp_path / name)])
    assert run.exit_code == 2
    assert "is there already" in run.stderr
    assert (tmp_path / name).read_bytes() == before


def test_a_table_and_a_chart_are_written_anew(tmp_path):
    line = line_with(tmp_path)
    files = ["--csv", str(tmp_path / "out.csv"), "--svg", str(tmp_path / "out.svg")]
    written = []
    for flow in ("100 m3/h", "110 m3/h"):
        text = line.read_text(encoding="utf-8").replace("maximum: 100 m3/h", f"maximum: {flow}")
        line.write_text(text, encoding="utf-8")
        assert RUN.invoke(app, ["curve", str(line), *files]).exit_code in (0, 1)
        written.append([(tmp_path / name).read_bytes() for name in ("out.csv", "out.svg")])
    assert written[0][0] != written[1][0]
    assert written[0][1] != written[1][1]
