"""Each check of a solved case: its status either side of its limit, and the key it asks for if an input is missing."""

import re

import pytest

from pipeflow.case.loading import load_text
from pipeflow.case.schema import DEPOSITION
from pipeflow.operability.deposition import FORMULAS
from pipeflow.study import solve

CASE = """
title: one line
fluid:
{solids}  specific_heat: 3.6 kJ/(kg.K)
  density: 1250 kg/m3
  rheology: {{{rheology}}}
flow: {flow}
source: {{level: 4 m}}
destination: {{level: 1 m}}
route:
  - {{pipe: first, size: NPS 6 Sch 40, length: 20 m, rise: -2 m}}
  - {{pipe: second, size: {size}, length: 300 m, rise: 10 m, hold_time: {hold}}}
{more}
"""
SOLIDS = (
    "  solids: {density: 2650 kg/m3, volume_fraction: 0.15, d85: 0.3 mm}\n"
    "  liquid: {density: 1000 kg/m3, viscosity: 1 mPa.s}\n"
)
PASTE = "model: bingham, yield_stress: 12 Pa, plastic_viscosity: 30 mPa.s"
WATERY = "model: newtonian, viscosity: 1.2 mPa.s"


def checks(
    rheology=PASTE,
    flow="100 m3/h",
    size="NPS 6 Sch 40",
    hold="1 s",
    more="limits: {restart_pressure: 900 kPa}",
    solids="",
):
    text = CASE.format(rheology=rheology, flow=flow, size=size, hold=hold, more=more, solids=solids)
    return {check.name: check for check in solve(load_text(text)).checks}


def test_the_keys_of_the_formulas_are_those_the_case_may_name():
    assert tuple(FORMULAS) == DEPOSITION


def test_every_check_has_a_basis_and_one_not_made_says_what_it_needs():
    found = checks(more="", solids="  solids: {density: 2650 kg/m3, volume_fraction: 0.15}\n")
    for check in found.values():
        assert check.basis
        assert re.fullmatch("[a-z_]+", check.name)
        assert (check.status == "not checked") == bool(check.needs)
        assert all(need in check.basis for need in check.needs)
    assert found["deposition"].needs == ("fluid.solids.d85", "fluid.liquid.viscosity")
    assert found["restart_pressure"].needs == ("limits.restart_pressure",)
    assert found["pipe_wall"].needs == ("pipe_wall",)


@pytest.mark.parametrize(("flow", "status"), [("250 m3/h", "ok"), ("120 m3/h", "fail")])
def test_deposition_in_turbulent_flow(flow, status):
    found = checks(rheology=WATERY, flow=flow, solids=SOLIDS)["deposition"]
    assert found.status == status
    assert found.source == "oroskar-turian"
    assert "from memory" in found.basis


def test_deposition_is_never_ok_in_laminar_flow():
    found = checks(
        rheology="model: bingham, yield_stress: 90 Pa, plastic_viscosity: 30 mPa.s", flow="300 m3/h", solids=SOLIDS
    )
    assert found["deposition"].value > found["deposition"].limit
    assert found["deposition"].status == "caution"
    assert found["laminar_transport"].status == "ok"


def test_coarse_solids_in_gentle_laminar_flow_are_a_caution_not_a_failure():
    found = checks(rheology="model: newtonian, viscosity: 100 mPa.s", flow="30 m3/h", solids=SOLIDS)[
        "laminar_transport"
    ]
    assert found.status == "caution"
    assert "common practice" in found.basis


def test_deposition_is_judged_by_the_formula_asked_for():
    more = "methods: {deposition: durand}"
    found = checks(rheology=WATERY, flow="200 m3/h", more=more, solids=SOLIDS)["deposition"]
    assert found.source == "durand"


def test_fine_solids_are_judged_inside_the_sublayer():
    fine = SOLIDS.replace("0.3 mm", "15 µm")
    assert checks(rheology=WATERY, flow="100 m3/h", solids=fine)["deposition"].source == "thomas-sublayer"


@pytest.mark.parametrize(("stress", "status"), [("9 Pa", "ok"), ("0.2 Pa", "caution")])
def test_static_suspension_proves_nothing_under_shear(stress, status):
    found = checks(rheology=f"model: bingham, yield_stress: {stress}, plastic_viscosity: 30 mPa.s", solids=SOLIDS)
    assert found["static_suspension"].status == status
    assert "proves nothing under shear" in found["static_suspension"].basis
    # 0.1 g d (rho_s - rho_f)
    assert found["static_suspension"].limit == pytest.approx(0.1 * 9.80665 * 0.3e-3 * 1650, rel=1e-12)


@pytest.mark.parametrize("flow", ["20 m3/h", "100 m3/h", "180 m3/h", "400 m3/h"])
def test_the_margin_to_transition_is_a_ratio_to_the_nearer_edge(flow):
    result = solve(
        load_text(CASE.format(rheology=PASTE, flow=flow, size="NPS 6 Sch 40", hold="1 s", more="", solids=""))
    )
    pipe = result.elements[1]
    margin = next(check for check in result.checks if check.name == "transition_margin")
    wanted = max(pipe.critical_velocity / pipe.velocity, pipe.velocity / pipe.turbulent_velocity)
    assert margin.value == pytest.approx(wanted, rel=1e-12)
    assert margin.status == ("ok" if wanted >= 1.2 else "caution")
    assert (wanted < 1) == (pipe.regime == "transitional")


@pytest.mark.parametrize(("limit", "status"), [("2000 1/s", "ok"), ("20 1/s", "fail")])
def test_shear_rate_at_the_wall(limit, status):
    assert checks(more=f"limits: {{wall_shear_rate: {limit}}}")["wall_shear_rate"].status == status


@pytest.mark.parametrize(("limit", "status"), [("200 Pa", "ok"), ("12 Pa", "fail")])
def test_shear_stress_at_the_wall(limit, status):
    assert checks(more=f"limits: {{wall_shear_stress: {limit}}}")["wall_shear_stress"].status == status


def test_heat_of_friction_is_pressure_over_density_and_specific_heat():
    text = CASE.format(rheology=PASTE, flow="100 m3/h", size="NPS 6 Sch 40", hold="1 s", more="", solids="")
    result = solve(load_text(text))
    heating = next(check for check in result.checks if check.name == "temperature_rise")
    loss = result.totals.head_loss * 1250 * 9.80665
    assert heating.value == pytest.approx(loss / (1250 * 3600), rel=1e-12)
    untold = CASE.replace("  specific_heat: 3.6 kJ/(kg.K)\n", "{more2}").format(
        rheology=PASTE, flow="100 m3/h", size="NPS 6 Sch 40", hold="1 s", solids="", more2="",
        more="limits: {temperature_rise: 2 K}",
    )  # fmt: skip
    (found,) = [check for check in solve(load_text(untold)).checks if check.name == "temperature_rise"]
    assert found.needs == ("fluid.specific_heat",)


def test_restart_is_the_gel_of_every_pipe_and_the_static_head():
    more = "restart: {static_yield_stress: 30 Pa}\nlimits: {restart_pressure: 900 kPa}"
    found = checks(more=more)["restart_pressure"]
    gel = 1.3 * 4 * 320 * 30 / 0.15405
    static = 1250 * 9.80665 * (1 - 2 + 10 - 4)
    assert found.value == pytest.approx(gel + static, rel=1e-4)
    assert found.status == "ok"
    assert checks(more=more.replace("900", "300"))["restart_pressure"].status == "fail"


def test_a_yield_stress_that_was_not_measured_is_never_better_than_a_caution():
    found = checks(more="limits: {restart_pressure: 90 MPa}")["restart_pressure"]
    assert found.status == "caution"
    assert "twice the dynamic yield stress, not measured" in found.basis


def test_the_suction_side_restarts_apart():
    more = "restart: {static_yield_stress: 30 Pa, pump_after: first}\nlimits: {restart_pressure: 900 kPa}"
    found = checks(more=more)["restart_suction"]
    assert found.value == pytest.approx(1.3 * 4 * 20 * 30 / 0.15405, rel=1e-4)
    assert found.limit == pytest.approx(1250 * 9.80665 * (4 + 2), rel=1e-12)
    thick = checks(more=more.replace("30 Pa", "300 Pa"))["restart_suction"]
    assert thick.status == "fail"


WALL = "pipe_wall: {code: B31.3, allowable_stress: 138 MPa, shut_in_pressure: %s}"


def test_the_wall_is_held_against_the_worst_pressure():
    found = checks(more=WALL % "1.5 MPa")
    assert found["pipe_wall"].status == "ok"
    assert "shut in" in found["pipe_wall"].basis
    assert found["pipe_wall"].source == "b31.3"
    assert checks(more=WALL % "20 MPa")["pipe_wall"].status == "fail"
    assert "licensed engineer" in found["pipe_wall"].basis


@pytest.mark.parametrize(
    ("wall", "needs"),
    [
        ("{code: B31.3, shut_in_pressure: 1 MPa}", "pipe_wall.allowable_stress"),
        ("{code: B31.4, shut_in_pressure: 1 MPa}", "pipe_wall.yield_strength"),
        ("{code: B31.3, allowable_stress: 138 MPa}", "pipe_wall.shut_in_pressure"),
        ("{shut_in_pressure: 1 MPa}", "pipe_wall.code"),
    ],
)
def test_a_wall_that_lacks_an_input_does_not_pass(wall, needs):
    assert checks(more=f"pipe_wall: {wall}")["pipe_wall"].needs == (needs,)


def test_a_pipe_that_fails_is_told_though_another_lacks_an_input():
    more = "pipe_wall: {code: B31.3, allowable_stress: 5 MPa, wear_allowance: 5 mm, shut_in_pressure: 3 MPa}"
    assert checks(size="OD 160 SDR 11", more=more)["pipe_wall"].status == "fail"


def test_a_wall_beyond_the_form_needs_a_rating():
    more = "pipe_wall: {code: B31.3, allowable_stress: 138 MPa, shut_in_pressure: 1 MPa}"
    found = checks(size="NPS 1/2 Sch XXS", flow="0.1 m3/h", more=more)["pipe_wall"]
    assert found.needs == ("pipe_wall.pressure_rating",)


def test_a_worn_through_wall_fails():
    more = "pipe_wall: {code: B31.4, yield_strength: 240 MPa, wear_allowance: 9 mm, shut_in_pressure: 1 MPa}"
    found = checks(more=more)["pipe_wall"]
    assert found.status == "fail"
    assert "nothing is left of the wall" in found.basis


def test_at_rest_solids_settle():
    found = checks(flow="{minimum: 0 m3/h, design: 100 m3/h}", solids=SOLIDS)["deposition"]
    assert found.status == "caution"
    assert "at rest" in found.basis


def test_polyethylene_is_held_to_its_derated_rating():
    more = "pipe_wall: {code: B31.3, allowable_stress: 138 MPa, shut_in_pressure: 500 kPa%s}"
    assert checks(size="OD 160 SDR 11", more=more % "")["pipe_wall"].needs == ("pipe_wall.pressure_rating",)
    rated = more % ", pressure_rating: 1.6 MPa, temperature_derating: 0.5"
    found = checks(size="OD 160 SDR 11", more=rated)["pipe_wall"]
    assert found.limit == pytest.approx(0.8e6)
    assert found.source == "pressure-rating"


def test_a_sudden_stop_is_never_worse_than_a_caution():
    thin = "pipe_wall: {code: B31.3, allowable_stress: 20 MPa, wear_allowance: 4 mm, shut_in_pressure: 0 kPa}"
    assert checks(rheology=WATERY, flow="250 m3/h", more=thin)["surge"].status == "caution"


def test_low_points_of_the_profile():
    siphon = (
        CASE.replace("rise: 10 m", "rise: 14 m")
        .replace("rise: -2 m", "rise: 2 m")
        .replace("level: 1 m", "level: -15 m")
    )
    more = "site: {altitude: 0 m}\n"
    text = siphon.format(
        rheology=WATERY, flow="5 m3/h", size="NPS 6 Sch 40", hold="1 s", more=more,
        solids="  liquid: {vapour_pressure: 3 kPa}\n",
    )  # fmt: skip
    found = {check.name: check for check in solve(load_text(text)).checks}["lowest_pressure"]
    assert found.status == "fail"
    assert found.limit == pytest.approx(3e3 - 101325)
    lacking = text.replace("  liquid: {vapour_pressure: 3 kPa}\n", "")
    found = {check.name: check for check in solve(load_text(lacking)).checks}["lowest_pressure"]
    assert found.status == "fail"  # below any vacuum: no vapour pressure is needed to know
    assert found.limit == -101325.0


@pytest.mark.parametrize(
    ("rheology", "ratio"),
    [(PASTE, 2.0), (WATERY, 1.25), ("model: power-law, consistency: 2 Pa.s^n, flow_index: 1.5", 2.2)],
)
def test_the_fastest_particle_of_a_hold_tube(rheology, ratio):
    found = checks(rheology=rheology, hold="2 min")["residence_time"]
    velocity = 100 / 3600 / (3.141592653589793 / 4 * 0.15405**2)
    assert found.value == pytest.approx(300 / (ratio * velocity), rel=1e-4)
    assert found.status == ("ok" if found.value >= 120 else "fail")
    assert "process authority" in found.basis


def test_the_word_of_comfort_is_never_used():
    result = solve(load_text(CASE.format(rheology=PASTE, flow="100 m3/h", size="NPS 6 Sch 40", hold="9 s",
                                         more=WALL % "1 MPa", solids=SOLIDS)))  # fmt: skip
    assert not any(re.search(r"\bsafe\b", check.basis) for check in result.checks)


def test_a_high_point_raises_the_pressure_of_the_wall_before_it():
    hill = CASE.replace("rise: -2 m", "rise: 18 m").replace("rise: 10 m", "rise: -40 m")
    wall = "pipe_wall: {code: B31.3, allowable_stress: 138 MPa}\n"
    given = {"rheology": WATERY, "flow": "40 m3/h", "size": "NPS 6 Sch 40", "hold": "1 s"}
    solids = "  liquid: {vapour_pressure: 3 kPa}\n"
    blind, told = (
        {check.name: check for check in solve(load_text(hill.format(**given, more=more, solids=solids))).checks}
        for more in (wall, wall + "site: {altitude: 0 m}\n")
    )
    # a site that is not given is taken at sea level, as the one told is
    assert told["pipe_wall"].value == blind["pipe_wall"].value > 1e5
    assert told["lowest_pressure"].status == "fail"


def test_restart_over_a_crest_asks_for_the_crest():
    """No siphon draws a stopped line on: 4 L tau_s/D of the climb and its rise, by hand, not less the fall behind."""
    text = """\
title: Over a crest
fluid: {density: 1500 kg/m3, rheology: {model: bingham, yield_stress: 8 Pa, plastic_viscosity: 20 mPa.s}}
flow: 100 m3/h
restart: {static_yield_stress: 16 Pa}
route:
  - {pipe: climb, diameter: 250 mm, length: 2500 m, rise: 80 m}
  - {pipe: fall, diameter: 250 mm, length: 3000 m, rise: -140 m}
limits: {restart_pressure: 2500 kPa}
"""
    found = {check.name: check for check in solve(load_text(text)).checks}["restart_pressure"]
    assert found.value == pytest.approx(1.3 * 4 * 2500 / 0.25 * 16 + 1500 * 9.80665 * 80, rel=1e-12)


def test_the_margin_sees_the_whole_range_of_flows():
    text = """\
title: Range of flows
fluid: {density: 1200 kg/m3, rheology: {model: bingham, yield_stress: 3 Pa, plastic_viscosity: 12 mPa.s}}
flow: {minimum: 20 m3/h, design: 40 m3/h, maximum: 120 m3/h}
route:
  - {pipe: only, diameter: 100 mm, length: 100 m}
"""
    found = {check.name: check for check in solve(load_text(text)).checks}["transition_margin"]
    assert found.status == "caution"
