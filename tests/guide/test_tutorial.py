"""The tutorial as written: its files are made, its commands run in order, its figures are those of the program."""

from __future__ import annotations

import shlex
from collections.abc import Iterator, Sequence
from pathlib import Path

import pytest
from fenced import Block, blocks, changed
from typer.testing import CliRunner

from pipeflow.cli import app

PAGE = Path(__file__).parents[2] / "docs" / "tutorial.md"
LEFT_OUT = "..."
STATUS = "exit status "


def missing(shown: Sequence[str], printed: Sequence[str]) -> str:
    """First line shown that is not printed where it should be; between two ``...`` lines follow each other."""
    at, anywhere = 0, False
    for line in shown:
        if line == LEFT_OUT:
            anywhere = True
            continue
        places = range(at, len(printed)) if anywhere else range(at, min(at + 1, len(printed)))
        found = next((place for place in places if printed[place] == line), None)
        if found is None:
            return line
        at, anywhere = found + 1, False
    return "" if anywhere or at == len(printed) else f"(then comes: {printed[at]})"


def run(command: str) -> list[str]:
    """Run a line of a ``sh`` block, held to the exit status it states; what it prints."""
    words, _, remark = command.partition("#")
    program, *arguments = shlex.split(words)
    assert program == "pipeflow"
    done = CliRunner().invoke(app, arguments)
    expected = int(remark.strip().removeprefix(STATUS)) if STATUS in remark else 0
    assert done.exit_code == expected, f"{command}: {done.exit_code}\n{done.output}"
    return [line.rstrip() for line in done.stdout.splitlines()]


def steps() -> Iterator[tuple[Block, list[str]]]:
    """The blocks in order, what their commands print as they are run."""
    printed: list[str] = []
    for block in blocks(PAGE):
        if block.language == "sh":
            printed = [line for command in block.text.splitlines() for line in run(command)]
        elif block.language == "diff":
            path = Path(block.file)
            path.write_text(changed(path.read_text(encoding="utf-8"), block.text), encoding="utf-8")
        elif block.file:
            Path(block.file).write_text(block.text, encoding="utf-8")
        yield block, printed


def test_the_tutorial_runs_as_written(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    wrong = []
    for block, printed in steps():
        if block.language == "text" and not block.file:
            line = missing([line.rstrip() for line in block.text.splitlines()], printed)
            if line:
                wrong.append(f"tutorial.md:{block.line}: not printed there: {line}")
    assert wrong == []
    assert {"sludge-405.html", "sludge-405.svg", "sludge-405.record.json"} <= {path.name for path in tmp_path.iterdir()}


def test_the_tutorial_goes_through_every_command_that_makes_a_line():
    commands = {line.split()[1] for block in blocks(PAGE) if block.language == "sh" for line in block.text.splitlines()}
    known = {command.name or command.callback.__name__ for command in app.registered_commands}
    assert commands <= known
    assert known - commands == {"methods", "envelope"}


def test_every_block_of_the_tutorial_is_of_a_kind_that_is_run_or_compared():
    assert {block.language for block in blocks(PAGE)} == {"sh", "text", "yaml", "diff"}


@pytest.mark.parametrize(
    ("shown", "wrong"),
    [
        (["a", "b", "c"], ""),
        (["...", "c"], ""),
        (["a", "..."], ""),
        (["...", "b", "..."], ""),
        (["a", "...", "c"], ""),
        (["...", "c", "b", "..."], "b"),
        (["a", "c"], "c"),
        (["a", "b"], "(then comes: c)"),
        (["...", "b1", "..."], "b1"),
    ],
)
def test_a_line_that_is_not_printed_is_found(shown, wrong):
    assert missing(shown, ["a", "b", "c"]) == wrong


def test_a_change_whose_lines_are_not_there_is_refused():
    assert changed("a\nb\n", " a\n-b\n+c\n") == "a\nc\n"
    with pytest.raises(AssertionError, match="stand 0 times"):
        changed("a\nb\n", "-c\n")
