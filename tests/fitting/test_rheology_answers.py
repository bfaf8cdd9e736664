"""A solved case says what rests on its rheology: the fit, the rivals' losses, and the tangent past the tested rates."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import Case
from pipeflow.record import document
from pipeflow.report.rheology_lines import rheology_lines
from pipeflow.rheology import Rheology
from pipeflow.study import solve

CASES = Path(__file__).parents[2] / "cases"
PARAMETERS = {
    "newtonian": "viscosity: 30 mPa.s",
    "power-law": "consistency: 2 Pa.s^n, flow_index: 0.4",
    "bingham": "yield_stress: 6 Pa, plastic_viscosity: 20 mPa.s",
    "herschel-bulkley": "yield_stress: 6 Pa, consistency: 0.9 Pa.s^n, flow_index: 0.5",
    "casson": "yield_stress: 6 Pa, casson_viscosity: 20 mPa.s",
}


def text(rheology: str, flow: str = "30 m3/h", more: str = "") -> str:
    return f"""title: Line
fluid:
  density: 1300 kg/m3
  rheology: {{{rheology}}}
flow: {flow}
route:
  - pipe: line
    diameter: 100 mm
    length: 200 m
{more}
"""


def given(model: str, tested: str, flow: str = "30 m3/h", more: str = "") -> Case:
    return load_text(text(f"model: {model}, {PARAMETERS[model]}, tested: {tested}", flow, more))


def sheet(folder: Path, law: Rheology, scatter: float = 0.0) -> Path:
    rates = np.geomspace(5.0, 400.0, 14)
    noise = np.exp(scatter * np.random.default_rng(7).standard_normal(rates.size))
    rows = "\n".join(f"{rate:.4f},{stress:.5f}" for rate, stress in zip(rates, law.shear_stress(rates) * noise))  # noqa: B905
    path = folder / "sheet.csv"
    path.write_text(f"# shear_history: sheared\nshear_rate [1/s],shear_stress [Pa]\n{rows}\n", encoding="utf-8")
    return path


def fitted(folder: Path, more: str = "") -> Case:
    path = folder / "case.yaml"
    path.write_text(text(f"flow_curve: sheet.csv{more}"), encoding="utf-8")
    return load_case(path)


def one_check(case: Case, name: str) -> tuple[str, float | None]:
    check = next(check for check in solve(case).checks if check.name == name)
    return check.status, check.value


def test_the_fit_is_part_of_the_result() -> None:
    given = text(f"flow_curve: {CASES / 'thickener-underflow-52.csv'}")
    result = solve(load_text(given))
    found = json.loads(json.dumps(document(result)))["rheology_fit"]
    selected = next(model for model in found["models"] if model["model"] == found["selected"])
    assert found["selected"] == "herschel-bulkley"
    assert found["tested_shear_rate_1_s"] == pytest.approx([5.0, 400.0], rel=0.01)
    assert np.diag(selected["covariance"]) == pytest.approx(np.square(list(selected["standard_errors"].values())))
    assert any("shear rate at the bob over" in caution for caution in result.cautions)
    assert any("a restart needs that" in caution for caution in result.cautions)
    assert {"krieger-maron", "aicc"} <= {use.source.key for use in result.methods}
    assert all(len(line) <= 80 for line in rheology_lines(result))


def test_rivals_are_solved_and_the_higher_named(tmp_path: Path) -> None:
    law = given("herschel-bulkley", "5 .. 400 1/s").fluid.rheology
    sheet(tmp_path, law, 0.1)
    case = fitted(tmp_path)
    assert case.fitted is not None
    rivals = case.fitted.fit.rivals
    assert rivals
    result = solve(case)
    taken, *others = result.rheology.by_law
    assert taken.pressure_loss == pytest.approx(
        sum(element.friction_loss + element.fitting_loss for element in result.elements)
    )
    for model, other in zip(rivals, others, strict=True):
        alone = solve(replace(case, fluid=replace(case.fluid, rheology=case.fitted.fit.of(model).law), fitted=None))
        assert other.pressure_loss == pytest.approx(alone.elements[0].friction_loss, rel=1e-12)
    highest = max(result.rheology.by_law, key=lambda law: law.pressure_loss)
    assert any(f"the highest loss, {highest.model}" in caution for caution in result.cautions)
    assert document(result)["rheology_rivals"]["for_design"] == highest.model
    assert any(line.startswith(rivals[0]) for line in rheology_lines(result))


@pytest.mark.parametrize("model", list(PARAMETERS))
def test_far_beyond_the_tested_rates_there_are_two_answers(model: str) -> None:
    case = given(model, "5 .. 50 1/s", more="limits: {pressure_loss: 100 MPa, head_loss: 9000 m}")
    result = solve(case)
    (beyond,) = result.rheology.beyond
    rate = result.elements[0].wall_shear_rate
    assert rate is not None
    assert rate > 75.0
    assert beyond.wall_shear_rate == pytest.approx(rate)
    assert beyond.pressure_loss == pytest.approx(result.elements[0].friction_loss)
    assert beyond.pressure_loss_tangent is not None
    straight = model in ("newtonian", "bingham")
    assert (beyond.pressure_loss_tangent == beyond.pressure_loss) is straight
    assert beyond.pressure_loss_tangent >= beyond.pressure_loss
    assert {one_check(case, name)[0] for name in ("pressure_loss", "head_loss", "tested_shear_rate")} == {"caution"}
    assert document(result)["beyond_tested_shear_rate"][0]["pressure_loss_tangent_Pa"] == beyond.pressure_loss_tangent
    assert all(len(line) <= 80 for line in rheology_lines(result))


def test_a_fail_stays_a_fail_beyond_the_tested_rates() -> None:
    assert (
        one_check(given("casson", "5 .. 50 1/s", more="limits: {pressure_loss: 1 kPa}"), "pressure_loss")[0] == "fail"
    )


@pytest.mark.parametrize("model", list(PARAMETERS))
@pytest.mark.parametrize("flow", ["{minimum: 5 m3/h, design: 30 m3/h, maximum: 200 m3/h}", "400 m3/h"])
def test_turbulent_flow_has_a_second_answer_too(model: str, flow: str) -> None:
    result = solve(given(model, "5 .. 100 1/s", flow))
    assert result.rheology.beyond
    assert all(np.isfinite(beyond.pressure_loss_tangent or np.nan) for beyond in result.rheology.beyond)


def test_methods_not_made_for_a_tangent_are_replaced_and_that_is_said() -> None:
    result = solve(given("bingham", "5 .. 100 1/s", "400 m3/h", "methods: {turbulent: hedstrom}"))
    assert not result.rheology.tangent_method
    result = solve(given("herschel-bulkley", "5 .. 100 1/s", "400 m3/h", "methods: {turbulent: torrance}"))
    assert result.rheology.tangent_method == "wilson-thomas"
    assert any("tangent" in use.used_for for use in result.methods)


def test_within_the_tested_rates_there_is_one_answer() -> None:
    result = solve(given("herschel-bulkley", "5 .. 4000 1/s"))
    assert not result.rheology.beyond
    assert not {"rheology_fit", "rheology_rivals", "beyond_tested_shear_rate"} & document(result).keys()
    assert not list(rheology_lines(result))


def test_a_method_asked_for_holds_for_a_fitted_model(tmp_path: Path) -> None:
    sheet(tmp_path, given("bingham", "5 .. 400 1/s").fluid.rheology)
    path = tmp_path / "case.yaml"
    path.write_text(text("flow_curve: sheet.csv", more="methods: {turbulent: hedstrom}"), encoding="utf-8")
    assert load_case(path).methods.turbulent == "hedstrom"
