"""Speed of the vectorised solver, and the correctness of what is timed.

Timed tests are skipped by default (``--benchmark-skip``); ``pytest tests/benchmarks --benchmark-only`` runs them, and
``python tests/benchmarks/ratios.py`` prints the ratios. The others always run, on fewer pipes.
"""

import tracemalloc

import numpy as np
import pytest
from measures import laminar_elementwise, laminar_ours, laminar_problem, scalar, vectorised
from population import MODELS, population
from ratios import PIPES, laminar_ratio, loop_ratio

from pipeflow.friction import Regime, Status, bulk_velocity, solve_pipes


def test_every_pipe_converges_in_every_regime():
    """Residual ``|ln V(tau_w)/V|`` to 1e-10, by the law's own direction, without a root find of the stress."""
    regimes = np.zeros(4, dtype=int)
    for pipes in population(30_000):
        flow = solve_pipes(*pipes.arguments(), roughness=pipes.roughness)
        assert np.all(flow.status == Status.CONVERGED)
        regimes += np.bincount(flow.regime, minlength=4)
        back = bulk_velocity(flow.wall_shear_stress, *pipes.arguments()[1:], roughness=pipes.roughness)
        assert np.max(np.abs(np.log(back / pipes.velocity))) < 1e-10
    assert regimes[Regime.NO_FLOW] == 0
    assert regimes.sum() == 30_000
    assert np.all(regimes[1:] > 1500)


def test_the_scalar_loop_solves_the_same_equations():
    """``brentq`` stops at 2e-12 in ln(tau_w - tau_y)."""
    parts = population(900)
    for flow, stress in zip(vectorised(parts), scalar(parts, 300), strict=True):
        assert set(np.unique(flow.regime)) == {1, 2, 3}
        np.testing.assert_allclose(flow.wall_shear_stress, stress, rtol=1e-11)


@pytest.mark.parametrize("model", MODELS)
def test_the_two_finders_of_the_laminar_root_agree(model):
    pipes = population(3000)[MODELS.index(model)]
    law, log_bulk = laminar_problem(pipes)
    root = laminar_ours(law, log_bulk)
    np.testing.assert_allclose(laminar_elementwise(pipes, log_bulk, (root - 1, root + 1)), root, rtol=0, atol=1e-11)


def peak_memory(count):
    parts = population(count)
    tracemalloc.start()
    for pipes in parts:
        solve_pipes(*pipes.arguments(), roughness=pipes.roughness)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    return peak


def test_memory_grows_no_faster_than_the_number_of_pipes():
    """Working arrays are bounded by the chunk; what grows are the eleven figures of each pipe."""
    assert peak_memory(400_000) <= 4.0 * peak_memory(100_000)


def test_speed_of_mixed_pipes(benchmark):
    parts = population(PIPES)
    flows = benchmark(vectorised, parts)
    assert sum(flow.status.size for flow in flows) == PIPES
    assert all(np.all(flow.status == Status.CONVERGED) for flow in flows)


def test_at_least_40_times_the_scalar_loop(benchmark):
    ours, loop, ratio = benchmark.pedantic(loop_ratio, rounds=1)
    assert ratio >= 40, f"{loop:.2f} s against {ours:.3f} s"


def test_at_least_one_and_a_half_times_the_elementwise_finder(benchmark):
    ours, theirs, ratio = benchmark.pedantic(laminar_ratio, rounds=1)
    assert ratio >= 1.5, f"{theirs:.3f} s against {ours:.3f} s"
