"""Every crossing of a pump's curve and a line's, and the speed for a wanted duty."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pump_cases import SPEED, invented, pumps

from pipeflow.line.elements import Fluid, Pipe, Vessel
from pipeflow.line.route import solve
from pipeflow.pumping import duty
from pipeflow.pumping.curve import WaterCurve, at_speed
from pipeflow.pumping.duty import duties
from pipeflow.pumping.equivalent import Outlet
from pipeflow.pumping.slurry_curve import slurry_curve
from pipeflow.pumping.speed import OFF_THE_CURVE, TOO_FAST, TOO_SLOW, speed_for
from pipeflow.rheology import Bingham, Newtonian

SLURRY = Bingham(12.0, 0.03)
DROOPING = WaterCurve(np.array([0.0, 0.01, 0.02, 0.03, 0.04]), np.array([28.0, 30.0, 28.0, 22.0, 12.0]))


def on(curve, system):
    return duties(lambda flow: (flow, curve.head_at(flow)), curve.ends, system)


def flat(head):
    return lambda flow: head + 0.0 * flow


def test_two_crossings_of_a_drooping_curve():
    """The one nearer to shut-off is not stable; the duty is the other."""
    found = on(DROOPING, flat(29.0))
    assert [one.is_stable for one in found.intersections] == [False, True]
    assert found.duty is found.intersections[1]
    assert found.is_ambiguous
    assert found.reason == ""


def test_a_steep_line_crosses_a_drooping_curve_once():
    found = on(DROOPING, lambda flow: 10 + 2e4 * flow**2)
    assert [one.is_stable for one in found.intersections] == [True]
    assert not found.is_ambiguous


def test_a_touch_is_found_and_is_not_stable():
    found = on(DROOPING, flat(30.0))
    assert [(one.flow, one.is_stable) for one in found.intersections] == [(0.01, False)]
    assert found.duty is None


@pytest.mark.parametrize("below", [1e-3, 1e-6, 1e-7])
def test_two_crossings_close_together(below):
    """Between two points of the scan; their distance follows from the curvature at the top."""
    found = on(DROOPING, flat(30.0 - below))
    assert [one.is_stable for one in found.intersections] == [False, True]


@pytest.mark.parametrize(
    ("head", "reason"),
    [(31.0, duty.LINE_ASKS_MORE), (11.0, duty.RUN_OUT), (np.nan, duty.NO_FIGURE), (30.0 + 1e-6, duty.LINE_ASKS_MORE)],
)
def test_no_duty_has_a_reason(head, reason):
    found = on(DROOPING, flat(head))
    assert (found.intersections, found.duty, found.reason) == ((), None, reason)


def test_a_pump_of_positive_displacement_that_is_too_strong_has_a_reason():
    def pump(head):
        return 0.02 - 1e-5 * head, head

    assert duties(pump, (20.0, 90.0), flat(10.0)).reason == duty.BELOW_FIRST
    assert duties(pump, (0.0, 9.0), flat(10.0)).reason == duty.LINE_ASKS_MORE
    found = duties(pump, (0.0, 90.0), flat(10.0))
    assert found.duty.head == pytest.approx(10.0, rel=1e-12)


def test_a_pump_without_slip_is_stable():
    """Its curve is vertical."""
    found = duties(lambda head: (0.02 + 0.0 * head, head), (0.0, 90.0), lambda flow: 10 + 1e5 * flow**2)
    assert [(one.flow, one.is_stable) for one in found.intersections] == [(0.02, True)]


def test_curves_that_pass_where_neither_has_figures():
    found = on(DROOPING, lambda flow: np.where(flow < 0.012, 40.0, np.where(flow > 0.028, 1.0, np.nan)))
    assert found.reason == duty.GAP


def test_both_ends_belong_to_the_curve():
    assert on(DROOPING, flat(12.0)).duty.flow == 0.04
    first = on(DROOPING, lambda flow: 28.0 + 1e5 * flow)
    assert [one.flow for one in first.intersections] == [0.0]
    assert first.duty is not None


@given(pumps(), st.floats(0.05, 1.0), st.floats(0.2, 1.0), st.floats(0.3, 2.5))
@settings(max_examples=60, deadline=None)
def test_a_line_through_a_point_of_the_pump_is_found(pump, share, static, exponent):
    flow = share * pump.flow[-1]
    head = float(pump.head_at(flow))
    found = on(pump, lambda q: head * (static + (1 - static) * (q / flow) ** exponent))
    assert min(abs(one.flow / flow - 1) for one in found.intersections) < 1e-9
    for one in found.intersections:
        assert abs(one.residual) <= 1e-9 * one.head


@given(pumps(), st.integers(0, 10**6))
@settings(max_examples=60, deadline=None)
def test_as_many_crossings_as_a_dense_scan_finds(pump, seed):
    """Systems with waves in them, so that there are several; 200 001 points by brute force."""
    random = np.random.default_rng(seed)
    level, slope, wave, length = random.uniform([0.2, 0.0, 0.0, 1.0], [1.1, 0.5, 0.3, 8.0])
    top, last = pump.head.max(), pump.flow[-1]

    def system(flow):
        share = flow / last
        return top * (level + slope * share**2 + wave * np.sin(2 * np.pi * length * share))

    found = on(pump, system)
    dense = np.linspace(0.0, last, 200_001)
    gap = pump.head_at(dense) - system(dense)
    changes = np.flatnonzero(gap[:-1] * gap[1:] < 0)
    assert len(found.intersections) == changes.size
    for one, left in zip(found.intersections, changes, strict=True):
        assert dense[left] <= one.flow <= dense[left + 1]
        assert one.is_stable == (gap[left] > 0)
        assert abs(one.residual) <= 1e-9 * abs(one.head)


def line_of(rheology, density=1400.0):
    """A line of 800 m and 20 m lift, its head by flow, and how often it was asked."""
    route = [Pipe("overland", 0.1541, 800.0, 4.5e-5)]
    calls = []

    def head(flow):
        calls.append(np.size(flow))
        line = solve(flow, Fluid(density, rheology), route, Vessel(), Vessel(level=12.0))
        return line.total_head

    return head, calls


@pytest.mark.parametrize("outlet", [None, Outlet(0.4, 0.03)])
@pytest.mark.parametrize("rheology", [Newtonian(1e-3), SLURRY])
def test_on_a_real_line_the_heads_agree(rheology, outlet):
    system, calls = line_of(rheology)
    curve = slurry_curve(invented(), SPEED, 1400.0, rheology, outlet=outlet)
    found = duties(curve.flow_and_head, curve.ends, system)
    assert found.duty is not None
    assert len(calls) < 30
    flow = np.array([found.duty.flow])
    assert float(curve.state(flow).head[0]) == pytest.approx(float(system(flow)[0]), rel=1e-12)


@pytest.mark.parametrize("outlet", [None, Outlet(0.4, 0.03)])
@pytest.mark.parametrize(("flow", "head"), [(0.03, 40.0), (0.03, 30.0), (0.02, 60.0)])
def test_the_speed_for_a_duty(flow, head, outlet):
    def at(speed):
        return slurry_curve(invented(), speed, 1400.0, SLURRY, outlet=outlet)

    found = speed_for(flow, head, at, (0.4 * SPEED, 1.3 * SPEED))
    assert float(at(found.speed).state(flow).head) == pytest.approx(head, rel=1e-9)


def test_the_speed_on_water_is_that_of_the_affinity_laws():
    curve = at_speed(invented(), 0.83 * SPEED)

    def at(speed):
        return slurry_curve(invented(), speed, 1000.0, Newtonian(1e-3))

    found = speed_for(0.025, float(curve.head_at(0.025)), at, (0.5 * SPEED, SPEED))
    assert found.speed == pytest.approx(0.83 * SPEED, rel=1e-12)


@pytest.mark.parametrize(
    ("flow", "head", "reason"),
    [(0.03, 80.0, TOO_SLOW), (0.01, 5.0, TOO_FAST), (0.055, 8.0, OFF_THE_CURVE), (0.09, 5.0, OFF_THE_CURVE)],
)
def test_no_speed_has_a_reason(flow, head, reason):
    def at(speed):
        return slurry_curve(invented(), speed, 1000.0, Newtonian(1e-3))

    found = speed_for(flow, head, at, (0.5 * SPEED, 1.2 * SPEED))
    assert (found.speed, found.reason) == (None, reason)
