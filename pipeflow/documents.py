"""Dataclasses laid out for JSON: SI numbers, the unit at the end of each key, null for what has no value."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import fields, is_dataclass
from typing import Any


def laid_out(item: Any, units: Mapping[str, str], names: Iterable[str] = ()) -> dict[str, Any]:
    """Lay a dataclass out, and those in it.

    Parameters
    ----------
    item : dataclass
    units : mapping of str to str
        What stands at the end of the key of a field, as ``m3_s``, by the field's name.
    names : iterable of str, optional
        The fields to lay out; all of them by default.

    Examples
    --------
    >>> from pipeflow.sources import Range
    >>> laid_out(Range("rate", 0.1, float("inf")), {"lower": "1_s"})
    {'variable': 'rate', 'lower_1_s': 0.1, 'upper': None}
    """
    told = tuple(names) or tuple(field.name for field in fields(item))
    return {key_of(name, units): plain(getattr(item, name), units) for name in told}


def key_of(name: str, units: Mapping[str, str]) -> str:
    """Give the key of a field."""
    return f"{name}_{units[name]}" if name in units else name


def plain(value: Any, units: Mapping[str, str]) -> Any:
    """Give a value as JSON has it: dataclasses laid out, tuples as lists, None for a number that is none."""
    if isinstance(value, float):
        return value if math.isfinite(value) else None
    if isinstance(value, tuple):
        return [plain(one, units) for one in value]
    return laid_out(value, units) if is_dataclass(value) and not isinstance(value, type) else value
