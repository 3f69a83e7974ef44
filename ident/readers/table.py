"""Lines of text -> a table of rows: names of the columns, rows with their line numbers, and blocks."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal, NamedTuple, NoReturn

from .cells import NOT_A_WORD, UNICODE_SIGNS, Dialect, guess_dialect, starts_with_word
from .names import find_names, is_remark
from .source import TEXT_REMEDY, Source

NOTHING_SAID = re.compile(r"[\W_]*")  # separators only, or a ruled line
Sort = Literal["blank", "text", "row", "doubtful"]


class Row(NamedTuple):  # tuples here and below: a dataclass a line costs a third of the time of reading
    """One line of numbers: its line in the file and its block (blank or text lines part blocks)."""

    line: int
    block: int
    cells: tuple[str, ...]
    values: tuple[float | None, ...]  # the cells as numbers, None for what is none


@dataclass(frozen=True, kw_only=True)
class Table:
    """A text table.

    Parameters
    ----------
    names : tuple of str
        One name a column, "column 3" where the file gives none.
    named : bool
        Whether the file gives names.
    rows : tuple of Row
        The rows in the order of the file.
    texts : tuple of str
        Lines of text before the first row, comment marks taken off.
    """

    dialect: Dialect
    names: tuple[str, ...]
    named: bool
    names_line: int | None
    rows: tuple[Row, ...]
    texts: tuple[str, ...]


class _Line(NamedTuple):
    """A line and what it is."""

    sort: Sort
    number: int
    text: str
    cells: tuple[str, ...]
    values: tuple[float | None, ...]


def read_table(source: Source) -> Table:
    """Find the table in a text file.

    Raises
    ------
    InputError
        When the text holds no rows of two or more numbers, or when a line among the rows is damaged.
    """
    texts = [(line if line.isascii() else line.translate(UNICODE_SIGNS)).strip(" \f\v") for line in source.lines]
    dialect = guess_dialect([text for text in texts if not is_remark(text)])
    if dialect is None:
        _refuse_text(texts, source)
    lines = [_sort_line(number, text, dialect) for number, text in enumerate(texts, start=1)]
    widths = Counter(len(line.cells) for line in lines if line.sort == "row")
    if not widths:
        _refuse_text(texts, source)
    width = widths.most_common(1)[0][0]
    start = _find_start(lines, width)
    head = [line for line in lines[:start] if line.sort != "blank"]
    rows = _gather_rows(lines[start:], width, source)
    columns = max(width, *(len(row.cells) for row in rows))
    found = find_names([(line.number, line.text) for line in head], columns, dialect)
    names_line, names = found if found else (None, [""] * columns)
    return Table(
        dialect=dialect,
        names=tuple(name or f"column {at}" for at, name in enumerate(names, start=1)),
        named=found is not None,
        names_line=names_line,
        rows=tuple(rows),
        texts=tuple(bare for line in head if (bare := strip_mark(line.text))),
    )


def strip_mark(text: str) -> str:
    """Take comment marks and blanks off a line."""
    return text.strip().lstrip("#%;!/'*").strip().strip('"').strip()


def _sort_line(number: int, text: str, dialect: Dialect) -> _Line:
    """Say what a line is: blank, text, a row of numbers, or doubtful (some cells are numbers, some not)."""
    plain = dialect.plain_row(text)
    if plain:
        return _Line("row", number, text, *plain)
    cells = tuple(dialect.split(text))
    values = tuple(map(dialect.number, cells))
    if len(values) > 1 and None not in values:
        return _Line(sort="row", number=number, text=text, cells=cells, values=values)
    if is_remark(text):
        return _Line(sort="text", number=number, text=text, cells=(), values=())
    body, mark, _ = text.partition("#")
    if NOTHING_SAID.fullmatch(body):
        return _Line(sort="blank", number=number, text=text, cells=(), values=())
    if mark:  # a remark behind the numbers
        cells = tuple(dialect.split(body))
        values = tuple(map(dialect.number, cells))
    numbers = len(values) - values.count(None)
    sort: Sort = "doubtful"
    if starts_with_word(cells):
        sort = "doubtful" if numbers else "text"
    elif numbers >= 2 and (values[0] is not None or 2 * numbers >= len(cells)):  # prose has numbers in it too
        sort = "row"
    return _Line(sort=sort, number=number, text=text, cells=cells, values=values)


def _find_start(lines: Sequence[_Line], width: int) -> int:
    """Find the first row of the table; a damaged row just above is the first row and no header."""
    start = next(at for at, line in enumerate(lines) if line.sort == "row" and len(line.cells) == width)
    while start and lines[start - 1].sort == "doubtful" and len(lines[start - 1].cells) == width:
        above = lines[start - 1]
        if starts_with_word(above.cells) or not (any(above.values) or NOT_A_WORD.fullmatch(above.cells[0])):
            break
        start -= 1
    return start


def _gather_rows(lines: Sequence[_Line], width: int, source: Source) -> list[Row]:
    """Collect the rows with their blocks; a doubtful line is kept as a row unless it is a heading."""
    rows: list[Row] = []
    block, parted = 0, False
    for at, line in enumerate(lines):
        if line.sort == "blank" or (line.sort != "row" and _is_heading(lines, at, source)):
            parted = True
            continue
        if len(line.cells) > width:
            source.fail(
                f"{len(line.cells)} cells where most rows have {width}",
                line=line.number,
                remedy="give every row the same columns, no thousands separators, and put # before a remark",
            )
        if parted and rows:
            block += 1
        parted = False
        rows.append(Row(line.number, block, line.cells, line.values))
    spaced = rows[-1].block * 3 >= len(rows)  # blank lines between all rows say nothing
    return [row._replace(block=0) for row in rows] if spaced else rows


def _is_heading(lines: Sequence[_Line], at: int, source: Source) -> bool:
    """Tell a heading between blocks from a damaged row among rows.

    A comment is a heading. So is text with another non-row beside it, or where the energies do not go on
    behind it as if only this one row were damaged.
    """
    line = lines[at]
    if not line.cells or not lines[at + 1 :]:
        return not line.cells or starts_with_word(line.cells)
    if not starts_with_word(line.cells):
        return False
    before, after = lines[at - 1], lines[at + 1]
    if before.sort != "row" or after.sort != "row" or at < 2 or lines[at - 2].sort != "row":
        return True
    step = (before.values[0] or 0.0) - (lines[at - 2].values[0] or 0.0)
    if step and 0.5 < ((after.values[0] or 0.0) - (before.values[0] or 0.0)) / step < 2.5:
        source.fail(
            f"{_shorten(line.text)} stands where a row of numbers should",
            line=line.number,
            remedy="repair or remove the row, or put # before a remark",
        )
    return True


def _shorten(text: str) -> str:
    return repr(text if len(text) <= 40 else text[:37] + "...")


def _refuse_text(texts: Sequence[str], source: Source) -> NoReturn:
    """Say why a text is no table: one column, or no numbers at all."""
    any_dialects = (Dialect(separator=" ", decimal="."), Dialect(separator=" ", decimal=","))
    single = [
        number
        for number, text in enumerate(texts, start=1)
        if any(len(cells := d.split(text)) == 1 and d.number(cells[0]) is not None for d in any_dialects)
    ]
    if len(single) > 1:
        source.fail(
            "has only one column of numbers",
            line=single[0],
            remedy="give two columns, energy in eV and ordinate, parted by comma, semicolon, tab or blanks",
        )
    source.fail("holds no table of numbers", line=1, remedy=TEXT_REMEDY)
