"""``pipeflow report``: where pages go, what they leave alone, and the status the command ends with."""

from __future__ import annotations

import shutil
from dataclasses import replace
from pathlib import Path

import pytest
from reading import read
from typer.testing import CliRunner

from pipeflow.cli import app
from pipeflow.cli.report import MOST_REASONS, _why_it_fails
from pipeflow.verdict import Check

CASES = Path(__file__).parents[2] / "cases"


def run(*arguments):
    return CliRunner().invoke(app, ["report", *(str(one) for one in arguments)])


@pytest.fixture
def case(tmp_path):
    """A small case that holds, in a folder of its own."""
    shutil.copy(CASES / "thin-filtrate.yaml", tmp_path / "line.yaml")
    return tmp_path / "line.yaml"


def failing(case: Path) -> Path:
    text = case.read_text(encoding="utf-8")
    other = case.with_name("failing.yaml")
    other.write_text(text.replace("head_loss: 18 m", "head_loss: 1 m"), encoding="utf-8")
    return other


def test_a_case_gives_a_page(case, tmp_path):
    page = tmp_path / "line.html"
    result = run(case, "-o", page)
    assert (result.exit_code, result.output) == (0, "")
    assert "Thin filtrate return" in read(page.read_text(encoding="utf-8")).every("h1")[0].text


def test_the_page_does_not_say_where_the_case_was(case, tmp_path):
    run(case, "-o", tmp_path / "line.html")
    assert str(tmp_path) not in (tmp_path / "line.html").read_text(encoding="utf-8")


def test_a_page_of_ours_is_replaced_with_the_same_bytes(case, tmp_path):
    page = tmp_path / "line.html"
    run(case, "-o", page)
    before = page.read_bytes()
    assert run(case, "-o", page).exit_code == 0
    assert page.read_bytes() == before
    assert sorted(path.name for path in tmp_path.iterdir()) == ["line.html", "line.yaml"]


def test_a_limit_that_fails_leaves_with_1_and_a_page_and_says_why(case, tmp_path):
    page = tmp_path / "line.html"
    result = run(failing(case), "-o", page)
    assert result.exit_code == 1
    assert page.is_file()
    assert result.stdout == ""
    assert result.stderr == f"{page}: written; FAIL: head loss\n"


def test_each_page_that_fails_has_a_line_of_its_own(case, tmp_path):
    result = run(failing(case), case, "-o", tmp_path / "pages")
    assert result.exit_code == 1
    assert result.stderr.splitlines() == [f"{tmp_path}/pages/failing.html: written; FAIL: head loss"]


def test_reasons_beyond_the_first_few_are_counted(filtrate):
    checks = tuple(Check(f"limit_{number}", "fail", 2.0, 1.0, "m", "") for number in range(MOST_REASONS + 2))
    found = replace(filtrate, result=replace(filtrate.result, checks=checks))
    line = _why_it_fails(found, Path("line.html"))
    assert line.endswith("limit 4, limit 5, 2 more")


@pytest.mark.parametrize("there", [True, False])
def test_several_cases_are_told_to_need_a_folder(there, case, tmp_path):
    page = tmp_path / "line.html"
    if there:
        run(case, "-o", page)
    result = run(case, failing(case), "-o", page)
    assert result.exit_code == 2
    assert "several cases need a folder, as pages/" in result.stderr
    assert page.is_file() is there
    assert not page.is_dir()


def test_several_cases_give_a_page_each_and_an_index(case, tmp_path):
    pages = tmp_path / "pages"
    bad = tmp_path / "bad.yaml"
    bad.write_text("title: nothing else\n", encoding="utf-8")
    result = run(bad, case, failing(case), "-o", pages)
    assert result.exit_code == 2
    assert "bad.yaml:1" in result.output
    assert sorted(path.name for path in pages.iterdir()) == ["failing.html", "index.html", "line.html"]
    rows = read((pages / "index.html").read_text(encoding="utf-8")).every("tbody")[0].every("tr")
    assert ["bad.yaml" in row.text for row in rows] == [True, False, False]
    assert "can't be used" in rows[0].text
    assert [one.attributes["href"] for one in rows[1].every("a")] == ["line.html"]
    assert "FAIL" in rows[2].text


def test_one_case_into_a_folder_has_an_index_too(case, tmp_path):
    assert run(case, "-o", f"{tmp_path}/pages/").exit_code == 0
    assert sorted(path.name for path in (tmp_path / "pages").iterdir()) == ["index.html", "line.html"]


def test_names_of_files_are_links_that_lead_to_them(case, tmp_path):
    odd = case.with_name("50 % a#b.yaml")
    shutil.copy(case, odd)
    assert run(odd, case, "-o", tmp_path / "pages").exit_code == 0
    links = read((tmp_path / "pages/index.html").read_text(encoding="utf-8")).every("a")
    assert links[0].attributes["href"] == "50%20%25%20a%23b.html"
    assert (tmp_path / "pages/50 % a#b.html").is_file()


def test_a_file_that_is_no_page_of_ours_is_left_alone(case, tmp_path):
    other = tmp_path / "line.html"
    other.write_text("<p>somebody else's</p>", encoding="utf-8")
    result = run(case, "-o", other)
    assert result.exit_code == 2
    assert "is no report of pipeflow" in result.output
    assert other.read_text(encoding="utf-8") == "<p>somebody else's</p>"


@pytest.mark.parametrize(
    ("output", "why"),
    [
        ("line.yaml", "the page is HTML"),
        ("nowhere/line.html", "can't be written: no such file or directory"),
        ("line.yaml/pages/", "the folder can't be made"),
    ],
)
def test_a_place_that_cannot_be_written_is_said(output, why, case, tmp_path):
    before = case.read_bytes()
    result = run(case, "-o", f"{tmp_path}/{output}")
    assert result.exit_code == 2
    assert why in result.output
    assert case.read_bytes() == before


def test_two_cases_of_one_name_are_refused(case, tmp_path):
    (tmp_path / "other").mkdir()
    twin = tmp_path / "other/line.yaml"
    shutil.copy(case, twin)
    result = run(case, twin, "-o", tmp_path / "pages")
    assert result.exit_code == 2
    assert "would both be line.html" in result.output


def test_the_output_must_be_named(case):
    assert run(case).exit_code == 2


def test_a_case_that_cannot_be_used_leaves_no_page(tmp_path):
    result = run(tmp_path / "missing.yaml", "-o", tmp_path / "line.html")
    assert result.exit_code == 2
    assert "no such file" in result.output
    assert not (tmp_path / "line.html").exists()
