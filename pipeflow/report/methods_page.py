"""The list of methods in a terminal, from their records."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from pipeflow.friction.criteria import CRITERIA
from pipeflow.friction.methods import TURBULENT
from pipeflow.friction.turbulent import ALL_MODELS
from pipeflow.line.fittings import METHODS as FITTINGS
from pipeflow.report.text import paragraph, underlined
from pipeflow.sources import Source


def methods_page() -> str:
    """Every method that a case may choose, by the key it chooses with."""
    turbulent = ((method.source, method.models) for method in TURBULENT.values())
    critical = ((criterion.source, criterion.models) for criterion in CRITERIA.values())
    fittings = ((source, ALL_MODELS) for source in FITTINGS.values())
    return "\n".join(
        [
            *_section("methods.turbulent", turbulent),
            *_section("methods.critical, the end of laminar flow", critical),
            *_section("methods.fittings", fittings),
        ]
    )


def _section(title: str, sources: Iterable[tuple[Source, frozenset[str]]]) -> Iterator[str]:
    yield underlined(title)
    for source, models in sources:
        yield source.key
        yield paragraph(source.title, mark="    ")
        known = "any fluid" if models == ALL_MODELS else ", ".join(sorted(models))
        ranges = " and ".join(str(bound) for bound in source.ranges) or "none stated"
        for label, text in (
            ("source", source.citation),
            ("for", known),
            ("range", ranges),
            ("sure", source.confidence),
            ("note", source.note),
        ):
            if text:
                yield paragraph(text, mark=f"    {label:<8}")
        yield ""
