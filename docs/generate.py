"""Write the generated documents: ``python docs/generate.py``, or ``--check`` to compare and change nothing."""

from __future__ import annotations

import sys
from collections.abc import Iterable, Iterator
from pathlib import Path

from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.laminar import BUCKINGHAM_REINER, HAGEN_POISEUILLE, METZNER_REED, RABINOWITSCH_MOONEY
from pipeflow.friction.methods import FAMILY, TURBULENT
from pipeflow.friction.transition import TRANSITION_LINE
from pipeflow.line.fittings import METHODS as FITTINGS
from pipeflow.sources import Source

DOCS = Path(__file__).parent
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
    yield from _section(
        "Laminar flow", ((s, "") for s in (RABINOWITSCH_MOONEY, BUCKINGHAM_REINER, HAGEN_POISEUILLE, METZNER_REED))
    )
    family = {method.source.key for method in FAMILY}
    yield from _section(
        "Turbulent flow (`methods: {turbulent: KEY}`)",
        (
            (m.source, f"for {', '.join(sorted(m.models))}" + ("; in the upper figure" if key in family else ""))
            for key, m in TURBULENT.items()
        ),
    )
    yield from _section(
        "End of laminar flow (`methods: {critical: KEY}`)",
        ((c.source, f"for {', '.join(sorted(c.models))}") for c in CRITERIA.values()),
    )
    yield from _section("Transition", [(TRANSITION_LINE, "")])
    yield from _section("Fittings (`methods: {fittings: KEY}`)", ((s, "") for s in FITTINGS.values()))


def _section(title: str, sources: Iterable[tuple[Source, str]]) -> Iterator[str]:
    yield from (
        "",
        f"## {title}",
        "",
        "| key | what | source | range | how sure | for, and notes |",
        "|---|---|---|---|---|---|",
    )
    for source, use in sources:
        ranges = "<br>".join(str(bound) for bound in source.ranges)
        notes = "; ".join(part for part in (use, source.note) if part)
        yield f"| `{source.key}` | {source.title} | {source.citation} | {ranges} | {source.confidence} | {notes} |"


PAGES = {"methods.md": methods_page}


def main() -> int:
    """Write or compare every page."""
    stale = []
    for name, page in PAGES.items():
        path, text = DOCS / name, page()
        if not path.exists() or path.read_text(encoding="utf-8") != text:
            stale.append(name)
            if "--check" not in sys.argv:
                path.write_text(text, encoding="utf-8")
    print(f"{'stale' if '--check' in sys.argv else 'written'}: {', '.join(stale) or 'nothing'}")
    return 1 if stale and "--check" in sys.argv else 0


if __name__ == "__main__":
    sys.exit(main())
