"""``pipeflow new``."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from pipeflow.cli.common import app
from pipeflow.errors import PipeflowError


@app.command()
def new(
    name: Annotated[Path, typer.Argument(metavar="NAME", help="The case to start; .yaml is added.")],
    readings: Annotated[
        bool, typer.Option("--readings", help="Take the rheology from a sheet of readings, and write one to fill in.")
    ] = False,
    pump: Annotated[bool, typer.Option("--pump", help="Try a pump, and write a curve to fill in.")] = False,
) -> None:
    """Start a case: a commented file with placeholder figures, to be replaced.

    Exit status: 0 written; 2 it is there already or can't be written, and nothing is.
    """
    from pipeflow.case.starter import starter, write_new

    try:
        files = starter(name, readings=readings, pump=pump)
        write_new(files)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    *_, case = files
    typer.echo("\n".join(f"wrote {path}" for path in files))
    typer.echo(f"Replace the placeholder figures, then: pipeflow solve {case}")
