"""Fittings, sizes and velocity profiles in print, by id and source (07_ in this folder)."""

from pathlib import Path

import numpy as np
import pytest
import yaml
from examples import GRAVITY, example

from pipeflow.line.elements import Fluid, Pipe
from pipeflow.line.fittings import resistance
from pipeflow.line.kinetics import generalized_power_law_factors
from pipeflow.line.route import solve
from pipeflow.rheology import Newtonian

KINETIC = yaml.safe_load((Path(__file__).parent / "benchmarks.yaml").read_text(encoding="utf-8"))["kinetic_energy"]


def energy_factor(plug, n):
    return float(generalized_power_law_factors(np.asarray(plug), np.asarray(n)).energy)


def test_kinetic_energy_of_power_laws():
    """FI-ALPHA-PL. ``alpha = 3(3n+1)^2/((2n+1)(5n+3))``, a standard result; from memory (confidence high)."""
    computed = {"alpha_n1": energy_factor(0.0, 1.0), "alpha_n0.5": energy_factor(0.0, 0.5)}
    assert example("FI-ALPHA-PL").agrees(**computed, alpha_n0=energy_factor(0.0, 1e-12))
    for n in (0.2, 0.3, 0.7, 1.5):
        assert energy_factor(0.0, n) == pytest.approx(3 * (3 * n + 1) ** 2 / ((2 * n + 1) * (5 * n + 3)), rel=1e-13)


def test_kinetic_energy_of_bingham():
    """FI-ALPHA-BH. Without a plug it is Newtonian; from memory (confidence high)."""
    assert example("FI-ALPHA-BH").agrees(alpha_phi0=energy_factor(0.0, 1.0))


@pytest.mark.parametrize("case", KINETIC, ids=lambda case: f"phi={case['phi']} n={case['n']}")
def test_kinetic_factors_of_the_benchmarks(case):
    """Computed apart from this project, ten printed digits."""
    factors = generalized_power_law_factors(np.asarray(case["phi"]), np.asarray(case["n"]))
    assert float(factors.energy) == pytest.approx(case["alpha"], abs=6e-10)
    assert float(factors.momentum) == pytest.approx(case["beta"], abs=6e-10)
    assert float(factors.maximum_velocity) == pytest.approx(case["umax_over_V"], abs=6e-10)


def test_two_and_three_constant_methods():
    """FI-2K3K-eval. Hooper 1981, Darby 1999; constants from memory (high). No worked value is printed: the formula is.

    ``K = K1/Re + Kinf (1 + 1/ID)`` and ``K = Km/Re + Ki (1 + Kd/Dn^0.3)`` with the constants the entry lists.
    """
    assert example("FI-2K3K-eval").printed == {}
    for method, laminar, turbulent in (
        ("hooper-2k", 800, 0.20 * (1 + 1 / 4.026)),
        ("darby-3k", 800, 0.071 * (1 + 4.2 / 4**0.3)),
    ):
        ours = resistance({"elbow_90_long_radius": 1}, 4.026 * 0.0254, 4.0, method)
        assert ours[0] == laminar
        assert float(ours[1]) == pytest.approx(turbulent, rel=1e-12)


def test_sudden_enlargement():
    """FI-CR1-3.6. Coulson & Richardson vol. 1, 1999, Example 3.6, p. 88; read in a public reworking (water assumed)."""
    water = Fluid(1000.0, Newtonian(1e-3))
    line = solve(7.2 / 3600, water, [Pipe("narrow", 0.040, 1.0), Pipe("wide", 0.050, 1.0)])
    assert example("FI-CR1-3.6").agrees(h=line.reducer_loss[1] / (1000 * GRAVITY) * 1000)
