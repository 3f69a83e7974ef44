"""A page as the standard library's parser reads it: elements with their attributes, text and place."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from html.parser import HTMLParser
from pathlib import Path

VOID = {"meta", "img", "br", "link", "input", "hr", "col", "base"}  # elements without content: the HTML standard


@dataclass
class Element:
    """One element."""

    name: str
    attributes: dict[str, str | None]
    parent: Element | None = None
    children: list[Element] = field(default_factory=list)
    own: list[str] = field(default_factory=list)

    @property
    def text(self) -> str:
        """All text inside, scripts left out."""
        inside = "" if self.name in ("script", "style") else "".join(self.own)
        return inside + "".join(child.text for child in self.children)

    def all(self, name: str | None = None, cls: str | None = None) -> Iterator[Element]:
        """Elements inside, in order of the page."""
        for child in self.children:
            if name in (None, child.name) and (cls is None or cls in (child.attributes.get("class") or "").split()):
                yield child
            yield from child.all(name, cls)

    def one(self, name: str | None = None, cls: str | None = None) -> Element:
        """The only element of a kind."""
        (found,) = self.all(name, cls)
        return found


class Parsed(HTMLParser):
    """Builds the tree, and complains of an end that fits no beginning."""

    def __init__(self, source: str) -> None:
        super().__init__(convert_charrefs=True)
        self.source = source
        self.root = Element("", {})
        self._at = self.root
        self.feed(source)
        self.close()
        assert self._at is self.root, f"<{self._at.name}> is never closed"

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Begin an element."""
        element = Element(tag, dict(attrs), self._at)
        self._at.children.append(element)
        if tag not in VOID:
            self._at = element

    def handle_endtag(self, tag: str) -> None:
        """End the element that is open."""
        assert self._at.name == tag, f"</{tag}> ends <{self._at.name}>"
        assert self._at.parent is not None
        self._at = self._at.parent

    def handle_data(self, data: str) -> None:
        """Keep text."""
        self._at.own.append(data)


def parse(path: Path) -> Parsed:
    """Read and parse a page."""
    return Parsed(path.read_text(encoding="utf-8"))
