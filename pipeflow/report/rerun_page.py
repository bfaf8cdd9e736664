"""The pages of cases run again: what moved, by how much and why; a case that did not is one quiet line."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator, Sequence

import numpy as np

from pipeflow.record.changes import Change
from pipeflow.record.comparison import TOTALS, LineComparison
from pipeflow.record.explanation import Explanation
from pipeflow.record.rerun import Rerun
from pipeflow.report.rerun_pumps import pump_lines
from pipeflow.report.rerun_rows import COLUMNS, WORDS, check_rows, figures, signed
from pipeflow.report.text import WIDTH, paragraph, table
from pipeflow.units import to_display

SHOWN = {
    "head_loss_m": ("head loss", "m"),
    "head_loss_upper_m": ("head loss, upper", "m"),
    "total_head_m": ("total head", "m"),
    "total_head_upper_m": ("total head, upper", "m"),
    "pressure_required_Pa": ("pressure required", "kPa"),
    "pressure_required_upper_Pa": ("pressure required, upper", "kPa"),
}
"""The words and the unit for each total."""
CENTRAL = {key.replace("_upper", ""): key for key in TOTALS if "_upper" in key}
OUTCOMES = {
    "moved": "moved",
    "unmoved": "as before",
    "lacks pumps": "with pumps not in the record",
    "accepted": "accepted",
    "no record": "without a record",
    "unusable record": "with a record that can't be used",
    "refused": "can't be read",
}


def rerun_pages(
    runs: Sequence[Rerun], gone: Sequence[str], skipped: Sequence[str], tolerance: float, width: int = WIDTH
) -> str:
    """Lay all cases out, and count them.

    Parameters
    ----------
    runs : sequence of Rerun
    gone : sequence of str
        Cases that were there before.
    skipped : sequence of str
        YAML files that are no cases.
    tolerance : float
        Fraction.
    width : int
        Columns.
    """
    pages = [rerun_page(one, tolerance, width) for one in runs if one.outcome != "refused"]
    notes = [paragraph(f"{file}: gone since then", width) for file in gone]
    if skipped:
        notes.append(paragraph(f"No cases, passed over: {', '.join(skipped)}.", width))
    text = "".join((*pages, *(f"{line}\n" for line in (*notes, "", summary_line(runs, tolerance)))))
    return "".join(char if char.isprintable() or char == "\n" else "?" for char in text)


def rerun_page(found: Rerun, tolerance: float, width: int = WIDTH) -> str:
    """Lay one case out; one line for a case that did not move."""
    if found.comparison is None:
        return paragraph(_headline(found, *found.said), width) + "\n"
    if not found.moved:
        return paragraph(_headline(found, "nothing moved", *_beside(found)), width) + "\n"
    return "\n".join(_moved(found, tolerance, width)) + "\n"


def summary_line(runs: Sequence[Rerun], tolerance: float) -> str:
    """Count the cases by what became of them."""
    counts = Counter(_became(one) for one in runs)
    parts = [f"{counts[key]} {words}" for key, words in OUTCOMES.items() if counts[key]]
    cases = "1 case" if len(runs) == 1 else f"{len(runs)} cases"
    return paragraph(f"{cases}: {', '.join(parts)}; tolerance {100 * tolerance:g} %.")


def _became(found: Rerun) -> str:
    if found.comparison is not None and not found.moved:
        return "lacks pumps" if found.lacks_pumps and not found.accepted else "unmoved"
    return "accepted" if found.accepted else "moved" if found.moved else found.outcome


def explained(change: Change, explanation: Explanation) -> str:
    """Say in one sentence what a total moved by and which input by how much.

    As ``head loss 41.2 → 47.9 m: yield stress +4.1, flow +3.0, density −0.4``.
    """
    words, unit = SHOWN[change.name]
    before, after = (to_display(figure or 0.0, unit) for figure in (change.before, change.after))
    parts = {
        group: to_display(float(part), unit)
        for group, part in zip(explanation.groups, explanation.parts[:, TOTALS.index(change.name)], strict=True)
    }
    largest = max(abs(part) for part in parts.values())
    digits = _decimals(largest)
    shown = {group: part for group, part in parts.items() if round(part, digits)}
    said = sorted(shown.items(), key=lambda item: -abs(item[1]))
    moves = ", ".join(f"{group} {signed(part, digits)}" for group, part in said)
    return f"{words} {before:.{digits}f} → {after:.{digits}f} {unit}: {moves}"


def _decimals(largest: float) -> int:
    """Decimals that give the largest part three significant digits, within reason."""
    if not largest:
        return 1
    return min(max(2 - math.floor(math.log10(largest)), 0), 9)


def _headline(found: Rerun, *said: str) -> str:
    fails = f"fails: {', '.join(name.replace('_', ' ') for name in found.fails)}" if found.fails else ""
    return f"{found.name}: {'; '.join(part for part in (*said, fails) if part)}"


def _beside(found: Rerun) -> Iterator[str]:
    """What is said of a case beside its figures."""
    yield from found.said
    if found.inputs_changed and not found.moved and not found.without_effect:
        yield "inputs changed, within the tolerance"
    if found.within_tolerance:
        yield f"changed, head within the tolerance: {', '.join(found.within_tolerance)}"
    if found.without_effect:
        of = "the line's head" if found.pumps_moved else "head"
        yield f"changed, no effect on {of}: {', '.join(found.without_effect)}"


def _moved(found: Rerun, tolerance: float, width: int) -> Iterator[str]:
    comparison = found.comparison
    assert comparison is not None
    yield ""
    yield paragraph(_headline(found, "moved"), width)
    yield paragraph(found.title, width, "  ")
    for names, what in ((comparison.scenarios_added, "new"), (comparison.scenarios_gone, "gone")):
        if names:
            yield paragraph(f"Scenarios {what}: {', '.join(names)}.", width, "  ")
    for line in comparison.lines:
        yield ""
        if line.is_beyond(tolerance):
            yield from _line(line, found, tolerance, width)
        else:
            yield paragraph(f"{line.scenario or 'the case itself'}: nothing moved", width, "  ")
    if comparison.pumps is not None:
        yield from pump_lines(comparison.pumps, tolerance, width)
    if found.program:
        versions = ", ".join(f"{name} {old} → {new}" for name, (old, new) in found.program.items())
        yield paragraph(f"Program: {versions}.", width, "  ")
    for text in _beside(found):
        yield paragraph(f"{text[:1].upper()}{text[1:]}.", width, "  ")


def _line(line: LineComparison, found: Rerun, tolerance: float, width: int) -> Iterator[str]:
    columns = (line.scenario or "the case itself", *COLUMNS)
    moved = (check for check in line.checks if check.is_beyond(tolerance) or check.after == "fail")
    rows = [*_totals(line), *(row for check in moved for row in check_rows(check, tolerance))]
    yield from (f"  {text}" for text in table(columns, rows, words=WORDS, width=width - 2))
    explanation = found.explanations.get(line.scenario)
    if explanation is None:
        why = found.unexplained.get(line.scenario)
        if why:
            yield paragraph(f"Not explained: {why}.", width, "  ")
        return
    for change in _different(line):
        if change.is_beyond(tolerance) and not _goes_with_head_loss(change, explanation):
            yield paragraph(explained(change, explanation), width, "  ")
    if explanation.orders:
        count = len(explanation.groups) - 1
        yield paragraph(
            f"{count} groups of inputs changed: a mean over {explanation.orders} of the orders.", width, "  "
        )


def _goes_with_head_loss(change: Change, explanation: Explanation) -> bool:
    """Whether a total head moved as its head loss did, part by part: nothing is left to say."""
    if not change.name.startswith("total_head"):
        return False
    head_loss, total_head = (
        explanation.parts[:, TOTALS.index(name)]
        for name in (change.name.replace("total_head", "head_loss"), change.name)
    )
    return bool(np.allclose(head_loss, total_head, rtol=0.0, atol=1e-9 * np.abs(total_head).max()))


def _different(line: LineComparison) -> Iterator[Change]:
    """The totals, without an upper figure that is the central one before and after."""
    by_name = {total.name: total for total in line.totals}
    repeated = {
        upper
        for central, upper in CENTRAL.items()
        if (by_name[central].before, by_name[central].after) == (by_name[upper].before, by_name[upper].after)
    }
    yield from (total for total in line.totals if total.name not in repeated)


def _totals(line: LineComparison) -> Iterator[tuple[str, ...]]:
    for total in _different(line):
        words, unit = SHOWN[total.name]
        yield (f"{words}, {unit}", *figures(total, unit), "", "")
