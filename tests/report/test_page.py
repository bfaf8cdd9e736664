"""The page for the design file: its structure, what it says, and that names from a case stay text."""

from __future__ import annotations

import re
import subprocess
import sys
from dataclasses import replace
from itertools import pairwise
from pathlib import Path

import pytest
from hostile import NAMES, spoilt
from reading import Element, read

from pipeflow.case.model import Job
from pipeflow.case.source_files import SourceFile, source_files
from pipeflow.report.html import index_page, report_page
from pipeflow.report.html.index import IndexRow, index_row
from pipeflow.report.html.page import LONGEST_LISTING
from pipeflow.report.html.rendering import css_string
from pipeflow.report.judged import judged_texts
from pipeflow.study.design_file import Judged, design_file
from pipeflow.study.result import SAFETY_NOTICE
from pipeflow.verdict import Check

TITLES = (
    "Summary", "Fluid and basis", "Route", "Flow at design, 140.0 m3/h", "Totals", "Pressure and head along the route",
    "How sure the answer is", "System curve and pumps", "Sizes of suction line, discharge line, tank inlet", "Checks",
    "Scenarios side by side, at design flow", "Assumed inputs, by their effect on the head", "Cautions", "Methods",
    "Before relying on this", "Inputs as read",
)  # fmt: skip


@pytest.fixture(scope="module")
def page(thickener):
    return report_page(thickener, source_files(thickener.case))


@pytest.fixture(scope="module")
def tree(page):
    return read(page)


def titles(tree: Element) -> list[str]:
    return [re.sub(r"^[0-9]+\. ", "", one.text) for one in tree.every("h2")]


def said(tree: Element, key: str) -> str:
    return next(one for one in tree.every("section") if one.attributes["id"] == key).text


def test_the_sections_stand_in_order(tree):
    assert titles(tree) == list(TITLES)
    places = [one.attributes["href"] for one in tree.every("nav")[0].every("a")]
    assert places == [f"#{one.attributes['id']}" for one in tree.every("section")]


def test_headings_descend_by_one(tree):
    levels = [int(one.tag[1]) for one in tree.every("h1", "h2", "h3", "h4")]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert all(after <= before + 1 for before, after in pairwise(levels))


def test_every_table_has_heads_with_a_scope_and_a_caption(tree):
    tables = tree.every("table")
    assert len(tables) > 10
    for table in tables:
        assert table.every("caption")[0].text
        heads = table.every("th")
        assert heads
        assert {one.attributes["scope"] for one in heads} <= {"row", "col"}
        assert all(one.text for one in table.every("thead") for one in one.every("th"))


def test_every_picture_says_what_it_shows(tree):
    pictures = tree.every("svg", "img")
    assert len(pictures) >= 3
    for one in pictures:
        assert one.attributes["role"] == "img"
        assert one.every("title")[0].text
        assert one.every("desc")[0].text
    assert all(one.every("figcaption")[0].text for one in tree.every("figure"))


def test_no_name_of_a_place_is_given_twice(tree):
    names = [one.attributes["id"] for one in tree.every() if "id" in one.attributes]
    assert len(names) == len(set(names))
    places = {one.attributes["aria-labelledby"] for one in tree.every() if "aria-labelledby" in one.attributes}
    assert places <= set(names)


def test_nothing_runs_and_nothing_is_loaded_from_elsewhere(page, tree):
    assert not tree.every("script", "iframe", "object", "embed", "link", "base", "form")
    for one in tree.every():
        assert not [key for key in one.attributes if key.startswith("on")]
        for key in ("src", "href", "xlink:href", "action", "poster", "srcset"):
            assert one.attributes.get(key, "#").startswith("#")
    assert "@import" not in page
    assert not re.search(r"url\((?!#)", page)


def test_the_language_and_the_letters_are_said(page, tree):
    assert page.startswith("<!DOCTYPE html>\n")
    assert tree.every("html")[0].attributes["lang"] == "en"
    assert tree.every("meta")[0].attributes["charset"] == "utf-8"


def test_the_same_case_gives_the_same_bytes(page, thickener):
    assert report_page(thickener, source_files(thickener.case)) == page


def test_a_fresh_process_gives_the_same_bytes(filtrate):
    code = (
        "from pipeflow import load_case\n"
        "from pipeflow.case.source_files import source_files\n"
        "from pipeflow.report.html import report_page\n"
        "from pipeflow.study.design_file import design_file\n"
        "import sys\n"
        "case = load_case(sys.argv[1])\n"
        "sys.stdout.buffer.write(report_page(design_file(case), source_files(case)).encode())\n"
    )
    run = subprocess.run([sys.executable, "-c", code, filtrate.case.file], capture_output=True, check=True)
    assert run.stdout.decode() == report_page(filtrate, source_files(filtrate.case))


def test_what_is_not_checked_makes_the_page_preliminary(page, filtrate):
    assert ">PRELIMINARY</p>" in page
    assert "Not checked: pipe wall." in page
    checked = tuple(replace(check, status="ok") if check.status == "not checked" else check
                    for check in filtrate.result.checks)  # fmt: skip
    done = replace(filtrate, result=replace(filtrate.result, checks=checked))
    assert "PRELIMINARY" not in report_page(done, source_files(filtrate.case))


def with_pump_check(found, status, *, holds, pump="candidate A"):
    """The case with one check of one pump in another state, and only the pumps of ``holds`` holding."""
    own = found.curve.own
    odd = Check("motor_power", status, None, None, "W", "by hand", needs=("pumps.motor",))
    pumps = tuple(replace(one, checks=(*one.checks, odd) if one.name == pump else one.checks) for one in own.pumps)
    ranking = sorted(
        (replace(one, holds=one.name in holds) for one in found.curve.ranking), key=lambda one: not one.holds
    )
    curve = replace(found.curve, conditions=(replace(own, pumps=pumps), *found.curve.conditions[1:]),
                    ranking=tuple(ranking))  # fmt: skip
    return replace(found, curve=curve)


def not_checked(found):
    return judged_texts(found.not_checked, found.conditions)


def test_a_pump_that_is_out_does_not_keep_the_page_preliminary(thickener):
    own = not_checked(thickener)
    assert "motor power of candidate A (the case)" not in own
    in_use = with_pump_check(thickener, "not checked", holds=("candidate A",))
    assert not_checked(in_use) == (*own, "motor power of candidate A (the case)")
    for holds in (("candidate B",), ()):
        assert not_checked(with_pump_check(thickener, "not checked", holds=holds)) == own
    page = report_page(in_use, source_files(thickener.case))
    assert "Not checked: pipe wall, motor power of candidate A (the case)." in page


def test_a_pump_fails_the_case_only_where_none_holds(thickener):
    held = with_pump_check(thickener, "fail", pump="candidate B", holds=("candidate A",))
    assert held.failing == ()
    assert index_row(held, Path("a.html")).pump == "candidate A"
    none = with_pump_check(thickener, "fail", holds=())
    assert "motor power of candidate A (the case)" in judged_texts(none.failing, none.conditions)
    assert none.fails
    row = index_row(none, Path("a.html"))
    assert (row.pump, row.worst) == ("none holds", "FAIL")


def test_conditions_are_named_where_a_check_is_not_theirs_all():
    check = Check("head_loss", "fail", 2.0, 1.0, "m", "")
    everywhere = [Judged(name, check) for name in ("the case", "thick")]
    assert judged_texts(everywhere, ("the case", "thick")) == ("head loss",)
    assert judged_texts(everywhere[1:], ("the case", "thick")) == ("head loss (thick)",)
    assert judged_texts([Judged("thick", check, "candidate B")], ("the case", "thick")) == (
        "head loss of candidate B (thick)",
    )


def test_the_index_tells_revision_and_what_is_still_to_be_checked(thickener, filtrate):
    row = index_row(thickener, Path("a.html"))
    assert (row.revision, row.pump, row.status) == ("A", "candidate A", "preliminary")
    checked = tuple(replace(check, status="ok") for check in filtrate.result.checks)
    done = index_row(replace(filtrate, result=replace(filtrate.result, checks=checked)), Path("b.html"))
    assert (done.pump, done.status) == ("–", "every check made")
    tree = read(index_page([row, done]))
    heads = [one.text for one in tree.every("thead")[0].every("th")]
    assert heads[:3] == ["case", "title", "revision"]
    assert [len(one.children) for one in tree.every("tbody")[0].every("tr")] == [len(heads)] * 2


def test_the_chart_promises_only_the_duties_it_draws(thickener):
    own = thickener.curve.own
    pumps = tuple(replace(one, duty_upper=one.duty) for one in own.pumps)
    alike = replace(thickener, curve=replace(thickener.curve, conditions=(replace(own, pumps=pumps),)))
    first = own.pumps[0]
    higher = replace(first.duty, head=1.05 * first.duty.head)
    apart = replace(own, pumps=(replace(first, duty_upper=higher, speed_upper=110.0), *pumps[1:]))
    moved = replace(thickener, curve=replace(thickener.curve, conditions=(apart,)))
    both, two = (said(read(report_page(one, source_files(one.case))), "system") for one in (alike, moved))
    assert "on the central curve and the upper alike" in both
    assert "candidate A upper" not in both
    assert "empty ones on the upper, there at the speed that it asks for" in two
    assert "candidate A upper" in two


def test_a_check_that_fails_is_said_at_the_head(filtrate):
    failing = (Check("head_loss", "fail", 20.0, 18.0, "m", "at maximum flow"),)
    done = replace(filtrate, result=replace(filtrate.result, checks=failing))
    tree = read(report_page(done, source_files(filtrate.case)))
    assert "FAIL: a limit or check does not hold: head loss." in tree.every("header")[0].text
    assert "20.00 m, at most 18.00 m" in said(tree, "checks")


def test_the_job_and_the_names_to_sign_are_shown(filtrate):
    job = Job("Filter feed", "Kestrel Ridge", "KR-310-07", "A. Moreno", "", "", "2026-03-12")
    done = replace(filtrate, result=replace(filtrate.result, case=replace(filtrate.case, job=job)))
    head = read(report_page(done, source_files(filtrate.case))).every("header")[0]
    assert all(text in head.text for text in ("Filter feed", "Kestrel Ridge", "KR-310-07", "2026-03-12"))
    rows = [[cell.text for cell in row.every("td")] for row in head.every("tbody")[0].every("tr")]
    assert rows == [["A. Moreno", "", ""], ["", "", ""], ["", "", ""]]


def test_the_figures_are_those_of_the_result(tree, thickener):
    totals, profile = thickener.result.totals, thickener.result.profile
    assert f"{totals.head_loss:.2f}" in said(tree, "totals")
    assert f"{profile.pump_head_upper:.2f} m of slurry" in said(tree, "totals")
    assert "To the vendor of the pump goes the upper figure" in said(tree, "totals")
    assert "candidate A: holds in every condition" in said(tree, "summary")
    assert "NPS 6 Sch 40, the smallest that passes." in said(tree, "sizes")
    assert "Rabinowitsch, Z. phys. Chem. A145, 1 (1929)" in said(tree, "methods")
    assert SAFETY_NOTICE in said(tree, "safety")
    for caution in thickener.result.cautions:
        assert caution in said(tree, "cautions")


def test_the_inputs_stand_as_read_with_their_hashes(tree, thickener):
    inputs = said(tree, "inputs")
    files = source_files(thickener.case)
    assert [one.name for one in files] == [
        "thickener-underflow.yaml", "thickener-underflow-pump-a.csv", "thickener-underflow-pump-b.csv",
    ]  # fmt: skip
    for one in files:
        assert one.sha256 in inputs
        assert all(line.strip() in inputs for line in one.text.splitlines())


def test_the_files_of_readings_are_among_the_inputs(readings):
    names = [one.name for one in source_files(readings.case)]
    assert names == ["thickener-underflow-readings.yaml", *(f"thickener-underflow-{part}.csv" for part in (48, 52, 56))]


def test_a_long_file_is_named_but_not_printed(filtrate):
    long = SourceFile("long.yaml", "key: value\n" * (LONGEST_LISTING + 1), "0" * 64)
    assert f"long.yaml: {LONGEST_LISTING + 1} lines, not printed." in report_page(filtrate, [long])


def test_readings_are_on_the_page(readings):
    basis = said(read(report_page(readings, source_files(readings.case))), "basis")
    assert "thickener-underflow-52.csv: herschel-bulkley, solids 0.52" in basis
    assert "yield stress power 9.342 Pa" in re.sub(r"\s+", " ", basis)


@pytest.mark.parametrize("first", range(0, len(NAMES), 5))
def test_names_stay_text(first, case_of):
    case = spoilt(case_of("thin-filtrate"), first)
    page = report_page(design_file(case), [SourceFile(name, name, "0" * 64) for name in NAMES])
    tree = read(page)
    assert not tree.every("script", "img")
    assert {one.tag for one in tree.every() if one.tag.endswith("svg")} == {"svg"}
    assert not [key for one in tree.every() for key in one.attributes if key.startswith("on")]
    assert len(tree.every("style")) == 1
    assert titles(tree)[-1] == "Inputs as read"
    assert all(char.isprintable() or char == "\n" for char in page)
    assert "{{ 7 * 7 }}" in tree.text
    assert NAMES[0] in tree.text


def test_a_name_in_the_style_sheet_cannot_leave_its_string():
    for name in NAMES:
        inside = css_string(name)[1:-1]
        assert not re.search(r"[^A-Za-z0-9\\ ]", inside)
        assert css_string(name)[0] == css_string(name)[-1] == '"'


def test_names_stay_text_in_the_index():
    rows = [IndexRow(link="a.html", case=name, title=name, flow=name, worst=name, status=name) for name in NAMES]
    tree = read(index_page(rows))
    assert not tree.every("script", "img", "svg")
    assert len(tree.every("tbody")[0].every("tr")) == len(NAMES)
