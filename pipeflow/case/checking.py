"""A tree of a case file held against the schema."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from pydantic import ValidationError

from pipeflow.case.nodes import Finding, Mapping, Node, Sequence
from pipeflow.case.schema import CasePart


def examine(tree: Node, folder: Path = Path()) -> tuple[CasePart | None, list[Finding]]:
    """Give what the tree says, or everything wrong with it in file order; paths in it start from ``folder``."""
    try:
        return CasePart.model_validate(_plain(tree), context=_context(folder)), []
    except ValidationError as error:
        from pipeflow.case.wording import findings

        return None, findings(tree, error.errors(include_url=False, include_input=False))


def _context(folder: Path) -> dict[str, Any]:
    """What validators share: names taken, the fluid once it is known, and where paths start from."""
    return {"element": set(), "pump": set(), "fluid": None, "folder": folder}


def _plain(node: Node) -> Any:
    """Turn maps and lists into those of the language; the single values stay as written."""
    if isinstance(node, Mapping):
        return {key: _plain(value) for key, value in node.values.items()}
    if isinstance(node, Sequence):
        return [_plain(item) for item in node.items]
    return node
