"""From what the schema refuses to findings: the place in the file, the key path and the words."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any

from pydantic_core import ErrorDetails

from pipeflow.case.nodes import Finding, Mapping, Node, Scalar, Sequence, join, kind, label
from pipeflow.case.places import EXAMPLES, PARTS_AT, REASONS, at_place
from pipeflow.case.rheology_part import BESIDE_PARAMETERS, RHEOLOGY_PARTS
from pipeflow.case.route_part import ELEMENT_KEYS
from pipeflow.units import ECHO_LENGTH, echo

MAX_SUGGESTIONS = 100
_LISTED = 12
_PARTS_OF_A_PARAMETER = len(("fluid", "rheology", "<model>", "key"))
_PARAMETERS = frozenset(key for part in RHEOLOGY_PARTS.values() for key in part.model_fields)


@dataclass(eq=False)
class Fault:
    """One error of the schema, walked down to its place in the tree.

    ``node`` is None where the file gives nothing; ``home`` is the map or list around it and ``home_place``
    where that is named; ``parts`` is the place without the numbers of list items, a key of ``PARTS_AT``.
    """

    kind: str
    details: dict[str, Any]
    node: Node | None
    place: Node
    home: Node
    home_place: Node
    key: str = ""
    key_path: str = ""
    home_path: str = ""
    parts: tuple[str, ...] = ()
    faulty: bool = False
    suggestion: str = ""
    lacking: tuple[str, ...] = ()

    def step(self, part: str | int) -> None:
        """Walk one step of the error's location down."""
        if isinstance(part, str) and part.startswith("<") and part not in _keys(self.node):
            self.parts += (part,)
        elif part != "[key]":
            self.home, self.home_place, self.home_path = self.node or self.home, self.place, self.key_path
            self._item(part) if isinstance(part, int) else self._entry(part)
            self.faulty |= self.node is not None and self.node.faulty
        else:
            self.node = self.place

    def _item(self, number: int) -> None:
        if isinstance(self.node, Sequence):
            self.node = self.place = self.node.items[number]
            self.key_path += f"[{label(self.node, number + 1)}]"

    def _entry(self, key: str) -> None:
        mapping = self.node
        self.key, self.key_path, self.node = key, join(self.key_path, key), None
        self.parts += (key,)
        if isinstance(mapping, Mapping) and key in mapping.values:
            self.node, self.place = mapping.values[key], mapping.keys[key]

    @property
    def keys_missing(self) -> tuple[str, ...]:
        """The keys one of which would have prevented the error."""
        own = (self.key,) if self.kind == "missing" else ()
        return (*own, *self.details.get("keys", ()))


def findings(tree: Node, errors: list[ErrorDetails]) -> list[Finding]:
    """Word the errors of a validation, in file order, one finding a mistake."""
    faults = [fault for fault in (_walk(tree, error) for error in errors) if not fault.faulty]
    _suggest(faults)
    grouped = _without_consequences(_foreign_parameters(faults))
    return sorted((_finding(fault) for fault in grouped), key=_in_file_order)


def _in_file_order(finding: Finding) -> tuple[int, int]:
    return finding.line or 0, finding.column or 0


def _walk(tree: Node, error: ErrorDetails) -> Fault:
    fault = Fault(error["type"], dict(error.get("ctx", {})), tree, tree, tree, tree, faulty=tree.faulty)
    for part in (*error["loc"], *fault.details.get("below", ())):
        fault.step(part)
    return fault


def _keys(node: Node | None) -> dict[str, Scalar]:
    return node.keys if isinstance(node, Mapping) else {}


def _accepted(parts: tuple[str, ...]) -> tuple[str, ...]:
    part = PARTS_AT.get(parts)
    return tuple(sorted(part.model_fields, key=lambda key: key == "status")) if part else ()


def _suggest(faults: list[Fault]) -> None:
    """Find the name meant, for so many faults that a file of nothing but slips is still answered at once."""
    asked = [fault for fault in faults if fault.kind in ("extra_forbidden", "choice", "union_tag_not_found")]
    answers: dict[tuple[str, tuple[str, ...]], str] = {}
    for fault in asked:
        question = _question(fault)
        if question not in answers and len(answers) < MAX_SUGGESTIONS:
            answers[question] = _nearest(*question)
        fault.suggestion = answers.get(question, "")


def _question(fault: Fault) -> tuple[str, tuple[str, ...]]:
    if fault.kind == "choice":
        return fault.details["found"], tuple(fault.details["options"])
    if fault.kind == "union_tag_not_found":
        return next(iter(_keys(fault.node)), ""), ELEMENT_KEYS
    return fault.key, _accepted(fault.parts[:-1])


def _nearest(word: str, options: tuple[str, ...]) -> str:
    by_case = {option.casefold().replace("_", "-").replace(" ", "-"): option for option in options}
    plain = word[:ECHO_LENGTH].casefold().replace("_", "-").replace(" ", "-")
    near = get_close_matches(plain, list(by_case), n=3, cutoff=0.6)
    return by_case[next((one for one in near if _abbreviates(plain, one)), near[0])] if near else ""


def _abbreviates(short: str, long: str) -> bool:
    """Whether each part of a name begins the words of another: ``elbow-90-lr`` those of ``elbow-90-long-radius``."""
    parts, words = short.split("-"), long.split("-")
    last = parts[-1]
    rest = words[len(parts) - 1 :]
    return words[: len(parts) - 1] == parts[:-1] and last == "".join(word[0] for word in rest)


def _foreign_parameters(faults: list[Fault]) -> list[Fault]:
    """Make one fault of the parameters of another model than the one named."""
    first: dict[int, Fault] = {}
    kept = []
    for fault in faults:
        if not _is_foreign(fault):
            kept.append(fault)
        elif id(fault.home) in first:
            first[id(fault.home)].details["foreign"].append(fault.key)
        else:
            fault.kind, fault.details = "foreign", {"foreign": [fault.key]}
            first[id(fault.home)] = fault
            kept.append(fault)
    return [fault for fault in kept if not (fault.kind == "missing" and id(fault.home) in first)]


def _is_foreign(fault: Fault) -> bool:
    in_model = fault.parts[:2] == ("fluid", "rheology") and len(fault.parts) == _PARTS_OF_A_PARAMETER
    return in_model and fault.kind == "extra_forbidden" and fault.key in _PARAMETERS


def _without_consequences(faults: list[Fault]) -> list[Fault]:
    """Leave out what is missing only because its key is misspelt, or stands there under another name."""
    unknown = [fault for fault in faults if fault.kind == "extra_forbidden"]
    meant = {(id(fault.home), fault.suggestion) for fault in unknown}
    left = [fault for fault in faults if not any((id(fault.home), key) in meant for key in fault.keys_missing)]
    strange, lacks = _only_one(unknown), _only_one([fault for fault in left if fault.keys_missing])
    for home, fault in strange.items():
        if home in lacks and not fault.suggestion:
            lack = lacks[home]
            fault.lacking = (lack.key,) if lack.kind == "missing" else lack.keys_missing
            left.remove(lacks[home])
    return left


def _only_one(faults: list[Fault]) -> dict[int, Fault]:
    """Give, by map, the fault that is the only one of its map."""
    counts = Counter(id(fault.home) for fault in faults)
    return {id(fault.home): fault for fault in faults if counts[id(fault.home)] == 1}


def _finding(fault: Fault) -> Finding:
    place, path = fault.node or fault.home_place, fault.key_path
    if fault.kind in ("extra_forbidden", "foreign"):
        place = fault.place
    elif fault.kind == "needs" and fault.node is None:
        path = fault.home_path
    return Finding(place.line, place.column, path, _words(fault), is_lack=fault.node is None)


def _words(fault: Fault) -> str:
    words = _WORDS.get(fault.kind)
    return words(fault) if words else str(fault.details.get("message", fault.kind))


def _found(fault: Fault) -> str:
    node = fault.node
    if isinstance(node, Scalar):
        return "no value" if node.is_null else f"found {echo(node.text)}"
    return f"found a {kind(node)}" if node else "missing"


def _missing(fault: Fault) -> str:
    keys = [name for name, field in _fields(fault.parts) if field.is_required()]
    if keys:
        return f"missing; a map is needed with {', '.join(keys)}"
    example = at_place(EXAMPLES, fault.parts)
    return f"missing; for instance {fault.key}: {example}" if example else "missing"


def _fields(parts: tuple[str, ...]) -> list[tuple[str, Any]]:
    part = PARTS_AT.get(parts)
    return list(part.model_fields.items()) if part else []


def _unknown_key(fault: Fault) -> str:
    accepted = ", ".join(_accepted(fault.parts[:-1]))
    lacking = f"{' or '.join(fault.lacking)} is missing; " if fault.lacking else ""
    return f"unknown key; {_did_you_mean(fault)}{lacking}accepted: {accepted}"


def _did_you_mean(fault: Fault) -> str:
    return f"did you mean {fault.suggestion}? " if fault.suggestion else ""


def _foreign(fault: Fault) -> str:
    foreign = ", ".join(fault.details["foreign"])
    model = fault.parts[-2].strip("<>")
    if model not in RHEOLOGY_PARTS:
        return f"{foreign} comes from the readings of 'flow_curve'; leave out one of the two"
    given = set(_keys(fault.home)) & (_PARAMETERS - BESIDE_PARAMETERS)
    fitting = [name for name, part in RHEOLOGY_PARTS.items() if given == set(_own_parameters(part))]
    meant = f"did you mean model: {fitting[0]}? " if fitting else ""
    takes = ", ".join(_own_parameters(RHEOLOGY_PARTS[model]))
    return f"{model} takes {takes}, not {foreign}; {meant}".rstrip(" ;")


def _own_parameters(part: Any) -> list[str]:
    return [key for key in part.model_fields if key not in BESIDE_PARAMETERS]


def _choice(fault: Fault) -> str:
    details = fault.details
    options = details["options"]
    found = f"found {echo(details['found'])}; unknown {details['what']}; {_did_you_mean(fault)}"
    if len(options) <= _LISTED:
        return f"{found}accepted: {', '.join(options)}"
    return f"{found}accepted: those listed in docs/case-file.md"


def _map_needed(fault: Fault) -> str:
    keys = _accepted(fault.parts)
    inside = f"a map is needed with {', '.join(keys)}" if keys else "a map is needed"
    return f"{_found(fault)}; {inside}"


def _element(fault: Fault) -> str:
    needed = "an element starts with 'pipe: its name', 'equipment: its name' or 'pump: its name'"
    first = next(iter(_keys(fault.node)), None)
    found = f"found the key {echo(first)}" if first else _found(fault)
    return f"{found}; {_did_you_mean(fault)}{needed}"


def _too_much(fault: Fault) -> str:
    reason = at_place(REASONS, fault.parts)
    bound = f"below {fault.details['lt']:g}" if "lt" in fault.details else f"{fault.details['le']:g} or less"
    return f"{_found(fault)}; must be {bound}{f' ({reason})' if reason else ''}"


_WORDS: dict[str, Callable[[Fault], str]] = {
    "missing": _missing,
    "at_odds": lambda fault: f"{_found(fault)}; {fault.details['message']}",
    "extra_forbidden": _unknown_key,
    "foreign": _foreign,
    "choice": _choice,
    "union_tag_not_found": _element,
    "model_type": _map_needed,
    "dict_type": lambda fault: f"{_found(fault)}; a map of numbers is needed, as {{elbow_90: 2}}",
    "list_type": lambda fault: f"{_found(fault)}; a list is needed, each item after a '- '",
    "too_short": lambda fault: "the list is empty; at least one element is needed",
    "too_long": lambda fault: f"more than {fault.details['max_length']} items; a case needs no more",
    "greater_than": lambda fault: f"{_found(fault)}; must be above {fault.details['gt']:g}",
    "greater_than_equal": lambda fault: f"{_found(fault)}; must be {fault.details['ge']:g} or more",
    "less_than_equal": _too_much,
    "less_than": _too_much,
}
