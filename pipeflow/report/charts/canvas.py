"""What every printed chart is drawn on: its size, its look, round axes, and the SVG it becomes.

The same figure gives the same bytes: nothing is taken from a user's settings, identifiers do not depend on chance, no
date is written. Text stays text, so that it can be searched and read aloud; it is laid out by the widths of DejaVu
Sans, which comes with matplotlib and is wider than the fonts that may stand in for it.
"""

from __future__ import annotations

import io
import re
import warnings
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from html import escape
from typing import Any, cast

import matplotlib
from matplotlib.axes import Axes
from matplotlib.backends.backend_svg import FigureCanvasSVG
from matplotlib.figure import Figure

WIDTH = 6.7
"""Width of a chart, inches: the text of an A4 page with margins of 20 mm."""
TEXT, SMALL = 8.5, 8.0
"""Sizes of text, points."""
INK, GREY, PALE, FILL = "#111111", "#555555", "#9a9a9a", "#e3e3e3"
DASHES: tuple[Any, ...] = (
    (0, (5, 2)),
    (0, (1, 1.5)),
    (0, (7, 2, 1.5, 2)),
    (0, (3, 1.5, 1, 1.5, 1, 1.5)),
    (0, (10, 3)),
    (0, (2.5, 2.5)),
)
"""Patterns of dashes, taken in turn; the marks tell lines of one pattern apart."""
MARKS = ("o", "s", "^", "D", "v", "P", "X", "<", ">", "h", "p", "*")
FONTS = "'DejaVu Sans', Verdana, Arial, sans-serif"

_NOT_WANTED = (
    r"<metadata>.*?</metadata>\s*",
    r"<\?xml.*?\?>\s*",
    r"<!DOCTYPE.*?>\s*",
    r"<defs>\s*<style.*?</style>\s*</defs>\s*",
)
"""What an SVG within a page has no use for; its style would hold for the whole page."""

_STYLE: dict[str, Any] = {
    "font.family": ["DejaVu Sans"],
    "font.size": TEXT,
    "text.parse_math": False,
    "text.color": INK,
    "axes.edgecolor": INK,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.8,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.unicode_minus": True,
    "axes.formatter.useoffset": False,
    "xtick.color": INK,
    "ytick.color": INK,
    "xtick.direction": "in",
    "ytick.direction": "in",
    "hatch.linewidth": 0.4,
    "hatch.color": PALE,
    "svg.fonttype": "none",
    "path.simplify": False,
}


@contextmanager
def drawing(name: str) -> Iterator[None]:
    """Draw in our own look, whatever a user's settings are; ``name`` keeps identifiers of charts on a page apart."""
    with matplotlib.rc_context(), warnings.catch_warnings():
        # letters the font lacks are drawn by the reader's own fonts
        warnings.filterwarnings("ignore", message="Glyph .* missing from")
        matplotlib.rcdefaults()
        settings: Any = matplotlib.rcParams
        settings.update(_STYLE | {"svg.hashsalt": name})
        yield


def canvas(height: float) -> Figure:
    """An empty figure, ``height`` in inches."""
    return Figure(figsize=(WIDTH, height), facecolor="none")


def panel(figure: Figure, left: float, bottom: float, width: float, height: float) -> Axes:
    """Axes at a place of the figure, all in inches from its lower left corner."""
    across, up = figure.get_size_inches()
    return figure.add_axes((left / across, bottom / up, width / across, height / up))


def set_sides(axes: Axes, left: float, right: float) -> None:
    """Move the sides of a panel, inches from those of the figure."""
    figure: Any = axes.figure
    across, place = figure.get_size_inches()[0], axes.get_position()
    axes.set_position((left / across, place.y0, (across - left - right) / across, place.height))


def set_ends(axis: Any, ends: tuple[float, float, float]) -> None:
    """Put an axis between round ends, a tick at every step."""
    low, high, step = ends
    count = round((high - low) / step)
    axis.set_ticks([low + index * step for index in range(count + 1)])
    (axis.axes.set_xlim if axis.axis_name == "x" else axis.axes.set_ylim)(low, high)
    axis.axes.grid(visible=True, color="#d9d9d9", linewidth=0.5)
    axis.axes.set_axisbelow(True)


def set_decades(axis: Any, ends: tuple[float, float, list[float]]) -> None:
    """Make an axis logarithmic between two ends, plain numbers at its ticks."""
    low, high, ticks = ends
    across = axis.axis_name == "x"
    (axis.axes.set_xscale if across else axis.axes.set_yscale)("log")
    (axis.axes.set_xlim if across else axis.axes.set_ylim)(low, high)
    axis.set_ticks(ticks, labels=[f"{tick:g}" for tick in ticks])
    axis.set_ticks([], minor=True)
    axis.axes.grid(visible=True, color="#d9d9d9", linewidth=0.5)
    axis.axes.set_axisbelow(True)


def shortened(name: str, most: int = 26) -> str:
    """A name as it fits beside a line: its beginning and its end, which names of one kind differ in."""
    text = "".join(char if char.isprintable() else " " for char in name)
    if len(text) <= most:
        return text
    end = most // 3
    return f"{text[: most - end - 1].rstrip()}…{text[-end:].lstrip()}"


def as_svg(figure: Figure, name: str, title: str, description: Sequence[str]) -> str:
    """Write a figure as an SVG document that says what it shows."""
    written, drawn_on = io.StringIO(), cast(Any, FigureCanvasSVG(figure))
    drawn_on.print_svg(written, metadata=dict.fromkeys(("Date", "Creator", "Format", "Type")))
    text = written.getvalue()
    for not_wanted in _NOT_WANTED:
        text = re.sub(not_wanted, "", text, count=1, flags=re.DOTALL)
    # groups are numbered in every chart alike; nothing refers to them
    text = re.sub(r'<g id="[^"]*"', "<g", text).replace("'DejaVu Sans'", FONTS)
    said = (_escaped(title), _escaped(" ".join(description)))
    about = f'<title id="{name}-title">{said[0]}</title>\n <desc id="{name}-about">{said[1]}</desc>\n'
    refers = f'role="img" aria-labelledby="{name}-title" aria-describedby="{name}-about" stroke-linejoin="round"'
    head, opening, rest = text.partition(">")
    return f"{head.replace('<svg ', f'<svg {refers} ', 1)}{opening}\n {about}{rest.lstrip()}"


def _escaped(text: str) -> str:
    return escape("".join(char if char.isprintable() else " " for char in text), quote=False)
