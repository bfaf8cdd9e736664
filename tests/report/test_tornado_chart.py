"""The tornado on the page: its bars are those of the study, told in words too."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import pytest

from pipeflow import load_case
from pipeflow.report.charts import tornado_chart_svg
from pipeflow.report.charts.labels import POINTS_PER_INCH, size_of
from pipeflow.report.charts.tornado import OFF, _figure, moving
from pipeflow.study.sampling.uncertainty import Bar, uncertainty
from pipeflow.units import significant

CASE = Path(__file__).parents[2] / "cases" / "thickener-underflow.yaml"


@pytest.fixture(scope="module")
def sampled():
    return uncertainty(load_case(CASE), samples=64, workers=1)


def test_each_end_stands_on_the_chart_and_in_its_description(sampled):
    svg = tornado_chart_svg(sampled)
    description = re.search(r"<desc[^>]*>(.*?)</desc>", svg, re.DOTALL).group(1)
    texts = re.findall(r"<text[^>]*>([^<]*)</text>", svg)
    for bar in sampled.tornado:
        if bar.width("head_loss") > 1e-6:
            for end in (bar.low["head_loss"], bar.high["head_loss"]):
                assert significant(end) in texts
                assert significant(end) in description
            assert bar.factor in texts


def test_no_figure_stands_on_the_name_of_its_input(sampled):
    """Figures end in the panel, names before it: a bar that reaches the left end leaves its figure room."""
    bar = next(bar for bar in sampled.tornado if bar.width("head_loss") > 1e-6)
    for low in (0.91, 0.9003, 0.9, 0.85):
        longest = Bar("method of friction", {"head_loss": low}, {"head_loss": 1.1})
        found = replace(sampled, median={**sampled.median, "head_loss": 1.0}, tornado=(longest,))
        figure = _figure(moving(found), 1.0)
        axes = figure.axes[0]
        written = next(one for one in axes.texts if one.get_text() == significant(low))
        width = size_of(written.get_text())[0] * figure.dpi / POINTS_PER_INCH
        ends = axes.transData.transform((low, 0.0))[0] - OFF * figure.dpi / POINTS_PER_INCH
        assert ends - width >= axes.get_window_extent().x0
    assert bar.factor


def test_the_two_sides_differ_by_more_than_shade(sampled):
    assert "<pattern" in tornado_chart_svg(sampled)


def test_the_same_case_gives_the_same_bytes(sampled):
    assert tornado_chart_svg(sampled) == tornado_chart_svg(sampled)
