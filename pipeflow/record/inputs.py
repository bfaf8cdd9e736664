"""A case as JSON and back: its tree of frozen dataclasses in SI units, each node marked with the class it is of.

Classes are looked up in a closed table; what a record names is never imported. Floats come back to the last bit. A
field that holds nothing, as by its default, is left out, so that a case stays the same when a later version of the
program can be told more.
"""

from __future__ import annotations

import hashlib
import json
import math
from collections.abc import Iterator, Mapping
from dataclasses import MISSING, Field, fields, is_dataclass, replace
from pathlib import PurePath
from typing import Any

import numpy as np

from pipeflow.case.model import Case
from pipeflow.record.kinds import classes, fits, kinds_of

Json = Any
"""What ``json`` reads and writes: dict, list, str, float, int, bool or None."""

MARK = "is"
"""The key under which an object says what it is."""
DIGITS = 12
"""Digits to which two numbers must agree to be the same input: 0.05 mm and 50 µm differ in their last bit."""


class UnknownInputsError(ValueError):
    """Inputs that this version of the program cannot make a case of; the message says why."""


def without_folder(case: Case) -> Case:
    """Give the case with its files by name alone, the same from wherever it was read."""
    scenarios = {name: without_folder(scenario) for name, scenario in case.scenarios.items()}
    readings = tuple(PurePath(path).name for path in case.readings)
    return replace(case, file=PurePath(case.file).name, readings=readings, scenarios=scenarios)


def encoded(item: Any) -> Json:
    """Lay a tree of inputs out as JSON.

    Raises
    ------
    TypeError
        Something in the tree is no input: a bug of ours.
    """
    if item is None or isinstance(item, str | bool):
        return item
    if isinstance(item, np.ndarray):
        return _array(item)
    if isinstance(item, int | float | np.generic):
        return _scalar(item)
    if isinstance(item, tuple | list):
        return [encoded(one) for one in item]
    if isinstance(item, Mapping):
        return {MARK: "map", "entries": {str(key): encoded(value) for key, value in item.items()}}
    if is_dataclass(item) and not isinstance(item, type):
        return {MARK: _name_of(type(item)), **dict(_told(item))}
    raise TypeError(f"no input: {type(item).__name__}")


def _scalar(item: float | np.generic) -> Json:
    value = item.item() if isinstance(item, np.generic) else item
    if isinstance(value, float) and not math.isfinite(value):
        return {MARK: "number", "text": str(value)}
    return value


def _array(item: np.ndarray[Any, Any]) -> Json:
    values = np.vectorize(_scalar, otypes=[object])(item).tolist() if item.dtype.kind == "f" else item.tolist()
    return {MARK: "array", "of": item.dtype.str, "shape": list(item.shape), "values": values}


def _name_of(kind: type[Any]) -> str:
    known = classes().get(kind.__name__) is kind
    return kind.__name__ if known else f"{kind.__module__}.{kind.__qualname__}"


def _told(item: Any) -> Iterator[tuple[str, Json]]:
    for field in fields(item):
        value = encoded(getattr(item, field.name))
        if not (_is_bare(value) and _default(field) == value):
            yield field.name, value


def _is_bare(value: Json) -> bool:
    if isinstance(value, dict):
        return set(value) == {MARK} or (value[MARK] == "map" and not value["entries"])
    return value is None or value in ("", [])


def _default(field: Field[Any]) -> Json:
    if field.default is not MISSING:
        return encoded(field.default)
    return encoded(field.default_factory()) if field.default_factory is not MISSING else MISSING


def decoded(tree: Json) -> Any:
    """Rebuild what :func:`encoded` laid out.

    Raises
    ------
    UnknownInputsError
        The tree holds what this version does not know, or lacks what it must have.
    """
    if isinstance(tree, list):
        return tuple(decoded(one) for one in tree)
    if not isinstance(tree, dict):
        return tree
    try:
        return _object(tree)
    except (KeyError, TypeError, ValueError, AttributeError, OverflowError) as error:
        if isinstance(error, UnknownInputsError):
            raise
        raise UnknownInputsError(f"its inputs are not as a record has them: {error}") from None


def _object(tree: dict[str, Json]) -> Any:
    mark = tree[MARK]
    if mark == "map":
        return {key: decoded(value) for key, value in tree["entries"].items()}
    if mark == "number":
        return float(tree["text"])
    if mark == "array":
        return _rebuilt_array(tree)
    if mark not in classes():
        raise UnknownInputsError(f"its inputs hold {str(mark)[:40]!r}, which this version does not know")
    return _instance(classes()[mark], {name: value for name, value in tree.items() if name != MARK})


def _rebuilt_array(tree: dict[str, Json]) -> Any:
    dtype = np.dtype(tree["of"])
    if dtype.kind not in "fiubU":
        raise UnknownInputsError(f"its inputs hold an array of {dtype.name}")
    return np.array(_plain(tree["values"]), dtype=dtype).reshape(tree["shape"])


def _plain(values: Json) -> Any:
    return [_plain(one) for one in values] if isinstance(values, list) else decoded(values)


def _instance(kind: type[Any], told: dict[str, Json]) -> Any:
    known = {field.name: field for field in fields(kind)}
    unknown = sorted(told.keys() - known.keys())
    if unknown:
        raise UnknownInputsError(f"its {kind.__name__} has {', '.join(unknown)[:60]}, which this version does not know")
    lacking = [name for name, field in known.items() if name not in told and _default(field) is MISSING]
    if lacking:
        raise UnknownInputsError(f"its {kind.__name__} lacks {', '.join(lacking)}, which this version must have")
    values = {name: decoded(value) for name, value in told.items()}
    wrong = [name for name, value in values.items() if not fits(value, kinds_of(kind.__name__)[name])]
    if wrong:
        raise UnknownInputsError(f"its {kind.__name__} has a {', '.join(wrong)} of another kind than this version's")
    return kind(**values)


def folded(tree: Json, seen: list[Json] | None = None) -> Json:
    """Give a laid-out tree with every sheet of readings said once: scenarios share them with their case."""
    seen = [] if seen is None else seen
    if isinstance(tree, list):
        return [folded(one, seen) for one in tree]
    if not isinstance(tree, dict):
        return tree
    if tree.get(MARK) == "FitResult":
        if tree in seen:
            return {MARK: "sheet", "number": seen.index(tree)}
        seen.append(tree)
        return tree
    return {key: folded(value, seen) for key, value in tree.items()}


def unfolded(tree: Json, seen: list[Json] | None = None) -> Json:
    """Undo :func:`folded`.

    Raises
    ------
    UnknownInputsError
        A sheet is spoken of that the tree does not hold.
    """
    seen = [] if seen is None else seen
    if isinstance(tree, list):
        return [unfolded(one, seen) for one in tree]
    if not isinstance(tree, dict):
        return tree
    if tree.get(MARK) == "FitResult":
        seen.append(tree)
    elif tree.get(MARK) == "sheet":
        if tree.get("number") not in range(len(seen)):
            raise UnknownInputsError("its inputs speak of a sheet of readings that they do not hold")
        return seen[tree["number"]]
    return {key: unfolded(value, seen) for key, value in tree.items()}


def canonical(tree: Json) -> Json:
    """Give a laid-out tree with its numbers to :data:`DIGITS` digits, the same for the same inputs."""
    if isinstance(tree, dict):
        return {key: canonical(value) for key, value in tree.items()}
    if isinstance(tree, list):
        return [canonical(value) for value in tree]
    if isinstance(tree, int | float) and not isinstance(tree, bool):
        return f"{float(tree) + 0.0:.{DIGITS - 1}e}" if abs(tree) < 1e300 else str(tree)
    return tree


def digest(tree: Json) -> str:
    """SHA-256 of a laid-out case: comments, order of keys and spelling of units do not change it.

    The name of the file is no input, and is left out.
    """
    text = json.dumps(canonical(folded(_nameless(tree))), sort_keys=True, separators=(",", ":"), ensure_ascii=True)
    return hashlib.sha256(text.encode()).hexdigest()


def _nameless(tree: Json) -> Json:
    entries = tree.get("scenarios", {}).get("entries", {})
    kept = {key: value for key, value in tree.items() if key != "file"}
    if entries:
        kept["scenarios"] = {key: _nameless(value) for key, value in entries.items()}
    return kept


def differences(before: Json, after: Json, path: str = "") -> Iterator[str]:
    """Name the places where two laid-out trees differ, by path; lists of named things by their names."""
    if before == after:
        return
    old, new = _entries(before), _entries(after)
    if old is None or new is None:
        if canonical(before) != canonical(after):
            yield path
        return
    for name in dict.fromkeys((*old, *new)):
        step = f"{path}[{name[1:]}]" if name.startswith("[") else f"{path}.{name}" if path else name
        yield from differences(old.get(name), new.get(name), step)


def _entries(tree: Json) -> dict[str, Json] | None:
    """What a node holds, by name; None for a leaf."""
    if isinstance(tree, dict):
        inner = tree.get("entries") if tree.get(MARK) == "map" else tree
        if tree.get(MARK) in ("array", "number") or not isinstance(inner, dict):
            return None
        return {key: value for key, value in inner.items() if key != MARK}
    if not isinstance(tree, list) or not tree:
        return None
    for label in ("name", "path"):
        if all(isinstance(one, dict) and label in one for one in tree):
            return {f"[{one[label]}": one for one in tree}
    return None
