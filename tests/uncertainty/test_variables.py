"""The inputs that may be varied by key path: every one of them against the case file with that one line changed."""

from __future__ import annotations

import re

import numpy as np
import pytest

from pipeflow.case.loading import load_text
from pipeflow.case.variables import VariableError, variable, variables
from pipeflow.case.varying import varied
from pipeflow.line import route

CASE = """
title: Line of the tests
fluid:
  {density}
  solids: {{density: 2330 kg/m3, {fraction}, d50: 18 µm, d85: 55 µm}}
  liquid: {{density: 998 kg/m3, viscosity: 1 mPa.s}}
  temperature: 25 °C
  rheology:
    model: herschel-bulkley
    yield_stress: {{law: power, a: 130 Pa, b: 4, tested: 0.2 .. 0.8}}
    consistency: {{law: arrhenius, reference: 0.62 Pa.s^n, reference_temperature: 20 °C,
                   activation_energy: 24 kJ/mol, tested: 0 .. 90 °C}}
    flow_index: 0.58
flow: {flow}
source: {{pressure: 20 kPa, level: 3.2 m}}
destination: {{pressure: 50 kPa, level: 2 m}}
route:
  - pipe: suction line
    size: NPS 8 Sch 40
    length: 12 m
    rise: -1.5 m
    fittings: {{entrance: 1, elbow_90_long_radius: 2}}
  - equipment: meter
    pressure_loss: 12 kPa
    at_flow: 210 t/h
  - pipe: dis.charge [1]
    diameter: 154 mm
    length: 320 m
    rise: 9 m
    roughness: 0.05 mm
    loss_coefficient: 3
    fittings: {{exit: 1}}
restart: {{static_yield_stress: 13.3 Pa}}
"""

STATED, MIXED = "density: 1420 kg/m3", ""
BY_MASS, BY_VOLUME = "mass_fraction: 0.52", "volume_fraction: 0.32"
FLOWS = ("{minimum: 110 m3/h, design: 140 m3/h, maximum: 155 m3/h}", "200 t/h", "{dry_solids: 104 t/h}")

CHANGES = {
    "fluid.solids.d85": (60e-6, "60 µm"),
    "fluid.temperature": (318.15, "45 °C"),
    "fluid.rheology.flow_index": (0.7, "0.7"),
    "source.level": (1.0, "1 m"),
    "source.pressure": (3e4, "30 kPa"),
    "destination.level": (4.0, "4 m"),
    "destination.pressure": (-1e4, "-10 kPa"),
    "route[suction line].length": (30.0, "30 m"),
    "route[suction line].roughness": (2e-4, "0.2 mm"),
    "route[dis.charge [1]].diameter": (0.16, "160 mm"),
    "route[dis.charge [1]].rise": (-4.0, "-4 m"),
    "route[dis.charge [1]].loss_coefficient": (7.0, "7"),
    "route[meter].pressure_loss": (3e4, "30 kPa"),
}
OF_SOLIDS = {"fluid.solids.mass_fraction": (0.45, "0.45"), "fluid.solids.volume_fraction": (0.3, "0.3")}


def case_of(density=STATED, fraction=BY_MASS, flow=FLOWS[0], scenario=""):
    text = CASE.format(density=density, fraction=fraction, flow=flow)
    return load_text(f"{text}scenarios:\n  other: {{{scenario}}}\n" if scenario else text)


def solved(case, values):
    given = varied(case, values)
    flow = np.stack(np.broadcast_arrays(given.design, given.minimum, given.maximum))
    size = given.particle_size
    return route.solve(flow, given.fluid, given.route, given.source, given.destination, particle_size=size)


def by_file(case):
    flow = np.array([case.flow.design, case.flow.minimum, case.flow.maximum])
    arguments = case.fluid, case.route, case.source, case.destination
    return route.solve(flow, *arguments, particle_size=case.particle_size)


def assert_agree(case, path, value):
    one, other = solved(case, {path: value}), by_file(case.scenarios["other"])
    for name in ("head_loss", "head_loss_upper", "total_head", "pressure_required"):
        assert getattr(one, name) == pytest.approx(getattr(other, name), rel=1e-11), name


@pytest.mark.parametrize("flow", FLOWS)
@pytest.mark.parametrize(("path", "change"), CHANGES.items())
def test_each_input_is_what_the_file_would_say(path, change, flow):
    case = case_of(flow=flow, scenario=f'"{path}": {change[1]}')
    assert_agree(case, path, change[0])


@pytest.mark.parametrize("flow", FLOWS)
@pytest.mark.parametrize("fraction", [BY_MASS, BY_VOLUME])
def test_solids_are_mixed_as_the_file_would(fraction, flow):
    path = f"fluid.solids.{fraction.partition(':')[0]}"
    value, text = OF_SOLIDS[path]
    for changed in ((path, value, text), ("fluid.liquid.density", 1010.0, "1010 kg/m3")):
        case = case_of(MIXED, fraction, flow, f"{changed[0]}: {changed[2]}")
        assert_agree(case, *changed[:2])
    case = case_of(MIXED, fraction, flow, "fluid.solids.density: 2500 kg/m3")
    assert_agree(case, "fluid.solids.density", 2500.0)


@pytest.mark.parametrize("flow", FLOWS[1:])
def test_a_flow_by_mass_stays_that_mass_as_the_density_varies(flow):
    case = case_of(flow=flow, scenario="fluid.density: 1412 kg/m3")
    assert_agree(case, "fluid.density", 1412.0)


def test_a_stated_density_follows_the_solids_in_the_ratio_of_the_mixtures():
    case = case_of()
    found = varied(case, {"fluid.solids.mass_fraction": np.array([0.52, 0.45])})
    mixed = [1.0 / (c / 2330.0 + (1.0 - c) / 998.0) for c in (0.52, 0.45)]
    assert found.fluid.density == pytest.approx([1420.0, 1420.0 * mixed[1] / mixed[0]], rel=1e-12)


def test_what_is_not_varied_is_the_case_to_the_last_bit():
    for density in (STATED, MIXED):
        for fraction in (BY_MASS, BY_VOLUME):
            case = case_of(density, fraction)
            one, other = solved(case, {}), by_file(case)
            assert np.array_equal(one.total_head_upper, other.total_head_upper)


def test_a_parameter_with_a_law_is_scaled_from_what_the_law_gives():
    case = case_of()
    law = 130.0 * 0.45**4
    paths = {"fluid.solids.mass_fraction": 0.45, "fluid.rheology.yield_stress": 1.2 * 130.0 * 0.52**4}
    assert varied(case, paths).fluid.rheology.yield_stress == pytest.approx(1.2 * law, rel=1e-12)
    assert not np.any(varied(case, paths).is_carried_on)
    beyond = varied(case, {"fluid.solids.mass_fraction": np.array([0.5, 0.85])})
    assert beyond.is_carried_on.tolist() == [False, True]


def test_the_flow_scales_all_three_and_each_on_top_of_it():
    case = case_of()
    found = varied(case, {"flow": 280.0 / 3600.0, "flow.maximum": 170.0 / 3600.0})
    assert [found.minimum, found.design, found.maximum] == pytest.approx(
        [220.0 / 3600.0, 280.0 / 3600.0, 340.0 / 3600.0], rel=1e-12
    )
    outright = varied(case_of(flow=FLOWS[2]), {"fluid.solids.mass_fraction": 0.4}, flow=np.array([0.01, 0.02]))
    assert outright.minimum is outright.design is outright.maximum
    assert outright.design.tolist() == [0.01, 0.02]


def test_arrays_of_one_shape_are_solved_as_one_by_one():
    case = case_of(MIXED, flow=FLOWS[2])
    some = {
        "fluid.solids.mass_fraction": np.array([[0.45], [0.5]]),
        "flow.dry_solids": np.array([80.0, 90.0, 100.0]) / 3.6,
        "route[suction line].length": np.array([10.0, 20.0, 30.0]),
    }
    whole = solved(case, some).total_head
    assert whole.shape == (3, 2, 3)
    for row in range(2):
        for column in range(3):
            one = {path: values[row, 0] if values.ndim == 2 else values[column] for path, values in some.items()}
            assert whole[:, row, column] == pytest.approx(solved(case, one).total_head, rel=1e-12)


@pytest.mark.parametrize(
    ("path", "words"),
    [
        ("fluid.rheology.yield_stres", "did you mean fluid.rheology.yield_stress?"),
        ("route[suction line].lenght", "did you mean route[suction line].length?"),
        ("route[suction lin].length", "did you mean route[suction line].length?"),
        ("route[suction line].size", "a size is a name, no number: vary route[suction line].diameter"),
        ("flow.dry_solids", "the case gives its flow as flow: flow, flow.minimum, flow.design, flow.maximum"),
        ("limits.head_loss", "what can: fluid.…, flow, source.…, destination.…, route[NAME].…, restart.…"),
        ("", "this cannot be varied"),
    ],
)
def test_a_path_that_cannot_be_varied_is_worded(path, words):
    with pytest.raises(VariableError, match=re.escape(words)):
        varied(case_of(), {path: 1.0})


def test_values_are_read_with_their_units_and_bounds():
    case = case_of()
    assert variable(case, "fluid.rheology.yield_stress").read("14 Pa") == 14.0
    assert variable(case, "fluid.solids.mass_fraction").read("0.5") == 0.5
    for path, text, words in (
        ("fluid.rheology.yield_stress", "14", "without a unit"),
        ("fluid.rheology.yield_stress", "-1 Pa", "must be 0 or more"),
        ("fluid.rheology.flow_index", "2.5", "must be above 0 and at most 2"),
        ("fluid.solids.mass_fraction", "50 %", "a bare number"),
    ):
        with pytest.raises(VariableError, match=words):
            variable(case, path).read(text)


def test_only_one_fraction_of_the_solids_is_varied():
    with pytest.raises(VariableError, match="one quantity"):
        varied(case_of(), {"fluid.solids.mass_fraction": 0.5, "fluid.solids.volume_fraction": 0.3})


def test_every_variable_of_the_case_is_listed_with_its_value():
    found = variables(case_of(flow=FLOWS[1]))
    assert found["flow"].value == pytest.approx(200.0 / 3.6)
    assert found["flow"].dimension == "mass flow"
    assert "flow.design" not in found
    assert found["fluid.temperature"].shown(298.15) == "25.00 °C"
