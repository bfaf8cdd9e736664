"""What a million samples of the largest demo cost: ``python tests/benchmarks/uncertainty.py``, figures seen, no limits.

1. The line over 10^5 points, with all that a sample takes, against the kernel alone (`solve_pipes`) on the same points.
2. A million lines of `pipeflow solve --uncertainty` in one process and in two: time and peak memory.
"""

from __future__ import annotations

import resource
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

from pipeflow.case.loading import load_case
from pipeflow.case.model import Case
from pipeflow.case.varying import varied
from pipeflow.friction import solve_pipes
from pipeflow.line.elements import Pipe
from pipeflow.line.losses import side_by_side
from pipeflow.line.route import with_pipe_axis
from pipeflow.study.sampling.inputs import METHOD, factors_of
from pipeflow.study.sampling.line import Figures
from pipeflow.study.sampling.uncertainty import uncertainty
from pipeflow.uncertainty import inputs_of, points

CASES = Path(__file__).parents[2] / "cases"
SAMPLES = 2**17
"""Times the five inputs, the method and the two samples: 1 048 576 lines."""


def demo() -> Case:
    """The largest demo, with five uncertain inputs beside the method."""
    return load_case(CASES / "thickener-underflow.yaml")


def seconds(work: Callable[[], object], times: int = 3) -> float:
    """Least of a few times."""
    found = []
    for _ in range(times):
        start = time.perf_counter()
        work()
        found.append(time.perf_counter() - start)
    return min(found)


def against_the_kernel() -> None:
    """Compare a sample with its bare pipes; in chunks, as the study works."""
    case = demo()
    factors, _ = factors_of(case)
    inputs = inputs_of(factors, points(sum(factor.columns for factor in factors), 2**17, 1)[:100_000])
    chunks = [
        {name: values[first : first + 8192] for name, values in inputs.items()} for first in range(0, 100_000, 8192)
    ]
    figures = Figures(case)
    whole = seconds(lambda: [figures(chunk) for chunk in chunks])
    bare = []
    for chunk in chunks:
        given = varied(case, {name: values for name, values in chunk.items() if name != METHOD})
        pipes = [element for element in given.route if isinstance(element, Pipe)]
        bore = side_by_side([pipe.diameter for pipe in pipes])
        velocity = np.asarray(given.design)[:, None] / (np.pi / 4.0 * bore**2)
        rough = side_by_side([pipe.roughness for pipe in pipes])
        bare.append(
            (velocity, bore, np.asarray(given.fluid.density)[:, None], with_pipe_axis(given.fluid.rheology), rough)
        )
    kernel = seconds(lambda: [solve_pipes(*one[:4], roughness=one[4]) for one in bare])
    print(f"10^5 samples {whole:.2f} s, the kernel alone {kernel:.2f} s: ratio {whole / kernel:.1f}")


def a_million(workers: int) -> None:
    """Run the study; to be started in a process of its own."""
    start = time.perf_counter()
    found = uncertainty(demo(), samples=SAMPLES, workers=workers)
    took = time.perf_counter() - start
    own, workers_own = (resource.getrusage(who) for who in (resource.RUSAGE_SELF, resource.RUSAGE_CHILDREN))
    spent = sum(one.ru_utime + one.ru_stime for one in (own, workers_own))
    memory = f"peak memory {own.ru_maxrss / 1024.0:.0f} MB"
    if workers > 1:
        memory += f", the largest worker {workers_own.ru_maxrss / 1024.0:.0f} MB"
    print(
        f"{found.evaluations} lines, and {2 * SAMPLES} samples against their limits, in {workers} process(es): "
        f"{took:.1f} s ({spent:.1f} s of processor), {memory}"
    )


def main() -> None:
    """Print everything."""
    against_the_kernel()
    for workers in (1, 2):
        subprocess.run([sys.executable, __file__, str(workers)], check=True)


if __name__ == "__main__":
    a_million(int(sys.argv[1])) if len(sys.argv) > 1 else main()
