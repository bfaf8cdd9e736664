"""Pumps of positive displacement."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pump_cases import RPM
from scipy.integrate import quad

from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.pumping.displacement import DisplacementPump, acceleration_head, gap_leakage, slip_ratio
from pipeflow.pumping.duty import duties

PRESSURE = np.array([0.0, 2e5, 4e5, 8e5])
FLOW = np.array([10.0, 9.5, 9.0, 7.8]) / 3600
EFFICIENCY = np.array([0.0, 0.60, 0.68, 0.66])
SPEED = 200 * RPM


def pump(**changes):
    columns = {"efficiency": EFFICIENCY, "curve_speed": SPEED} | changes
    return DisplacementPump(PRESSURE, FLOW, 1400.0, **columns)


def test_at_the_speed_of_the_curve_it_is_the_curve():
    state = pump().state(PRESSURE)
    np.testing.assert_allclose(state.flow, FLOW, rtol=1e-14)
    np.testing.assert_allclose(state.head, PRESSURE / (1400 * STANDARD_GRAVITY), rtol=1e-14)
    np.testing.assert_allclose(state.efficiency[1:], EFFICIENCY[1:], rtol=1e-12)
    np.testing.assert_allclose(state.shaft_power[1:], (FLOW * PRESSURE)[1:] / EFFICIENCY[1:], rtol=1e-12)
    assert np.isnan(pump().state(np.array([-1.0, 8.1e5])).flow).all()


@pytest.mark.parametrize("ratio", [0.5, 1.5])
def test_at_another_speed_the_slip_stays(ratio):
    """The displaced flow follows the speed; at one pressure slip and torque stay, so the power follows it too."""
    other, pressure = pump(speed=ratio * SPEED), np.array([2e5, 5e5, 8e5])
    before, after = pump().state(pressure), other.state(pressure)
    displaced = FLOW[0]
    np.testing.assert_allclose(ratio * displaced - after.flow, displaced - before.flow, rtol=1e-12)
    np.testing.assert_allclose(after.shaft_power, ratio * before.shaft_power, rtol=1e-12)
    np.testing.assert_allclose(other.torque(pressure), before.shaft_power / SPEED, rtol=1e-12)
    np.testing.assert_allclose(after.shaft_power, after.flow * pressure / after.efficiency, rtol=1e-12)


def test_pumps_side_by_side():
    one, three = pump().state(PRESSURE), pump(parallel=3).state(PRESSURE)
    for name, times in (("flow", 3), ("head", 1), ("efficiency", 1), ("shaft_power", 3)):
        np.testing.assert_allclose(getattr(three, name), times * getattr(one, name), rtol=1e-12)


def test_slower_than_its_slip_it_gives_nothing():
    state = pump(speed=0.2 * SPEED).state(8e5)
    assert np.isnan(state.flow)
    assert not state.established


def test_without_efficiency_or_speed_there_is_no_power_or_torque():
    assert np.isnan(pump(efficiency=None).state(4e5).shaft_power)
    assert np.isnan(pump(curve_speed=None).torque(4e5))
    assert np.isfinite(pump(curve_speed=None, speed=SPEED).torque(4e5))


def test_the_displaced_flow_of_a_curve_that_begins_under_pressure():
    """By the first two rows: 9.5 and 9 m³/h at 2 and 4 bar lead back to 10."""
    assert DisplacementPump(PRESSURE[1:], FLOW[1:], 1400.0).displaced_flow == pytest.approx(10 / 3600, rel=1e-12)


def test_its_duty_on_a_line():
    """A straight curve and a straight line: ``10 - 2.5 p`` against ``p = 0.2 + 0.05 Q``, in m³/h and MPa."""
    straight = DisplacementPump(np.array([0.0, 1.0, 2.0]) * 1e6, np.array([10.0, 7.5, 5.0]) / 3600, 1000.0)
    weight = 1000 * STANDARD_GRAVITY
    found = duties(straight.flow_and_head, straight.ends, lambda q: (0.2 + 0.05 * 3600 * q) * 1e6 / weight)
    assert found.duty.flow * 3600 == pytest.approx((10 - 2.5 * 0.2) / (1 + 2.5 * 0.05), rel=1e-12)
    assert found.duty.is_stable
    assert len(found.intersections) == 1


@given(st.floats(0.2, 1.5), st.floats(1e4, 2e6), st.floats(0.01, 10.0))
def test_leakage_is_the_integral_of_its_profile(n, pressure, consistency):
    """Plane flow: the rate at y from the middle is ``(dp y/(K L))^(1/n)``; Q is twice the integral of y rate."""
    width, gap, length = 0.3, 0.4e-3, 0.02
    per_rate, _ = quad(
        lambda y: y * (pressure * y * gap / (2 * consistency * length)) ** (1 / n), 0.0, 1.0, epsrel=1e-11
    )
    by_profile = 2 * width * (gap / 2) ** 2 * per_rate
    assert float(gap_leakage(width, gap, length, pressure, consistency, n)) == pytest.approx(by_profile, rel=1e-9)


def test_leakage_of_a_newtonian_liquid():
    found = float(gap_leakage(0.3, 0.4e-3, 0.02, 5e5, 0.05, 1.0))
    assert found == pytest.approx(0.3 * 0.4e-3**3 * 5e5 / (12 * 0.05 * 0.02), rel=1e-14)


def test_slip_scaled_to_another_fluid():
    """Newtonian: by the viscosities alone, at any pressure; a thicker slurry slips less."""
    ratio = slip_ratio(PRESSURE, 0.4e-3, 0.02, 0.01, 0.05)
    np.testing.assert_allclose(ratio, 0.2, rtol=1e-12)
    scaled = pump(slip_factor=ratio)
    np.testing.assert_allclose(scaled.slip_at(PRESSURE), 0.2 * pump().slip_at(PRESSURE), atol=1e-18)
    assert (scaled.state(PRESSURE[1:]).flow > FLOW[1:]).all()


def test_acceleration_head_by_hand():
    """A triplex at 60 1/min on 20 m of line at 1.5 m/s, k = 1.5; C 0.066 of ANSI/HI 6.1-6.5, from memory."""
    hand = 20 * 1.5 * 60 * 0.066 / (1.5 * STANDARD_GRAVITY)
    assert float(acceleration_head(20.0, 1.5, 60 * RPM, 3, 1.5)) == pytest.approx(hand, rel=1e-12)
    by_number = [float(acceleration_head(20.0, 1.5, 60 * RPM, cylinders, 1.5)) for cylinders in (1, 2, 3)]
    assert by_number == sorted(by_number, reverse=True)
    assert np.isnan(acceleration_head(20.0, 1.5, 60 * RPM, 4, 1.5))
