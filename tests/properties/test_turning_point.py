"""Dodge–Metzner for yield fluids in arrays that mix what single pipes are."""

import numpy as np
import pytest

from pipeflow.friction import Regime, Status, solve_pipes
from pipeflow.friction.spread import method_spread
from pipeflow.rheology import HerschelBulkley, RobertsonStiff


def test_an_array_with_and_without_yield_stress_equals_its_single_pipes():
    stresses = np.array([0.0, 1.0, 5.0])
    together = solve_pipes(4.0, 0.12, 1300.0, HerschelBulkley(stresses, 0.3, 0.7), method="dodge-metzner")
    alone = [solve_pipes(4.0, 0.12, 1300.0, HerschelBulkley(one, 0.3, 0.7), method="dodge-metzner") for one in stresses]
    assert np.all(together.regime == Regime.TURBULENT)
    assert together.wall_shear_stress == pytest.approx([float(one.wall_shear_stress) for one in alone], rel=1e-13)


def test_the_spread_of_a_general_law_with_a_yield_stress_has_an_answer():
    fluid, velocity = RobertsonStiff(0.1727, 0.292, 0.754), np.array([0.5, 0.8, 1.2])
    central = solve_pipes(velocity, 0.02813, 1200.0, fluid)
    spread = method_spread(central, velocity, 0.02813, 1200.0, fluid)
    assert np.all(central.status == Status.CONVERGED)
    assert set(spread.by_method) == {"dodge-metzner", "wilson-thomas"}
    assert np.all(spread.upper >= central.wall_shear_stress)
