"""What is wrong with the snippets of a page: commands the program does not know, cases it would not load.

A command to type stands in a ``sh`` or ``console`` block, a case or parts of one in a ``yaml`` block. What cannot be
run has the reason on the line before its fence: ``<!-- not run: why -->``. Blocks of other languages show what a file
holds or what is printed. The tutorial, whose blocks build on each other, is run as a whole by its own test, the first
two blocks of the README by ``.ci/run``, and ``python`` blocks by ``docs/check.py``.
"""

from __future__ import annotations

import re
import shlex
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import typer
from fenced import Block, blocks

from pipeflow.case.loading import load_text
from pipeflow.cli import app
from pipeflow.errors import InputError

ROOT = Path(__file__).parents[2]
PAGES = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted((ROOT / "docs").glob("*.md"))]
TUTORIAL, README = "tutorial.md", "README.md"
RUN_BY_CI = 2
TABLES = ROOT / "tests" / "cli"
"""Folder of the tables that the cases of the pages name."""
SHOWN = ("", "text", "csv", "python")
INLINE = re.compile(r"`pipeflow\s+([a-z]+)")


def faults(page: Path) -> Iterator[str]:
    """Say what is wrong with the snippets of a page."""
    known = commands()
    for name in INLINE.findall(page.read_text(encoding="utf-8")):
        if name not in known:
            yield f"{page.name}: the program has no command {name}"
    found = list(blocks(page))
    run_by_ci = [block for block in found if block.language == "sh"][:RUN_BY_CI] if page.name == README else []
    for block in found:
        if block not in run_by_ci and not block.before.strip().startswith("<!-- not run: "):
            yield from (f"{page.name}:{block.line}: {fault}" for fault in _faults_of(block, page))


def commands() -> dict[str, Any]:
    """The commands of the program by name."""
    group: Any = typer.main.get_command(app)
    return dict(group.commands)


def _faults_of(block: Block, page: Path) -> Iterator[str]:
    if block.language in ("sh", "console"):
        yield from filter(None, map(_command_fault, block.text.splitlines()))
    elif block.language == "yaml":
        yield from () if block.file else _case_faults(block.text)
    elif block.language not in SHOWN and page.name != TUTORIAL:
        yield f"a block of {block.language} is neither run nor marked as not run"
    if block.file and page.name != TUTORIAL:
        yield "only the blocks of the tutorial make files"


def _command_fault(line: str) -> str:
    """Hold a command line against the program's own reading of arguments; nothing is run."""
    words = shlex.split(line, comments=True)
    if not words:
        return ""
    if words[0] != "pipeflow":
        return f"{words[0]} is not the program's, and the block is not marked as not run"
    command = commands().get(words[1])
    if command is None:
        return f"the program has no command {words[1]}"
    try:
        command.make_context(words[1], words[2:])
    except Exception as refused:
        # the error classes are those of the library that typer reads arguments with, whichever it brings
        return f"{line}: {getattr(refused, 'message', '') or refused}"
    return ""


def _case_faults(text: str) -> Iterator[str]:
    """Load a case, or parts of one with the rest of the example of the case-file page."""
    first = next(block.text for block in blocks(ROOT / "docs" / "case-file.md") if block.language == "yaml")
    given = {*re.findall(r"(?m)^(\w+):", text), "scenarios"}
    if "title" not in given:
        text += "".join(part for part in re.split(r"(?m)^(?=\w)", first) if part.split(":")[0] not in given)
    try:
        load_text(text, str(TABLES / "case.yaml"))
    except InputError as refused:
        yield str(refused)
