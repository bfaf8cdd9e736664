"""What a right case file comes to: defaults, scenarios, and the less common ways of writing it."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import Case, FlowRange
from pipeflow.errors import InputError
from pipeflow.line.elements import Equipment, Pipe, Vessel
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

GOOD = (Path(__file__).parent / "good.yaml").read_text(encoding="utf-8")
SMALL = """
title: Small line
fluid:
  density: 1 kg/L
  rheology: {model: newtonian, viscosity: 1 cP}
flow: 36 m3/h
route:
  - {pipe: p, diameter: 100 mm, length: 10 m}
"""


def pipe(case: Case, place: int = 0) -> Pipe:
    element = case.route[place]
    assert isinstance(element, Pipe)
    return element


def refusal(text: str) -> list[str]:
    with pytest.raises(InputError) as caught:
        load_text(text)
    return [f"{problem.line}:{problem.column} {problem.key_path}" for problem in caught.value.problems]


def test_reading_a_case_brings_in_no_heavy_library() -> None:
    heavy = "{'scipy', 'matplotlib', 'pint', 'jinja2'} & set(sys.modules)"
    program = f"import sys, pipeflow.case.loading; print({heavy} or 'none')"
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert done.stdout == "none\n"


def test_a_full_case() -> None:
    case = load_case(Path(__file__).parent / "good.yaml")
    assert case.fluid.density == 1420.0
    assert case.fluid.rheology == HerschelBulkley(9.5, 0.62, 0.58)
    assert case.flow == FlowRange(pytest.approx(110 / 3600), pytest.approx(140 / 3600), pytest.approx(160 / 3600))
    assert (case.source, case.destination) == (Vessel(0.0, 3.2), Vessel(350e3, 2.0))
    assert pipe(case).fittings == {"entrance": 1.0, "elbow_90_long_radius": 2.0, "butterfly_valve": 1.0}
    assert case.route[1] == Equipment("densitometer", 12e3, pytest.approx(140 / 3600), 2.0)
    assert case.limits.velocity_maximum == 3.5
    assert case.pumps[0].speed == pytest.approx(154.985, abs=1e-3)
    assert case.sizes == {"suction line": "NPS 8 Sch 40"}
    assert case.default_roughness == {"suction line": "steel"}


def test_the_defaults() -> None:
    case = load_text(SMALL)
    assert case.flow == FlowRange(0.01, 0.01, 0.01)
    assert (case.source, case.destination, case.revision, case.notes) == (None, None, "", "")
    assert (pipe(case).rise, pipe(case).roughness) == (0.0, 0.05e-3)
    assert pipe(case).nominal_diameter == pytest.approx(3.937, abs=1e-3)
    assert case.methods.turbulent is None
    assert case.limits.head_loss is None


@pytest.mark.parametrize(
    ("written", "law"),
    [
        ("model: newtonian, viscosity: 21 mPa.s", Newtonian(0.021)),
        ("model: power-law, consistency: 620 mPa.s^n, flow_index: 0.5", PowerLaw(0.62, 0.5)),
        ("model: bingham, yield_stress: 0 Pa, plastic_viscosity: 21 cP", Bingham(0.0, 0.021)),
        ("model: casson, yield_stress: 4 Pa, casson_viscosity: 2 P", Casson(4.0, 0.2)),
    ],
)
def test_every_model(written: str, law: Rheology) -> None:
    read = load_text(SMALL.replace("model: newtonian, viscosity: 1 cP", written)).fluid.rheology
    assert type(read) is type(law)
    assert vars(read) == pytest.approx(vars(law))


@pytest.mark.parametrize(
    ("material", "roughness"), [("steel", 0.05e-3), ("polyethylene", 0.007e-3), ("sanitary", 0.0015e-3)]
)
def test_a_material_chooses_the_roughness(material: str, roughness: float) -> None:
    case = load_text(SMALL.replace("length", f"material: {material}, length"))
    assert pipe(case).roughness == roughness
    assert case.default_roughness == {"p": material}


@pytest.mark.parametrize(
    ("size", "material", "inches"),
    [("NPS 8 Sch 40", "steel", 8.0), ("nps8sch40", "steel", 8.0), ("BPE 1-1/2", "sanitary", 1.5)],
)
def test_a_size_chooses_bore_material_and_nominal_size(size: str, material: str, inches: float) -> None:
    case = load_text(SMALL.replace("diameter: 100 mm", f"size: {size}"))
    assert case.default_roughness == {"p": material}
    assert pipe(case).nominal_diameter == inches


def test_a_mass_flow_is_converted_by_the_density() -> None:
    assert load_text(SMALL.replace("36 m3/h", "36 t/h")).flow.design == pytest.approx(0.01, rel=1e-14)


def test_a_line_at_rest_is_a_case() -> None:
    assert load_text(SMALL.replace("36 m3/h", "0 m3/h")).flow.maximum == 0.0


def test_a_default_roughness_too_large_for_the_bore_is_asked_for() -> None:
    assert refusal(SMALL.replace("100 mm", "0.4 mm")) == ["8:5 route[p]"]


@pytest.mark.parametrize("written", ["1.0", '"1.0"', "B", "2024-05-01", "no", "012"])
def test_a_revision_is_kept_as_written(written: str) -> None:
    assert load_text(SMALL + f"revision: {written}\n").revision == written.strip('"')


def test_the_tested_shear_rates_are_kept() -> None:
    assert load_text(SMALL.replace("1 cP", "1 cP, tested: 5 .. 400 1/s")).tested_shear_rate == (5.0, 400.0)


def test_a_long_name_is_cut_in_messages_and_nowhere_else() -> None:
    name = "a pipe with a name as long as names may be, though few are " + "x" * 40
    text = SMALL.replace("pipe: p", f"pipe: '{name}'")
    changed = load_text(text + f"scenarios: {{s: {{'route[{name}].rise': 1 m}}}}\n")
    assert pipe(changed).name == name
    assert pipe(changed.scenarios["s"]).rise == 1.0
    assert len(refusal(text.replace("10 m}", "10}"))[0]) < 70


def scenario(changes: str, base: str = SMALL) -> Case:
    case = load_text(f"{base}scenarios:\n  s: {{{changes}}}\n")
    assert case.scenarios["s"].scenarios == {}
    assert case.scenarios["s"].title == case.title
    return case.scenarios["s"]


def test_a_scenario_changes_what_it_names_and_leaves_the_case_alone() -> None:
    case = load_case(Path(__file__).parent / "good.yaml")
    thick = case.scenarios["thick"]
    assert (thick.fluid.density, case.fluid.density) == (1480.0, 1420.0)
    assert thick.route == case.route
    assert pipe(case.scenarios["rough"], 2).roughness == pytest.approx(0.3e-3)
    assert case.scenarios["rough"].fluid == case.fluid


@pytest.mark.parametrize(
    ("changes", "read"),
    [
        ("limits.velocity.maximum: 3 m/s", lambda case: case.limits.velocity_maximum == 3.0),
        ("source.level: 2 m", lambda case: case.source.level == 2.0),
        ("'route[p].fittings.elbow_90': 4", lambda case: pipe(case).fittings == {"elbow_90": 4.0}),
        ("flow: {design: 18 m3/h}", lambda case: case.flow.design == pytest.approx(0.005)),
        ("'route[p].diameter': null, 'route[p].size': BPE 2", lambda case: case.sizes == {"p": "BPE 2"}),
        ("'route[p]': {pipe: q, diameter: 80 mm, length: 9 m}", lambda case: pipe(case).name == "q"),
        ("flow: 72 t/h, fluid.density: 2 t/m3", lambda case: case.flow.design == pytest.approx(0.01)),
        ("", lambda case: case.flow.design == 0.01),
    ],
)  # fmt: skip
def test_what_a_scenario_can_do(changes: str, read: object) -> None:
    assert callable(read)
    assert read(scenario(changes))


@pytest.mark.parametrize(
    ("changes", "places"),
    [
        ("fluid.density: 0 kg/m3", ["10:22 scenarios.s.fluid.density"]),
        ("fluid.rheology.model: bingham", ["10:7 scenarios.s.fluid.rheology.viscosity"]),
        ("'route[p].length': null", ["10:7 scenarios.s.route[p].length"]),
        ("'route[p].roughness': 90 mm", ["10:29 scenarios.s.route[p].roughness"]),
        ("'route[p].rise': 10.1 m", ["10:24 scenarios.s.route[p].rise"]),
        ("'route[p].rise': -9 m, 'route[p].length': 8 m", ["10:24 scenarios.s.route[p].rise"]),
        ("flow.design: 3 m3/h", ["10:7 scenarios.s.flow.design"]),
        ("scenarios.s: {}", ["10:7 scenarios.s.scenarios.s"]),
        ("fluid.density: {a: 1}, title: ''", ["10:22 scenarios.s.fluid.density", "10:37 scenarios.s.title"]),
        ("'route[p]': null", ["10:7 scenarios.s.route"]),
        ("'pumps[p].speed': 3 rpm", ["10:7 scenarios.s.pumps[p].speed"]),
        ("limits.head_loss: null", ["10:7 scenarios.s.limits.head_loss"]),
    ],
)
def test_a_fault_of_a_scenario_is_told_at_its_own_line(changes: str, places: list[str]) -> None:
    assert refusal(f"{SMALL}scenarios:\n  s: {{{changes}}}\n") == places


def test_a_fault_of_the_case_is_not_told_again_by_its_scenarios() -> None:
    text = GOOD.replace("1420 kg/m3", "1420").replace("head_loss: 60 m", "head_loss: 60")
    assert refusal(text) == ["5:12 fluid.density", "35:14 limits.head_loss"]


def test_a_misspelt_part_is_one_fault_though_scenarios_change_it() -> None:
    assert refusal(GOOD.replace("fluid:", "fliud:", 1)) == ["4:1 fliud"]
    assert refusal(GOOD.replace("limits:", "limits: *l\nx:")) == ["34:9 limits", "35:1 x"]
    assert refusal(GOOD.replace("- pipe: disch", "- pip: disch")) == ["27:5 route[3]"]
