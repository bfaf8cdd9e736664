"""The sampling itself: Ishigami, closed forms, repeatability, chunks and workers, truncation, correlation."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from pipeflow.uncertainty import Correlated, Independent, Normal, Rectangular, Settings, analyse
from pipeflow.uncertainty.factors import Factor

A, B = 7.0, 0.1


def ishigami(inputs):
    """Ishigami & Homma, Proc. ISUMA '90, 398 (1990): sin x1 + a sin² x2 + b x3⁴ sin x1."""
    x = inputs
    return {"y": np.sin(x["x1"]) + A * np.sin(x["x2"]) ** 2 + B * x["x3"] ** 4 * np.sin(x["x1"])}


FACTORS = [Independent(name, Rectangular(-np.pi, np.pi)) for name in ("x1", "x2", "x3")]
V1 = 0.5 * (1.0 + B * np.pi**4 / 5.0) ** 2
V2 = A**2 / 8.0
V13 = B**2 * np.pi**8 * 8.0 / 225.0
VARIANCE = V1 + V2 + V13
FIRST = {"x1": V1 / VARIANCE, "x2": V2 / VARIANCE, "x3": 0.0}
TOTAL = {"x1": (V1 + V13) / VARIANCE, "x2": V2 / VARIANCE, "x3": V13 / VARIANCE}


def test_the_analytic_values_are_those_published():
    """Saltelli et al. (2010) print S = 0.3139, 0.4424, 0 and S_T = 0.5576, 0.4424, 0.2437 for a = 7, b = 0.1."""
    assert [round(FIRST[name], 4) for name in FIRST] == [0.3139, 0.4424, 0.0]
    assert [round(TOTAL[name], 4) for name in TOTAL] == [0.5576, 0.4424, 0.2437]


def test_ishigami_indices_lie_within_their_standard_errors():
    found = analyse(ishigami, FACTORS, Settings(samples=2**14))
    indices = found.indices["y"]
    assert [index.factor for index in indices] == ["x1", "x2", "x3"]
    for index in indices:
        for estimate, exact in ((index.first, FIRST[index.factor]), (index.total, TOTAL[index.factor])):
            assert 0 < estimate.error < 0.01
            assert abs(estimate.value - exact) < 4.0 * estimate.error
    assert found.mean("y").value == pytest.approx(A / 2.0, abs=4.0 * found.mean("y").error)
    assert found.deviation("y").value ** 2 == pytest.approx(VARIANCE, rel=2e-3)


def test_the_error_falls_faster_than_with_random_numbers():
    """From 2^9 to 2^15 samples, 64 times as many: random numbers would gain a factor of 8."""
    errors = []
    for power in (9, 15):
        found = analyse(ishigami, FACTORS, Settings(samples=2**power))
        errors.append(max(abs(index.total.value - TOTAL[index.factor]) for index in found.indices["y"]))
    assert errors[1] < errors[0] / 8.0
    assert errors[1] < 2e-3


def test_the_same_answer_twice_and_another_by_another_seed():
    one, two = (analyse(ishigami, FACTORS, Settings(samples=256)) for _ in range(2))
    assert np.array_equal(one.outputs["y"], two.outputs["y"])
    assert one.indices == two.indices
    other = analyse(ishigami, FACTORS, Settings(samples=256, seed=2))
    assert not np.array_equal(one.outputs["y"], other.outputs["y"])


@pytest.mark.parametrize(("chunk", "workers"), [(1, 1), (5, 1), (16, 1), (10**6, 1), (4096, 2)])
def test_neither_chunk_nor_workers_change_a_figure(chunk, workers):
    usual = analyse(ishigami, FACTORS, Settings(samples=512))
    found = analyse(ishigami, FACTORS, Settings(samples=512, chunk=chunk, workers=workers))
    assert found.outputs["y"] == pytest.approx(usual.outputs["y"], rel=1e-13)
    for one, other in zip(found.indices["y"], usual.indices["y"], strict=True):
        assert one.factor == other.factor
        assert (one.first.value, one.total.value) == pytest.approx((other.first.value, other.total.value), abs=1e-12)


def test_a_group_counts_as_one_factor():
    """x1 and x3 of Ishigami's function act together in no other factor: first-order and total index are V1 + V13."""
    group = _Pair("x1 and x3")
    found = {index.factor: index for index in analyse(ishigami, [FACTORS[1], group]).indices["y"]}
    share = (V1 + V13) / VARIANCE
    for estimate in (found["x1 and x3"].first, found["x1 and x3"].total):
        assert estimate.value == pytest.approx(share, abs=0.02)


class _Pair(Factor):
    columns = 2

    def values(self, uniform):
        return {name: np.pi * (2.0 * uniform[:, column] - 1.0) for column, name in enumerate(("x1", "x3"))}


def test_samples_without_an_answer_are_counted_and_left_out():
    def broken(inputs):
        return {"y": np.where(inputs["x1"] > 0.75, np.nan, inputs["x1"]), "z": inputs["x2"]}

    found = analyse(broken, [Independent(name, Rectangular(0.0, 1.0)) for name in ("x1", "x2")], Settings(1024))
    assert found.evaluations == 4 * 1024
    assert found.lost == pytest.approx(1024, abs=8)
    assert found.quantiles("y")[1].value == pytest.approx(0.375, abs=1e-3)
    nothing = analyse(lambda inputs: {"y": inputs["x1"] * np.nan}, FACTORS, Settings(64))
    assert np.isnan(nothing.quantiles("y")[0].value)
    assert nothing.indices["y"] == ()


def test_an_output_that_does_not_vary_has_no_indices():
    found = analyse(lambda inputs: {"y": 0.0 * inputs["x1"] + 3.0}, FACTORS, Settings(64))
    assert found.indices["y"] == ()
    assert found.mean("y").value == 3.0


@pytest.mark.parametrize("ends", [(-np.inf, np.inf), (0.0, np.inf), (2.0, 3.0), (6.0, np.inf), (-np.inf, -9.0)])
def test_a_truncated_normal_is_its_possible_part_renormalised(ends):
    mean, deviation = 1.0, 1.5
    normal = Normal(mean, deviation, *ends)
    low, high = ((end - mean) / deviation for end in ends)
    reference = stats.truncnorm(low, high, mean, deviation)
    probability = np.array([1e-9, 0.05, 0.3, 0.5, 0.95, 1.0 - 1e-9])
    assert normal.quantile(probability) == pytest.approx(reference.ppf(probability), rel=1e-9)
    assert normal.impossible == pytest.approx(1.0 - (stats.norm.cdf(high) - stats.norm.cdf(low)), abs=1e-14)


def test_a_truncated_rectangle_is_its_possible_part():
    found = Rectangular(-1.0, 3.0, 0.0)
    assert found.impossible == 0.25
    assert found.quantile(np.array([0.0, 0.5, 1.0])) == pytest.approx([0.0, 1.5, 3.0])


COVARIANCE = np.array([[0.25, 0.3, -0.08], [0.3, 0.49, -0.12], [-0.08, -0.12, 0.04]])


def correlated(least=-np.inf, middle=(3.0, -1.0, 0.6)):
    return Correlated(
        "fluid",
        ("start", "log_k", "n"),
        np.array(middle),
        COVARIANCE,
        ("plain", "logarithm", "plain"),
        np.array([least, -np.inf, -np.inf]),
        np.full(3, np.inf),
    )


def test_correlated_inputs_keep_their_covariance():
    found = analyse(lambda inputs: dict(inputs), [correlated()], Settings(2**14))
    start, log_k, n = found.outputs["start"], np.log(found.outputs["log_k"]), found.outputs["n"]
    sampled = np.cov([values.ravel() for values in (start, log_k, n)])
    assert sampled == pytest.approx(COVARIANCE, rel=5e-3)
    assert [start.mean(), log_k.mean(), n.mean()] == pytest.approx([3.0, -1.0, 0.6], abs=1e-3)


def test_correlated_inputs_are_kept_within_what_is_possible():
    """Against plain random draws of which the impossible ones are left out."""
    factor = correlated(least=0.0, middle=(0.4, -1.0, 0.6))
    found = analyse(lambda inputs: dict(inputs), [factor], Settings(2**14)).outputs
    draws = np.random.Generator(np.random.MT19937(5)).multivariate_normal([0.4, -1.0, 0.6], COVARIANCE, 400_000)
    kept = draws[draws[:, 0] >= 0.0].T
    assert found["start"].min() >= 0.0
    for name, values in zip(("start", "log_k", "n"), (kept[0], np.exp(kept[1]), kept[2]), strict=True):
        assert found[name].mean() == pytest.approx(values.mean(), rel=5e-3)
        assert np.quantile(found[name], 0.95) == pytest.approx(np.quantile(values, 0.95), rel=1e-2)


def test_a_covariance_that_is_singular_by_rounding_is_sampled():
    perfect = np.array([[1.0, 2.0], [2.0, 4.0]])
    plain = ("plain", "plain")
    factor = Correlated("pair", ("a", "b"), np.zeros(2), perfect, plain, np.full(2, -np.inf), np.full(2, np.inf))
    found = analyse(lambda inputs: dict(inputs), [factor], Settings(256)).outputs
    assert found["b"] == pytest.approx(2.0 * found["a"], abs=1e-4)
    fixed = Correlated("pair", ("a", "b"), np.ones(2), np.diag([0.0, 1.0]), plain, np.full(2, -9.0), np.full(2, 9.0))
    assert np.all(analyse(lambda inputs: dict(inputs), [fixed], Settings(64)).outputs["a"] == 1.0)


@pytest.mark.parametrize("samples", [0, -64, 63, 100, 2**22])
def test_a_number_of_samples_that_is_not_accepted(samples):
    with pytest.raises(ValueError, match=f"found {samples} samples"):
        Settings(samples=samples)
