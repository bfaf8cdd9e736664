"""``pipeflow solve``."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, UNUSABLE, app, print_json, whole_number
from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from collections.abc import Iterator
    from typing import Any

    from pipeflow.study import Result
    from pipeflow.study.sampling.uncertainty import UncertaintyResult

TELL_BEYOND = 60.0
"""Seconds of work that are told beforehand."""


@app.command()
def solve(
    cases: Annotated[list[str], typer.Argument(metavar="CASE...", help="Case files (YAML), docs/case-file.md.")],
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document a line, SI units.")] = False,
    uncertainty: Annotated[
        bool, typer.Option("--uncertainty", help="How sure the answer is: sampled over the uncertain inputs.")
    ] = False,
    samples: Annotated[
        int | None,
        typer.Option(
            metavar="N", parser=whole_number, help="Samples, a power of two; 4096 if left out.", show_default=False
        ),
    ] = None,
    seed: Annotated[
        int | None,
        typer.Option(
            metavar="S", parser=whole_number, help="Another set of samples; 1 if left out.", show_default=False
        ),
    ] = None,
) -> None:
    """Pressure drop, head, regime, checks and cautions of each case.

    Exit status: 0 every limit holds; 1 a limit or check fails; 2 a case can't be used.
    """
    sampling = _sampling(uncertainty, samples, seed)
    raise typer.Exit(max(_solve_one(case, as_json, sampling) for case in cases))


def _sampling(wanted: bool, samples: int | None, seed: int | None) -> dict[str, int] | None:
    """Give what the samples are drawn by; None where none are wanted."""
    given = {name: value for name, value in (("samples", samples), ("seed", seed)) if value is not None}
    if not wanted:
        if given:
            _refuse(f"--{next(iter(given))}  is of --uncertainty, which is not asked for")
        return None
    from pipeflow.study.sampling.uncertainty import why_not

    for name, value in given.items():
        problem = why_not(**{name: value})
        if problem:
            _refuse(f"--{name}  {problem}")
    return given


def _refuse(message: str) -> None:
    typer.echo(message, err=True)
    raise typer.Exit(UNUSABLE)


def _solve_one(path: str, as_json: bool, sampling: dict[str, int] | None) -> int:
    from pipeflow.case.loading import load_case
    from pipeflow.study import solve as solve_case

    try:
        result = solve_case(load_case(path))
        sampled = None if sampling is None else _sampled(result, sampling)
    except PipeflowError as error:
        typer.echo(str(error), err=True)
        return error.exit_code
    _print(result, sampled, as_json)
    return FAILS if result.fails else 0


def _sampled(result: Result, sampling: dict[str, int]) -> UncertaintyResult:
    from pipeflow.study.sampling.uncertainty import uncertainty

    return uncertainty(result.case, checks=[check.name for check in result.checks], watch=_watched, **sampling)


def _watched(parts: Iterator[Any], count: int, *, seconds: float) -> Iterator[Any]:
    """Show how far the samples are, and say beforehand where they take minutes."""
    from pipeflow.report.progress import PATIENCE, with_progress

    if seconds > TELL_BEYOND:
        typer.echo(f"this takes about {seconds / 60.0:.0f} min; fewer --samples take less", err=True)
    return with_progress(parts, count, "parts of the samples", at_once=seconds > PATIENCE)


def _print(result: Result, sampled: UncertaintyResult | None, as_json: bool) -> None:
    if as_json:
        print_json(_document(result, sampled))
        return
    from pipeflow.report.terminal import print_result

    print_result(result)
    if sampled is not None:
        from pipeflow.report.uncertainty_page import uncertainty_page

        typer.echo(uncertainty_page(sampled), nl=False)


def _document(result: Result, sampled: UncertaintyResult | None) -> dict[str, object]:
    from pipeflow.record import document

    laid_out = document(result)
    if sampled is not None:
        from pipeflow.report.uncertainty_document import uncertainty_document

        laid_out["uncertainty"] = uncertainty_document(sampled)
    return laid_out
