"""How a line of a text table is cut into cells, and how a cell becomes a number."""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Sequence
from dataclasses import dataclass

SAMPLE_LINES = 80  # enough to see how a table is written
POINT_GROUPS = re.compile(r"[+-]?\d{1,3}(?:,\d{3})+(?:\.\d*)?(?:[eE][+-]?\d+)?")  # 1,234.5
COMMA_GROUPS = re.compile(r"[+-]?\d{1,3}(?:\.\d{3})+(?:,\d*)?(?:[eE][+-]?\d+)?")  # 1.234,5
FORTRAN = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)[dD][+-]?\d+")
UNICODE_SIGNS = str.maketrans({"\u2212": "-", "\u2013": "-", "\u00a0": " ", "\u202f": " ", "\ufeff": None})
DIGIT = re.compile(r"\d")
WORD = re.compile(r"[^\W\d_]{2,}")
NOT_A_WORD = re.compile(r"[+-]?(?:nan|na|inf|infinity|null|none|nil|missing|overflow)", re.IGNORECASE)


@dataclass(frozen=True, kw_only=True)
class Dialect:
    """How a table is written: the separator (" " stands for any run of blanks) and the decimal sign."""

    separator: str
    decimal: str

    def split(self, line: str) -> list[str]:
        """Cut a line into cells, without blanks and quotes around them; trailing empty cells go."""
        if '"' in line:
            cells = self._split_quoted(line)
        elif self.separator == " ":
            cells = line.split()
        else:
            cells = [cell.strip() for cell in line.split(self.separator)]
        while cells and not cells[-1]:
            cells.pop()
        return cells

    def plain_row(self, line: str) -> tuple[tuple[str, ...], tuple[float, ...]] | None:
        """Cells and numbers of a line that needs no care, which nearly all do; None when it may."""
        plain = PLAIN_ROWS.get((self.separator, self.decimal))
        if not (plain and plain.fullmatch(line)):
            return None
        cells = tuple(line.split() if self.separator == " " else line.split(self.separator))
        try:
            values = tuple(map(float, cells if self.decimal == "." else [cell.replace(",", ".") for cell in cells]))
        except ValueError:
            return None
        return (cells, values) if math.isfinite(sum(values)) else None

    def _split_quoted(self, line: str) -> list[str]:
        cleaned = line.strip().replace("\x00", "")
        try:
            rows = list(csv.reader([cleaned], delimiter=self.separator, skipinitialspace=True, quotechar='"'))
        except csv.Error:  # a cell longer than the csv module takes
            return cleaned.replace('"', "").split(self.separator)
        cells = [cell.strip() for cell in rows[0]] if rows else []
        return [cell for cell in cells if cell] if self.separator == " " else cells

    def number(self, cell: str) -> float | None:
        """Read a cell as a finite number; None when it is none."""
        if self.decimal == ",":
            if "." in cell:
                if not COMMA_GROUPS.fullmatch(cell) or ("," not in cell and cell.count(".") < 2):
                    return None  # "1.234" may be 1234 or 1.234: not read by guess
                cell = cell.replace(".", "")
            cell = cell.replace(",", ".")
        elif "," in cell:
            if not POINT_GROUPS.fullmatch(cell) or ("." not in cell and cell.count(",") < 2):
                return None
            cell = cell.replace(",", "")
        return _to_float(cell)


DIALECTS = tuple(
    Dialect(separator=separator, decimal=decimal)
    for separator, decimal in (
        ("\t", "."),
        (";", "."),
        (",", "."),
        (" ", "."),
        ("\t", ","),
        (";", ","),
        (" ", ","),
        (",", ","),  # quoted cells only
    )
)


PLAIN_ROWS = {
    (dialect.separator, dialect.decimal): re.compile(
        f"{(cell := '[-+0-9eE' + dialect.decimal + ']+')}"
        f"(?:{'[ ]+' if dialect.separator == ' ' else re.escape(dialect.separator)}{cell})+"
    )
    for dialect in DIALECTS
    if dialect.separator != dialect.decimal
}


def _to_float(cell: str) -> float | None:
    """Read plain notation; Fortran's D exponent is taken, Python's underscores are not."""
    try:
        value = float(cell)
    except ValueError:
        if not FORTRAN.fullmatch(cell):
            return None
        value = float(cell.replace("D", "E").replace("d", "e"))
    return value if math.isfinite(value) and "_" not in cell else None


def guess_dialect(lines: Sequence[str]) -> Dialect | None:
    """Find the way of writing under which most lines are rows of two or more numbers; None when none are."""
    candidates = [line for line in lines if DIGIT.search(line)]
    sample = candidates[:: max(1, -(-len(candidates) // SAMPLE_LINES))]
    best, best_score = None, 0
    for dialect in DIALECTS:
        score = sum(_row_score(dialect, line) for line in sample)
        if score > best_score:
            best, best_score = dialect, score
    return best


def _row_score(dialect: Dialect, line: str) -> int:
    """Score a line: 3 a row of numbers, 1 a row with other cells among them, 0 no row."""
    cells = [cell for cell in dialect.split(line) if cell]
    values = [dialect.number(cell) for cell in cells]
    numbers = len(values) - values.count(None)
    if numbers == len(values) > 1:
        return 3
    return 1 if numbers > 1 and (values[0] is not None or 2 * numbers >= len(values)) else 0


def starts_with_word(cells: Sequence[str]) -> bool:
    """Tell whether a line begins with a word, so that it is text; marks for missing values are no words."""
    first = next((cell for cell in cells if cell), "")
    if not first or first[0].isdigit() or NOT_A_WORD.fullmatch(first):
        return False
    return bool(WORD.search(first)) or (first[0].isalpha() and not any(map(str.isdigit, first)))


def looks_grouped(cells: Sequence[str], dialect: Dialect) -> str | None:
    """Return a cell of a column that reads as thousands as well as it reads as decimals, or None.

    Fixed decimals ("12,345" in every cell) and a leading zero ("0,512") settle it; a column that mixes
    "999" with "1,001" does not.
    """
    marked = [cell for cell in cells if dialect.decimal in cell]
    if not marked or len(marked) == len(cells):
        return None
    groups = re.compile(rf"[+-]?[1-9]\d{{0,2}}{re.escape(dialect.decimal)}\d{{3}}")
    if all(groups.fullmatch(cell) for cell in marked):
        return marked[0]
    return None
