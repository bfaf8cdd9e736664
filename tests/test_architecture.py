"""The house: imports run downwards only, the core stays light, and no module or function grows into a giant."""

from __future__ import annotations

import ast
import statistics
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import pipeflow

PACKAGE = Path(pipeflow.__file__).parent
MODULES = sorted(path for path in PACKAGE.rglob("*.py"))

GROUND = ("errors", "constants", "sources", "verdict", "arrays", "rootfind", "quadrature", "writing", "documents")
INPUTS = (
    "line.elements",
    "line.catalogue",
    "line.fittings",
    "rheology",
    "friction.methods",
    "friction.criteria",
    "operability.pressures",
    "pumping.curve",
    "pumping.faults",
)
"""The input dataclasses of the rooms below ``study``, and the keys and records of methods."""
MAY_IMPORT: dict[str, tuple[str, ...]] = {
    **dict.fromkeys(GROUND, GROUND),
    "units": (),
    "rheology": ("rheology",),
    "friction": ("friction", "rheology"),
    "line": ("line", "friction", "rheology"),
    "operability": ("operability", "line", "friction", "rheology"),
    "sizing": ("sizing", "operability", "line", "friction", "rheology"),
    "pumping": ("pumping", "line", "friction", "rheology"),
    "uncertainty": ("uncertainty",),
    "case": ("case", "units", *INPUTS),
    "study": (
        "study",
        "case",
        "uncertainty",
        "pumping",
        "sizing",
        "operability",
        "line",
        "friction",
        "rheology",
        "units",
    ),
    "record": ("record", "study", "case", "units", "sizing", "operability", "line", *INPUTS),
    "report": ("report", "record", "study", "case.model", "case.source_files", "units", "friction.turbulent", *INPUTS),
    "cli": ("cli", "report", "record", "study", "case"),
}
"""Beside the ground floor, which every room may use."""
LAZY = ("__init__",)
"""The package itself, which fetches ``load_case`` and ``solve`` on first use."""

LINES_OF_A_MODULE, LINES_OF_A_BODY = 400, 12
HEAVY = ("pydantic", "yaml", "typer", "rich", "scipy", "matplotlib", "jinja2", "plotille")


def name_of(path: Path) -> str:
    parts = path.relative_to(PACKAGE).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" and len(parts) > 1 else parts)


def imports_of(path: Path) -> Iterator[str]:
    """What a module imports of the package, by dotted name below it, lazily imported or not."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: relative import"
            base = node.module or ""
            names = [f"{base}.{alias.name}" for alias in node.names] if base == "pipeflow" else [base]
        else:
            continue
        yield from (name.removeprefix("pipeflow.") for name in names if name.startswith("pipeflow."))


def lies_in(name: str, rooms: tuple[str, ...]) -> bool:
    return any(name == room or name.startswith(f"{room}.") for room in rooms)


@pytest.mark.parametrize("path", [path for path in MODULES if name_of(path) not in LAZY], ids=name_of)
def test_imports_run_downwards(path):
    room = name_of(path).split(".")[0]
    allowed = (*MAY_IMPORT[room], *GROUND, "__version__")
    upwards = sorted({name for name in imports_of(path) if not lies_in(name, allowed)})
    assert not upwards, f"{name_of(path)} may not import {', '.join(upwards)}"


def test_the_table_itself_has_no_way_up():
    """The rooms in their order: what a room may import stands before it."""
    order = [*GROUND, *(room for room in MAY_IMPORT if room not in GROUND)]
    for room, allowed in MAY_IMPORT.items():
        if room not in GROUND:
            assert all(order.index(other.split(".")[0]) <= order.index(room) for other in allowed), room


def loaded_by(statement: str) -> set[str]:
    code = f"{statement}\nimport sys\nprint(*{{name.split('.')[0] for name in sys.modules}})"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    return set(run.stdout.split())


@pytest.mark.parametrize(
    "statement",
    ["from pipeflow.friction import wall_shear_stress", "from pipeflow.line.route import solve", "import pipeflow"],
)
def test_the_core_imports_nothing_heavy(statement):
    loaded = loaded_by(statement)
    assert "pipeflow" in loaded
    assert not loaded & set(HEAVY)


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_no_module_is_a_giant(path):
    assert len(path.read_text(encoding="utf-8").splitlines()) <= LINES_OF_A_MODULE


def body_lengths() -> Iterator[int]:
    """Lines of each function from its first statement after the docstring to its last."""
    for path in MODULES:
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
                body = node.body[1:] if ast.get_docstring(node) is not None else node.body
                if body:
                    yield (body[-1].end_lineno or 0) - body[0].lineno + 1


def test_function_bodies_are_short():
    lengths = list(body_lengths())
    assert len(lengths) > 100
    assert statistics.median(lengths) <= LINES_OF_A_BODY


def test_the_version_is_said_once():
    """In ``pipeflow/__init__.py``; the packaging repeats it and must agree."""
    text = (Path(__file__).parents[1] / "pyproject.toml").read_text(encoding="utf-8")
    assert f'version = "{pipeflow.__version__}"' in text or 'dynamic = ["version"]' in text
