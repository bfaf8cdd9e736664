"""What rests on assumed inputs: each change against a case that has it from the start."""

from __future__ import annotations

from dataclasses import replace

import pytest

from pipeflow.case.loading import load_text
from pipeflow.line.elements import Fluid, Vessel
from pipeflow.rheology import PowerLaw
from pipeflow.study import solve
from pipeflow.study.assumed import assumed_inputs

CASE = """
title: assumed
fluid:
  density: 1300 kg/m3
  rheology: {model: power-law, consistency: 2 Pa.s^n, flow_index: 0.5, status: assumed}
flow: {design: 60 m3/h, status: assumed}
destination: {level: 4 m, pressure: 50 kPa, status: assumed}
route:
  - {pipe: one, diameter: 120 mm, length: 200 m, roughness: 0.05 mm, rise: 3 m, status: assumed}
  - {pipe: two, diameter: 100 mm, length: 20 m}
"""


@pytest.fixture(scope="module")
def case():
    return load_text(CASE)


@pytest.fixture(scope="module")
def found(case):
    return {one.path: one for one in assumed_inputs(case)}


def head(case):
    return solve(case).totals.total_head_upper


def test_every_assumed_figure_and_every_default_is_there(found):
    assert set(found) == {
        "fluid.rheology.consistency",
        "fluid.rheology.flow_index",
        "flow",
        "destination.level",
        "destination.pressure",
        "route[one].length",
        "route[one].rise",
        "route[one].roughness",
        "route[two].roughness",
    }
    assert found["route[two].roughness"].why == "default of steel"
    assert found["flow"].why == "the case says so"


def test_the_strongest_stands_first(case):
    effects = [one.effect for one in assumed_inputs(case)]
    assert effects == sorted(effects, reverse=True)


def test_a_changed_parameter_is_the_case_that_has_it(case, found):
    density = case.fluid.density
    for name, by in (("raised", 1.1), ("lowered", 0.9)):
        changed = replace(case, fluid=Fluid(density, PowerLaw(2.0 * by, 0.5)))
        assert getattr(found["fluid.rheology.consistency"], name) == pytest.approx(head(changed) - head(case), rel=1e-9)


def test_the_laminar_loss_follows_the_consistency(case, found):
    """In laminar flow of a power law the friction is proportional to the consistency, and fittings lose nothing."""
    one = found["fluid.rheology.consistency"]
    totals = solve(case).totals
    density_and_gravity = case.fluid.density * 9.80665
    assert one.raised == pytest.approx(0.1 * totals.friction_loss / density_and_gravity, rel=1e-2)


def test_levels_and_pressures_move_the_static_head_alone(case, found):
    assert found["destination.level"].raised == pytest.approx(1.0, rel=1e-9)
    assert found["destination.pressure"].raised == pytest.approx(1e4 / (case.fluid.density * 9.80665), rel=1e-9)
    assert found["destination.pressure"].step == "10 kPa"
    assert found["route[one].rise"].lowered == pytest.approx(-0.3, rel=1e-9)


def test_solids_move_density_and_rheology(case_of):
    case = replace(case_of("thickener-underflow-readings"), assumed=("fluid.solids",))
    by_path = {one.path: one for one in assumed_inputs(case)}
    one = by_path["fluid.solids.mass_fraction"]
    assert one.step == "0.01"
    assert one.raised > 0 > one.lowered
    scenario = case.scenarios["thick"]
    assert scenario.solids.mass_fraction == pytest.approx(case.solids.mass_fraction + 0.03)
    assert one.raised < head(scenario) - head(case)


def test_a_case_without_assumptions_has_none(case):
    assert assumed_inputs(replace(case, assumed=(), default_roughness={})) == ()


def test_a_change_without_a_solution_is_none(case):
    changed = replace(case, assumed=("source",), source=Vessel(level=float("nan")), default_roughness={})
    assert all(one.raised is None for one in assumed_inputs(changed))
