"""The page of one case, put together."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from pipeflow import __version__
from pipeflow.case.source_files import SourceFile
from pipeflow.record.inputs import digest, encoded, without_folder
from pipeflow.report.html.about_line import line_sections
from pipeflow.report.html.about_pumps import pump_sections
from pipeflow.report.html.about_solids import solids_sections
from pipeflow.report.html.about_trust import safety_section, trust_sections
from pipeflow.report.html.about_uncertainty import uncertainty_sections
from pipeflow.report.html.blocks import Block, Section, Table, Text, Verbatim, names_and_values, section
from pipeflow.report.html.rendering import rendered
from pipeflow.report.html.summary import job_rows, signatures, summary_rows
from pipeflow.report.judged import judged_texts
from pipeflow.study.design_file import DesignFile

LONGEST_LISTING = 400
"""A file of more lines is named by its hash, not printed."""


def report_page(found: DesignFile, files: Sequence[SourceFile]) -> str:
    """Write the page of a case.

    Parameters
    ----------
    found : DesignFile
    files : sequence of SourceFile
        The case file, and those it names.

    Returns
    -------
    str
        An HTML document; the same case gives the same bytes.
    """
    case = found.case
    return rendered(
        "report.html.j2",
        case=case,
        running=f"{case.title}{f', revision {case.revision}' if case.revision else ''}",
        preliminary=found.is_preliminary,
        not_checked=judged_texts(found.not_checked, found.conditions),
        failing=judged_texts(found.failing, found.conditions),
        job=tuple(job_rows(case, files[0].name)),
        signatures=signatures(case.job),
        sections=tuple(_sections(found, files)),
        version=__version__,
    )


def _sections(found: DesignFile, files: Sequence[SourceFile]) -> Iterator[Section]:
    yield from section("summary", "Summary", names_and_values("Summary", summary_rows(found)))
    yield from line_sections(found)
    yield from solids_sections(found.solids)
    yield from uncertainty_sections(found.uncertainty)
    yield from pump_sections(found)
    yield from trust_sections(found)
    yield from safety_section()
    yield from section("inputs", "Inputs as read", _inputs(found, files))


def _inputs(found: DesignFile, files: Sequence[SourceFile]) -> Iterator[Block]:
    inputs = digest(encoded(without_folder(found.case)))
    hashes = [("all inputs, in SI, whatever their spelling", inputs), *((one.name, one.sha256) for one in files)]
    yield Text(f"Worked out by pipeflow {__version__}. A file is the one read here if its SHA-256 is the same.")
    yield Table("SHA-256 of the inputs", (), tuple(hashes), frozenset({0, 1}), "hashes")
    for one in files:
        lines = tuple(one.text.splitlines())
        if len(lines) > LONGEST_LISTING:
            yield Text(f"{one.name}: {len(lines)} lines, not printed.")
        else:
            yield Verbatim(one.name, lines)
