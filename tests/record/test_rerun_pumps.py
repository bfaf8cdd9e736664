"""What a rerun says of pumps: duties that moved, candidates that hold no longer, and cases without any."""

import json
import random

import pytest
from making import text_of
from typer.testing import CliRunner

from pipeflow.case.loading import load_case
from pipeflow.cli import app
from pipeflow.record.changes import Change
from pipeflow.record.inputs import without_folder
from pipeflow.record.rerun import rerun
from pipeflow.record.store import checksum, record_of, written
from pipeflow.report.rerun_document import rerun_document
from pipeflow.report.rerun_page import rerun_pages
from pipeflow.report.rerun_rows import figures
from pipeflow.study import solve
from pipeflow.study.pumping.curve import curve

WATER = """\
title: Water through two pipes
fluid:
  density: 998.2 kg/m3
  rheology: {model: newtonian, viscosity: 1.002 mPa.s}
  liquid: {vapour_pressure: 2.3 kPa}
flow: {minimum: 70 m3/h, design: 90 m3/h, maximum: 100 m3/h}
site: {altitude: 620 m}
source: {level: 3.2 m, lowest_level: 1 m}
destination: {level: 2 m}
route:
  - {pipe: suction line, size: NPS 8 Sch 40, length: 6 m, rise: -1 m, fittings: {entrance: 1}}
  - pump: feed pump
  - {pipe: discharge line, size: NPS 6 Sch 40, length: 220 m, rise: 14 m, fittings: {elbow_90: 4, exit: 1}}
pumps:
  - {name: first, kind: centrifugal, speed: 1480 rpm, curve: first.csv}
  - {name: second, kind: centrifugal, speed: 1480 rpm, curve: second.csv}
"""
THIRD = "  - {name: third, kind: centrifugal, speed: 1480 rpm, curve: first.csv}\n"
ROWS = ((0, 31, 1, 2), (60, 28.5, 50, 2.2), (100, 24, 70, 2.6), (140, 16, 66, 3.4))


def run(*arguments):
    return CliRunner().invoke(app, ["rerun", *map(str, arguments)])


def told(*arguments):
    return json.loads(run(*arguments, "--json").stdout)


def says(found, text):
    """Whether the page says it, however its lines are broken."""
    return "".join(text.split()) in "".join(found.stdout.split())


def put_curve(folder, name, *, head=1.0, efficiency=1.0, npsh=1.0):
    """Write a curve with its columns stretched."""
    rows = ((q, h * head, e * efficiency, n * npsh) for q, h, e, n in ROWS)
    lines = ["flow [m3/h], head [m], efficiency [%], npsh_required [m]", *(", ".join(map(str, row)) for row in rows)]
    (folder / f"{name}.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")


def change(path, *pairs):
    text = path.read_text(encoding="utf-8")
    for old, new in pairs:
        assert old in text
        text = text.replace(old, new)
    path.write_text(text, encoding="utf-8")


def rewritten(path, edit):
    """Change the record of a case as an edit of its content does, under a checksum that fits."""
    record = path.with_name("line.record.json")
    content = json.loads(record.read_text(encoding="utf-8"))
    del content["sha256"]
    edit(content)
    record.write_text(json.dumps({**content, "sha256": checksum(content)}), encoding="utf-8")


@pytest.fixture
def line(tmp_path):
    """A case of two pumps with its record; the second needs more power."""
    path = tmp_path / "line.yaml"
    path.write_text(WATER, encoding="utf-8")
    put_curve(tmp_path, "first")
    put_curve(tmp_path, "second", efficiency=0.9)
    assert run(path, "--accept").exit_code == 0
    return path


def test_pumps_that_did_not_move_are_silent(line):
    record = line.with_name("line.record.json").read_bytes()
    found = run(line)
    assert found.exit_code == 0
    assert says(found, "line.yaml: nothing moved 1 case: 1 as before")
    assert "pump" not in "".join(found.stdout.split()).replace(str(line), "")
    assert run(line, "--accept").exit_code == 0
    assert line.with_name("line.record.json").read_bytes() == record


def test_the_record_holds_what_the_curve_finds(line):
    stored = json.loads(line.with_name("line.record.json").read_text(encoding="utf-8"))
    pumps, found = stored["results"]["pumps"], curve(load_case(str(line)))
    assert [one["name"] for one in pumps["ranking"] if one["holds"]] == ["first", "second"]
    assert [one["name"] for one in pumps["conditions"]] == ["the case", "water"]
    own, first = pumps["conditions"][0]["pumps"][0], found.own.pumps[0]
    for duty in ("duty", "duty_upper"):
        assert own[duty]["flow_m3_s"] == getattr(first, duty).flow
        assert own[duty]["shaft_power_W"] == getattr(first, duty).shaft_power
        assert own[duty]["npsh_available_m"] == getattr(first, duty).npsh_available
    assert {one["name"]: one["status"] for one in own["checks"]} == {one.name: one.status for one in first.checks}
    assert "npsh-margin" in stored["methods"]


def test_a_lowest_level_that_fails_npsh_is_seen_and_named(line):
    change(line, ("lowest_level: 1 m", "lowest_level: -8 m"))
    assert curve(load_case(str(line))).fails
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "line.yaml: moved; fails: no pump holds in every condition")
    assert says(found, "first: holds → out: the case: npsh")
    assert says(found, "First in rank of the pumps that hold: first → none.")
    assert says(found, "Changed, no effect on the line's head: source.lowest_level.")
    assert max(map(len, found.stdout.splitlines())) <= 80
    document = told(line)
    (npsh,) = (
        one
        for one in document["pumps"]["candidates"]["first"]["conditions"]["the case"]["checks"]
        if one["name"] == "npsh"
    )
    assert (npsh["status_before"], npsh["status_after"], npsh["newly_fails"]) == ("ok", "fail", True)
    assert npsh["value"]["after"] - npsh["value"]["before"] == pytest.approx(-9.0, rel=1e-9)
    assert document["fails"] == ["no pump holds in every condition"]
    assert not any(total["moved"] for total in document["totals"].values())


def test_long_names_stay_on_the_page(line):
    long = "a name such as a vendor gives in a quotation that goes past what any column of a page can hold"
    change(line, ("name: first", f"name: {long}"))
    scenario = f"scenarios: {{{long}: {{fluid.density: 1000 kg/m3}}}}\n"
    line.write_text(line.read_text(encoding="utf-8") + scenario, encoding="utf-8")
    assert run(line, "--accept").exit_code == 0
    change(line, ("lowest_level: 1 m", "lowest_level: -8 m"))
    found = run(line)
    assert says(found, f"{long}: nothing moved")
    assert says(found, f"{long}: holds → out: the case: npsh")
    assert max(map(len, found.stdout.splitlines())) <= 80


def test_a_pump_that_holds_no_longer_has_moved_and_the_next_ranks_first(line):
    put_curve(line.parent, "first", npsh=4)
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "first: holds → out: the case: npsh")
    assert says(found, "pumps that hold: first → second.")
    assert "fails" not in found.stdout
    assert "pump second" not in found.stdout
    assert says(found, "pumps[first].curve.")


def test_a_lower_efficiency_moves_power_and_rank_alone(line):
    put_curve(line.parent, "first", efficiency=0.8)
    document = told(line)
    first = document["pumps"]["candidates"]["first"]["conditions"]["the case"]["figures"]
    assert first["duty.shaft_power_W"]["change"] == pytest.approx(1 / 0.8 - 1, rel=1e-9)
    assert not first["duty.flow_m3_s"]["moved"]
    assert not document["pumps"]["candidates"]["second"]["conditions"]["the case"]["figures"]["duty.head_m"]["moved"]
    assert (document["pumps"]["first_before"], document["pumps"]["first_after"]) == ("first", "second")
    page = run(line).stdout
    assert page.count("shaft power, kW") == 2
    assert "duty flow" not in page


def test_the_tolerance_holds_for_pumps_too(line):
    put_curve(line.parent, "first", efficiency=0.9995)
    assert run(line).exit_code == 0
    assert run(line, "--tolerance", "0.01%").exit_code == 1


def test_a_change_of_rank_within_the_tolerance_has_moved(line):
    put_curve(line.parent, "second", efficiency=0.9999)
    assert run(line, "--accept").exit_code == 0
    put_curve(line.parent, "second", efficiency=1.0001)
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "pumps that hold: first → second.")


def test_pumps_that_come_and_go_are_said(line):
    change(line, ("name: second", "name: other"))
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "Pumps new: other. Pumps gone: second. other: holds.")
    change(line, ("pumps:\n", "pumps:\n" + THIRD))
    assert told(line)["pumps"]["added"] == ["third", "other"]


def test_a_record_of_before_is_told_to_lack_the_pumps(line):
    rewritten(line, lambda content: content["results"].pop("pumps"))
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "line.yaml: nothing moved; pumps: not in the record")
    assert says(found, "1 case: 1 with pumps not in the record;")
    assert told(line)["lacks_pumps"] is True
    accepted = run(line, "--accept")
    assert accepted.exit_code == 0
    assert not list(line.parent.glob("*.kept"))
    assert run(line).exit_code == 0


def test_pumps_are_new_where_there_were_none(line):
    text = line.read_text(encoding="utf-8")
    line.write_text(text[: text.index("pumps:")], encoding="utf-8")
    assert says(run(line), "Pumps gone: first, second.")
    assert run(line, "--accept").exit_code == 0
    line.write_text(text, encoding="utf-8")
    found = run(line)
    assert says(found, "Pumps new: first, second.")
    assert not says(found, "not in the record")


def test_a_felt_input_that_moves_the_pumps_alone_is_named(line):
    """The pump stands higher and the rest of the line rises less: the head stays, the suction does not."""
    change(line, ("rise: -1 m", "rise: -0.5 m"), ("rise: 14 m", "rise: 13.5 m"))
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "the case itself: nothing moved")
    assert says(found, "Changed, head within the tolerance: route[suction line].rise, route[discharge line].rise.")


def test_a_case_without_pumps_keeps_its_record_and_draws_no_curve(tmp_path, monkeypatch):
    monkeypatch.setattr("pipeflow.study.pumping.curve.curve", None)
    path = tmp_path / "line.yaml"
    path.write_text(text_of(), encoding="utf-8")
    case = without_folder(load_case(str(path)))
    content = json.loads(written(record_of(case, solve(case))))
    assert "pumps" not in content["results"]
    assert "pumps" not in content["inputs"]
    assert run(path, "--accept").exit_code == 0
    assert told(path)["pumps"] is None


def test_since_a_revision_sees_the_curve_of_then(line):
    from test_rerun_command import git

    git(line.parent, "init", "-q")
    git(line.parent, "add", ".")
    git(line.parent, "commit", "-q", "-m", "first")
    assert run(line, "--since", "HEAD").exit_code == 0
    put_curve(line.parent, "first", npsh=4)
    found = run(line, "--since", "HEAD")
    assert found.exit_code == 1
    assert says(found, "first: holds → out: the case: npsh")


def test_pumps_of_any_content_in_a_record_end_in_a_page(line):
    from test_rerun_command import places

    record, draw = line.with_name("line.record.json"), random.Random(3)
    text = record.read_text(encoding="utf-8")
    everywhere = list(places(json.loads(text)["results"]["pumps"]))
    for _ in range(12):
        *way, last = ("results", "pumps", *draw.choice(everywhere))

        def spoil(content, way=way, last=last):
            node = content
            for step in way:
                node = node[step]
            node[last] = draw.choice([None, "x", -1, 1e308, True, [], {}, [1, 2], {"is": "Pipe"}])

        record.write_text(text, encoding="utf-8")
        rewritten(line, spoil)
        found = rerun(str(line))
        assert found.exit_code in (0, 1)
        assert rerun_pages([found], (), (), 1e-3)
        assert json.dumps(rerun_document(found, 1e-3), allow_nan=False)


@pytest.mark.parametrize(
    ("before", "after", "shown"),
    [
        (-8.847, 0.0, "+8.847"),
        (0.0, 2.5, "+2.500"),
        (4.0, 0.0, "−4.000"),
        (3.0, -3.0, "−6.000"),
        (2.0, 3.0, "+50.0 %"),
        (-2.0, -3.0, "−50.0 %"),
        (0.0, 0.0, "0 %"),
    ],
)
def test_a_change_of_sign_is_shown_as_a_difference(before, after, shown):
    assert figures(Change("rise", before, after), "m")[2] == shown
    assert figures(Change("rise", before, None), "m")[2] == ""
