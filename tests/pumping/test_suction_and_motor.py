"""NPSH, the pressure that makes a slurry flow to the pump, power and motors."""

import numpy as np
import pytest

from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.line.elements import Fluid, Pipe, Vessel
from pipeflow.line.route import solve
from pipeflow.pumping.motor import RATED_OUTPUTS, motor_power, shaft_power, standard_motor
from pipeflow.pumping.suction import (
    level_for_npsh,
    npsh_asked,
    npsh_available,
    npsh_of_vessel,
    suction_yield_pressure,
)
from pipeflow.rheology import Bingham

ATMOSPHERE, VAPOUR, DENSITY = 88e3, 2.3e3, 1420.0


def test_both_forms_agree_by_bernoulli():
    """From the surface of the vessel, and from the pressure that is left at the inlet."""
    level, loss, velocity = 3.0, 0.8, 2.1
    kinetic = velocity**2 / (2 * STANDARD_GRAVITY)
    inlet = ATMOSPHERE + DENSITY * STANDARD_GRAVITY * (level - loss - kinetic)
    from_inlet = npsh_available(inlet, VAPOUR, DENSITY, velocity)
    from_vessel = npsh_of_vessel(ATMOSPHERE, VAPOUR, DENSITY, level, loss)
    assert float(from_inlet) == pytest.approx(float(from_vessel), rel=1e-13)
    hand = (88e3 - 2.3e3) / (1420 * 9.80665) + 3.0 - 0.8
    assert float(from_vessel) == pytest.approx(hand, rel=1e-14)
    assert float(npsh_available(inlet, VAPOUR, DENSITY, velocity, 1.5)) == pytest.approx(hand - 1.5, rel=1e-13)
    assert float(level_for_npsh(hand, ATMOSPHERE, VAPOUR, DENSITY, loss)) == pytest.approx(level, rel=1e-13)


def test_margin():
    np.testing.assert_allclose(npsh_asked(np.array([0.0, 2.0, 10 / 3, 5.0])), [1.0, 3.0, 10 / 3 + 1, 6.5])
    assert np.isnan(npsh_asked(np.nan))


def test_yield_of_a_suction_line_is_the_limit_of_its_loss_at_rest():
    pipe = Pipe("suction", 0.2, 12.0)
    at_rest = solve(0.0, Fluid(DENSITY, Bingham(40.0, 0.05)), [pipe], Vessel(), Vessel())
    assert float(suction_yield_pressure(12.0, 0.2, 40.0)) == pytest.approx(float(at_rest.friction_loss[0]), rel=1e-9)


def test_power_and_motor():
    """Rated outputs of IEC 60072-1, from memory."""
    assert float(shaft_power(0.03, 40.0, 1400.0, 0.6)) == pytest.approx(1400 * 9.80665 * 0.03 * 40 / 0.6, rel=1e-14)
    assert float(motor_power(20e3, 0.15)) == pytest.approx(23e3)
    assert standard_motor(23e3) == 30e3
    assert standard_motor(22e3) == 22e3
    assert standard_motor(1.0) == 60.0
    assert standard_motor(1.01e6) is None
    assert standard_motor(float("nan")) is None
    assert (np.diff(RATED_OUTPUTS) > 0).all()
    assert (RATED_OUTPUTS[0], RATED_OUTPUTS[-1]) == (60.0, 1e6)
