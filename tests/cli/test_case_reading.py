"""What a right case file comes to: defaults, scenarios, and the less common ways of writing it."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import Case, FlowRange, Liquid, Site
from pipeflow.errors import InputError
from pipeflow.line.elements import Equipment, Pipe, Vessel
from pipeflow.record import document
from pipeflow.rheology import (
    Bingham,
    Carreau,
    Casson,
    Cross,
    Ellis,
    HerschelBulkley,
    Newtonian,
    PowerLaw,
    Rheology,
    RobertsonStiff,
    Sisko,
)
from pipeflow.study import solve

HERE = Path(__file__).parent
GOOD = (HERE / "good.yaml").read_text(encoding="utf-8")
SMALL = """
title: Small line
fluid:
  density: 1 kg/L
  rheology: {model: newtonian, viscosity: 1 cP}
flow: 36 m3/h
route:
  - {pipe: p, diameter: 100 mm, length: 10 m}
"""
VISCOSITIES = "zero_shear_viscosity: 12 Pa.s, infinite_shear_viscosity: 20 mPa.s"
MIXED = SMALL.replace(
    "density: 1 kg/L", "solids: {density: 2650 kg/m3, mass_fraction: 0.5}\n  liquid: {density: 1 kg/L}"
)


def pipe(case: Case, place: int = 0) -> Pipe:
    element = case.route[place]
    assert isinstance(element, Pipe)
    return element


def refusal(text: str) -> list[str]:
    with pytest.raises(InputError) as caught:
        load_text(text, str(HERE / "case.yaml"))
    return [f"{problem.line}:{problem.column} {problem.key_path}" for problem in caught.value.problems]


def loaded_by_reading(file: Path, *modules: str) -> list[str]:
    """Which of these modules the reading of a case brings in."""
    program = (
        "import sys, pipeflow.case.loading as loading; loading.load_case(sys.argv[1]); "
        "print(*sorted(set(sys.argv[2:]) & set(sys.modules)))"
    )
    command = [sys.executable, "-c", program, str(file), *modules]
    return subprocess.run(command, capture_output=True, text=True, check=True).stdout.split()


RARE = (
    "pipeflow.pumping.curve", "pipeflow.case.pumps_part", "pipeflow.case.pump_curves", "pipeflow.case.sizing_part",
    "pipeflow.case.job_part", "pipeflow.case.wording", "pipeflow.case.tables", "pipeflow.rheology.fitting",
)  # fmt: skip


def test_reading_a_case_brings_in_no_heavy_library() -> None:
    assert loaded_by_reading(HERE / "good.yaml", "scipy", "matplotlib", "pint", "jinja2") == []


def test_reading_a_case_brings_in_no_part_of_what_it_does_not_hold() -> None:
    assert loaded_by_reading(HERE.parents[1] / "cases" / "thin-filtrate.yaml", *RARE) == []
    assert "pipeflow.pumping.curve" in loaded_by_reading(HERE / "good.yaml", *RARE)


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
        (f"model: cross, {VISCOSITIES}, time_constant: 3 s, exponent: 0.7", Cross(12.0, 0.02, 3.0, 0.7)),
        (f"model: carreau, {VISCOSITIES}, time_constant: 3 s, flow_index: 0.3", Carreau(12.0, 0.02, 3.0, 0.3)),
        (
            f"model: carreau, {VISCOSITIES}, time_constant: 3 s, flow_index: 0.3, transition_exponent: 1.2",
            Carreau(12.0, 0.02, 3.0, 0.3, 1.2),
        ),
        (
            "model: sisko, infinite_shear_viscosity: 20 mPa.s, consistency: 2 Pa.s^n, flow_index: 0.4",
            Sisko(0.02, 2.0, 0.4),
        ),
        ("model: ellis, zero_shear_viscosity: 12 Pa.s, half_stress: 8 Pa, exponent: 2.4", Ellis(12.0, 8.0, 2.4)),
        (
            "model: robertson-stiff, consistency: 2 Pa.s^n, flow_index: 0.4, rate_offset: 4 1/s",
            RobertsonStiff(2.0, 0.4, 4.0),
        ),
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


def test_a_density_is_mixed_of_solids_and_liquid() -> None:
    case = load_text(MIXED)
    assert case.fluid.density == pytest.approx(1452.05, abs=5e-3)
    assert case.density_is_mixed
    assert case.solids is not None
    assert (case.solids.mass_fraction, case.solids.density) == (0.5, 2650.0)
    assert case.solids.volume_fraction == pytest.approx(0.27397, abs=5e-6)
    by_volume = load_text(MIXED.replace("mass_fraction: 0.5", f"volume_fraction: {case.solids.volume_fraction!r}"))
    assert by_volume.fluid.density == pytest.approx(case.fluid.density, rel=1e-14)
    assert by_volume.solids is not None
    assert by_volume.solids.mass_fraction == pytest.approx(0.5, rel=1e-14)


@pytest.mark.parametrize(("density", "is_near"), [(1437.6, True), (1437.5, False), (1466.5, True), (1466.7, False)])
def test_a_stated_density_may_be_1_percent_off_the_mixed_one(density: float, is_near: bool) -> None:
    text = MIXED.replace("  solids", f"  density: {density} kg/m3\n  solids")
    if is_near:
        case = load_text(text)
        assert (case.fluid.density, case.density_is_mixed) == (density, False)
        assert case.solids is not None
        assert case.solids.volume_fraction == pytest.approx(0.27397, abs=5e-6)
    else:
        with pytest.raises(InputError, match=rf"make 1452.1 kg/m3, this is {density} kg/m3"):
            load_text(text)


def test_a_liquid_without_a_density_has_the_one_the_solids_leave() -> None:
    text = MIXED.replace(
        "liquid: {density: 1 kg/L}", "liquid: {vapour_pressure: 3.2 kPa}\n  density: 1452.0547945 kg/m3"
    )
    liquid = load_text(text).liquid
    assert liquid is not None
    assert (liquid.density, liquid.vapour_pressure) == (pytest.approx(1000.0, rel=1e-9), 3200.0)
    alone = load_text(SMALL.replace("  rheology", "  liquid: {vapour_pressure: 0.5 psia, viscosity: 1 cP}\n  rheology"))
    assert alone.liquid == Liquid(None, 1e-3, pytest.approx(3447.4, abs=0.1))


@pytest.mark.parametrize(
    ("written", "flows"),
    [
        ("{dry_solids: 55 t/h}", (55.0, 55.0, 55.0)),
        ("{dry_solids: {design: 55 t/h, maximum: 61 t/h}}", (55.0, 55.0, 61.0)),
        ("{dry_solids: {minimum: 0 t/h, design: 55 t/h, maximum: 61000 kg/h}}", (0.0, 55.0, 61.0)),
    ],
)
def test_dry_solids_make_the_flow_of_the_slurry(written: str, flows: tuple[float, ...]) -> None:
    flow = load_text(MIXED.replace("36 m3/h", written)).flow
    # half the mass is solids, at 5300/3.65 kg/m3
    expected = [dry / 3.6 / 0.5 / (5300 / 3.65) for dry in flows]
    assert [flow.minimum, flow.design, flow.maximum] == pytest.approx(expected, rel=1e-14)


def test_dry_solids_keep_their_mass_at_a_stated_density() -> None:
    text = MIXED.replace("  solids", "  density: 1460 kg/m3\n  solids").replace("36 m3/h", "{dry_solids: 36 t/h}")
    assert load_text(text).flow.design == pytest.approx(10 / 0.5 / 1460, rel=1e-14)


def test_site_temperature_and_the_lesser_keys() -> None:
    more = "site: {altitude: 1850 m}\ndestination: {level: -1 m, discharge: free}\n"
    text = SMALL.replace("length", "loss_coefficient: 3.5, length").replace(
        "  rheology", "  temperature: 24 °C\n  rheology"
    )
    case = load_text(text + more)
    assert case.site == Site(altitude=1850.0)
    assert case.temperature == pytest.approx(297.15)
    assert case.destination == Vessel(0.0, -1.0, "free")
    assert pipe(case).loss_coefficient == 3.5
    assert load_text(SMALL + "site: {atmospheric_pressure: 81 kPa}").site == Site(atmospheric_pressure=81e3)
    plain = load_text(SMALL + "destination: {}")
    assert (plain.site, plain.temperature, pipe(plain).loss_coefficient) == (None, None, 0.0)
    assert plain.destination == Vessel(0.0, 0.0, "submerged")


def test_assumed_inputs_are_kept_by_key_path() -> None:
    text = (
        MIXED.replace("viscosity: 1 cP", "viscosity: 1 cP, status: assumed")
        .replace("mass_fraction: 0.5", "mass_fraction: 0.5, status: measured")
        .replace("{density: 1 kg/L}", "{density: 1 kg/L, status: assumed}")
        .replace("length: 10 m", "length: 10 m, status: assumed")
    )
    more = "  - {equipment: e, pressure_loss: 1 bar, status: vendor}\nsource: {level: 2 m, status: assumed}\n"
    case = load_text(f"{text}{more}scenarios: {{s: {{fluid.rheology.status: measured}}}}\n")
    assert case.assumed == ("fluid.liquid", "fluid.rheology", "source", "route[p]")
    assert case.scenarios["s"].assumed == ("fluid.liquid", "source", "route[p]")


@pytest.mark.parametrize(
    ("changes", "density"),
    [
        ("fluid.solids.mass_fraction: 0.6", 1 / (0.6 / 2650 + 0.4 / 1000)),
        ("fluid.liquid.density: 1100 kg/m3", 1 / (0.5 / 2650 + 0.5 / 1100)),
        ("fluid.solids.mass_fraction: null, fluid.solids.volume_fraction: 0.2", 1330.0),
        ("fluid.density: 1450 kg/m3", 1450.0),
        ("fluid.solids: null, fluid.density: 1300 kg/m3", 1300.0),
    ],
)
def test_a_scenario_mixes_anew(changes: str, density: float) -> None:
    changed = scenario(changes, MIXED)
    assert changed.fluid.density == pytest.approx(density, rel=1e-14)


def test_a_scenario_of_thicker_slurry_carries_the_same_dry_solids_in_less_of_it() -> None:
    changed = scenario("fluid.solids.mass_fraction: 0.6", MIXED.replace("36 m3/h", "{dry_solids: 36 t/h}"))
    assert changed.flow.design == pytest.approx(10 * (1 / 2650 + 0.4 / 0.6 / 1000), rel=1e-14)


SLURRY = """
title: Slurry line
fluid:
  solids: {density: 2650 kg/m3, mass_fraction: 0.5, d85: 80 um}
  liquid: {density: 1 kg/L}
  rheology: {model: bingham, yield_stress: 6 Pa, plastic_viscosity: 12 mPa.s, status: assumed}
flow: {dry_solids: 200 t/h}
route:
  - {pipe: p, diameter: 200 mm, length: 100 m, status: assumed}
methods: {turbulent: slatter}
scenarios:
  coarse: {fluid.solids.d85: 400 um}
  settled: {fluid.rheology.status: measured, "route[p].status": vendor}
"""


def test_the_size_of_the_solids_reaches_the_friction() -> None:
    result = solve(load_text(SLURRY))
    pipe_result, coarse = result.elements[0], result.scenarios["coarse"].elements[0]
    assert (pipe_result.regime, pipe_result.method) == ("turbulent", "slatter")
    assert coarse.friction_loss > 1.05 * pipe_result.friction_loss > 0
    assert "it needs the d85 of the solids" not in result.spread.left_out.values()


def test_assumed_inputs_are_listed_in_the_result_and_said_once() -> None:
    result = solve(load_text(SLURRY))
    laid_out = document(result)
    assert laid_out["assumed_inputs"] == ["fluid.rheology", "route[p]"]
    assert laid_out["density_kg_m3"] == pytest.approx(5300 / 3.65)
    said = [caution for caution in result.cautions if "assumed, not measured" in caution]
    assert said == ["assumed, not measured: fluid.rheology, route[p]"]
    settled = document(result.scenarios["settled"])
    assert settled["assumed_inputs"] == []
    assert not any("not measured" in caution for caution in settled["cautions"])


def test_a_scenario_may_turn_to_a_method_for_its_own_rheology() -> None:
    changes = "fluid.rheology: {model: power-law, consistency: 2 Pa.s^n, flow_index: 0.8}, methods.turbulent: irvine"
    assert scenario(changes).methods.turbulent == "irvine"


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
        (
            "methods.turbulent: clapp, fluid.rheology: {model: casson, yield_stress: 1 Pa, casson_viscosity: 1 cP}",
            ["10:26 scenarios.s.methods.turbulent"],
        ),
        ("fluid.solids: {density: 3 t/m3, mass_fraction: 0.9}", ["10:7 scenarios.s.fluid.density"]),
        ("fluid.density: null", ["10:7 scenarios.s.fluid.density"]),
        ("site.altitude: 12 km", ["10:22 scenarios.s.site.altitude"]),
        ("flow.dry_solids: 3 t/h", ["10:7 scenarios.s.flow.dry_solids"]),
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


@pytest.mark.parametrize(
    ("written", "told"),
    [
        ("diameter: 0,1 m", "7:25 route[p].diameter"),
        ("diameter: 100 mm, fittings: {elbow_90: 2,5, exit: 1}", "7:54 route[p].fittings.elbow_90"),
        ("diameter: 1,234,567 mm", "7:25 route[p].diameter"),
        ("diameter: -1,5 m", "7:25 route[p].diameter"),
    ],
)
def test_a_comma_in_a_number_of_a_flow_map_is_one_fault(written: str, told: str) -> None:
    assert refusal(SMALL.strip().replace("diameter: 100 mm", written)) == [told]


@pytest.mark.parametrize(
    "written", ["loss_coefficient: 2, 45 mm", "fittings: {exit: 1,45_elbow}", "loss_coefficient: '2',5"]
)
def test_a_key_that_continues_no_number_is_told_as_a_key(written: str) -> None:
    text = SMALL.replace("length:", f"{written}, length:")
    with pytest.raises(InputError) as caught:
        load_text(text)
    assert "decimal point" not in str(caught.value)


@pytest.mark.parametrize(
    ("curve", "told"),
    [
        ("curves/a.csv", None),
        ("a.csv", "no such file"),
        ("curves", "a directory"),
        ("/dev/null", "not a regular file"),
        ("curves/a.csv/b.csv", "cannot be read: Not a directory"),
    ],
)
def test_the_curve_of_a_pump_is_a_file_from_the_folder_of_the_case(
    tmp_path: Path, curve: str, told: str | None
) -> None:
    (tmp_path / "curves").mkdir()
    (tmp_path / "curves" / "a.csv").write_bytes((HERE / "candidate-a.csv").read_bytes())
    path = tmp_path / "case.yaml"
    path.write_text(f"{SMALL}pumps:\n  - {{name: A, kind: centrifugal, curve: {curve}}}\n")
    if told is None:
        assert load_case(path).pumps[0].curve == curve
        return
    with pytest.raises(InputError) as caught:
        load_case(path)
    (problem,) = caught.value.problems
    assert problem.message.startswith(f"found '{curve}'; {told}; the path of a file is needed")
    assert (problem.line, problem.key_path) == (10, "pumps[A].curve")


def test_the_curve_a_scenario_names_is_looked_for_too() -> None:
    text = GOOD.replace("  rough: {", '  rough: {"pumps[candidate A].curve": b.csv, ')
    assert refusal(text) == ["48:39 scenarios.rough.pumps[candidate A].curve"]


ODD = {"escape": "\x1b", "zero width": "\u200b", "right to left": "\u202e", "isolate": "\u2066", "soft hyphen": "\xad"}


@pytest.mark.parametrize("char", ODD.values(), ids=ODD)
@pytest.mark.parametrize(
    "text",
    [
        SMALL.replace("pipe: p", 'pipe: "a?"'),
        SMALL.replace("Small line", '"a?"'),
        SMALL + 'scenarios: {"a?": {}}\n',
        SMALL + 'pumps: [{name: "a?", kind: centrifugal, curve: candidate-a.csv}]\n',
    ],
    ids=["pipe", "title", "scenario", "pump"],
)
def test_a_character_nobody_sees_is_refused_in_a_name_and_shown_escaped(text: str, char: str) -> None:
    escaped = f"\\u{ord(char):04x}"
    with pytest.raises(InputError) as caught:
        load_text(text.replace("?", escaped), str(HERE / "case.yaml"))
    message = str(caught.value)
    shown = char.encode("unicode_escape").decode()
    assert f"found the character '{shown}' in the text" in message
    assert message.isprintable()


@pytest.mark.parametrize(("name", "told"), [("''", "no value"), ("' '", "no value"), ("x" * 101, "found 101 char")])
def test_the_name_of_a_scenario_is_a_name(name: str, told: str) -> None:
    with pytest.raises(InputError) as caught:
        load_text(f"{SMALL}scenarios: {{{name}: {{}}}}\n")
    assert told in str(caught.value)
