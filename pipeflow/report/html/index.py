"""The page that leads to the pages of several cases."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from urllib.parse import quote

from pipeflow import __version__
from pipeflow.report.html.rendering import rendered
from pipeflow.report.rows import number, worst_mark
from pipeflow.study.design_file import DesignFile
from pipeflow.units import format_value


@dataclass(frozen=True)
class IndexRow:
    """One case in the list: where its page is, empty where there is none, and what it says in brief."""

    link: str
    case: str
    title: str
    revision: str = ""
    flow: str = ""
    head_loss: str = ""
    head_loss_upper: str = ""
    pump: str = ""
    worst: str = ""
    status: str = ""


def index_row(found: DesignFile, page: Path) -> IndexRow:
    """Say of a case what the list shows."""
    totals = found.result.totals
    return IndexRow(
        link=quote(page.name),
        case=found.case.file,
        title=found.case.title,
        revision=found.case.revision or "–",
        flow=format_value(found.case.flow.design, "volume flow"),
        head_loss=number(totals.head_loss),
        head_loss_upper=number(totals.head_loss_upper),
        pump=_pump(found),
        worst=worst_mark(one.check for one in found.judged),
        status="preliminary" if found.is_preliminary else "every check made",
    )


def _pump(found: DesignFile) -> str:
    if not found.curve.ranking:
        return "–"
    return found.first_pump or "none holds"


def unusable_row(case: str) -> IndexRow:
    """Say of a case that it could not be used."""
    return IndexRow(link="", case=case, title="", status="can't be used")


def index_page(rows: Sequence[IndexRow]) -> str:
    """Write the page."""
    return rendered("index.html.j2", rows=tuple(rows), version=__version__)
