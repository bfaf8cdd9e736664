"""Write the reference of the command from the program: ``python docs/commands.py``, or ``--check`` to compare."""

from __future__ import annotations

import inspect
import re
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import typer
from pages import write_or_compare

from pipeflow.cli import app
from pipeflow.cli.common import BUG

PAGE = Path(__file__).parent / "commands.md"
READ_ON = {
    "new": "tutorial.md",
    "solve": "operability.md",
    "fit": "flow-curves.md",
    "size": "operability.md#sizing",
    "curve": "pumps.md",
    "sweep": "sweep.md",
    "envelope": "sweep.md",
    "report": "report.md",
    "rerun": "rerun.md",
    "methods": "methods.md",
}
"""The page that says more of a command."""
OF_ALL = f"""\
Messages go to standard error, one line a mistake, with file, line and column. Standard output holds the result alone.
Status {BUG} of any command is a fault of the program: please report it, with the case file."""
HOME = re.compile(r"docs/([\w-]+\.md)")


def commands_page() -> str:
    """Give the page of the commands, as the program knows them."""
    return "\n".join(_lines()) + "\n"


def _lines() -> Iterator[str]:
    command: Any = typer.main.get_command(app)
    yield from (
        "# Commands",
        "",
        "Written by `docs/commands.py` from the program; `pipeflow COMMAND --help` prints the same.",
    )
    yield from ("", OF_ALL, "", "| command | does |", "|---|---|")
    for name, one in command.commands.items():
        yield f"| [`pipeflow {name}`](#pipeflow-{name}) | {_paragraphs(one)[0].removesuffix('.')} |"
    yield from ("", *_table("option", _options(command)))
    for name, one in command.commands.items():
        yield from _section(name, one)


def _section(name: str, command: Any) -> Iterator[str]:
    arguments = [parameter for parameter in command.params if parameter.param_type_name == "argument"]
    what, *more = _paragraphs(command)
    required = [f"{one.opts[-1]} {_holder(one)}" for one in command.params if one.required and one not in arguments]
    usage = " ".join(["pipeflow", name, *(argument.metavar for argument in arguments), *required, "[OPTIONS]"])
    yield from ("", f"## pipeflow {name}", "", "```", usage, "```", "", what)
    yield from (
        ("", *_table("argument", [(argument.metavar, argument.help) for argument in arguments])) if arguments else ()
    )
    options = _options(command)
    yield from ("", *_table("option", options)) if options else ()
    for paragraph in more:
        yield from ("", *_statuses(paragraph)) if paragraph.startswith("Exit status: ") else ("", paragraph)
    if name in READ_ON and (PAGE.parent / READ_ON[name].split("#")[0]).exists():
        yield from ("", f"More: [{_title(READ_ON[name])}]({READ_ON[name]})")


def _title(link: str) -> str:
    page, _, part = link.partition("#")
    return part.capitalize() or (PAGE.parent / page).read_text(encoding="utf-8").splitlines()[0].removeprefix("# ")


def _statuses(paragraph: str) -> list[str]:
    """Make a table of ``Exit status: 0 this; 1 that.``, a meaning holding as many clauses as it likes."""
    meanings = re.split(r"; (?=\d )", paragraph.removeprefix("Exit status: ").removesuffix("."))
    return _table("exit status", [tuple(meaning.split(" ", 1)) for meaning in meanings], mono=False)


def _table(head: str, rows: list[tuple[str, ...]], *, mono: bool = True) -> list[str]:
    mark = "`" if mono else ""
    return [f"| {head} | |", "|---|---|", *(f"| {mark}{name}{mark} | {_linked(what)} |" for name, what in rows)]


def _options(command: Any) -> list[tuple[str, str]]:
    """Name the options, each with its place holder and what it does."""
    given = [one for one in command.params if one.param_type_name == "option" and one.name != "help"]
    return [(", ".join(one.opts) + ("" if one.is_flag else f" {_holder(one)}"), _help(one)) for one in given]


def _holder(option: Any) -> str:
    return option.metavar or option.type.name.upper()


def _help(option: Any) -> str:
    has_default = not option.is_flag and option.default not in (None, "") and "default" not in option.help
    return option.help + (f" Default {option.default}." if has_default else "")


def _linked(text: str) -> str:
    """Make links of the pages that a text of the program names, and keep a column mark from ending a cell."""
    return HOME.sub(r"[\1](\1)", text).replace("|", "\\|")


def _paragraphs(command: Any) -> list[str]:
    text = inspect.cleandoc(command.help or "")
    return [" ".join(paragraph.split()) for paragraph in text.split("\n\n")]


if __name__ == "__main__":
    sys.exit(write_or_compare(PAGE, commands_page()))
