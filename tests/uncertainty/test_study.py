"""How sure the answer of a case is: against closed forms, plain random draws, and the checks of single solutions."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from scipy import stats

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.model import FlowRange
from pipeflow.case.varying import varied
from pipeflow.errors import InputError
from pipeflow.line import route
from pipeflow.line.elements import Fluid
from pipeflow.rheology import HerschelBulkley
from pipeflow.rheology.conditions import fit_dependence
from pipeflow.study import solve
from pipeflow.study.sampling.inputs import METHOD, READINGS, factors_of, sheet_factor
from pipeflow.study.sampling.limits import Failures, failing, limits_of
from pipeflow.study.sampling.line import HEAD_LOSS, POWER, TOTAL_HEAD, Figures
from pipeflow.study.sampling.uncertainty import uncertainty
from pipeflow.uncertainty import inputs_of, points

CASES = Path(__file__).parents[2] / "cases"
G = 9.80665

LAMINAR = """
title: Hagen and Poiseuille
fluid: {density: 1250 kg/m3, rheology: {model: newtonian, viscosity: 0.9 Pa.s}}
flow: 30 m3/h
source: {level: 4 m}
route:
  - {pipe: line, diameter: 120 mm, length: 80 m, rise: 6 m}
uncertainty:
  fluid.density: ± 4 %
  fluid.rheology.viscosity: normal 10 %
  flow: uniform 27 .. 34 m3/h
  route[line].diameter: ± 3 mm
  route[line].length: normal 2 m
  source.level: uniform 3 .. 6 m
"""


def moments_of_a_power(low: float, high: float, power: float) -> tuple[float, float]:
    """Mean and mean square of ``x**power`` for x even between two ends."""

    def mean(p: float) -> float:
        if p == -1.0:
            return float(np.log(high / low) / (high - low))
        return (high ** (p + 1.0) - low ** (p + 1.0)) / ((p + 1.0) * (high - low))

    return mean(power), mean(2.0 * power)


def test_mean_and_variance_of_a_laminar_line_are_those_of_the_closed_form():
    """h = 128 mu L Q/(pi rho g D⁴) is a product of independent inputs, whose moments are products."""
    factors = [
        moments_of_a_power(1200.0, 1300.0, -1.0),
        (0.9, 0.9**2 * 1.01),
        moments_of_a_power(27.0 / 3600.0, 34.0 / 3600.0, 1.0),
        moments_of_a_power(0.117, 0.123, -4.0),
        (80.0, 80.0**2 + 4.0),
    ]
    constant = 128.0 / (np.pi * G)
    mean = constant * np.prod([first for first, _ in factors])
    variance = constant**2 * np.prod([second for _, second in factors]) - mean**2
    found = uncertainty(load_text(LAMINAR), samples=2**13)
    head = found.figures[HEAD_LOSS]
    assert head.mean.value == pytest.approx(mean, rel=2e-5)
    assert head.deviation.value**2 == pytest.approx(variance, rel=2e-3)
    total = found.figures[TOTAL_HEAD]
    assert total.mean.value == pytest.approx(mean + 6.0 - 4.5, rel=2e-5)
    assert total.deviation.value**2 == pytest.approx(variance + 9.0 / 12.0, rel=2e-3)
    power = constant * 1.0 / factors[0][0]  # rho cancels in rho g Q h
    second = power * np.prod([pair[0] for pair in (factors[1], factors[3], factors[4])]) * factors[2][1] * G
    static = G * 1250.0 * factors[2][0] * 1.5
    assert found.figures[POWER].mean.value == pytest.approx(second * factors[0][0] + static, rel=1e-4)


def test_first_order_indices_of_a_laminar_line_are_those_of_the_closed_form():
    """The first-order share of a factor x of a product is var(x) prod of the other mean², over the variance."""
    found = uncertainty(load_text(LAMINAR), samples=2**13).figures[HEAD_LOSS]
    first, second = moments_of_a_power(27.0, 34.0, 1.0)
    relative_variance = second / first**2 - 1.0
    whole = (found.deviation.value / found.mean.value) ** 2
    (flow,) = [index for index in found.indices if index.factor == "flow"]
    assert abs(flow.first.value - relative_variance / whole) < 4.0 * max(flow.first.error, 1e-3)
    assert flow.total.value >= flow.first.value - 2.0 * flow.first.error


SLURRY = """
title: Slurry about the end of laminar flow
fluid:
  density: 1180 kg/m3
  rheology: {model: herschel-bulkley, yield_stress: 1.5 Pa, consistency: 0.4 Pa.s^n, flow_index: 0.7}
flow: 100 m3/h
route:
  - {pipe: line, diameter: 150 mm, length: 100 m, roughness: 0.05 mm}
uncertainty:
  fluid.density: normal 2 %
  fluid.rheology.yield_stress: normal 80 %
  fluid.rheology.consistency: ± 20 %
  fluid.rheology.flow_index: ± 0.02
  flow: normal 8 %
"""


def by_plain_random_numbers(draws: int) -> np.ndarray:
    """Head loss of the slurry by random numbers of another generator, the laws written out anew."""
    random = np.random.Generator(np.random.MT19937(20))
    yield_stress = random.normal(1.5, 1.2, 2 * draws)
    yield_stress = yield_stress[yield_stress >= 0][:draws]
    consistency = random.uniform(0.32, 0.48, draws)
    law = HerschelBulkley(yield_stress, consistency, random.uniform(0.68, 0.72, draws))
    density, flow = random.normal(1180.0, 23.6, draws), random.normal(100.0, 8.0, draws) / 3600.0
    line = route.solve(flow, Fluid(density, law), load_text(SLURRY).route)
    ratio = line.friction_loss_upper[:, 0] / line.friction_loss[:, 0]
    return line.friction_loss[:, 0] * ratio ** random.random(draws) / (density * G)


@pytest.fixture(scope="module")
def drawn() -> np.ndarray:
    return by_plain_random_numbers(100_000)


def test_quantiles_are_those_of_plain_random_draws(drawn):
    found = uncertainty(load_text(SLURRY)).figures[HEAD_LOSS]
    assert found.mean.value == pytest.approx(drawn.mean(), abs=5.0 * drawn.std() / np.sqrt(drawn.size))
    for share, estimate in ((0.05, found.p5), (0.5, found.p50), (0.95, found.p95)):
        inside = np.mean(drawn <= estimate.value)
        assert abs(inside - share) < 5.0 * np.sqrt(share * (1.0 - share) / drawn.size) + 2e-3, share
    between = np.mean((drawn >= found.p5.value) & (drawn <= found.p95.value))
    assert between == pytest.approx(0.9, abs=5e-3)


def test_the_standard_error_of_a_quantile_falls_with_the_samples(drawn):
    few, many = (uncertainty(load_text(SLURRY), samples=samples).figures[HEAD_LOSS] for samples in (256, 4096))
    assert many.p95.error < few.p95.error / 4.0
    assert abs(few.p95.value - np.quantile(drawn, 0.95)) < 5.0 * few.p95.error


def test_the_answer_is_the_one_of_every_machine():
    """Recorded figures: another scrambling of the points would change their fifth digit."""
    found = uncertainty(load_text(LAMINAR), samples=256).figures[HEAD_LOSS]
    again = uncertainty(load_text(LAMINAR), samples=256).figures[HEAD_LOSS]
    assert found == again
    assert (found.p5.value, found.p95.value) == pytest.approx((7.761740513624449, 11.996079892434249), rel=1e-9)


@pytest.mark.parametrize(("chunk", "workers"), [(20, 1), (2**20, 1), (4096, 2)])
def test_neither_chunk_nor_workers_change_the_answer(chunk, workers):
    usual = uncertainty(load_text(SLURRY), samples=128, workers=1)
    other = uncertainty(load_text(SLURRY), samples=128, chunk=chunk, workers=workers)
    for name, figure in usual.figures.items():
        found = other.figures[name]
        assert (found.p5.value, found.p95.value) == pytest.approx((figure.p5.value, figure.p95.value), rel=1e-12)
        for one, two in zip(found.indices, figure.indices, strict=True):
            assert one.factor == two.factor
            assert one.total.value == pytest.approx(two.total.value, abs=1e-11)


def test_a_tolerance_that_reaches_impossible_values_is_truncated_and_told():
    found = uncertainty(load_text(SLURRY), samples=64)
    told = {one.name: one.impossible for one in found.inputs}
    assert told["fluid.rheology.yield_stress"] == pytest.approx(stats.norm.cdf(-1.0 / 0.8), rel=1e-9)
    assert told["fluid.rheology.consistency"] == 0.0
    assert found.lost == 0


READ = """
title: Fitted
fluid: {{density: 1420 kg/m3, rheology: {{flow_curve: thickener-underflow-52.csv{model}}}}}
flow: 140 m3/h
route:
  - {{pipe: line, diameter: 150 mm, length: 100 m}}
{more}
"""


def read(model="", more=""):
    return load_text(READ.format(model=f", model: {model}" if model else "", more=more), str(CASES / "case.yaml"))


@pytest.mark.parametrize("model", ["", "casson", "bingham", "power-law", "newtonian"])
def test_fitted_parameters_keep_their_covariance_and_their_intervals(model):
    fit = read(model).fitted.selected
    factor = sheet_factor(fit)
    unknowns = factor.unknowns(points(factor.columns, 2**14, 3))
    spare = fit.residuals.size - len(fit.parameters)
    widened = stats.t.ppf(0.975, spare) / stats.norm.ppf(0.975)
    assert np.atleast_2d(np.cov(unknowns.T)) == pytest.approx(fit.log_covariance * widened**2, rel=2e-2)
    values = factor.values(points(factor.columns, 2**14, 3))
    for name, (low, high) in fit.intervals.items():
        sampled = np.quantile(values[f"fluid.rheology.{name}"], [0.025, 0.975])
        assert sampled == pytest.approx([low, high], rel=2e-3), name


def test_readings_are_one_factor_unless_the_case_says_how_uncertain_they_are():
    names = [factor.name for factor in factors_of(read())[0]]
    assert names == [READINGS, METHOD]
    given = read(more="uncertainty: {fluid.rheology.yield_stress: ± 20 %}")
    assert [factor.name for factor in factors_of(given)[0]] == ["fluid.rheology.yield_stress", METHOD]


def test_several_sheets_scatter_each_by_itself_through_the_law():
    """The weights of the sheets against a law fitted anew to parameters that differ a little."""
    case = load_case(CASES / "thickener-underflow-readings.yaml")
    factor = factors_of(case)[0][0]
    assert factor.columns == 9
    middle = {name: float(values[0]) for name, values in factor.values(np.full((1, 9), 0.5)).items()}
    for name, value in vars(case.fluid.rheology).items():
        assert middle[f"fluid.rheology.{name}"] == pytest.approx(value, rel=1e-12)
    uniform = points(9, 8, 1)
    sampled = factor.values(uniform)
    each = [sheet.values(part) for sheet, part in zip(factor.sheets, np.split(uniform, 3, axis=1), strict=True)]
    conditions = np.array([sheet.curve.sample.solids for sheet in case.sheets])
    for followed in case.followed:
        path = f"fluid.rheology.{followed.parameter}"
        for row in range(8):
            values = np.array([one[path][row] for one in each])
            law = fit_dependence(followed.law.key, conditions, values).law
            assert sampled[path][row] == pytest.approx(float(law.value(followed.condition)), rel=1e-10)


def test_nothing_uncertain_is_refused():
    text = LAMINAR.partition("uncertainty:")[0]
    with pytest.raises(InputError, match="nothing in the case is uncertain"):
        uncertainty(load_text(text))


LIMITED = """
title: Every limit
fluid:
  solids: {density: 2650 kg/m3, mass_fraction: 0.28, d85: 90 µm}
  liquid: {density: 998 kg/m3, viscosity: 1 mPa.s}
  specific_heat: 3.2 kJ/(kg.K)
  rheology: {model: bingham, yield_stress: 1.2 Pa, plastic_viscosity: 6 mPa.s}
flow: {minimum: 95 m3/h, design: 110 m3/h, maximum: 125 m3/h}
source: {level: 2 m, pressure: 10 kPa}
destination: {level: 1 m}
route:
  - {pipe: first, diameter: 150 mm, length: 120 m, rise: 9 m, fittings: {entrance: 1, elbow_90: 3}}
  - {equipment: meter, pressure_loss: 8 kPa, at_flow: 110 m3/h}
  - {pipe: second, diameter: 130 mm, length: 200 m, rise: -4 m, fittings: {exit: 1}}
limits:
  head_loss: 17.2 m
  pressure_loss: 205 kPa
  velocity: {minimum: 1.5 m/s, maximum: 2.62 m/s}
  wall_shear_rate: 3200 1/s
  wall_shear_stress: 19.7 Pa
  temperature_rise: 0.056 K
  restart_pressure: 110 kPa
restart: {factor: 1.2}
uncertainty:
  flow: ± 3 %
  fluid.rheology.yield_stress: ± 40 %
  fluid.rheology.plastic_viscosity: ± 40 %
  fluid.solids.mass_fraction: ± 0.02
  fluid.solids.d85: ± 30 %
  route[second].diameter: ± 1 mm
"""
RESULTS = {"ok": 0.0, "caution": 0.0, "fail": 1.0}


def alone(case, inputs, row):
    """The case of one sample, as if its file said so."""
    given = varied(case, {path: values[row] for path, values in inputs.items() if path != METHOD})
    slurry = given.slurry
    solids = replace(
        case.solids,
        mass_fraction=float(slurry.mass_fraction),
        volume_fraction=float(slurry.volume_fraction),
        d85=float(slurry.size),
    )
    flow = FlowRange(*(float(flow) for flow in (given.minimum, given.design, given.maximum)))
    law = type(given.fluid.rheology)(*(float(value) for value in vars(given.fluid.rheology).values()))
    return replace(case, flow=flow, fluid=Fluid(float(given.fluid.density), law), route=given.route, solids=solids)


def test_each_limit_fails_where_the_check_of_the_sample_alone_does():
    case = load_text(LIMITED)
    factors, _ = factors_of(case)
    inputs = inputs_of(factors, points(sum(factor.columns for factor in factors), 64, 7))
    assert set(limits_of(case)) == {
        "head_loss", "pressure_loss", "velocity_minimum", "velocity_maximum", "wall_shear_rate", "wall_shear_stress",
        "temperature_rise", "restart_pressure", "deposition",
    }  # fmt: skip
    for share in (0.0, 1.0):
        found = Failures(case)({**inputs, METHOD: np.full(64, share)})
        figures = Figures(case)({**inputs, METHOD: np.full(64, share)})
        for row in range(0, 64, 4):
            result = solve(alone(case, inputs, row))
            checks = {check.name: check for check in result.checks}
            for name in limits_of(case):
                check = checks[name]
                over = RESULTS[check.status] if not share else float(judged_on_the_upper(check))
                assert found[failing(name)][row] == over, (name, row, share)
            expected = result.totals.total_head_upper if share else result.totals.total_head
            assert figures[TOTAL_HEAD][row] == pytest.approx(expected, rel=1e-12)
    shares = {name: found[failing(name)].mean() for name in limits_of(case)}
    assert sum(0.0 < share < 1.0 for share in shares.values()) >= 7, shares


def judged_on_the_upper(check):
    upper = check.value if check.value_upper is None else check.value_upper
    return upper < check.limit if check.sense == "at least" else upper > check.limit


def test_bars_of_the_tornado_are_single_solutions():
    case = load_text(LAMINAR)
    found = uncertainty(case, samples=64)
    bar = next(bar for bar in found.tornado if bar.factor == "route[line].diameter")
    for end, diameter in ((bar.low, 0.1173), (bar.high, 0.1227)):
        line = route.solve(30.5 / 3600.0, case.fluid, varied(case, {bar.factor: diameter}).route)
        assert end[HEAD_LOSS] == pytest.approx(float(line.head_loss), rel=1e-12)
    assert [one.width(HEAD_LOSS) for one in found.tornado] == sorted(
        (one.width(HEAD_LOSS) for one in found.tornado), reverse=True
    )


@pytest.mark.parametrize("workers", [1, 2])
def test_long_work_is_watched_part_by_part(workers):
    seen = []

    def watch(parts, count, *, seconds):
        for part in parts:
            seen.append((count, seconds > 0.0))
            yield part

    watched = uncertainty(load_text(LAMINAR), samples=256, workers=workers, watch=watch)
    assert seen == [(8, True)] * 8
    assert watched.figures == uncertainty(load_text(LAMINAR), samples=256).figures
