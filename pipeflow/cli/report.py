"""``pipeflow report``."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from pipeflow.cli.common import FAILS, UNUSABLE, app
from pipeflow.errors import InputError, PipeflowError, Problem

if TYPE_CHECKING:
    from pipeflow.study.design_file import DesignFile

STEPS = 3
"""Reading, working out and writing, of each case."""
SUFFIXES = (".html", ".htm")
MOST_REASONS = 6
"""Reasons for which a page fails that are told; the page has them all."""


@dataclass(frozen=True)
class _Done:
    """A case done with: its page, what it holds (None if it can't be used), and the status it leaves."""

    case: str
    page: Path
    found: DesignFile | None
    status: int


@app.command()
def report(
    cases: Annotated[list[str], typer.Argument(metavar="CASE...", help="Case files (YAML), docs/case-file.md.")],
    output: Annotated[
        str, typer.Option("--output", "-o", metavar="FILE.html", help="The page; of several cases, a folder.")
    ],
) -> None:
    """Write the page that goes in the design file; of several cases, a page each and an index.

    Exit status: 0 every limit holds; 1 a limit or check fails, each page saying why in a line of its own on standard
    error; 2 a case can't be used, or a page can't be written.
    """
    try:
        pages = _pages(cases, output)
    except PipeflowError as refused:
        typer.echo(str(refused), err=True)
        raise typer.Exit(refused.exit_code) from None
    raise typer.Exit(_write(pages, Path(output) / "index.html" if _is_folder(cases, output) else None))


def _is_folder(cases: Sequence[str], output: str) -> bool:
    return len(cases) > 1 or output.endswith("/") or Path(output).is_dir()


def _pages(cases: Sequence[str], output: str) -> dict[str, Path]:
    """Say where the page of each case goes, and refuse before anything is solved what cannot be written."""
    target = Path(output)
    if not _is_folder(cases, output):
        if target.suffix.lower() not in SUFFIXES:
            raise _refused(output, "the page is HTML: name it so, as line.html; or give a folder, as pages/")
        _keep_off(target)
        return {cases[0]: target}
    if len(cases) > 1 and (target.is_file() or target.suffix.lower() in SUFFIXES):
        raise _refused(output, "several cases need a folder, as pages/; one page holds one case")
    pages = {case: target / f"{Path(case).stem}.html" for case in cases}
    _keep_apart(pages, output)
    try:
        target.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise _refused(output, f"the folder can't be made: {(error.strerror or str(error)).lower()}") from None
    for page in (*pages.values(), target / "index.html"):
        _keep_off(page)
    return pages


def _keep_apart(pages: dict[str, Path], output: str) -> None:
    """Refuse two cases whose pages would be one file."""
    by_name: dict[str, list[str]] = {"index.html": ["the index"]}
    for case, page in pages.items():
        by_name.setdefault(page.name.casefold(), []).append(case)
    for name, of in by_name.items():
        if len(of) > 1:
            raise _refused(output, f"{' and '.join(of)} would both be {name}; write them to folders of their own")


def _keep_off(page: Path) -> None:
    """Refuse to write over a file that is no page of ours."""
    from pipeflow.report.html.ours import is_our_page

    if page.is_file() and not is_our_page(page):
        raise _refused(str(page), "is there already and is no report of pipeflow; name another, or remove it")


def _refused(path: str, message: str) -> InputError:
    return InputError([Problem(path, None, None, "", message)])


def _write(pages: dict[str, Path], index: Path | None) -> int:
    from pipeflow.report.html import index_page, index_row, unusable_row
    from pipeflow.report.progress import with_progress
    from pipeflow.report.written import write_text

    rows, statuses, failing = [], [0], []
    for done in with_progress(_steps(pages), STEPS * len(pages), "reports"):
        if done is not None:
            rows.append(index_row(done.found, done.page) if done.found else unusable_row(done.case))
            statuses.append(done.status)
            failing += [_why_it_fails(done.found, done.page)] if done.found and done.found.fails else []
    for line in failing:
        typer.echo(line, err=True)
    if index is not None:
        try:
            write_text(index, index_page(rows))
        except PipeflowError as refused:
            typer.echo(str(refused), err=True)
            statuses.append(refused.exit_code)
    return max(statuses)


def _why_it_fails(found: DesignFile, page: Path) -> str:
    """``line.html: written; FAIL: head loss, npsh of candidate B (thick)``."""
    from pipeflow.report.judged import judged_texts

    reasons = judged_texts(found.failing, found.conditions)
    more = [f"{len(reasons) - MOST_REASONS} more"] if len(reasons) > MOST_REASONS else []
    return f"{page}: written; FAIL: {', '.join([*reasons[:MOST_REASONS], *more])}"


def _steps(pages: dict[str, Path]) -> Iterator[_Done | None]:
    """Write the page of each case, with a stop after every step; a case that can't be used doesn't stop the others."""
    for case, page in pages.items():
        try:
            yield from _of_one(case, page)
        except PipeflowError as refused:
            typer.echo(str(refused), err=True)
            yield _Done(case, page, None, max(refused.exit_code, UNUSABLE))


def _of_one(case: str, page: Path) -> Iterator[_Done | None]:
    from pipeflow.case.loading import load_case
    from pipeflow.case.source_files import source_files
    from pipeflow.record.inputs import without_folder
    from pipeflow.report.html import report_page
    from pipeflow.report.written import write_text
    from pipeflow.study.design_file import design_file

    loaded = load_case(case)
    files = source_files(loaded)
    yield None
    found = design_file(without_folder(loaded))
    yield None
    write_text(page, report_page(found, files))
    yield _Done(case, page, found, FAILS if found.fails else 0)
