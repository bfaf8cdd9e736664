"""Many cases one after the other, or on every core where that pays."""

from __future__ import annotations

import os
import warnings
from collections.abc import Callable, Iterator, Sequence
from typing import TypeVar

T = TypeVar("T")
R = TypeVar("R")

PAYS_FROM = 24
"""Cases from which a second process earns back its start."""
AT_ONCE = 4
"""Cases handed to a process at a time."""


def each(work: Callable[[T], R], items: Sequence[T], cores: int | None = None) -> Iterator[R]:
    """Give the results of a function of one item in the order of the items.

    Parameters
    ----------
    work : callable
        A module's own function, or a ``partial`` of one: it must be one that other processes can be told of.
    items : sequence
    cores : int, optional
        Processes to use at most; all cores by default. Where processes cannot be forked, one.
    """
    cores = (os.cpu_count() or 1) if cores is None else cores
    if len(items) < PAYS_FROM or cores < 2 or not hasattr(os, "fork"):
        yield from map(work, items)
        return
    from concurrent.futures import ProcessPoolExecutor
    from multiprocessing import get_context

    with warnings.catch_warnings():
        # a fork beside the idle threads of the linear algebra is safe: they hold nothing that the child needs
        warnings.simplefilter("ignore", DeprecationWarning)
        with ProcessPoolExecutor(cores, get_context("fork")) as pool:
            yield from pool.map(work, items, chunksize=AT_ONCE)
