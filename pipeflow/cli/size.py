"""``pipeflow size``."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, app, print_json
from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from pipeflow.case.model import Case


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
    from pipeflow.study.sizes.sizing import size as size_case

    result = size_case(case)
    if as_json:
        from pipeflow.report.size_document import size_document

        print_json(size_document(result))
    else:
        from pipeflow.report.size_page import size_page

        typer.echo(size_page(result), nl=False)
    return 0 if result.selected else FAILS


def _solve_for(case: Case, quantity: str, as_json: bool) -> int:
    from pipeflow.study.sizes.solve_for import solve_for

    answer = solve_for(case, quantity)
    if as_json:
        from pipeflow.report.size_document import answer_document

        print_json(answer_document(answer))
    else:
        from pipeflow.report.size_page import answer_page

        typer.echo(answer_page(answer), nl=False)
    return FAILS if answer.value is None else 0
