"""Laminar flow of all five models against quadrature at 30 digits (tests/exact/reference.py).

The tolerance is 1e-10 relative everywhere: that of the arithmetic asked for, no source's print is involved.
"""

from functools import cache

import mpmath as mp
import numpy as np
import pytest
from reference import MODELS, Fluid, bulk_rate, local_index, plug_velocity, random_fluid
from scipy.optimize import brentq

from pipeflow.friction import Regime, Status, bulk_velocity, solve_pipes, wall_shear_stress
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw

TOLERANCE = 1e-10
YIELDING = ("bingham", "herschel-bulkley", "casson")


def plugs(count, rng):
    """From a vanishing yield stress to a line all but plugged."""
    kinds = [
        10.0 ** rng.uniform(-14, -1, count),
        rng.uniform(0.05, 0.95, count),
        1 - 10.0 ** rng.uniform(-6, -1, count),
    ]
    chosen = np.choose(rng.integers(0, 3, count), kinds)
    chosen[:3] = 0.999999, 1e-300, 0.5
    return chosen


@cache
def laminar_cases(model, count=200):
    """Random fluids, pipes and wall shear rates over twelve decades, with what quadrature gives for each."""
    rng = np.random.default_rng(MODELS.index(model))
    cases = []
    for plug in plugs(count, rng):
        wall_rate = 10.0 ** rng.uniform(-6, 6)
        fluid = random_fluid(model, rng, wall_rate, float(plug))
        diameter = 10.0 ** rng.uniform(-3, 0.5)
        stress = fluid.stress(wall_rate)
        velocity = bulk_rate(fluid, wall_rate) * diameter / 8
        reynolds = 10.0 ** rng.uniform(-8, 2.7)
        density = float(reynolds * stress / (8 * velocity**2))
        cases.append((fluid, wall_rate, diameter, density, velocity, stress))
    return cases


@pytest.mark.parametrize("model", MODELS)
def test_wall_stress_rate_and_excess_are_those_of_the_integral(model):
    worst = 0.0
    for fluid, wall_rate, diameter, density, velocity, stress in laminar_cases(model):
        flow = solve_pipes(float(velocity), diameter, density, fluid.rheology())
        assert flow.regime == Regime.LAMINAR
        assert flow.status == Status.CONVERGED
        excess = stress - mp.mpf(fluid.tau_y)
        pairs = (
            (flow.wall_shear_stress, stress),
            (flow.laminar_wall_shear_stress, stress),
            (flow.excess_stress, excess),
            (flow.wall_shear_rate, wall_rate),
        )
        worst = max(worst, *(abs(float(mp.mpf(float(ours)) / truth - 1)) for ours, truth in pairs))
    assert worst < TOLERANCE


@pytest.mark.parametrize("model", MODELS)
def test_local_index_is_the_numerical_derivative(model):
    for fluid, wall_rate, diameter, density, velocity, _ in laminar_cases(model)[:40]:
        flow = solve_pipes(float(velocity), diameter, density, fluid.rheology())
        assert float(flow.local_flow_index) == pytest.approx(float(local_index(fluid, wall_rate)), rel=TOLERANCE)


@pytest.mark.parametrize("model", MODELS)
def test_friction_factor_times_metzner_reed_number_is_16(model):
    """Metzner & Reed, AIChE J. 1, 434 (1955): f Re_MR = 16 in laminar flow of any fluid (from memory, high)."""
    for fluid, _, diameter, density, velocity, _ in laminar_cases(model):
        flow = solve_pipes(float(velocity), diameter, density, fluid.rheology())
        factor = 2 * flow.wall_shear_stress / (density * float(velocity) ** 2)
        assert float(factor * flow.reynolds_mr) == pytest.approx(16, rel=1e-13)


@pytest.mark.parametrize("model", MODELS)
def test_metzner_reed_number_is_that_of_the_local_constants(model):
    """``Re_MR = rho V^(2-n') D^n'/(8^(n'-1) K')`` with n' by differentiation and ``K' = tau_w/G^n'``."""
    for fluid, wall_rate, diameter, density, velocity, stress in laminar_cases(model)[:40]:
        n = local_index(fluid, wall_rate)
        consistency = stress / bulk_rate(fluid, wall_rate) ** n
        truth = density * velocity ** (2 - n) * diameter**n / (8 ** (n - 1) * consistency)
        flow = solve_pipes(float(velocity), diameter, density, fluid.rheology())
        assert float(flow.reynolds_mr) == pytest.approx(float(truth), rel=TOLERANCE)


@pytest.mark.parametrize("model", MODELS)
def test_bulk_velocity_inverts_up_to_the_digits_of_the_excess_stress(model):
    """A float stress has lost ``eps tau_w/(tau_w - tau_y)`` of its excess, and V is the (1 + 1/n)th power of that."""
    for fluid, _, diameter, density, velocity, stress in laminar_cases(model):
        back = bulk_velocity(float(stress), diameter, density, fluid.rheology())
        lost = float(stress / (stress - mp.mpf(fluid.tau_y)))
        allowed = 1e-13 + 2e-16 * lost * (1 + 1 / fluid.n)
        assert float(back) == pytest.approx(float(velocity), rel=max(allowed, 1e-13 / fluid.n))


@pytest.mark.parametrize("plug", [1e-300, 1e-9, 0.1, 0.7, 0.9999, 0.999999])
@pytest.mark.parametrize("n", [0.1, 0.5, 1.0, 2.0])
def test_corners_of_herschel_bulkley(plug, n):
    fluid = Fluid("herschel-bulkley", 50.0 * plug, 50.0 * (1 - plug) / 10.0**n, n)
    velocity = bulk_rate(fluid, 10.0) * 0.1 / 8
    ours = wall_shear_stress(float(velocity), 0.1, 1e-3, fluid.rheology())
    assert float(ours) == pytest.approx(float(fluid.stress(10)), rel=TOLERANCE)


@pytest.mark.parametrize(
    ("general", "special"),
    [
        (HerschelBulkley(12.0, 0.3, 1.0), Bingham(12.0, 0.3)),
        (HerschelBulkley(0.0, 3.0, 0.4), PowerLaw(3.0, 0.4)),
        (HerschelBulkley(0.0, 0.3, 1.0), Newtonian(0.3)),
        (PowerLaw(0.3, 1.0), Newtonian(0.3)),
        (Bingham(0.0, 0.3), Newtonian(0.3)),
        (Casson(0.0, 0.3), Newtonian(0.3)),
    ],
    ids=lambda law: type(law).__name__,
)
@pytest.mark.parametrize("method", ["wilson-thomas", "dodge-metzner"])
def test_models_reach_their_limits_by_the_same_method(general, special, method):
    """Every regime, both turbulent methods; 1e-12 is the round-off of two routes through one formula."""
    velocity = np.geomspace(1e-4, 60.0, 400)
    one, other = (solve_pipes(velocity, 0.1, 1100.0, law, method=method) for law in (general, special))
    assert set(np.unique(other.regime)) == {1, 2, 3}
    np.testing.assert_allclose(one.wall_shear_stress, other.wall_shear_stress, rtol=1e-12)
    np.testing.assert_array_equal(one.regime, other.regime)


@pytest.mark.parametrize(
    ("family", "limit"),
    [
        (lambda small: HerschelBulkley(small, 0.3, 0.7), PowerLaw(0.3, 0.7)),
        (lambda small: Bingham(small, 0.3), Newtonian(0.3)),
        (lambda small: HerschelBulkley(9.0, 0.3, 1.0 + small), Bingham(9.0, 0.3)),
    ],
    ids=["yield stress to 0, n = 0.7", "yield stress to 0, Bingham", "n to 1"],
)
def test_limits_are_approached_in_proportion(family, limit):
    """The distance to the limit shrinks as the parameter does (at least ninefold for a tenfold step)."""
    velocity = np.geomspace(1e-2, 60.0, 60)
    there = wall_shear_stress(velocity, 0.1, 1100.0, limit, method="wilson-thomas")
    distance = [
        np.max(np.abs(wall_shear_stress(velocity, 0.1, 1100.0, family(small), method="wilson-thomas") / there - 1))
        for small in (1e-4, 1e-5, 1e-6)
    ]
    assert distance[1] < distance[0] / 9
    assert distance[2] < distance[1] / 9


def test_casson_approaches_newtonian_as_the_root_of_its_yield_stress():
    """``G = (tau_w/mu)(1 - 16/7 sqrt(phi) + ...)``: a hundredth of the yield stress is a tenth of the distance."""
    velocity = np.geomspace(1e-2, 0.2, 20)
    there = wall_shear_stress(velocity, 0.1, 1100.0, Newtonian(0.3))
    distance = [
        np.max(np.abs(wall_shear_stress(velocity, 0.1, 1100.0, Casson(small, 0.3)) / there - 1))
        for small in (1e-6, 1e-8)
    ]
    assert distance[1] == pytest.approx(distance[0] / 10, rel=0.01)


def test_profile_and_integral_agree():
    """The reference itself by another road: ``Q = Int 2 pi r u dr``, the shear rate bisected at every radius."""
    fluid = Fluid("casson", 5.0, 0.4, 1.0)
    wall_rate, radius = 30.0, 0.04
    stress = float(fluid.stress(wall_rate))
    plug = fluid.tau_y / stress
    nodes, weights = np.polynomial.legendre.leggauss(40)

    def shear_rate(share):
        law = lambda rate: (5.0**0.5 + (0.4 * rate) ** 0.5) ** 2 - stress * share  # noqa: E731
        return brentq(law, 0.0, 40.0, xtol=1e-14)

    def integral(function, low):
        half = (1 - low) / 2
        return half * sum(w * function(low + half * (1 + x)) for x, w in zip(nodes, weights, strict=True))

    velocity = lambda share: radius * integral(shear_rate, share)  # noqa: E731
    mean = 2 * integral(lambda share: share * velocity(share), plug) + plug**2 * velocity(plug)
    assert velocity(plug) == pytest.approx(float(plug_velocity(fluid, wall_rate, 2 * radius)), rel=1e-10)
    assert mean == pytest.approx(float(bulk_rate(fluid, wall_rate) * radius / 4), rel=1e-10)
