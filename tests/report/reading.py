"""A page read back as a reader's program reads it: its elements in order."""

from __future__ import annotations

from dataclasses import dataclass, field
from html.parser import HTMLParser

VOID = {"meta", "link", "img", "br", "hr", "input"}


@dataclass
class Element:
    """An element with what stands in it."""

    tag: str
    attributes: dict[str, str]
    children: list[Element] = field(default_factory=list)
    texts: list[str] = field(default_factory=list)

    def every(self, *tags: str) -> list[Element]:
        """Elements of these tags, in order."""
        found = [self] if self.tag in tags or not tags else []
        return [*found, *(one for child in self.children for one in child.every(*tags))]

    @property
    def text(self) -> str:
        """All text in it, one after another."""
        return " ".join([*self.texts, *(child.text for child in self.children)]).strip()


class Reader(HTMLParser):
    """Builds the tree; an element closed out of turn is an error."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.root = Element("document", {})
        self.open = [self.root]

    def handle_starttag(self, tag, attrs):
        one = Element(tag, {name: value or "" for name, value in attrs})
        self.open[-1].children.append(one)
        if tag not in VOID:
            self.open.append(one)

    def handle_startendtag(self, tag, attrs):
        self.open[-1].children.append(Element(tag, {name: value or "" for name, value in attrs}))

    def handle_endtag(self, tag):
        assert self.open[-1].tag == tag, f"</{tag}> closes <{self.open[-1].tag}>"
        self.open.pop()

    def handle_data(self, data):
        self.open[-1].texts.append(data)


def read(page: str) -> Element:
    """Read a page."""
    reader = Reader()
    reader.feed(page)
    reader.close()
    assert len(reader.open) == 1, f"<{reader.open[-1].tag}> is never closed"
    return reader.root
