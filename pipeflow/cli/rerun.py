"""``pipeflow rerun``."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from functools import partial
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import UNUSABLE, app, print_json
from pipeflow.errors import InputError, PipeflowError

if TYPE_CHECKING:
    from pipeflow.record.rerun import Options, Rerun


@app.command()
def rerun(
    paths: Annotated[list[str], typer.Argument(metavar="PATH...", help="Case files, and folders to walk.")],
    accept: Annotated[
        bool, typer.Option("--accept", help="Write the records: these figures are the basis now.")
    ] = False,
    tolerance: Annotated[str, typer.Option(metavar="PERCENT", help="What moves by less has not moved.")] = "0.1%",
    since: Annotated[
        str | None, typer.Option(metavar="REV", help="Compare with the cases of a git revision instead.")
    ] = None,
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document a line, SI units.")] = False,
) -> None:
    """Solve cases again: what moved against their stored records, by how much, and which input moved it.

    Exit status: 0 nothing moved, or accepted; 1 something moved, a limit fails or a record is missing; 2 a case can't
    be read.
    """
    from pipeflow.record.found import find_cases
    from pipeflow.record.rerun import Options

    try:
        options = Options(_fraction(tolerance), accept)
        if accept and since is not None:
            raise _refused("--accept", "writes records, and --since compares without them; give one of the two")
        found = find_cases(paths)
        runs, gone = _run(found.cases, paths, since, options)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    for problem in found.problems:
        typer.echo(problem, err=True)
    _print(runs, gone, found.skipped, options, as_json)
    statuses = [one.exit_code for one in runs] + [UNUSABLE] * bool(found.problems) + [1] * bool(gone)
    raise typer.Exit(max(statuses, default=0))


def _refused(option: str, message: str) -> InputError:
    from pipeflow.errors import Problem

    return InputError([Problem(option, None, None, "", message)])


def _fraction(text: str) -> float:
    from pipeflow.record.tolerance import tolerance_of

    return tolerance_of(text)


def _run(
    cases: Sequence[str], paths: Sequence[str], since: str | None, options: Options
) -> tuple[list[Rerun], tuple[str, ...]]:
    from pipeflow.record.many import each
    from pipeflow.record.rerun import rerun as rerun_one
    from pipeflow.record.rerun import rerun_since

    if since is None:
        return list(_watched(each(partial(rerun_one, options=options), cases), len(cases))), ()
    from pathlib import Path

    from pipeflow.record.revision import as_of

    with as_of(since, cases, [path for path in paths if Path(path).is_dir()]) as past:
        work = partial(rerun_since, past=past.files, revision=since, options=options)
        return list(_watched(each(work, cases), len(cases))), past.gone


def _watched(runs: Iterator[Rerun], count: int) -> Iterator[Rerun]:
    from pipeflow.report.progress import with_progress

    return with_progress(runs, count, "cases run again")


def _print(runs: Sequence[Rerun], gone: Sequence[str], skipped: Sequence[str], options: Options, as_json: bool) -> None:
    for one in runs:
        if one.outcome == "refused":
            typer.echo("\n".join(one.said), err=True)
    if as_json:
        from pipeflow.report.rerun_document import rerun_document

        for one in runs:
            if one.outcome != "refused":
                print_json(rerun_document(one, options.tolerance))
        return
    from pipeflow.report.rerun_page import rerun_pages

    pages = rerun_pages(runs, gone, skipped, options.tolerance)
    typer.echo(pages if _is_utf_8() else pages.replace("→", "->").replace("−", "-"), nl=False)


def _is_utf_8() -> bool:
    return (sys.stdout.encoding or "").replace("-", "").lower() == "utf8"
