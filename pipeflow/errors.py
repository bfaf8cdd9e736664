"""Every error the program words for its user, one exit status a class.

The command line catches :class:`PipeflowError` and nothing else: any other exception is a bug of ours and leaves with
status 3.
"""

from __future__ import annotations

from dataclasses import dataclass


class PipeflowError(Exception):
    """Base of the errors worded for the user; ``exit_code`` is the status the command leaves with."""

    exit_code = 3


@dataclass(frozen=True)
class Problem:
    """One thing wrong with an input file, at the place where it is written."""

    file: str
    line: int | None
    column: int | None
    key_path: str
    message: str

    def __str__(self) -> str:
        """``file:line:column  key.path  message``, without the parts that do not apply."""
        place = ":".join(str(part) for part in (self.file, self.line, self.column) if part is not None)
        return "  ".join(part for part in (place, self.key_path, self.message) if part)


class InputError(PipeflowError):
    """The input cannot be used; carries every problem found, in file order."""

    exit_code = 2

    def __init__(self, problems: list[Problem]) -> None:
        super().__init__("\n".join(str(problem) for problem in problems))
        self.problems = tuple(problems)
