"""Kinetic factors against published formulas, a second integration at 30 digits, and their limits.

The second integration knows no formula of the project: it takes the shear rate of the law at the stress of
each radius, integrates the velocity inwards from the wall, and the velocity, its square and its cube over the
section.
"""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pipeflow.friction import Regime, solve_pipes
from pipeflow.friction.laminar import CassonTube, GeneralizedPowerLawTube
from pipeflow.line.kinetics import (
    KineticFactors,
    casson_factors,
    generalized_power_law_factors,
    integrated_factors,
    laminar_factors,
    laminar_state,
    loss_factors,
    pipe_factors,
    turbulent_factors,
)
from pipeflow.rheology import (
    Bingham,
    Casson,
    Cross,
    HerschelBulkley,
    Newtonian,
    PowerLaw,
    RobertsonStiff,
    Sisko,
)

NAMES = ("energy", "momentum", "maximum_velocity")


def integrated(rate, plug):
    """``alpha``, ``beta`` and ``u_max/V`` of a law by its shear rate at a stress, the wall stress being 1."""
    with mp.workdps(30):
        breaks = [plug, 1]
        greatest = mp.quad(rate, breaks)

        def moment(k):
            def ring(stress):
                return 2 * stress * (mp.quad(rate, [stress, 1]) / greatest) ** k

            return mp.mpf(plug) ** 2 + mp.quad(ring, breaks)

        first, second, third = (moment(k) for k in (1, 2, 3))
        return float(third / first**3), float(second / first**2), float(1 / first)


def values(factors):
    return [float(getattr(factors, name)) for name in NAMES]


@pytest.mark.parametrize(
    ("n", "plug"), [(0.3, 0.0), (1.4, 0.0), (0.3, 0.34), (0.58, 0.34), (1.0, 0.34), (0.58, 0.9), (1.4, 0.9)]
)
def test_generalized_power_law_against_integration(n, plug):
    expected = integrated(lambda stress: (stress - mp.mpf(plug)) ** (1 / mp.mpf(n)), plug)
    assert values(generalized_power_law_factors(plug, n)) == pytest.approx(expected, rel=1e-10)


@pytest.mark.parametrize("plug", [0.0, 0.04, 0.34, 0.9])
def test_casson_against_integration(plug):
    expected = integrated(lambda stress: (mp.sqrt(stress) - mp.sqrt(mp.mpf(plug))) ** 2, plug)
    assert values(casson_factors(plug)) == pytest.approx(expected, rel=1e-10)


BENCHMARK_KINETIC_ENERGY = [
    # computed by 40-digit integration, printed to 10 digits: benchmarks.yaml, kinetic_energy
    (0.0, 0.3, 1.504166667, 1.1875, 1.461538462),
    (0.0, 0.6, 1.781818182, 1.272727273, 1.75),
    (0.0, 1.0, 2.0, 1.333333333, 2.0),
    (0.2, 0.3, 1.405771022, 1.155015684, 1.355206847),
    (0.2, 0.6, 1.640773346, 1.231465896, 1.566314076),
    (0.2, 1.0, 1.837439291, 1.289886425, 1.744186047),
    (0.5, 0.3, 1.251535827, 1.100484772, 1.208747515),
    (0.5, 0.6, 1.398183092, 1.153479769, 1.321888412),
    (0.5, 1.0, 1.522444826, 1.195847751, 1.411764706),
    (0.8, 0.3, 1.098021652, 1.041078606, 1.078320091),
    (0.8, 0.6, 1.151994677, 1.063002857, 1.116589327),
    (0.8, 1.0, 1.195442838, 1.080356623, 1.145038168),
]


@pytest.mark.parametrize("row", BENCHMARK_KINETIC_ENERGY, ids=lambda row: f"phi{row[0]}-n{row[1]}")
def test_benchmark_rows(row):
    plug, n, *expected = row
    assert values(generalized_power_law_factors(plug, n)) == pytest.approx(expected, abs=5.1e-10)


@pytest.mark.parametrize(
    ("n", "alpha"),
    [
        # exact_laminar_factors.csv, computed, printed to 7 decimals
        (0.1, 1.2071429),
        (0.2, 1.3714286),
        (0.3, 1.5041667),
        (0.45, 1.6609023),
        (0.5, 1.7045455),
        (0.7, 1.8480769),
        (1, 2.0),
        (1.3, 2.1061404),
    ],
)
def test_exact_laminar_factors(n, alpha):
    assert float(generalized_power_law_factors(0.0, n).energy) == pytest.approx(alpha, abs=5.1e-8)


def test_fi_alpha_pl():
    """FI-ALPHA-PL: standard result (Metzner; Steffe; Chhabra & Richardson); from memory, high confidence."""
    assert float(generalized_power_law_factors(0.0, 1.0).energy) == pytest.approx(2.0, abs=1e-9)
    assert float(generalized_power_law_factors(0.0, 1e-10).energy) == pytest.approx(1.0, abs=1e-9)
    assert float(generalized_power_law_factors(0.0, 0.5).energy) == pytest.approx(1.7045, abs=1e-4)
    n = np.array([0.2, 0.3, 0.5, 0.7, 1.0, 1.5])
    factors = generalized_power_law_factors(0.0, n)
    assert factors.energy == pytest.approx(3 * (3 * n + 1) ** 2 / ((2 * n + 1) * (5 * n + 3)), rel=1e-14)
    assert factors.momentum == pytest.approx((3 * n + 1) / (2 * n + 1), rel=1e-14)
    assert factors.maximum_velocity == pytest.approx((3 * n + 1) / (n + 1), rel=1e-14)


def test_fi_alpha_bh():
    """FI-ALPHA-BH: 2 without a plug; the handbook's ``2 - phi`` is an approximation, off by 2.2 % at most.

    Metzner 1956, Steffe 1996: from memory, high confidence.
    """
    assert float(generalized_power_law_factors(0.0, 1.0).energy) == pytest.approx(2.0, abs=1e-6)
    phi = np.linspace(0.0, 1.0, 401)
    difference = (2.0 - phi) / generalized_power_law_factors(phi, 1.0).energy - 1.0
    assert 0.022 < np.abs(difference).max() < 0.023


def test_mishra_tripathi_is_a_constant_of_alpha():
    """``2100 (4n+2)(5n+3)/(3(3n+1)²) = 4200/alpha`` (Mishra & Tripathi 1971; from memory, sure)."""
    n = np.array([0.2, 0.4, 0.5, 1.0])
    printed = 2100 * (4 * n + 2) * (5 * n + 3) / (3 * (3 * n + 1) ** 2)
    assert 4200 / generalized_power_law_factors(0.0, n).energy == pytest.approx(printed, rel=1e-13)


@settings(deadline=None)
@given(
    plug=st.floats(0, 0.9999),
    n=st.floats(0.15, 1.8),
    tube=st.sampled_from([GeneralizedPowerLawTube, CassonTube]),
)
def test_integration_for_laws_without_a_closed_form(plug, n, tube):
    yield_stress = np.array([10.0 * plug])
    index = (np.array([n]),) if tube is GeneralizedPowerLawTube else ()
    law = tube(yield_stress, np.zeros(1), *index)
    wall = law.wall(np.log(10.0 - yield_stress))
    closed, numeric = laminar_factors(law, wall), integrated_factors(law, wall)
    for name in NAMES:
        assert getattr(numeric, name) == pytest.approx(getattr(closed, name), rel=1e-9)


@settings(deadline=None)
@given(plug=st.floats(0, 1), n=st.floats(0.05, 2))
def test_order_of_the_factors(plug, n):
    for factors in (generalized_power_law_factors(plug, n), casson_factors(plug)):
        alpha, beta, greatest = values(factors)
        assert 1 - 1e-14 <= beta <= alpha + 1e-14
        assert beta <= greatest + 1e-14
        assert alpha <= greatest**2 + 1e-12


def test_a_full_plug_moves_as_one():
    for factors in (generalized_power_law_factors(1.0, 0.4), casson_factors(1.0)):
        assert values(factors) == [1.0, 1.0, 1.0]


def test_logarithmic_profile_against_integration():
    f = 0.0045

    def velocity(y):
        return 1 / mp.sqrt(mp.mpf(f) / 2) + (mp.log(y) + mp.mpf(3) / 2) / mp.mpf("0.4")

    def moment(k):
        return mp.quad(lambda y: 2 * (1 - y) * velocity(y) ** k, [0, 1e-6, 1e-2, 1])

    moments = [moment(k) for k in (1, 2, 3)]
    factors = turbulent_factors(f)
    assert float(moments[0]) == pytest.approx(1 / np.sqrt(f / 2), rel=1e-9)
    assert float(factors.energy) == pytest.approx(float(moments[2] / moments[0] ** 3), rel=1e-9)
    assert float(factors.momentum) == pytest.approx(float(moments[1] / moments[0] ** 2), rel=1e-9)
    assert float(factors.maximum_velocity) == pytest.approx(float(velocity(mp.mpf(1)) / moments[0]), rel=1e-9)


def test_logarithmic_profile_beside_the_seventh_power_law():
    """At Re 1e5, f 0.0045, the two usual profiles agree to 1 %: 1.058, 1.020 (exact integrals)."""
    m = 1 / 7
    first, second, third = (2 / ((1 + k * m) * (2 + k * m)) for k in (1, 2, 3))
    assert float(turbulent_factors(0.0045).energy) == pytest.approx(third / first**3, rel=0.01)
    assert float(turbulent_factors(0.0045).momentum) == pytest.approx(second / first**2, rel=0.01)


FLUIDS = [
    Newtonian(0.01),
    PowerLaw(0.3, 0.6),
    Bingham(8.0, 0.02),
    HerschelBulkley(9.5, 0.62, 0.58),
    Casson(4.0, 0.02),
]


@pytest.mark.parametrize("fluid", FLUIDS, ids=lambda fluid: fluid.key)
def test_factors_are_continuous_in_flow(fluid):
    """Through both edges of the transition no factor jumps over a step of the flow of 0.14 %."""
    velocity = np.geomspace(0.05, 12.0, 4001)
    flow = solve_pipes(velocity, 0.15, 1300.0, fluid, with_edges=True)
    assert {Regime.LAMINAR, Regime.TRANSITIONAL, Regime.TURBULENT} == set(flow.regime)
    for factors in (loss_factors(flow, velocity, fluid), pipe_factors(flow, velocity, 1300.0, fluid)):
        for name in NAMES:
            assert np.abs(np.diff(getattr(factors, name))).max() < 0.01
    turbulent = flow.regime == Regime.TURBULENT
    assert np.all(loss_factors(flow, velocity, fluid).energy[turbulent] == 1.0)


@pytest.mark.parametrize(
    ("fluid", "expected"),
    [
        (Newtonian(0.01), generalized_power_law_factors(0.0, 1.0)),
        (PowerLaw(0.3, 0.6), generalized_power_law_factors(0.0, 0.6)),
        (Bingham(8.0, 0.02), KineticFactors(*(np.ones(3)))),
        (HerschelBulkley(0.0, 0.3, 0.6), generalized_power_law_factors(0.0, 0.6)),
        (Casson(0.0, 0.3), generalized_power_law_factors(0.0, 1.0)),
        (Casson(3.0, 0.3), KineticFactors(*(np.ones(3)))),
        (RobertsonStiff(3.0, 0.5, 0.6), KineticFactors(*(np.ones(3)))),
        (Cross(2.0, 0.01, 0.5, 0.7), generalized_power_law_factors(0.0, 1.0)),
        (Sisko(0.01, 0.5, 0.5), generalized_power_law_factors(0.0, 0.5)),
    ],
    ids=str,
)
def test_at_rest_is_the_limit(fluid, expected):
    rest, slow = (laminar_state(solve_pipes(v, 0.15, 1300.0, fluid, with_edges=True), fluid) for v in (0.0, 1e-24))
    assert values(rest) == pytest.approx(values(expected), rel=1e-13)
    assert values(slow) == pytest.approx(values(rest), rel=1e-7)


def test_a_bad_pipe_is_nan_alone():
    fluid = Bingham(8.0, 0.02)
    velocity = np.array([1.0, -1.0, np.nan, 9.0])
    factors = loss_factors(solve_pipes(velocity, 0.15, 1300.0, fluid, with_edges=True), velocity, fluid)
    assert np.isnan(factors.energy).tolist() == [False, True, True, False]
