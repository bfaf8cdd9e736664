"""A law carried on by its tangent: the curve itself, and the loss of a pipe that shears faster than tested."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from pipeflow.friction import bulk_velocity, wall_shear_stress
from pipeflow.rheology import Bingham, Casson, Cross, HerschelBulkley, Newtonian, PowerLaw, Rheology
from pipeflow.rheology.tangent import continued_by_tangent, is_far

LAST = 200.0
LAWS = [Newtonian(0.3), PowerLaw(2.0, 0.4), Bingham(5.0, 0.05), HerschelBulkley(10.0, 2.0, 0.5), Casson(5.0, 0.1)]


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.key)
def test_the_law_up_to_the_last_reading_its_tangent_beyond(law: Rheology) -> None:
    carried = continued_by_tangent(law, LAST)
    within, beyond = np.array([0.0, 1.0, 50.0, LAST]), np.array([300.0, 1000.0])
    np.testing.assert_allclose(carried.shear_stress(within), law.shear_stress(within), rtol=1e-13)
    step = 1e-3
    slope = float(law.shear_stress(LAST + step) - law.shear_stress(LAST - step)) / (2 * step)
    straight = law.shear_stress(LAST) + slope * (beyond - LAST)
    np.testing.assert_allclose(carried.shear_stress(beyond), straight, rtol=1e-7)
    np.testing.assert_allclose(carried.shear_rate(straight), beyond, rtol=1e-7)
    assert np.all(carried.is_rising())


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.key)
def test_laminar_flow_of_a_carried_law_by_quadrature(law: Rheology) -> None:
    """``8V/D = 4/tau_w³ ∫ tau² rate dtau`` from the yield stress, in two parts at the last reading."""
    carried = continued_by_tangent(law, LAST)
    wall = float(carried.shear_stress(900.0))
    start, corner = float(np.asarray(law.yield_stress)), float(law.shear_stress(LAST))

    def shell(stress: float) -> float:
        return stress**2 * float(carried.shear_rate(stress))

    parts = quad(shell, start, corner, epsrel=1e-10)[0] + quad(shell, corner, wall, epsrel=1e-10)[0]
    expected = 4.0 / wall**3 * parts * 0.05 / 8.0
    assert bulk_velocity(wall, 0.05, 0.1, carried) == pytest.approx(expected, rel=2e-5)


def test_a_thinning_fluid_loses_more_on_its_tangent() -> None:
    law = HerschelBulkley(10.0, 2.0, 0.5)
    plain = wall_shear_stress(2.0, 0.02, 1300.0, law)
    carried = wall_shear_stress(2.0, 0.02, 1300.0, continued_by_tangent(law, LAST))
    assert carried > 1.1 * plain
    near = wall_shear_stress(0.3, 0.02, 1300.0, law)
    assert wall_shear_stress(0.3, 0.02, 1300.0, continued_by_tangent(law, LAST)) == pytest.approx(near, rel=1e-6)


def test_arrays_of_parameters() -> None:
    laws = HerschelBulkley(np.array([5.0, 10.0]), 2.0, np.array([0.5, 0.7]))
    carried = continued_by_tangent(laws, LAST)
    each = [
        wall_shear_stress(2.0, 0.05, 1300.0, continued_by_tangent(HerschelBulkley(ty, 2.0, n), LAST))
        for ty, n in ((5.0, 0.5), (10.0, 0.7))
    ]
    np.testing.assert_allclose(wall_shear_stress(2.0, 0.05, 1300.0, carried), each, rtol=1e-9)


def test_other_laws_have_no_tangent() -> None:
    with pytest.raises(TypeError, match="Cross"):
        continued_by_tangent(Cross(5.0, 0.02, 0.3, 0.8), LAST)


def test_far_is_beyond_one_and_a_half_times_the_tested_range() -> None:
    assert not is_far(300.0, (5.0, 200.0))
    assert is_far(np.array([10.0, 301.0]), (5.0, 200.0))
