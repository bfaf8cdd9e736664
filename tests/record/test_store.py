"""The record on the disk: whole at every moment, said when it cannot be used, never overwritten unsaid."""

import json
import os
import random
import signal
import stat
import subprocess
import sys
import time

import pytest
from making import case_of

from pipeflow.errors import InputError
from pipeflow.record.inputs import without_folder
from pipeflow.record.store import (
    FORMAT,
    Record,
    UnusableRecordError,
    keep_aside,
    read,
    record_of,
    record_path,
    write,
    written,
)
from pipeflow.study import solve


@pytest.fixture(scope="module")
def record():
    case = without_folder(case_of())
    return record_of(case, solve(case))


@pytest.fixture(scope="module")
def text(record):
    return written(record)


def test_a_record_comes_back(record, text, tmp_path):
    path = record_path(tmp_path / "line.yaml")
    assert path.name == "line.record.json"
    assert read(path) is None
    write(path, text)
    assert read(path).inputs == record.inputs
    assert written(read(path)) == text
    assert {*record.program} == {"pipeflow", "python", "numpy", "scipy"}
    assert "metzner-reed" in record.methods


def test_a_record_cut_short_anywhere_is_said(text, tmp_path):
    path = tmp_path / "line.record.json"
    content = text.encode()
    for part in range(20):
        path.write_bytes(content[: len(content) * part // 20])
        with pytest.raises(UnusableRecordError, match="damaged"):
            read(path)


def altered(text, **changes):
    return json.dumps({**json.loads(text), **changes})


@pytest.mark.parametrize(
    ("spoil", "said"),
    [
        (lambda text: "[]", "no record of this program"),
        (lambda text: "null", "no record of this program"),
        (lambda text: "{}", "no record of this program"),
        (lambda text: "{" * 100_000, "no JSON document"),
        (lambda text: "<<<<<<< HEAD\n" + text, "no JSON document"),
        (lambda text: text.replace("1400.0", "NaN"), "no JSON document"),
        (lambda text: text.replace("1400.0", "1401.0", 1), "its checksum does not fit"),
        (lambda text: altered(text, format=FORMAT + 1), "a newer format, 2; this version writes format 1"),
        (lambda text: altered(text, format=0), "another format, 0"),
        (lambda text: altered(text, format="one"), "another format, one"),
        (lambda text: altered(text, format=True), "another format, True"),
        (lambda text: altered(text, extra=1), "its checksum does not fit"),
        (lambda text: text.encode() + b"\x00\xff", "a binary file"),
        (lambda text: b"\xff\xfe" + text.encode(), "not UTF-8"),
        (lambda text: os.urandom(3000).replace(b"\0", b"\1") + b"\0", "binary"),
    ],
)
def test_what_cannot_be_used_is_said(spoil, said, text, tmp_path):
    path = tmp_path / "line.record.json"
    spoilt = spoil(text)
    path.write_bytes(spoilt if isinstance(spoilt, bytes) else spoilt.encode())
    with pytest.raises(UnusableRecordError, match=said):
        read(path)


def test_a_record_of_other_inputs_than_a_case_is_said(record, tmp_path):
    path = tmp_path / "line.record.json"
    path.write_text(written(Record(record.program, "", (), {"is": "map", "entries": {}}, {})))
    with pytest.raises(UnusableRecordError, match="its inputs are no case"):
        read(path)


def test_a_record_that_cannot_be_used_is_kept_under_a_name_of_its_own(tmp_path):
    path = tmp_path / "line.record.json"
    path.write_text("spoilt")
    names = [keep_aside(path).name for _ in range(3)]
    assert names == ["line.record.json.kept", "line.record.json.kept-2", "line.record.json.kept-3"]
    assert {(tmp_path / name).read_text() for name in names} == {"spoilt"}


def test_permissions_are_kept_and_a_new_record_has_those_of_a_new_file(tmp_path):
    path, beside = tmp_path / "line.record.json", tmp_path / "beside"
    beside.touch()
    write(path, "one")
    assert path.stat().st_mode == beside.stat().st_mode
    path.chmod(0o640)
    write(path, "two")
    assert stat.S_IMODE(path.stat().st_mode) == 0o640
    assert path.read_text() == "two"


def test_a_symbolic_link_is_followed(tmp_path):
    (tmp_path / "store").mkdir()
    link = tmp_path / "line.record.json"
    link.symlink_to(tmp_path / "store" / "line.json")
    write(link, "one")
    write(link, "two")
    assert link.is_symlink()
    assert (tmp_path / "store" / "line.json").read_text() == "two"
    assert [path.name for path in (tmp_path / "store").iterdir()] == ["line.json"]


def folder(path):
    path.mkdir()


def pipe(path):
    os.mkfifo(path)


def loop(path):
    path.symlink_to(path)


@pytest.mark.parametrize("stand_in", [folder, pipe, loop])
def test_what_is_no_file_is_left_alone_and_said(stand_in, tmp_path):
    path = tmp_path / "line.record.json"
    stand_in(path)
    before = os.lstat(path).st_mode
    with pytest.raises(UnusableRecordError):
        read(path)
    with pytest.raises(InputError, match=r"line\.record\.json  the record can't be used, and can't be kept aside"):
        keep_aside(path)
    with pytest.raises(InputError, match="the record can't be written"):
        write(path, "text")
    assert os.lstat(path).st_mode == before


@pytest.mark.skipif(os.geteuid() == 0, reason="root may write anywhere")
def test_a_folder_that_may_not_be_written_is_said(tmp_path):
    tmp_path.chmod(0o555)
    with pytest.raises(InputError, match="can't be written: Permission denied"):
        write(tmp_path / "line.record.json", "text")


@pytest.mark.parametrize("step", ["fsync", "replace"])
def test_a_full_disk_is_said_and_leaves_the_old_record_and_nothing_else(step, tmp_path, monkeypatch):
    path = tmp_path / "line.record.json"
    write(path, "old")

    def full(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("os.fsync" if step == "fsync" else "pathlib.Path.replace", full)
    with pytest.raises(InputError, match="can't be written: No space left on device"):
        write(path, "new")
    monkeypatch.undo()
    assert path.read_text() == "old"
    assert [one.name for one in tmp_path.iterdir()] == [path.name]


WRITER = """\
import sys
from pathlib import Path
sys.path[:] = {path!r}
from pipeflow.record.store import write
place, texts = Path(sys.argv[1]), [name * {size} for name in sys.argv[2]]
print("ready", flush=True)
for _ in range(int(sys.argv[3])):
    for text in texts:
        write(place, text)
"""
SIZE = 60_000


def writer(place, letters, rounds):
    code = WRITER.format(path=sys.path, size=SIZE)
    return subprocess.Popen(
        [sys.executable, "-S", "-c", code, str(place), letters, str(rounds)], stdout=subprocess.PIPE, text=True
    )


@pytest.mark.filterwarnings("ignore:.*fork.*:DeprecationWarning")
def test_a_kill_at_fifty_moments_leaves_a_whole_record(tmp_path):
    """Writers forked from one that has loaded everything are killed at fifty moments of their writing."""
    path = tmp_path / "line.record.json"
    write(path, "a" * SIZE)
    draw, interrupted = random.Random(1), 0
    for _ in range(50):
        child = os.fork()
        if child == 0:
            try:
                while True:
                    write(path, "b" * SIZE)
                    write(path, "a" * SIZE)
            finally:
                os._exit(1)
        time.sleep(draw.uniform(0.0, 0.02))
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)
        assert path.read_text() in ("a" * SIZE, "b" * SIZE)
        interrupted = sum(one.suffix == ".tmp" for one in tmp_path.iterdir())
    assert interrupted >= 5, "the kills were to fall into the writing"


def test_two_writers_at_once_leave_the_record_of_one_of_them(tmp_path):
    path = tmp_path / "line.record.json"
    write(path, "a" * SIZE)
    both = [writer(path, letters, 40) for letters in ("ab", "cd")]
    for one in both:
        assert one.stdout.readline() == "ready\n"
    seen = set()
    while any(one.poll() is None for one in both):
        text = path.read_text()
        assert len(text) == SIZE
        assert len(set(text)) == 1
        seen |= set(text)
    assert [one.wait() for one in both] == [0, 0]
    assert len(seen) > 1
    assert [one.name for one in tmp_path.iterdir()] == [path.name]
    for one in both:
        one.stdout.close()
