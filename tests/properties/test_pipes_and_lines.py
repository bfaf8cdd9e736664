"""Properties of one pipe and of a whole line, for fluids and pipes that hypothesis picks."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from pipeflow.friction import Regime, Status, solve_pipes, wall_shear_stress
from pipeflow.line.elements import Equipment, Fluid, Pipe
from pipeflow.line.route import LineFlow, solve
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw

ROUND_OFF = 1e-12
"""Relative; the root find stops near 1e-15 and its slopes stay below 10."""


def decades(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high).map(lambda exponent: 10.0**exponent)


DIAMETERS = decades(-2, 0)
DENSITIES = st.floats(700.0, 2500.0)
VELOCITIES = decades(-3, 1)
YIELD_STRESSES = decades(-2, 2.5)
CONSISTENCIES = decades(-3, 1)
INDICES = st.floats(0.2, 1.5)
FLUIDS = st.one_of(
    st.builds(Newtonian, CONSISTENCIES),
    st.builds(PowerLaw, CONSISTENCIES, INDICES),
    st.builds(Bingham, YIELD_STRESSES, CONSISTENCIES),
    st.builds(HerschelBulkley, YIELD_STRESSES, CONSISTENCIES, INDICES),
    st.builds(Casson, YIELD_STRESSES, CONSISTENCIES),
)
ROUGHNESSES = st.sampled_from([0.0, 1e-6, 5e-5])
SEVERAL = settings(max_examples=100, deadline=None)


@SEVERAL
@given(VELOCITIES, DIAMETERS, DENSITIES, FLUIDS, ROUGHNESSES, st.floats(1.01, 3.0))
def test_loss_rises_with_flow_and_in_proportion_to_length(velocity, diameter, density, rheology, roughness, factor):
    flow = velocity * np.pi / 4 * diameter**2
    line = lambda length: [Pipe("one", diameter, length, roughness=roughness)]  # noqa: E731
    fluid = Fluid(density, rheology)
    here = solve(flow, fluid, line(50.0))
    assert solve(flow * factor, fluid, line(50.0)).pressure_loss > here.pressure_loss
    longer = solve(flow, fluid, line(50.0 * factor))
    assert float(longer.pressure_loss / here.pressure_loss) == pytest.approx(factor, rel=ROUND_OFF)


@SEVERAL
@given(VELOCITIES, DIAMETERS, DENSITIES, YIELD_STRESSES, CONSISTENCIES, INDICES, st.floats(1.05, 3.0))
def test_loss_rises_with_yield_stress_and_consistency(velocity, diameter, density, tau_y, k, n, factor):
    """Within a regime: a thicker fluid may be laminar where a thinner one was turbulent."""
    same = (velocity, diameter, density)
    here = solve_pipes(*same, HerschelBulkley(tau_y, k, n))
    for thicker in (HerschelBulkley(tau_y * factor, k, n), HerschelBulkley(tau_y, k * factor, n)):
        there = solve_pipes(*same, thicker)
        if there.regime == here.regime == Regime.LAMINAR:
            assert there.wall_shear_stress > here.wall_shear_stress


@SEVERAL
@given(VELOCITIES, DIAMETERS, DENSITIES, FLUIDS, ROUGHNESSES, st.floats(1.05, 2.0))
def test_loss_falls_with_diameter_within_a_regime(velocity, diameter, density, rheology, roughness, factor):
    """At a given flow, gradient ``4 tau_w/D``."""
    wider = diameter * factor
    here = solve_pipes(velocity, diameter, density, rheology, roughness=roughness)
    there = solve_pipes(velocity / factor**2, wider, density, rheology, roughness=roughness)
    assume(here.regime == there.regime)
    assert there.wall_shear_stress / wider < here.wall_shear_stress / diameter


@SEVERAL
@given(VELOCITIES, DIAMETERS, DENSITIES, FLUIDS, st.floats(0.01, 0.99))
def test_a_pipe_cut_in_two_loses_the_same(velocity, diameter, density, rheology, share):
    flow, fluid = velocity * np.pi / 4 * diameter**2, Fluid(density, rheology)
    whole = solve(flow, fluid, [Pipe("all", diameter, 80.0, 3.0, fittings={"elbow_90": 4}, nominal_diameter=2.0)])
    cut = solve(
        flow,
        fluid,
        [
            Pipe("first", diameter, 80.0 * share, 3.0 * share, fittings={"elbow_90": 1}, nominal_diameter=2.0),
            Pipe(
                "rest", diameter, 80.0 * (1 - share), 3.0 * (1 - share), fittings={"elbow_90": 3}, nominal_diameter=2.0
            ),
        ],
    )
    for name in ("pressure_loss", "pressure_loss_upper", "total_head", "pressure_required"):
        assert float(getattr(cut, name)) == pytest.approx(float(getattr(whole, name)), rel=ROUND_OFF)


@SEVERAL
@given(VELOCITIES, DIAMETERS, DENSITIES, FLUIDS, ROUGHNESSES)
def test_scalars_and_arrays_agree(velocity, diameter, density, rheology, roughness):
    velocities = velocity * np.array([[0.1, 1.0], [5.0, 30.0]])
    together = solve_pipes(velocities, diameter, density, rheology, roughness=roughness, with_edges=True)
    for place in np.ndindex(2, 2):
        alone = solve_pipes(float(velocities[place]), diameter, density, rheology, roughness=roughness, with_edges=True)
        assert alone.wall_shear_stress.shape == ()
        for field in fields(alone):
            one, among = getattr(alone, field.name), getattr(together, field.name)
            if isinstance(one, np.ndarray):
                np.testing.assert_allclose(one, among[place], rtol=ROUND_OFF, err_msg=field.name)


@SEVERAL
@given(DIAMETERS, DENSITIES, FLUIDS, ROUGHNESSES)
def test_rest_is_the_limit_of_vanishing_flow(diameter, density, rheology, roughness):
    rest, slow = (solve_pipes(velocity, diameter, density, rheology, roughness=roughness) for velocity in (0.0, 1e-200))
    assert rest.status == Status.AT_REST
    assert rest.regime == Regime.NO_FLOW
    assert float(rest.wall_shear_stress) == float(np.asarray(rheology.yield_stress))
    for name in ("wall_shear_stress", "laminar_wall_shear_stress", "reynolds_mr", "excess_stress", "wall_shear_rate"):
        assert float(getattr(rest, name)) == pytest.approx(float(getattr(slow, name)), rel=1e-6, abs=1e-9), name


BAD = {
    "velocity": [-1.0, np.nan, np.inf],
    "diameter": [-0.1, 0.0, np.nan],
    "density": [-1000.0, 0.0, np.nan],
    "roughness": [-1e-6, np.nan],
    "yield_stress": [-1.0, np.nan],
    "consistency": [-1.0, np.nan],
    "flow_index": [-0.5, 0.0, np.nan],
}


@pytest.mark.parametrize(("quantity", "value"), [(name, value) for name, values in BAD.items() for value in values])
def test_a_bad_element_is_invalid_alone(quantity, value):
    """Its neighbours, in all regimes, keep every bit."""
    columns = {
        "velocity": np.geomspace(0.01, 30.0, 41),
        "diameter": np.full(41, 0.1),
        "density": np.full(41, 1200.0),
        "roughness": np.full(41, 5e-5),
        "yield_stress": np.full(41, 8.0),
        "consistency": np.full(41, 0.05),
        "flow_index": np.full(41, 0.8),
    }

    def solved():
        rheology = HerschelBulkley(columns["yield_stress"], columns["consistency"], columns["flow_index"])
        pipe = (columns["velocity"], columns["diameter"], columns["density"], rheology)
        return solve_pipes(*pipe, roughness=columns["roughness"], with_edges=True)

    good = solved()
    assert set(good.regime) == {1, 2, 3}
    columns[quantity][20] = value
    bad = solved()
    others = np.arange(41) != 20
    assert bad.status[20] == Status.INVALID
    assert bad.regime[20] == Regime.NO_FLOW
    assert np.isnan(bad.wall_shear_stress[20])
    for field in fields(good):
        one, other = getattr(good, field.name), getattr(bad, field.name)
        if isinstance(one, np.ndarray):
            np.testing.assert_array_equal(one[others], other[others], err_msg=field.name)


def grid_line(diameter, fluid_density, tau_y):
    return (
        Fluid(fluid_density, HerschelBulkley(tau_y, 0.08, 0.75)),
        [
            Pipe(
                "suction", diameter * 1.25, 6.0, 1.5, 5e-5, diameter * 1.25 / 0.0254, {"entrance": 1, "gate_valve": 1}
            ),
            Equipment("exchanger", 4e4, at_flow=0.02, exponent=1.8),
            Pipe("discharge", diameter, 240.0, -4.0, 5e-5, diameter / 0.0254, {"elbow_90": 6, "exit": 1}),
            Equipment("nozzle", 1e4),
        ],
    )


def test_a_grid_of_flows_sizes_and_fluids_equals_the_loop():
    """(3, 5, 60): flow x size x yield stress, element by element."""
    flow = np.array([0.002, 0.02, 0.12])[:, None, None]
    diameter = np.linspace(0.06, 0.25, 5)[:, None]
    tau_y = np.geomspace(0.1, 60.0, 60)
    fluid, route = grid_line(diameter, 1300.0, tau_y)
    grid = solve(flow, fluid, route)
    assert grid.pressure_loss.shape == (3, 5, 60)
    assert {1, 2, 3} <= set(np.unique(grid.pipes.regime))
    for place in np.ndindex(3, 5, 60):
        first, second, third = place
        alone = grid_line(float(diameter[second, 0]), 1300.0, float(tau_y[third]))
        one = solve(float(flow[first, 0, 0]), *alone)
        for field in fields(LineFlow):
            ours, loop = getattr(grid, field.name), getattr(one, field.name)
            if isinstance(loop, np.ndarray):
                shape = (3, 5, 60, *loop.shape)
                np.testing.assert_allclose(
                    np.broadcast_to(ours, shape)[place], loop, rtol=ROUND_OFF, err_msg=field.name
                )
        np.testing.assert_allclose(grid.pipes.wall_shear_stress[place], one.pipes.wall_shear_stress, rtol=ROUND_OFF)
        np.testing.assert_array_equal(grid.pipes.regime[place], one.pipes.regime)


def test_a_bad_flow_leaves_the_other_flows_of_a_line_alone():
    fluid, route = grid_line(0.1, 1300.0, 8.0)
    good = solve(np.array([0.01, 0.03]), fluid, route)
    bad = solve(np.array([0.01, -0.02, 0.03]), fluid, route)
    assert np.isnan(bad.pressure_loss[1])
    np.testing.assert_array_equal(bad.pressure_loss[[0, 2]], good.pressure_loss)


def test_a_line_at_rest_needs_its_yield_stress_and_static_head():
    """Limit Q -> 0+ by definition: ``4 tau_y L/D`` in the pipes and ``K_laminar tau_y/16`` in fittings."""
    tau_y = 12.0
    fluid = Fluid(1250.0, Bingham(tau_y, 0.02))
    route = [Pipe("one", 0.1, 30.0, 2.0, nominal_diameter=4.0, fittings={"elbow_90": 2})]
    rest, slow = solve(0.0, fluid, route), solve(1e-12, fluid, route)
    assert float(rest.friction_loss.sum()) == pytest.approx(4 * tau_y * 30.0 / 0.1, rel=ROUND_OFF)
    assert float(rest.fitting_loss.sum()) == pytest.approx(2 * 800 * tau_y / 16, rel=ROUND_OFF)
    assert float(slow.pressure_loss) == pytest.approx(float(rest.pressure_loss), rel=1e-4)
    assert float(slow.pressure_loss) > float(rest.pressure_loss)


def test_fields_of_parameters_broadcast_against_the_pipes():
    stress = wall_shear_stress(np.ones((3, 1)), 0.1, 1000.0, Bingham(np.array([1.0, 5.0]), 0.02))
    assert stress.shape == (3, 2)
    law = replace(Bingham(1.0, 0.02), yield_stress=5.0)
    assert float(stress[1, 1]) == float(wall_shear_stress(1.0, 0.1, 1000.0, law))
