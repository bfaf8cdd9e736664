"""``pipeflow sweep`` and ``pipeflow envelope`` as their users meet them."""

from __future__ import annotations

import csv
import io
import json
import re
import xml.etree.ElementTree as ElementTree
from pathlib import Path

import numpy as np
import pytest
from swept_lines import BINGHAM, FOLLOWING, FORM, LIMITED
from typer.testing import CliRunner

from pipeflow.case.axes import Axis
from pipeflow.case.variables import Variable
from pipeflow.cli import app
from pipeflow.report.charts import envelope_chart_svg, sweep_chart_svg
from pipeflow.report.charts.canvas import drawing
from pipeflow.report.charts.map_parts import contours, map_axes
from pipeflow.report.envelope_page import envelope_page
from pipeflow.report.sweep_document import envelope_document
from pipeflow.report.sweep_table import envelope_csv
from pipeflow.report.text import table
from pipeflow.study.ranges import envelope as study
from pipeflow.study.ranges.sweeping import solids_sweep

STRESS = "fluid.rheology.yield_stress"


@pytest.fixture
def case(tmp_path) -> str:
    return written(tmp_path, BINGHAM)


def written(folder: Path, fluid: str, more: str = LIMITED) -> str:
    path = folder / "line.yaml"
    text = FORM.format(fluid=fluid, flow="100 m3/h", more=more, diameter="150 mm")
    path.write_text(text, encoding="utf-8")
    return str(path)


def run(*arguments: object):
    return CliRunner().invoke(app, [str(one) for one in arguments])


def widest(page: str) -> int:
    return max(len(line) for line in page.splitlines() if "/" not in line)


def test_a_sweep_of_one_input(case, tmp_path):
    files = tmp_path / "sweep.csv", tmp_path / "sweep.svg"
    found = run("sweep", case, f"{STRESS}=2 .. 10 Pa", "--points", 5, "--csv", files[0], "--svg", files[1])
    assert found.exit_code == 1
    assert "yield stress 2.000 to 10.00 Pa, 5 points" in found.stdout
    # 230 kPa = 1.3 * 2 tau 4 L/D + rho g 5 m, L/D = 400 m/150 mm
    assert "FAIL     restart pressure: 5.995 to 10.00 Pa" in found.stdout
    assert widest(found.stdout) <= 80
    rows = list(csv.DictReader(io.StringIO(files[0].read_text(encoding="utf-8"))))
    assert [row[f"{STRESS} [Pa]"] for row in rows] == ["2.00000000", "4.00000000", "6.00000000", "8.00000000",
                                                       "10.0000000"]  # fmt: skip
    assert ElementTree.parse(files[1]).getroot().tag.endswith("svg")


def test_the_unit_may_stand_once_or_twice(case):
    pages = [run("sweep", case, f"{STRESS}={text}", "--points", 3).stdout
             for text in ("4..8Pa", "4 Pa..8 Pa", "4000 mPa .. 8 Pa", " 4 ..8 Pa ")]  # fmt: skip
    assert len(set(pages)) == 1
    assert "head loss, m: central and upper figure" in pages[-1]


def test_a_sweep_that_holds_everywhere_leaves_with_0(tmp_path):
    case = written(tmp_path, BINGHAM, "limits: {head_loss: 30 m}\n")
    found = run("sweep", case, "destination.level=3..4m", "--points", 3, "--json")
    assert found.exit_code == 0
    assert [point["status"] for point in json.loads(found.stdout)["points"]] == ["caution"] * 3


def test_a_sweep_of_two_inputs(case, tmp_path):
    found = run("sweep", case, f"{STRESS}=2..10Pa", "flow=40..120m3/h", "--points", 4, "--svg", tmp_path / "map.svg")
    assert "FAIL  velocity minimum" in found.stdout
    assert widest(found.stdout) <= 80
    assert ElementTree.parse(tmp_path / "map.svg").getroot().tag.endswith("svg")
    document = json.loads(run("sweep", case, f"{STRESS}=2..10Pa", "flow=40..120m3/h", "--points", 3, "--json").stdout)
    assert [axis["path"] for axis in document["axes"]] == [STRESS, "flow"]
    assert len(document["points"]) == 9
    assert {boundary["figure"] for boundary in document["boundaries"]} <= {"central", "upper"}


SPOILT = {
    "flow": "an input and its range are needed, PATH=FROM..TO",
    "flow=80": "a range is needed, as '5 .. 20 m3/h'",
    "flow=160..80 m3/h": "the lower end comes first and differs from the upper",
    "flow=80..80 m3/h": "the lower end comes first and differs from the upper",
    "flow=80..160": "without a unit; give one of m3/h",
    "flow=80..160 kPa": "kPa is a unit of pressure",
    "flow=a..b m3/h": "a range is needed",
    "flow=50...70 m3/h": "found '50...70 m3/h'; a range is needed, as '5 .. 20 m3/h'",
    "flow.design=1..2 m3/h": "the case gives its flow as flow",
    f"{STRESS}=-5..5 Pa": "found '-5 Pa'; must be 0 or more",
    "fluid.rheology.yield_stres=1..2 Pa": f"did you mean {STRESS}?",
    "fluid.solids.mass_fraction=0.1..0.2": "the case gives no solids",
    "route[long pipe].size=1..2": "vary route[long pipe].diameter",
    "=1..2": "this cannot be varied",
    f"{'x' * 5000}=1..2": "this cannot be varied",
    f"{STRESS}=1..1e400 Pa": "the number is too large",
}


@pytest.mark.parametrize("text", list(SPOILT), ids=lambda text: text[:40])
def test_a_range_that_cannot_be_used_is_worded(case, text):
    for command in ("sweep", "envelope"):
        found = run(command, case, text)
        if command == "envelope" and text.startswith("flow.design"):
            continue
        assert found.exit_code == 2
        assert SPOILT[text] in found.stderr
        assert found.stderr.startswith(f"{command}  ")
        assert len(found.stderr) < 700


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["sweep", "flow=1..2m3/h", f"{STRESS}=1..2Pa", "source.level=1..2m"], "found 3 ranges"),
        (["sweep", "flow=1..2m3/h", "flow=3..4m3/h"], "they are one quantity"),
        (["sweep", "flow=1..2m3/h", "--points", "10000000"], "found 10000000; from 2 to 1001"),
        (["sweep", "flow=1..2m3/h", "--points", "1"], "found 1; from 2"),
        (["sweep", "flow=1..2m3/h", f"{STRESS}=1..2Pa", "--points", "32"], "from 2 to 31 along each of two"),
        (["envelope", "source.level=1..2m", f"{STRESS}=1..2Pa"], "one is the flow, one another input"),
        (["envelope", "flow=1..2m3/h", "flow=1..2m3/h"], "one is the flow"),
        (["sweep", "flow=1..2m3/h", "--csv", "/no such folder/x.csv"], "can't be written"),
    ],
)
def test_ranges_that_do_not_go_together_are_worded(case, arguments, words):
    command, *rest = arguments
    found = run(command, case, *rest)
    assert found.exit_code == 2
    assert words in found.stderr
    assert not found.stdout


@pytest.fixture(scope="module")
def mapped(tmp_path_factory):
    """A small envelope of a line whose rheology follows its solids."""
    from pipeflow.case.loading import load_case

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(study, "COLUMNS", 13)
        patch.setattr(study, "ROWS", 5)
        return study.envelope(load_case(written(tmp_path_factory.mktemp("line"), FOLLOWING)))


def test_the_page_says_the_window_in_words(mapped):
    page = envelope_page(mapped)
    assert re.search(r"at 40\.0 % solids by mass \(the case\): [\d.]+ to [\d.]+ m3/h; lower end by", page)
    assert "o inside every limit" in page
    assert widest(page) <= 80


def test_the_document_has_every_boundary_with_its_limit(mapped):
    document = json.loads(json.dumps(envelope_document(mapped), allow_nan=False))
    by_name = {one["name"]: one for one in document["boundaries"]}
    assert by_name["velocity_maximum"]["limit"] == pytest.approx(2.2)
    assert by_name["velocity_maximum"]["sense"] == "at most"
    assert by_name["laminar until"]["limit"] is None
    assert len(document["window"]) == len(document["axes"][1]["values"])
    rows = list(csv.DictReader(io.StringIO(envelope_csv(mapped))))
    assert {row["boundary"] for row in rows} == set(by_name)


def test_figures_without_measure_keep_to_the_page(case):
    one = run("sweep", case, "flow=60..1e9 m3/h", "--points", 5).stdout
    two = run("sweep", case, "flow=60..1e9 m3/h", "route[long pipe].roughness=0.01..0.5 mm", "--points", 12).stdout
    for page in (one, two):
        assert widest(page) <= 80
        assert re.search(r"\d\.\de\d+F? ", page)
    assert "of 12 columns; --csv writes every point" in two
    assert "e+" not in one.split("Chart")[0].split("fastest")[1]
    usual = run("sweep", case, "flow=60..100 m3/h", "--points", 3).stdout
    assert "60.00  " in usual


def test_names_are_not_broken_within_a_word(case):
    page = run("sweep", case, "flow=60..80 m3/h", "fluid.rheology.plastic_viscosity=10..20 mPa.s").stdout
    assert {"plastic", "viscosity"} <= {word for line in page.splitlines() for word in line.split()}
    lines = list(table(["input", *"abcdefg"], [["fluid.rheology.plastic_viscosity", *["123456789"] * 7]], width=80))
    assert [line.split()[0] for line in lines[1:]] == ["fluid.", "rheology.", "plastic_", "viscosity"]


def test_bores_and_roughness_come_back_in_millimetres(case, tmp_path):
    for key, ends, told in (("diameter", "120..160 mm", "120.0 to 160.0 mm"), ("roughness", "0..2 mm", "0 to 2.000 mm"),
                            ("length", "10..20 m", "10.00 to 20.00 m")):  # fmt: skip
        path = tmp_path / f"{key}.csv"
        page = run("sweep", case, f"route[long pipe].{key}={ends}", "--points", 3, "--csv", path).stdout
        assert f"route[long pipe].{key} {told}, 3 points" in page
        assert path.read_text(encoding="utf-8").startswith(f"route[long pipe].{key} [{told[-2:].strip()}],")


def test_figures_of_lines_of_equal_value_are_not_cut_off_at_the_edge():
    """A field with a line close to the upper edge: every label lies within the panel, or there is none."""
    ends = Axis(Variable("flow", "", 1.0), (0.0, 1.0))
    with drawing("test"):
        figure, axes = map_axes(ends, ends)
        x, y = np.meshgrid(np.linspace(0.0, 1.0, 21), np.linspace(0.0, 1.0, 21))
        contours(axes, x[0], y[:, 0], 10.1 * y + 0.001 * x, 20)
        figure.canvas.draw()
        boxes = [text.get_window_extent() for text in axes.texts]
        assert len(boxes) > 5
        assert all(axes.bbox.x0 <= box.x0 and box.x1 <= axes.bbox.x1 for box in boxes)
        assert all(axes.bbox.y0 <= box.y0 and box.y1 <= axes.bbox.y1 for box in boxes)


def test_the_same_case_gives_the_same_chart(mapped):
    assert envelope_chart_svg(mapped) == envelope_chart_svg(mapped)
    solids = solids_sweep(mapped.case)
    assert solids is not None
    assert sweep_chart_svg(solids) == sweep_chart_svg(solids)
    for svg in (envelope_chart_svg(mapped), sweep_chart_svg(solids)):
        root = ElementTree.fromstring(svg)
        assert root.get("role") == "img"
        assert not re.search(r"<script|href=\"http|date", svg)
    assert "velocity maximum" in envelope_chart_svg(mapped)


def test_the_envelope_leaves_with_0_where_the_flows_of_the_case_lie_in_it(tmp_path, monkeypatch):
    monkeypatch.setattr(study, "COLUMNS", 9)
    monkeypatch.setattr(study, "ROWS", 3)
    for limit, status, words in ((30, 0, "100.0 m3/h, lie within it"), (5, 1, "do not all lie within it")):
        case = written(tmp_path, BINGHAM, f"limits: {{head_loss: {limit} m}}\n")
        found = run("envelope", case)
        assert found.exit_code == status
        assert words in " ".join(found.stdout.split())
        assert widest(found.stdout) <= 80
    document = json.loads(run("envelope", case, "flow=20..40m3/h", f"{STRESS}=1..3Pa", "--json").stdout)
    assert document["axes"][0]["values"][-1] == pytest.approx(40.0 / 3600.0)
    assert document["axes"][1]["values"][0] == pytest.approx(1.0)
    assert not document["holds"]
