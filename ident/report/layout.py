"""How text answers are laid out: headings, columns, wrapped paragraphs."""

from __future__ import annotations

import math
import re
import textwrap
from collections.abc import Iterable, Sequence

WIDTH = 100
INDENT = "  "
UNIT_AFTER_NUMBER = re.compile(r"(\d) (eV|sd|%|times)\b")


def heading(text: str) -> str:
    """A heading with a rule under it."""
    return f"{text}\n{'-' * min(len(text), WIDTH)}"


def columns(head: Sequence[str], rows: Sequence[Sequence[str]], *, right: Iterable[int] = ()) -> list[str]:
    """Lay cells out in columns as wide as needed; those of `right` are set to the right."""
    flush = set(right)
    table = [list(head), *[list(row) for row in rows]]
    widths = [max(len(row[place]) for row in table) for place in range(len(head))]
    out = []
    for row in table:
        cells = [
            cell.rjust(width) if place in flush else cell.ljust(width)
            for place, (cell, width) in enumerate(zip(row, widths, strict=True))
        ]
        out.append(INDENT + "   ".join(cells).rstrip())
    return out


def hanging(label: str, text: str, *, width: int = 10, indent: str = INDENT) -> str:
    """A label, then text that wraps under itself."""
    first = indent + label.ljust(width)
    filled = textwrap.fill(
        UNIT_AFTER_NUMBER.sub("\\1\u00a0\\2", text),  # a number and its unit stay on one line
        WIDTH,
        initial_indent=first,
        subsequent_indent=" " * len(first),
        break_long_words=False,
        break_on_hyphens=False,
    )
    return filled.replace("\u00a0", " ")


def probability(value: float) -> str:
    """Two decimals, never rounded up over a verdict's threshold; the ends are said as bounds."""
    if value >= 0.995:
        return "> 0.99"
    if value < 0.005:
        return "< 0.01"
    return f"{math.floor(value * 100) / 100:.2f}"


def percent(value: float) -> str:
    """Two figures, and never a power of ten: "0.88", "4.1", "54", "100"."""
    return f"{value:.0f}" if value >= 9.95 else f"{value:.2g}"
