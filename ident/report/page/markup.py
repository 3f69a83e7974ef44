"""HTML from Python: every text is escaped, because only `el` makes `Markup` and it escapes whatever is not."""

from __future__ import annotations

import html
import json
import re
from typing import Any, TypeAlias

from ..escape import printable

VOID = ("br", "img", "meta", "col")
# what would end a script block, begin a comment in one, or end a line of script
_IN_SCRIPT = str.maketrans({char: f"\\u{ord(char):04x}" for char in "<>&\u2028\u2029"})
_NAME = re.compile(r"[A-Za-z][A-Za-z0-9:-]*")


class Markup(str):
    """Text that is HTML already."""

    __slots__ = ()


Part: TypeAlias = "Markup | str | int | float | None"


def text(value: Any) -> Markup:
    """Escape a text; control characters and direction marks are shown and not obeyed."""
    return value if isinstance(value, Markup) else Markup(html.escape(printable(str(value)), quote=True))


def group(*parts: Part) -> Markup:
    """Put parts one after the other; None is left out."""
    return Markup("".join(text(part) for part in parts if part is not None))


def el(name: str, *parts: Part, cls: str | None = None, **attributes: Any) -> Markup:
    """Make an element.

    Parameters
    ----------
    name : str
        Of the element, a word of ours.
    *parts
        What is inside: markup as it is, anything else escaped; None is left out.
    cls : str, optional
        Its class.
    **attributes
        `aria_label` becomes aria-label; None and False are left out, True stands alone.
    """
    given = [("class", cls), *((key.rstrip("_").replace("_", "-"), value) for key, value in attributes.items())]
    told = "".join(_attribute(key, value) for key, value in given if value is not None and value is not False)
    if name in VOID:
        return Markup(f"<{name}{told}>")
    return Markup(f"<{name}{told}>{group(*parts)}</{name}>")


def _attribute(key: str, value: Any) -> str:
    if not _NAME.fullmatch(key):
        raise ValueError(f"{key!r} is no name of an attribute")
    return f" {key}" if value is True else f' {key}="{text(value)}"'


def lines(value: str) -> Markup:
    """Escape a text of several lines and keep its lines."""
    return Markup("<br>".join(text(line) for line in value.splitlines()))


def script_data(identifier: str, plain: Any) -> Markup:
    """Put plain data into the page, where a script reads them: nothing in them can end the script."""
    told = json.dumps(plain, ensure_ascii=True, allow_nan=False, separators=(",", ":")).translate(_IN_SCRIPT)
    return Markup(f'<script type="application/json" id="{text(identifier)}">{told}</script>')
