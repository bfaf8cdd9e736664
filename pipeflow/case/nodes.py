"""YAML text to a tree whose every part knows its line and column.

The scalars are kept as written: what a scalar means is decided where it is used, so that no reading rule
of YAML can change a number or a name in silence.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import Any

import yaml

from pipeflow.units import echo, number_advice

MAX_DEPTH = 12
NAME_KEYS = ("pipe", "equipment", "pump", "name")
_CORE_TAG = "tag:yaml.org,2002:"
_DIGITS = re.compile(r"[+-]?[0-9]*(,[0-9]+)*")
_REST = re.compile(r"[0-9][^_]*", re.DOTALL)
_NULLS = ("", "~", "null", "Null", "NULL")
_LOADER: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


@dataclass(frozen=True)
class Finding:
    """One thing wrong: where (line and column from 1, key path) and what to tell the user.

    ``is_lack`` tells that something is not there, which may follow from another finding.
    """

    line: int | None
    column: int | None
    key_path: str
    message: str
    is_lack: bool = False


class UnreadableError(Exception):
    """The text is no tree at all; carries the one finding."""

    def __init__(self, finding: Finding) -> None:
        super().__init__(finding.message)
        self.finding = finding


@dataclass(frozen=True, eq=False)
class Scalar:
    """A single value as written; ``plain`` if without quotes, ``faulty`` if a finding already covers it."""

    text: str
    line: int
    column: int
    plain: bool = True
    faulty: bool = False

    @property
    def is_null(self) -> bool:
        """Whether the file gives no value here."""
        return self.plain and self.text in _NULLS


@dataclass(eq=False)
class Mapping:
    """Keys and values in file order; ``keys`` holds the place of each key."""

    line: int
    column: int
    keys: dict[str, Scalar] = field(default_factory=dict)
    values: dict[str, Node] = field(default_factory=dict)
    faulty: bool = False


@dataclass(frozen=True, eq=False)
class Sequence:
    """Items in file order."""

    line: int
    column: int
    items: list[Node] = field(default_factory=list)
    faulty: bool = False

    @cached_property
    def names(self) -> list[str]:
        """The name each item carries, empty if it carries none; to be asked for once the list is complete."""
        return [name_of(item) for item in self.items]

    def with_item(self, place: int, item: Node | None) -> Sequence:
        """Give the list with one item changed, or left out."""
        new = [] if item is None else [item]
        changed = Sequence(self.line, self.column, self.items.copy(), self.faulty)
        changed.items[place : place + 1] = new
        # a scenario may change a long list often, one item at a time: its names are carried over
        names = vars(changed)["names"] = self.names.copy()
        names[place : place + 1] = map(name_of, new)
        return changed


Node = Scalar | Mapping | Sequence


@dataclass
class _Open:
    """A collection whose end has not come yet, and the key a mapping waits with."""

    node: Mapping | Sequence
    key: Node | None = None


def read_tree(text: str) -> tuple[Node, list[Finding]]:
    """Read one YAML document.

    Parameters
    ----------
    text : str
        The whole file.

    Returns
    -------
    tuple
        The tree, and what is wrong with its notation (duplicate keys, anchors, tags and the like).

    Raises
    ------
    UnreadableError
        The text is no YAML, holds no document or several, or is nested beyond :data:`MAX_DEPTH`.
    """
    builder = _Builder()
    try:
        for event in yaml.parse(text, Loader=_LOADER):
            builder.take(event)
    except yaml.YAMLError as error:
        raise UnreadableError(_syntax(error, text)) from None
    if builder.root is None or (isinstance(builder.root, Scalar) and builder.root.is_null):
        raise UnreadableError(Finding(None, None, "", "the file is empty; a case is needed"))
    return builder.root, builder.findings


class _Builder:
    """Builds the tree from the parser's events with a stack of its own: depth costs no recursion."""

    def __init__(self) -> None:
        self.root: Node | None = None
        self.findings: list[Finding] = []
        self._open: list[_Open] = []

    def take(self, event: yaml.Event) -> None:
        """Add what one event of the parser says."""
        match event:
            case yaml.ScalarEvent():
                self._add(self._scalar(event))
            case yaml.MappingStartEvent():
                self._enter(Mapping(*_place(event), faulty=self._forbidden(event)))
            case yaml.SequenceStartEvent():
                self._enter(Sequence(*_place(event), faulty=self._forbidden(event)))
            case yaml.CollectionEndEvent():
                self._add(self._open.pop().node)
            case yaml.AliasEvent():
                self._note(event, f"found the alias '*{event.anchor}'; write the value out")
                self._add(Scalar("", *_place(event), faulty=True))
            case yaml.DocumentStartEvent() if self.root is not None:
                message = "a second document starts; a file holds one case"
                raise UnreadableError(Finding(*_place(event), "", message))

    def _scalar(self, event: yaml.ScalarEvent) -> Scalar:
        faulty = self._forbidden(event)
        return Scalar(event.value, *_place(event), plain=not event.style, faulty=faulty)

    def _forbidden(self, event: Any) -> bool:
        if event.anchor is not None:
            self._note(event, f"found the anchor {echo('&' + event.anchor)}; anchors are not accepted")
        if event.tag is not None:
            self._note(event, f"found the tag {echo(event.tag.replace(_CORE_TAG, '!!'))}; tags are not accepted")
        return event.anchor is not None or event.tag is not None

    def _note(self, event: yaml.Event, message: str) -> None:
        self.findings.append(Finding(*_place(event), self._path(), message))

    def _path(self) -> str:
        """Name the place the stack stands at."""
        path = ""
        for depth, level in enumerate(self._open, 1):
            if isinstance(level.node, Sequence):
                below = self._open[depth].node if depth < len(self._open) else None
                path += f"[{label(below, len(level.node.items) + 1)}]"
            elif isinstance(level.key, Scalar):
                path = join(path, level.key.text)
        return path

    def _enter(self, node: Mapping | Sequence) -> None:
        if len(self._open) >= MAX_DEPTH:
            message = f"nested more than {MAX_DEPTH} deep; a case needs no such depth"
            raise UnreadableError(Finding(node.line, node.column, "", message))
        self._open.append(_Open(node))

    def _add(self, node: Node) -> None:
        if not self._open:
            self.root = node
            return
        parent = self._open[-1]
        if isinstance(parent.node, Sequence):
            parent.node.items.append(node)
        elif parent.key is None:
            parent.key = node
        else:
            self._add_entry(parent.node, parent.key, node)
            parent.key = None

    def _add_entry(self, mapping: Mapping, key: Node, value: Node) -> None:
        if isinstance(key, Scalar) and key.faulty:
            mapping.faulty = True
            return
        if isinstance(key, Scalar) and self._is_rest_of_number(mapping, key, value):
            return
        fault = _fault_of_key(mapping, key)
        if fault is not None or not isinstance(key, Scalar):
            mapping.faulty |= isinstance(key, Scalar) and key.text == "<<"
            self.findings.append(Finding(key.line, key.column, self._path(), fault or ""))
            return
        mapping.keys[key.text] = key
        mapping.values[key.text] = value

    def _is_rest_of_number(self, mapping: Mapping, key: Scalar, value: Node) -> bool:
        """Find a number with a comma in it, which in a ``{...}`` ends the value: what follows stands as a key."""
        last, before = next(reversed(mapping.values.items()), ("", None))
        if not (isinstance(before, Scalar) and isinstance(value, Scalar) and _touches(before, key)):
            return False
        if last in NAME_KEYS or not (value.is_null and _REST.fullmatch(key.text) and _DIGITS.fullmatch(before.text)):
            return False
        if "," in before.text:
            self.findings.pop()
        self._open[-1].key = mapping.keys[last]
        whole = replace(before, text=f"{before.text},{key.text}", faulty=True)
        mapping.values[last] = whole
        message = f"found {echo(whole.text)}; {number_advice(whole.text)}"
        self.findings.append(Finding(whole.line, whole.column, self._path(), message))
        return True


def _touches(before: Scalar, key: Scalar) -> bool:
    """Whether nothing but a comma can stand between a value and the key after it."""
    both_plain = before.plain and key.plain
    return both_plain and (before.line, before.column + len(before.text) + 1) == (key.line, key.column)


def _fault_of_key(mapping: Mapping, key: Node) -> str | None:
    if not isinstance(key, Scalar):
        return f"a {kind(key)} stands where a key is needed"
    if key.is_null:
        return "a key is missing before the colon"
    if key.plain and key.text == "<<":
        return "merge keys are not accepted; write the keys out"
    if key.text in mapping.keys:
        return f"duplicate key, first given at line {mapping.keys[key.text].line}"
    return None


def kind(node: Node) -> str:
    """Name the shape of a node for a message."""
    return {Scalar: "single value", Mapping: "map", Sequence: "list"}[type(node)]


def name_of(item: Node | None) -> str:
    """Give the name an item of a list carries, empty if it carries none."""
    if isinstance(item, Mapping):
        for key in NAME_KEYS:
            name = item.values.get(key)
            if isinstance(name, Scalar) and not name.is_null and not name.faulty:
                return name.text.strip()
    return ""


def label(item: Node | None, number: int) -> str:
    """Name an item of a list in a key path: by its name, or by its number from 1."""
    return shown(name_of(item)) or str(number)


def join(path: str, key: str) -> str:
    """Add a key to a key path."""
    return f"{path}.{shown(key)}" if path else shown(key)


def shown(key: str) -> str:
    """Make a key of the file fit for a message."""
    return echo(key)[1:-1]


def _place(event: Any) -> tuple[int, int]:
    return event.start_mark.line + 1, event.start_mark.column + 1


def _syntax(error: yaml.YAMLError, text: str) -> Finding:
    """Say where the text stops being YAML, and why in words of ours where the cause is a common one."""
    if not isinstance(error, yaml.MarkedYAMLError):
        return _odd_character(text)
    mark = error.problem_mark
    problem = str(error.problem)
    line, column = (mark.line, mark.column) if mark else (0, 0)
    if "nesting depth" in problem:
        message = f"nested more than {MAX_DEPTH} deep; a case needs no such depth"
    else:
        message = f"not readable as YAML: {_advice(problem, text, line, column)}"
    return Finding(line + 1, column + 1, "", message)


def _advice(problem: str, text: str, line: int, column: int) -> str:
    here = "".join(text.split("\n")[line : line + 1])[column : column + 1]
    if "cannot start any token" in problem and here == "\t":
        return "a tab; indent with spaces"
    if "cannot start any token" in problem and here:
        return f"a value cannot start with {echo(here)}; put it in quotes"
    if "mapping values are not allowed" in problem:
        return "a second ': ' on the line or a wrong indent; put text with ': ' in quotes"
    if "',' or" in problem:
        return "a bracket is not closed, or text with a bracket or comma in it needs quotes"
    return problem


def _odd_character(text: str) -> Finding:
    """Place the character the parser refused; it counts bytes or characters depending on its build."""
    for number, line in enumerate(text.split("\n"), 1):
        for column, char in enumerate(line, 1):
            if not (char.isprintable() or char in "\t\r\x85\xa0\u2028\u2029\ufeff") and not char.isspace():
                return Finding(number, column, "", f"found the control character {echo(char)}")
    return Finding(1, 1, "", "found a control character")
