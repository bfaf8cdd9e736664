"""Checks named with where they were made, for a line of reasons."""

from __future__ import annotations

from collections.abc import Sequence

from pipeflow.study.design_file import Judged


def judged_texts(judged: Sequence[Judged], conditions: Sequence[str]) -> tuple[str, ...]:
    """``head loss``, ``npsh of candidate B (thick)``: each once, with its conditions if they are not all of the line's.

    ``conditions`` names the case and its scenarios.
    """
    found: dict[str, list[str]] = {}
    for one in judged:
        name = one.check.name.replace("_", " ") + (f" of {one.pump}" if one.pump else "")
        where = found.setdefault(name, [])
        if one.condition not in where:
            where.append(one.condition)
    everywhere = list(conditions)
    return tuple(
        name if where[: len(everywhere)] == everywhere else f"{name} ({', '.join(where)})"
        for name, where in found.items()
    )
