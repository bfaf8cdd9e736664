"""The pages in a real browser: they render, keep to the width of the screen, and print on A4."""

from __future__ import annotations

import io
import re
import sys
from dataclasses import replace
from pathlib import Path
from unicodedata import normalize

import pytest
from browser import Page, running
from pypdf import PdfReader
from typer.testing import CliRunner

from pipeflow.case.loading import load_case
from pipeflow.case.source_files import SourceFile
from pipeflow.cli import app
from pipeflow.line.elements import Vessel
from pipeflow.report.html import report_page
from pipeflow.study.design_file import design_file

sys.path.append(str(Path(__file__).parents[1] / "report"))
from hostile import NAMES, spoilt

pytestmark = pytest.mark.browser

CASES = Path(__file__).parents[2] / "cases"
NAMES_OF_CASES = sorted(path.stem for path in CASES.glob("*.yaml"))
PRESSED = "pressed"
"""A page whose chart has ticks of five figures."""
HOSTILE = ("hostile-0", "hostile-6")
WIDTHS = (1280, 390)
A4 = (595.0, 842.0)
TEXT_OF_A4 = 642
"""Width of a printed line, CSS pixels."""
FEWEST_PAGES, MOST_PAGES = 6, 20
OUTSIDE = """
[...document.querySelectorAll('body *')].filter(one => !one.closest('svg, .said, caption')
  && one.getBoundingClientRect().right > window.innerWidth + 1
  && !one.closest('.scroll > *')).map(one => one.tagName + ' ' + one.textContent.slice(0, 40))
"""

CUT = """
[...document.querySelectorAll('svg')].flatMap(svg => {
  const edge = svg.getBoundingClientRect();
  return [...svg.querySelectorAll('text')].filter(one => {
    const box = one.getBoundingClientRect();
    return box.left < edge.left - 1 || box.right > edge.right + 1 || box.top < edge.top - 1
      || box.bottom > edge.bottom + 1;
  }).map(one => one.textContent.trim());
})
"""


def plain(text: str) -> str:
    """Letters without the spaces, which are guessed from a printed page; letters joined in print are taken apart."""
    return "".join(normalize("NFKC", text).split())


@pytest.fixture(scope="module")
def browser(tmp_path_factory):
    with running(tmp_path_factory.mktemp("profile")) as found:
        yield found


@pytest.fixture(scope="module")
def pages(tmp_path_factory):
    """Pages of every demo case, their index, and pages of hostile names."""
    folder = tmp_path_factory.mktemp("pages")
    cases = [str(CASES / f"{name}.yaml") for name in NAMES_OF_CASES]
    result = CliRunner().invoke(app, ["report", *cases, "-o", str(folder)])
    assert result.exit_code <= 1, result.output
    for name in HOSTILE:
        case = spoilt(load_case(CASES / "thin-filtrate.yaml"), int(name.rsplit("-", 1)[1]))
        files = [SourceFile(one, one, "0" * 64) for one in NAMES]
        (folder / f"{name}.html").write_text(report_page(design_file(case), files), encoding="utf-8")
    filtrate = load_case(CASES / "thin-filtrate.yaml")
    pressed = replace(filtrate, source=Vessel(pressure=2e7, level=4.0))
    (folder / f"{PRESSED}.html").write_text(report_page(design_file(pressed), files), encoding="utf-8")
    return folder


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("name", [*NAMES_OF_CASES, *HOSTILE, "index"])
def test_a_page_renders_within_the_screen(name, width, browser, pages):
    address = (pages / f"{name}.html").as_uri()
    page = Page(browser, address, width)
    try:
        assert page.complaints == []
        assert page.asked_for == [address]
        assert page.value("window.innerWidth") == width
        assert page.value("document.documentElement.scrollWidth") <= width
        assert page.value(OUTSIDE) == []
        assert page.value("document.querySelector('h1').getBoundingClientRect().height") > 10
        assert page.value("document.scripts.length") == 0
    finally:
        page.close()


@pytest.mark.parametrize("width", WIDTHS)
def test_charts_are_drawn(width, browser, pages):
    page = Page(browser, (pages / "thickener-underflow.html").as_uri(), width)
    try:
        sizes = page.value("[...document.querySelectorAll('svg')].map(one => one.getBoundingClientRect().width)")
        assert len(sizes) >= 3
        assert all(500 <= size <= 700 for size in sizes)
        assert page.value("[...document.querySelectorAll('svg text')].every(one => one.getBBox().width > 0)")
    finally:
        page.close()


@pytest.mark.parametrize("name", [*NAMES_OF_CASES, PRESSED])
def test_no_name_on_a_chart_is_cut_at_its_edge(name, browser, pages):
    page = Page(browser, (pages / f"{name}.html").as_uri(), 1280)
    try:
        assert page.value(CUT) == []
    finally:
        page.close()


def test_the_index_is_whole_on_a_wide_screen_and_in_print(browser, pages):
    page = Page(browser, (pages / "index.html").as_uri(), 1280)
    beyond = "(one => one.scrollWidth - one.clientWidth)(document.querySelector('.scroll'))"
    try:
        assert page.value(beyond) == 0
        page.ask("Emulation.setEmulatedMedia", media="print")
        page.ask("Emulation.setDeviceMetricsOverride", width=TEXT_OF_A4, height=900, deviceScaleFactor=1, mobile=False)
        assert page.value(beyond) == 0
    finally:
        page.close()


def test_what_scrolls_on_a_narrow_screen_says_so(browser, pages):
    page = Page(browser, (pages / "thickener-underflow.html").as_uri(), 390)
    try:
        hint = "getComputedStyle(document.querySelector('figcaption'), '::before').content"
        assert "Scroll the chart sideways" in page.value(hint)
        assert "gradient" in page.value("getComputedStyle(document.querySelector('.scroll')).backgroundImage")
        page.ask("Emulation.setDeviceMetricsOverride", width=1280, height=900, deviceScaleFactor=1, mobile=False)
        assert page.value(hint) == "none"
        page.ask("Emulation.setEmulatedMedia", media="print")
        assert page.value("getComputedStyle(document.querySelector('.scroll')).backgroundImage") == "none"
    finally:
        page.close()


@pytest.mark.parametrize("name", NAMES_OF_CASES)
def test_a_page_prints_on_a4(name, browser, pages):
    page = Page(browser, (pages / f"{name}.html").as_uri(), 1280)
    try:
        printed = PdfReader(io.BytesIO(page.pdf()))
        titles = page.value("[...document.querySelectorAll('h2')].map(one => one.textContent)")
        running_title = page.value("document.title")
    finally:
        page.close()
    count = len(printed.pages)
    assert FEWEST_PAGES <= count <= MOST_PAGES
    texts = [plain(one.extract_text()) for one in printed.pages]
    for number, (one, text) in enumerate(zip(printed.pages, texts, strict=True), start=1):
        assert (float(one.mediabox.width), float(one.mediabox.height)) == pytest.approx(A4, abs=1.0)
        assert plain(running_title) in text
        assert "PRELIMINARY" in text
        assert f"Page{number}of{count}" in text
    whole = "".join(texts)
    # the last place of each, for the list of contents has them too
    places = [whole.rindex(plain(title)) for title in titles]
    assert places == sorted(places)
    assert places[0] > whole.index(plain(titles[-1]))


def test_a_heading_is_not_left_alone_at_the_foot(browser, pages):
    """The last words of a printed page, its foot left out, are never a heading."""
    page = Page(browser, (pages / "thickener-underflow.html").as_uri(), 1280)
    try:
        printed = PdfReader(io.BytesIO(page.pdf()))
        headings = page.value("[...document.querySelectorAll('h2, h3')].map(one => one.textContent)")
    finally:
        page.close()
    for one in printed.pages:
        text = plain(one.extract_text())
        body = re.sub(r"pipeflow[0-9.]+|Page[0-9]+of[0-9]+", "", text)
        assert not any(body.endswith(heading) for heading in map(plain, headings))
