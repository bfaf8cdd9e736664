"""What the pump's vendor is told: every duty against a case that has its flow for design, and the governing one."""

from __future__ import annotations

from dataclasses import replace

import pytest

from pipeflow.case.loading import load_text
from pipeflow.case.model import FlowRange
from pipeflow.report.html.about_vendor import governing_text, rheology_text, vendor_blocks
from pipeflow.rheology import Bingham, Newtonian
from pipeflow.study import solve
from pipeflow.study.pumping.vendor import HIGHEST_HEAD, HIGHEST_POWER, LOWEST_NPSH, vendor_duties

CASE = """
title: vendor
fluid:
  density: 1400 kg/m3
  liquid: {vapour_pressure: 2.3 kPa}
  rheology: {model: bingham, yield_stress: 6 Pa, plastic_viscosity: 20 mPa.s}
flow: {minimum: 100 m3/h, design: 150 m3/h, maximum: 180 m3/h}
site: {atmospheric_pressure: 90 kPa}
source: {level: 3 m, lowest_level: 1 m}
route:
  - {pipe: suction, diameter: 200 mm, length: 10 m}
  - {pump: pump}
  - {pipe: main, diameter: 154 mm, length: 300 m, rise: 10 m}
scenarios:
  heavy: {fluid.density: 1600 kg/m3, flow: {minimum: 100 m3/h, design: 150 m3/h, maximum: 178 m3/h}}
  one flow: {flow: {minimum: 140 m3/h, design: 140 m3/h, maximum: 140 m3/h}}
"""


@pytest.fixture(scope="module")
def case():
    return load_text(CASE)


@pytest.fixture(scope="module")
def duties(case):
    return vendor_duties(case)


def test_case_and_scenarios_are_told_at_design_and_at_maximum_flow(duties):
    assert [(one.condition, one.at, round(3600.0 * one.flow)) for one in duties] == [
        ("the case", "design", 150),
        ("the case", "maximum", 180),
        ("heavy", "design", 150),
        ("heavy", "maximum", 178),
        ("one flow", "design", 140),
    ]


def test_each_duty_is_that_of_a_case_with_its_flow_for_design(case, duties):
    conditions = {"the case": case, **case.scenarios}
    for one in duties:
        same = replace(conditions[one.condition], flow=FlowRange(one.flow, one.flow, one.flow), scenarios={})
        profile = solve(same).profile
        assert one.head == pytest.approx(profile.pump_head_upper, rel=1e-9)
        assert one.pressure == pytest.approx(profile.pump_pressure_upper, rel=1e-9)
        assert one.power == pytest.approx(profile.pump_pressure_upper * one.flow, rel=1e-9)


def test_npsh_available_is_air_over_vapour_and_the_lowest_level_less_the_friction_before_the_pump(case, duties):
    suction = solve(replace(case, scenarios={})).elements[0]
    over_vapour = (90e3 - 2.3e3 - suction.friction_loss_upper) / (1400.0 * 9.80665)
    assert duties[0].npsh_available == pytest.approx(1.0 + over_vapour, rel=1e-9)


def test_the_governing_duties_are_marked_once(duties):
    marks = {
        what: [one for one in duties if what in one.governs] for what in (HIGHEST_HEAD, HIGHEST_POWER, LOWEST_NPSH)
    }
    assert {what: len(found) for what, found in marks.items()} == dict.fromkeys(marks, 1)
    assert marks[HIGHEST_HEAD][0].head == max(one.head for one in duties)
    assert marks[HIGHEST_POWER][0].power == max(one.power for one in duties)
    assert marks[LOWEST_NPSH][0].npsh_available == min(one.npsh_available for one in duties)
    assert marks[HIGHEST_HEAD][0].condition == "the case"
    assert marks[HIGHEST_POWER][0].condition == "heavy"


def test_npsh_is_not_guessed_without_the_site(case):
    found = vendor_duties(replace(case, site=None))
    assert {one.npsh_available for one in found if one.condition == "the case"} == {None}


def test_the_same_duty_governs_only_once(case):
    found = vendor_duties(replace(case, scenarios={"alike": replace(case, scenarios={})}))
    assert [one.condition for one in found if HIGHEST_HEAD in one.governs] == ["the case"]


def test_the_page_says_which_duty_governs_and_what_flows(duties):
    highest = max(duties, key=lambda one: one.head)
    assert governing_text(duties).startswith(f"{highest.head:.2f} m, ")
    assert governing_text(duties).endswith("at 180.0 m3/h (the case, maximum flow)")
    texts = [block.text for block in vendor_blocks(duties) if block.form == "text"]
    assert any("is asked for in heavy at maximum flow" in text for text in texts)
    table, fluids = (block.rows for block in vendor_blocks(duties) if block.form == "table")
    assert len(table) == len(duties)
    assert [row[0] for row in fluids] == ["the case", "heavy", "one flow"]
    assert fluids[1][1:] == ("1600", "-", "bingham: yield stress 6.000 Pa, plastic viscosity 0.02000 Pa.s")


def test_a_case_without_duties_has_no_words_for_a_vendor():
    assert not list(vendor_blocks(()))
    assert not governing_text(())


def test_a_law_is_told_with_its_parameters():
    assert rheology_text(Newtonian(1e-3)) == "newtonian: viscosity 0.001000 Pa.s"
    assert rheology_text(Bingham(2.0, 0.01)).startswith("bingham: yield stress 2.000 Pa")
