"""``pipeflow fit``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, app, print_json
from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from pipeflow.study.readings.fitting import FitResult


@app.command()
def fit(
    curve: Annotated[Path, typer.Argument(metavar="CURVE.csv", help="Viscometer readings, docs/flow-curves.md.")],
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document, SI units.")] = False,
    use: Annotated[str, typer.Option(metavar="RANGE", help="Shear rates to use, as '30 .. 300 1/s'.")] = "",
    model: Annotated[str, typer.Option(metavar="NAME", help="Take this model, whatever the readings support.")] = "",
    error: Annotated[str, typer.Option(metavar="KIND", help="Scatter: relative (default) or absolute.")] = "",
    robust: Annotated[bool, typer.Option("--robust", help="Weigh outlying readings down.")] = False,
) -> None:
    """Fit the rheological models to viscometer readings and compare them.

    Exit status: 0 a model is selected; 1 none can be; 2 the readings can't be used.
    """
    from pipeflow.case.viscometer import load_readings
    from pipeflow.study.readings.fitting import fit as fit_readings
    from pipeflow.study.readings.fitting import options_from

    try:
        options = options_from(use, model, error, robust)
        result = fit_readings(load_readings(curve), str(curve), options)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    _print_fit(str(curve), result, as_json)
    raise typer.Exit(0 if result.selected else FAILS)


def _print_fit(file: str, result: FitResult, as_json: bool) -> None:
    if as_json:
        from pipeflow.study.readings.fit_document import fit_document

        print_json(fit_document(file, result))
    else:
        from pipeflow.report.fit_page import fit_page

        typer.echo(fit_page(file, result), nl=False)
