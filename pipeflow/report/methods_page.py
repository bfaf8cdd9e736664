"""The list of methods in a terminal, from their records."""

from __future__ import annotations

from collections.abc import Iterator

from pipeflow.report.text import paragraph, underlined
from pipeflow.study.methods import Choice, Section, method_sections


def methods_page() -> str:
    """Every method of the program, by kind, with the key of the case that chooses it."""
    return "\n".join(line for section in method_sections() for line in _section(section))


def _section(section: Section) -> Iterator[str]:
    yield underlined(section.title + (f": {section.case_key}" if section.case_key else ""))
    for choice in section.choices:
        yield choice.source.key
        yield from _choice(choice)
        yield ""


def _choice(choice: Choice) -> Iterator[str]:
    source = choice.source
    yield paragraph(source.title, mark="    ")
    for label, text in (
        ("source", source.citation),
        ("for", choice.fluids + (", and in the upper figure" if choice.in_family else "")),
        ("range", " and ".join(str(bound) for bound in source.ranges) or "none stated"),
        ("sure", source.confidence),
        ("note", source.note),
    ):
        if text:
            yield paragraph(text, mark=f"    {label:<8}")
