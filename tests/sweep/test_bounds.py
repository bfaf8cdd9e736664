"""What a range may hold beside the other inputs of its case: as the case file with that value is judged."""

from __future__ import annotations

import re
from collections.abc import Iterator

import numpy as np
import pytest
from typer.testing import CliRunner

from pipeflow.case.axes import Axis, axis
from pipeflow.case.loading import load_text
from pipeflow.case.variables import variable
from pipeflow.cli import app
from pipeflow.errors import InputError
from pipeflow.study.ranges.envelope import default_ends, up_variable
from pipeflow.study.ranges.sweeping import sweep

CASE = """
title: Line of the tests
fluid:
  {fluid}
flow: {{minimum: 60 m3/h, design: 80 m3/h, maximum: 95 m3/h}}
source: {{level: 4 m, lowest_level: 1.5 m}}
route:
  - {{pipe: line, diameter: 150 mm, length: 300 m, rise: 20 m, roughness: 0.5 mm}}
"""
SLURRY = """solids: {density: 2650 kg/m3, mass_fraction: 0.4, d50: 40 µm, d85: 90 µm}
  liquid: {density: 998 kg/m3}
  rheology: {model: bingham, yield_stress: 6 Pa, plastic_viscosity: 20 mPa.s}"""
LEFT = SLURRY.replace("  liquid: {density: 998 kg/m3}\n", "  density: 1333 kg/m3\n")
LEFT_BY_VOLUME = LEFT.replace("mass_fraction: 0.4", "volume_fraction: 0.2")
CROSS = """density: 1100 kg/m3
  rheology:
    model: cross
    zero_shear_viscosity: 2 Pa.s
    infinite_shear_viscosity: 0.05 Pa.s
    time_constant: 1 s
    exponent: 1.2"""
CARREAU = CROSS.replace("cross", "carreau").replace("exponent: 1.2", "flow_index: 0.4")

# key path, a value just possible and one just not, as written; most of them need other inputs of the case to tell
EDGES = {
    (SLURRY, "route[line].rise"): (("299.9 m", "300.1 m"), ("-299.9 m", "-300.1 m")),
    (SLURRY, "route[line].length"): (("20.01 m", "19.99 m"),),
    (SLURRY, "route[line].roughness"): (("14.99 mm", "15.01 mm"), ("0 mm", "-0.01 mm")),
    (SLURRY, "route[line].diameter"): (("5.01 mm", "4.99 mm"),),
    (SLURRY, "route[line].loss_coefficient"): (("999999", "1000001"),),
    (SLURRY, "flow.minimum"): (("79.9 m3/h", "80.1 m3/h"), ("0 m3/h", "-1 m3/h")),
    (SLURRY, "flow.design"): (("60.1 m3/h", "59.9 m3/h"), ("94.9 m3/h", "95.1 m3/h")),
    (SLURRY, "flow.maximum"): (("80.1 m3/h", "79.9 m3/h"),),
    (SLURRY, "source.level"): (("1.51 m", "1.49 m"),),
    (SLURRY, "source.pressure"): (("-111 kPa", "-112 kPa"),),
    (SLURRY, "destination.pressure"): (("-111 kPa", "-112 kPa"),),
    (SLURRY, "fluid.solids.d50"): (("89 µm", "91 µm"),),
    (SLURRY, "fluid.solids.d85"): (("41 µm", "39 µm"),),
    (SLURRY, "fluid.density"): (("1342.7 kg/m3", "1342.9 kg/m3"), ("1316.3 kg/m3", "1316.0 kg/m3")),
    (LEFT, "fluid.density"): (("606.5 kg/m3", "605.5 kg/m3"), ("6620 kg/m3", "6630 kg/m3")),
    (LEFT_BY_VOLUME, "fluid.density"): (("851 kg/m3", "849 kg/m3"),),
    (CROSS, "fluid.rheology.infinite_shear_viscosity"): (("1.99 Pa.s", "2.01 Pa.s"), ("0.018 Pa.s", "0.015 Pa.s")),
    (CROSS, "fluid.rheology.zero_shear_viscosity"): (("0.051 Pa.s", "0.049 Pa.s"), ("5.8 Pa.s", "7.5 Pa.s")),
    (CROSS, "fluid.rheology.exponent"): (("1.36", "1.42"),),
    (CARREAU, "fluid.rheology.infinite_shear_viscosity"): (("1.99 Pa.s", "2.01 Pa.s"),),
    (CARREAU, "fluid.rheology.zero_shear_viscosity"): (("0.051 Pa.s", "0.049 Pa.s"),),
    (CARREAU, "fluid.rheology.transition_exponent"): (("9.99", "10.1"),),
    (CARREAU, "fluid.rheology.flow_index"): (("1.99", "2.01"),),
}  # fmt: skip


def case_of(fluid: str, scenario: str = ""):
    text = CASE.format(fluid=fluid)
    return load_text(f"{text}scenarios:\n  other: {{{scenario}}}\n" if scenario else text)


def edges() -> Iterator[tuple[str, str, str, str]]:
    for (fluid, path), pairs in EDGES.items():
        yield from ((fluid, path, good, bad) for good, bad in pairs)


@pytest.mark.parametrize(("fluid", "path", "good", "bad"), list(edges()))
def test_a_range_holds_what_the_file_may_say_and_no_more(fluid, path, good, bad):
    case = case_of(fluid)
    known = variable(case, path)
    assert not known.refusal(known.value)
    told = case_of(fluid, f'"{path}": {good}').scenarios["other"]
    assert known.read(good) == pytest.approx(variable(told, path).value)
    with pytest.raises(InputError):
        case_of(fluid, f'"{path}": {bad}')
    with pytest.raises(InputError):
        axis(case, f"{path}={good}..{bad}", 3, "sweep")


WORDS = {
    "route[line].rise=-400..10 m": "found '-400 m'; rises more than the pipe is long (300 m)",
    "route[line].roughness=0..50 mm": "found '50 mm'; too rough: at most a tenth of the bore, 15 mm",
    "route[line].diameter=1..50 mm": "found '1 mm'; too narrow for a roughness of 0.5 mm",
    "route[line].length=1..50 m": "found '1 m'; shorter than the pipe rises (20 m)",
    "flow.design=50..90 m3/h": "less than 'minimum'; minimum <= design <= maximum is needed",
    "source.level=1..3 m": "found '1 m'; below 'lowest_level', 1.5 m",
    "fluid.density=1200..1300 kg/m3": "found '1200 kg/m3'; solids and liquid make 1329.5 kg/m3: more than 1 % apart",
    "route[line].loss_coefficient=0..2e6": "must be 0 or more and at most 1e+06",
}


@pytest.mark.parametrize("text", WORDS)
def test_the_refusal_says_what_speaks_against_it(tmp_path, text):
    path = tmp_path / "line.yaml"
    path.write_text(CASE.format(fluid=SLURRY), encoding="utf-8")
    found = CliRunner().invoke(app, ["sweep", str(path), text])
    assert found.exit_code == 2
    assert WORDS[text] in found.stderr
    assert not found.stdout


def test_two_inputs_that_do_not_go_together_are_refused():
    case = case_of(SLURRY)
    ends = {"rise": (10.0, 200.0), "length": (50.0, 300.0)}
    rise, length = (Axis(variable(case, f"route[line].{key}"), values) for key, values in ends.items())
    with pytest.raises(InputError, match=re.escape("rises more than the pipe is long (50 m)")):
        sweep(case, [rise, length])
    assert len(sweep(case, [Axis(rise.variable, (10.0, 40.0)), length]).points) == 4


def test_a_tolerance_reaches_no_farther_than_what_is_possible():
    """Truncated, and told; a density is uncertain whatever its solids say."""
    text = CASE.format(fluid=SLURRY)
    case = load_text(f"{text}uncertainty: {{'route[line].rise': ± 400 m, fluid.density: ± 5 %}}\n")
    rise, density = case.uncertainty
    assert (rise.least, rise.most) == pytest.approx((-300.0, 300.0))
    assert (density.least, density.most) == (0.0, np.inf)


def test_the_envelope_is_drawn_over_what_is_possible():
    case = case_of(CROSS.replace("0.05 Pa.s", "1.5 Pa.s"))
    found = up_variable(case)
    assert found.path == "fluid.rheology.zero_shear_viscosity"
    assert default_ends(case, found) == pytest.approx((1.5, 4.0))
