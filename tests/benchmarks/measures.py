"""What the benchmarks time: one vectorised call, the scalar loop, and the laminar root by two vectorised finders."""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np
from population import Pipes
from scalar_loop import wall_stress
from scipy.optimize import elementwise

from pipeflow.friction import PipeFlow, solve_pipes
from pipeflow.friction import solver as friction_solver
from pipeflow.friction.laminar import CassonTube, GeneralizedPowerLawTube, TubeLaw
from pipeflow.friction.tube import tube_law
from pipeflow.rootfind import find_root, take


def best_of(times: int, action: Callable[[], object]) -> float:
    """Least time of several runs, s."""
    spent = []
    for _ in range(times):
        begin = time.perf_counter()
        action()
        spent.append(time.perf_counter() - begin)
    return min(spent)


def vectorised(parts: list[Pipes]) -> list[PipeFlow]:
    return [solve_pipes(*pipes.arguments(), roughness=pipes.roughness) for pipes in parts]


def scalar(parts: list[Pipes], sample: int) -> list[np.ndarray]:
    """The loop over the first ``sample`` pipes of each part."""
    return [np.array([wall_stress(pipes.one(i), float(pipes.velocity[i])) for i in range(sample)]) for pipes in parts]


def laminar_problem(pipes: Pipes) -> tuple[TubeLaw, np.ndarray]:
    return tube_law(pipes.rheology(), lambda x: np.broadcast_to(x, pipes.velocity.shape)), np.log(
        8.0 * pipes.velocity / pipes.diameter
    )


def laminar_ours(law: TubeLaw, log_bulk: np.ndarray) -> np.ndarray:
    """The project's own start and root find, a chunk at a time as the solver does it."""
    roots = []
    for first in range(0, log_bulk.size, friction_solver.CHUNK):
        part = slice(first, first + friction_solver.CHUNK)
        here, wanted = take(law, part), log_bulk[part]
        roots.append(
            find_root(friction_solver._laminar_excess, here.guess(wanted), np.ones_like(wanted), (here, wanted))
        )
    return np.concatenate(roots)


def laminar_elementwise(pipes: Pipes, log_bulk: np.ndarray, bracket: tuple[np.ndarray, np.ndarray]) -> np.ndarray:
    """``scipy.optimize.elementwise.find_root`` on the same law, its valid bracket a present."""

    def excess(x, tau_y, log_k, n, wanted):
        law = CassonTube(tau_y, log_k) if pipes.model == "casson" else GeneralizedPowerLawTube(tau_y, log_k, n)
        return law.wall(x).log_bulk_rate - wanted

    args = (pipes.tau_y, np.log(pipes.k), pipes.n, log_bulk)
    result = elementwise.find_root(excess, bracket, args=args, tolerances={"xatol": 1e-12, "xrtol": 1e-15})
    assert result.success.all()
    return result.x
