"""The bar of long work: on a terminal once it takes long, and nowhere else."""

import io
import sys

import pytest

from pipeflow.report import progress
from pipeflow.report.progress import with_progress


class Terminal(io.StringIO):
    def isatty(self):
        return True


@pytest.mark.parametrize(
    ("stream", "patience", "shown"),
    [(Terminal(), -1.0, True), (Terminal(), 60.0, False), (io.StringIO(), -1.0, False)],
    ids=["long, terminal", "short, terminal", "long, pipe"],
)
def test_where_the_bar_is_shown(stream, patience, shown, monkeypatch):
    monkeypatch.setattr(sys, "stderr", stream)
    monkeypatch.setattr(progress, "PATIENCE", patience)
    monkeypatch.setenv("TERM", "xterm")
    assert list(with_progress(iter(range(5)), 5, "cases run again")) == [0, 1, 2, 3, 4]
    assert ("cases run again" in stream.getvalue()) == shown


def test_work_known_to_be_long_has_its_bar_before_the_first_item(monkeypatch):
    stream = Terminal()
    monkeypatch.setattr(sys, "stderr", stream)
    monkeypatch.setenv("TERM", "xterm")

    def slow():
        assert "samples" in stream.getvalue()
        yield 1

    assert list(with_progress(slow(), 1, "samples", at_once=True)) == [1]
