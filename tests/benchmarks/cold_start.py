"""Cold time of ``pipeflow solve`` over that of importing its libraries alone, in one run.

``python tests/benchmarks/cold_start.py`` in an environment where the package is installed (not in editable mode, whose
modules may be compiled anew at every start).
"""

import statistics
import subprocess
import sys
import sysconfig
import time
from pathlib import Path

RUNS = 15
CASES = Path(__file__).parents[2] / "cases"
LIBRARIES = [sys.executable, "-c", "import numpy, pydantic, typer, rich, yaml"]
PYDANTIC = [sys.executable, "-c", "import numpy, typer, rich, yaml; from pydantic import BaseModel"]
COMMAND = str(Path(sysconfig.get_path("scripts")) / "pipeflow")


def seconds(command):
    begun = time.perf_counter()
    subprocess.run(command, stdout=subprocess.DEVNULL, check=False)
    return time.perf_counter() - begun


def main():
    commands = {"the libraries": LIBRARIES, "and what pydantic loads on first use": PYDANTIC}
    commands |= {f"solve {case.name}": [COMMAND, "solve", str(case)] for case in sorted(CASES.glob("*.yaml"))}
    times = {name: [] for name in commands}
    for _ in range(RUNS):
        for name, command in commands.items():
            times[name].append(seconds(command))
    base = statistics.median(times["the libraries"])
    for name, taken in times.items():
        middle = statistics.median(taken)
        print(f"{name:45} {middle:.3f} s  {middle / base:.2f}")


if __name__ == "__main__":
    main()
