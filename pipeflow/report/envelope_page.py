"""The page of a duty envelope in a terminal: the window in words, its boundaries, its energy."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from pipeflow.report.sweep_text import (
    boundary_name,
    energy_unit,
    figure_and_unit,
    fitting,
    name_of,
    title_of,
    told,
    unit_of,
)
from pipeflow.report.text import heading, paragraph
from pipeflow.study.ranges.boundaries import Boundary
from pipeflow.study.ranges.envelope import Envelope, WindowAt
from pipeflow.study.ranges.limits_over import REGIMES
from pipeflow.study.ranges.pumps_over import PUMPS
from pipeflow.study.ranges.window import Interval
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.units import format_si, significant, to_display

ROWS = 7
"""Values of the other input that the page speaks of, beside that of the case."""


def envelope_page(envelope: Envelope) -> str:
    """Write the page."""
    return "\n".join(_page(envelope)) + "\n"


def _page(envelope: Envelope) -> Iterator[str]:
    yield paragraph(title_of(envelope.case))
    yield envelope.case.file
    yield from (paragraph(told(axis), mark="  ") for axis in (envelope.flow, envelope.up))
    yield from heading("Where the line may be operated")
    yield from _window(envelope)
    yield from heading("What bounds it")
    yield from _boundaries(envelope)
    yield from heading("Map")
    yield from _map(envelope)
    yield from _energy(envelope)
    if envelope.cautions:
        yield from heading("Cautions")
        yield from (paragraph(caution, mark="! ") for caution in envelope.cautions)
    yield from heading("Before relying on this")
    yield paragraph(SAFETY_NOTICE)


def _window(envelope: Envelope) -> Iterator[str]:
    for row in envelope.rows:
        if row in _chosen(envelope):
            here = " (the case)" if row is envelope.own else ""
            yield paragraph(f"at {_value(envelope, row.value)}{here}: {'; '.join(_said(row))}", mark="- ")
    asked = envelope.case.flow
    flows = dict.fromkeys(significant(to_display(flow, "m3/h")) for flow in (asked.minimum, asked.maximum))
    lie = "lie within it" if envelope.holds else "do not all lie within it"
    yield paragraph(f"The flows of the case, {' to '.join(flows)} m3/h, {lie}.")


def _chosen(envelope: Envelope) -> list[WindowAt]:
    count = len(envelope.rows)
    places = {round(index * (count - 1) / (ROWS - 1)) for index in range(ROWS)}
    return [row for place, row in enumerate(envelope.rows) if place in places or row is envelope.own]


def _value(envelope: Envelope, value: float) -> str:
    figure, unit = figure_and_unit(envelope.up.variable, value)
    if envelope.up.variable.path == "fluid.solids.mass_fraction":
        return f"{significant(100.0 * value, 3)} % solids by mass"
    return f"{name_of(envelope.up.variable)} {figure}{f' {unit}' if unit else ''}"


def _said(row: WindowAt) -> Iterator[str]:
    """The window of one value in words, with what the central figure alone adds."""
    if not row.upper and not row.central:
        yield f"none, {closed(row.closed_by['central'])}"
        return
    yield from (_interval(one) for one in row.upper)
    if not row.upper:
        yield f"none by the upper figure, {closed(row.closed_by['upper'])}"
    if row.central != row.upper:
        alone = " and ".join(_ends(one) for one in row.central) or "none"
        yield f"on the central figure alone {alone}"


def _interval(one: Interval) -> str:
    ends = [f"{end} end by {words(by)}" for end, by in (("lower", one.low_by), ("upper", one.high_by)) if by]
    beyond = [end for end, by in (("lower", one.low_by), ("upper", one.high_by)) if not by]
    said = ", ".join(ends) + (", " if ends and beyond else "")
    return f"{_ends(one)}; {said}{' and '.join(beyond)}{' end not on the map' if beyond else ''}"


def words(name: str) -> str:
    """Name what ends a window."""
    return "what the pumps give" if name == PUMPS else name.replace("_", " ")


def closed(names: Sequence[str]) -> str:
    """Say which limits leave no flow."""
    return f"closed by {' and '.join(words(name) for name in names)}"


def _ends(one: Interval) -> str:
    low, high = (significant(to_display(flow, "m3/h")) for flow in (one.low, one.high))
    return f"{low} to {high} m3/h"


def _boundaries(envelope: Envelope) -> Iterator[str]:
    for one in envelope.boundaries:
        yield paragraph(f"{_named(one, envelope)}: {_place(one, envelope)}", mark="- ")


def _place(one: Boundary, envelope: Envelope) -> str:
    """Where a boundary runs: by flow, or by the other input where it runs across the map."""
    flows, values = zip(*(point for line in one.lines for point in line), strict=True)
    if one.level is not None:
        return f"{'from' if one.side == 'above' else 'up to'} {_value(envelope, one.level)}"
    if one.side:
        low, high = (_value(envelope, end) for end in (min(values), max(values)))
        return f"at {low} to {high} over the map"
    low, high = (significant(to_display(flow, "m3/h")) for flow in (min(flows), max(flows)))
    return f"{f'at {low}' if low == high else f'{low} to {high}'} m3/h over the map"


def _named(one: Boundary, envelope: Envelope) -> str:
    stated = envelope.limits.get(one.name)
    limit = f", {stated.sense} {format_si(stated.limit, stated.unit)}" if stated and stated.limit is not None else ""
    pipe = f" ({envelope.governing_pipe})" if one.name in REGIMES else ""
    return f"{boundary_name(one)}{pipe}{limit}"


def _map(envelope: Envelope) -> Iterator[str]:
    """The grid in letters, the other input upwards."""
    letters = {"inside": "o", "central": "c", "outside": "."}
    yield f"{name_of(envelope.up.variable)}{f', {unit}' if (unit := unit_of(envelope.up.variable)) else ''}"
    for value, row in zip(reversed(envelope.up.values), reversed(envelope.window), strict=True):
        figure = figure_and_unit(envelope.up.variable, value, 3)[0]
        yield f"{figure:>8} |{''.join(letters[one] for one in row)}"
    width = len(envelope.flow.values)
    low, high = (significant(to_display(envelope.flow.values[at], "m3/h"), 3) for at in (0, -1))
    yield " " * 9 + "+" + "-" * width
    yield " " * 10 + low + f"{high} m3/h".rjust(max(width - len(low), 10))
    yield paragraph("o inside every limit, c inside by the central figure alone, . outside", mark="  ")


def _energy(envelope: Envelope) -> Iterator[str]:
    yield from heading("Energy of the losses")
    places = sorted({round(share * (len(envelope.flow.values) - 1)) for share in (0.0, 0.2, 0.4, 0.6, 0.8, 1.0)})
    heads = [significant(to_display(envelope.flow.values[at], "m3/h"), 3) for at in places]
    rows = [
        [figure_and_unit(envelope.up.variable, row.value)[0], *(significant(energy[at], 3) for at in places)]
        for row, energy in zip(envelope.rows, envelope.energy, strict=True)
        if row in _chosen(envelope)
    ]
    yield from fitting((unit_of(envelope.up.variable) or "value", *(f"{head}\nm3/h" for head in heads)), rows)
    yield paragraph(f"{energy_unit(envelope.case)}, hydraulic, losses by the upper figure.", mark="  ")
