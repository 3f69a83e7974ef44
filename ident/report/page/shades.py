"""The palette as the page's style and script take it, so that page and figures cannot differ."""

from __future__ import annotations

from typing import Any

from ..palette import FAINT_INK, GAP, INK, MARKS, PAPER, PREDICTED, RULE


def variables() -> str:
    """Give the colours as custom properties of the style."""
    told = {"paper": PAPER, "ink": INK, "faint": FAINT_INK, "rule": RULE, "gap": GAP, "predicted": PREDICTED}
    told |= {role: mark.colour for role, mark in MARKS.items()}
    return ":root{" + "".join(f"--{name}:{colour};" for name, colour in told.items()) + "}\n"


def shades() -> dict[str, Any]:
    """Give colours and shapes of the marks to the script."""
    palette = {role: {"shape": mark.shape, "colour": mark.colour} for role, mark in MARKS.items()}
    return {"palette": palette, "paper": PAPER, "faint": FAINT_INK}
