"""Plain text in the shapes of a terminal page: paragraphs and aligned columns."""

from __future__ import annotations

import re
from collections.abc import Container, Iterator, Sequence
from textwrap import fill, wrap
from unicodedata import combining, east_asian_width

WIDTH = 80
GAP = "  "
DEEPEST_HANG = 24
NARROWEST = 12
"""First column of a table is not made narrower than this."""

PARAMETER_UNITS = {
    "viscosity": "Pa.s",
    "plastic_viscosity": "Pa.s",
    "casson_viscosity": "Pa.s",
    "zero_shear_viscosity": "Pa.s",
    "infinite_shear_viscosity": "Pa.s",
    "consistency": "Pa.s^n",
    "yield_stress": "Pa",
    "half_stress": "Pa",
    "time_constant": "s",
    "rate_offset": "1/s",
    "flow_index": "",
    "exponent": "",
    "transition_exponent": "",
}
"""Unit of each rheological parameter, SI."""


def paragraph(text: str, width: int = WIDTH, mark: str = "") -> str:
    """Fill a paragraph, ``mark`` hanging before it if it is short."""
    if len(mark) > DEEPEST_HANG:
        return fill(mark.strip() + " " + text, width, initial_indent="  ", subsequent_indent=" " * 4)
    return fill(text, width, initial_indent=mark, subsequent_indent=" " * len(mark), break_on_hyphens=False)


def underlined(title: str, width: int = WIDTH) -> str:
    """Give a title with a line under it."""
    return f"{title}\n{'-' * min(len(title), width)}"


def heading(title: str, width: int = WIDTH) -> Iterator[str]:
    """Give an empty line, a title, and a line under it."""
    yield ""
    yield underlined(title, width)


def table(
    columns: Sequence[str], rows: Sequence[Sequence[str]], words: Container[int] = (0,), width: int = WIDTH
) -> Iterator[str]:
    """Lines of a table: words to the left, figures to the right; first cells wrap where it is too wide.

    ``words`` numbers the columns of words. Heads of several lines stand with their last line next to the figures;
    empty ones are left out.
    """
    cells = [*_heads(columns), *rows]
    widths = [max(columns_of(cell) for cell in column) for column in zip(*cells, strict=True)]
    widths[0] = min(widths[0], max(width - sum(widths[1:]) - len(GAP) * (len(widths) - 1), NARROWEST))
    for first, *others in cells:
        head, *rest = wrapped(first, widths[0]) or [""]
        aligned = (
            _padded(cell, column, index in words)
            for index, (cell, column) in enumerate(zip((head, *others), widths, strict=True))
        )
        yield GAP.join(aligned).rstrip()
        yield from (f"  {line}" for line in rest)


def wrapped(text: str, width: int) -> list[str]:
    """Break a text into lines; a key path too long for one is broken after a dot, an underscore or a bracket.

    Examples
    --------
    >>> wrapped("fluid.rheology.plastic_viscosity", 15)
    ['fluid.rheology.', 'plastic_', 'viscosity']
    """
    if all(len(word) <= width for word in text.split()):
        return wrap(text, width)
    lines = [""]
    for piece in re.split(r"(?<=[ ._\]])(?=[^ ])", text):
        if lines[-1] and len((lines[-1] + piece).rstrip()) > width:
            lines.append("")
        lines[-1] += piece
    return [part for line in lines for part in wrap(line, width)]


def columns_of(text: str) -> int:
    """Columns that a text takes in a terminal: two for a wide letter, none for a mark on the letter before."""
    return sum(0 if combining(char) else 2 if east_asian_width(char) in "WF" else 1 for char in text)


def _padded(cell: str, width: int, is_word: bool) -> str:
    space = " " * (width - columns_of(cell))
    return cell + space if is_word else space + cell


def _heads(columns: Sequence[str]) -> list[list[str]]:
    parts = [column.split("\n") for column in columns]
    height = max(len(part) for part in parts) if any(columns) else 0
    return [[part[row - height] if row >= height - len(part) else "" for part in parts] for row in range(height)]
