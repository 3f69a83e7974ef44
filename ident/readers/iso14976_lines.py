"""The lines of an ISO 14976 file, taken one after the other, and what a line says."""

from __future__ import annotations

import math
from typing import NoReturn

from .source import Source

MISSING = 1e37
AGAIN = "export the file again"


class Cursor:
    """A place in the lines of a file."""

    def __init__(self, source: Source) -> None:
        self.source = source
        self.at = 0  # lines taken so far, so the number of the line taken last
        end = len(source.lines)
        while end and not source.lines[end - 1].strip():
            end -= 1
        self.end = end
        self.part = "the header"

    def take(self, count: int = 1) -> tuple[str, ...]:
        """Take lines; a file that ends before is truncated."""
        self.need(count)
        taken = self.source.lines[self.at : self.at + count]
        self.at += count
        return tuple(text.strip() for text in taken)

    def need(self, count: int) -> None:
        """Refuse a file that ends before so many more lines."""
        if count > self.end - self.at:
            self.source.fail(f"the file ends inside {self.part}, so it is truncated", line=self.end or 1, remedy=AGAIN)

    def text(self) -> str:
        """Take one line."""
        return self.take()[0]

    def count(self, what: str, *, signed: bool = False) -> int:
        """Take one line that says how many of something follow."""
        text = self.text()
        value = to_number(text)
        if value is None or value != math.floor(value) or abs(value) > 1e9 or (value < 0 and not signed):
            self.fail(f"{text[:30]!r} stands where {what} should")
        return int(value)

    def fail(self, what: str, remedy: str = AGAIN) -> NoReturn:
        """Refuse the line taken last."""
        self.source.fail(f"{what} (in {self.part})", line=self.at, remedy=remedy)


def said(text: str) -> str | None:
    """Return a text that says something; None for a blank or "Not Specified"."""
    bare = text.strip()
    return None if bare.casefold().rstrip(".") in ("", "not specified", "n/a", "none", "unknown") else bare


def to_number(text: str) -> float | None:
    """Read a number; None when it is blank, missing (1E37) or none at all."""
    try:
        value = float(text.replace(",", "."))
    except ValueError:
        return None
    return value if math.isfinite(value) and abs(value) < MISSING / 10 and "_" not in text else None


def is_number(text: str) -> bool:
    """Tell whether a text reads as a number, missing or not."""
    try:
        float(text.replace(",", "."))
    except ValueError:
        return False
    return "_" not in text
