"""Time of ``pipeflow rerun`` on 200 cases over its cold time on one of them: ``python tests/benchmarks/rerun_many.py``.

The cases are the demo cases in turn, and the slowest demo case alone, each with lengths of its own; they have records
and nothing moves; pumps are left out of them. Run it in an environment where the package is installed, as
``cold_start.py``.
"""

import re
import resource
import shutil
import statistics
import subprocess
import sysconfig
import tempfile
import time
from pathlib import Path

COUNT, COLD_RUNS, RUNS = 200, 5, 3
CASES = Path(__file__).parents[2] / "cases"
COMMAND = str(Path(sysconfig.get_path("scripts")) / "pipeflow")


def seconds(*arguments):
    """Seconds passed, and seconds of processor of all processes together, which other work disturbs less."""
    begun, used = time.perf_counter(), processor()
    subprocess.run([COMMAND, "rerun", *arguments], stdout=subprocess.DEVNULL, check=False)
    return time.perf_counter() - begun, processor() - used


def processor():
    spent = resource.getrusage(resource.RUSAGE_CHILDREN)
    return spent.ru_utime + spent.ru_stime


def median(runs):
    return [statistics.median(column) for column in zip(*runs, strict=True)]


def longer(text, number):
    """The case with every length stretched by a share of its own."""
    return re.sub(r"length: ([\d.]+) m\b", lambda found: f"length: {float(found[1]) * (1 + number / 1000):.4f} m", text)


def without_pumps(text):
    """The case without its candidates, each of which costs more than the line."""
    return re.sub(r"^pumps:\n(?: .*\n|\n)*", "", text, flags=re.MULTILINE)


def laid_out(folder, cases):
    for sheet in CASES.glob("*.csv"):
        shutil.copy(sheet, folder)
    for number in range(COUNT):
        text = cases[number % len(cases)].read_text(encoding="utf-8")
        (folder / f"line-{number:03}.yaml").write_text(longer(without_pumps(text), number), encoding="utf-8")
    seconds("--accept", str(folder))


def main():
    demo = sorted(CASES.glob("*.yaml"))
    for name, cases in (
        ("the demo cases in turn", demo),
        ("thickener-underflow.yaml", [CASES / "thickener-underflow.yaml"]),
    ):
        with tempfile.TemporaryDirectory() as folder:
            laid_out(Path(folder), cases)
            largest = cases.index(CASES / "thickener-underflow.yaml")
            cold = median([seconds(f"{folder}/line-{largest:03}.yaml") for _ in range(COLD_RUNS)])
            many = median([seconds(folder) for _ in range(RUNS)])
        print(f"{name}: one, cold {cold[0]:.2f} s; {COUNT}, {many[0]:.2f} s; ratio {many[0] / cold[0]:.1f}")
        print(f"  of processor time {cold[1]:.2f} s and {many[1]:.2f} s; ratio {many[1] / cold[1]:.1f}")


if __name__ == "__main__":
    main()
