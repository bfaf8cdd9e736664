"""The rerun command as its user meets it: pages, JSON, exit status, records written or left alone."""

import json
import os
import random
import shutil
import subprocess
import sys
from pathlib import Path

import pytest
from making import CASES, ROOT, text_of
from typer.testing import CliRunner

from pipeflow.cli import app
from pipeflow.record.found import is_case
from pipeflow.record.many import each
from pipeflow.record.rerun import rerun
from pipeflow.record.store import checksum
from pipeflow.record.tolerance import tolerance_of
from pipeflow.report.rerun_document import rerun_document
from pipeflow.report.rerun_page import rerun_pages

SCENARIO = "scenarios: {thick: {fluid.density: 1500 kg/m3}}\n"


def run(*arguments):
    return CliRunner().invoke(app, ["rerun", *map(str, arguments)])


def letters(text):
    """A text without its spaces and line breaks, which stand within a long path too."""
    return "".join(text.split())


def says(found, text):
    """Whether the page says it, however its lines are broken."""
    return letters(text) in letters(found.stdout)


def put(path, text=None, **changes):
    path.parent.mkdir(exist_ok=True, parents=True)
    path.write_text(text or text_of(**changes), encoding="utf-8")
    return path


@pytest.fixture
def line(tmp_path):
    """A case with a record."""
    path = put(tmp_path / "line.yaml")
    assert run(path, "--accept").exit_code == 0
    return path


def test_without_a_record_it_says_so_and_leaves_with_1(tmp_path):
    path = put(tmp_path / "line.yaml")
    found = run(path)
    assert found.exit_code == 1
    assert says(found, "no record yet: pipeflow rerun --accept writes it")
    assert not (tmp_path / "line.record.json").exists()


def test_accept_writes_the_record_and_then_nothing_has_moved(tmp_path):
    path = put(tmp_path / "line.yaml")
    found = run(path, "--accept")
    assert found.exit_code == 0
    record = tmp_path / "line.record.json"
    content = json.loads(record.read_text(encoding="utf-8"))
    assert content["format"] == 1
    assert content["inputs"]["fluid"]["density"] == 1400.0
    before = record.stat().st_mtime_ns
    again = run(path, "--accept")
    assert again.exit_code == 0
    assert record.stat().st_mtime_ns == before, "a record that says the same is left as it is"
    quiet = run(path)
    assert quiet.exit_code == 0
    assert says(quiet, "line.yaml: nothing moved 1 case: 1 as before")


def test_comments_and_units_spelt_otherwise_are_silent(line):
    put(line, "# checked\n" + text_of(density="1.4 t/m3", length="0.2 km", loss="0.12 bar", roughness="50 µm"))
    found = run(line)
    assert found.exit_code == 0
    assert says(found, "line.yaml: nothing moved 1 case: 1 as before")


def test_the_record_is_the_same_from_another_folder(line, monkeypatch):
    record = line.with_name("line.record.json").read_bytes()
    monkeypatch.chdir(line.parent)
    assert run(line.name, "--accept").exit_code == 0
    assert line.with_name("line.record.json").read_bytes() == record


def test_a_change_is_shown_and_explained(line):
    put(line, title="Renamed", yield_stress="12 Pa", flow="150 m3/h", density="1380 kg/m3", limit="70 m")
    found = run(line)
    assert found.exit_code == 1
    assert max(len(text) for text in found.stdout.splitlines()) <= 80
    said = " ".join(found.stdout.split())
    assert "head loss, m" in said
    assert " m: yield stress +" in said
    assert "flow +" in said
    assert "density +" in said
    assert "Changed, no effect on head: title, limits.head_loss." in said
    assert "1 case: 1 moved; tolerance 0.1 %." in said


def test_json_has_the_parts_and_they_add_up(line):
    put(line, yield_stress="12 Pa", flow="150 m3/h")
    found = run(line, "--json")
    assert found.exit_code == 1
    (document,) = (json.loads(text) for text in found.stdout.splitlines())
    assert document["outcome"] == "compared"
    assert document["explanation"]["orders"] == "all"
    for key, total in document["totals"].items():
        parts = document["explanation"]["parts"][key]
        assert {*parts} == {"yield stress", "flow", "program"}
        whole = total["after"] - total["before"]
        assert sum(parts.values()) == pytest.approx(whole, rel=1e-9)
        assert abs(parts["program"]) <= 1e-9 * abs(whole)
    assert document["explanation"]["text"][0].startswith("head loss ")


def test_what_an_older_program_gave_is_the_part_of_the_program(line):
    """A record of other figures for the same inputs, as another version would have left it."""
    from pipeflow.record.store import Record, read, write, written

    path = line.with_name("line.record.json")
    old = read(path)
    totals = {key: 0.9 * value for key, value in old.results["totals"].items()}
    stored = Record(
        {**old.program, "pipeflow": "0.0.9"}, old.digest, old.methods, old.inputs, {**old.results, "totals": totals}
    )
    write(path, written(stored))
    put(line, yield_stress="12 Pa")
    (document,) = (json.loads(text) for text in run(line, "--json").stdout.splitlines())
    parts = document["explanation"]["parts"]["head_loss_m"]
    assert parts["program"] == pytest.approx(0.1 * old.results["totals"]["head_loss_m"], rel=1e-9)
    assert document["program"]["pipeflow"]["before"] == "0.0.9"
    page = run(line).stdout
    assert "program +" in page
    assert "Program: pipeflow 0.0.9 →" in page


def test_inputs_of_another_version_are_compared_but_not_explained(line):
    from dataclasses import replace

    from pipeflow.record.store import read, write, written

    path = line.with_name("line.record.json")
    old = read(path)
    write(path, written(replace(old, inputs={**old.inputs, "colour": "red"})))
    put(line, yield_stress="12 Pa")
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "Not explained: the record is of another version: its Case has colour")


def test_the_tolerance_decides(line):
    put(line, density="1402 kg/m3")
    assert run(line).exit_code == 1
    within = run(line, "--tolerance", "1 %")
    assert within.exit_code == 0
    assert says(within, "nothing moved; inputs changed, within the tolerance")
    assert run(line, "--tolerance", "0%").exit_code == 1


@pytest.mark.parametrize("text", ["0.1", "", "-1%", "101%", "nan%", "1e-3%", "0,1%", "%"])
def test_a_tolerance_that_is_no_percentage_is_refused(text, line):
    found = run(line, "--tolerance", text)
    assert found.exit_code == 2
    assert "accepted: a percentage from 0 to 100, as 0.1%" in found.stderr


def test_percentages():
    assert [tolerance_of(text) for text in ("0.1%", "5 %", "100%", "0%", ".5%")] == [0.001, 0.05, 1.0, 0.0, 0.005]


def test_a_limit_that_newly_fails_has_moved_even_within_the_tolerance(line):
    head = json.loads(line.with_name("line.record.json").read_text())["results"]["checks"][0]["value"]
    put(line, limit=f"{head * (1 - 1e-6):.9g} m")
    found = run(line, "--json")
    assert found.exit_code == 1
    document = json.loads(found.stdout)
    assert document["moved"]
    assert document["fails"] == ["head_loss"]
    (check,) = (check for check in document["checks"] if check["name"] == "head_loss")
    assert (check["status_before"], check["status_after"], check["newly_fails"]) == ("ok", "fail", True)
    assert run(line).stdout.count("FAIL") == 1


def test_a_limit_that_fails_as_before_still_leaves_with_1(line):
    put(line, limit="1 m")
    assert run(line, "--accept").exit_code == 0
    found = run(line)
    assert found.exit_code == 1
    assert "nothing moved; fails: head loss" in found.stdout


def test_scenarios_that_come_go_and_move_are_said(line):
    put(line, text_of() + SCENARIO)
    added = run(line)
    assert added.exit_code == 1
    assert "Scenarios new: thick." in added.stdout
    assert run(line, "--accept").exit_code == 0
    put(line, text_of(flow="150 m3/h") + SCENARIO)
    document = json.loads(run(line, "--json").stdout)
    assert {*document["scenarios"]["thick"]["explanation"]["parts"]["head_loss_m"]} == {"flow", "program"}
    put(line)
    assert "Scenarios gone: thick." in run(line).stdout


def test_a_bad_case_does_not_stop_the_others(tmp_path):
    put(tmp_path / "a.yaml")
    put(tmp_path / "b.yaml", "fluid: 1\n")
    put(tmp_path / "sub" / "c.yml")
    put(tmp_path / "sub" / "other.yaml", "services: {web: 1}\n")
    put(tmp_path / ".hidden" / "d.yaml")
    found = run(tmp_path, "--accept")
    assert found.exit_code == 2
    assert "b.yaml:1:1" in found.stderr
    assert sorted(path.name for path in tmp_path.rglob("*.record.json")) == ["a.record.json", "c.record.json"]
    assert "passed over:" in found.stdout
    assert says(found, "other.yaml.")
    documents = [json.loads(text)["file"] for text in run(tmp_path, "--json").stdout.splitlines()]
    assert [Path(file).name for file in documents] == ["a.yaml", "c.yml"]


@pytest.mark.parametrize(
    ("name", "said"), [("nowhere.yaml", "no such file"), ("nowhere", "no such file"), ("", "an empty name")]
)
def test_a_path_that_is_not_there(name, said, tmp_path):
    found = run(tmp_path / name if name else "")
    assert found.exit_code == 2
    assert said in found.stderr


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("title: x\nfluid: {}\n", True),
        ("'route':\n", True),
        ('{"title": "x", "fluid": {}}', True),
        ("{title: x,\n route: []}", True),
        ("http:\n  - route: {}\n", False),
        ("fluids: 1\n# fluid: no\n", False),
        ("", False),
    ],
)
def test_what_is_taken_for_a_case(text, expected):
    assert is_case(text) is expected


def test_a_folder_without_a_case_is_said(tmp_path):
    put(tmp_path / "other.yaml", "a: 1\n")
    found = run(tmp_path)
    assert found.exit_code == 2
    assert "a folder without a case" in found.stderr


def test_two_cases_of_one_record_are_refused(tmp_path):
    put(tmp_path / "a.yaml")
    put(tmp_path / "a.yml")
    found = run(tmp_path)
    assert found.exit_code == 2
    assert "would share its record with" in found.stderr


def test_a_case_named_twice_is_solved_once(line):
    assert len(run(line, line.parent, line, "--json").stdout.splitlines()) == 1


@pytest.mark.parametrize("spoilt", [b"", b"{", b"\x00\xff", b'{"format": 99}'])
def test_a_record_that_cannot_be_used_is_said_and_kept(spoilt, line):
    record = line.with_name("line.record.json")
    record.write_bytes(spoilt)
    found = run(line)
    assert found.exit_code == 1
    assert says(found, "the record can't be used:")
    assert record.read_bytes() == spoilt
    accepted = run(line, "--accept")
    assert accepted.exit_code == 0
    assert says(accepted, "kept as line.record.json.kept")
    assert line.with_name("line.record.json.kept").read_bytes() == spoilt
    assert run(line).exit_code == 0


def test_a_record_that_cannot_be_written_leaves_with_2(tmp_path):
    path = put(tmp_path / "line.yaml")
    (tmp_path / "line.record.json").mkdir()
    found = run(path, "--accept")
    assert found.exit_code == 2
    assert "can't be kept aside" in found.stderr


def places(tree, path=()):
    yield path
    items = tree.items() if isinstance(tree, dict) else enumerate(tree) if isinstance(tree, list) else ()
    for key, value in items:
        yield from places(value, (*path, key))


def test_a_record_of_any_content_ends_in_a_page(line):
    """Values of every kind in any place, under a checksum that fits."""
    path, draw = line.with_name("line.record.json"), random.Random(1)
    put(line, yield_stress="12 Pa", length="220 m")
    text = path.read_text(encoding="utf-8")
    everywhere = [place for place in places(json.loads(text)) if place and place[0] in ("program", "inputs", "results")]
    for _ in range(60):
        content = json.loads(text)
        *way, last = draw.choice(everywhere)
        node = content
        for step in way:
            node = node[step]
        node[last] = draw.choice([None, "x", -1, 1e308, True, [], {}, [1, 2], {"is": "Pipe"}, {"is": "map"}])
        del content["sha256"]
        path.write_text(json.dumps({**content, "sha256": checksum(content)}), encoding="utf-8")
        found = rerun(str(line))
        assert found.exit_code in (0, 1)
        assert rerun_pages([found], (), (), 1e-3)
        assert json.dumps(rerun_document(found, 1e-3), allow_nan=False)


def test_control_characters_of_a_record_stay_off_the_terminal(line):
    from dataclasses import replace

    from pipeflow.record.store import read, write, written

    path = line.with_name("line.record.json")
    old = read(path)
    write(path, written(replace(old, results={**old.results, "scenarios": {"\x1b[2J": {}}})))
    assert "\x1b" not in run(line).stdout


def test_processes_give_the_same_in_the_same_order(tmp_path):
    cases = [str(put(tmp_path / f"{number:02}.yaml", length=f"{100 + number} m")) for number in range(30)]
    together = list(each(rerun, cases, cores=2))
    assert together == [rerun(case) for case in cases]


def test_two_reruns_at_once_leave_whole_records(tmp_path):
    for number in range(6):
        put(tmp_path / f"{number}.yaml", length=f"{100 + number} m")
    command = [sys.executable, "-W", "error", "-c", "from pipeflow.cli import main; main()", "rerun", str(tmp_path)]
    both = [subprocess.Popen([*command, "--accept"], stdout=subprocess.PIPE, stderr=subprocess.PIPE) for _ in "ab"]
    assert [(one.communicate()[1], one.returncode) for one in both] == [(b"", 0), (b"", 0)]
    quiet = subprocess.run(command, capture_output=True, text=True, check=False)
    assert (quiet.returncode, quiet.stderr) == (0, "")
    assert letters(quiet.stdout).count(letters(".yaml: nothing moved")) == 6
    assert "\x1b" not in quiet.stdout


def test_every_demo_case_and_its_page(tmp_path):
    for path in (ROOT / "cases").iterdir():
        shutil.copy(path, tmp_path)
    assert run(tmp_path, "--accept").exit_code == 0
    for path in tmp_path.glob("*.yaml"):
        text = path.read_text(encoding="utf-8").replace("length: 320 m", "length: 410 m").replace("NPS 8", "NPS 10")
        path.write_text(text, encoding="utf-8")
    found = run(tmp_path)
    assert found.exit_code == 1
    assert max(len(text) for text in found.stdout.splitlines()) <= 80
    assert f"{len(CASES)} cases: " in found.stdout
    assert "bores" in found.stdout


def git(folder, *arguments):
    identity = ["-c", "user.name=n", "-c", "user.email=n@example.org", "-c", "commit.gpgsign=false"]
    subprocess.run(["git", "-C", str(folder), *identity, *arguments], check=True, capture_output=True)


@pytest.fixture
def repository(tmp_path):
    folder = tmp_path / "repo"
    put(folder / "cases" / "line.yaml")
    put(folder / "cases" / "gone.yaml")
    put(folder / "cases" / "wrong.yaml", "fluid: 1\n")
    for path in (ROOT / "cases").glob("thickener-underflow*"):
        shutil.copy(path, folder / "cases")
    git(folder, "init", "-q")
    git(folder, "add", ".")
    git(folder, "commit", "-q", "-m", "first")
    git(folder, "tag", "first")
    return folder


def test_since_a_revision(repository):
    cases = repository / "cases"
    put(cases / "line.yaml", yield_stress="12 Pa")
    put(cases / "wrong.yaml")
    put(cases / "new.yaml")
    (cases / "gone.yaml").unlink()
    sheet = cases / "thickener-underflow-52.csv"
    sheet.write_text(sheet.read_text().replace("52", "53"))
    git(repository, "add", ".")
    git(repository, "commit", "-q", "-m", "second")
    status = (repository / ".git" / "index").read_bytes()
    found = run(cases, "--since", "first", "--json")
    by_name = {Path(document["file"]).stem: document for document in map(json.loads, found.stdout.splitlines())}
    assert {*by_name["line"]["explanation"]["parts"]["head_loss_m"]} == {"yield stress", "program"}
    assert by_name["line"]["explanation"]["parts"]["head_loss_m"]["program"] == pytest.approx(0.0, abs=1e-9)
    assert by_name["new"]["outcome"] == "no record"
    assert by_name["wrong"]["outcome"] == "unusable record"
    assert by_name["thickener-underflow"]["moved"] is False
    assert by_name["thickener-underflow-readings"]["outcome"] == "compared"
    assert found.exit_code == 1
    page = run(cases, "--since", "first")
    assert says(page, "gone.yaml: gone since then")
    assert not list(cases.glob("*.record.json"))
    assert (repository / ".git" / "index").read_bytes() == status
    assert run(cases / "line.yaml", "--since", "HEAD").exit_code == 0


@pytest.mark.parametrize("revision", ["nowhere", "", "--help", "-x", "HEAD~9", "first:cases", "a b", "$(touch x)"])
def test_a_revision_that_is_none_is_said(revision, repository):
    found = run(repository / "cases" / "line.yaml", f"--since={revision}")
    assert found.exit_code == 2
    assert found.stderr.startswith("--since  found ")


def test_a_folder_outside_a_repository_is_said(line, monkeypatch):
    monkeypatch.setenv("GIT_CEILING_DIRECTORIES", os.fspath(line.parents[2]))
    found = run(line, "--since", "HEAD")
    assert found.exit_code == 2
    assert "not a git repository" in found.stderr


def test_without_git_it_is_said(line, monkeypatch):
    monkeypatch.setenv("PATH", "")
    found = run(line, "--since", "HEAD")
    assert found.exit_code == 2
    assert "needs the program git" in found.stderr


def test_accept_and_since_exclude_each_other(line):
    found = run(line, "--since", "HEAD", "--accept")
    assert found.exit_code == 2
    assert "give one of the two" in found.stderr
