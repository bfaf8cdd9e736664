"""The ``pipeflow`` command: reads arguments, hands them on, prints. Nothing is computed here.

Each module holds one command; importing it makes the command known. They stand here in the order of the help.
"""

from __future__ import annotations

import gc
import os
import sys
from io import TextIOWrapper

import typer

from pipeflow.cli import new as new  # isort: skip
from pipeflow.cli import solve as solve  # isort: skip
from pipeflow.cli import fit as fit  # isort: skip
from pipeflow.cli import size as size  # isort: skip
from pipeflow.cli import curve as curve  # isort: skip
from pipeflow.cli import sweep as sweep  # isort: skip
from pipeflow.cli import envelope as envelope  # isort: skip
from pipeflow.cli import rerun as rerun  # isort: skip
from pipeflow.cli import report as report  # isort: skip
from pipeflow.cli import methods as methods  # isort: skip
from pipeflow.cli.common import BUG, FAILS, UNUSABLE
from pipeflow.cli.common import app as app


def main() -> None:
    """Run the command; an error that is none of the user's leaves with status 3 and says so."""
    # a run is short: looking for garbage while modules load takes 7 % of it and frees next to nothing
    gc.set_threshold(50_000, 20, 20)
    # no plug-in of pydantic has a part in this, and looking for them takes 4 % of a run
    os.environ.setdefault("PYDANTIC_DISABLE_PLUGINS", "__all__")
    _prepare_output()
    try:
        try:
            app()
        finally:
            sys.stdout.flush()
    except BrokenPipeError:
        # the reader of a pipe has seen enough; keep the interpreter from complaining when it flushes
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(FAILS)
    except OSError as error:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.stderr.write(f"pipeflow: the output can't be written: {error.strerror}\n")
        sys.exit(UNUSABLE)
    except Exception as error:
        if os.environ.get("PIPEFLOW_TRACEBACK"):
            raise
        typer.echo(f"pipeflow: a bug of ours: {type(error).__name__}: {error}", err=True)
        typer.echo("Please report it with the case file; PIPEFLOW_TRACEBACK=1 shows where.", err=True)
        sys.exit(BUG)


def _prepare_output() -> None:
    """Let a stream that is closed swallow the text, and one that cannot hold a letter print a stand-in for it."""
    sys.stdout = sys.stdout or open(os.devnull, "w", encoding="utf-8")  # noqa: PTH123, SIM115
    sys.stderr = sys.stderr or open(os.devnull, "w", encoding="utf-8")  # noqa: PTH123, SIM115
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="replace")
