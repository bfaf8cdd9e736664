"""The files behind a case, as they stand: for a page that shows what was read, and by which hash to tell it again."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from pipeflow.case.files import refusal
from pipeflow.case.model import Case


@dataclass(frozen=True)
class SourceFile:
    """A file: its name without its folder, its text, and the SHA-256 of its bytes."""

    name: str
    text: str
    sha256: str


def source_files(case: Case) -> tuple[SourceFile, ...]:
    """Read the case file and each file that it or a scenario of it names, once each.

    Raises
    ------
    InputError
        One is no longer there.
    """
    paths = dict.fromkeys(path for one in (case, *case.scenarios.values()) for path in _paths(one))
    return tuple(_read(path) for path in paths)


def _paths(case: Case) -> Iterator[Path]:
    yield Path(case.file)
    yield from (Path(readings) for readings in case.readings)
    yield from (Path(case.file).parent / pump.curve for pump in case.pumps)


def _read(path: Path) -> SourceFile:
    try:
        content = path.read_bytes()
    except OSError as error:
        raise refusal(path, f"cannot be read again: {error.strerror or error}") from None
    return SourceFile(path.name, content.decode("utf-8-sig", errors="replace"), hashlib.sha256(content).hexdigest())
