"""The section on a little more and less solids, for a case whose rheology follows them."""

from __future__ import annotations

from collections.abc import Iterator

from markupsafe import Markup

from pipeflow.report.charts import sweep_chart_svg
from pipeflow.report.html.blocks import Block, Chart, Items, Section, Text, section, table
from pipeflow.report.sweep_page import limits_over, sweep_row
from pipeflow.report.sweep_text import energy_unit
from pipeflow.study.ranges.sweeping import Sweep

COLUMNS = (
    "solids", "regime", "head loss\nm", "upper\nm", "total head\nm", "pressure\nkPa", "power\nkW",
    "energy\nkWh/t.km", "limits",
)  # fmt: skip


def solids_sections(sweep: Sweep | None) -> Iterator[Section]:
    """Give the section; none where the rheology does not follow the solids."""
    if sweep is not None:
        yield from section("solids", "A little more and less solids", _solids(sweep))


def _solids(sweep: Sweep) -> Iterator[Block]:
    rows = [_without_velocity(tuple(sweep_row(sweep, point))) for point in sweep.points]
    yield from table("The line by the mass fraction of the solids", COLUMNS, rows, (0, 1, 8))
    yield Text(
        "At design flow; total head, pressure, hydraulic power and energy of the losses by the upper figure, the "
        f"energy in {energy_unit(sweep.case)}. Limits over the whole range of flow, as the checks judge them."
    )
    if len(sweep.points) > 1:
        yield Chart(Markup(sweep_chart_svg(sweep)), "Head loss, pressure required and energy by the solids; hatched "
                    "where a limit fails.")  # fmt: skip
    found = tuple(f"{status}: {text}" for status, text in limits_over(sweep))
    if found:
        yield Items(found)
    yield from (Text(caution, "strong") for caution in sweep.cautions)


def _without_velocity(row: tuple[str, ...]) -> tuple[str, ...]:
    return row[:2] + row[3:]
