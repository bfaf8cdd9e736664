"""``pipeflow sweep``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, app, print_json, whole_number
from pipeflow.errors import InputError, PipeflowError, Problem

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pipeflow.case.axes import Axis
    from pipeflow.case.model import Case
    from pipeflow.study.ranges.sweeping import Sweep

MOST_OF_ONE, MOST_OF_TWO = 1001, 31
DEFAULT_OF_ONE, DEFAULT_OF_TWO = 21, 13


@app.command()
def sweep(
    case: Annotated[Path, typer.Argument(metavar="CASE", help="Case file (YAML), docs/case-file.md.")],
    ranges: Annotated[
        list[str], typer.Argument(metavar="PATH=FROM..TO...", help="One or two inputs, as 'flow=80..160 m3/h'.")
    ],
    points: Annotated[
        int | None,
        typer.Option(metavar="N", parser=whole_number, help="Points along each input; 21 for one input, 13 for two."),
    ] = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document, SI units.")] = False,
    csv: Annotated[Path | None, typer.Option("--csv", metavar="FILE", help="Write every point as a table.")] = None,
    svg: Annotated[Path | None, typer.Option("--svg", metavar="FILE", help="Write the chart, to print.")] = None,
) -> None:
    """One or two inputs over a range: head, pressure, energy and limits at every point; a map of two.

    Exit status: 0 every limit holds everywhere; 1 one fails somewhere; 2 the case or a range can't be used.
    """
    from pipeflow.case.loading import load_case
    from pipeflow.study.ranges.sweeping import sweep as sweep_over

    try:
        loaded = load_case(case)
        found = sweep_over(loaded, _axes(loaded, ranges, points))
        _write(found, csv, svg)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    _print(found, as_json)
    raise typer.Exit(FAILS if found.fails else 0)


def _axes(case: Case, ranges: Sequence[str], points: int | None) -> list[Axis]:
    from pipeflow.case.axes import axis, refuse_one_quantity_twice

    if len(ranges) > 2:
        message = f"found {len(ranges)} ranges; one or two inputs can be swept at once"
        raise InputError([Problem("sweep", None, None, "", message)])
    most = MOST_OF_ONE if len(ranges) == 1 else MOST_OF_TWO
    count = points if points is not None else DEFAULT_OF_ONE if len(ranges) == 1 else DEFAULT_OF_TWO
    if not 2 <= count <= most:
        message = f"found {count}; from 2 to {MOST_OF_ONE} for one input, from 2 to {MOST_OF_TWO} along each of two"
        raise InputError([Problem("--points", None, None, "", message)])
    axes = [axis(case, text, count, "sweep") for text in ranges]
    refuse_one_quantity_twice(axes, "sweep")
    return axes


def _write(found: Sweep, csv: Path | None, svg: Path | None) -> None:
    from pipeflow.report.written import write_result

    if csv is not None:
        from pipeflow.report.sweep_table import sweep_csv

        write_result(csv, sweep_csv(found))
    if svg is not None:
        from pipeflow.report.charts import sweep_chart_svg

        write_result(svg, sweep_chart_svg(found))


def _print(found: Sweep, as_json: bool) -> None:
    if as_json:
        from pipeflow.report.sweep_document import sweep_document

        print_json(sweep_document(found))
    else:
        from pipeflow.report.sweep_page import sweep_page

        typer.echo(sweep_page(found), nl=False)
