"""What a page is made of: sections of a few kinds of block, without a word of HTML."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from typing import ClassVar

from markupsafe import Markup

NARROW = 40
"""Letters of a line of a file that is shown in two columns."""
SHORT = 8
"""Rows of the longest table that is kept on one printed page."""


@dataclass(frozen=True)
class Text:
    """A paragraph; ``kind`` is ``plain``, ``strong`` for what must not be missed, or ``small``."""

    text: str
    kind: str = "plain"
    form: ClassVar[str] = "text"


@dataclass(frozen=True)
class Items:
    """A list; ``ordered`` where the order means something."""

    items: tuple[str, ...]
    ordered: bool = False
    form: ClassVar[str] = "items"


@dataclass(frozen=True)
class Head:
    """The head of a column: what it is, and its unit."""

    name: str
    unit: str = ""


@dataclass(frozen=True)
class Table:
    """A table whose first column names its rows.

    Attributes
    ----------
    caption : str
        What it shows, said to those who cannot see it.
    heads : tuple of Head
        None for a table of names and values.
    rows : tuple of tuple of str
    words : frozenset of int
        Columns of words; the others are figures.
    look : str
        Name by which the style sheet shares its width out.
    """

    caption: str
    heads: tuple[Head, ...]
    rows: tuple[tuple[str, ...], ...]
    words: frozenset[int] = frozenset({0})
    look: str = ""
    form: ClassVar[str] = "table"

    @property
    def is_short(self) -> bool:
        """It is kept on one printed page."""
        return len(self.rows) <= SHORT


@dataclass(frozen=True)
class Chart:
    """A chart, an SVG of our own making, and what it shows."""

    svg: Markup
    caption: str
    form: ClassVar[str] = "chart"


@dataclass(frozen=True)
class Verbatim:
    """The lines of a file as they stand, numbered."""

    caption: str
    lines: tuple[str, ...]
    form: ClassVar[str] = "verbatim"

    @property
    def is_narrow(self) -> bool:
        """Nearly all of its lines fit two beside each other, so that the others may wrap."""
        return 5 * sum(len(line) > NARROW for line in self.lines) <= len(self.lines)


@dataclass(frozen=True)
class Subsection:
    """A heading within a section."""

    title: str
    form: ClassVar[str] = "subsection"


Block = Text | Items | Table | Chart | Verbatim | Subsection


@dataclass(frozen=True)
class Section:
    """A heading with what stands under it; ``key`` is the place that the list of contents leads to."""

    key: str
    title: str
    blocks: tuple[Block, ...]


def section(key: str, title: str, blocks: Iterable[Block]) -> Iterator[Section]:
    """A section, unless nothing stands under its heading."""
    found = tuple(blocks)
    if found:
        yield Section(key, title, found)


def table(
    caption: str, columns: Sequence[str], rows: Iterable[Sequence[str]], words: Iterable[int] = (0,), look: str = ""
) -> Iterator[Table]:
    """A table of the columns of a terminal page, a unit on the second line of a head; none without rows."""
    found = tuple(tuple(row) for row in rows)
    if found:
        yield Table(caption, tuple(_head(column) for column in columns), found, frozenset(words), look)


def names_and_values(caption: str, rows: Iterable[Sequence[str]]) -> Iterator[Table]:
    """A table of names and values, without heads."""
    found = tuple(tuple(row) for row in rows)
    if found:
        yield Table(caption, (), found, frozenset({0, 1}))


def _head(column: str) -> Head:
    name, _, unit = column.partition("\n")
    return Head(name, unit.replace("\n", " "))
