"""The ``pipeflow`` command: reads arguments, hands them on, prints. Nothing is computed here."""

from __future__ import annotations

import gc
import os
import sys
from io import TextIOWrapper
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import typer

from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from pipeflow.case.model import Case
    from pipeflow.study import Result
    from pipeflow.study.fitting import FitResult

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


@app.command()
def solve(
    cases: Annotated[list[str], typer.Argument(metavar="CASE...", help="Case files (YAML), docs/case-file.md.")],
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document a line, SI units.")] = False,
) -> None:
    """Pressure drop, head, regime, checks and cautions of each case.

    Exit status: 0 every limit holds; 1 a limit or check fails; 2 a case can't be used.
    """
    raise typer.Exit(max(_solve_one(case, as_json) for case in cases))


def _solve_one(path: str, as_json: bool) -> int:
    from pipeflow.case.loading import load_case
    from pipeflow.study import solve as solve_case

    try:
        result = solve_case(load_case(path))
    except PipeflowError as error:
        typer.echo(str(error), err=True)
        return error.exit_code
    _print(result, as_json)
    return FAILS if result.fails else 0


def _print(result: Result, as_json: bool) -> None:
    if as_json:
        from pipeflow.record import document

        _print_json(document(result))
    else:
        from pipeflow.report.terminal import print_result

        print_result(result)


def _print_json(document: dict[str, Any]) -> None:
    import json

    utf_8 = (sys.stdout.encoding or "").replace("-", "").lower() == "utf8"
    typer.echo(json.dumps(document, ensure_ascii=not utf_8, allow_nan=False))


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
    from pipeflow.study.fitting import fit as fit_readings
    from pipeflow.study.fitting import options_from

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
        from pipeflow.study.fit_document import fit_document

        _print_json(fit_document(file, result))
    else:
        from pipeflow.report.fit_page import fit_page

        typer.echo(fit_page(file, result), nl=False)


@app.command()
def size(
    case: Annotated[Path, typer.Argument(metavar="CASE", help="Case file (YAML) with limits, docs/case-file.md.")],
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document, SI units.")] = False,
    solve_for: Annotated[
        str, typer.Option(metavar="WHAT", help="The most the line takes: flow, length, yield-stress or solids.")
    ] = "",
) -> None:
    """Sizes of the pipes against every limit, the one to choose, and why the others fail.

    Exit status: 0 a size passes; 1 none does; 2 the case can't be used.
    """
    from pipeflow.case.loading import load_case

    try:
        loaded = load_case(case)
        if solve_for:
            raise typer.Exit(_solve_for(loaded, solve_for, as_json))
        raise typer.Exit(_size(loaded, as_json))
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None


def _size(case: Case, as_json: bool) -> int:
    from pipeflow.study.sizing import size as size_case

    result = size_case(case)
    if as_json:
        from pipeflow.report.size_document import size_document

        _print_json(size_document(result))
    else:
        from pipeflow.report.size_page import size_page

        typer.echo(size_page(result), nl=False)
    return 0 if result.selected else FAILS


def _solve_for(case: Case, quantity: str, as_json: bool) -> int:
    from pipeflow.study.solve_for import solve_for

    answer = solve_for(case, quantity)
    if as_json:
        from pipeflow.report.size_document import answer_document

        _print_json(answer_document(answer))
    else:
        from pipeflow.report.size_page import answer_page

        typer.echo(answer_page(answer), nl=False)
    return FAILS if answer.value is None else 0


@app.command()
def methods() -> None:
    """List the methods a case may choose from: key, source, range, and how sure the transcription is."""
    from pipeflow.report.methods_page import methods_page

    typer.echo(methods_page())


def main() -> None:
    """Run the command; an error that is none of the user's leaves with status 3 and says so."""
    # a run is short: looking for garbage while modules load takes 7 % of it and frees next to nothing
    gc.set_threshold(50_000, 20, 20)
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
