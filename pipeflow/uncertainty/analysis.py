"""Samples of the factors, and from them the spread of each output and the share of every factor in it.

The uniform numbers are scrambled Sobol points of twice the dimension: their halves are the samples A and B, and AB_i is
A with the columns of factor i from B. The samples are taken as a few replicates, each scrambled by itself: their
scatter gives the standard error of every figure, which no formula does for such points.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from concurrent.futures import ProcessPoolExecutor
from contextlib import nullcontext
from dataclasses import dataclass
from functools import partial
from typing import Any, Final

import numpy as np

from pipeflow.arrays import Array
from pipeflow.sources import Source
from pipeflow.uncertainty.factors import Factor

Evaluate = Callable[[Mapping[str, Array]], Mapping[str, Array]]
"""From inputs to outputs, arrays of one length; nan where there is no answer."""
Watch = Callable[[Iterator[Any], int], Iterator[Any]]

SOBOL_POINTS = Source(
    key="sobol-points",
    title="Scrambled Sobol points in place of random numbers, through the inverse of each distribution",
    citation="Sobol', USSR Comput. Math. Math. Phys. 7, 86 (1967); Joe & Kuo, SIAM J. Sci. Comput. 30, 2635 (2008); "
    "Owen, J. Complexity 14, 466 (1998)",
)
FIRST_ORDER = Source(
    key="saltelli-2010",
    title="First-order index, mean of f(B) (f(AB_i) - f(A)) over the variance",
    citation="Saltelli et al., Comput. Phys. Commun. 181, 259 (2010), table 2, (b)",
)
TOTAL = Source(
    key="jansen-1999",
    title="Total index, half the mean of (f(A) - f(AB_i))² over the variance",
    citation="Jansen, Comput. Phys. Commun. 117, 35 (1999)",
)

REPLICATES: Final = 8
SMALLEST, LARGEST = 64, 2**21
"""Samples accepted: 8 points a replicate, and what a machine holds and waits for."""
HALF_CELL = 2.0**-31
"""Sobol points stand on a grid of 2^-30; half of its mesh takes them off 0."""
ROUNDING: Final = 1e-12
"""Relative deviation up to which an output is one figure and the rounding of it."""
QUANTILES: Final = (0.05, 0.5, 0.95)


@dataclass(frozen=True)
class Settings:
    """How to sample.

    Attributes
    ----------
    samples : int
        Points of A, and of B, over all replicates; a power of two.
    seed : int
        Of the scrambling.
    chunk : int
        Inputs evaluated at a time, which bounds the memory; no figure depends on it.
    workers : int
        Processes at work; no figure depends on it.
    """

    samples: int = 4096
    seed: int = 1
    chunk: int = 8192
    workers: int = 1

    def __post_init__(self) -> None:
        """Refuse a number of samples that Sobol points are not balanced for."""
        problem = why_not_samples(self.samples)
        if problem:
            raise ValueError(problem)


def why_not_samples(samples: int) -> str:
    """Say why a number of samples is not accepted; empty if it is."""
    if not SMALLEST <= samples <= LARGEST:
        return f"found {samples} samples; from {SMALLEST} to {LARGEST}, a power of two, are accepted"
    if samples & (samples - 1):
        below = 1 << (samples.bit_length() - 1)
        return (
            f"found {samples} samples; a power of two is needed, where the points are balanced: {below} or {2 * below}"
        )
    return ""


@dataclass(frozen=True)
class Estimate:
    """A figure and its standard error."""

    value: float
    error: float


@dataclass(frozen=True)
class Index:
    """Share of the variance of an output that a factor makes: by itself, and with all it does together with others."""

    factor: str
    first: Estimate
    total: Estimate


@dataclass(frozen=True, eq=False)
class Analysis:
    """Outputs sampled, of shape (replicates, samples of A and B), and the indices of some of them.

    Attributes
    ----------
    outputs : dict of str to Array
        nan where the sample has no answer.
    indices : dict of str to tuple of Index
        By output, the highest total index first; empty where the output does not vary.
    evaluations : int
        Samples worked out, A, B and every AB_i.
    lost : int
        Of these, samples in which an output that has indices has no answer.
    """

    outputs: dict[str, Array]
    indices: dict[str, tuple[Index, ...]]
    evaluations: int
    lost: int

    def quantiles(self, output: str) -> tuple[Estimate, ...]:
        """The 5, 50 and 95 % quantiles of an output, over the samples that have an answer; nan without any."""
        return tuple(self._over(output, partial(np.quantile, q=share)) for share in QUANTILES)

    def mean(self, output: str) -> Estimate:
        """Mean of an output, or the probability of one that is 0 or 1."""
        return self._over(output, np.mean)

    def deviation(self, output: str) -> Estimate:
        """Standard deviation of an output."""
        return self._over(output, _deviation)

    def _over(self, output: str, figure: Callable[[Array], Any]) -> Estimate:
        """Work a figure out over all samples; its error from the replicates."""
        values = self.outputs[output]
        each = np.array([_of_sound(figure, row) for row in values])
        return Estimate(_of_sound(figure, values), _error(each))


def _of_sound(figure: Callable[[Array], Any], values: Array) -> float:
    sound = values[np.isfinite(values)]
    return float(figure(sound)) if sound.size else math.nan


def _deviation(values: Array) -> float:
    """Standard deviation; 0 where it is but the rounding of one figure."""
    return 0.0 if np.ptp(values) <= ROUNDING * np.max(np.abs(values)) else float(np.std(values))


def _error(replicates: Array) -> float:
    """Standard error of the mean of replicates."""
    return _deviation(replicates) / math.sqrt(replicates.size - 1)


def analyse(
    evaluate: Evaluate,
    factors: Sequence[Factor],
    settings: Settings | None = None,
    *,
    beside: Evaluate | None = None,
    watch: Watch | None = None,
) -> Analysis:
    """Sample the factors and work out the outputs and their indices.

    Parameters
    ----------
    evaluate : callable
        From the inputs of the factors to the outputs whose indices are wanted. With more than one worker it goes to
        other processes, and must be one that can be pickled.
    factors : sequence of Factor
    settings : Settings, optional
    beside : callable, optional
        To further outputs, worked out on A and B alone.
    watch : callable, optional
        Is handed the replicates as they are done, and how many there will be, and hands them on.

    Examples
    --------
    >>> from pipeflow.uncertainty import Independent, Rectangular
    >>> factors = [Independent(name, Rectangular(0.0, 1.0)) for name in ("x", "y")]
    >>> found = analyse(lambda inputs: {"sum": inputs["x"] + 2.0 * inputs["y"]}, factors)
    >>> [(index.factor, round(index.total.value, 2)) for index in found.indices["sum"]]
    [('y', 0.8), ('x', 0.2)]
    """
    settings = settings or Settings()
    middle = at_medians(evaluate, factors)
    centres = {name: value if math.isfinite(value) else 0.0 for name, value in middle.items()}
    work = partial(_replicate, evaluate, beside, tuple(factors), settings, centres)
    pool = ProcessPoolExecutor(settings.workers) if settings.workers > 1 else None
    with pool or nullcontext():
        done = (
            pool.map(work, range(REPLICATES)) if pool else map(work, range(REPLICATES))
        )  # processes start before watch
        parts = list(watch(done, REPLICATES) if watch else done)
    names = [factor.name for factor in factors]
    return Analysis(
        outputs={name: np.stack([part.outputs[name] for part in parts]) for name in parts[0].outputs},
        indices={name: tuple(_indices(name, names, parts)) for name in centres},
        evaluations=settings.samples * (len(factors) + 2),
        lost=sum(part.lost for part in parts),
    )


def at_medians(evaluate: Evaluate, factors: Sequence[Factor]) -> dict[str, float]:
    """Outputs with every factor at its median."""
    inputs = inputs_of(factors, np.full((1, sum(factor.columns for factor in factors)), 0.5))
    return {name: float(np.asarray(value).reshape(-1)[0]) for name, value in evaluate(inputs).items()}


def inputs_of(factors: Sequence[Factor], uniform: Array) -> dict[str, Array]:
    """Inputs of all factors from uniform numbers, of shape (samples, columns of all factors)."""
    found: dict[str, Array] = {}
    for factor, columns in _columns(factors):
        found |= factor.values(uniform[:, columns])
    return found


def _columns(factors: Sequence[Factor]) -> Iterator[tuple[Factor, slice]]:
    first = 0
    for factor in factors:
        yield factor, slice(first, first + factor.columns)
        first += factor.columns


@dataclass(frozen=True, eq=False)
class _Part:
    """One replicate: outputs on A and B, and by output and factor the means that the indices are made of."""

    outputs: dict[str, Array]
    first: dict[str, Array]
    total: dict[str, Array]
    lost: int


class _Sums:
    """Sums over the chunks of a replicate, a row a factor: products, half squares, samples with an answer."""

    def __init__(self, factors: int) -> None:
        self.of = np.zeros((3, factors))

    def add(self, found: Array) -> None:
        """Add one chunk: f(A), f(B) and each f(AB_i) less a constant, a row each."""
        a, b, *each = found
        for factor, mixed in enumerate(each):
            sound = np.isfinite(a + b + mixed)
            first, total = b * (mixed - a), (a - mixed) ** 2 / 2.0
            self.of[:, factor] += first[sound].sum(), total[sound].sum(), sound.sum()

    @property
    def means(self) -> tuple[Array, Array]:
        """Numerators of the first-order and the total index."""
        with np.errstate(invalid="ignore", divide="ignore"):
            return self.of[0] / self.of[2], self.of[1] / self.of[2]


def _replicate(
    evaluate: Evaluate,
    beside: Evaluate | None,
    factors: tuple[Factor, ...],
    settings: Settings,
    centres: dict[str, float],
    number: int,
) -> _Part:
    columns = sum(factor.columns for factor in factors)
    rows = max(settings.chunk // (len(factors) + 2), 1)
    sums = {name: _Sums(len(factors)) for name in centres}
    chunks: list[dict[str, Array]] = []
    lost = 0
    for uniform in _points(2 * columns, settings, number, rows):
        both, mixed = _inputs(factors, uniform[:, :columns], uniform[:, columns:])
        found = _by_block(evaluate, [*both, *mixed])
        more = _by_block(beside, both) if beside else {}
        if found.keys() & more.keys():
            raise ValueError(f"outputs of one name: {', '.join(found.keys() & more.keys())}")
        chunks.append({**more, **{name: values[:2] for name, values in found.items()}})
        lost += int(np.sum(~np.isfinite(np.sum([found[name] for name in centres], axis=0))))
        for name, centre in centres.items():
            sums[name].add(found[name] - centre)
    outputs = {name: np.concatenate([chunk[name] for chunk in chunks], axis=1).reshape(-1) for name in chunks[0]}
    means = {name: sums[name].means for name in centres}
    return _Part(outputs, {k: v[0] for k, v in means.items()}, {k: v[1] for k, v in means.items()}, lost)


def _inputs(factors: Sequence[Factor], a: Array, b: Array) -> tuple[list[dict[str, Array]], list[dict[str, Array]]]:
    """Inputs of A and B, and of every AB_i."""
    at_a = inputs_of(factors, a)
    mixed = [{**at_a, **factor.values(b[:, own])} for factor, own in _columns(factors)]
    return [at_a, inputs_of(factors, b)], mixed


def _by_block(evaluate: Evaluate, blocks: Sequence[Mapping[str, Array]]) -> dict[str, Array]:
    """Evaluate blocks of samples at once; the outputs have a row a block."""
    inputs = {name: np.concatenate([block[name] for block in blocks]) for name in blocks[0]}
    return {name: np.asarray(values).reshape(len(blocks), -1) for name, values in evaluate(inputs).items()}


def points(dimension: int, number: int, seed: int) -> Array:
    """Scrambled Sobol points above 0 and below 1, of shape (number, dimension); ``number`` is a power of two."""
    (found,) = _points(dimension, Settings(number * REPLICATES, seed), 0, number)
    return found


def _points(dimension: int, settings: Settings, number: int, rows: int) -> Iterator[Array]:
    """Scrambled Sobol points of one replicate, so many rows at a time, rounded down to a power of two."""
    from scipy.stats import qmc  # 0.9 s, which a page without uncertainty does not wait for

    generator = np.random.default_rng([settings.seed, number])
    engine = qmc.Sobol(d=max(dimension, 1), scramble=True, rng=generator)
    left = settings.samples // REPLICATES
    chunk = min(1 << (rows.bit_length() - 1), left)
    for _ in range(left // chunk):
        yield engine.random(chunk)[:, :dimension] + HALF_CELL


def _indices(name: str, factors: Sequence[str], parts: Sequence[_Part]) -> Iterator[Index]:
    """Indices of one output, averaged over the replicates, the highest total index first."""
    variances = np.array([_of_sound(np.var, part.outputs[name]) for part in parts])
    typical = max(abs(_of_sound(np.mean, part.outputs[name])) for part in parts)
    if not np.all(variances > (ROUNDING * typical) ** 2):
        return
    first = np.stack([part.first[name] for part in parts]) / variances[:, None]
    total = np.stack([part.total[name] for part in parts]) / variances[:, None]
    order = np.argsort(-total.mean(axis=0), kind="stable")
    for index in order:
        each = (Estimate(float(np.mean(rows)), _error(rows)) for rows in (first[:, index], total[:, index]))
        yield Index(factors[index], *each)
