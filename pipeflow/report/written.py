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
