"""``pipeflow solve``."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, app, print_json
from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from pipeflow.study import Result


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

        print_json(document(result))
    else:
        from pipeflow.report.terminal import print_result

        print_result(result)
