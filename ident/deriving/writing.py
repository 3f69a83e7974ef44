"""Rows to CSV, always the same bytes."""

from __future__ import annotations

import csv
import io

Cells = list[str]


def number(value: float, digits: int) -> str:
    """A number with so many decimals, without trailing zeros and never as -0."""
    text = f"{value:.{digits}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def rendered(columns: list[str], rows: list[Cells]) -> str:
    """The text of a table."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(columns)
    writer.writerows(rows)
    return stream.getvalue()
