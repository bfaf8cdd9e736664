"""The sizing loop against what ``solve`` says of every size, one at a time."""

from dataclasses import replace

import numpy as np
import pytest

from pipeflow import sizing
from pipeflow.case.loading import load_text
from pipeflow.case.model import FlowRange, Limits, Restart, Sizing
from pipeflow.errors import InputError
from pipeflow.line.catalogue import find_size, sizes_of
from pipeflow.line.elements import Equipment, Fluid, Pipe, Vessel
from pipeflow.rheology import Bingham, HerschelBulkley, Newtonian, PowerLaw
from pipeflow.study import solve
from pipeflow.study.sizes.sizing import OWN, alike, size

CASE = """
title: a line to be sized
fluid: {density: 1420 kg/m3, rheology: {model: bingham, yield_stress: 6 Pa, plastic_viscosity: 20 mPa.s}}
flow: {minimum: 110 m3/h, design: 140 m3/h, maximum: 160 m3/h}
route:
  - {pipe: suction, size: NPS 8 Sch 40, length: 12 m}
  - {equipment: meter, pressure_loss: 12 kPa, at_flow: 140 m3/h}
  - {pipe: discharge, size: NPS 6 Sch 40, length: 420 m, rise: 12 m, fittings: {elbow_90: 6}}
limits: {head_loss: 32 m, velocity: {minimum: 0.5 m/s, maximum: 3 m/s}}
scenarios:
  thick: {fluid.density: 1500 kg/m3, fluid.rheology.yield_stress: 12 Pa}
  rough: {"route[discharge].roughness": 0.3 mm}
"""


def case(text=CASE, **changes):
    return replace(load_text(text), **changes)


def by_hand(one, name, pipes):
    """Give the case with a size written into it, as its user would."""
    new = find_size(name)

    def varied(element):
        if not isinstance(element, Pipe) or element.name not in pipes:
            return element
        rough = 0.05e-3 if element.name in one.default_roughness else element.roughness
        return replace(element, diameter=new.inside_diameter, nominal_diameter=new.nominal_diameter, roughness=rough)

    scenarios = {key: by_hand(other, name, pipes) for key, other in one.scenarios.items()}
    sizes = one.sizes | dict.fromkeys(pipes, name)
    return replace(one, route=tuple(varied(element) for element in one.route), sizes=sizes, scenarios=scenarios)


def test_every_size_of_the_series_is_what_solve_says_of_it():
    one = case()
    result = size(one)
    assert [candidate.size for candidate in result.candidates] == [other.name for other in sizes_of("NPS Sch 40")]
    for candidate in result.candidates:
        alone = solve(by_hand(one, candidate.size, ("suction", "discharge")))
        assert candidate.passes is not alone.fails
        assert candidate.head_loss == pytest.approx(alone.totals.head_loss, rel=1e-12)
        assert candidate.velocity == pytest.approx(alone.elements[0].velocity, rel=1e-12)
        assert candidate.regime == alone.elements[0].regime


def random_case(rng, base):
    index = rng.uniform(0.4, 1.0)
    law = [
        Newtonian(10 ** rng.uniform(-3, 0)),
        PowerLaw(10 ** rng.uniform(-2, 1), index),
        Bingham(rng.uniform(0.5, 30), 10 ** rng.uniform(-2.3, -1)),
        HerschelBulkley(rng.uniform(0.5, 30), 10 ** rng.uniform(-1.5, 1), index),
    ][rng.integers(4)]
    flow = 10 ** rng.uniform(-3.5, -0.8)
    scenario = replace(base, fluid=Fluid(rng.uniform(900, 1700), law))
    changes = {
        "flow": FlowRange(flow * rng.uniform(0.5, 1), flow, flow * rng.uniform(1, 1.4)),
        "route": (
            Pipe("suction", 0.2027, rng.uniform(5, 30), rng.uniform(-3, 3), 5e-5, 8.0),
            Equipment("meter", rng.uniform(0, 2e4), flow),
            Pipe("discharge", 0.154, rng.uniform(50, 900), rng.uniform(-20, 20), 5e-5, 6.0, {"elbow_90": 4}),
        ),
        "limits": Limits(
            head_loss=10 ** rng.uniform(0, 2),
            pressure_loss=10 ** rng.uniform(5, 6.5) if rng.random() < 0.5 else None,
            velocity_minimum=rng.uniform(0.1, 1) if rng.random() < 0.5 else None,
            velocity_maximum=rng.uniform(1.2, 4) if rng.random() < 0.7 else None,
            wall_shear_stress=rng.uniform(10, 200) if rng.random() < 0.3 else None,
            restart_pressure=10 ** rng.uniform(5, 6.5) if rng.random() < 0.4 else None,
        ),
        "restart": Restart(static_yield_stress=rng.uniform(5, 60) if rng.random() < 0.5 else None),
        "source": Vessel(0.0, rng.uniform(0, 5)),
        "sizing": Sizing(series="NPS Sch 40", pipes=("discharge",) if rng.random() < 0.5 else ()),
        "scenarios": {},
    }
    one = replace(scenario, **changes)
    thick = replace(one, fluid=Fluid(one.fluid.density * 1.05, law))
    return replace(one, scenarios={"heavy": thick} if rng.random() < 0.4 else {})


@pytest.mark.slow
def test_the_size_to_choose_is_the_smallest_that_passes_in_500_random_cases():
    run_random_cases(500)


def test_the_size_to_choose_is_the_smallest_that_passes_in_some_random_cases():
    run_random_cases(12)


def run_random_cases(count):
    """Brute force: ``solve`` from the smallest size up, until one fails nothing."""
    rng, base, chosen = np.random.default_rng(20240711), case(), 0
    for _ in range(count):
        one = random_case(rng, base)
        pipes = one.sizing.pipes or ("suction", "discharge")
        found = size(one)
        names = [other.name for other in sizes_of("NPS Sch 40")]
        wanted = next((name for name in names if not solve(by_hand(one, name, pipes)).fails), None)
        assert (found.selected and found.selected.size) == wanted
        chosen += wanted is not None
    assert count / 4 < chosen < count


def test_nothing_passes_names_the_nearest_and_what_blocks_it():
    result = size(case(limits=Limits(head_loss=0.5, velocity_minimum=0.9)))
    assert result.selected is None
    nearest = result.nearest
    worst = min(result.candidates, key=lambda one: one.excess)
    assert nearest is worst
    assert nearest.fails
    assert {text.split(" ")[0] for text in nearest.fails} <= {"head_loss", "velocity_minimum"}


def test_velocity_limits_closer_than_the_flows_are_told_apart():
    result = size(case(limits=Limits(velocity_minimum=1.5, velocity_maximum=2.0)))
    assert result.selected is None
    assert any("no bore keeps 1.5 m/s" in note for note in result.notes)


@pytest.mark.parametrize(
    ("sizing_block", "message"),
    [
        ("{series: NPS Sch 400}", "pipe series"),
        ("{smallest: NPS 4 Sch 40}", "needs 'series'"),
        ("{series: NPS Sch 40, smallest: NPS 8 Sch 40, largest: NPS 4 Sch 40}", "no size is left"),
        ("{series: NPS Sch 40, largest: OD 160 SDR 11}", "not a size of"),
        ("{series: NPS Sch 40, bores: {minimum: 50 mm, maximum: 90 mm}}", "one of the two"),
        ("{bores: {minimum: 50 mm, maximum: 40 mm}}", "must be more than"),
        ("{pipes: [elsewhere]}", "no pipe of the route"),
        ("{pipes: []}", "at least"),
    ],
)
def test_sizing_that_cannot_be(sizing_block, message):
    with pytest.raises(InputError, match=message):
        load_text(CASE + f"sizing: {sizing_block}\n")


def test_a_line_without_limits_or_without_sizes_cannot_be_sized():
    with pytest.raises(InputError, match="limits  missing"):
        size(case(limits=Limits(), scenarios={}))
    with pytest.raises(InputError, match=r"sizing\.series  missing"):
        size(case(sizes={}))


def test_the_least_bore_meets_its_limit_to_1e_10():
    for limits in (
        Limits(head_loss=32.0),
        Limits(pressure_loss=3e5),
        Limits(velocity_maximum=2.2),
        Limits(wall_shear_stress=25.0),
        Limits(restart_pressure=7e5),
    ):
        one = case(limits=limits, sizing=Sizing(bores=(0.02, 1.0)), scenarios={})
        (found,) = size(one).candidates
        assert found.passes
        (name, limit) = next((key, value) for key, value in vars(limits).items() if value is not None)
        check = next(made for made in solve(bored(one, found.diameter)).checks if made.name == name)
        judged = check.value if check.value_upper is None else check.value_upper
        assert judged == pytest.approx(limit, rel=1e-10)


def test_the_least_bore_of_a_line_over_a_crest_restarts_it():
    one = case(limits=Limits(restart_pressure=7e5), sizing=Sizing(bores=(0.02, 1.0)), scenarios={})
    up, down = (replace(one.route[2], name=name, rise=rise) for name, rise in (("up", 30.0), ("down", -80.0)))
    one = replace(one, route=(up, down), sizes={})
    (found,) = size(one).candidates
    check = next(made for made in solve(bored(one, found.diameter)).checks if made.name == "restart_pressure")
    assert check.value == pytest.approx(7e5, rel=1e-10)


def bored(one, bore):
    return replace(
        one,
        route=tuple(
            replace(element, diameter=bore, nominal_diameter=bore / 0.0254) if isinstance(element, Pipe) else element
            for element in one.route
        ),
    )


def test_the_least_bore_serves_every_scenario_and_the_tightest_settles_it():
    one = case()
    result = size(replace(one, sizing=Sizing(bores=(0.02, 1.0))))
    alone = [
        size(replace(other, limits=one.limits, sizing=Sizing(bores=(0.02, 1.0)), scenarios={})).candidates[0].diameter
        for other in (one, *one.scenarios.values())
    ]
    assert result.candidates[0].diameter == pytest.approx(max(alone), rel=1e-9)


def test_a_published_bore():
    """NE-GEAN-2.10-4, 150 US gpm over 305 m at 6.1 m: 0.0945 m, printed answer from memory (confidence medium)."""
    text = """
title: pipe of least bore
fluid: {density: 1000 kg/m3, rheology: {model: newtonian, viscosity: 1.55 mPa.s}}
flow: 150 US gpm
route: [{pipe: only, diameter: 100 mm, length: 305 m, roughness: 0.046 mm}]
limits: {head_loss: 6.1 m}
sizing: {bores: {minimum: 20 mm, maximum: 500 mm}}
"""
    assert size(load_text(text)).selected.diameter == pytest.approx(0.0945, abs=0.0005)


def test_bounds_of_the_bore():
    wide = size(case(limits=Limits(head_loss=1e5), sizing=Sizing(bores=(0.2, 1.0))))
    assert wide.selected.diameter == 0.2
    none = size(case(limits=Limits(head_loss=0.01), sizing=Sizing(bores=(0.02, 0.3))))
    assert none.selected is None
    assert "not met by any bore" in none.notes[0]


@pytest.mark.parametrize(
    "law", [Newtonian(0.05), PowerLaw(2.0, 0.5), Bingham(8.0, 0.03), HerschelBulkley(8.0, 0.5, 0.6)]
)
def test_within_a_regime_a_larger_bore_never_has_more_head_loss(law):
    one = case(fluid=Fluid(1300.0, law), limits=Limits(head_loss=30.0), scenarios={})
    bores = np.geomspace(0.05, 0.6, 80)
    line = sizing.solve_grid(
        [variant_of(one)],
        sizing.Bores(bores, bores / 0.0254, np.full_like(bores, 5e-5)),
        frozenset({"suction", "discharge"}),
        [frozenset()],
        sizing.MethodKeys(),
    )
    for flow in range(3):
        loss, regime = line.head_loss[:, 0, flow], line.pipes.regime[:, 0, flow, 1]
        same = regime[1:] == regime[:-1]
        assert same.sum() > 60
        assert np.all(np.diff(loss)[same] < 0)


def variant_of(one):
    from pipeflow.study.sizes.sizing import variant

    return replace(variant(one), limits={})


def test_scenarios_with_other_elements_are_solved_apart_and_alike_ones_together():
    one = load_text(CASE + '  valve: {"route[discharge].fittings": {gate_valve: 1}}\n')
    groups = list(alike({OWN: one, **one.scenarios}))
    assert sorted(sorted(group) for group in groups) == [["rough", "the case", "thick"], ["valve"]]
    for candidate in size(one).candidates[9:14]:
        alone = solve(by_hand(one, candidate.size, ("suction", "discharge")))
        assert candidate.passes is not alone.fails


def test_sixty_sizes_three_flows_five_scenarios_are_one_call(monkeypatch):
    calls = []
    solve_line = sizing.route.solve
    monkeypatch.setattr(sizing.route, "solve", lambda *args, **more: calls.append(1) or solve_line(*args, **more))
    one = case()
    variants = [variant_of(other) for other in (one, *one.scenarios.values(), *one.scenarios.values())]
    bores = np.geomspace(0.05, 0.6, 60)
    line = sizing.solve_grid(
        variants,
        sizing.Bores(bores, bores / 0.0254, np.full_like(bores, 5e-5)),
        frozenset({"discharge"}),
        [frozenset()] * 5,
        sizing.MethodKeys(),
    )
    assert calls == [1]
    assert line.velocity.shape == (60, 5, 3, 2)


COST = """
sizing:
  series: NPS Sch 40
  cost:
    prices: [{size: NPS 8 Sch 40, per_metre: 150}]
    price_at_100_mm: 70
    energy_price_per_kwh: 0.15
    hours_per_year: 7500
    interest_rate: 0.08
    years: 15
    pump_efficiency: 0.6
    maintenance: 0.02
"""


def test_annual_cost_is_the_pipe_paid_off_and_its_energy():
    one = load_text(CASE + COST)
    result = size(one)
    eight = next(candidate for candidate in result.candidates if candidate.size == "NPS 8 Sch 40")
    alone = solve(by_hand(one, "NPS 8 Sch 40", ("suction", "discharge")))
    capital = 150 * 432 * (0.08 * 1.08**15 / (1.08**15 - 1) + 0.02)
    power = alone.totals.head_loss * 1420 * 9.80665 * 140 / 3600 / 0.6
    assert eight.cost_per_year == pytest.approx(capital + power / 1e3 * 7500 * 0.15, rel=1e-10)
    passing = {one.size: one.cost_per_year for one in result.candidates if one.passes}
    assert result.economy.size == min(passing, key=passing.get)
    assert set(result.economy.equal) == {name for name, cost in passing.items() if cost <= 1.05 * min(passing.values())}


def test_the_optimum_of_a_power_law_line_is_that_of_the_closed_form():
    """K1 of the method sheet: ``A D^x`` against ``B D^-(3n+1)`` is least at ``[(3n+1) B/(x A)]^(1/(x+3n+1))``."""
    n, exponent, price = 0.6, 1.3, 70.0
    one = load_text(CASE + COST.replace("    prices: [{size: NPS 8 Sch 40, per_metre: 150}]\n", ""))
    one = replace(
        one,
        fluid=Fluid(1300.0, PowerLaw(9.0, n)),
        scenarios={},
        limits=Limits(head_loss=1e6),
        route=(Pipe("only", 0.2, 100.0, nominal_diameter=8.0),),
        sizes={},
    )
    flow = one.flow.design
    recovery = float(sizing.capital_recovery(0.08, 15)) + 0.02
    gradient = 4 * 9.0 * ((3 * n + 1) / (4 * n) * 32 * flow / np.pi) ** n  # times D^-(3n+1), Pa/m
    energy = flow * gradient / 0.6 / 1e3 * 7500 * 0.15
    capital = price * recovery / 0.1**exponent
    best = ((3 * n + 1) * energy / (exponent * capital)) ** (1 / (exponent + 3 * n + 1))
    bores = best * np.array([0.98, 1.0, 1.02])
    from pipeflow.study.sizes.economy import Bore, cost_per_year
    from pipeflow.study.sizes.sizing import _candidates

    tried = [Bore(str(place), float(bore), 1.0, None) for place, bore in enumerate(bores)]
    costs = [candidate.cost_per_year for candidate in _candidates({OWN: one}, tried, ("only",))]
    assert cost_per_year is not None
    assert costs[1] == min(costs)
