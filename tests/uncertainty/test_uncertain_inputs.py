"""The ``uncertainty`` of a case file: what each text means in SI."""

from __future__ import annotations

import math

import pytest

from pipeflow.case.loading import load_text
from pipeflow.errors import InputError

CASE = """
title: Line of the tests
fluid:
  density: 1420 kg/m3
  temperature: 25 °C
  rheology:
    model: herschel-bulkley
    yield_stress: 9.5 Pa
    consistency: {law: arrhenius, reference: 0.62 Pa.s^n, reference_temperature: 20 °C, activation_energy: 24 kJ/mol,
                  tested: 0 .. 90 °C}
    flow_index: 0.58
flow: 140 m3/h
source: {level: -2 m}
route:
  - {pipe: line, diameter: 154 mm, length: 320 m}
uncertainty:
  %s
"""


def read(line):
    (found,) = load_text(CASE % line).uncertainty
    return found


@pytest.mark.parametrize(
    ("line", "kind", "middle", "spread"),
    [
        ("fluid.density: ± 2 %", "rectangular", 1420.0, 28.4),
        ("fluid.density: +- 2%", "rectangular", 1420.0, 28.4),
        ("fluid.density: +/-20 kg/m3", "rectangular", 1420.0, 20.0),
        ("fluid.density: '± 0.02 t/m3'", "rectangular", 1420.0, 20.0),
        ("fluid.rheology.yield_stress: uniform 8 .. 14 Pa", "rectangular", 11.0, 3.0),
        ("fluid.rheology.yield_stress: uniform 8 Pa .. 14 Pa", "rectangular", 11.0, 3.0),
        ("fluid.rheology.yield_stress: uniform 8Pa..0.014 kPa", "rectangular", 11.0, 3.0),
        ("fluid.rheology.yield_stress: normal 0.4 Pa", "normal", 9.5, 0.4),
        ("fluid.rheology.flow_index: normal 5 %", "normal", 0.58, 0.029),
        ("fluid.rheology.flow_index: uniform 0.5 .. 0.62", "rectangular", 0.56, 0.06),
        ("fluid.rheology.flow_index: ± 0.05", "rectangular", 0.58, 0.05),
        ("fluid.temperature: ± 5 K", "rectangular", 298.15, 5.0),
        ("fluid.temperature: uniform 20 .. 40 °C", "rectangular", 303.15, 10.0),
        ("source.level: ± 10 %", "rectangular", -2.0, 0.2),
        ("flow: ± 10 m3/h", "rectangular", 140.0 / 3600.0, 10.0 / 3600.0),
        ("route[line].diameter: ± 1 mm", "rectangular", 0.154, 0.001),
        ("restart.static_yield_stress: uniform 10 .. 30 Pa", "rectangular", 20.0, 10.0),
    ],
)
def test_a_text_is_a_distribution_in_si(line, kind, middle, spread):
    found = read(line)
    assert found.kind == kind
    assert (found.middle, found.spread) == pytest.approx((middle, spread), rel=1e-12)


def test_what_is_possible_goes_with_it():
    assert (read("fluid.rheology.yield_stress: ± 200 %").least, read("source.level: ± 1 m").least) == (0.0, -math.inf)
    assert read("fluid.rheology.flow_index: ± 0.05").most == 2.0


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("fluid.temperature: ± 5 %", "per cent of a temperature say nothing"),
        ("restart.static_yield_stress: ± 5 %", "the case gives no value to vary about"),
        ("restart.static_yield_stress: uniform -4 .. -2 Pa", "no value of it is possible: must be above 0"),
        ("fluid.rheology.flow_index: uniform 0.6 .. 0.5", "the lower end comes first"),
        ("fluid.rheology.flow_index: ± 0.1 Pa", "a bare number is needed"),
        ("fluid.rheology.flow_index: uniform 0.5 .. 0.6 Pa", "a bare number is needed"),
        ("fluid.rheology.yield_stress: uniform 8 m .. 14 Pa", "found 'uniform 8 m .. 14 Pa'; m is a unit of length"),
        ("fluid.density: normal", "a number and a unit are needed"),
        ("fluid.density: ± 1e400 kg/m3", "the number is too large"),
        ("fluid.density: ± 1e308 %", "the number is too large"),
        ("fluid.density: normally 5 %", "accepted: '± 10 %'"),
        ("fluid.density:", "no value"),
        ("fluid.solids.mass_fraction: ± 0.02", "the case gives no solids"),
    ],
)
def test_what_is_no_distribution_is_told_at_its_line(line, words):
    with pytest.raises(InputError) as caught:
        load_text(CASE % line)
    (problem,) = caught.value.problems
    assert problem.line == 17
    assert words in str(problem)


def test_one_quantity_is_given_once():
    solids = "  solids: {density: 2330 kg/m3, mass_fraction: 0.52}\n  temperature"
    two = "fluid.solids.mass_fraction: ± 0.02\n  fluid.solids.volume_fraction: ± 0.02"
    with pytest.raises(InputError, match="are one quantity") as caught:
        load_text((CASE % two).replace("  temperature", solids, 1))
    assert len(caught.value.problems) == 1


def test_with_another_fault_the_form_is_still_looked_at():
    with pytest.raises(InputError) as caught:
        load_text((CASE % "fluid.density: about 2 %").replace("140 m3/h", "140"))
    assert [problem.line for problem in caught.value.problems] == [12, 17]
