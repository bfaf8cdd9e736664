"""Check the documents: ``python docs/check.py``.

Links inside the project lead somewhere, every snippet of README and docs runs, loads or is marked as not run, the
generated pages are fresh, and every command, case key and method is documented. The tutorial is run by its test.
"""

from __future__ import annotations

import doctest
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.methods import TURBULENT

ROOT = Path(__file__).parent.parent
sys.path.insert(0, str(ROOT / "tests" / "guide"))

from snippets import faults  # noqa: E402

PAGES = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted((ROOT / "docs").glob("*.md"))]
LINK = re.compile(r"\]\(([^)#\s]+)(?:#[^)]*)?\)")
PYTHON = re.compile(r"^```python\n(.*?)^```$", re.DOTALL | re.MULTILINE)


def broken_links() -> Iterator[str]:
    """Name links to files that are not there."""
    for page in PAGES:
        for target in LINK.findall(page.read_text(encoding="utf-8")):
            if "://" not in target and not (page.parent / target).exists():
                yield f"{page.name}: link to {target}, which is not there"


def failing_snippets() -> Iterator[str]:
    """Run the python snippets of every page."""
    for page in PAGES:
        for number, snippet in enumerate(PYTHON.findall(page.read_text(encoding="utf-8")), start=1):
            run = subprocess.run(
                [sys.executable, "-W", "error", "-c", snippet], cwd=ROOT, capture_output=True, text=True, check=False
            )
            if run.returncode:
                yield f"{page.name}: python snippet {number} fails: {run.stderr.strip().splitlines()[-1]}"


def wrong_snippets() -> Iterator[str]:
    """Name commands in a page that the program does not know, and cases that do not load."""
    for page in PAGES:
        yield from faults(page)


def failing_doctests() -> Iterator[str]:
    """Run the examples in docstrings."""
    for path in sorted((ROOT / "pipeflow").rglob("*.py")):
        name = ".".join(path.relative_to(ROOT).with_suffix("").parts)
        module = __import__(name.removesuffix(".__init__"), fromlist=["_"])
        if doctest.testmod(module).failed:
            yield f"{name}: an example in a docstring fails"


def undocumented() -> Iterator[str]:
    """Name methods and commands that no page speaks of, but for the one generated from the commands."""
    written = [page for page in PAGES if page.name != "commands.md"]
    text = "\n".join(page.read_text(encoding="utf-8") for page in written)
    yield from (f"method {key} is in no page" for key in (*TURBULENT, *CRITERIA) if f"`{key}`" not in text)
    help_text = subprocess.run(
        [sys.executable, "-c", "from pipeflow.cli import main; main()", "--help"],
        capture_output=True,
        text=True,
        check=True,
    ).stdout
    commands = re.findall(r"^  ([a-z]+)  ", help_text, re.MULTILINE)
    if not commands:
        yield "the help of the command names no command"
    yield from (f"command {name} is in no page" for name in commands if f"pipeflow {name}" not in text)


def stale_pages() -> Iterator[str]:
    """Name generated pages that are not what the program would write."""
    for script in ("generate.py", "commands.py", "spread.py", "validation.py"):
        run = subprocess.run(
            [sys.executable, str(ROOT / "docs" / script), "--check"], capture_output=True, text=True, check=False
        )
        if run.returncode:
            yield run.stdout.strip() or run.stderr.strip()


def main() -> int:
    """Print what is wrong."""
    checks = (broken_links, failing_snippets, wrong_snippets, failing_doctests, undocumented, stale_pages)
    found = [problem for check in checks for problem in check()]
    print("\n".join(found) or f"documents: {len(PAGES)} pages, {len(checks)} checks, nothing wrong")
    return 1 if found else 0


if __name__ == "__main__":
    sys.exit(main())
