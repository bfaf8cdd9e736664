"""``pipeflow solve --uncertainty``: the page, the document, and what is refused."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from pathlib import Path

import pytest
from typer.testing import CliRunner

from pipeflow.case.loading import load_text
from pipeflow.cli import app
from pipeflow.cli import solve as solve_command
from pipeflow.report.html.about_uncertainty import uncertainty_sections
from pipeflow.report.html.blocks import Items
from pipeflow.report.uncertainty_document import uncertainty_document
from pipeflow.report.uncertainty_page import tornado_lines, uncertainty_page
from pipeflow.study import solve
from pipeflow.study.sampling.uncertainty import Bar, uncertainty

CASES = Path(__file__).parents[2] / "cases"

CASE = """title: Sure or not
fluid:
  density: 1380 kg/m3
  solids: {density: 2650 kg/m3, mass_fraction: 0.45, d85: 90 µm}
  liquid: {density: 998 kg/m3, viscosity: 1 mPa.s}
  rheology:
    model: bingham
    yield_stress: {law: power, a: 130 Pa, b: 4, tested: 0.40 .. 0.50}
    plastic_viscosity: 20 mPa.s
flow: 140 m3/h
route:
  - {pipe: a discharge line of a rather long name to the far thickener, diameter: 150 mm, length: 300 m}
limits: {head_loss: 16 m}
uncertainty:
  fluid.solids.mass_fraction: ± 0.08
  fluid.rheology.plastic_viscosity: normal 60 %
  route[a discharge line of a rather long name to the far thickener].length: ± 5 m
scenarios:
  thin: {fluid.rheology.plastic_viscosity: 10 mPa.s}
"""


@pytest.fixture
def case(tmp_path: Path) -> Path:
    path = tmp_path / "line.yaml"
    path.write_text(CASE, encoding="utf-8")
    return path


def run(*arguments: object):
    return CliRunner().invoke(app, ["solve", *map(str, arguments)])


def test_the_page_fits_80_columns_and_has_its_sections(case):
    page = run(case, "--uncertainty", "--samples", 128).stdout
    section = page[page.index("How sure is the answer") :]
    assert max(map(len, section.splitlines())) <= 80
    assert section.isprintable() or set(filter(lambda char: not char.isprintable(), section)) == {"\n"}
    for said in (
        "128 samples, drawn twice (seed 1)",
        "its scenarios are not sampled",
        "fluid.rheology.plastic_viscosity normal 60 %",
        "Probability that a limit fails",
        "What the spread of the head loss comes from",
        "Head loss with one input changed",
        "of 'normal 60 %' is not possible",
        "a law of the rheology is asked beyond the range tested in",
        "Not sampled, judged at the stated inputs alone:",
    ):
        assert said in " ".join(section.split()), said


def test_without_it_nothing_of_it_is_printed(case):
    assert "How sure" not in run(case).stdout
    assert "uncertainty" not in json.loads(run(case, "--json").stdout)


def test_the_document_is_one_line_of_json_with_its_figures(case):
    answer = run(case, "--uncertainty", "--json", "--samples", 256, "--seed", 5)
    (line,) = answer.stdout.splitlines()
    found = json.loads(line)["uncertainty"]
    assert (found["samples"], found["seed"], found["lines_solved"]) == (256, 5, 256 * 6)
    head = found["figures"]["head_loss_m"]
    assert head["p5"] < head["p50"] < head["p95"]
    assert head["standard_errors"]["p95"] > 0
    assert head["sensitivity"][0]["input"] == "fluid.solids.mass_fraction"
    assert {"p5", "sensitivity"} <= found["figures"]["hydraulic_power_W"].keys() & found["figures"][
        "total_head_m"
    ].keys()
    (limit, deposition) = found["limits"]
    assert limit["name"] == "head_loss"
    assert 0.0 < limit["probability_of_failing"] < 1.0
    assert deposition["name"] == "deposition"
    assert {one["input"] for one in found["tornado"]} == {one["name"] for one in found["inputs"]}
    impossible = {one["name"]: one["impossible_share"] for one in found["inputs"]}
    assert impossible["fluid.rheology.plastic_viscosity"] == pytest.approx(0.0478, abs=1e-4)
    assert {"saltelli-2010", "jansen-1999", "gum-rectangular"} <= {one["key"] for one in found["methods"]}


def test_the_same_command_prints_the_same_twice(case):
    arguments = (case, "--uncertainty", "--json", "--samples", 64)
    assert run(*arguments).stdout == run(*arguments).stdout


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (("--uncertainty", "--samples", "0"), "--samples  found 0 samples; from 64 to"),
        (("--uncertainty", "--samples", "-64"), "--samples  found -64 samples"),
        (
            ("--uncertainty", "--samples", "1000"),
            "a power of two is needed, where the points are balanced: 512 or 1024",
        ),
        (("--uncertainty", "--samples", "1" + "0" * 30), "samples; from 64 to"),
        (("--uncertainty", "--samples", "1e9"), "found '1e9'; a whole number is needed, in digits alone, as 4096"),
        (("--uncertainty", "--seed", "0.5"), "Invalid value for '--seed': found '0.5'; a whole number is needed"),
        (("--uncertainty", "--seed", "-1"), "--seed  found the seed -1"),
        (("--samples", "64"), "--samples  is of --uncertainty, which is not asked for"),
        (("--seed", "2"), "--seed  is of --uncertainty"),
    ],
)
def test_samples_that_are_not_accepted(case, arguments, words):
    answer = run(case, *arguments)
    assert answer.exit_code == 2
    assert words in answer.stderr
    assert answer.stdout == ""


def test_nothing_uncertain_is_told(tmp_path):
    path = tmp_path / "sure.yaml"
    text = CASE.partition("uncertainty:")[0]
    newtonian = (
        text[: text.index("    model")] + "    {model: newtonian, viscosity: 2 mPa.s}\n" + text[text.index("flow:") :]
    )
    path.write_text(newtonian, encoding="utf-8")
    answer = run(path, "--uncertainty")
    assert answer.exit_code == 2
    assert answer.stderr == (
        f"{path}  uncertainty  nothing in the case is uncertain; give it inputs with their tolerances "
        "(docs/uncertainty.md)\n"
    )


def test_lines_without_an_answer_are_told():
    result = uncertainty(load_text(CASE), samples=64)
    page = " ".join(uncertainty_page(replace(result, lost=37)).split())
    assert "no answer in 37 of the lines solved (9.6 %); no figure holds them" in page


def test_bars_stand_on_either_side_of_the_middle():
    bars = [
        Bar("wide", {"head_loss": 10.0}, {"head_loss": 40.0}),
        Bar("turned", {"head_loss": 25.0}, {"head_loss": 15.0}),
        Bar("one side", {"head_loss": 20.0}, {"head_loss": 30.0}),
    ]
    lines = list(tornado_lines(bars, 20.0))
    middles = {line.index("|") for line in lines}
    assert len(middles) == 1
    middle = middles.pop()
    assert lines[0].count("-") == 10
    assert lines[0].count("+") == 19
    assert "+" in lines[1][:middle]
    assert "-" in lines[1][middle:]
    assert lines[2][middle - 1] == " "


FITTED = """title: Of readings
fluid: {{density: 1420 kg/m3, rheology: {{flow_curve: thickener-underflow-52.csv}}}}
flow: 140 m3/h
route:
  - {{pipe: line, diameter: 150 mm, length: 100 m}}
limits: {{head_loss: 5 m}}
uncertainty:
  {line}
"""
FROM_LOW = "fluid.rheology.yield_stress: uniform 9 .. 30 Pa"


def fitted(line: str):
    return uncertainty(load_text(FITTED.format(line=line), str(CASES / "case.yaml")), samples=256, workers=1)


def words_of(result) -> str:
    return " ".join(uncertainty_page(result).split())


def test_a_long_tolerance_is_shown_whole():
    page = uncertainty_page(fitted("fluid.rheology.consistency: uniform 0.5 Pa.s^n .. 0.75 Pa.s^n"))
    rows = page[page.index("known to") : page.index("Figures at design")].splitlines()[1:3]
    assert "".join(row[28:50].strip() + " " for row in rows) == "uniform 0.5 Pa.s^n .. 0.75 Pa.s^n "
    assert max(map(len, page.splitlines())) <= 80


def test_a_scatter_of_readings_that_is_left_out_is_told():
    left_out = "the scatter of the fit to the readings is left out: of the rheology fluid.rheology.yield_stress alone"
    assert left_out in words_of(fitted(FROM_LOW))
    without = fitted("flow: ± 5 %")
    assert "left out" not in words_of(without)
    assert [one.name for one in without.inputs] == ["flow", "readings", "method of friction"]


def test_a_case_near_the_end_of_its_range_and_unlike_its_samples_is_told():
    result = fitted(FROM_LOW)
    page = words_of(result)
    assert (
        f"yield_stress: {(30 - 9.523) / 21:.1%}".replace("%", " %") + " of the samples lie above the 9.523 Pa" in page
    )
    (odds,) = result.limits
    assert not odds.case_fails
    assert odds.probability.value > 0.5
    alone = solve(result.case)
    assert odds.of_case == pytest.approx(float(alone.totals.head_loss_upper), rel=1e-12)
    said = (
        f"head loss: the case itself has {odds.of_case:.3f} m and holds (upper figure); the median of the samples is "
    )
    assert f"{said}{odds.median:.3f} m, and most of them fail" in page
    limits = page[page.index("Probability that a limit fails") : page.index("What the spread")]
    assert said in limits
    assert "the case itself has" not in words_of(fitted("fluid.rheology.yield_stress: ± 5 %"))


def test_a_case_that_fails_while_most_samples_hold_is_told():
    text = CASE.replace("fluid.solids.mass_fraction: ± 0.08", "flow: uniform 90 .. 142 m3/h").replace("16 m", "12 m")
    found = uncertainty(load_text(text), samples=256, workers=1)
    assert "and fails (upper figure); the median of the samples is" in words_of(found)
    assert "and most of them hold" in words_of(found)


def test_a_part_left_out_is_marked_in_its_row_and_told_below_the_rows():
    page = uncertainty_page(uncertainty(load_text(CASE), samples=64))
    row, note = page.index("normal 60 % *"), page.index("* fluid.rheology.plastic_viscosity: 4.8 % of")
    assert row < note < page.index("Figures at design flow")


def test_what_does_not_vary_has_no_deviation():
    found = uncertainty(load_text(LEVEL_ALONE), samples=64)
    row = next(line for line in uncertainty_page(found).splitlines() if line.startswith("head loss"))
    assert row.split()[-4:] == ["0", "m", "±", "0"]


LEVEL_ALONE = """title: Level alone
fluid: {density: 1250 kg/m3, rheology: {model: newtonian, viscosity: 0.9 Pa.s}}
flow: 31.7 m3/h
route: [{pipe: line, diameter: 123 mm, length: 81.3 m}]
uncertainty: {source.level: ± 0.5 m}
"""


def test_the_document_tells_the_same():
    found = uncertainty_document(fitted(FROM_LOW))
    assert found["listed_instead_of_readings"] == ["fluid.rheology.yield_stress"]
    assert found["inputs"][0]["share_above_the_case"] == pytest.approx((30 - 9.523) / 21, abs=1e-4)
    assert found["limits"][0]["of_case_upper"] < 5.0 < found["limits"][0]["median_of_samples"]


def test_the_page_for_the_design_file_has_the_notes():
    sections = list(uncertainty_sections(fitted(FROM_LOW)))
    told = " ".join(item for block in sections[0].blocks if isinstance(block, Items) for item in block.items)
    assert "the scatter of the fit to the readings is left out" in told
    assert "the case itself has" in told


def test_a_number_of_points_is_refused_in_the_same_words(case):
    answer = CliRunner().invoke(app, ["sweep", str(case), "flow=80..120 m3/h", "--points", "1e3"])
    assert answer.exit_code == 2
    assert "Invalid value for '--points': found '1e3'; a whole number is needed, in digits alone" in answer.stderr


def test_work_of_minutes_is_told_beforehand_and_in_a_pipe_nothing_else(case, monkeypatch):
    arguments = (case, "--uncertainty", "--samples", 256)
    usual = run(*arguments)
    assert usual.stderr == ""
    monkeypatch.setattr(solve_command, "TELL_BEYOND", 0.0)
    told = run(*arguments)
    assert re.fullmatch(r"this takes about \d+ min; fewer --samples take less\n", told.stderr)
    assert told.stdout == usual.stdout


def test_deposition_in_flow_that_is_not_turbulent_is_not_judged():
    """None of the samples of the thickener's line is turbulent at minimum flow: none can fail, which proves nothing."""
    page = run(CASES / "thickener-underflow.yaml", "--uncertainty", "--samples", "256").stdout
    assert "not judged" in next(line for line in page.splitlines() if line.startswith("deposition  "))
