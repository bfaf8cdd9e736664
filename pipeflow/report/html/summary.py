"""What stands at the head of a page: the job, who signs, the figures in brief."""

from __future__ import annotations

from collections.abc import Iterator

from pipeflow.case.model import Case, Job
from pipeflow.report.curve_page import ranking_rows
from pipeflow.report.html.about_vendor import governing_text
from pipeflow.report.rows import MARK, number
from pipeflow.study.design_file import DesignFile
from pipeflow.units import format_value


def job_rows(case: Case, file: str) -> Iterator[tuple[str, str]]:
    """What the document is of; a dash where the case does not say."""
    job = case.job
    yield "project", job.project or "–"
    yield "client", job.client or "–"
    yield "number", job.number or "–"
    yield "revision", case.revision or "–"
    yield "date", job.date or "–"
    yield "case file", file


def signatures(job: Job) -> tuple[tuple[str, str], ...]:
    """Who prepared, checked and approved it; empty where a name is still to come."""
    return ("prepared", job.prepared_by), ("checked", job.checked_by), ("approved", job.approved_by)


def summary_rows(found: DesignFile) -> Iterator[tuple[str, str]]:
    """The figures that a reader turns to first."""
    result, case = found.result, found.case
    totals, profile = result.totals, result.profile
    yield "flow, design", format_value(case.flow.design, "volume flow")
    yield "head loss", f"{number(totals.head_loss)} m of slurry, upper {number(totals.head_loss_upper)} m"
    yield "static head", f"{number(totals.static_head)} m"
    upper = f"{number(profile.pump_head_upper)} m, {number(profile.pump_pressure_upper, 'kPa')} kPa"
    yield "pump head at design flow, upper", upper
    governing = governing_text(found.vendor)
    if governing:
        yield "governing duty, upper figure, to the vendor", governing
    regimes = dict.fromkeys(element.regime for element in result.elements if element.regime)
    if regimes:
        yield "regime", ", ".join(regimes)
    yield "checks of the line, in every scenario", _counts(found)
    for verdict, _ in list(ranking_rows(found.curve.ranking))[:1]:
        yield "pump ranked first", verdict
    if found.sizing and found.sizing.selected:
        yield "smallest size that passes", found.sizing.selected.size


def _counts(found: DesignFile) -> str:
    statuses = [check.status for check in found.checks_of_line]
    counted = [f"{statuses.count(status)} {MARK[status]}" for status in reversed(MARK) if status in statuses]
    return ", ".join(counted) or "none stated"
