"""Pages and tables written to files, whole or not at all."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path

from pipeflow.errors import InputError, Problem


def write_text(path: Path, text: str) -> None:
    """Write a file in place of what was there, atomically.

    Raises
    ------
    InputError
        The folder is not there or cannot be written in, or the path is a folder.
    """
    try:
        if path.is_dir():
            raise IsADirectoryError("it is a folder")
        handle, beside = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.", suffix=".part")
        try:
            with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
                file.write(text)
            Path(beside).chmod(_mode(path))
            Path(beside).replace(path)
        except BaseException:
            Path(beside).unlink(missing_ok=True)
            raise
    except OSError as error:
        why = error.strerror or str(error)
        raise InputError([Problem(str(path), None, None, "", f"can't be written: {why.lower()}")]) from None


def _mode(path: Path) -> int:
    """Permissions of the file that is replaced, else those a new file gets."""
    if path.exists():
        return path.stat().st_mode & 0o777
    mask = os.umask(0)
    os.umask(mask)
    return 0o666 & ~mask
