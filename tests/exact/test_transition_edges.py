"""The four steps of the transition (docs/theory.md) held against definitions at 30 digits.

Re_3 of Slatter (1994 thesis; Hydrotransport 13, 1996) is rebuilt from the flow in the annulus around the plug; the
critical Re_MR of Ryan & Johnson, AIChE J. 5, 433 (1959) is written in its printed form and scaled to 2100 at n = 1.
Both from memory, high confidence. 1e-10 relative: arithmetic, no source's print.
"""

from functools import cache

import mpmath as mp
import numpy as np
import pytest
from reference import (
    MODELS,
    annulus_reynolds,
    bisect,
    bulk_rate,
    dodge_metzner_velocity,
    random_fluid,
    wilson_thomas_velocity,
)

from pipeflow.friction import Regime, solve_pipes

TOLERANCE = 1e-10
COUNT = 5


def printed_ryan_johnson(n):
    return 6464 * n / (1 + 3 * n) ** 2 * (2 + n) ** ((2 + n) / (1 + n))


def critical_reynolds(n):
    """Held at the value of n = 0.416 below it; 6464 drops out of the ratio."""
    n = mp.mpf(max(n, 0.416))
    return 2100 * printed_ryan_johnson(n) / printed_ryan_johnson(mp.mpf(1))


def critical_annulus(fluid, plug):
    n = mp.mpf(fluid.n)
    return 2100 * plug + (1 - plug) * critical_reynolds(fluid.n) * ((3 * n + 1) / (4 * n)) ** n


def turbulent_velocity(fluid, wall_rate, diameter, density, roughness):
    law = dodge_metzner_velocity if fluid.model == "power-law" else wilson_thomas_velocity
    return law(fluid, wall_rate, diameter, density, roughness)


@cache
def cases(model):
    rng = np.random.default_rng(41 + MODELS.index(model))
    found = []
    for _ in range(COUNT):
        wall_rate = 10.0 ** rng.uniform(0.5, 4)
        plug = float(rng.choice([10.0 ** rng.uniform(-8, -1), rng.uniform(0.1, 0.95), 1 - 10.0 ** rng.uniform(-4, -1)]))
        fluid = random_fluid(model, rng, wall_rate, plug, highest_n=1.8)
        diameter = 10.0 ** rng.uniform(-2, 0)
        # a laminar Re_MR of 100 to 10000 at that wall shear rate brings the edges near it
        velocity = bulk_rate(fluid, wall_rate) * diameter / 8
        density = float(10.0 ** rng.uniform(2, 4) * fluid.stress(wall_rate) / (8 * velocity**2))
        roughness = diameter * float(rng.choice([0.0, 10.0 ** rng.uniform(-5, -2)]))
        flow = solve_pipes(float(velocity), diameter, density, fluid.rheology(), roughness=roughness, with_edges=True)
        found.append((fluid, diameter, density, roughness, flow))
    return found


def rate_of_laminar_velocity(fluid, diameter, velocity):
    target = mp.log(8 * mp.mpf(velocity) / diameter)
    return mp.exp(bisect(lambda x: mp.log(bulk_rate(fluid, mp.exp(x))) - target, -20, 40))


def reynolds_mr(fluid, wall_rate, diameter, density):
    velocity = bulk_rate(fluid, wall_rate) * diameter / 8
    return 8 * density * velocity**2 / fluid.stress(wall_rate)


def candidate_rate(fluid, diameter, density, reynolds):
    """Wall shear rate of the laminar flow whose Re_MR is this."""
    target = mp.log(reynolds)
    return mp.exp(bisect(lambda x: mp.log(reynolds_mr(fluid, mp.exp(x), diameter, density)) - target, -20, 60))


@pytest.mark.parametrize("model", MODELS)
def test_step_1_laminar_flow_ends_where_the_annulus_is_critical(model):
    for fluid, diameter, density, _, flow in cases(model):
        wall_rate = rate_of_laminar_velocity(fluid, diameter, float(flow.critical_velocity))
        plug = fluid.tau_y / fluid.stress(wall_rate)
        truth = critical_annulus(fluid, plug)
        assert float(annulus_reynolds(fluid, wall_rate, diameter, density) / truth) == pytest.approx(1, rel=TOLERANCE)
        there = reynolds_mr(fluid, wall_rate, diameter, density)
        assert float(flow.reynolds_critical) == pytest.approx(float(there), rel=TOLERANCE)


@pytest.mark.parametrize("model", MODELS)
def test_steps_2_and_3_turbulent_flow_begins_at_the_candidate_or_where_the_curve_would_fall(model):
    """``V_2`` is that of 4000/2100 times the Re_MR of ``V_1``, unless the law is faster at the laminar stress there."""
    by_law = 0
    for fluid, diameter, density, roughness, flow in cases(model):
        edge = rate_of_laminar_velocity(fluid, diameter, float(flow.critical_velocity))
        reynolds = reynolds_mr(fluid, edge, diameter, density) * 4000 / 2100
        wall_rate = candidate_rate(fluid, diameter, density, reynolds)
        candidate = bulk_rate(fluid, wall_rate) * diameter / 8
        at_laminar_stress = turbulent_velocity(fluid, wall_rate, diameter, density, roughness)
        truth = max(candidate, at_laminar_stress)
        by_law += candidate >= at_laminar_stress
        assert float(flow.turbulent_velocity) == pytest.approx(float(truth), rel=TOLERANCE)
    assert by_law > 0


@pytest.mark.parametrize("model", MODELS)
def test_step_4_a_straight_line_from_edge_to_edge(model):
    """Between the edges ``ln tau_w`` is linear in ``ln V``; at its ends stand the laminar and the turbulent law."""
    for fluid, diameter, density, roughness, flow in cases(model):
        first, second = float(flow.critical_velocity), float(flow.turbulent_velocity)
        share = np.array([1e-12, 0.25, 0.7, 1 - 1e-12])
        velocity = np.exp(np.log(first) + share * np.log(second / first))
        inside = solve_pipes(velocity, diameter, density, fluid.rheology(), roughness=roughness)
        assert np.all(inside.regime == Regime.TRANSITIONAL)
        log_stress = np.log(inside.wall_shear_stress)
        straight = log_stress[0] + share * (log_stress[-1] - log_stress[0])
        np.testing.assert_allclose(log_stress, straight, rtol=0, atol=1e-10)
        laminar = fluid.stress(rate_of_laminar_velocity(fluid, diameter, first))
        assert float(inside.wall_shear_stress[0]) == pytest.approx(float(laminar), rel=TOLERANCE)
        beyond = solve_pipes(second * (1 + 1e-12), diameter, density, fluid.rheology(), roughness=roughness)
        assert beyond.regime == Regime.TURBULENT
        at_edge = turbulent_velocity(fluid, float(beyond.wall_shear_rate), diameter, density, roughness)
        assert float(at_edge) == pytest.approx(second, rel=TOLERANCE)
        assert float(beyond.wall_shear_stress) == pytest.approx(float(inside.wall_shear_stress[-1]), rel=TOLERANCE)


def test_ryan_johnson_as_printed_is_2099_at_n_1():
    """Its constant 6464 is a rounding: the project scales to 2100 (the sheet's own remark)."""
    assert float(printed_ryan_johnson(mp.mpf(1))) == pytest.approx(2099.2, abs=0.1)


@pytest.mark.parametrize("model", ["bingham", "herschel-bulkley", "casson"])
def test_dodge_metzner_of_yield_fluids_keeps_to_its_rising_branch(model):
    """By the reference V only rises above the stress where the branch begins; just below, the flow is transitional."""
    for fluid, diameter, density, roughness, first in cases(model)[:5]:
        pipe = (diameter, density, fluid.rheology())
        edges = solve_pipes(
            float(first.critical_velocity), *pipe, roughness=roughness, method="dodge-metzner", with_edges=True
        )
        begin = float(edges.turbulent_velocity)
        flow = solve_pipes(np.array([0.999999, 1.000001]) * begin, *pipe, roughness=roughness, method="dodge-metzner")
        assert flow.regime.tolist() == [Regime.TRANSITIONAL, Regime.TURBULENT]
        rates = float(flow.wall_shear_rate[1]) * np.geomspace(1.0, 1e3, 12)
        velocities = [dodge_metzner_velocity(fluid, rate, diameter, density, roughness) for rate in rates]
        assert np.all(np.diff(np.array(velocities, dtype=float)) > 0)
        assert float(velocities[0]) == pytest.approx(begin * 1.000001, rel=TOLERANCE)
