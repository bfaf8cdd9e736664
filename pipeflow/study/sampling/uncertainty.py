"""How sure the answer of a case is: spread of its figures, odds of its limits, and which input makes them."""

from __future__ import annotations

import os
import time
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from functools import partial
from typing import Any, Final, Protocol

import numpy as np

from pipeflow.arrays import Array
from pipeflow.case.model import Case
from pipeflow.sources import Source
from pipeflow.study.sampling.inputs import METHOD, METHOD_SPREAD, UncertainInput, factors_of
from pipeflow.study.sampling.limits import (
    BEYOND_TESTED,
    NOT_TURBULENT,
    Failures,
    failing,
    figure_of,
    figures_of_case,
    limits_of,
)
from pipeflow.study.sampling.line import HEAD_LOSS, POWER, TOTAL_HEAD, Figures
from pipeflow.uncertainty import Analysis, Factor, Settings, analyse, inputs_of, points
from pipeflow.uncertainty import Estimate as Estimate
from pipeflow.uncertainty import Index as Index
from pipeflow.uncertainty.analysis import FIRST_ORDER, REPLICATES, SOBOL_POINTS, TOTAL, why_not_samples
from pipeflow.uncertainty.distributions import RECTANGULAR

UNITS: Final = {HEAD_LOSS: "m", TOTAL_HEAD: "m", POWER: "W"}
WORTH_A_POOL: Final = 2.0
"""Seconds of work from which processes pay for their start."""
TRIAL: Final = 256
"""Samples that the time is judged by, and that a group of inputs is run over in a tornado."""
LOW, HIGH = 0.05, 0.95


class Watch(Protocol):
    """Hands the parts of long work on as they are done."""

    def __call__(self, parts: Iterator[Any], count: int, *, seconds: float) -> Iterator[Any]:
        """Of ``count`` parts, which take about so many seconds together."""


@dataclass(frozen=True)
class Spread:
    """One figure at design flow, SI.

    Attributes
    ----------
    name, unit : str
    mean, deviation : Estimate
    p5, p50, p95 : Estimate
        Quantiles, each with its standard error.
    indices : tuple of Index
        Share of each factor in its variance, the highest total index first; empty where it does not vary.
    """

    name: str
    unit: str
    mean: Estimate
    deviation: Estimate
    p5: Estimate
    p50: Estimate
    p95: Estimate
    indices: tuple[Index, ...]


@dataclass(frozen=True)
class Odds:
    """A limit, SI, and the probability that it fails.

    ``of_case`` is the figure of the case as it stands, by the upper method, as its check is judged; ``median`` that of
    the samples.
    """

    name: str
    limit: float
    unit: str
    basis: str
    is_least: bool
    probability: Estimate
    of_case: float
    median: float

    @property
    def case_fails(self) -> bool:
        """Whether it fails in the case as it stands."""
        return self.of_case < self.limit if self.is_least else self.of_case > self.limit


@dataclass(frozen=True)
class Bar:
    """One factor of a tornado: each figure with it at its 5 and 95 %, all others at their medians.

    Of inputs that scatter together the figures are the 5 and 95 % that they make by themselves.
    """

    factor: str
    low: dict[str, float]
    high: dict[str, float]

    def width(self, figure: str) -> float:
        """How far apart the two are."""
        return abs(self.high[figure] - self.low[figure])


@dataclass(frozen=True)
class UncertaintyResult:
    """How sure the answer of one case is.

    Attributes
    ----------
    samples, seed, evaluations : int
        Points of each of the two samples, seed of their scrambling, lines solved at design flow.
    inputs : tuple of UncertainInput
    figures : dict of str to Spread
        ``head_loss``, ``total_head`` and ``hydraulic_power``, by the sampled method of friction.
    limits : tuple of Odds
        Of the limits that can be sampled.
    not_sampled : tuple of str
        Checks of the case that are not.
    median : dict of str to float
        Figures with every input at its median.
    tornado : tuple of Bar
        The widest in head loss first.
    lost : int
        Lines in which the solver found no answer, and which no figure holds.
    beyond_tested, not_turbulent : float
        Share of samples past the tested range of a law, and of those with a pipe that is not turbulent at minimum flow,
        where deposition is not judged.
    methods : tuple of Source
    """

    case: Case
    samples: int
    seed: int
    evaluations: int
    inputs: tuple[UncertainInput, ...]
    figures: dict[str, Spread]
    limits: tuple[Odds, ...]
    not_sampled: tuple[str, ...]
    median: dict[str, float]
    tornado: tuple[Bar, ...]
    lost: int
    beyond_tested: float
    not_turbulent: float
    methods: tuple[Source, ...]


def why_not(samples: int = Settings.samples, seed: int = Settings.seed) -> str:
    """Say why a number of samples or a seed is not accepted; empty if both are."""
    if not 0 <= seed < 2**63:
        return f"found the seed {seed}; a whole number from 0 to {2**63 - 1} is needed"
    return why_not_samples(samples)


def uncertainty(
    case: Case,
    *,
    samples: int = Settings.samples,
    seed: int = Settings.seed,
    chunk: int = Settings.chunk,
    checks: Sequence[str] = (),
    workers: int | None = None,
    watch: Watch | None = None,
) -> UncertaintyResult:
    """Sample a case; its scenarios are not.

    Parameters
    ----------
    case : Case
    samples, seed, chunk : int
        As :class:`pipeflow.uncertainty.Settings` has them.
    checks : sequence of str
        Names of the checks of the case solved, to tell those that are not sampled.
    workers : int, optional
        Processes; without it as many as pay. No figure depends on it.
    watch : callable, optional
        Is handed the parts of the work as they are done, how many there will be, and about how many seconds they take
        in all; hands them on.

    Raises
    ------
    InputError
        Nothing of the case is uncertain.
    ValueError
        A number of samples or a seed that is not accepted.
    """
    problem = why_not(samples, seed)
    if problem:
        raise ValueError(problem)
    settings = Settings(samples, seed, chunk)
    factors, told = factors_of(case)
    figures = Figures(case)
    alone = _seconds(figures, factors, settings)
    workers = workers or (min(os.cpu_count() or 1, REPLICATES) if alone > WORTH_A_POOL else 1)
    watched = partial(watch, seconds=alone / workers) if watch else None
    found = analyse(figures, factors, replace(settings, workers=workers), beside=Failures(case), watch=watched)
    bars, median = tornado(figures, factors)
    odds = tuple(_odds(case, found))
    return UncertaintyResult(
        case=case,
        samples=settings.samples,
        seed=settings.seed,
        evaluations=found.evaluations,
        inputs=told,
        figures={name: _spread(found, name) for name in UNITS},
        limits=odds,
        not_sampled=tuple(dict.fromkeys(name for name in checks if name not in {one.name for one in odds})),
        median=median,
        tornado=bars,
        lost=found.lost,
        beyond_tested=found.mean(BEYOND_TESTED).value,
        not_turbulent=found.mean(NOT_TURBULENT).value if NOT_TURBULENT in found.outputs else 0.0,
        methods=tuple(_methods(case, factors)),
    )


def _spread(found: Analysis, name: str) -> Spread:
    p5, p50, p95 = found.quantiles(name)
    return Spread(name, UNITS[name], found.mean(name), found.deviation(name), p5, p50, p95, found.indices[name])


def _odds(case: Case, found: Analysis) -> Iterator[Odds]:
    of_case = figures_of_case(case)
    for name, (limit, value) in limits_of(case).items():
        _, median, _ = found.quantiles(figure_of(name))
        stated = limit.unit, limit.basis, limit.is_least
        yield Odds(name, value, *stated, found.mean(failing(name)), of_case[name], median.value)


def _methods(case: Case, factors: Sequence[Factor]) -> tuple[Source, ...]:
    of_method = (METHOD_SPREAD,) if any(factor.name == METHOD for factor in factors) else ()
    bare = (RECTANGULAR,) if any(uncertain.kind == "rectangular" for uncertain in case.uncertainty) else ()
    return (*bare, *of_method, SOBOL_POINTS, FIRST_ORDER, TOTAL)


def _seconds(figures: Figures, factors: Sequence[Factor], settings: Settings) -> float:
    """About how long one process would take, by the time of a few samples; 0 where there are few."""
    if settings.samples < TRIAL:
        return 0.0
    start = time.perf_counter()
    figures(inputs_of(factors, points(sum(factor.columns for factor in factors), TRIAL, settings.seed)))
    return (time.perf_counter() - start) / TRIAL * settings.samples * (len(factors) + 6)


def tornado(figures: Figures, factors: Sequence[Factor]) -> tuple[tuple[Bar, ...], dict[str, float]]:
    """Move one factor at a time, and give the bars, the widest in head loss first, and the figures at the medians."""
    columns = sum(factor.columns for factor in factors)
    blocks, first = [np.full((1, columns), 0.5)], 0
    for factor in factors:
        own = _moves(factor)
        blocks.append(np.full((len(own), columns), 0.5))
        blocks[-1][:, first : first + factor.columns] = own
        first += factor.columns
    found = figures(inputs_of(factors, np.concatenate(blocks)))
    ends = np.cumsum([len(block) for block in blocks])[:-1]
    by_block = zip(*(np.split(values, ends) for values in found.values()), strict=True)
    middle, *each = (dict(zip(found, block, strict=True)) for block in by_block)
    bars = sorted((_bar(*pair) for pair in zip(factors, each, strict=True)), key=lambda bar: -bar.width(HEAD_LOSS))
    return tuple(bars), {name: float(values[0]) for name, values in middle.items()}


def _moves(factor: Factor) -> Array:
    """Uniform numbers of the factor alone: its two ends, or the points of a group."""
    if factor.columns == 1:
        return np.array([[LOW], [HIGH]])
    return points(factor.columns, TRIAL, 0)


def _bar(factor: Factor, outputs: dict[str, Array]) -> Bar:
    if factor.columns == 1:
        ends = [{name: float(values[place]) for name, values in outputs.items()} for place in (0, 1)]
    else:
        ends = [{name: _quantile(values, share) for name, values in outputs.items()} for share in (LOW, HIGH)]
    return Bar(factor.name, *ends)


def _quantile(values: Array, share: float) -> float:
    sound = values[np.isfinite(values)]
    return float(np.quantile(sound, share)) if sound.size else np.nan
