"""The five models themselves: definitions, inverses, limits at rest, arrays, and what means nothing.

Definitions by their authors (Bingham 1922; Ostwald, de Waele; Herschel & Bulkley 1926; Casson 1959), from memory, high
confidence. 1e-12 is round-off of powers with exponents up to 10.
"""

import mpmath as mp
import numpy as np
import pytest
from reference import MODELS, random_fluid

from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw

RATES = np.geomspace(1e-6, 1e6, 25)


def some_fluids(model, count=40):
    rng = np.random.default_rng(100 + MODELS.index(model))
    return [
        random_fluid(model, rng, 10.0 ** rng.uniform(-2, 4), float(rng.uniform(0.001, 0.999))) for _ in range(count)
    ]


@pytest.mark.parametrize("model", MODELS)
def test_stress_and_viscosity_follow_the_definition(model):
    for fluid in some_fluids(model):
        law = fluid.rheology()
        truth = np.array([float(fluid.stress(rate)) for rate in RATES])
        np.testing.assert_allclose(law.shear_stress(RATES), truth, rtol=1e-12)
        np.testing.assert_allclose(law.apparent_viscosity(RATES), truth / RATES, rtol=1e-12)


@pytest.mark.parametrize("model", MODELS)
def test_shear_rate_inverts_shear_stress(model):
    """The digits that ``tau - tau_y`` loses near the yield stress are no one's to keep, and 1/n multiplies them."""
    for fluid in some_fluids(model):
        law = fluid.rheology()
        stress = law.shear_stress(RATES)
        excess = np.array([float(fluid.stress(rate) - mp.mpf(fluid.tau_y)) for rate in RATES])
        allowed = 1e-12 + 4e-16 * stress / excess * 2 / fluid.n
        sound = allowed < 1e-2
        back = law.shear_rate(stress)
        assert np.all(np.abs(back / RATES - 1)[sound] <= allowed[sound])
        assert sound.sum() >= 5


@pytest.mark.parametrize("law", [Bingham(5.0, 0.1), HerschelBulkley(5.0, 0.1, 0.5), Casson(5.0, 0.1)])
def test_nothing_is_sheared_up_to_the_yield_stress(law):
    np.testing.assert_array_equal(law.shear_rate(np.array([0.0, 2.0, 5.0])), 0.0)
    assert law.shear_rate(5.0000001) > 0
    assert float(law.shear_stress(0.0)) == pytest.approx(5.0, rel=1e-15)


@pytest.mark.parametrize(
    ("law", "at_rest"),
    [
        (Newtonian(0.3), 0.3),
        (PowerLaw(0.3, 0.5), np.inf),
        (PowerLaw(0.3, 1.0), 0.3),
        (PowerLaw(0.3, 1.5), 0.0),
        (Bingham(1.0, 0.3), np.inf),
        (Bingham(0.0, 0.3), 0.3),
        (HerschelBulkley(1.0, 0.3, 1.5), np.inf),
        (Casson(1.0, 0.3), np.inf),
        (Casson(0.0, 0.3), 0.3),
    ],
)
def test_apparent_viscosity_at_rest_is_the_limit(law, at_rest):
    assert float(law.apparent_viscosity(0.0)) == at_rest


@pytest.mark.parametrize(
    "law", [Newtonian(0.3), PowerLaw(0.3, 0.5), Bingham(1.0, 0.3), HerschelBulkley(1, 0.3, 0.5), Casson(1, 0.3)]
)
def test_a_negative_rate_or_stress_is_nan_for_that_element_alone(law):
    for function in (law.shear_stress, law.shear_rate, law.apparent_viscosity):
        alone = function(np.array([2.0, 30.0]))
        among = function(np.array([2.0, -1.0, 30.0, np.nan]))
        np.testing.assert_array_equal(np.isnan(among), [False, True, False, True])
        np.testing.assert_array_equal(among[[0, 2]], alone)


def test_parameters_may_be_arrays():
    tau_y, k, n = np.array([[0.0], [3.0]]), np.array([0.1, 1.0, 8.0]), 0.6
    stress = HerschelBulkley(tau_y, k, n).shear_stress(50.0)
    assert stress.shape == (2, 3)
    for row, column in np.ndindex(2, 3):
        one = HerschelBulkley(float(tau_y[row, 0]), float(k[column]), n).shear_stress(50.0)
        assert float(stress[row, column]) == float(one)
    assert Casson(tau_y, k).shear_rate(20.0).shape == (2, 3)
    assert Casson(tau_y, k).apparent_viscosity(0.0).shape == (2, 3)
