"""``pipeflow curve``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, app, print_json
from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from pipeflow.study.pumping.result import CurveResult


@app.command()
def curve(
    case: Annotated[Path, typer.Argument(metavar="CASE", help="Case file (YAML), docs/case-file.md.")],
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document, SI units.")] = False,
    csv: Annotated[Path | None, typer.Option("--csv", metavar="FILE", help="Write every point as a table.")] = None,
    svg: Annotated[Path | None, typer.Option("--svg", metavar="FILE", help="Write the chart, to print.")] = None,
) -> None:
    """System curve of a line, and candidate pumps on it: duty, power, NPSH, and their ranking.

    Exit status: 0 a pump holds, or none is given; 1 none holds in every scenario; 2 the case can't be used.
    """
    from pipeflow.case.loading import load_case
    from pipeflow.study.pumping.curve import curve as curve_of

    try:
        result = curve_of(load_case(case))
        _write(result, csv, svg)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    _print(result, as_json)
    raise typer.Exit(FAILS if result.fails else 0)


def _write(result: CurveResult, csv: Path | None, svg: Path | None) -> None:
    from pipeflow.report.written import write_result

    if csv is not None:
        from pipeflow.report.curve_table import curve_table

        write_result(csv, curve_table(result))
    if svg is not None:
        from pipeflow.report.charts import system_chart_svg

        write_result(svg, system_chart_svg(result))


def _print(result: CurveResult, as_json: bool) -> None:
    if as_json:
        from pipeflow.report.curve_document import curve_document

        print_json(curve_document(result))
    else:
        from pipeflow.report.curve_page import curve_page

        typer.echo(curve_page(result), nl=False)
