"""Fits of the five models: the true model selected and recovered, the same minimum as a general optimiser."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields

import numpy as np
import pytest
from scipy.optimize import curve_fit

from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology
from pipeflow.rheology.fitting import CurveFit, ModelFit, aicc, fit_curve

RATES = np.geomspace(1.0, 1000.0, 16)
TRUTHS = {
    "newtonian": Newtonian(0.5),
    "power-law": PowerLaw(3.0, 0.4),
    "bingham": Bingham(5.0, 0.05),
    "herschel-bulkley": HerschelBulkley(10.0, 2.0, 0.5),
    "casson": Casson(5.0, 0.1),
    "melt": PowerLaw(1e4, 0.3),
    "gel": HerschelBulkley(120.0, 40.0, 0.1),
    "thin gel": PowerLaw(3.0, 0.1),
    "thickening": PowerLaw(0.01, 1.5),
}


def parameters(law: Rheology) -> dict[str, float]:
    return {field.name: getattr(law, field.name) for field in fields(law)}  # type: ignore[arg-type]


def of(fit: CurveFit, model: str) -> ModelFit:
    found = fit.of(model)
    assert found.parameters is not None, found.reason
    return found


@pytest.mark.parametrize("name", TRUTHS)
def test_noiseless_readings_select_and_give_back_their_model(name: str) -> None:
    law = TRUTHS[name]
    fit = fit_curve(RATES, law.shear_stress(RATES))
    assert fit.selected == law.key
    assert of(fit, law.key).parameters == pytest.approx(parameters(law), rel=1e-9)


@pytest.mark.parametrize("name", TRUTHS)
def test_readings_printed_to_three_digits_select_their_model(name: str) -> None:
    law = TRUTHS[name]
    printed = np.array([float(f"{stress:.3g}") for stress in law.shear_stress(RATES)])
    half_digit = 0.5 * 10.0 ** (np.floor(np.log10(printed)) - 2.0) / printed
    fit = fit_curve(RATES, printed, resolution=half_digit)
    assert fit.selected == law.key
    for key, value in parameters(law).items():
        low, high = (of(fit, law.key).intervals or {})[key]
        assert low <= value <= high


FORMULAE: dict[str, tuple[Callable[..., np.ndarray], tuple[tuple[float, float], ...]]] = {
    "newtonian": (lambda x, k: k * x, ((-3, 3),)),
    "power-law": (lambda x, k, n: k * x**n, ((-3, 3), (-1, 0.1))),
    "bingham": (lambda x, t, k: t + k * x, ((-1, 2), (-3, 1))),
    "herschel-bulkley": (lambda x, t, k, n: t + k * x**n, ((-1, 2), (-2, 1), (-1, 0.1))),
    "casson": (lambda x, t, k: (np.sqrt(t) + np.sqrt(k * x)) ** 2, ((-1, 2), (-3, 1))),
}


def by_curve_fit(model: str, stress: np.ndarray, relative: bool, rng: np.random.Generator) -> float:
    """Least sum of squares of a general optimiser from forty starts, parameters kept above zero by their logarithm."""
    formula, ranges = FORMULAE[model]

    def predicted(x: np.ndarray, *logs: float) -> np.ndarray:
        values = formula(x, *(10.0 ** np.clip(log, -12, 8) for log in logs))
        return np.log(values) if relative else values

    target = np.log(stress) if relative else stress
    lowest = np.inf
    for _ in range(40):
        start = [rng.uniform(*ends) for ends in ranges]
        try:
            found, _ = curve_fit(predicted, RATES, target, start, maxfev=4000)
        except (RuntimeError, ValueError):
            continue
        lowest = min(lowest, float(np.sum((predicted(RATES, *found) - target) ** 2)))
    return lowest


@pytest.mark.filterwarnings("ignore")
@pytest.mark.parametrize("relative", [True, False], ids=["relative", "absolute"])
@pytest.mark.parametrize("model", FORMULAE)
@pytest.mark.parametrize("truth", ["bingham", "herschel-bulkley", "casson"])
def test_the_same_minimum_as_a_general_optimiser(truth: str, model: str, relative: bool) -> None:
    rng = np.random.default_rng(7)
    stress = TRUTHS[truth].shear_stress(RATES) * np.exp(0.05 * rng.standard_normal(RATES.size))
    fit = of(fit_curve(RATES, stress, error="relative" if relative else "absolute"), model)
    fitted = fit.law.shear_stress(RATES)  # type: ignore[union-attr]
    reached = float(np.sum(np.log(stress / fitted) ** 2 if relative else (stress - fitted) ** 2))
    assert reached <= by_curve_fit(model, stress, relative, rng) * (1.0 + 1e-6)


def test_standard_errors_are_those_of_a_general_optimiser() -> None:
    rng = np.random.default_rng(3)
    stress = TRUTHS["herschel-bulkley"].shear_stress(RATES) * np.exp(0.03 * rng.standard_normal(RATES.size))
    fit = of(fit_curve(RATES, stress), "herschel-bulkley")
    _, covariance = curve_fit(
        lambda x, t, k, n: np.log(t + k * x**n), RATES, np.log(stress), list((fit.parameters or {}).values())
    )
    np.testing.assert_allclose(fit.covariance, covariance, rtol=1e-4)
    assert list((fit.standard_errors or {}).values()) == pytest.approx(np.sqrt(np.diag(covariance)), rel=1e-4)


def test_figures_of_merit_from_their_definitions() -> None:
    rng = np.random.default_rng(5)
    stress = TRUTHS["bingham"].shear_stress(RATES) * np.exp(0.03 * rng.standard_normal(RATES.size))
    fit = of(fit_curve(RATES, stress), "bingham")
    fitted = fit.law.shear_stress(RATES)  # type: ignore[union-attr]
    squares, size = float(np.sum(np.log(stress / fitted) ** 2)), RATES.size
    assert fit.rmse == pytest.approx(np.sqrt(np.mean((stress - fitted) ** 2)), rel=1e-12)
    about_mean = float(np.sum((stress - stress.mean()) ** 2))
    assert fit.r_squared == pytest.approx(1 - float(np.sum((stress - fitted) ** 2)) / about_mean, rel=1e-12)
    assert fit.aicc == pytest.approx(size * np.log(squares / size) + 6 + 24 / (size - 4), rel=1e-9)


def test_close_models_give_the_one_with_fewer_parameters() -> None:
    rng = np.random.default_rng(11)
    stress = Bingham(5.0, 0.05).shear_stress(RATES) * np.exp(0.05 * rng.standard_normal(RATES.size))
    fit = fit_curve(RATES, stress)
    best = min(model.aicc for model in fit.models if model.aicc is not None)
    near = [model for model in fit.models if model.aicc is not None and model.aicc - best <= 2.0]
    fewest = min(len(model.parameters or {}) for model in near)
    assert len(of(fit, fit.selected or "").parameters or {}) == fewest
    assert set(fit.rivals) == {model.model for model in near} - {fit.selected}


def test_robust_fit_is_not_drawn_by_two_wild_readings() -> None:
    law = HerschelBulkley(10.0, 2.0, 0.5)
    rng = np.random.default_rng(2)
    stress = law.shear_stress(RATES) * np.exp(0.005 * rng.standard_normal(RATES.size))
    stress[4] *= 1.8
    stress[11] *= 0.6
    plain, robust = (
        of(fit_curve(RATES, stress, robust=on), "herschel-bulkley").parameters or {} for on in (False, True)
    )
    assert abs(robust["yield_stress"] - 10.0) < 0.3
    assert abs(plain["yield_stress"] - 10.0) > 0.5


def test_a_yield_stress_out_of_reach_is_said() -> None:
    rates = np.geomspace(500.0, 1500.0, 10)
    rng = np.random.default_rng(4)
    stress = HerschelBulkley(0.5, 2.0, 0.5).shear_stress(rates) * np.exp(0.01 * rng.standard_normal(10))
    fit = fit_curve(rates, stress)
    bulkley = fit.of("herschel-bulkley")
    assert "tied" in bulkley.reason or any("lower rates would tell" in note for note in bulkley.notes)


def test_index_and_consistency_that_are_tied_are_not_given() -> None:
    rates = np.array([99.0, 99.5, 100.0, 100.5, 101.0, 101.5, 102.0])
    stress = np.array([20.1, 20.0, 20.3, 20.1, 20.4, 20.2, 20.5])
    fit = fit_curve(rates, stress).of("power-law")
    assert fit.parameters is None
    assert "tied" in fit.reason


def test_too_few_rates_for_three_parameters() -> None:
    rates = np.array([10.0, 10.0, 100.0, 100.0, 1000.0, 1000.0])
    fit = fit_curve(rates, np.array([12.0, 12.1, 20.0, 20.2, 60.0, 60.5])).of("herschel-bulkley")
    assert fit.parameters is None
    assert "4 shear rates or more, there are 3" in fit.reason


def test_a_model_asked_for_is_taken() -> None:
    fit = fit_curve(RATES, Bingham(5.0, 0.05).shear_stress(RATES), model="casson")
    assert fit.selected == "casson"
    assert "bingham" in fit.why


def test_aicc_is_not_defined_without_readings_to_spare() -> None:
    assert aicc(1.0, 5, 4) is None
    assert aicc(1.0, 6, 4) == pytest.approx(6 * np.log(1 / 6) + 8 + 40)


def random_sheet(rng: np.random.Generator) -> tuple[np.ndarray, np.ndarray]:
    """Anything a laboratory may send: gels to melts, few readings or many, narrow or wide, quiet or noisy."""
    rates = np.sort(10.0 ** rng.uniform(-2, 4) * 10.0 ** rng.uniform(0, rng.uniform(0.5, 4.0), rng.integers(4, 40)))
    index, consistency = rng.uniform(0.1, 1.6), 10.0 ** rng.uniform(-3, 4)
    viscous = consistency * rates**index
    start = rng.choice([0.0, 10.0 ** rng.uniform(-2, 2)]) * np.median(viscous)
    stress = start + viscous if rng.random() < 0.7 else (np.sqrt(start) + np.sqrt(viscous)) ** 2
    return rates, stress * np.exp(rng.choice([0.0, 0.01, 0.1]) * rng.standard_normal(rates.size))


def assert_met(rates: np.ndarray, stress: np.ndarray) -> None:
    """Herschel and Bulkley's law, which holds three others in it, is met at least as well as they are."""
    fit = fit_curve(rates, stress)
    for model in fit.models:
        assert (model.parameters is None) == bool(model.reason)
        assert model.parameters is None or np.all(np.isfinite(list(model.parameters.values())))
    whole = fit.of("herschel-bulkley").rmse_relative
    for inner in ("newtonian", "power-law", "bingham"):
        part = fit.of(inner).rmse_relative
        if whole is not None and part is not None:
            assert whole <= part * (1 + 1e-6) + 1e-12


def test_random_sheets_are_met() -> None:
    rng = np.random.default_rng(2026)
    for _ in range(200):
        assert_met(*random_sheet(rng))


@pytest.mark.slow
def test_two_thousand_random_sheets_are_met() -> None:
    rng = np.random.default_rng(2000)
    for _ in range(2000):
        assert_met(*random_sheet(rng))


@pytest.mark.slow
@pytest.mark.parametrize("name", ["newtonian", "power-law", "bingham", "herschel-bulkley", "casson"])
def test_intervals_cover_the_truth(name: str) -> None:
    """Of 1 000 sheets with 3 % scatter, 93 to 97 % of the 95 % intervals hold the true parameter."""
    law, rng = TRUTHS[name], np.random.default_rng(1000)
    rates = np.geomspace(1.0, 1000.0, 20)
    stress = law.shear_stress(rates)
    held = dict.fromkeys(parameters(law), 0)
    for _ in range(1000):
        fit = of(fit_curve(rates, stress * np.exp(0.03 * rng.standard_normal(20))), name)
        for key, (low, high) in (fit.intervals or {}).items():
            held[key] += low <= parameters(law)[key] <= high
    for key, count in held.items():
        assert 930 <= count <= 970, (key, count)


def test_the_mud_of_a_course_by_a_general_optimiser() -> None:
    """FIT-MUD-SIX-SPEED (read; no published answer, its unit of stress not stated): unweighted least squares."""
    rates = np.array([5.0, 10.0, 170.0, 340.0, 511.0, 1022.0])
    stress = np.array([10.0, 15.0, 26.0, 34.0, 42.0, 64.0])
    fit = of(fit_curve(rates, stress, error="absolute"), "herschel-bulkley")
    found, _ = curve_fit(lambda x, t, k, n: t + k * x**n, rates, stress, [10.0, 0.5, 0.7])
    assert list((fit.parameters or {}).values()) == pytest.approx(found, rel=1e-5)
