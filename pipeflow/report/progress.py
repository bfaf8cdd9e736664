"""A bar for work that takes long: on a terminal alone, and only once a second has passed."""

from __future__ import annotations

import sys
import time
from collections.abc import Iterable, Iterator
from contextlib import ExitStack
from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from rich.progress import Progress, TaskID

T = TypeVar("T")

PATIENCE = 1.0
"""Seconds without a bar."""


def with_progress(items: Iterable[T], count: int, what: str, *, at_once: bool = False) -> Iterator[T]:
    """Hand items on as they come, with a bar on standard error where that is a terminal.

    Parameters
    ----------
    items : iterable
    count : int
        How many there will be.
    what : str
        What is done, as the bar says it.
    at_once : bool
        Draw it before the first item, of work that is known to be long.
    """
    if not sys.stderr.isatty():
        yield from items
        return
    begun = time.monotonic()
    with ExitStack() as stack:
        bar = _bar(stack, count, what) if at_once else None
        for done, item in enumerate(items, start=1):
            if bar is None and time.monotonic() - begun > PATIENCE and done < count:
                bar = _bar(stack, count, what)
            if bar is not None:
                bar[0].update(bar[1], completed=done)
            yield item


def _bar(stack: ExitStack, count: int, what: str) -> tuple[Progress, TaskID]:
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn

    columns = (TextColumn("{task.description}"), BarColumn(), MofNCompleteColumn())
    progress = stack.enter_context(Progress(*columns, console=Console(stderr=True), transient=True))
    return progress, progress.add_task(what, total=count)
