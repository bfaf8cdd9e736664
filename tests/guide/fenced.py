"""The fenced blocks of a page, and the changes that a ``diff`` block makes to a file."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from textwrap import dedent

_FENCE = re.compile(r"^( *)```([^\n`]*)\n(.*?)^ *```$", re.DOTALL | re.MULTILINE)


@dataclass(frozen=True)
class Block:
    """One fenced block.

    Attributes
    ----------
    line : int
        Line of the page at which its fence opens.
    language : str
        First word after the fence.
    file : str
        The file it is written to, or changes: ``file=NAME`` after the language; empty where it is none.
    text : str
        What stands in it, not indented.
    before : str
        The line before its fence, where a remark on it may stand.
    """

    line: int
    language: str
    file: str
    text: str
    before: str


def blocks(page: Path) -> Iterator[Block]:
    """Read the fenced blocks of a page, in their order."""
    text = page.read_text(encoding="utf-8")
    for found in _FENCE.finditer(text):
        language, _, rest = found[2].partition(" ")
        ahead = text[: found.start()].rstrip("\n").splitlines()
        line = text.count("\n", 0, found.start()) + 1
        yield Block(line, language, rest.removeprefix("file="), dedent(found[3]), ahead[-1] if ahead else "")


def changed(text: str, change: str) -> str:
    """Make the change of a ``diff`` block, whose lines of before must stand in the text once."""
    before, after = (
        "".join(f"{line[1:]}\n" for line in change.splitlines() if line[:1] in f" {kind}") for kind in "-+"
    )
    assert text.count(before) == 1, f"the lines to change stand {text.count(before)} times:\n{before}"
    return text.replace(before, after)
