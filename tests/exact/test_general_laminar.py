"""Laminar flow of the laws without a closed form against quadrature at 30 digits, 1e-10 relative.

Definitions from memory (high confidence): Cross 1965; Carreau & Yasuda 1979; Sisko 1958; Robertson & Stiff 1976; Ellis
(its rate as a function of the stress, so integrated directly: ``G = 4/tau_w^3 Int tau^2 rate dtau``).
"""

import mpmath as mp
import numpy as np
import pytest
import reference  # noqa: F401  (sets the digits)

from pipeflow.friction import Regime, solve_pipes
from pipeflow.rheology import Carreau, Cross, Ellis, RobertsonStiff, Sisko

COUNT = 20


def cross(thick, thin, time, exponent, n):
    return Cross(thick, thin, time, 1 - n), lambda g: g * (thin + (thick - thin) / (1 + (time * g) ** mp.mpf(1 - n)))


def carreau(thick, thin, time, exponent, n):
    def stress(g):
        return g * (thin + (thick - thin) * (1 + (time * g) ** mp.mpf(exponent)) ** ((mp.mpf(n) - 1) / exponent))

    return Carreau(thick, thin, time, n, exponent), stress


def sisko(thick, thin, time, exponent, n):
    return Sisko(thin, thick, n), lambda g: thin * g + thick * g ** mp.mpf(n)


def robertson_stiff(thick, thin, time, exponent, n):
    return RobertsonStiff(thick, n, 1 / time), lambda g: thick * (g + 1 / mp.mpf(time)) ** mp.mpf(n)


@pytest.mark.parametrize("law", [cross, carreau, sisko, robertson_stiff])
def test_laws_given_as_stress_of_the_rate(law):
    rng = np.random.default_rng(3)
    for _ in range(COUNT):
        thick, thin = 10.0 ** rng.uniform(0, 2), 10.0 ** rng.uniform(-3, -1)
        time, exponent, n = 10.0 ** rng.uniform(-2, 1), float(rng.uniform(0.8, 2.5)), float(rng.uniform(0.2, 0.9))
        rheology, stress = law(thick, thin, time, exponent, n)
        # where every end of the curve and its bend are seen
        wall_rate, diameter = 10.0 ** rng.uniform(-2, 4), 10.0 ** rng.uniform(-2, 0)
        wall_stress = stress(mp.mpf(wall_rate))
        bends = [mp.mpf(10) ** -k for k in range(7, 0, -1)]
        cubes = mp.quad(lambda share: (stress(wall_rate * share) / wall_stress) ** 3, [0, *bends, 1])  # noqa: B023
        velocity = mp.mpf(4) / 3 * wall_rate * (1 - cubes) * diameter / 8
        density = float(10.0 ** rng.uniform(-2, 2) * wall_stress / (8 * velocity**2))
        flow = solve_pipes(float(velocity), diameter, density, rheology)
        assert flow.regime == Regime.LAMINAR
        assert float(flow.wall_shear_stress) == pytest.approx(float(wall_stress), rel=1e-10)
        assert float(flow.wall_shear_rate) == pytest.approx(wall_rate, rel=1e-10)


def test_ellis():
    rng = np.random.default_rng(4)
    for _ in range(COUNT):
        thick, half, alpha = 10.0 ** rng.uniform(-1, 2), 10.0 ** rng.uniform(0, 2), float(rng.uniform(1.1, 4))
        wall_stress, diameter = half * 10.0 ** rng.uniform(-2, 2), 10.0 ** rng.uniform(-2, 0)
        rate = lambda tau: tau / thick * (1 + (tau / half) ** (alpha - mp.mpf(1)))  # noqa: E731, B023
        integral = mp.quad(lambda share: share**2 * rate(wall_stress * share), [0, 1])  # noqa: B023
        velocity = 4 * integral * diameter / 8
        density = float(10.0 ** rng.uniform(-2, 2) * wall_stress / (8 * velocity**2))
        flow = solve_pipes(float(velocity), diameter, density, Ellis(thick, half, alpha))
        assert flow.regime == Regime.LAMINAR
        assert float(flow.wall_shear_stress) == pytest.approx(wall_stress, rel=1e-10)
