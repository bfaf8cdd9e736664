"""A tree of a case file held against the schema."""

from __future__ import annotations

from typing import Any

from pydantic import ValidationError

from pipeflow.case.nodes import Finding, Mapping, Node, Sequence
from pipeflow.case.schema import CasePart
from pipeflow.case.wording import findings


def examine(tree: Node) -> tuple[CasePart | None, list[Finding]]:
    """Give what the tree says, or everything wrong with it in file order."""
    try:
        return CasePart.model_validate(_plain(tree), context={"element": set(), "pump": set(), "fluid": None}), []
    except ValidationError as error:
        return None, findings(tree, error.errors(include_url=False, include_input=False))


def _plain(node: Node) -> Any:
    """Turn maps and lists into those of the language; the single values stay as written."""
    if isinstance(node, Mapping):
        return {key: _plain(value) for key, value in node.values.items()}
    if isinstance(node, Sequence):
        return [_plain(item) for item in node.items]
    return node
