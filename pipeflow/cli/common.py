"""What every command uses: the application, its exit statuses, the printing of a document."""

from __future__ import annotations

import re
import sys
from typing import Annotated, Any

import typer

FAILS, UNUSABLE, BUG = 1, 2, 3

app = typer.Typer(
    name="pipeflow",
    help="Pressure drop, head and regime of pipelines for non-Newtonian slurries and pastes.",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)


def _version(wanted: bool) -> None:
    if wanted:
        from pipeflow import __version__

        typer.echo(f"pipeflow {__version__}")
        raise typer.Exit


@app.callback()
def _common(
    version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Print the version and stop.")
    ] = False,
) -> None:
    """Take the options that stand before a command."""


def whole_number(text: str) -> int:
    """Read the whole number of an option; what it may be is said by the command."""
    if not re.fullmatch(r"[+-]?[0-9]{1,100}", text):
        raise typer.BadParameter(f"found {text[:40]!r}; a whole number is needed, in digits alone, as 4096")
    return int(text)


def print_json(document: dict[str, Any]) -> None:
    """Print one document on one line, in the letters that standard output holds."""
    import json

    utf_8 = (sys.stdout.encoding or "").replace("-", "").lower() == "utf8"
    typer.echo(json.dumps(document, ensure_ascii=not utf_8, allow_nan=False))
