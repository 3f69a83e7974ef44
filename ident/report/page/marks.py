"""The marks of the palette as small pictures in the text, so that colour is never the only sign."""

from __future__ import annotations

from ..palette import MARKS, PAPER, Role
from .markup import Markup, el, group

_SHAPES = {
    "disc": ("circle", {"cx": "7", "cy": "7", "r": "4.4"}),
    "ring": ("circle", {"cx": "7", "cy": "7", "r": "4.2"}),
    "diamond": ("path", {"d": "M7 1.8 12.2 7 7 12.2 1.8 7Z"}),
    "square": ("path", {"d": "M3 3H11V11H3Z"}),
    "cross": ("path", {"d": "M2 4.6 4.6 2 7 4.4 9.4 2 12 4.6 9.6 7 12 9.4 9.4 12 7 9.6 4.6 12 2 9.4 4.4 7Z"}),
}  # fmt: skip
HOLLOW = ("ring", "square")


def mark(role: Role) -> Markup:
    """Show the mark of one kind of minimum; hidden from screen readers, since its word stands beside it."""
    return el("svg", el("use", href=f"#mark-{role}"), cls="mark", aria_hidden="true", focusable="false")


def symbols() -> Markup:
    """Draw each mark once, for all places that show it."""
    return el("svg", *(_symbol(role) for role in MARKS), cls="symbols", aria_hidden="true", width="0", height="0")


def _symbol(role: Role) -> Markup:
    told = MARKS[role]
    name, shape = _SHAPES[told.shape]
    fill = PAPER if told.shape in HOLLOW else told.colour
    width = "1.5" if told.shape in HOLLOW else "0.5"
    drawn = el(name, fill=fill, stroke=told.colour, stroke_width=width, **shape)
    return el("symbol", drawn, id=f"mark-{role}", viewBox="0 0 14 14")


def key_of_marks() -> Markup:
    """Explain the marks: each with its word."""
    return group(*(el("span", mark(role), f" {told.word}") for role, told in MARKS.items()))
