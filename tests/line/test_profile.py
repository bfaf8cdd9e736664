"""The profile of pressure and head: hand-worked lines, its ends, slack flow behind a high point, whole grids."""

from __future__ import annotations

from dataclasses import fields

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pipeflow.line import route
from pipeflow.line.elements import Equipment, Fluid, Pipe, Vessel
from pipeflow.line.profile import profile
from pipeflow.line.site import standard_atmosphere
from pipeflow.rheology import Bingham, HerschelBulkley, Newtonian

G = 9.80665
OIL = Fluid(900.0, Newtonian(0.1))
ATMOSPHERE, VAPOUR = 101325.0, 2339.0
"""Water at 20 °C boils at 2339 Pa (IAPWS, from memory, high confidence)."""


def area(diameter):
    return np.pi / 4 * diameter**2


def both(flow, fluid, elements, source=None, destination=None, **kwargs):
    line = route.solve(flow, fluid, elements, source, destination)
    return line, profile(line, fluid, elements, source, destination, **kwargs)


def test_a_laminar_line_by_hand():
    """Hagen–Poiseuille: 32 mu V L/D²; all of the kinetic head 2 V²/2g is lost at the exit."""
    velocity = 0.5
    elements = [
        Pipe("suction", 0.1, 10.0, rise=-1.0),
        Equipment("meter", 3000.0),
        Pipe("discharge", 0.1, 50.0, rise=6.0, fittings={"exit": 1}),
    ]
    source, destination = Vessel(5e3, 2.0), Vessel(2e4, 1.5)
    line, here = both(velocity * area(0.1), OIL, elements, source, destination, pump_position=1)
    gradient = 32 * 0.1 * velocity / 0.1**2
    dynamic = 2 * 450.0 * velocity**2
    weight = 900.0 * G
    start = 5e3 + 2.0 * weight - dynamic
    suction_end = start - 10 * gradient + weight
    discharge_end = 2e4 + 1.5 * weight
    meter_start = discharge_end + 50 * gradient + 6 * weight + 3000.0
    assert here.central.pressure.tolist() == pytest.approx(
        [
            5e3,
            5e3 + 2.0 * weight,
            start,
            suction_end,
            meter_start,
            meter_start - 3000.0,
            meter_start - 3000.0,
            discharge_end,
            2e4,
        ],
        rel=1e-12,
    )
    assert float(here.central.pump_head) == pytest.approx((meter_start - suction_end) / weight, rel=1e-12)
    assert float(here.central.pump_head) == pytest.approx(float(line.total_head), rel=1e-12)
    assert [str(node) for node in here.nodes] == [
        "source, surface",
        "route, start",
        "suction, start",
        "suction, end",
        "meter, start",
        "meter, end",
        "discharge, start",
        "discharge, end",
        "destination, surface",
    ]
    assert here.elevation.tolist() == [2.0, 0.0, 0.0, -1.0, -1.0, -1.0, -1.0, 5.0, 6.5]
    assert here.distance.tolist() == [0.0, 0.0, 0.0, 10.0, 10.0, 10.0, 10.0, 60.0, 60.0]
    assert here.name_at(here.central.highest_pressure) == "meter, start"
    assert here.name_at(here.central.lowest_pressure) == "suction, start"
    assert here.name_at(here.highest_point) == "discharge, end"
    assert here.name_at(here.lowest_point) == "suction, end"
    assert here.central.slack is None  # not checked


LINE = [
    Pipe("suction", 0.15, 8.0, -2.0, 5e-5, 6.0, {"entrance": 1, "gate_valve": 1}),
    Pipe("discharge", 0.1, 60.0, 9.0, 5e-5, 4.0, {"elbow_90": 3}),
    Equipment("exchanger", 4e4, at_flow=0.02, exponent=1.8),
    Pipe("riser", 0.125, 20.0, 4.0, 5e-5, 5.0, {"exit": 1}),
]


@settings(max_examples=100, deadline=None)
@given(
    flow=st.floats(0.0, 0.1, allow_subnormal=False),
    position=st.integers(0, 4),
    level=st.floats(-5.0, 5.0),
    pressure=st.floats(-5e4, 5e5),
    tau_y=st.floats(0.0, 40.0),
)
def test_the_profile_ends_at_the_destination(flow, position, level, pressure, tau_y):
    fluid, ends = Fluid(1300.0, Bingham(tau_y, 0.02)), (Vessel(1e4, 3.0), Vessel(pressure, level))
    line, here = both(flow, fluid, LINE, *ends, pump_position=position)
    scale = 1e5 + abs(pressure)
    for grade, head in ((here.central, line.total_head), (here.upper, line.total_head_upper)):
        assert float(grade.pressure[-1]) == pytest.approx(pressure, abs=1e-9 * scale)
        assert float(grade.pressure[0]) == pytest.approx(1e4, abs=1e-9 * scale)
        assert float(grade.pump_head) == pytest.approx(float(head), abs=1e-9 * scale / (1300 * G))
    if position < len(LINE):  # the exit loses just the kinetic head
        assert float(here.central.pressure[-2]) == pytest.approx(pressure + 1300 * G * level, abs=1e-9 * scale)
    given_head = profile(line, fluid, LINE, *ends, pump_position=position, pump_head=here.central.pump_head)
    assert given_head.central.pressure == pytest.approx(here.central.pressure, abs=1e-9 * scale)


def test_a_pump_of_given_head_shows_its_surplus_at_the_end():
    needed = both(0.02, OIL, LINE)[1]
    _, more = both(0.02, OIL, LINE, pump_position=1, pump_head=needed.central.pump_head + 5.0)
    assert float(more.central.pressure[-1]) == pytest.approx(5.0 * 900.0 * G, rel=1e-9)


HILL = [
    Pipe("up", 0.1, 100.0, rise=30.0),
    Pipe("down", 0.1, 200.0, rise=-40.0),
    Pipe("flat", 0.1, 50.0, fittings={"exit": 1}),
]
SITE = {"atmospheric_pressure": ATMOSPHERE, "vapour_pressure": VAPOUR}


def hill_by_hand(velocity, least):
    """Full-pipe pressure head over the hill, and the head that asks for ``least`` there, m."""
    gradient = 32 * 0.1 * velocity / 0.1**2 / (900.0 * G)
    kinetic = 2 * velocity**2 / (2 * G)
    full = -10.0 + 250 * gradient + kinetic - 30.0 - kinetic  # pressure head at the top, from the destination back
    lowest = (least - ATMOSPHERE) / (900.0 * G)
    return gradient, kinetic, full, lowest


def test_a_high_point_governs():
    velocity = 0.2
    gradient, kinetic, full, lowest = hill_by_hand(velocity, VAPOUR)
    assert full < lowest
    line, here = both(velocity * area(0.1), OIL, HILL, **SITE)
    slack = here.central.slack
    assert here.name_at(slack.governing) == "down, start"
    assert float(slack.head_without) == pytest.approx(float(line.total_head), rel=1e-12)
    assert float(slack.head_required) == pytest.approx(30.0 + lowest + kinetic + 100 * gradient, rel=1e-12)
    # slack as far down as the full-pipe pressure stays below that of vapour: it rises by 0.2 - gradient a metre
    assert slack.share.tolist() == pytest.approx([0.0, (lowest - full) / (0.2 - gradient) / 200.0, 0.0], rel=1e-9)
    assert float(here.central.pressure[4]) + ATMOSPHERE == pytest.approx(VAPOUR, rel=1e-9)
    assert float(here.central.pressure[-1]) == pytest.approx(0.0, abs=1e-6)
    assert float(here.central.pump_head) == float(slack.head_required)
    full_at_top = both(velocity * area(0.1), OIL, HILL, **SITE, least_pressure=ATMOSPHERE)[1].central
    assert float(full_at_top.slack.head_required) == pytest.approx(30.0 + kinetic + 100 * gradient, rel=1e-12)


def test_a_line_without_slack_flow_is_governed_by_its_destination():
    line, here = both(0.5 * area(0.1), OIL, LINE, **SITE)
    assert here.name_at(here.central.slack.governing) == "destination, surface"
    assert here.central.slack.share.tolist() == [0.0] * 4
    plain = profile(line, OIL, LINE)
    assert here.central.pressure.tolist() == plain.central.pressure.tolist()


def test_a_second_lower_hill_behind_the_first():
    hills = [
        Pipe("first up", 0.1, 50.0, rise=40.0),
        Pipe("first down", 0.1, 50.0, rise=-30.0),
        Pipe("second up", 0.1, 50.0, rise=20.0),
        Pipe("second down", 0.1, 50.0, rise=-45.0),
    ]
    _, here = both(0.05 * area(0.1), OIL, hills, **SITE)
    slack = here.central.slack
    assert here.name_at(slack.governing) == "first down, start"
    assert (slack.share > 0).tolist() == [False, True, False, True]
    assert np.all(here.central.pressure[2:] + ATMOSPHERE >= VAPOUR * (1 - 1e-9))


@settings(max_examples=60, deadline=None)
@given(
    rises=st.lists(st.floats(-40.0, 40.0), min_size=2, max_size=6),
    velocity=st.floats(0.0, 3.0, allow_subnormal=False),
    position=st.integers(0, 1),
)
def test_after_the_pump_nothing_falls_below_vapour_pressure(rises, velocity, position):
    elements = [Pipe(f"pipe {place}", 0.1, 60.0, rise=rise) for place, rise in enumerate(rises)]
    _, here = both(velocity * area(0.1), OIL, elements, **SITE, pump_position=position)
    for grade in (here.central, here.upper):
        after = grade.pressure[2 * position + 2 : -1] + ATMOSPHERE
        assert np.all(after >= VAPOUR - 1e-6 * ATMOSPHERE)
        assert grade.slack.head_required >= grade.slack.head_without - 1e-9
        assert np.all((grade.slack.share >= 0) & (grade.slack.share <= 1))
        raised = float(grade.slack.head_required - grade.slack.head_without)
        assert (raised > 1e-9) <= bool(grade.slack.share.any())
        assert float(grade.pressure[-1]) == pytest.approx(0.0, abs=1e-6)


def test_free_discharge_ends_at_the_pipe():
    ends = (Vessel(level=1.0), Vessel(pressure=1e4, level=-3.0, discharge="free"))
    line, here = both(0.01, OIL, LINE, *ends)
    assert here.elevation[-1] == here.elevation[-2] == 11.0
    assert float(here.central.pressure[-1]) == pytest.approx(1e4, rel=1e-9)
    assert float(here.central.pressure[-2]) == pytest.approx(1e4, rel=1e-9)
    assert float(here.central.pump_head) == pytest.approx(float(line.total_head), rel=1e-12)


def test_a_grid_equals_the_loop():
    """(3, 5): flow by yield stress, with arrays for a rise, a level and the vapour pressure."""
    flow = np.array([0.0, 0.01, 0.05])[:, None]
    tau_y = np.linspace(0.5, 40.0, 5)
    rise = np.array([5.0, 20.0, 35.0])[:, None]
    vapour = np.linspace(1e3, 2e4, 5)

    def solved(flow, tau_y, rise, vapour):
        fluid = Fluid(1300.0, HerschelBulkley(tau_y, 0.3, 0.7))
        elements = [
            Pipe("up", 0.12, 40.0, rise, 5e-5, 5.0, {"entrance": 1}),
            Equipment("meter", 1e3, 0.01),
            Pipe("down", 0.1, 80.0, -rise, 5e-5, 4.0, {"exit": 1}),
        ]
        ends = (Vessel(level=rise / 5), Vessel(level=1.0))
        return both(
            flow, fluid, elements, *ends, atmospheric_pressure=ATMOSPHERE, vapour_pressure=vapour, pump_position=1
        )[1]

    grid = solved(flow, tau_y, rise, vapour)
    assert grid.central.pressure.shape == (3, 5, 9)
    assert grid.central.slack.share.any()
    for row, column in np.ndindex(3, 5):
        one = solved(float(flow[row, 0]), float(tau_y[column]), float(rise[row, 0]), float(vapour[column]))
        for name in ("distance", "elevation", "kinetic_head"):
            ours = np.broadcast_to(getattr(grid, name), (3, 5, 9))[row, column]
            np.testing.assert_allclose(ours, getattr(one, name), rtol=1e-12, atol=1e-12)
        for ours, alone in ((grid.central, one.central), (grid.upper, one.upper)):
            for name in ("total_head", "pressure", "pump_head"):
                np.testing.assert_allclose(
                    getattr(ours, name)[row, column], getattr(alone, name), rtol=1e-12, atol=1e-6, err_msg=name
                )
            for field in fields(alone.slack):
                np.testing.assert_allclose(
                    getattr(ours.slack, field.name)[row, column], getattr(alone.slack, field.name), rtol=1e-9, atol=1e-9
                )


def test_routes_without_pipes_or_without_anything():
    for elements in ([], [Equipment("meter", 9e3)]):
        _, here = both(0.01, OIL, elements, destination=Vessel(1e4), **SITE)
        assert float(here.central.pressure[-1]) == pytest.approx(1e4, rel=1e-12)


def test_pump_position_outside_the_route():
    line = route.solve(0.01, OIL, LINE)
    with pytest.raises(ValueError, match="pump_position 5"):
        profile(line, OIL, LINE, pump_position=5)


@pytest.mark.parametrize(
    ("altitude", "printed", "precision"),
    [
        (-1000, 113929, 0.5),
        (0, 101325, 0.5),
        (1000, 89874.6, 0.05),
        (2000, 79495.2, 0.05),
        (5000, 54019.9, 0.05),
        (11000, 22632.0, 0.05),
    ],
)
def test_standard_atmosphere(altitude, printed, precision):
    """ISO 2533:1975, pressure by geopotential altitude, printed to six digits; from memory, high confidence."""
    assert float(standard_atmosphere(altitude)) == pytest.approx(printed, abs=precision)


def test_standard_atmosphere_ends_where_its_layer_ends():
    assert np.isnan(standard_atmosphere(np.array([-2001.0, 0.0, 11001.0]))).tolist() == [True, False, True]
