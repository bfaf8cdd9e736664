"""Print the speed ratios of ``docs/performance.md`` in one run: ``python tests/benchmarks/ratios.py``."""

from __future__ import annotations

import numpy as np
from measures import best_of, laminar_elementwise, laminar_ours, laminar_problem, scalar, vectorised
from population import population

from pipeflow.friction import Regime

PIPES, SAMPLE = 200_000, 4002


def loop_ratio(count: int = PIPES, sample: int = SAMPLE) -> tuple[float, float, float]:
    """Seconds of the vectorised call, of the loop scaled up from its sample, and their ratio."""
    parts = population(count)
    ours = best_of(7, lambda: vectorised(parts))
    loop = best_of(1, lambda: scalar(parts, sample // 3)) * count / sample
    return ours, loop, loop / ours


def laminar_ratio(count: int = PIPES) -> tuple[float, float, float]:
    """Seconds of the laminar root by the project, by the elementwise finder, and their ratio."""
    ours = theirs = 0.0
    for pipes in population(count):
        law, log_bulk = laminar_problem(pipes)
        root = laminar_ours(law, log_bulk)
        bracket = (root - 1.0, root + 1.0)
        found = laminar_elementwise(pipes, log_bulk, bracket)
        np.testing.assert_allclose(found, root, rtol=0, atol=1e-10)
        ours += best_of(5, lambda law=law, log_bulk=log_bulk: laminar_ours(law, log_bulk))
        theirs += best_of(5, lambda pipes=pipes, b=bracket, log_bulk=log_bulk: laminar_elementwise(pipes, log_bulk, b))
    return ours, theirs, theirs / ours


def main() -> None:
    regimes = np.concatenate([flow.regime for flow in vectorised(population(PIPES))])
    shares = ", ".join(f"{regime.name.lower()} {np.mean(regimes == regime):.0%}" for regime in Regime if regime)
    print(f"{PIPES} yield-fluid pipes ({shares})")
    for name, (ours, theirs, ratio) in (
        ("whole curve, loop of brentq", loop_ratio()),
        ("laminar root, elementwise.find_root", laminar_ratio()),
    ):
        print(f"{name}: {theirs:.2f} s against {ours:.3f} s, ratio {ratio:.1f}")


if __name__ == "__main__":
    main()
