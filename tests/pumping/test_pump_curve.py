"""The water curve: its faults, its reading between the points, its scaling."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pump_cases import EFFICIENCY, FLOW, HEAD, REQUIRED, SPEED, invented, pumps

from pipeflow.pumping.curve import TRIM, WaterCurve, at_speed, in_parallel, in_series, trimmed
from pipeflow.pumping.faults import faults

LITRE = 1e-3


def found(flow, head, efficiency=None, required=None):
    columns = (None if column is None else np.array(column, dtype=float) for column in (efficiency, required))
    curve = WaterCurve(np.array(flow, dtype=float) * LITRE, np.array(head, dtype=float), *columns)
    return [(fault.row, fault.column, fault.is_caution) for fault in faults(curve)]


def test_a_sound_curve_has_no_faults():
    assert faults(invented()) == ()


@pytest.mark.parametrize(
    ("columns", "expected"),
    [
        (([0, 1], [9, 8]), [(None, "flow", False)]),
        (([], []), [(None, "flow", False)]),
        (([0, 2, 1], [9, 8, 7]), [(2, "flow", False)]),
        (([0, 1, 1, 2], [9, 8, 8, 7]), [(2, "flow", False)]),
        (([-1, 1, 2], [9, 8, 7]), [(0, "flow", False)]),
        (([0, 1, 2], [9, 8, -7]), [(2, "head", False)]),
        (([0, 1, 2], [9, np.nan, 7]), [(1, "head", False)]),
        (([0, 1, 2], [9, 8]), [(None, "head", False)]),
        (([0, 1, 2], [7, 8, 9]), [(None, "head", False)]),
        (([0, 1, 2, 3], [9, 8, 7, 7.5]), [(3, "head", False)]),
        (([0, 1, 2, 3], [9, 9.5, 8, 7]), [(1, "head", True)]),
        (([0, 1, 2], [9, 8, 7], [0, 0.6, 0.5], [2, -1, 3]), [(1, "npsh_required", False)]),
        (([0, 1, 2], [9, 8, 7], [0, 60, 50]), [(1, "efficiency", False), (2, "efficiency", False)]),
        (([0, 1, 2], [9, 8, 7], [0, 0.5, 0.6]), [(2, "efficiency", True)]),
    ],
)
def test_faults_name_their_row(columns, expected):
    assert found(*columns) == expected


def test_a_percentage_without_its_unit_is_guessed_at():
    flow, head = np.array([0.0, 1.0, 2.0]), np.array([9.0, 8.0, 7.0])
    assert "per cent" in faults(WaterCurve(flow, head, np.array([0.0, 72.0, 60.0])))[0].message
    assert "per cent" not in faults(WaterCurve(flow, head, np.array([0.0, 172.0, 0.6])))[0].message


def test_the_curve_goes_through_its_points_and_no_further():
    curve = invented()
    for read, column in ((curve.head_at, HEAD), (curve.efficiency_at, EFFICIENCY), (curve.npsh_required_at, REQUIRED)):
        np.testing.assert_allclose(read(FLOW), column, rtol=1e-14)
    past = np.array([-1e-6, FLOW[-1] * (1 + 1e-9), np.nan])
    assert np.isnan(curve.head_at(past)).all()
    assert curve.head_at(FLOW[-1] * (1 + 1e-14)) == HEAD[-1]


@given(pumps())
@settings(max_examples=50, deadline=None)
def test_the_interpolant_keeps_between_its_points(curve):
    """No overshoot: within each interval the head lies between those of its ends."""
    for left in range(curve.flow.size - 1):
        head = curve.head_at(np.linspace(curve.flow[left], curve.flow[left + 1], 20))
        ends = curve.head[left : left + 2]
        assert head.min() >= ends.min() * (1 - 1e-12)
        assert head.max() <= ends.max() * (1 + 1e-12)


def test_best_efficiency_of_a_parabola_is_its_vertex():
    flow = np.array([0.0, 0.7, 1.5, 2.1, 3.0])
    curve = WaterCurve(flow, 10.0 - flow, 0.8 - 0.1 * (flow - 1.73) ** 2)
    assert curve.best_flow == pytest.approx(1.73, rel=1e-12)
    assert curve.best_head == pytest.approx(10.0 - 1.73, abs=1e-9)
    assert not curve.is_best_at_end


def test_best_efficiency_at_an_end_or_on_a_flat_top_or_unknown():
    flow, head = np.array([0.0, 1.0, 2.0]), np.array([9.0, 8.0, 7.0])
    rising = WaterCurve(flow, head, np.array([0.0, 0.5, 0.6]))
    assert (rising.best_flow, rising.is_best_at_end) == (2.0, True)
    assert WaterCurve(flow, head, np.array([0.6, 0.6, 0.6])).best_flow == 0.0
    assert WaterCurve(np.arange(4.0), np.arange(4.0)[::-1], np.array([0.0, 0.6, 0.6, 0.5])).best_flow > 1.0
    assert WaterCurve(flow, head).best_flow is None
    assert WaterCurve(flow, head).best_head is None


@given(pumps(), st.floats(0.3, 2.0))
@settings(max_examples=50, deadline=None)
def test_affinity(curve, ratio):
    """Flow by N, head and NPSH by N², efficiency kept; there and back is the same curve."""
    other = at_speed(curve, ratio * curve.speed)
    share = np.linspace(0.0, 1.0, 17) * curve.flow[-1]
    np.testing.assert_allclose(other.head_at(ratio * share), ratio**2 * curve.head_at(share), rtol=1e-12)
    np.testing.assert_allclose(other.npsh_required_at(ratio * share), ratio**2 * curve.npsh_required_at(share))
    np.testing.assert_allclose(other.efficiency_at(ratio * share), curve.efficiency_at(share), atol=1e-12)
    back = at_speed(other, curve.speed)
    np.testing.assert_allclose(back.head, curve.head, rtol=1e-14)
    np.testing.assert_allclose(back.flow, curve.flow, rtol=1e-14)
    assert other.best_flow == pytest.approx(ratio * curve.best_flow, rel=1e-10)


def test_a_curve_without_a_speed_is_of_the_running_speed():
    curve = at_speed(invented(speed=None), 100.0)
    assert curve.speed == 100.0
    np.testing.assert_array_equal(curve.head, HEAD)


def test_trimming_keeps_the_inlet():
    cut = trimmed(invented(), 0.9)
    np.testing.assert_allclose(cut.flow, 0.9 * FLOW)
    np.testing.assert_allclose(cut.head, 0.81 * HEAD)
    at = np.linspace(0.3, 0.9, 7) * FLOW[-1]
    assert (cut.npsh_required_at(at) >= invented().npsh_required_at(at)).all()
    assert not TRIM.ranges[0].holds(0.75)


def test_series_and_parallel():
    curve, flow = invented(), np.linspace(0.0, FLOW[-1], 31)
    np.testing.assert_allclose(in_series(curve, 3).head_at(flow), 3 * curve.head_at(flow), rtol=1e-13)
    np.testing.assert_allclose(in_parallel(curve, 2).head_at(2 * flow), curve.head_at(flow), rtol=1e-13)
    assert in_series(curve, 3).stages == 3
    np.testing.assert_allclose(in_parallel(in_series(curve, 2), 3).head, in_series(in_parallel(curve, 3), 2).head)
    assert in_series(curve, 2).speed == SPEED
