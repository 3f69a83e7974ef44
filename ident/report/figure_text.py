"""Writing in figures: what comes from outside is shown as it is, on one line, and stays where it belongs."""

from __future__ import annotations

from functools import cache
from typing import TYPE_CHECKING, Any

from .escape import printable

if TYPE_CHECKING:
    from matplotlib.figure import Figure

FONT = "DejaVu Sans"  # comes with matplotlib
LONGEST = 300  # characters; no line of a sheet holds more


@cache
def _known() -> frozenset[int]:
    from matplotlib.font_manager import FontProperties, findfont, get_font

    return frozenset(get_font(findfont(FontProperties(family=FONT))).get_charmap())


def safe(text: str) -> str:
    """Write what would act, or what the font does not have, as escapes."""
    known = _known()
    return "".join(char if ord(char) in known else f"\\u{ord(char):04x}" for char in printable(text))


def write_within(figure: Figure, left: float, right: float, y: float, text: str, **style: Any) -> None:
    """Write one line between two places (parts of the sheet's width); what is too long is cut and says so."""
    whole = safe(text)
    shown = whole if len(whole) <= LONGEST else f"{whole[: LONGEST - 1]}…"
    artist = figure.text(left, y, shown, parse_math=False, **style)
    room = (right - left) * figure.bbox.width
    while (width := artist.get_window_extent().width) > room and len(shown) > 2:
        shown = shown[: max(1, min(len(shown) - 2, int(len(shown) * room / width) - 1))] + "…"
        artist.set_text(shown)
