"""Scenarios: the case again with some of its nodes changed by key path."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from difflib import get_close_matches
from pathlib import Path

from pydantic_core import PydanticCustomError

from pipeflow.case.checking import examine
from pipeflow.case.fields import read_name
from pipeflow.case.nodes import Finding, Mapping, Node, Scalar, Sequence, join, kind, shown
from pipeflow.case.schema import MAX_SCENARIOS, CasePart
from pipeflow.units import echo

MAX_CHANGES = 200
MAX_PATH = 300
MAX_KNOWN = 200
"""Faults of the case itself beyond which the scenarios wait until those are mended."""

_LIST_STEP = re.compile(r"(route|pumps)\[")


@dataclass(frozen=True)
class _Change:
    """One line of a scenario: the path, the place of the path, and the new value."""

    path: str
    key: Scalar
    value: Node


class _PathError(Exception):
    """A path that leads nowhere; the message says where it stops."""


class _UnsureError(Exception):
    """A path that may be right once the case itself is; the case has its own fault there."""


def read_scenarios(
    tree: Node, known: list[Finding], folder: Path = Path()
) -> tuple[dict[str, CasePart], list[Finding]]:
    """Read the case once for each scenario.

    Parameters
    ----------
    tree : Node
        The whole case.
    known : list of Finding
        What is wrong with the case itself and is not to be said again.
    folder : Path
        Where the case file lies.

    Returns
    -------
    tuple
        What each scenario makes of the case, by name, and what is wrong with the scenarios.
    """
    node = tree.values.get("scenarios") if isinstance(tree, Mapping) else None
    if node is None or node.faulty:
        return {}, []
    if not isinstance(node, Mapping):
        return {}, [Finding(node.line, node.column, "scenarios", _map_needed(node, "named sets of changes"))]
    if len(node.values) > MAX_SCENARIOS:
        message = f"{len(node.values)} scenarios; at most {MAX_SCENARIOS} are accepted"
        return {}, [Finding(node.line, node.column, "scenarios", message)]
    if len(known) > MAX_KNOWN:
        return {}, []
    parts, found = {}, []
    for name in node.values:
        part, wrong = _read_one(tree, node, name, set(known), folder)
        found += wrong
        if part is not None:
            parts[name] = part
    return parts, found


def _map_needed(node: Node, what: str) -> str:
    found = "no value" if isinstance(node, Scalar) and node.is_null else f"found a {kind(node)}"
    return f"{found}; a map of {what} is needed"


def _read_one(
    tree: Node, scenarios: Mapping, name: str, known: set[Finding], folder: Path
) -> tuple[CasePart | None, list[Finding]]:
    node, home = scenarios.values[name], join("scenarios", name)
    if node.faulty:
        return None, []
    try:
        read_name(scenarios.keys[name])
    except PydanticCustomError as error:
        return None, [Finding(scenarios.keys[name].line, scenarios.keys[name].column, home, error.message())]
    if not isinstance(node, Mapping):
        return None, [Finding(node.line, node.column, home, _map_needed(node, "changes by key path"))]
    if len(node.values) > MAX_CHANGES:
        message = f"{len(node.values)} changes; at most {MAX_CHANGES} are accepted"
        return None, [Finding(node.line, node.column, home, message)]
    changes = [_Change(path, node.keys[path], value) for path, value in node.values.items()]
    changed, wrong = _all_made(tree, changes)
    part, faults = examine(changed, folder)
    caused = _caused([fault for fault in faults if fault not in known], changes, bool(known))
    found = [replace(fault, key_path=f"{home}.{fault.key_path}") for fault in [*wrong, *caused]]
    return part, found


def _all_made(tree: Node, changes: list[_Change]) -> tuple[Node, list[Finding]]:
    wrong = []
    redrawn = {change.path.removesuffix(".curve") for change in changes if change.path.endswith(".curve")}
    for change in changes:
        try:
            if change.path.removesuffix(".speed") not in redrawn:
                tree = _with_speed_of_curve(tree, change.path)
            tree = _made(tree, change)
        except _UnsureError:
            continue
        except _PathError as error:
            wrong.append(Finding(change.key.line, change.key.column, shown(change.path), str(error)))
    return tree, wrong


def _with_speed_of_curve(tree: Node, path: str) -> Node:
    """Keep the speed the case gives a pump as that of its curve, where a change gives it another to run at.

    Without this the curve would move with the speed, and the change do nothing.
    """
    if not (path.startswith("pumps[") and path.endswith("].speed")):
        return tree
    pumps, step, _ = _steps(tree, path)
    items = tree.values[pumps] if isinstance(tree, Mapping) else None
    assert isinstance(items, Sequence)
    pump = items.items[items.names.index(step[1:-1])]
    if not isinstance(pump, Mapping) or "curve_speed" in pump.values or "speed" not in pump.values:
        return tree
    kept = _Change(f"{path.removesuffix('speed')}curve_speed", pump.keys["speed"], pump.values["speed"])
    return _made(tree, kept)


def _made(tree: Node, change: _Change) -> Node:
    if isinstance(change.value, Scalar) and change.value.is_null and not change.value.text:
        raise _PathError("no value; give one, or null to leave an optional key out")
    changed = _set(tree, _steps(tree, change.path), change, "")
    if changed is None:
        raise _PathError("found nothing to change")
    return changed


def _steps(tree: Node, path: str) -> list[str]:
    """Split a key path; the name of an element is one step, whatever it holds."""
    if len(path) > MAX_PATH:
        raise _PathError("no key path is that long")
    if path.split(".")[0] in ("scenarios", "uncertainty"):
        raise _PathError(f"a scenario cannot change the {path.split('.')[0]}")
    match = _LIST_STEP.match(path)
    if match is None:
        return path.split(".")
    items, rest = match.group(1), path[match.end() :]
    names = _names(tree, items)
    near = [name for name in names if name and rest.startswith(name)]
    fitting = [name for name in near if rest == f"{name}]" or rest.startswith(f"{name}].")]
    if not fitting and ("" in names or (items == "route" and not names)):
        raise _UnsureError
    if not fitting:
        raise _PathError(_no_such_item(items, rest, names))
    name = max(fitting, key=len)
    inner = rest[len(name) + 2 :]
    return [items, f"[{name}]", *(inner.split(".") if inner else [])]


def _names(tree: Node, items: str) -> list[str]:
    node = tree.values.get(items) if isinstance(tree, Mapping) else None
    return node.names if isinstance(node, Sequence) else []


def _no_such_item(items: str, rest: str, names: list[str]) -> str:
    written = rest.partition("]")[0]
    near = get_close_matches(written[:100], names, n=1, cutoff=0.6)
    meant = f"; did you mean {items}[{shown(near[0])}]?" if near else ""
    return f"found no item {echo(written)} in {items}{meant}"


def _set(node: Node, steps: list[str], change: _Change, path: str) -> Node | None:
    """Give the node with the change made below it, or None where the change takes the node away."""
    if not steps:
        is_null = isinstance(change.value, Scalar) and change.value.is_null
        return None if is_null else change.value
    if isinstance(node, Mapping):
        return _set_key(node, steps, change, path)
    if isinstance(node, Sequence):
        return _set_item(node, steps, change, path)
    if node.faulty:
        raise _UnsureError
    raise _PathError(f"'{path}' is a single value in the case; give it as a whole")


def _set_key(node: Mapping, steps: list[str], change: _Change, path: str) -> Mapping:
    key, *rest = steps
    inner = node.values.get(key) or Mapping(change.key.line, change.key.column)
    value = _set(inner, rest, change, join(path, key))
    keys, values = dict(node.keys), dict(node.values)
    if value is None:
        if values.pop(key, None) is None:
            raise _PathError("the case gives no such key to leave out")
        keys.pop(key)
    else:
        values[key] = value
        keys[key] = node.keys.get(key, change.key) if rest else change.key
    return Mapping(node.line, node.column, keys, values, node.faulty)


def _set_item(node: Sequence, steps: list[str], change: _Change, path: str) -> Sequence:
    step, *rest = steps
    if not (step.startswith("[") and step.endswith("]") and step[1:-1] in node.names):
        raise _PathError(f"'{path}' is a list; write {path}[name of the item]")
    place = node.names.index(step[1:-1])
    return node.with_item(place, _set(node.items[place], rest, change, path + shown(step)))


def _caused(faults: list[Finding], changes: list[_Change], case_is_wrong: bool) -> list[Finding]:
    """Point faults to the scenario: one at its own places stays, any other moves to the nearest change.

    While the case itself is wrong, what a scenario lacks or upsets may be the case's doing, and waits.
    """
    own = {place for change in changes for place in [_place(change.key), *_places(change.value)]}
    if case_is_wrong:
        return [fault for fault in faults if (fault.line, fault.column) in own and not fault.is_lack]
    return [fault if (fault.line, fault.column) in own else _moved(fault, changes) for fault in faults]


def _moved(fault: Finding, changes: list[_Change]) -> Finding:
    nearest = max(changes, key=lambda change: _common_length(change.path, fault.key_path))
    return replace(fault, line=nearest.key.line, column=nearest.key.column)


def _common_length(one: str, other: str) -> int:
    pairs = zip(one, other, strict=False)
    return next((count for count, (a, b) in enumerate(pairs) if a != b), min(len(one), len(other)))


def _place(node: Node) -> tuple[int, int]:
    return node.line, node.column


def _places(node: Node) -> list[tuple[int, int]]:
    places = [_place(node)]
    if isinstance(node, Mapping):
        places += [_place(key) for key in node.keys.values()]
        places += [place for value in node.values.values() for place in _places(value)]
    elif isinstance(node, Sequence):
        places += [place for item in node.items for place in _places(item)]
    return places
