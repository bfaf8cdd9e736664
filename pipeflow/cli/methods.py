"""``pipeflow methods``."""

from __future__ import annotations

import typer

from pipeflow.cli.common import app


@app.command()
def methods() -> None:
    """List the methods a case may choose from: key, source, range, and how sure the transcription is."""
    from pipeflow.report.methods_page import methods_page

    typer.echo(methods_page())
