"""A list of labels from a file or from Python: an energy and a label each, written in whatever way."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from os import PathLike
from typing import IO, Any

from .. import tables
from ..errors import InputError, SettingError
from ..readers.cells import DIALECTS, Dialect
from ..readers.names import role_of, simplify
from ..readers.source import Source, read_source
from .notation import SEPARATORS, LabelReading, levels_joined, read_label

REMEDY = "give a line per label, such as '418 Ti L3M23V', or a list of elements"
COMMENT = re.compile(r"\s*(?:#|%|!|//)")
UNIT = re.compile(r"(?<=[\d.,])\s*(k?eV)\b", re.IGNORECASE)
NUMBER = re.compile(r"(?<![\w.,])([+-]?\d+(?:[.,]\d+)?)(?![\w,]|\.\d)")
BRACKETS = re.compile(r"[@:=()\[\]]|\bat\b")
LABEL_NAME = re.compile(r"label|element|peak|assign|symbol|species|name|identif|who|what", re.IGNORECASE)
TRANSITION_NAME = re.compile(r"transition|line|series|auger", re.IGNORECASE)
HEADINGS = {"element", "elements", "label", "labels", "symbol", "symbols", "assignment", "assignments", "peaks", "peak"}
ENERGIES_EV = (10.0, 3500.0)  # what an energy of a label may be, for telling it from a number of another kind
NEAR_EV = 25.0  # from a line of the element: such a number is its energy rather than a height
MOST_LABELS = 5000


@dataclass(frozen=True, kw_only=True)
class Label:
    """One label as given."""

    text: str
    energy_ev: float | None = None  # on the axis of the spectrum; None for a bare element
    line: int | None = None  # of the file, from 1


@dataclass(frozen=True, kw_only=True)
class _Row:
    """A line cut up: its numbers with their places, and its texts with theirs."""

    number: int
    values: tuple[tuple[int, float], ...]
    texts: tuple[tuple[int, str], ...]


LabelsLike = str | PathLike[str] | Iterable[Any]


def labels_of(labels: LabelsLike) -> tuple[Label, ...]:
    """Take labels from a file (its path), or from Python: texts, (energy, text) pairs or `Label`s.

    Raises
    ------
    InputError
        When the file cannot be read or holds no label.
    SettingError
        When an item is none of these.
    """
    if isinstance(labels, str | PathLike):
        return read_labels(labels)
    return tuple(_label_of(item) for item in labels)


def _label_of(item: object) -> Label:
    if isinstance(item, Label):
        return item
    if isinstance(item, str):
        return Label(text=item)
    if isinstance(item, Sequence) and len(item) == 2:
        energy, text = item if isinstance(item[1], str) else (item[1], item[0])
        if isinstance(text, str) and (energy is None or isinstance(energy, int | float)):
            return Label(text=text, energy_ev=None if energy is None else float(energy))
    raise SettingError(f"{item!r} is no label; give a text such as 'Fe', or an energy and a text such as (703.0, 'Fe')")


def read_labels(path: str | PathLike[str], *, stream: IO[bytes] | None = None) -> tuple[Label, ...]:
    """Read a list of labels.

    Parameters
    ----------
    path : str or path
        CSV or plain text: an energy and a label per line, columns in any order and of any name, decimal comma or
        point, or a bare list of elements; "-" reads standard input. Lines that begin with # are left out.
    stream : binary stream, optional
        Read instead of standard input when `path` is "-".

    Raises
    ------
    InputError
        When the file cannot be read, or no line of it holds a label.
    """
    source = _source(path, stream)
    lines = [(at, line) for at, line in enumerate(source.lines, start=1) if line.strip() and not COMMENT.match(line)]
    if len(lines) > MOST_LABELS:
        source.fail(f"has {len(lines)} lines, too many for labels", remedy=REMEDY)
    found = _rows_to_labels(lines) or _bare(lines)
    if not found:
        source.fail("holds no label", remedy=REMEDY)
    return tuple(found)


def _source(path: str | PathLike[str], stream: IO[bytes] | None) -> Source:
    """Read the text; what the error advises is for labels, not for spectra."""
    try:
        return read_source(path, stream)
    except InputError as failed:
        remedy = REMEDY if failed.remedy.startswith("give a text table") else failed.remedy
        raise InputError(failed.what, source=failed.source, line=failed.line, remedy=remedy) from None


def _rows_to_labels(lines: Sequence[tuple[int, str]]) -> list[Label]:
    """Cut the lines in the way that gives most energies with an element; none when no line has an energy."""
    head, body = _head(lines)
    tries: list[tuple[Dialect | None, list[_Row]]] = [(d, _cut(d, body)) for d in DIALECTS if d.separator != " "]
    tries.append((None, _cut_freely(body)))
    scored = [(_score(rows), -at, dialect, rows) for at, (dialect, rows) in enumerate(tries)]
    score, _, dialect, rows = max(scored, key=lambda item: item[:2])
    if score[0] == 0:
        return []
    names = _names(head, dialect)
    energy = _energy_column(rows, names)
    texts = _text_columns(rows, names, energy)
    out = []
    for row in rows:
        cells = dict(row.texts)
        text = " ".join(cells[at] for at in texts if at in cells)
        if not text and not row.values:
            continue
        value = dict(row.values).get(energy)
        out.append(Label(text=text, energy_ev=_in_ev(value, names.get(energy, "")), line=row.number))
    return out


def _in_ev(value: float | None, name: str) -> float | None:
    return value * 1000.0 if value is not None and re.search(r"\bkev\b", name, re.IGNORECASE) else value


def _head(lines: Sequence[tuple[int, str]]) -> tuple[str, Sequence[tuple[int, str]]]:
    """Part the line of column names from the rest: it has no number where all others have, and names no element."""
    first = lines[0][1] if lines else ""
    if simplify(first) in HEADINGS:
        return "", lines[1:]
    if NUMBER.search(UNIT.sub("", first)):
        return "", lines
    cells = [cell.strip(" \"'") for cell in re.split(r"[\t;,]|\s{2,}", first) if cell.strip(" \"'")]
    names_energy = any(role_of(cell) == "energy" for cell in [*cells, *first.split()])
    numbered = len(lines) > 1 and all(NUMBER.search(UNIT.sub("", line)) for _, line in lines[1:])
    if names_energy or (numbered and not any(_surely_an_element(cell) for cell in cells)):
        return first, lines[1:]
    return "", lines


def _surely_an_element(cell: str) -> bool:
    reading = read_label(cell)
    return bool(reading.ways) and not any(part.corrected_from for way in reading.ways for part in way)


def _names(head: str, dialect: Dialect | None) -> dict[int, str]:
    """Names of columns by place; none when cells are told by their kind alone."""
    return dict(enumerate(dialect.split(head))) if head and dialect is not None else {}


def _cut(dialect: Dialect, lines: Sequence[tuple[int, str]]) -> list[_Row]:
    """Cut at a separator; cells that are numbers, with or without eV, are values."""
    rows = []
    for number, line in lines:
        cells = dialect.split(levels_joined(line))
        values, texts = [], []
        for at, cell in enumerate(cells):
            value = dialect.number(UNIT.sub("", cell).strip())
            if value is not None:
                values.append((at, _scaled(value, cell)))
            elif cell:
                texts.append((at, cell))
        rows.append(_Row(number=number, values=tuple(values), texts=tuple(texts)))
    return rows


def _cut_freely(lines: Sequence[tuple[int, str]]) -> list[_Row]:
    """Take the numbers out of each line wherever they stand; what is left is the label."""
    rows = []
    for number, line in lines:
        spaced = BRACKETS.sub(" ", levels_joined(line)) if NUMBER.search(BRACKETS.sub(" ", line)) else line
        units = [match[1].lower() == "kev" for match in UNIT.finditer(spaced)]
        bare = UNIT.sub(" ", spaced)
        factor = 1000.0 if units and all(units) else 1.0
        values = [(at, factor * float(match[1].replace(",", "."))) for at, match in enumerate(NUMBER.finditer(bare))]
        text = " ".join(NUMBER.sub(" ", bare).replace("\t", " ").strip(" ,;\"'").split())
        rows.append(_Row(number=number, values=tuple(values), texts=((0, text),) if text else ()))
    return rows


def _scaled(value: float, cell: str) -> float:
    return 1000.0 * value if cell.lower().rstrip().endswith("kev") else value


def _score(rows: Sequence[_Row]) -> tuple[int, int, int]:
    """Count rows with an energy and an element; among equals, fewest numbers not read, and least beside them."""
    good = [row for row in rows if any(_may_be_energy(v) for _, v in row.values) and _elements(row)]
    not_read = sum(text.lstrip("+-\"'")[:1].isdigit() for row in rows for _, text in row.texts)
    return len(good), -not_read, -sum(len(row.values) + len(row.texts) for row in good)


def _may_be_energy(value: float) -> bool:
    return ENERGIES_EV[0] <= value <= ENERGIES_EV[1]


def _elements(row: _Row) -> set[str]:
    readings = [read_label(text) for _, text in row.texts]
    return {part.symbol for reading in readings for way in reading.ways for part in way}


def _energy_column(rows: Sequence[_Row], names: dict[int, str]) -> int:
    """Find the column of the energies: by its name, else where most elements have a line, else the first."""
    places = sorted({at for row in rows for at, _ in row.values})
    named = [at for at in places if role_of(names.get(at, "height")) == "energy"]
    if named:
        return named[0]

    def fit(at: int) -> tuple[int, int, int]:
        pairs = [(dict(row.values)[at], _elements(row)) for row in rows if at in dict(row.values)]
        near = sum(_near_a_line(value, elements) for value, elements in pairs)
        return near, sum(_may_be_energy(value) for value, _ in pairs), -at

    return max(places, key=fit)


def _near_a_line(value: float, elements: set[str]) -> bool:
    lines = (line for element in elements for line in tables.lines_of(element))
    return any(abs(line.energy_ev - value) <= NEAR_EV for line in lines)


def _text_columns(rows: Sequence[_Row], names: dict[int, str], energy: int) -> tuple[int, ...]:
    """Find the columns of the label: by their names, else the one that reads as elements, and one of transitions."""
    places = sorted({at for row in rows for at, _ in row.texts})
    if len(places) < 2:
        return tuple(places)
    readings = {at: [read_label(dict(row.texts)[at]) for row in rows if at in dict(row.texts)] for at in places}
    elements = {at: sum(bool(reading.ways) for reading in found) for at, found in readings.items()}
    named = [at for at in places if LABEL_NAME.search(names.get(at, "")) and elements[at]]
    chosen = max(named or places, key=lambda at: (elements[at], -at))
    transitions = [at for at in places if at != chosen and _are_transitions(readings[at], names.get(at, ""))]
    return (chosen, *transitions)


def _are_transitions(readings: Sequence[LabelReading], name: str) -> bool:
    marked = sum("is a transition" in reading.problem for reading in readings)
    return 2 * marked > len(readings) or bool(TRANSITION_NAME.search(name) and marked)


def _bare(lines: Sequence[tuple[int, str]]) -> list[Label]:
    """Read a list without energies: an element each, by lines or by commas."""
    _, body = _head(lines)
    out = []
    for number, line in body:
        for piece in re.split(r"[,;\t]+", levels_joined(line)):
            text = piece.strip(" \"'-*\u2022")
            if not text:
                continue
            reading = read_label(text)
            several = reading.clear and not reading.either and len(reading.ways[0]) > 1 and " " in text
            if several and not SEPARATORS.search(text):
                out += [Label(text=word, line=number) for word in text.split()]
            else:
                out.append(Label(text=text, line=number))
    return out
