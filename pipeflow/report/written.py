"""Pages and tables written to files."""

from __future__ import annotations

from pathlib import Path

from pipeflow.errors import InputError, Problem
from pipeflow.writing import replace_file


def write_text(path: Path, text: str) -> None:
    """Write a file in place of what was there, as :func:`pipeflow.writing.replace_file` does.

    Raises
    ------
    InputError
        The folder is not there or cannot be written in, or what stands there is no file.
    """
    try:
        replace_file(path, text)
    except OSError as error:
        why = error.strerror or str(error)
        raise InputError([Problem(str(path), None, None, "", f"can't be written: {why.lower()}")]) from None


def write_result(path: Path, text: str) -> None:
    """Write a table or a chart; over a file only if that is one of the same kind, so that no input is lost.

    Raises
    ------
    InputError
        As :func:`write_text`, and where another kind of file stands there.
    """
    mark = _mark(text)
    if path.is_file() and head_of(path, len(mark.encode())) not in (b"", mark.encode()):
        kind = "chart" if mark.startswith("<svg") else "table"
        message = f"is there already and is no {kind} of this command; name another file, or remove it"
        raise InputError([Problem(str(path), None, None, "", message)])
    write_text(path, text)


def _mark(text: str) -> str:
    """What every file of a kind begins with: the names of the columns, or the name of the chart."""
    return text[: text.index("-title")] if text.startswith("<svg") else text.partition("\n")[0]


def head_of(path: Path, size: int) -> bytes:
    """First bytes of a file; none of one that can't be read, which is told when it is written."""
    try:
        with path.open("rb") as file:
            return file.read(size)
    except OSError:
        return b""
