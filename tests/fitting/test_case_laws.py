"""Parameters of a case that follow solids or temperature, by a law in the case or by several sheets of readings."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import numpy as np
import pytest

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import Case
from pipeflow.errors import InputError
from pipeflow.record import document
from pipeflow.report.rheology_lines import rheology_lines
from pipeflow.rheology import Bingham, HerschelBulkley, PowerLaw
from pipeflow.study import solve

CASES = Path(__file__).parents[2] / "cases"
POWER = "{law: power, a: 2500 Pa, b: 4.2, tested: 0.48 .. 0.58}"
GROWING = "{law: exponential, a: 0.05 mPa.s, b: 11, tested: 0.48 .. 0.58}"
ARRHENIUS = (
    "{law: arrhenius, reference: 0.9 Pa.s^n, reference_temperature: 20 °C, activation_energy: 24 kJ/mol, "
    "tested: 10 .. 60 °C}"
)
SOLIDS = "solids: {density: 2330 kg/m3, mass_fraction: 0.52}\n  liquid: {density: 998 kg/m3}"


def text(rheology: str, about: str = SOLIDS, more: str = "") -> str:
    return f"""title: Line
fluid:
  {about}
  rheology: {rheology}
flow: 140 m3/h
route:
  - pipe: line
    diameter: 150 mm
    length: 100 m
{more}
"""


def bingham(yield_stress: str = POWER, viscosity: str = GROWING) -> str:
    return f"{{model: bingham, yield_stress: {yield_stress}, plastic_viscosity: {viscosity}}}"


def messages(case: str, file: str = "case.yaml") -> list[str]:
    with pytest.raises(InputError) as caught:
        load_text(case, file)
    return [str(problem) for problem in caught.value.problems]


def test_a_law_of_the_solids_gives_the_parameter() -> None:
    case = load_text(text(bingham()))
    law = case.fluid.rheology
    assert isinstance(law, Bingham)
    assert law.yield_stress == pytest.approx(2500 * 0.52**4.2, rel=1e-12)
    assert law.plastic_viscosity == pytest.approx(5e-5 * np.exp(11 * 0.52), rel=1e-12)
    assert case.density_is_mixed


def test_solids_by_volume_are_turned_into_mass() -> None:
    by_volume = SOLIDS.replace("mass_fraction: 0.52", "volume_fraction: 0.3")
    share = 0.3 * 2330 / (0.3 * 2330 + 0.7 * 998)
    law = load_text(text(bingham(), by_volume)).fluid.rheology
    assert isinstance(law, Bingham)
    assert law.yield_stress == pytest.approx(2500 * share**4.2, rel=1e-12)


def test_a_law_of_the_temperature_gives_the_parameter() -> None:
    rheology = f"{{model: power-law, consistency: {ARRHENIUS}, flow_index: 0.5}}"
    law = load_text(text(rheology, "density: 1100 kg/m3\n  temperature: 45 °C")).fluid.rheology
    assert isinstance(law, PowerLaw)
    inverse = 1 / 318.15 - 1 / 293.15
    assert law.consistency == pytest.approx(0.9 * np.exp(24e3 / 8.31446261815324 * inverse), rel=1e-12)


def test_scenarios_change_the_condition_and_the_density_follows() -> None:
    case = load_text(text(bingham(), more="scenarios: {thick: {fluid.solids.mass_fraction: 0.56}}"))
    thick = case.scenarios["thick"]
    assert isinstance(thick.fluid.rheology, Bingham)
    assert thick.fluid.rheology.yield_stress == pytest.approx(2500 * 0.56**4.2, rel=1e-12)
    assert thick.fluid.density == pytest.approx(1 / (0.56 / 2330 + 0.44 / 998), rel=1e-12)


def test_carried_on_past_the_tested_range_it_is_a_caution() -> None:
    far = SOLIDS.replace("0.52", "0.6")
    carried_on = bingham(POWER.replace("}", ", extrapolate: true}"), GROWING.replace("}", ", extrapolate: true}"))
    result = solve(load_text(text(carried_on, far)))
    said = "yield stress, plastic viscosity carried on to solids of 0.6, tested over 0.48 .. 0.58: a guess"
    assert said in result.cautions
    laws = json.loads(json.dumps(document(result)))["rheology_laws"]
    assert [law["extrapolated"] for law in laws] == [True, True]
    assert laws[0]["yield_stress_Pa"] == pytest.approx(2500 * 0.6**4.2)
    assert "solids-laws" in {use.source.key for use in result.methods}
    assert all(len(line) <= 80 for line in rheology_lines(result))


@pytest.mark.parametrize(
    ("case", "said"),
    [
        (
            text(bingham(), SOLIDS.replace("0.52", "0.6")),
            "case.yaml:5:85  fluid.rheology.yield_stress.tested  found '0.48 .. 0.58'; the fluid has solids of 0.6",
        ),
        (text(bingham(), "density: 1400 kg/m3"), "followed over 'fluid.solids', which the case does not give"),
        (
            text(f"{{model: power-law, consistency: {ARRHENIUS}, flow_index: 0.5}}"),
            "followed over 'fluid.temperature', which the case does not give",
        ),
        (text(bingham(POWER.replace("2500 Pa", "2500"))), "yield_stress.a  found '2500' without a unit"),
        (text(bingham(POWER.replace("2500 Pa", "2500 Pa.s"))), "yield_stress.a  found '2500 Pa.s'"),
        (
            text(bingham(POWER.replace("power", "powr"))),
            "unknown law; did you mean power? accepted: power, exponential",
        ),
        (text(bingham(POWER.replace("law: power, ", ""))), "yield_stress.law  missing; for instance law: power"),
        (text(bingham(POWER.replace("b: 4.2, ", ""))), "yield_stress.b  missing; for instance b: 4.2"),
        (text(bingham(POWER.replace("b: 4.2", "b: 4.2, c: 1"))), "yield_stress.c  unknown key; accepted: law"),
        (text(bingham(POWER.replace("a: 2500", "viscosity: 1 cP, a: 2500"))), "yield_stress.viscosity  unknown key"),
        (text(bingham(POWER.replace("0.48 .. 0.58", "48 .. 58"))), "two fractions above 0 and below 1 are needed"),
        (text(bingham(POWER.replace("0.48 .. 0.58", "0.5"))), "a range of fractions is needed, as '0.48 .. 0.58'"),
        (text(bingham(POWER.replace("}", ", extrapolate: maybe}"))), "found 'maybe'; true or false is needed"),
        (text(bingham(POWER.replace("4.2", "4.2e9"))), "too large or too small to compute with"),
        (text(bingham(GROWING)), "yield_stress.a"),
        (
            text(bingham(), more="scenarios: {thick: {fluid.solids.mass_fraction: 0.6}}"),
            "case.yaml:11:21  scenarios.thick.fluid.rheology.yield_stress.tested",
        ),
    ],
    ids=lambda value: value[-40:],
)
def test_one_mistake_is_one_error(case: str, said: str) -> None:
    (message,) = messages(case)
    assert said in message


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    for name in ("48", "52", "56"):
        shutil.copy(CASES / f"thickener-underflow-{name}.csv", tmp_path)
    return tmp_path


SHEETS = "[thickener-underflow-48.csv, thickener-underflow-52.csv, thickener-underflow-56.csv]"


def of_sheets(folder: Path, rheology: str, about: str = SOLIDS, more: str = "") -> Case:
    (folder / "case.yaml").write_text(text(rheology, about, more), encoding="utf-8")
    return load_case(folder / "case.yaml")


def test_several_sheets_make_one_fluid(folder: Path) -> None:
    scenarios = "scenarios: {between: {fluid.solids.mass_fraction: 0.54}}"
    case = of_sheets(folder, f"{{flow_curve: {SHEETS}}}", more=scenarios)
    assert isinstance(case.fluid.rheology, HerschelBulkley)
    assert case.fluid.rheology.yield_stress == pytest.approx(9.5, rel=0.02)
    between = case.scenarios["between"].fluid.rheology
    assert isinstance(between, HerschelBulkley)
    assert between.yield_stress == pytest.approx(12.6, rel=0.03)
    assert case.tested_shear_rate == pytest.approx((5.03, 400.0), rel=0.02)
    result = solve(case)
    found = json.loads(json.dumps(document(result)))
    assert [law["parameter"] for law in found["rheology_laws"]] == ["yield_stress", "consistency"]
    assert [fit["sample"]["solids"] for fit in found["rheology_fits"]] == [0.48, 0.52, 0.56]
    assert all(len(line) <= 80 for line in rheology_lines(result))


@pytest.mark.parametrize(
    ("rheology", "said"),
    [
        (SHEETS.replace("-52", "-53"), "thickener-underflow-53.csv  no such file"),
        ("[thickener-underflow-48.csv, thickener-underflow-48.csv]", "differ in neither solids nor temperature"),
        ("[thickener-underflow-48.csv]", "flow_curve"),
        ("[thickener-underflow-52.csv, thickener-underflow-56.csv]", ""),
        ("[thickener-underflow-48.csv, 3]", "flow_curve[2]"),
    ],
)
def test_sheets_that_cannot_be_joined(folder: Path, rheology: str, said: str) -> None:
    if not said:
        assert of_sheets(folder, f"{{flow_curve: {rheology}}}").fluid.rheology.key == "herschel-bulkley"
        return
    (message,) = messages(text(f"{{flow_curve: {rheology}}}"), str(folder / "case.yaml"))
    assert said in message


def test_outside_the_sheets_it_is_refused_or_a_caution(folder: Path) -> None:
    far = SOLIDS.replace("0.52", "0.6")
    (message,) = messages(text(f"{{flow_curve: {SHEETS}}}", far), str(folder / "case.yaml"))
    assert "the fluid has solids of 0.6, tested over 0.48 .. 0.56" in message
    case = of_sheets(folder, f"{{flow_curve: {SHEETS}, extrapolate: true}}", far)
    assert any("carried on to solids of 0.6" in caution for caution in solve(case).cautions)
