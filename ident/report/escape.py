"""Make what came from a file safe to print, and safe to open in a spreadsheet."""

from __future__ import annotations

import unicodedata

FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")
UNSAFE = ("Cc", "Cf", "Cs", "Co", "Zl", "Zp")  # control, direction marks, half characters, line separators


def printable(text: str) -> str:
    """Show control characters and direction marks as escapes instead of obeying them."""
    return "".join(_shown(char) if unicodedata.category(char) in UNSAFE else char for char in text)


def _shown(char: str) -> str:
    code = ord(char)
    return f"\\x{code:02x}" if code < 0x100 else f"\\u{code:04x}"


def text_cell(text: str) -> str:
    """Keep a spreadsheet from taking a text for a formula: an apostrophe goes before it."""
    shown = printable(text)
    return "'" + shown if text.startswith(FORMULA_STARTS) else shown
