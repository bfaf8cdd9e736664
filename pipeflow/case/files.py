"""Files as the program opens them: regular ones of bounded size, UTF-8, or a message why not."""

from __future__ import annotations

import os
import stat
from pathlib import Path

from pipeflow.errors import InputError, Problem
from pipeflow.units import echo


def read_text_file(path: Path, most: int, what: str) -> str:
    """Read a text file; a pipe or a device does not make the program wait.

    Parameters
    ----------
    path : Path
    most : int
        Largest size in bytes; a larger file is refused before it is read.
    what : str
        What the file should be, in words, for messages.

    Raises
    ------
    InputError
        The file cannot be read, is too large, no regular file, or not UTF-8.
    """
    try:
        _refuse_unless_regular(path.stat(), path, most, what)
        handle = os.open(path, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0))
        with os.fdopen(handle, "rb") as file:
            _refuse_unless_regular(os.fstat(handle), path, most, what)
            content = file.read(most + 1)
    except (OSError, ValueError) as error:
        raise refusal(path, _why(error)) from None
    if len(content) > most:
        raise _too_large(path, most, what)
    return _text(content, path, what)


def why_no_file(path: Path) -> str:
    """Say why a path leads to no regular file; empty if it does. What the file holds is not looked at."""
    try:
        status = path.stat()
    except (OSError, ValueError) as error:
        return _why(error)
    if stat.S_ISDIR(status.st_mode):
        return "a directory"
    return "" if stat.S_ISREG(status.st_mode) else "not a regular file"


def file_state(path: str) -> tuple[int, int]:
    """Size and time of a file, by which a change of it shows; a file that is none is told when it is read."""
    try:
        status = Path(path).stat()
    except (OSError, ValueError):
        return (0, 0)
    return status.st_size, status.st_mtime_ns


def refusal(path: Path | str, message: str, line: int | None = None, column: int | None = None) -> InputError:
    """Make the error that refuses a file."""
    return InputError([Problem(printable(str(path)), line, column, "", message)])


def printable(name: str) -> str:
    """Make the name of a file fit for a message."""
    return "".join(char if char.isprintable() else echo(char)[1:-1] for char in name)


def _refuse_unless_regular(status: os.stat_result, path: Path, most: int, what: str) -> None:
    if stat.S_ISDIR(status.st_mode):
        raise refusal(path, f"a directory; {what} is a file")
    if not stat.S_ISREG(status.st_mode):
        raise refusal(path, f"not a regular file; {what} is one")
    if status.st_size > most:
        raise _too_large(path, most, what)


def _too_large(path: Path, most: int, what: str) -> InputError:
    return refusal(path, f"larger than {most // 1024} kB; {what} is at most that")


def _why(error: OSError | ValueError) -> str:
    if isinstance(error, FileNotFoundError):
        return "no such file"
    if isinstance(error, PermissionError):
        return "reading it is not permitted"
    return f"cannot be read: {getattr(error, 'strerror', None) or 'not a file name'}"


def _text(content: bytes, path: Path, what: str) -> str:
    if b"\0" in content:
        raise refusal(path, f"a binary file; {what} is plain text")
    try:
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        before = content[: error.start].decode("utf-8-sig")
        line, column = before.count("\n") + 1, len(before) - (before.rfind("\n") + 1) + 1
        raise refusal(path, "not UTF-8 here; save the file as UTF-8", line, column) from None
