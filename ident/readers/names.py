"""Names of columns: finding them in a header, and telling energies, errors, sweeps and ordinates apart."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Literal

from .cells import Dialect

COMMENT_MARKS = ("#", "%", ";", "!", "//", "'", "*")
LONGEST_HEADER = 4000  # characters; a longer line names no columns
Role = Literal["energy", "other", "ordinate"]

UNIT = re.compile(
    r"[\[(]?\s*(?:k?eV|electron\s?volts?|counts?|cts|cps|[ck]?c?/s|counts?\s?/\s?s(?:ec)?|a\.?\s?u\.?|"
    r"arb\.?(?:\s?u(?:nits?|\.)?)?|s|sec|V|mV|[pn\u00b5u]?A|%|1)\s*[\])]?",
    re.IGNORECASE,
)
ENERGY = re.compile(
    r"energy|energies|energie|energia|\u00e9nergie|\bkinetic\b|\bbinding\b|^\W*[kb]\.?\s?e\.?\W*(?:\W*k?ev\W*)?$|"
    r"^\W*e(?:_?kin)?\W*(?:k?ev\W*)?$|^\W*k?ev\W*$",
    re.IGNORECASE,
)
OTHER = re.compile(
    r"\berr(?:or)?s?\b|uncertaint|\bsigma\b|\bstd|\bsd\b|stdev|deviation|\bvariance|\u00b1|\bindex\b|\bpoints?\b|"
    r"\bchannel|\bn(?:o|r|um)\b|^\W*#\W*$|\btime\b|\bdwell|transmission|\bdate\b|\bweights?\b|\bbackground\b|"
    r"\bresiduals?\b|\btrf\b",
    re.IGNORECASE,
)
SWEEP = re.compile(r"(?P<stem>.*?\D)\s*[._#-]?\s*(?P<number>\d+)\s*(?P<unit>[\[(].*)?")
COLUMNS_ARE = re.compile(r"^(?:columns?|fields?|data)\s*[:=]\s*", re.IGNORECASE)
PLACE = re.compile(r"\b(?:spot|point|position|location|area|site|level|layer|depth|sample|pixel)", re.IGNORECASE)
TOKEN = re.compile(r"[^\s\[(]+(?:\([^)\s]*\))?(?:\s*[\[(][^\])]*[\])])?|[\[(][^\])]*[\])]")


def find_names(head: Sequence[tuple[int, str]], columns: int, dialect: Dialect) -> tuple[int, list[str]] | None:
    """Find the line that names the columns, and a line of units below it.

    Parameters
    ----------
    head : sequence of (line number, text)
        What stands before the first row, blank lines left out.
    columns : int
        How many columns the rows have.

    Returns
    -------
    (line number, names) or None
        Units of a line of their own are added in brackets.
    """
    fitting = [
        (at, number, cells)
        for at, (number, text) in enumerate(head)
        if at >= len(head) - 6
        and len(text) < LONGEST_HEADER
        and (cells := _name_cells(text, columns, dialect)) is not None
    ]
    units = [entry for entry in fitting if all(UNIT.fullmatch(cell) for cell in entry[2] if cell)]
    named = [entry for entry in fitting if entry not in units]
    said = [entry for entry in named if any(role_of(cell) == "energy" for cell in entry[2])]
    prose = dialect.separator == " "  # any remark of two words would name two columns
    last = len(head) - (2 if units else 1)
    chosen = (
        said[-1:]
        or [entry for entry in named if entry[0] >= last and not (prose and is_remark(head[entry[0]][1]))]
        or units[-1:]
    )
    if not chosen:
        return None
    at, number, cells = chosen[-1]
    below = [entry for entry in units if entry[0] == at + 1]
    if below:
        cells = [_with_unit(cell, unit) for cell, unit in zip(cells, below[0][2], strict=True)]
    return number, cells


def is_remark(text: str) -> bool:
    """Tell whether a line begins with a comment mark."""
    return text.lstrip().startswith(COMMENT_MARKS)


def _name_cells(text: str, columns: int, dialect: Dialect) -> list[str] | None:
    """Cut a header line into one name a column; None when it does not fit."""
    bare = COLUMNS_ARE.sub("", text.strip().lstrip("#%!/'*;").strip())
    first = re.split(r"[\t;,]|\s{2,}", bare)[0]
    if not bare or re.search(r"[:=]\s*$|\w\s*[:=]\s", first):  # "sample: steel" names no column
        return None
    spellings = [dialect.split(bare)]
    spellings += [re.split(pattern, bare) for pattern in (r"\s*\t\s*", r"\s*;\s*", r"\s*,\s*", r"\s{2,}|\t")]
    spellings.append(TOKEN.findall(bare))
    for cells in spellings:
        tidy = [" ".join(cell.strip(" \t\"'").split()) for cell in cells]
        if len(tidy) == columns and not all(dialect.number(cell) is not None for cell in tidy):
            return tidy
        if len(tidy) > columns and dialect.separator != " " and any(role_of(cell) == "energy" for cell in tidy):
            return tidy[:columns]  # names of columns that are empty
    return None


def _with_unit(name: str, unit: str) -> str:
    bare = unit.strip(" []()")
    return f"{name} [{bare}]" if bare and bare not in name else name


def role_of(name: str) -> Role:
    """Say what a column is by its name: an energy, an ordinate, or something else (errors, times)."""
    if ENERGY.search(name):
        return "energy"
    return "other" if OTHER.search(name) else "ordinate"


def simplify(name: str) -> str:
    """Bring a name into a form that forgives case, blanks and punctuation."""
    return re.sub(r"[\W_]+", "", name.casefold())


def find_sweeps(names: Sequence[str]) -> list[int]:
    """Return the positions of ordinates that share a stem and differ in a number ("sweep 1", "sweep 2")."""
    groups: dict[str, list[int]] = {}
    for at, name in enumerate(names):
        match = SWEEP.fullmatch(name.strip()[:80])
        if PLACE.search(name):  # "spot 1", "spot 2" are not the same thing twice
            continue
        if match and role_of(name) == "ordinate" and not name.startswith("column "):
            groups.setdefault(simplify(match["stem"]), []).append(at)
        elif role_of(name) == "ordinate":  # "Counts", "Counts.1": what spreadsheets make of equal names
            groups.setdefault(simplify(name), []).append(at)
    return max((group for group in groups.values() if len(group) > 1), key=len, default=[])
