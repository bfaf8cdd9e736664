"""The classes that the inputs of a case are made of, and whether a value is what one of their fields holds."""

from __future__ import annotations

import types
from dataclasses import is_dataclass
from functools import cache
from typing import Any, Literal, Union, get_args, get_origin, get_type_hints

import numpy as np


@cache
def classes() -> dict[str, type[Any]]:
    """Every class an input may be of, by its name."""
    from pipeflow import sources
    from pipeflow.case import model
    from pipeflow.line import elements
    from pipeflow.operability import pressures
    from pipeflow.rheology import conditions, fitting, flowcurve, general, models, readings, sheet

    rooms = (model, elements, pressures, models, general, conditions, sheet, fitting, flowcurve, readings, sources)
    return {
        name: found
        for room in rooms
        for name, found in vars(room).items()
        if isinstance(found, type) and is_dataclass(found) and found.__module__ == room.__name__
    }


@cache
def kinds_of(name: str) -> dict[str, Any]:
    """What each field of a class, known by its name, holds: as it is annotated."""
    return get_type_hints(classes()[name], localns=classes())


def fits(value: Any, annotated: Any) -> bool:
    """Whether a value is what an annotation says; an array of several where a float would do is not."""
    origin, inner = get_origin(annotated), get_args(annotated)
    if origin in (Union, types.UnionType):
        numeric = float in inner and isinstance(value, np.ndarray)
        return value.ndim == 0 if numeric else any(fits(value, one) for one in inner)
    if origin is Literal:
        return isinstance(value, str) and value in inner
    if origin is tuple:
        return isinstance(value, tuple) and _all_fit(value, inner)
    if origin is dict:
        return isinstance(value, dict) and all(fits(one, inner[1]) for one in value.values())
    if annotated in (float, int):
        return isinstance(value, int | float) and not isinstance(value, bool)
    known = origin or annotated
    return isinstance(value, known) if isinstance(known, type) else annotated is Any or value is annotated


def _all_fit(value: tuple[Any, ...], inner: tuple[Any, ...]) -> bool:
    if len(inner) == 2 and inner[1] is Ellipsis:
        return all(fits(one, inner[0]) for one in value)
    return len(value) == len(inner) and all(map(fits, value, inner))
