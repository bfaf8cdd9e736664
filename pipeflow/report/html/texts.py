"""Text as it goes into a page: nothing invisible that turns the rest around."""

from __future__ import annotations


def visible(text: object) -> object:
    r"""Write out what cannot be seen, such as marks of direction, as its code; other values are left alone.

    Examples
    --------
    >>> print(visible("a\u202eb"))
    a\u202eb
    """
    if type(text) is not str:
        return text
    return "".join(char if char.isprintable() else _code(char) for char in text)


def _code(char: str) -> str:
    return " " if char.isspace() else char.encode("unicode_escape").decode("ascii")
