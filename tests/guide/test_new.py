"""``pipeflow new``: the starter solves as written, every option of it loads, and nothing is overwritten."""

from pathlib import Path

import pytest
from typer.testing import CliRunner

from pipeflow.case.loading import load_case, load_text
from pipeflow.case.schema import CasePart
from pipeflow.case.starter import options, starter, switched_off, switched_on
from pipeflow.cli import app
from pipeflow.errors import InputError

RUNNER = CliRunner()
OPTIONS = options(starter(Path("line"))[Path("line.yaml")])


def new(*arguments: object):
    return RUNNER.invoke(app, ["new", *map(str, arguments)])


@pytest.fixture
def start(tmp_path):
    """A starter with the tables it may name beside it, and its text."""
    files = starter(tmp_path / "line", readings=True, pump=True)
    for path, text in files.items():
        path.write_text(text, encoding="utf-8")
    return starter(tmp_path / "line")[tmp_path / "line.yaml"]


def loaded(text, folder):
    path = folder / "line.yaml"
    path.write_text(text, encoding="utf-8")
    return load_case(path)


@pytest.mark.parametrize("extra", [(), ("--readings",), ("--pump",), ("--readings", "--pump")], ids=" ".join)
def test_the_starter_solves_as_written_and_says_what_is_assumed(tmp_path, extra):
    run = new(tmp_path / "line", *extra)
    assert run.exit_code == 0, run.output
    solved = RUNNER.invoke(app, ["solve", str(tmp_path / "line.yaml")])
    assert solved.exit_code == 0, solved.output
    page = " ".join(solved.stdout.split())
    assert "Placeholder figures" in page
    assumed = "fluid, fluid.rheology, flow, source, destination, route[suction line], route[discharge line]"
    assert f"assumed, not measured: {assumed}" in page


def test_the_starter_of_a_pump_has_a_duty_that_holds(tmp_path):
    new(tmp_path / "line", "--pump")
    run = RUNNER.invoke(app, ["curve", str(tmp_path / "line.yaml")])
    assert run.exit_code == 0, run.output
    assert "1. candidate A: holds in every condition" in run.stdout


def test_the_starter_has_many_options():
    assert {"site", "solids", "restart", "pipe_wall", "pumps", "scenarios", "- pump", "flow_curve"} <= set(OPTIONS)
    assert len(OPTIONS) == len(set(OPTIONS))


@pytest.mark.parametrize("key", OPTIONS)
def test_an_option_switched_on_loads(start, key, tmp_path):
    text = switched_off(start, "model") if key == "flow_curve" else start
    case = loaded(switched_on(text, key), tmp_path)
    assert case.title == "Line line, from tank to tank"


def test_all_options_together_load_and_solve(start, tmp_path):
    text = switched_on(start, *(key for key in OPTIONS if key != "flow_curve"))
    assert options(text) == ("flow_curve",)
    case = loaded(text, tmp_path)
    assert case.pumps
    assert len(case.scenarios) == 2
    assert RUNNER.invoke(app, ["solve", str(tmp_path / "line.yaml")]).exit_code == 0


def test_all_options_load_beside_a_sheet_of_readings(start, tmp_path):
    text = starter(tmp_path / "line", readings=True, pump=True)[tmp_path / "line.yaml"]
    model = ("model", "yield_stress", "consistency", "flow_index", "tested")
    assert set(model) < set(options(text))
    case = loaded(switched_on(text, *(key for key in options(text) if key not in model)), tmp_path)
    assert len(case.scenarios) == 2


def test_an_option_switched_on_changes_the_case(start, tmp_path):
    """The others are comments: without its # the text of an option is read."""
    broken = switched_on(start.replace("#  altitude: 620 m", "#  altitude: 620"), "site")
    with pytest.raises(InputError, match=r"site\.altitude"):
        loaded(broken, tmp_path)


def test_every_key_of_the_schema_stands_in_the_starter(start):
    there = {line.split(":")[0].lstrip("#") for line in start.splitlines() if line and line.lstrip("#")[:1] != " "}
    assert there >= set(CasePart.model_fields)


def test_switching_off_is_undone_by_switching_on(start):
    off = switched_off(start, "model")
    keys = ("model", "yield_stress", "consistency", "flow_index", "tested", "status")
    assert switched_on(off, *keys) == start
    with pytest.raises(InputError, match=r"rheology"):
        load_text(off, "line.yaml")


@pytest.mark.parametrize("path", starter(Path("line"), readings=True, pump=True), ids=str)
def test_lines_fit_a_page(path):
    text = starter(Path("line"), readings=True, pump=True)[path]
    assert max(map(len, text.splitlines())) <= 80


def test_nothing_is_overwritten_and_nothing_left_behind(tmp_path):
    (tmp_path / "line-pump.csv").write_text("mine", encoding="utf-8")
    run = new(tmp_path / "line", "--readings", "--pump")
    assert run.exit_code == 2
    assert run.stderr == (
        f"{tmp_path}/line-pump.csv  is there already and is not overwritten; give another name, or move it away\n"
    )
    assert [path.name for path in tmp_path.iterdir()] == ["line-pump.csv"]
    assert (tmp_path / "line-pump.csv").read_text(encoding="utf-8") == "mine"


def test_a_dangling_link_is_there_already(tmp_path):
    (tmp_path / "line.yaml").symlink_to(tmp_path / "elsewhere.yaml")
    assert new(tmp_path / "line").exit_code == 2
    assert not (tmp_path / "elsewhere.yaml").exists()


@pytest.mark.parametrize("name", ["line", "line.yaml", "line.yml", "line 2.b", "Größe_1"])
def test_names_that_are_accepted(tmp_path, name):
    run = new(tmp_path / name)
    assert run.exit_code == 0, run.output
    (written,) = tmp_path.iterdir()
    assert written.name == (name if name.endswith((".yaml", ".yml")) else f"{name}.yaml")
    assert load_case(written).title.startswith("Line ")


@pytest.mark.parametrize("name", ["a:b", "-x", ".hidden", ".yaml", "a\nb", "a#b", "x.", "'q'", "a" * 81, "a\tb"])
def test_odd_names_are_refused_in_words(tmp_path, name):
    run = new("--", f"{tmp_path}/{name}")
    assert run.exit_code == 2
    assert "accepted" in run.stderr
    assert run.stderr.count("\n") == 1
    assert not list(tmp_path.iterdir())


def test_a_missing_folder_and_a_folder_are_refused_in_words(tmp_path):
    missing, folder = new(tmp_path / "no" / "line"), new(tmp_path)
    assert (missing.exit_code, folder.exit_code) == (2, 2)
    assert f"{tmp_path}/no is no folder; make it first" in missing.stderr
    assert "is a folder; give the name of the case in it" in folder.stderr
    assert not list(tmp_path.iterdir())


def test_a_file_in_place_of_a_folder_is_told(tmp_path):
    (tmp_path / "file").touch()
    run = new(tmp_path / "file" / "line")
    assert run.exit_code == 2
    assert [path.name for path in tmp_path.iterdir()] == ["file"]
