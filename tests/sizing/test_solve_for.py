"""The most a line takes, fed back into the line, meets the limit that settles it."""

from dataclasses import replace

import numpy as np
import pytest

from pipeflow.case.loading import load_text
from pipeflow.case.model import Limits
from pipeflow.errors import InputError
from pipeflow.line.elements import Pipe
from pipeflow.study import solve
from pipeflow.study.sizes.solve_for import solve_for

CASE = """
title: a line at its end
fluid:
  solids: {density: 2700 kg/m3, mass_fraction: 0.40, d85: 40 µm}
  liquid: {density: 1000 kg/m3, viscosity: 1 mPa.s}
  rheology: {model: bingham, yield_stress: 6 Pa, plastic_viscosity: 20 mPa.s}
flow: {minimum: 110 m3/h, design: 140 m3/h, maximum: 160 m3/h}
route:
  - {pipe: suction, size: NPS 8 Sch 40, length: 12 m}
  - {pipe: discharge, size: NPS 6 Sch 40, length: 420 m, rise: 2 m, fittings: {elbow_90: 6}}
limits: {head_loss: 45 m}
scenarios:
  thick: {fluid.solids.mass_fraction: 0.50, fluid.rheology.yield_stress: 18 Pa}
"""
HEAD = Limits(head_loss=45.0)
ALL = Limits(head_loss=45.0, velocity_maximum=3.2, wall_shear_stress=60.0, restart_pressure=900e3)


def judged(case, name):
    check = next(check for check in solve(case).checks if check.name == name)
    return (check.value if check.value_upper is None else check.value_upper) / check.limit


def worst(case):
    names = [name for name, limit in vars(case.limits).items() if limit is not None]
    results = [replace(one, scenarios={}) for one in (case, *case.scenarios.values())]
    return max(judged(one, name) for one in results for name in names)


def with_limits(limits):
    case = load_text(CASE)
    return replace(
        case, limits=limits, scenarios={name: replace(one, limits=limits) for name, one in case.scenarios.items()}
    )


def everywhere(case, change):
    return replace(change(case), scenarios={name: change(one) for name, one in case.scenarios.items()})


@pytest.mark.parametrize(
    "limits", [Limits(head_loss=45.0), Limits(velocity_maximum=3.0), ALL], ids=["head", "velocity", "all"]
)
def test_the_most_flow_meets_its_limit(limits):
    case = with_limits(limits)
    answer = solve_for(case, "flow")
    back = everywhere(case, lambda one: replace(one, flow=replace(one.flow, maximum=answer.value)))
    assert worst(back) == pytest.approx(1.0, rel=1e-9)


@pytest.mark.parametrize("limits", [HEAD, ALL], ids=["head", "all"])
def test_the_most_length_meets_its_limit(limits):
    case = with_limits(limits)
    answer = solve_for(case, "length")
    assert answer.present == 432.0

    def longer(one):
        return replace(one, route=tuple(replace(pipe, length=pipe.length * answer.value / 432.0) for pipe in one.route))

    assert worst(everywhere(case, longer)) == pytest.approx(1.0, rel=1e-9)


@pytest.mark.parametrize("limits", [HEAD, Limits(restart_pressure=900e3), ALL], ids=["head", "restart", "all"])
def test_the_most_yield_stress_meets_its_limit(limits):
    case = replace(with_limits(limits), scenarios={})
    answer = solve_for(case, "yield-stress")
    rheology = replace(case.fluid.rheology, yield_stress=answer.value)
    back = replace(case, fluid=replace(case.fluid, rheology=rheology))
    assert worst(back) == pytest.approx(1.0, rel=1e-9)


def test_the_most_solids_lie_between_those_known():
    case = with_limits(Limits(restart_pressure=300e3))
    answer = solve_for(case, "solids")
    low, high = case.solids.volume_fraction, case.scenarios["thick"].solids.volume_fraction
    assert low < answer.value < high
    share = (answer.value - low) / (high - low)
    stress = np.exp((1 - share) * np.log(6.0) + share * np.log(18.0))
    density = (1 - share) * case.fluid.density + share * case.scenarios["thick"].fluid.density
    back = replace(
        case, fluid=replace(case.fluid, density=density, rheology=replace(case.fluid.rheology, yield_stress=stress))
    )
    assert worst(replace(back, scenarios={})) == pytest.approx(1.0, rel=1e-9)


def test_solids_beyond_those_known_are_not_guessed():
    answer = solve_for(with_limits(Limits(head_loss=1e4)), "solids")
    assert answer.value == pytest.approx(with_limits(ALL).scenarios["thick"].solids.volume_fraction)
    assert answer.value >= answer.highest


def test_what_cannot_be_asked():
    case = load_text(CASE)
    with pytest.raises(InputError, match="accepted: flow, length, yield-stress, solids"):
        solve_for(case, "colour")
    with pytest.raises(InputError, match="at least two are needed"):
        solve_for(replace(case, scenarios={}), "solids")
    with pytest.raises(InputError, match="none that more flow would meet"):
        solve_for(replace(case, limits=Limits(velocity_minimum=1.0), scenarios={}), "flow")


def test_a_line_that_takes_none_says_so():
    answer = solve_for(with_limits(Limits(head_loss=1e-6)), "flow")
    assert answer.value is None
    assert answer.limit == "head_loss"


def test_more_yield_stress_never_lowers_the_restart_pressure():
    case = replace(load_text(CASE), scenarios={}, limits=ALL)
    assert all(isinstance(element, Pipe) for element in case.route)
    pressures = []
    for stress in np.geomspace(0.01, 500.0, 30):
        rheology = replace(case.fluid.rheology, yield_stress=float(stress))
        result = solve(replace(case, fluid=replace(case.fluid, rheology=rheology)))
        pressures.append(next(check.value for check in result.checks if check.name == "restart_pressure"))
    assert np.all(np.diff(pressures) > 0)
