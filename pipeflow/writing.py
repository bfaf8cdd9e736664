"""A file put in the place of another, whole or not at all."""

from __future__ import annotations

import contextlib
import os
import stat
import tempfile
from collections.abc import Iterator
from pathlib import Path


def replace_file(path: Path, text: str) -> None:
    """Write a file so that at every moment the old one or the new one is there, whole.

    The text goes to a file of its own beside it, is forced to the disk, and takes its place in one step; two at once
    each have their own file. A symbolic link is followed, permissions are kept.

    Raises
    ------
    OSError
        The folder cannot be written, the disk is full, or what stands there is no regular file.
    """
    path = Path(os.path.realpath(path))
    mode = mode_of(path)
    with _beside(path) as (handle, temporary):
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
            file.flush()
            os.fsync(file.fileno())
        temporary.chmod(mode)
        temporary.replace(path)
    # the file is in place; that its name outlives a power failure is a matter of the system from here on
    with contextlib.suppress(OSError):
        folder = os.open(path.parent, os.O_RDONLY)
        try:
            os.fsync(folder)
        finally:
            os.close(folder)


def mode_of(path: Path) -> int:
    """Permissions of the file that is there, or those that a new file gets; OSError for what is no regular file."""
    try:
        status = path.stat()
    except FileNotFoundError:
        mask = os.umask(0)
        os.umask(mask)
        return 0o666 & ~mask
    if not stat.S_ISREG(status.st_mode):
        raise OSError(None, "what stands in its place is no regular file")
    return stat.S_IMODE(status.st_mode)


@contextlib.contextmanager
def _beside(path: Path) -> Iterator[tuple[int, Path]]:
    """Open a file of a name of its own in the same folder, hidden; it is gone afterwards unless it was moved."""
    handle, name = tempfile.mkstemp(prefix=".pipeflow-", suffix=".tmp", dir=path.parent)
    try:
        yield handle, Path(name)
    except BaseException:
        with contextlib.suppress(OSError):
            Path(name).unlink()
        raise
