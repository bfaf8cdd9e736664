"""The ``fit`` command, registered by :mod:`pipeflow.cli`: reads arguments, hands them on, prints."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.errors import PipeflowError

if TYPE_CHECKING:
    from pipeflow.study.fitting import FitOptions, FitResult

MODELS = ("newtonian", "power-law", "bingham", "herschel-bulkley", "casson")


def fit(
    curve: Annotated[Path, typer.Argument(metavar="CURVE.csv", help="Viscometer readings, docs/flow-curves.md.")],
    as_json: Annotated[bool, typer.Option("--json", help="Print one JSON document, SI units.")] = False,
    use: Annotated[str, typer.Option(metavar="RANGE", help="Shear rates to use, as '30 .. 300 1/s'.")] = "",
    model: Annotated[str, typer.Option(help=f"Take this model: {', '.join(MODELS)}.")] = "",
    error: Annotated[str, typer.Option(help="Scatter of the readings: relative or absolute.")] = "relative",
    robust: Annotated[bool, typer.Option("--robust", help="Weigh outlying readings down.")] = False,
) -> None:
    """Fit the rheological models to viscometer readings and compare them.

    Exit status: 0 a model is selected; 1 none can be; 2 the readings can't be used.
    """
    raise typer.Exit(_fit_one(curve, as_json, use, model, error, robust))


def _fit_one(path: Path, as_json: bool, use: str, model: str, error: str, robust: bool) -> int:
    from pipeflow.case.viscometer import load_readings
    from pipeflow.study.fitting import fit as fit_readings

    try:
        options = _options(use, model, error, robust)
        result = fit_readings(load_readings(path), str(path), options)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        return refused.exit_code
    _print(result, as_json)
    return 0 if result.selected else 1


def _options(use: str, model: str, error: str, robust: bool) -> FitOptions:
    from pipeflow.errors import InputError, Problem
    from pipeflow.study.fitting import FitOptions
    from pipeflow.units import UnitError, echo, parse_range

    problems = []
    rates = None
    try:
        rates = parse_range(use, "shear rate") if use else None
    except UnitError as refused:
        problems.append(Problem("--use", None, None, "", str(refused)))
    if model and model not in MODELS:
        problems.append(Problem("--model", None, None, "", f"found {echo(model)}; accepted: {', '.join(MODELS)}"))
    if error not in ("relative", "absolute"):
        problems.append(Problem("--error", None, None, "", f"found {echo(error)}; accepted: relative, absolute"))
    if problems:
        raise InputError(problems)
    return FitOptions(rates, model or None, "relative" if error == "relative" else "absolute", robust)


def _print(result: FitResult, as_json: bool) -> None:
    if as_json:
        import json

        from pipeflow.fit_record import fit_document

        typer.echo(json.dumps(fit_document(result), ensure_ascii=False, allow_nan=False))
    else:
        from pipeflow.report.fit_page import fit_page

        typer.echo(fit_page(result), nl=False)
