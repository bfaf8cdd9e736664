"""A commented case to start a line from, with the tables it names; the texts lie in ``pipeflow/data/starter``.

An option of the case is a key commented out without a space after its ``#``, with the lines that belong to it.
"""

from __future__ import annotations

import os
import re
from collections.abc import Mapping
from pathlib import Path
from typing import Final

from pipeflow.case.files import printable
from pipeflow.errors import InputError, Problem

TEXTS: Final = Path(__file__).parent.parent / "data" / "starter"
SUFFIXES: Final = (".yaml", ".yml")
NAMES_ACCEPTED: Final = "letters, digits, spaces, '.', '_' and '-', and a letter, digit or '_' first"
LENGTH = 80
"""Letters a name may have, so that the title and the names of the tables hold it."""

_NAME = re.compile(r"\w(?:[\w .-]*[\w-])?")


def starter(path: Path, *, readings: bool = False, pump: bool = False) -> dict[Path, str]:
    """Give the files that start a case, by path: the tables it names first, the case last.

    Parameters
    ----------
    path : Path
        The case file, with or without its ``.yaml``.
    readings : bool
        Take the rheology from a sheet of readings, and give a sheet to fill in.
    pump : bool
        Try a pump, and give a curve to fill in.

    Raises
    ------
    InputError
        The name is not one for a case.
    """
    case = _with_suffix(path)
    stem = case.stem
    text = _text("case.yaml", stem)
    files: dict[Path, str] = {}
    if readings:
        files[case.with_name(f"{stem}-readings.csv")] = _text("readings.csv", stem)
        text = switched_on(switched_off(text, "model"), "flow_curve", "status")
    if pump:
        files[case.with_name(f"{stem}-pump.csv")] = _text("pump.csv", stem)
        text = switched_on(text, "- pump", "pumps")
    return {**files, case: text}


def write_new(files: Mapping[Path, str]) -> None:
    """Write files where none are, all of them or none.

    Raises
    ------
    InputError
        One of them is there already, or a folder is missing or cannot be written in.
    """
    there = [path for path in files if os.path.lexists(path)]
    if there:
        message = "is there already and is not overwritten; give another name, or move it away"
        raise InputError([_problem(path, message) for path in there])
    written: list[Path] = []
    try:
        for path, text in files.items():
            with path.open("x", encoding="utf-8", newline="\n") as file:
                written.append(path)
                file.write(text)
    except OSError as error:
        for path in written:
            path.unlink(missing_ok=True)
        raise InputError([_problem(path, _worded(path, error))]) from None


def options(text: str) -> tuple[str, ...]:
    """Name the options of a case, in their order."""
    return tuple(match[1] for match in re.finditer(r"^ *#((?:- )?\w+):", text, re.MULTILINE))


def switched_on(text: str, *keys: str) -> str:
    """Take the ``#`` off options, each with the lines that belong to it."""
    lines = text.splitlines()
    for key in keys:
        start = next(index for index, line in enumerate(lines) if line.lstrip().startswith(f"#{key}:"))
        end = start + 1
        while end < len(lines) and lines[end].lstrip().startswith("#  "):
            end += 1
        lines[start:end] = [line.replace("#", "", 1) for line in lines[start:end]]
    return "\n".join(lines) + "\n"


def switched_off(text: str, key: str) -> str:
    """Make options of a key and of the keys that follow it in the same map."""
    lines = text.splitlines()
    start = next(index for index, line in enumerate(lines) if line.lstrip().startswith(f"{key}:"))
    indent = _indent(lines[start])
    end = start
    while end < len(lines) and _indent(lines[end]) >= indent and lines[end].strip():
        lines[end] = f"{' ' * indent}#{lines[end][indent:]}"
        end += 1
    return "\n".join(lines) + "\n"


def _indent(line: str) -> int:
    return len(line) - len(line.lstrip(" "))


def _with_suffix(path: Path) -> Path:
    name = path.name.removesuffix(next((suffix for suffix in SUFFIXES if path.name.endswith(suffix)), ""))
    if path.is_dir():
        raise InputError([_problem(path, "is a folder; give the name of the case in it")])
    if not _NAME.fullmatch(name):
        raise InputError([_problem(path, f"is no name for a case; {NAMES_ACCEPTED} are accepted")])
    if len(name) > LENGTH:
        raise InputError([_problem(path, f"has a name of {len(name)} letters; {LENGTH} at most are accepted")])
    return path if path.name != name else path.with_name(f"{name}{SUFFIXES[0]}")


def _text(name: str, stem: str) -> str:
    return (TEXTS / name).read_text(encoding="utf-8").replace("NAME", stem)


def _worded(path: Path, error: OSError) -> str:
    if isinstance(error, FileNotFoundError | NotADirectoryError):
        return f"can't be written: {printable(str(path.parent))} is no folder; make it first"
    return f"can't be written: {(error.strerror or str(error)).lower()}"


def _problem(path: Path, message: str) -> Problem:
    return Problem(printable(str(path)), None, None, "", message)
