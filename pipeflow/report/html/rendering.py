"""Templates to pages: everything that comes from a case is escaped, for HTML and for the style sheet."""

from __future__ import annotations

from functools import cache
from typing import Any

from jinja2 import Environment, PackageLoader, StrictUndefined
from markupsafe import Markup

from pipeflow.report.html.texts import visible
from pipeflow.report.rows import MARK

GENERATOR = "pipeflow"
"""Name by which a page says that it is one of ours."""
LONGEST_RUNNING_TITLE = 78


@cache
def environment() -> Environment:
    """The templates, with all that they know beside what a page hands them."""
    made = Environment(
        loader=PackageLoader("pipeflow.report.html"),
        autoescape=True,
        finalize=visible,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    made.filters["css_string"] = css_string
    made.globals |= {"statuses": (*MARK.values(), "caution"), "generator": GENERATOR}
    return made


def rendered(template: str, **values: Any) -> str:
    """Fill a template in."""
    return environment().get_template(template).render(**values)


def css_string(text: str) -> Markup:
    r"""Write a text as a string of a style sheet, every letter but the plain ones by its code.

    Examples
    --------
    >>> print(css_string('a"</style>'))
    "a\22 \3c \2f style\3e "
    """
    shown = text if len(text) <= LONGEST_RUNNING_TITLE else text[: LONGEST_RUNNING_TITLE - 1].rstrip() + "…"
    letters = (char if char.isascii() and char.isalnum() else f"\\{ord(char):x} " for char in str(visible(shown)))
    return Markup('"' + "".join(letters) + '"')
