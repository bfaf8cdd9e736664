"""Pages already there: whether one is ours to write over."""

from __future__ import annotations

from pathlib import Path

from pipeflow.report.html.rendering import GENERATOR
from pipeflow.report.written import head_of

_HEAD = 2048
"""Bytes of a file that are looked at."""


def is_our_page(path: Path) -> bool:
    """Whether a file is empty, or says in its head that this program wrote it."""
    head = head_of(path, _HEAD)
    return not head.strip() or f'<meta name="generator" content="{GENERATOR} '.encode() in head
