"""A case that names readings: fitted while it is read, each fault at the place in the case, with that in the sheet."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import numpy as np
import pytest
from typer.testing import CliRunner

from pipeflow.case.loading import load_case
from pipeflow.cli import app
from pipeflow.errors import InputError
from pipeflow.rheology import Casson, HerschelBulkley

CASES = Path(__file__).parents[2] / "cases"
CASE = """title: Underflow
fluid:
  density: 1420 kg/m3
  rheology:
    {rheology}
flow: 140 m3/h
route:
  - pipe: line
    diameter: 150 mm
    length: 100 m
{more}
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    for name in ("48", "52", "56"):
        shutil.copy(CASES / f"thickener-underflow-{name}.csv", tmp_path)
    return tmp_path


def case(folder: Path, rheology: str, more: str = "") -> Path:
    path = folder / "case.yaml"
    path.write_text(CASE.format(rheology=rheology, more=more), encoding="utf-8")
    return path


def message(path: Path) -> str:
    with pytest.raises(InputError) as caught:
        load_case(path)
    assert len(caught.value.problems) == 1
    return str(caught.value).replace(f"{path.parent}/", "")


def test_readings_make_the_rheology_and_its_tested_range(folder: Path) -> None:
    found = load_case(case(folder, "flow_curve: thickener-underflow-52.csv"))
    assert isinstance(found.fluid.rheology, HerschelBulkley)
    assert found.fluid.rheology.yield_stress == pytest.approx(9.5, rel=0.02)
    assert found.tested_shear_rate == pytest.approx((5.0, 400.0), rel=0.01)
    assert found.fitted is not None
    assert np.shape(found.fitted.selected.covariance) == (3, 3)  # type: ignore[union-attr]


def test_the_fit_is_that_of_the_command(folder: Path) -> None:
    found = load_case(case(folder, "flow_curve: thickener-underflow-52.csv")).fluid.rheology
    result = CliRunner().invoke(app, ["fit", "--json", str(folder / "thickener-underflow-52.csv")])
    fitted = json.loads(result.stdout)["models"][3]["parameters"]
    assert isinstance(found, HerschelBulkley)
    assert [found.yield_stress, found.consistency, found.flow_index] == list(fitted.values())


def test_model_and_readings_to_use_are_taken(folder: Path) -> None:
    rheology = "{flow_curve: thickener-underflow-52.csv, model: casson, use: {shear_rate: 10 .. 250 1/s}}"
    found = load_case(case(folder, rheology))
    assert isinstance(found.fluid.rheology, Casson)
    assert found.tested_shear_rate == pytest.approx((12.0, 200.0), rel=0.01)


def test_a_scenario_may_name_another_sheet(folder: Path) -> None:
    scenarios = "scenarios:\n  thick: {fluid.rheology.flow_curve: thickener-underflow-56.csv}"
    found = load_case(case(folder, "flow_curve: thickener-underflow-52.csv", scenarios))
    assert float(found.scenarios["thick"].fluid.rheology.yield_stress) == pytest.approx(16.5, rel=0.02)


def test_a_new_sheet_is_seen(folder: Path) -> None:
    path = case(folder, "flow_curve: thickener-underflow-52.csv")
    before = load_case(path).fluid.rheology.yield_stress
    shutil.copy(CASES / "thickener-underflow-56.csv", folder / "thickener-underflow-52.csv")
    assert load_case(path).fluid.rheology.yield_stress > 1.5 * before


def test_a_missing_sheet_is_told_in_the_case(folder: Path) -> None:
    assert message(case(folder, "flow_curve: none.csv")) == (
        "case.yaml:5:17  fluid.rheology.flow_curve  none.csv  no such file"
    )


def test_a_fault_of_the_sheet_is_told_in_the_case(folder: Path) -> None:
    (folder / "bad.csv").write_text("shear_rate [1/s],shear_stress [Pa]\n1,2\n2,x\n3,y\n4,5\n", encoding="utf-8")
    told = message(case(folder, "flow_curve: bad.csv"))
    assert told.startswith("case.yaml:5:17  fluid.rheology.flow_curve  bad.csv:3:3  shear_stress  found 'x'")
    assert told.endswith("and 1 more, which 'pipeflow fit' lists")


@pytest.mark.parametrize(
    ("rheology", "words"),
    [
        ("{flow_curve: thickener-underflow-52.csv, model: sisko}", "unknown model; accepted: newtonian, power-law"),
        ("{flow_curve: thickener-underflow-52.csv, use: {shear_rate: 300 .. 30 1/s}}", "the lower end comes first"),
        ("{flow_curve: thickener-underflow-52.csv, use: {rate: 3 .. 30 1/s}}", "shear_rate"),
        ("{flow_curve: thickener-underflow-52.csv, use: {shear_rate: 900 .. 999 1/s}}", "0 of 22 readings are left"),
        ("{flow_curve: thickener-underflow-52.csv, yield_stress: 3 Pa}", "comes from the readings"),
        ("{flow_curve: }", "no value"),
    ],
)
def test_keys_that_cannot_be_used(folder: Path, rheology: str, words: str) -> None:
    assert words in message(case(folder, rheology))


def test_solving_it_leaves_no_trace_of_the_fit_in_the_figures(folder: Path) -> None:
    given = case(folder, "flow_curve: thickener-underflow-52.csv")
    fitted = json.loads(CliRunner().invoke(app, ["solve", "--json", str(given)]).stdout)
    law = load_case(given).fluid.rheology
    assert isinstance(law, HerschelBulkley)
    typed = (
        f"{{model: herschel-bulkley, yield_stress: {law.yield_stress!r} Pa, "
        f"consistency: {law.consistency!r} Pa.s^n, flow_index: {law.flow_index!r}}}"
    )
    plain = json.loads(CliRunner().invoke(app, ["solve", "--json", str(case(folder, typed))]).stdout)
    assert fitted["totals"] == plain["totals"]
