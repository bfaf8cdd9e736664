"""Case files in the paths a user names: files as they are, folders walked."""

from __future__ import annotations

import os
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from pipeflow.case.files import printable, read_text_file
from pipeflow.case.loading import MAX_BYTES
from pipeflow.errors import InputError
from pipeflow.record.store import record_path

SUFFIXES = (".yaml", ".yml")
_KEY_OF_A_CASE = re.compile(r"""^["']?(?:fluid|route)["']?\s*:""", re.MULTILINE)
_KEY_IN_BRACES = re.compile(r"""[{,\s]["']?(?:fluid|route)["']?\s*:""")


@dataclass(frozen=True)
class Found:
    """Case files in sorted order, YAML files of folders that are no cases, and what cannot be used, in words."""

    cases: tuple[str, ...]
    skipped: tuple[str, ...]
    problems: tuple[str, ...]


def find_cases(paths: Sequence[str]) -> Found:
    """Find the case files: a file named is one, in folders those YAML files that speak of a fluid or a route.

    Hidden folders and files are passed over, and each file is taken once.
    """
    cases: dict[str, str] = {}
    skipped: list[str] = []
    problems: list[str] = []
    for path in paths:
        if not path:
            problems.append("''  an empty name; give a case file or a folder")
            continue
        if not Path(path).is_dir():
            cases.setdefault(os.path.realpath(path), path)
            continue
        files = sorted(_yaml_files(path, problems))
        inside = [file for file in files if is_case_file(file)]
        if not inside:
            problems.append(
                f"{printable(path)}  a folder without a case: no YAML file that speaks of a fluid or a route"
            )
        for file in inside:
            cases.setdefault(os.path.realpath(file), str(file))
        skipped += [str(file) for file in files if file not in inside]
    return Found(tuple(_of_their_own_record(list(cases.values()), problems)), tuple(skipped), tuple(problems))


def _yaml_files(folder: str, problems: list[str]) -> Iterator[Path]:
    def refuse(error: OSError) -> None:
        problems.append(f"{printable(str(error.filename))}  the folder can't be read: {error.strerror}")

    for inside, folders, files in os.walk(folder, onerror=refuse):
        folders[:] = [name for name in folders if not name.startswith(".")]
        yield from (Path(inside, name) for name in files if name.endswith(SUFFIXES) and not name.startswith("."))


def is_case_file(path: Path) -> bool:
    """Whether a YAML file is a case; one that cannot be read is taken for one, so that the reason is told."""
    try:
        return is_case(read_text_file(path, MAX_BYTES, "a case"))
    except InputError:
        return True


def is_case(text: str) -> bool:
    """Whether a text speaks of a fluid or a route, at its top level."""
    pattern = _KEY_IN_BRACES if text.lstrip().startswith("{") else _KEY_OF_A_CASE
    return bool(pattern.search(text))


def _of_their_own_record(cases: list[str], problems: list[str]) -> Iterator[str]:
    """Refuse a second case of one folder that would have the record of the first: ``a.yaml`` and ``a.yml``."""
    owners: dict[Path, str] = {}
    for case in cases:
        owner = owners.setdefault(record_path(case), case)
        if owner == case:
            yield case
        else:
            problems.append(f"{printable(case)}  would share its record with {printable(owner)}; rename one of them")
