"""A rotodynamic pump in a slurry."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pump_cases import FLOW, HEAD, RPM, SPEED, invented, pumps, slurries

from pipeflow.constants import STANDARD_GRAVITY
from pipeflow.pumping.correction import efficiency_factor, flow_factor, head_factor, npsh_factor, viscosity_parameter
from pipeflow.pumping.curve import WaterCurve, at_speed
from pipeflow.pumping.equivalent import Outlet
from pipeflow.pumping.slurry_curve import slurry_curve
from pipeflow.pumping.solids import PumpedSolids, cave
from pipeflow.rheology import Bingham, HerschelBulkley, Newtonian, PowerLaw

DENSITY = 1400.0
WATER = Newtonian(1.0e-3)
THICK = Bingham(12.0, 0.03)
OUTLET = Outlet(0.40, 0.03)
SAND = PumpedSolids(0.2e-3, 2.65, 0.3)
FIGURES = ("head", "efficiency", "efficiency_lower", "shaft_power", "shaft_power_upper", "npsh_required")


def inner(curve, points=21):
    """Flows over the curve, its ends left out."""
    first, last = curve.ends
    return first + (last - first) * np.linspace(0.02, 0.98, points)


def test_step_by_step_at_one_flow():
    """The whole chain by hand for a Bingham plastic: rate, two viscosities, two B, factors, power."""
    curve, on_water = slurry_curve(invented(), SPEED, DENSITY, THICK), 100 / 3600
    best = (invented().best_flow, invented().best_head, SPEED)
    rate = 2 * SPEED
    b = [float(viscosity_parameter(mu / DENSITY, *best)) for mu in (0.03 + 12 / rate, 0.03)]
    c_flow, c_head = flow_factor(b[0]), head_factor(b[0], on_water / best[0])
    flow = float(on_water * c_flow)
    state, factors = curve.state(flow), curve.correction(flow)
    assert float(factors.b_head) == pytest.approx(b[0], rel=1e-12)
    assert float(factors.b_efficiency) == pytest.approx(b[1], rel=1e-12)
    assert float(state.head) == pytest.approx(float(c_head * invented().head_at(on_water)), rel=1e-12)
    water_efficiency = float(invented().efficiency_at(on_water))
    assert float(state.efficiency) == pytest.approx(water_efficiency * float(efficiency_factor(b[1])), rel=1e-12)
    assert float(state.efficiency_lower) == pytest.approx(water_efficiency * float(efficiency_factor(b[0])), rel=1e-12)
    hydraulic = DENSITY * STANDARD_GRAVITY * flow * float(state.head)
    assert float(state.shaft_power_upper) == pytest.approx(hydraulic / float(state.efficiency_lower), rel=1e-12)
    rise = npsh_factor(c_flow, invented().npsh_required_at(best[0]), best[0], SPEED)
    required = invented().npsh_required_at(on_water) * rise
    assert float(state.npsh_required) == pytest.approx(float(required), rel=1e-12)
    assert curve.method == "hi-9.6.7"
    assert float(curve.best_flow) == pytest.approx(best[0] * float(c_flow), rel=1e-12)


def test_pumping_water_is_the_water_curve():
    curve = slurry_curve(invented(), SPEED, 1000.0, WATER)
    assert (curve.status, curve.method, curve.sources) == ("as measured", "none", ())
    state = curve.state(FLOW)
    np.testing.assert_allclose(state.head, HEAD, rtol=1e-14)
    assert state.established.all()


@given(pumps(), st.booleans())
@settings(max_examples=20, deadline=None)
def test_the_correction_goes_to_1_as_the_viscosity_goes_to_waters(pump, has_outlet):
    curve = slurry_curve(pump, pump.speed, 1000.0, WATER, outlet=OUTLET if has_outlet else None)
    np.testing.assert_allclose(curve.state(pump.flow).head, pump.head, rtol=1e-12)


@given(pumps(), st.floats(-3.0, 1.0), st.floats(1.0, 30.0), st.booleans())
@settings(max_examples=30, deadline=None)
def test_more_viscosity_never_raises_head_or_efficiency(pump, log_viscosity, times, has_outlet):
    """At one flow of the slurry right of the droop, where the head of the pump falls, and of the same density."""
    thin, thick = (
        slurry_curve(pump, pump.speed, DENSITY, Newtonian(mu), outlet=OUTLET if has_outlet else None)
        for mu in (10**log_viscosity, times * 10**log_viscosity)
    )
    flow = np.linspace(0.45, 1.0, 23) * pump.flow[-1]
    before, after = thin.correction(flow), thick.correction(flow)
    heads = thin.state(flow).head, thick.state(flow).head
    both = np.isfinite(heads[0]) & np.isfinite(heads[1])
    assert (heads[1][both] <= heads[0][both] * (1 + 1e-12)).all()
    for name in ("head_factor", "flow_factor", "efficiency_factor", "efficiency_factor_lower"):
        assert (getattr(after, name) <= getattr(before, name) * (1 + 1e-12))[both].all()


@given(pumps(), slurries(), st.booleans())
@settings(max_examples=40, deadline=None)
def test_any_pump_in_any_slurry(pump, rheology, has_outlet):
    """Refused and then without figures, or figures that keep their bounds, and ends that lie on the curve."""
    curve = slurry_curve(pump, pump.speed, DENSITY, rheology, outlet=OUTLET if has_outlet else None)
    state = curve.state(np.linspace(-0.1, 1.2, 40) * pump.flow[-1])
    if curve.status == "refused":
        assert np.isnan(state.head).all()
        assert not state.established.any()
        assert "B is" in curve.refusal
        return
    known = np.isfinite(state.head)
    assert known.any()
    assert (state.efficiency_lower[known] <= state.efficiency[known]).all()
    last = curve.ends[1]
    head = pump.head[-1] * float(curve.correction(last).head_factor)
    assert float(curve.state(last).head) == pytest.approx(head, rel=1e-9, nan_ok=True)
    assert last / float(curve.correction(last).flow_factor) == pytest.approx(pump.flow[-1], rel=1e-9)
    assert np.isnan(curve.state(last * 1.000001).head)
    assert last <= pump.flow[-1]


def test_by_the_outlet_the_shear_rate_follows_the_flow():
    by_speed, by_outlet = (
        slurry_curve(invented(), SPEED, DENSITY, Bingham(30.0, 0.04), outlet=outlet) for outlet in (None, OUTLET)
    )
    flow = inner(by_outlet)
    assert np.ptp(by_speed.correction(flow).b_head) == 0.0
    assert (np.diff(by_outlet.correction(flow).b_head) < 0).all()
    lost = by_speed.correction(flow).flow_factor - by_outlet.correction(flow).flow_factor
    known = np.isfinite(lost)
    assert known.any()
    assert (lost[known] > 0).all()
    assert (np.diff(lost[known]) < 0).all()
    assert np.isnan(by_outlet.state(0.0).head)  # at rest the apparent viscosity has no bound
    assert not by_outlet.state(flow[0]).established
    assert by_speed.state(0.0).head == HEAD[0]


def test_below_40_per_cent_of_best_efficiency_flow_nothing_is_established():
    curve = slurry_curve(invented(), SPEED, DENSITY, THICK)
    share = np.array([0.0, 0.399, 0.401, 1.2])
    np.testing.assert_array_equal(curve.state(share * curve.best_flow).established, [False, False, True, True])


def test_refused_from_b_of_40():
    curve = slurry_curve(invented(), SPEED, DENSITY, Newtonian(20.0))
    assert curve.status == "refused"
    assert curve.refusal.startswith("B is 64 at")
    assert curve.best_flow is None
    assert np.isnan(curve.state(FLOW).head).all()
    state = slurry_curve(invented(), SPEED, DENSITY, Newtonian(7.0)).state(FLOW[2])
    assert np.isfinite(state.head)


def test_without_an_efficiency_only_thin_liquids_are_pumped():
    bare = WaterCurve(FLOW, HEAD)
    thin = slurry_curve(bare, SPEED, 1000.0, Newtonian(1.5e-3))
    assert thin.status == "as measured"
    np.testing.assert_allclose(thin.state(FLOW).head, HEAD)
    assert np.isnan(thin.state(FLOW).shaft_power).all()
    thick = slurry_curve(bare, SPEED, 1000.0, THICK)
    assert thick.status == "refused"
    assert "no efficiency column" in thick.refusal
    assert thick.values_in_range == {}


def test_without_a_speed_only_thin_liquids_are_pumped():
    unknown = invented(speed=None)
    assert slurry_curve(unknown, np.nan, 1000.0, WATER).status == "as measured"
    thick = slurry_curve(unknown, np.nan, DENSITY, THICK)
    assert "speed is not given" in thick.refusal
    assert np.isnan(thick.state(FLOW).head).all()


def test_solids_alone_and_with_viscosity():
    """The lower factor of the two, never the product."""
    ratio = float(cave(0.2e-3, 2.65, 0.3))
    flow = np.array([60.0, 110.0]) / 3600
    alone = slurry_curve(invented(), SPEED, 1200.0, WATER, solids=SAND)
    assert alone.method == "cave"
    np.testing.assert_allclose(alone.state(flow).head, ratio * invented().head_at(flow), rtol=1e-12)
    np.testing.assert_allclose(alone.state(flow).efficiency, ratio * invented().efficiency_at(flow), rtol=1e-12)
    both = slurry_curve(invented(), SPEED, DENSITY, Newtonian(0.05), solids=SAND)
    viscous = slurry_curve(invented(), SPEED, DENSITY, Newtonian(0.05))
    together, apart = both.correction(flow), viscous.correction(flow)
    np.testing.assert_allclose(together.head_factor, np.minimum(apart.head_factor, ratio))
    np.testing.assert_allclose(together.efficiency_factor, np.minimum(apart.efficiency_factor, ratio))
    assert {source.key for source in both.sources} >= {"cave", "hi-9.6.7"}
    fines = slurry_curve(invented(), SPEED, DENSITY, THICK, solids=replace(SAND, median_size=15e-6))
    assert fines.method == "hi-9.6.7"


@pytest.mark.parametrize("outlet", [None, OUTLET])
def test_equal_pumps_together(outlet):
    """Heads add in series, flows side by side; B is that of one pump; NPSH is that of the first."""
    one = slurry_curve(invented(), SPEED, DENSITY, THICK, outlet=outlet)
    many = slurry_curve(invented(), SPEED, DENSITY, THICK, outlet=outlet, series=2, parallel=3)
    flow = inner(one)
    single, all_together = one.state(flow), many.state(3 * flow)
    for name, times in zip(FIGURES, (2, 1, 1, 6, 6, 1), strict=True):
        np.testing.assert_allclose(getattr(all_together, name), times * getattr(single, name), rtol=1e-12)
    np.testing.assert_allclose(many.ends, 3 * np.array(one.ends), rtol=1e-12)
    assert many.best_flow == pytest.approx(3 * one.best_flow, rel=1e-12)


def test_the_head_of_a_stage_counts_in_b():
    staged = replace(invented(), stages=4)
    one, four = (slurry_curve(w, SPEED, DENSITY, THICK).correction(FLOW[2]).b_head for w in (invented(), staged))
    assert float(four / one) == pytest.approx(4**-0.0625, rel=1e-12)


def test_the_speed_is_changed_before_the_correction():
    slow = slurry_curve(invented(), 980 * RPM, DENSITY, THICK)
    best = at_speed(invented(), 980 * RPM)
    viscosity = (0.03 + 12 / (2 * 980 * RPM)) / DENSITY
    b = viscosity_parameter(viscosity, best.best_flow, best.best_head, 980 * RPM)
    assert float(slow.correction(slow.best_flow).b_head) == pytest.approx(float(b), rel=1e-12)


def test_the_ranges_a_correction_leaves_can_be_said():
    values = slurry_curve(invented(), SPEED, DENSITY, Newtonian(7.0)).values_in_range
    outside = [
        bound.variable.split(",")[0]
        for source in slurry_curve(invented(), SPEED, DENSITY, Newtonian(7.0)).sources
        for bound in source.ranges
        if bound.variable in values and not bound.holds(values[bound.variable])
    ]
    assert outside == ["viscosity in mm²/s"]


def test_a_shear_thickening_slurry_is_judged_by_its_steeper_viscosity():
    curve = slurry_curve(invented(), SPEED, DENSITY, PowerLaw(0.002, 1.6))
    factors = curve.correction(FLOW[3])
    assert factors.b_efficiency > factors.b_head
    assert factors.efficiency_factor_lower == factors.efficiency_by_differential


def test_a_yield_stress_past_the_method_in_the_outlet_is_refused():
    curve = slurry_curve(invented(), SPEED, DENSITY, HerschelBulkley(3000.0, 5.0, 0.5), outlet=OUTLET)
    assert curve.status == "refused"
