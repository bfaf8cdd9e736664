"""The tornado on the page: its bars are those of the study, told in words too."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from pipeflow import load_case
from pipeflow.report.charts import tornado_chart_svg
from pipeflow.study.sampling.uncertainty import uncertainty
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


def test_the_two_sides_differ_by_more_than_shade(sampled):
    assert "<pattern" in tornado_chart_svg(sampled)


def test_the_same_case_gives_the_same_bytes(sampled):
    assert tornado_chart_svg(sampled) == tornado_chart_svg(sampled)
