"""A case file to a :class:`pipeflow.case.model.Case`, or every reason why it cannot be one."""

from __future__ import annotations

import os
import stat
from dataclasses import replace
from pathlib import Path

from pipeflow.case.building import build_case
from pipeflow.case.checking import examine
from pipeflow.case.model import Case
from pipeflow.case.nodes import Finding, UnreadableError, read_tree
from pipeflow.case.scenarios import read_scenarios
from pipeflow.errors import InputError, Problem
from pipeflow.units import echo

MAX_BYTES = 256 * 1024


def load_case(path: str | Path) -> Case:
    """Read a case file.

    Parameters
    ----------
    path : str or Path
        A regular file, UTF-8, at most 256 kB.

    Returns
    -------
    Case
        In SI units, with its scenarios.

    Raises
    ------
    InputError
        The file cannot be used; carries every problem found, in file order.
    """
    try:
        text = _text(_content(Path(path)))
    except UnreadableError as error:
        raise _input_error(str(path), [error.finding]) from None
    return load_text(text, str(path))


def load_text(text: str, file: str = "case.yaml") -> Case:
    """Read the text of a case file like :func:`load_case`; ``file`` is what errors and the case name."""
    try:
        tree, notation = read_tree(text)
    except UnreadableError as error:
        raise _input_error(file, [error.finding]) from None
    folder = Path(file).parent
    part, faults = examine(tree, folder)
    scenarios, scenario_faults = read_scenarios(tree, [*notation, *faults], folder)
    found = [*notation, *faults, *scenario_faults]
    if found or part is None:
        raise _input_error(file, found)
    case = build_case(part, file)
    return replace(case, scenarios={name: build_case(changed, file) for name, changed in scenarios.items()})


def _input_error(file: str, findings: list[Finding]) -> InputError:
    named = "".join(char if char.isprintable() else echo(char)[1:-1] for char in file)
    ordered = sorted(findings, key=lambda finding: (finding.line or 0, finding.column or 0))
    return InputError([Problem(named, f.line, f.column, f.key_path, f.message) for f in ordered])


def _content(path: Path) -> bytes:
    """Read a regular file of bounded size; a pipe or a device must not make the program wait."""
    try:
        _refuse_unless_regular(path.stat())
        handle = os.open(path, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0))
        with os.fdopen(handle, "rb") as file:
            _refuse_unless_regular(os.fstat(handle))
            return _bounded(file.read(MAX_BYTES + 1))
    except (OSError, ValueError) as error:
        raise _unreadable(_why(error)) from None


def _refuse_unless_regular(status: os.stat_result) -> None:
    if stat.S_ISDIR(status.st_mode):
        raise _unreadable("a directory; a case is a file")
    if not stat.S_ISREG(status.st_mode):
        raise _unreadable("not a regular file; a case is one")
    if status.st_size > MAX_BYTES:
        raise _too_large()


def _bounded(content: bytes) -> bytes:
    if len(content) > MAX_BYTES:
        raise _too_large()
    return content


def _too_large() -> UnreadableError:
    return _unreadable(f"larger than {MAX_BYTES // 1024} kB; a case file is at most that")


def _unreadable(message: str) -> UnreadableError:
    return UnreadableError(Finding(None, None, "", message))


def _why(error: OSError | ValueError) -> str:
    if isinstance(error, FileNotFoundError):
        return "no such file"
    if isinstance(error, PermissionError):
        return "reading it is not permitted"
    return f"cannot be read: {getattr(error, 'strerror', None) or 'not a file name'}"


def _text(content: bytes) -> str:
    if b"\0" in content:
        raise _unreadable("a binary file; a case is plain text")
    try:
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        before = content[: error.start].decode("utf-8-sig")
        line, column = before.count("\n") + 1, len(before) - (before.rfind("\n") + 1) + 1
        raise UnreadableError(Finding(line, column, "", "not UTF-8 here; save the file as UTF-8")) from None
