"""Case files as they were in a git revision: read from the repository's own store, no working tree is touched.

The program ``git`` is called with lists of arguments, never through a shell, and only to read.
"""

from __future__ import annotations

import os
import subprocess
import tempfile
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path, PurePosixPath

from pipeflow.case.files import refusal
from pipeflow.case.loading import MAX_BYTES
from pipeflow.errors import InputError, Problem
from pipeflow.record.found import SUFFIXES, is_case
from pipeflow.units import echo

LARGEST_SHEET = 16 * 1024 * 1024
QUIET = {"GIT_TERMINAL_PROMPT": "0", "GIT_OPTIONAL_LOCKS": "0", "GIT_NO_LAZY_FETCH": "1", "LC_ALL": "C"}


@dataclass(frozen=True)
class Past:
    """Case files of a revision, laid out in a folder that is gone afterwards.

    Attributes
    ----------
    files : dict of str to str or None
        Where each case of today lies as it was, by its path; None where the revision has no such file.
    gone : tuple of str
        Cases of the revision, below the folders asked for, that are not there today.
    """

    files: dict[str, str | None]
    gone: tuple[str, ...]


@contextmanager
def as_of(revision: str, cases: Sequence[str], folders: Sequence[str]) -> Iterator[Past]:
    """Lay out cases as they were in a revision, with the sheets of readings that they name.

    Parameters
    ----------
    revision : str
        A commit, branch or tag, as ``git`` understands it.
    cases : sequence of str
        The case files of today.
    folders : sequence of str
        Where to look for cases that are gone.

    Raises
    ------
    InputError
        No such revision, a path outside a git repository, or ``git`` is not there.
    """
    if not revision or revision.startswith("-"):
        raise InputError([Problem("--since", None, None, "", f"found {echo(revision)}; a revision of git is accepted")])
    cases = [case for case in cases if Path(case).is_file()]
    with tempfile.TemporaryDirectory(prefix="pipeflow-") as temporary:
        files: dict[str, str | None] = {}
        gone: list[str] = []
        by_root = _by_root([*cases, *folders])
        for number, (root, paths) in enumerate(by_root.items()):
            tree = _Tree.of(root, revision)
            base = Path(temporary, str(number))
            _lay_out(tree, base, [path for path in paths if path in cases])
            files |= {path: _laid(base, tree, path) for path in paths if path in cases}
            gone += _gone(tree, [path for path in paths if path in folders])
        yield Past(files, tuple(gone))


def _by_root(paths: Sequence[str]) -> dict[Path, list[str]]:
    found: dict[Path, list[str]] = {}
    roots: dict[Path, Path] = {}
    for path in dict.fromkeys(paths):
        folder = Path(path) if Path(path).is_dir() else Path(path).parent
        if folder not in roots:
            roots[folder] = Path(os.fsdecode(_git(folder, "rev-parse", "--show-toplevel")).rstrip("\n"))
        found.setdefault(roots[folder], []).append(path)
    return found


@dataclass(frozen=True)
class _Tree:
    """The files of a commit: their object by their path in the repository, large ones left out."""

    root: Path
    objects: dict[str, str]

    @classmethod
    def of(cls, root: Path, revision: str) -> _Tree:
        try:
            wanted = _git(root, "rev-parse", "--verify", "--quiet", "--end-of-options", f"{revision}^{{commit}}")
        except InputError:
            message = f"found {echo(revision)}; the repository has no such revision"
            raise InputError([Problem("--since", None, None, "", message)]) from None
        listed = _git(root, "ls-tree", "-r", "-z", "-l", "--full-tree", os.fsdecode(wanted).strip())
        objects = {}
        for line in filter(None, listed.split(b"\0")):
            about, _, name = line.partition(b"\t")
            mode, _, key, size = about.split()
            if mode.startswith(b"100") and size != b"-" and int(size) <= LARGEST_SHEET:
                objects[os.fsdecode(name)] = key.decode()
        return cls(root, objects)

    def place(self, path: str) -> str:
        """Path of a file inside the repository, as its trees have it; links of the folder are followed."""
        there = Path(os.path.realpath(Path(path).parent), Path(path).name)
        return PurePosixPath(os.path.relpath(there, os.path.realpath(self.root))).as_posix()

    def contents(self, names: Sequence[str]) -> dict[str, bytes]:
        """Read files of the commit in one call."""
        wanted = [name for name in dict.fromkeys(names) if name in self.objects]
        asked = "".join(f"{self.objects[name]}\n" for name in wanted).encode()
        answer = _git(self.root, "cat-file", "--batch", given=asked) if wanted else b""
        found = {}
        for name in wanted:
            head, _, answer = answer.partition(b"\n")
            size = int(head.split()[2])
            found[name], answer = answer[:size], answer[size + 1 :]
        return found


def _lay_out(tree: _Tree, base: Path, cases: Sequence[str]) -> None:
    texts = tree.contents([tree.place(case) for case in cases])
    said = "\n".join(content.decode("utf-8", "replace") for content in texts.values())
    sheets = [name for name in tree.objects if name.lower().endswith(".csv") and PurePosixPath(name).name in said]
    for name, content in {**tree.contents(sheets), **texts}.items():
        path = base.joinpath(*PurePosixPath(name).parts)
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(content)


def _laid(base: Path, tree: _Tree, case: str) -> str | None:
    path = base / tree.place(case)
    return str(path) if path.is_file() else None


def _gone(tree: _Tree, folders: Sequence[str]) -> Iterator[str]:
    """Cases of the commit below the folders, without a file today; hidden ones as they are passed over today."""
    for folder in folders:
        inside = PurePosixPath(tree.place(str(Path(folder, "any")))).parent
        below = [name for name in tree.objects if PurePosixPath(name).is_relative_to(inside)]
        names = {
            name: Path(folder, *PurePosixPath(name).relative_to(inside).parts)
            for name in below
            if name.endswith(SUFFIXES) and not any(p.startswith(".") for p in PurePosixPath(name).parts)
        }
        lost = [name for name, path in names.items() if not os.path.lexists(path)]
        for name, content in tree.contents(lost).items():
            if len(content) <= MAX_BYTES and is_case(content.decode("utf-8", "replace")):
                yield str(names[name])


def _git(folder: Path, *arguments: str, given: bytes = b"") -> bytes:
    """Run ``git`` in a folder and give what it prints.

    Raises
    ------
    InputError
        It is not there, or says no; its last line is the reason.
    """
    command = ["git", "-C", str(folder), *arguments]
    try:
        run = subprocess.run(command, input=given, capture_output=True, check=False, env={**os.environ, **QUIET})
    except FileNotFoundError:
        raise refusal("--since", "needs the program git, which is not there") from None
    except OSError as error:
        raise refusal("--since", f"git can't be run: {error.strerror}") from None
    if run.returncode:
        said = os.fsdecode(run.stderr).strip().splitlines() or ["no reason given"]
        raise refusal(folder, f"git: {said[-1].removeprefix('fatal: ')}")
    return run.stdout
