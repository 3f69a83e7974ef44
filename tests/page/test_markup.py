"""Markup: whatever is not ours is escaped, in text, in attributes and in scripts (HTML standard)."""

from __future__ import annotations

import json
from html.parser import HTMLParser

import pytest

from ident.report.page.markup import Markup, el, group, lines, script_data, text

from .conftest import HOSTILE
from .parsed import Parsed


class Events(HTMLParser):
    """What a parser makes of it: tags and text."""

    def __init__(self, source: str) -> None:
        super().__init__(convert_charrefs=True)
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.texts: list[str] = []
        self.feed(source)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Keep a beginning."""
        self.tags.append((tag, dict(attrs)))

    def handle_data(self, data: str) -> None:
        """Keep a text."""
        self.texts.append(data)


@pytest.mark.parametrize("said", ["<b>", "&amp;", "\"'", "</td>", "--><!--", "]]>", "a\x00b", "\ud800"])
def test_text_and_attributes_come_back_as_text(said: str) -> None:
    found = Events(el("p", said, title=said, cls=said))
    (tag, attributes), *more = found.tags
    assert (tag, more) == ("p", [])
    shown = "".join(found.texts)
    assert attributes == {"class": shown, "title": shown}
    assert shown == said or "\\" in shown  # what is no character to show is shown as its number


def test_only_what_el_made_is_taken_as_markup() -> None:
    assert [tag for tag, _ in Events(group(el("b", "x"), "<i>", None, 3)).tags] == ["b"]
    assert text(Markup("<b>")) == "<b>"
    assert [tag for tag, _ in Events(lines("a<b>\nc")).tags] == ["br"]


def test_attributes_that_are_off_are_left_out() -> None:
    assert el("td", hidden=True, title=None, lang=False) == "<td hidden></td>"
    with pytest.raises(ValueError, match="no name"):
        el("td", **{"x onload": "y"})


def test_data_in_a_script_end_neither_script_nor_line() -> None:
    told = {HOSTILE: ["<!--<script>", "\u2028\u2029", 1.5, None]}
    source = script_data("x", told)
    script = Parsed(source).root.one("script")
    inside = "".join(script.own)
    assert json.loads(inside) == told
    assert not set(inside) & set("<>&\u2028\u2029")
    with pytest.raises(ValueError, match="JSON"):
        script_data("x", float("nan"))
