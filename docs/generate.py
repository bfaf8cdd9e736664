"""Write the generated documents: ``python docs/generate.py``, or ``--check`` to compare and change nothing."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from pathlib import Path

from pages import write_or_compare

from pipeflow.study.methods import Section, method_sections

PAGE = Path(__file__).parent / "methods.md"
CONFIDENCE = {
    "exact": "a derivation, checked by computation",
    "high": "standard textbook material, checked numerically; recalled from memory of the source",
    "medium": "recalled from memory of the source with less certainty: check the original before relying on it alone",
}


def methods_page() -> str:
    """Give the page of methods, from their records."""
    return "\n".join(_methods_lines()) + "\n"


def _methods_lines() -> Iterator[str]:
    yield "# Methods"
    yield ""
    yield "Written by `docs/generate.py` from the records in the program; `pipeflow methods` prints the same."
    yield ""
    yield "How sure the transcription is:"
    yield ""
    yield from (f"- **{key}**: {meaning}" for key, meaning in CONFIDENCE.items())
    for section in method_sections():
        yield from _section(section)


def _section(section: Section) -> Iterator[str]:
    chosen_by = f" (`{section.case_key}`)" if section.case_key else ""
    yield from ("", f"## {section.title}{chosen_by}", "", "| key | what | source | range | how sure | for, and notes |")
    yield "|---|---|---|---|---|---|"
    for choice in section.choices:
        source = choice.source
        ranges = "<br>".join(str(bound) for bound in source.ranges) or "none stated"
        use = f"for {choice.fluids}" + ("; in the upper figure" if choice.in_family else "")
        notes = "; ".join(part for part in (use, source.note) if part)
        yield f"| `{source.key}` | {source.title} | {source.citation} | {ranges} | {source.confidence} | {notes} |"


if __name__ == "__main__":
    sys.exit(write_or_compare(PAGE, methods_page()))
