"""The record of a case on the disk: read with every reason why it cannot be used, written whole or not at all."""

from __future__ import annotations

import contextlib
import hashlib
import json
import os
import platform
from dataclasses import dataclass
from functools import cache
from importlib.metadata import version
from pathlib import Path
from typing import Any

import numpy as np

from pipeflow import __version__
from pipeflow.case.files import read_text_file, refusal
from pipeflow.case.model import Case
from pipeflow.errors import InputError
from pipeflow.record.document import document
from pipeflow.record.inputs import Json, digest, encoded, folded, unfolded
from pipeflow.study.result import Result
from pipeflow.writing import mode_of, replace_file

FORMAT = 1
MAX_BYTES = 16 * 1024 * 1024
SUFFIX = ".record.json"
KEPT = ".kept"
CHECKSUM = "sha256"


@dataclass(frozen=True)
class Record:
    """What is stored of a case.

    Attributes
    ----------
    program : dict of str to str
        Versions by name: ``pipeflow``, ``python``, ``numpy``, ``scipy``.
    digest : str
        SHA-256 of the inputs.
    methods : tuple of str
        Keys of the methods that the results rest on.
    inputs : Json
        The case laid out by :mod:`pipeflow.record.inputs`.
    results : dict
        The document of :mod:`pipeflow.record.document`; of a case with pumps, under ``pumps``, that of
        :mod:`pipeflow.study.pumping.document` too.
    """

    program: dict[str, str]
    digest: str
    methods: tuple[str, ...]
    inputs: Json
    results: dict[str, Any]


class UnusableRecordError(Exception):
    """A record that is there but cannot be used; the message says why."""


def record_path(case_file: str | Path) -> Path:
    """Where the record of a case file stands: ``line.record.json`` beside ``line.yaml``."""
    return Path(case_file).with_suffix(SUFFIX)


def record_of(case: Case, result: Result) -> Record:
    """Make the record of a case solved with its files by name alone, as ``inputs.without_folder`` gives it."""
    keys = {use.source.key for one in (result, *result.scenarios.values()) for use in one.methods}
    inputs, results = encoded(case), document(result)
    if case.pumps:
        pumps, of_pumps = _of_pumps(case)
        results["pumps"], keys = pumps, keys | of_pumps
    return Record(versions(), digest(inputs), tuple(sorted(keys)), inputs, results)


def _of_pumps(case: Case) -> tuple[Json, set[str]]:
    """What is stored of the pumps of a case, and the keys of the methods that it rests on."""
    from pipeflow.study.pumping.curve import curve
    from pipeflow.study.pumping.document import pumps_document

    found = curve(case)
    return pumps_document(found), {use.source.key for use in found.methods}


@cache
def versions() -> dict[str, str]:
    """Versions of the program and of what its figures rest on; scipy is asked without loading it."""
    return {
        "pipeflow": __version__,
        "python": platform.python_version(),
        "numpy": np.__version__,
        "scipy": version("scipy"),
    }


def written(record: Record) -> str:
    """Give the text of a record, with a checksum that tells a record damaged or changed by hand."""
    content = {
        "format": FORMAT,
        "program": record.program,
        "inputs_sha256": record.digest,
        "methods": list(record.methods),
        "inputs": folded(record.inputs),
        "results": record.results,
    }
    return json.dumps({**content, CHECKSUM: checksum(content)}, indent=1, ensure_ascii=False, allow_nan=False) + "\n"


def checksum(content: dict[str, Any]) -> str:
    """SHA-256 of the content of a record, however it is spaced."""
    text = json.dumps(content, sort_keys=True, separators=(",", ":"), ensure_ascii=True)
    return hashlib.sha256(text.encode()).hexdigest()


def read(path: Path) -> Record | None:
    """Read a record; None where there is none.

    Raises
    ------
    UnusableRecordError
        It is there but cannot be read, is damaged, or is of another format.
    """
    if not os.path.lexists(path):
        return None
    try:
        return _understood(_loaded(read_text_file(path, MAX_BYTES, "a record")))
    except InputError as refused:
        raise UnusableRecordError("; ".join(problem.message for problem in refused.problems)) from None


def _loaded(text: str) -> dict[str, Any]:
    try:
        content = json.loads(text, parse_constant=_refuse_constant)
    except (ValueError, RecursionError):
        raise UnusableRecordError("damaged: it is no JSON document") from None
    if not isinstance(content, dict) or "format" not in content:
        raise UnusableRecordError("damaged: it is no record of this program")
    return content


def _refuse_constant(name: str) -> None:
    raise ValueError(name)


def _understood(content: dict[str, Any]) -> Record:
    found = content["format"]
    if found != FORMAT or isinstance(found, bool):
        age = "a newer" if isinstance(found, int | float) and found > FORMAT else "another"
        raise UnusableRecordError(f"of {age} format, {str(found)[:20]}; this version writes format {FORMAT}")
    stored = content.pop(CHECKSUM, None)
    if stored != checksum(content):
        raise UnusableRecordError("damaged, or changed by hand: its checksum does not fit")
    if not isinstance(content.get("inputs"), dict) or content["inputs"].get("is") != "Case":
        raise UnusableRecordError("damaged: its inputs are no case")
    try:
        return Record(
            program={str(name): str(one) for name, one in content["program"].items()},
            digest=str(content["inputs_sha256"]),
            methods=tuple(str(key) for key in content["methods"]),
            inputs=unfolded(content["inputs"]),
            results=dict(content["results"]),
        )
    except (KeyError, TypeError, ValueError, AttributeError) as error:
        raise UnusableRecordError(f"damaged: {type(error).__name__}: {error}") from None


def write(path: Path, text: str) -> None:
    """Write a record in the place of an old one, as :func:`pipeflow.writing.replace_file` does.

    Raises
    ------
    InputError
        The folder cannot be written, the disk is full, or what stands there is no file.
    """
    try:
        replace_file(path, text)
    except OSError as error:
        raise refusal(path, f"the record can't be written: {error.strerror or error}") from None


def keep_aside(path: Path) -> Path:
    """Copy a record that cannot be used to a name that is free, and give that name.

    Raises
    ------
    InputError
        It cannot be read or copied.
    """
    try:
        mode_of(path)
        content = path.read_bytes()
        for number in range(1, 1000):
            aside = path.with_name(f"{path.name}{KEPT}{'' if number == 1 else f'-{number}'}")
            with contextlib.suppress(FileExistsError), aside.open("xb") as file:
                file.write(content)
                return aside
        raise OSError(None, "too many copies are there already")
    except OSError as error:
        message = f"the record can't be used, and can't be kept aside: {error.strerror or error}"
        raise refusal(path, message) from None
