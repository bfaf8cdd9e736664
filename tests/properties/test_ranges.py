"""Leaving the range of a method in use is always told, with the method and the range; staying in it never is.

The variables are worked out here from their definitions (Metzner & Reed 1955; Hedstrom 1952), the ranges are those of
the records.
"""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from pipeflow.case.model import Case, FlowRange, Methods, Solids
from pipeflow.friction import Regime, solve_pipes
from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.methods import TURBULENT
from pipeflow.line.elements import Fluid, Pipe
from pipeflow.line.fittings import fittings
from pipeflow.line.losses import EXPANSION
from pipeflow.rheology import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw
from pipeflow.study import solve

DENSITY = 1200.0
MARGIN = 1e-6
"""Relative; figures this close to a bound are left out: they are worked out twice."""
QUICK = settings(max_examples=40, deadline=None, suppress_health_check=[HealthCheck.filter_too_much])
WIDTH = st.floats(0.01, 0.6)
STRESS = st.floats(0.05, 60.0)
INDEX = st.floats(0.2, 1.4)


def viscosity(reynolds, diameter, speed):
    return DENSITY * speed * diameter / reynolds


@st.composite
def pipes(draw, models):
    """A pipe and a fluid of one of these models; numbers spread so that both sides of every range are common."""
    model = draw(st.sampled_from(sorted(models)))
    diameter, speed = draw(WIDTH), draw(st.floats(0.3, 8.0))
    reynolds = 10 ** draw(st.floats(3.3, 9.0 if model == "newtonian" else 6.0))
    mu = viscosity(reynolds, diameter, speed)
    n, stress = draw(INDEX), draw(STRESS)
    consistency = mu * (8 * speed / diameter) ** (1 - n)
    law = {
        "newtonian": Newtonian(mu),
        "power-law": PowerLaw(consistency, n),
        "bingham": Bingham(stress, mu),
        "herschel-bulkley": HerschelBulkley(stress, consistency, n),
        "casson": Casson(stress, mu),
    }[model]
    roughness = diameter * draw(st.sampled_from([0.0, 1e-5, 5e-4, 2e-3, 0.03, 0.06]))
    return law, speed, diameter, roughness


def cautions(pipe, methods, slowest=1.0, fastest=1.0, **fittings_of_the_pipe):
    law, speed, diameter, roughness = pipe
    flow = speed * np.pi / 4 * diameter**2
    flows = FlowRange(slowest * flow, flow, fastest * flow)
    line = (Pipe("line", diameter, 10.0, 0.0, roughness, diameter / 0.0254, fittings_of_the_pipe),)
    case = Case(
        "case.yaml", "", "", "", Fluid(DENSITY, law), flows, None, None, line,
        methods=methods, solids=Solids(2650.0, 0.2, 0.1, d85=50e-6),
    )  # fmt: skip
    result = solve(case)
    return result.elements[0], result.cautions


def variables(pipe):
    """Re_MR and n' of laminar flow at this velocity, the relative roughness, the Hedstrom number.

    The n' of a yield fluid is left out: a turbulent method uses that at the turbulent wall stress (see below).
    """
    law, speed, diameter, roughness = pipe
    stress = float(solve_pipes(speed, diameter, DENSITY, law).laminar_wall_shear_stress)
    bulk = 8 * speed / diameter
    found = {"Re_MR": 8 * DENSITY * speed**2 / stress, "eps/D": roughness / diameter}
    if not np.any(getattr(law, "yield_stress", 0.0)):
        found["n'"] = 1 / (4 * float(solve_pipes(speed, diameter, 1e-9, law).wall_shear_rate) / bulk - 3)
    else:
        k = getattr(law, "consistency", None) or getattr(law, "plastic_viscosity", None) or law.casson_viscosity
        n = getattr(law, "flow_index", 1.0)
        found["He"] = DENSITY * diameter**2 / law.yield_stress * (law.yield_stress / k) ** (2 / n)
    return found


def told(source, bound, said):
    return any(f"{source.key} is outside its range {bound} " in text and text.startswith("line: ") for text in said)


def assert_told(source, ranges, values, said):
    for bound in ranges:
        if bound.variable not in values:
            continue
        value = values[bound.variable]
        ends = [end for end in (bound.lower, bound.upper) if end is not None]
        if all(abs(value - end) > MARGIN * abs(end) for end in ends):
            assert told(source, bound, said) == (not bound.holds(value)), (bound, value)


RANGED = [key for key, method in TURBULENT.items() if method.source.ranges]
KNOWN = {"newtonian", "power-law", "bingham", "herschel-bulkley", "casson"}


@pytest.mark.parametrize("key", RANGED)
def test_turbulent_method(key):
    method = TURBULENT[key]

    @QUICK
    @given(pipes(method.models & KNOWN))
    def holds(pipe):
        element, said = cautions(pipe, Methods(turbulent=key))
        assume(element.regime == "turbulent")
        assert_told(method.source, method.source.ranges, variables(pipe), said)

    holds()


@pytest.mark.parametrize("key", [key for key, criterion in CRITERIA.items() if criterion.source.ranges])
def test_criterion(key):
    criterion = CRITERIA[key]

    @QUICK
    @given(pipes(criterion.models & {"bingham", "herschel-bulkley"}))
    def holds(pipe):
        _, said = cautions(pipe, Methods(critical=key))
        assert_told(criterion.source, criterion.source.ranges, variables(pipe), said)

    holds()


MEASURED = [key for key, fitting in fittings().items() if fitting.ranges("edwards-darby")]


@QUICK
@given(pipes(KNOWN), st.sampled_from(MEASURED))
def test_fitting_of_a_measured_range(pipe, key):
    law, speed, diameter, roughness = pipe
    slow = (law, speed / 300, diameter, roughness)
    _, said = cautions(slow, Methods(fittings="edwards-darby"), **{key: 1})
    (bound,) = fittings()[key].ranges("edwards-darby")
    value = variables(slow)["Re_MR"]
    assert any(f"for {key} is outside its range {bound} " in text for text in said) == (not bound.holds(value))


@pytest.mark.parametrize("key", RANGED)
def test_minimum_and_maximum_flow_are_looked_at_too(key):
    """Re_MR is in every range at 2 m/s, and above every one at a flow 1e5 times that."""
    source = TURBULENT[key].source
    bound = next(bound for bound in source.ranges if bound.variable == "Re_MR")
    n = 1.0 if key == "colebrook-white" else 0.75
    mu = viscosity(20_000.0, 0.1, 2.0)
    law = Newtonian(mu) if n == 1 else PowerLaw(mu * 160.0 ** (1 - n), n)
    pipe = (law, 2.0, 0.1, 0.0)
    fast = (law, 2e5, 0.1, 0.0)
    assert bound.holds(variables(pipe)["Re_MR"])
    assert not told(source, bound, cautions(pipe, Methods(turbulent=key))[1])
    assert told(source, bound, cautions(pipe, Methods(turbulent=key), fastest=1e5)[1])
    assert told(source, bound, cautions(fast, Methods(turbulent=key), slowest=1e-5)[1])


def test_index_of_a_yield_fluid_is_that_of_the_turbulent_wall_stress():
    """Dodge & Metzner's n' is taken at the turbulent wall stress, 0.81 here; that of laminar flow is 0.346."""
    source = TURBULENT["dodge-metzner"].source
    bound = next(bound for bound in source.ranges if bound.variable == "n'")
    _, said = cautions((Bingham(8.0, 0.015), 4.0, 0.1, 0.0), Methods(turbulent="dodge-metzner"))
    assert not told(source, bound, said)


def test_hedstrom_number_of_a_casson_fluid():
    """He = 4800 with the Casson viscosity, below the 1e5 from which the intersection holds."""
    source = CRITERIA["intersection"].source
    _, said = cautions((Casson(1.0, 0.05), 1.0, 0.1, 0.0), Methods(critical="intersection"))
    assert told(source, source.ranges[0], said)


def test_sudden_expansion():
    """At Re_MR 0.6 the momentum balance of an expansion, published from 100 on, leaves its range."""
    pipes_of_two_bores = tuple(Pipe(f"pipe {bore}", bore, 10.0) for bore in (0.1, 0.15))
    flow = 0.1 * np.pi / 4 * 0.1**2
    fluid = Fluid(DENSITY, PowerLaw(50.0, 0.5))
    case = Case("case.yaml", "", "", "", fluid, FlowRange(flow, flow, flow), None, None, pipes_of_two_bores)
    assert any(EXPANSION.key in text and str(EXPANSION.ranges[0]) in text for text in solve(case).cautions)


@pytest.mark.parametrize("key", RANGED)
def test_both_sides_are_met(key):
    """The pipes above are no empty promise: some turbulent ones leave each range of the method, some keep it."""
    method, inside, outside = TURBULENT[key], set(), set()
    rng = np.random.default_rng(8)
    for _ in range(4000):
        model = "newtonian" if key == "colebrook-white" else "power-law"
        diameter, speed, n = 0.1, 2.0, 1.0 if model == "newtonian" else float(rng.uniform(0.25, 1.3))
        mu = viscosity(10 ** rng.uniform(3.3, 9.0), diameter, speed)
        law = Newtonian(mu) if model == "newtonian" else PowerLaw(mu * (8 * speed / diameter) ** (1 - n), n)
        pipe = (law, speed, diameter, diameter * float(rng.choice([0.0, 2e-3, 0.06])))
        if solve_pipes(speed, diameter, DENSITY, law, roughness=pipe[3], method=key).regime != Regime.TURBULENT:
            continue
        values = variables(pipe)
        for bound in method.source.ranges:
            (inside if bound.holds(values[bound.variable]) else outside).add(bound.variable)
        if len(inside) == len(outside) == len(method.source.ranges):
            return
    raise AssertionError((inside, outside))
