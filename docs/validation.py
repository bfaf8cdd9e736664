"""Write ``docs/validation.md``: every published figure that the program was checked against.

``python docs/validation.py``, or ``--check`` to compare with the page and change nothing. The figures are those of
``tests/published``: what the page prints is what the tests assert.
"""

from __future__ import annotations

import math
import sys
from collections.abc import Iterable, Iterator
from pathlib import Path

DOCS = Path(__file__).parent
PAGE = DOCS / "validation.md"
sys.path.insert(0, str(DOCS.parent / "tests" / "published"))

from comparisons import LEFT_OUT, Comparison, comparisons  # noqa: E402
from examples import Record, coverage, examples, records  # noqa: E402
from measured_friction import Summary, laminar_oil, turbulent_water  # noqa: E402
from pages import write_or_compare  # noqa: E402

INTRODUCTION = """# What the program was checked against

Written by `docs/validation.py` from the code that the tests in `tests/published` run: page and tests cannot disagree.

**How a figure was obtained.** *read*: in a public page that shows it; *read in a public reworking*: in somebody's
working of the book's example, whose last digit may differ from the book's; *from memory*: recalled from the source
named, with the confidence stated, and it reproduces by the source's formula.

**Verdicts.** *within print*: no further off than the printed digits allow, which is the precision shown; *within chart
reading*, *within the digits of its inputs*: held to a tolerance that is stated and comes from those; *formula check*:
only a formula is published, and is met to round-off; *measured*: a measurement without a stated accuracy, which
nothing is held to but the side the program errs on; *taken over*: the program holds the published constant itself;
*does not reproduce*: with the reason.

Difference: ours less the print, in per cent of the print and in units of the printed precision. Friction factors are
Fanning's unless named Darcy's.
"""
TOPICS = {
    "01_laminar_power_law": "Laminar flow of power-law fluids",
    "02_laminar_yield_stress": "Laminar flow of yield fluids",
    "03_turbulent_non_newtonian": "Turbulent flow of non-Newtonian fluids",
    "04_transition": "End of laminar flow",
    "05_newtonian": "Newtonian liquids",
    "06_flow_curve_fitting": "Fitting of flow curves",
    "07_fittings": "Fittings, changes of bore, velocity profiles",
    "07_fittings_more": "Draining of a tank, laminar fittings",
    "08_pumps": "Pumps",
    "10_pipe_dimensions": "Pipe dimensions",
    "11_experimental": "Measured friction",
}


def page() -> str:
    """Give the text of the page."""
    parts = (INTRODUCTION.splitlines(), _tally(), _published(), _not_checked(), _measured(), _benchmarks())
    return "\n".join(line for part in parts for line in part) + "\n"


def _tally() -> Iterator[str]:
    kinds = [record.kind for record in records()]
    counts = {kind: kinds.count(kind) for kind in dict.fromkeys(kinds)}
    said = "; ".join(f"{kind} {count}" for kind, count in counts.items())
    yield from ("", f"{len(kinds)} figures of {len({r.example.id for r in records()})} examples: {said}.")


def _published() -> Iterator[str]:
    for topic in dict.fromkeys(record.example.topic for record in records()):
        rows = [record for record in records() if record.example.topic == topic]
        yield from ("", f"## {TOPICS[topic]}", "")
        yield _row(["id", "source", "obtained", "quantity", "printed", "ours", "%", "precisions", "verdict"])
        yield "|---" * 9 + "|"
        said = ""
        for record in rows:
            yield _row(_cells(record, record.example.id != said))
            said = record.example.id


def _cells(record: Record, first: bool) -> list[str]:
    printed, precision = record.printed, record.printed.precision
    unit = "" if printed.unit == "-" else f" {printed.unit}"
    return [
        record.example.id,
        record.example.source if first else "",
        record.example.obtained if first else "",
        record.quantity,
        f"{printed.value:.6g}{f' ± {precision:g}' if precision is not None else ''}{unit}",
        _beside(record.ours, printed.value, precision),
        _per_cent(record),
        _signed(record.difference / precision, 2) if precision else "",
        f"{record.kind}: {record.why}" if record.why else record.kind,
    ]


def _beside(value: float, printed: float, precision: float | None) -> str:
    """Write our figure with one digit more than the print's precision."""
    if precision is None:
        return f"{value:.6g}"
    lost = math.ceil(-math.log10(precision)) + 1
    if value and abs(value) < 1e-3:
        return f"{value:.{max(lost + math.floor(math.log10(abs(value))), 1)}e}"
    return f"{value:.{max(lost, 0)}f}"


def _per_cent(record: Record) -> str:
    if not record.printed.value:
        return ""
    relative = 100 * record.difference / record.printed.value
    return _signed(relative, 2 if abs(relative) < 10 else 1)


def _signed(value: float, digits: int) -> str:
    text = f"{value:+.{digits}f}"
    return text.lstrip("+-") if float(text) == 0 else text


def _not_checked() -> Iterator[str]:
    yield from ("", "## Not checked, and why", "")
    yield from (f"- {place}: {reason}" for place, reason in coverage()["not_checked"].items())
    for topic, ids in coverage()["later"].items():
        yield f"- {', '.join(ids)}: {topic}, not on this page yet"


def _measured() -> Iterator[str]:
    yield from ("", "## Friction in smooth pipe, measured by Stanton and Pannell in 1914", "")
    yield f"{examples()['EX-STANTON'].source}; digitised by A. Trettel, github.com/atrettel/sheardata, CC-BY-4.0."
    yield "Wall shear stress of the program over the measured one, less 1; rows flagged inconsistent are left out."
    yield from ("", _row(["rows", "number", "median, %", "95 % of them within, %", "farthest, %"]), "|---" * 5 + "|")
    yield from (_summary(summary) for summary in (turbulent_water(), laminar_oil()))
    yield ""
    yield "The collection asks the median of the turbulent rows to be within 2 %. No accuracy is stated for the oil:"
    yield "the program is above every one of its rows, so it errs on the high side."


def _summary(summary: Summary) -> str:
    figures = (_signed(100 * summary.median, 1), f"{100 * summary.within_95:.1f}", f"{100 * summary.farthest:.1f}")
    return _row([summary.title, str(summary.deviation.size), *figures])


def _benchmarks() -> Iterator[str]:
    yield from ("", "## Every method against figures computed apart from the program", "")
    yield "`tests/published/benchmarks.yaml` and `exact_laminar_factors.csv` are no publications: laminar figures by"
    yield "quadrature at 40 digits, turbulent ones by another hand's coding of the same formulas. Turbulent velocities"
    yield "are compared at the printed wall shear stress; at one velocity the stress differs by about twice as much."
    yield ""
    yield _row(["method", "quantity", "rows", "largest difference", "allowed", "what decides it"])
    yield "|---" * 6 + "|"
    yield from (_comparison(item) for item in comparisons())
    yield from ("", "Columns of that file without a counterpart:", "")
    yield from (f"- {columns}: {why}" for columns, why in LEFT_OUT.items())


def _comparison(item: Comparison) -> str:
    allowed = "-" if item.tolerance is None else f"{item.tolerance:.0e}"
    return _row([f"`{item.method}`", item.quantity, str(len(item.rows)), _size(item.worst), allowed, item.why])


def _size(difference: float) -> str:
    """Two digits where they mean something, the next power of ten where they are round-off."""
    if abs(difference) >= 1e-5:
        return f"{100 * difference:+.2g} %"
    return f"below 1e{max(math.ceil(math.log10(max(abs(difference), 1e-16))), -12)}"


def _row(cells: Iterable[str]) -> str:
    return f"| {' | '.join(cells)} |"


if __name__ == "__main__":
    sys.exit(write_or_compare(PAGE, page()))
