"""The size command as its user meets it."""

import json
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
CASE = ROOT / "cases" / "thickener-underflow.yaml"


def size(*arguments):
    code = "from pipeflow.cli import main; main()"
    command = [sys.executable, "-W", "error", "-c", code, "size", *map(str, arguments)]
    return subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)


def test_json_has_the_fixed_keys():
    run = size(CASE, "--json")
    assert run.returncode == 0, run.stderr
    assert run.stdout.count("\n") == 1
    document = json.loads(run.stdout)
    names = [one["size"] for one in document["candidates"]]
    assert document["selected"] in names
    for one in document["candidates"]:
        assert {"size", "diameter_m", "head_loss_m", "velocity_m_s", "regime", "passes", "fails"} <= one.keys()
        assert one["passes"] == (one["fails"] == [])
    first = next(one["size"] for one in document["candidates"] if one["passes"])
    assert first == document["selected"]


@pytest.mark.parametrize("arguments", [(), ("--solve-for", "flow"), ("--solve-for", "length")])
def test_a_page_of_80_columns(arguments):
    run = size(CASE, *arguments)
    assert run.returncode == 0, run.stderr
    assert max(len(line) for line in run.stdout.splitlines()) <= 80
    words = " ".join(run.stdout.split())
    assert "local codes and the judgement of a licensed engineer take precedence" in words


def test_no_size_passes(tmp_path):
    for curve in CASE.parent.glob("thickener-underflow-pump-*.csv"):
        shutil.copy(curve, tmp_path)
    path = tmp_path / "tight.yaml"
    path.write_text(CASE.read_text(encoding="utf-8").replace("head_loss: 32 m", "head_loss: 0.1 m"), encoding="utf-8")
    run = size(path, "--json")
    document = json.loads(run.stdout)
    assert run.returncode == 1
    assert document["selected"] is None
    assert document["nearest"]["fails"]
    page = size(path)
    assert page.returncode == 1
    assert "None passes. Nearest is" in " ".join(page.stdout.split())


@pytest.mark.parametrize(
    ("arguments", "message"), [(("--solve-for", "colour"), "accepted: flow"), (("--json",), "limits  missing")]
)
def test_what_cannot_be_sized_leaves_with_2(tmp_path, arguments, message):
    path = tmp_path / "bare.yaml"
    text = CASE.read_text(encoding="utf-8")
    path.write_text(text.split("limits:")[0], encoding="utf-8")
    run = size(path, *arguments)
    assert run.returncode == 2
    assert run.stdout == ""
    assert message in run.stderr
    assert "Traceback" not in run.stderr
