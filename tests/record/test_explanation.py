"""The parts of a change add up to it, are those worked out by hand, and fall to the inputs that changed."""

import inspect
import math
from dataclasses import fields, replace
from itertools import permutations

import numpy as np
import pytest
from hypothesis import given, settings
from making import CHANGES, case_of

from pipeflow.case.loading import load_text
from pipeflow.line import route
from pipeflow.line.elements import Equipment, Fluid, Pipe, Vessel
from pipeflow.record.comparison import TOTALS
from pipeflow.record.explanation import PROGRAM, explain
from pipeflow.record.mixes import KINDS_OF_PIPE, Line, Transition, line_of, totals
from pipeflow.rheology import Bingham, Newtonian
from pipeflow.study import solve

HEAD_LOSS = TOTALS.index("head_loss_m")


def stored_totals(case):
    found = solve(case).totals
    return np.array([getattr(found, key.rpartition("_")[0]) for key in TOTALS])


def parted(before, after):
    """The explanation between two cases, and the change as their own results have it."""
    change = stored_totals(after) - stored_totals(before)
    return explain(line_of(before), line_of(after), change), change


def part(found, group, total=HEAD_LOSS):
    return found.parts[found.groups.index(group), total]


@given(CHANGES, CHANGES)
@settings(max_examples=20, deadline=None)
def test_the_parts_add_up_and_the_program_has_none(before, after):
    found, change = parted(case_of(**before), case_of(**after))
    scale = np.abs(stored_totals(case_of(**after))) + np.abs(stored_totals(case_of(**before)))
    assert np.all(np.abs(found.parts.sum(axis=0) - change) <= 1e-9 * np.abs(change) + 1e-300)
    assert np.all(np.abs(found.parts[-1]) <= 1e-9 * scale)
    assert found.groups[-1] == PROGRAM


@given(CHANGES)
@settings(max_examples=10, deadline=None)
def test_nothing_changed_is_nothing_to_part(changes):
    found, change = parted(case_of(**changes), case_of(**changes))
    assert found.groups == (PROGRAM,)
    assert not change.any()
    assert not found.parts.any()


LAMINAR = """\
title: One laminar pipe
fluid: {{density: {rho} kg/m3, rheology: {{model: newtonian, viscosity: {mu} Pa.s}}}}
flow: {flow} m3/s
route:
  - {{pipe: only, diameter: {bore} m, length: {length} m, roughness: 0.01 mm}}
"""


def laminar(rho=1200.0, mu=0.9, flow=0.002, bore=0.1, length=80.0):
    return load_text(LAMINAR.format(rho=rho, mu=mu, flow=flow, bore=bore, length=length))


def hagen_poiseuille(rho=1200.0, mu=0.9, flow=0.002, bore=0.1, length=80.0):
    """Head loss of laminar flow, m: ``128 mu L Q/(pi D^4 rho g)`` (exact)."""
    return 128 * mu * length * flow / (math.pi * bore**4 * rho * 9.80665)


def test_two_changes_by_hand():
    """With h = c mu Q the part of mu is ``dmu (Q1 + Q2)/2 c``: half of each order."""
    found, _ = parted(laminar(), laminar(mu=1.2, flow=0.003))
    c = hagen_poiseuille() / (0.9 * 0.002)
    assert part(found, "viscosity") == pytest.approx(c * 0.3 * (0.002 + 0.003) / 2, rel=1e-9)
    assert part(found, "flow") == pytest.approx(c * 0.001 * (0.9 + 1.2) / 2, rel=1e-9)


def test_three_changes_by_hand():
    """With h = x y z: ``dx [2 y1 z1 + y2 z1 + y1 z2 + 2 y2 z2]/6`` for x."""
    found, _ = parted(laminar(), laminar(mu=0.7, flow=0.0025, length=110.0))
    c = hagen_poiseuille() / (0.9 * 0.002 * 80)
    old, new = (0.9, 0.002, 80.0), (0.7, 0.0025, 110.0)
    for place, group in enumerate(("viscosity", "flow", "lengths and rises")):
        (y1, y2), (z1, z2) = (pair for index, pair in enumerate(zip(old, new, strict=True)) if index != place)
        mean = (2 * y1 * z1 + y2 * z1 + y1 * z2 + 2 * y2 * z2) / 6
        assert part(found, group) == pytest.approx(c * (new[place] - old[place]) * mean, rel=1e-9)


def test_five_changes_are_the_mean_over_every_order():
    """All 120 orders walked one by one with the closed form, which shares nothing with the program."""
    new = {"rho": 1300.0, "mu": 1.2, "flow": 0.0024, "bore": 0.11, "length": 95.0}
    names = {"rho": "density", "mu": "viscosity", "flow": "flow", "bore": "bores", "length": "lengths and rises"}
    found, _ = parted(laminar(), laminar(**new))
    parts = dict.fromkeys(new, 0.0)
    for order in permutations(new):
        given_so_far = {}
        for key in order:
            before = hagen_poiseuille(**given_so_far)
            given_so_far[key] = new[key]
            parts[key] += (hagen_poiseuille(**given_so_far) - before) / math.factorial(len(new))
    for key, group in names.items():
        assert part(found, group) == pytest.approx(parts[key], rel=1e-9)


PIPES = (Pipe("a", 0.2, 40.0, roughness=5e-5), Equipment("meter", 9e3), Pipe("b", 0.15, 300.0, 4.0, 5e-5))
LINE = line_of(replace(case_of(), route=PIPES))


def change_between(before, after):
    first, last = totals([before])[0], totals([after])[0]
    return explain(before, after, last - first), last - first


def test_a_route_that_is_built_differently_changes_as_one():
    longer = replace(PIPES[2], length=330.0)
    found, change = change_between(LINE, replace(LINE, route=(PIPES[0], longer, Pipe("c", 0.15, 50.0))))
    assert found.groups == ("route", "lengths and rises", PROGRAM)
    assert found.parts.sum(axis=0) == pytest.approx(change, rel=1e-9)


@pytest.mark.parametrize(
    "elements",
    [PIPES[::-1], (replace(PIPES[0], name="renamed"), *PIPES[1:]), PIPES[:1], (Equipment("a", 1e3), *PIPES[1:])],
    ids=["reordered", "renamed", "removed", "of another kind"],
)
def test_what_counts_as_the_route(elements):
    found, _ = change_between(LINE, replace(LINE, route=elements))
    assert found.groups == ("route", PROGRAM)


def test_another_model_changes_as_one_with_the_method_made_for_it():
    other = replace(LINE, fluid=Fluid(1400.0, Newtonian(0.02)), methods=replace(LINE.methods, turbulent=None))
    found, _ = change_between(LINE, other)
    assert found.groups == ("methods and rheology", PROGRAM)
    found, _ = change_between(other, replace(other, fluid=Fluid(1400.0, Bingham(3.0, 0.02))))
    assert found.groups == ("rheology", PROGRAM)


def test_a_vessel_that_was_not_there():
    found, _ = change_between(LINE, replace(LINE, destination=Vessel(5e4, 2.0)))
    assert found.groups == ("source and destination", PROGRAM)
    assert part(found, "source and destination", HEAD_LOSS) == 0.0
    assert part(found, "source and destination", TOTALS.index("total_head_m")) == pytest.approx(
        2.0 + 5e4 / (1400.0 * 9.80665), rel=1e-12
    )


def everything_changed():
    law = LINE.fluid.rheology
    pipes = [replace(PIPES[0], roughness=2e-4, loss_coefficient=3.0), replace(PIPES[2], length=360.0, diameter=0.16)]
    return Line(
        flow=1.2 * LINE.flow,
        fluid=Fluid(1500.0, replace(law, yield_stress=11.0, consistency=0.4, flow_index=0.66)),
        route=(pipes[0], replace(PIPES[1], pressure_loss=2e4), pipes[1]),
        source=Vessel(0.0, 1.0),
        destination=None,
        methods=replace(LINE.methods, turbulent=None),
        particle_size=LINE.particle_size,
    )


def test_more_than_eight_groups_are_drawn_the_same_each_time_and_still_add_up():
    after = everything_changed()
    found, change = change_between(LINE, after)
    again, _ = change_between(LINE, after)
    assert len(found.groups) > 9
    assert found.orders == 256
    assert np.array_equal(found.parts, again.parts)
    assert np.all(np.abs(found.parts.sum(axis=0) - change) <= 1e-9 * np.abs(change))


def test_what_is_drawn_comes_near_to_every_order(monkeypatch):
    """The mean over 256 of the orders lies within 2 % of the whole change of the mean over all."""
    after = everything_changed()
    drawn, change = change_between(LINE, after)
    monkeypatch.setattr("pipeflow.record.explanation.EXACT_UP_TO", 20)
    exact, _ = change_between(LINE, after)
    assert exact.orders is None
    assert np.all(np.abs(drawn.parts - exact.parts)[:-1] <= 0.02 * np.abs(change))


def test_many_mixed_lines_at_once_are_each_line_by_itself():
    transition = Transition(LINE, everything_changed())
    lines = [transition.mixed(frozenset().union(*transition.groups()[:count])) for count in range(10)]
    each = np.concatenate([totals([line]) for line in lines])
    assert totals(lines) == pytest.approx(each, rel=1e-11)


def test_every_input_of_a_solved_line_is_in_a_group():
    """A new one that reaches the totals must be given a group, else its part would go to the program."""
    given_to_solve = {*inspect.signature(route.solve).parameters} - {"with_edges", "with_upper"}
    of_line = {field.name for field in fields(Line)} - {"methods"} | {"turbulent", "critical", "fittings"}
    assert given_to_solve == of_line
    assert {field.name for field in fields(Fluid)} == {"density", "rheology"}
    assert {field.name for field in fields(Pipe)} == {"name", *KINDS_OF_PIPE}


def test_a_mixture_without_an_answer_is_no_explanation():
    """A density without a value, for one; no parts are then made up."""
    nowhere = replace(LINE, fluid=Fluid(float("nan"), LINE.fluid.rheology))
    assert explain(LINE, nowhere, np.ones(len(TOTALS))) is None
