"""What the program says about spoilt case files, word for word.

Each ``spoilt/NN-name.yaml`` (``NNN`` from 100 on) holds the mistake its name tells; ``NN-name.txt`` beside it is what
the user reads. After a wanted change of wording run this file as a program, and read the difference.
"""

from __future__ import annotations

import contextlib
import os
import re
import time
from pathlib import Path

import pytest
import yaml

from pipeflow.case import nodes
from pipeflow.case.loading import MAX_BYTES, load_case, load_text
from pipeflow.errors import InputError

HERE = Path(__file__).parent
SPOILT = sorted((HERE / "spoilt").glob("*.yaml"))
SEVERAL = {"55-several": 5, "56-several-in-one-pipe": 4, "57-notation-and-values": 2}
# What a good line lacks, or a good line at odds with a spoilt one, is told at the good line.
TOLD_ELSEWHERE = {
    "15-missing-key", "20-parameters-of-other-model", "23-size-and-diameter",
    "24-neither-size-nor-diameter", "40-exponent-without-flow", "69-densities-at-odds", "70-no-density-to-be-had",
    "89-scenario-at-odds-with-the-mixture", "101-variable-speed-of-no-known-curve",
}  # fmt: skip
PLACE = re.compile(r"[^:\n]+\.yaml:[1-9][0-9]*:[1-9][0-9]*  ")


def answer(path: Path) -> list[str]:
    with contextlib.chdir(HERE), pytest.raises(InputError) as caught:
        load_text(path.read_text(encoding="utf-8"), path.name)
    return str(caught.value).splitlines()


def name(path: Path) -> str:
    return path.stem


def test_the_case_they_were_spoilt_from_is_good() -> None:
    case = load_case(HERE / "good.yaml")
    assert list(case.scenarios) == ["thick", "rough"]
    numbers = [path.stem.split("-")[0] for path in SPOILT]
    assert len(numbers) >= 99
    assert len(set(numbers)) == len(numbers)


@pytest.mark.parametrize("path", SPOILT, ids=name)
def test_the_answer_is_the_one_recorded(path: Path) -> None:
    recorded = path.with_suffix(".txt").read_text(encoding="utf-8").splitlines()
    assert answer(path) == recorded


@pytest.mark.parametrize("path", SPOILT, ids=name)
def test_one_mistake_gives_one_message(path: Path) -> None:
    assert len(answer(path)) == SEVERAL.get(path.stem, 1)


@pytest.mark.parametrize("path", SPOILT, ids=name)
def test_every_message_has_a_place_a_bounded_length_and_nothing_unprintable(path: Path) -> None:
    for line in answer(path):
        assert PLACE.match(line), line
        message = line.split("  ", 1)[1]
        assert message.isprintable()
        assert len(message) <= 240


@pytest.mark.parametrize("path", SPOILT, ids=name)
def test_the_place_is_in_a_line_that_was_spoilt(path: Path) -> None:
    good = set((HERE / "good.yaml").read_text(encoding="utf-8").splitlines())
    lines = path.read_text(encoding="utf-8").splitlines()
    spoilt = {number for number, line in enumerate(lines, 1) if line not in good}
    told = {int(line.split(":")[1]) for line in answer(path)}
    assert (told <= spoilt) == (path.stem not in TOLD_ELSEWHERE)


@pytest.mark.parametrize("path", SPOILT, ids=name)
def test_the_slower_parser_finds_the_same(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    quick = answer(path)
    monkeypatch.setattr(nodes, "_LOADER", yaml.SafeLoader)
    assert answer(path) == quick


def problem_of(path: Path) -> str:
    start = time.perf_counter()
    with pytest.raises(InputError) as caught:
        load_case(path)
    assert time.perf_counter() - start < 1.0
    assert len(caught.value.problems) == 1
    return str(caught.value).removeprefix(f"{path}")


def test_no_such_file(tmp_path: Path) -> None:
    assert problem_of(tmp_path / "none.yaml") == "  no such file"


def test_an_empty_name() -> None:
    with pytest.raises(InputError) as caught:
        load_case("")
    assert str(caught.value) == "''  an empty file name; a case is a file"


def test_a_directory(tmp_path: Path) -> None:
    assert problem_of(tmp_path) == "  a directory; a case is a file"


def test_a_named_pipe_nobody_writes_to(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.yaml")
    assert problem_of(tmp_path / "pipe.yaml") == "  not a regular file; a case is one"


@pytest.mark.skipif(not Path("/dev/zero").exists(), reason="no such device here")
def test_a_device() -> None:
    assert problem_of(Path("/dev/zero")) == "  not a regular file; a case is one"


@pytest.mark.skipif(os.geteuid() == 0, reason="root may read everything")
def test_a_file_without_permission(tmp_path: Path) -> None:
    path = tmp_path / "locked.yaml"
    path.write_text("title: x")
    path.chmod(0)
    assert problem_of(path) == "  reading it is not permitted"


@pytest.mark.parametrize("odd", ["a\0b", "x" * 5000])
def test_a_name_no_file_can_have(odd: str) -> None:
    with pytest.raises(InputError, match="cannot be read"):
        load_case(odd)


def test_a_file_of_10_megabytes_is_not_read(tmp_path: Path) -> None:
    path = tmp_path / "huge.yaml"
    path.write_bytes(b"# " + b"x" * 10_000_000)
    assert problem_of(path) == "  larger than 256 kB; a case is at most that"


def test_the_largest_file_is_still_read(tmp_path: Path) -> None:
    good = (HERE / "good.yaml").read_bytes()
    (tmp_path / "candidate-a.csv").write_bytes((HERE / "candidate-a.csv").read_bytes())
    path = tmp_path / "large.yaml"
    path.write_bytes(good + b"#" * (MAX_BYTES - len(good)))
    assert load_case(path).title == "Thickener underflow to filter feed tank"
    path.write_bytes(good + b"#" * (MAX_BYTES - len(good) + 1))
    assert "larger than" in problem_of(path)


@pytest.mark.parametrize("content", [b"", b"\n\n", b"# only a comment\n", b"---\n", b"~", b"\xef\xbb\xbf"])
def test_an_empty_file(tmp_path: Path, content: bytes) -> None:
    path = tmp_path / "empty.yaml"
    path.write_bytes(content)
    assert problem_of(path) == "  the file is empty; a case is needed"


def test_a_binary_file(tmp_path: Path) -> None:
    path = tmp_path / "binary.yaml"
    path.write_bytes(b"\x7fELF\0\0\x01")
    assert problem_of(path) == "  a binary file; a case is plain text"


def test_a_file_in_another_encoding(tmp_path: Path) -> None:
    path = tmp_path / "latin.yaml"
    path.write_bytes("revision: A\ntitle: Föhr\n".encode("latin-1"))
    assert problem_of(path) == ":2:9  not UTF-8 here; save the file as UTF-8"


@pytest.mark.parametrize(
    ("text", "place"),
    [
        ("[" * 100_000, "1:"),
        ("{a: " * 50_000, "1:"),
        ("- " * 100_000, "1:"),
        ("? " * 100_000, "1:"),
        ("\n".join(" " * level + "a:" for level in range(400)), "13:13"),
    ],
    ids=["brackets", "braces", "dashes", "questions", "indents"],
)
def test_depth_is_answered_at_once(text: str, place: str) -> None:
    start = time.perf_counter()
    with pytest.raises(InputError, match=f"case.yaml:{place}.*deep") as caught:
        load_text(text)
    assert time.perf_counter() - start < 1.0
    assert len(caught.value.problems) == 1


def test_an_alias_bomb_is_answered_at_once() -> None:
    lines = ["title: &a0 x"] + [f"b{n}: &a{n} [{', '.join([f'*a{n - 1}'] * 9)}]" for n in range(1, 300)]
    start = time.perf_counter()
    with pytest.raises(InputError, match=r"case.yaml:1:8  title  found the anchor"):
        load_text("\n".join(lines))
    assert time.perf_counter() - start < 1.0


@pytest.mark.parametrize(("value", "problems"), [("3 m", 0), ("3", 4000)], ids=["right", "wrong"])
def test_as_many_scenarios_as_may_be_over_as_long_a_route(value: str, problems: int) -> None:
    route = "".join(f"  - {{pipe: p{number}, diameter: 100 mm, length: 10 m}}\n" for number in range(500))
    changes = ", ".join(f"'route[p{number}].rise': {value}" for number in range(420, 500))
    scenarios = "".join(f"  s{number}: {{{changes}}}\n" for number in range(50))
    fluid = "fluid: {density: 1 kg/L, rheology: {model: newtonian, viscosity: 1 cP}}"
    start = time.process_time()
    try:
        load_text(f"title: t\n{fluid}\nflow: 1 m3/h\nroute:\n{route}scenarios:\n{scenarios}")
        found = 0
    except InputError as error:
        found = len(error.problems)
    assert found == problems
    # about 1.2 s on a slow machine
    assert time.process_time() - start < 3.0


def record() -> None:
    """Write the answers down anew."""
    for path in SPOILT:
        path.with_suffix(".txt").write_text("\n".join(answer(path)) + "\n", encoding="utf-8")


if __name__ == "__main__":
    record()
