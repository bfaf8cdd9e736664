"""``pipeflow envelope``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, app, print_json
from pipeflow.errors import InputError, PipeflowError, Problem

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pipeflow.case.model import Case
    from pipeflow.study.ranges.envelope import Envelope


@app.command()
def envelope(
    case: Annotated[Path, typer.Argument(metavar="CASE", help="Case file (YAML), docs/case-file.md.")],
    ranges: Annotated[
        list[str] | None,
        typer.Argument(metavar="[PATH=FROM..TO]...", help="Other ends, as 'flow=80..160 m3/h', or another input."),
    ] = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document, SI units.")] = False,
    csv: Annotated[Path | None, typer.Option("--csv", metavar="FILE", help="Write the boundaries as a table.")] = None,
    svg: Annotated[Path | None, typer.Option("--svg", metavar="FILE", help="Write the map, to print.")] = None,
) -> None:
    """Duty envelope: where, over flow and solids or yield stress, every limit holds, and what bounds it.

    Exit status: 0 the flows of the case lie within it; 1 they do not; 2 the case or a range can't be used.
    """
    from pipeflow.case.loading import load_case

    try:
        found = _found(load_case(case), ranges or [])
        _write(found, csv, svg)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    _print(found, as_json)
    raise typer.Exit(0 if found.holds else FAILS)


def _found(case: Case, ranges: Sequence[str]) -> Envelope:
    from pipeflow.case.axes import flow_and_other
    from pipeflow.study.ranges.envelope import envelope as envelope_of

    if len(ranges) > 2:
        message = f"found {len(ranges)} ranges; one of the flow and one of another input"
        raise InputError([Problem("envelope", None, None, "", message)])
    return envelope_of(case, *flow_and_other(case, ranges, "envelope"))


def _write(found: Envelope, csv: Path | None, svg: Path | None) -> None:
    from pipeflow.report.written import write_result

    if csv is not None:
        from pipeflow.report.sweep_table import envelope_csv

        write_result(csv, envelope_csv(found))
    if svg is not None:
        from pipeflow.report.charts import envelope_chart_svg

        write_result(svg, envelope_chart_svg(found))


def _print(found: Envelope, as_json: bool) -> None:
    if as_json:
        from pipeflow.report.sweep_document import envelope_document

        print_json(envelope_document(found))
    else:
        from pipeflow.report.envelope_page import envelope_page

        typer.echo(envelope_page(found), nl=False)
