"""ISO 14976, the open transfer format for surface analysis: its lines, parted into header and blocks.

One value a line, meaning by position. Each block has up to 40 items; how many lines an item has depends on
the technique, the experiment mode and the scan mode. This module parts the lines and checks that numbers
stand where the standard wants them; `iso14976_spectra` makes spectra of it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..spectrum import FloatArray
from .iso14976_lines import MISSING, Cursor, is_number, said, to_number
from .source import Source

IDENTIFIER = "VAMAS Surface Chemical Analysis Standard Data Transfer Format 1988 May 4"
END = "end of experiment"
EXPERIMENT_MODES = ("MAP", "MAPDP", "MAPSV", "MAPSVDP", "NORM", "SDP", "SDPSV", "SEM", "NOEXP")
SCAN_MODES = ("REGULAR", "IRREGULAR", "MAPPING")
WITH_REGIONS = ("MAP", "MAPDP", "NORM", "SDP")
WITH_POSITION = ("MAP", "MAPDP")
WITH_SPUTTERING = ("MAPDP", "MAPSVDP", "SDP", "SDPSV")
WITH_FIELD = ("MAP", "MAPDP", "MAPSV", "MAPSVDP", "SEM")
WITH_LINES = ("MAPSV", "MAPSVDP", "SEM")
ION_TECHNIQUES = tuple(
    name.casefold()
    for base in ("FABMS", "ISS", "SIMS", "SNMS")
    for name in (base, f"{base} energy spec")
    if name != "ISS energy spec"
)
SPUTTERED_TECHNIQUES = ("aes diff", "aes dir", "edx", "els", "ups", "xps", "xrf")

ITEM_NAMES = {
    1: "year", 2: "month", 3: "day", 4: "hour", 5: "minute", 6: "second", 7: "hours from GMT",
    8: "comment lines", 9: "technique", 10: "x and y", 11: "experimental variables",
    12: "source label", 13: "sputter ion", 14: "source energy", 15: "source strength", 16: "beam width",
    17: "field of view", 18: "line-scan coordinates", 19: "angle of incidence", 20: "source azimuth",
    21: "analyser mode", 22: "pass energy", 23: "differential width", 24: "magnification",
    25: "work function", 26: "target bias", 27: "analysis width", 28: "take-off angles",
    29: "species label", 30: "transition label and charge", 31: "abscissa", 32: "corresponding variables",
    33: "signal mode", 34: "collection time", 35: "number of scans", 36: "time correction",
    37: "sputter source", 38: "sample tilt", 39: "sample rotation", 40: "additional numbers",
}  # fmt: skip


@dataclass(frozen=True, kw_only=True)
class Item:
    """The lines of one item and the line of the file they begin on."""

    line: int
    texts: tuple[str, ...]


@dataclass(frozen=True, kw_only=True)
class Preamble:
    """The part before the blocks."""

    institution: str
    instrument: str
    operator: str
    experiment: str
    comments: tuple[str, ...]
    experiment_mode: str
    scan_mode: str
    variables: tuple[tuple[str, str], ...]  # label and unit of each experimental variable
    listed: tuple[int, ...]  # item numbers, all positive (given in each block) or all negative (left out)
    blocks: int


@dataclass(frozen=True, kw_only=True, eq=False)
class Block:
    """One block.

    Parameters
    ----------
    number : int
        Counted from 1.
    line : int
        Line of the file the block begins on.
    items : dict
        Item number -> its lines; items the standard gives no lines here hold none.
    values : (points, variables) array
        The ordinates of each corresponding variable; NaN where missing.
    values_line : int
        Line of the file the first value stands on.
    """

    number: int
    line: int
    block_id: str
    sample_id: str
    items: dict[int, Item]
    values: FloatArray
    values_line: int

    def text(self, item: int, at: int = 0) -> str | None:
        """One line of an item as text; None when blank, "Not Specified" or absent."""
        texts = self.items[item].texts
        return said(texts[at]) if at < len(texts) else None

    def number_of(self, item: int, at: int = 0) -> float | None:
        """One line of an item as a number; None when missing (1E37), blank or absent."""
        texts = self.items[item].texts
        return to_number(texts[at]) if at < len(texts) else None

    @property
    def labels(self) -> tuple[tuple[str, str], ...]:
        """Label and unit of each corresponding variable."""
        texts = self.items[32].texts[1:]
        return tuple(zip(texts[0::2], texts[1::2], strict=True))

    @property
    def comments(self) -> tuple[str, ...]:
        """The comment lines of the block."""
        return tuple(text for text in self.items[8].texts[1:] if said(text))


@dataclass(frozen=True, kw_only=True, eq=False)
class Iso14976:
    """A whole file."""

    preamble: Preamble
    blocks: tuple[Block, ...]
    warnings: tuple[str, ...]


def is_iso14976(source: Source) -> bool:
    """Tell by its first line whether a text is an ISO 14976 file."""
    first = next((line for line in source.lines if line.strip()), "")
    return first.strip().casefold().startswith("vamas surf")


def parse_iso14976(source: Source) -> Iso14976:
    """Part a file into header and blocks.

    Raises
    ------
    InputError
        When the file is truncated, or a line holds what cannot stand there.
    """
    cursor = Cursor(source)
    while not source.lines[cursor.at].strip():
        cursor.at += 1
    if " ".join(cursor.text().split()).casefold() != IDENTIFIER.casefold():
        cursor.fail("the first line is not that of ISO 14976", remedy=f"it must read {IDENTIFIER!r}")
    preamble = _read_preamble(cursor)
    blocks: list[Block] = []
    for number in range(1, preamble.blocks + 1):
        cursor.part = f"block {number} of {preamble.blocks}"
        blocks.append(_read_block(cursor, preamble, number, blocks[0] if blocks else None))
    return Iso14976(preamble=preamble, blocks=tuple(blocks), warnings=_check_end(cursor))


def _check_end(cursor: Cursor) -> tuple[str, ...]:
    """Check that the blocks are followed by the closing line."""
    if cursor.at == cursor.end:
        return (f"the closing line {END!r} is missing: the file may have been cut short",)
    cursor.part = "the end"
    last = cursor.text()
    if " ".join(last.split()).casefold() != END:
        cursor.fail(f"{last[:30]!r} stands after the last block, where {END!r} should")
    return ()


def _read_preamble(cursor: Cursor) -> Preamble:
    institution, instrument, operator, experiment = cursor.take(4)
    comments = cursor.take(cursor.count("the number of comment lines"))
    mode = _one_of(cursor, EXPERIMENT_MODES, "the experiment mode")
    scan = _one_of(cursor, SCAN_MODES, "the scan mode")
    if mode in WITH_REGIONS:
        cursor.count("the number of spectral regions")
    if mode in WITH_POSITION:
        for what in ("analysis positions", "discrete x coordinates", "discrete y coordinates"):
            cursor.count(f"the number of {what}")
    names = cursor.take(2 * cursor.count("the number of experimental variables"))
    listed = _read_list(cursor)
    cursor.take(cursor.count("the number of manually entered items"))
    for what in ("experiment", "block"):
        if cursor.count(f"the number of future-upgrade {what} entries"):
            cursor.fail(
                f"the file has future-upgrade {what} entries, whose place readers disagree on",
                "export the file without them",
            )
    count = cursor.count("the number of blocks")
    if not count:
        cursor.fail("the file holds no blocks", "export it with the spectra")
    return Preamble(
        institution=institution,
        instrument=instrument,
        operator=operator,
        experiment=experiment,
        comments=comments,
        experiment_mode=mode,
        scan_mode=scan,
        variables=tuple(zip(names[0::2], names[1::2], strict=True)),
        listed=listed,
        blocks=count,
    )


def _one_of(cursor: Cursor, words: Sequence[str], what: str) -> str:
    """Take a line that must be one of some words."""
    text = cursor.text()
    if text.upper() not in words:
        cursor.fail(f"{text[:30]!r} stands where {what} should", f"it is one of {', '.join(words)}")
    return text.upper()


def _read_list(cursor: Cursor) -> tuple[int, ...]:
    """Take the inclusion list (positive numbers) or the exclusion list (negative)."""
    signed = cursor.count("the length of the inclusion or exclusion list", signed=True)
    listed = []
    for _ in range(abs(signed)):
        number = cursor.count("an item number")
        if not 1 <= number <= 40:
            cursor.fail(f"item number {number} is not between 1 and 40")
        listed.append(number if signed > 0 else -number)
    return tuple(listed)


def _is_given(preamble: Preamble, item: int) -> bool:
    """Tell whether blocks after the first carry an item."""
    if not preamble.listed:
        return True
    return item in preamble.listed if preamble.listed[0] > 0 else -item not in preamble.listed


def _read_block(cursor: Cursor, preamble: Preamble, number: int, first: Block | None) -> Block:
    line = cursor.at + 1
    block_id, sample_id = cursor.take(2)
    items: dict[int, Item] = {}
    for item in range(1, 41):
        if first is None or _is_given(preamble, item):
            start = cursor.at + 1
            items[item] = Item(line=start, texts=_read_item(cursor, item, items, preamble))
        else:
            items[item] = first.items[item]
    values, values_line = _read_values(cursor, (len(items[32].texts) - 1) // 2)
    return Block(
        number=number,
        line=line,
        block_id=block_id,
        sample_id=sample_id,
        items=items,
        values=values,
        values_line=values_line,
    )


def _read_item(cursor: Cursor, item: int, items: dict[int, Item], preamble: Preamble) -> tuple[str, ...]:
    """Take the lines of one item and check that numbers stand where numbers belong."""
    layout = _layout(item, items[9].texts[0].casefold() if item > 9 else "", preamble)
    if item in (8, 32, 40):
        count = cursor.count(f"the number of {ITEM_NAMES[item]}")
        cursor.need(count)
        return (str(count), *_checked(cursor, item, layout * count))
    return _checked(cursor, item, layout)


def _checked(cursor: Cursor, item: int, layout: str) -> tuple[str, ...]:
    """Take a line for each letter of a layout: "n" a number (a blank is let pass), "t" a text."""
    start = cursor.at
    texts = cursor.take(len(layout))
    for offset, (letter, text) in enumerate(zip(layout, texts, strict=True)):
        if letter == "n" and text and not is_number(text):
            cursor.at = start + offset + 1
            cursor.fail(f"{text[:30]!r} stands where item {item} ({ITEM_NAMES[item]}) should be a number")
    return texts


def _layout(item: int, technique: str, preamble: Preamble) -> str:
    """Lines of an item: a letter each, "n" for a number and "t" for a text; 8, 32 and 40 repeat it."""
    mode = preamble.experiment_mode
    sputtering = mode in WITH_SPUTTERING
    layouts = {
        8: "t",
        9: "t",
        10: "nn" if mode in WITH_POSITION else "",
        11: "n" * len(preamble.variables),
        12: "t",
        13: "nnn" if sputtering or technique in ION_TECHNIQUES else "",
        16: "nn",
        17: "nn" if mode in WITH_FIELD else "",
        18: "nnnnnn" if mode in WITH_LINES else "",
        21: "t",
        23: "n" if technique == "aes diff" else "",
        27: "nn",
        28: "nn",
        29: "t",
        30: "tn",
        31: "ttnn" if preamble.scan_mode == "REGULAR" else "",
        32: "tt",
        33: "t",
        37: "nnnnnnt" if sputtering and technique in SPUTTERED_TECHNIQUES else "",
        38: "nn",
        40: "ttn",
    }
    return layouts.get(item, "n")


def _read_values(cursor: Cursor, variables: int) -> tuple[FloatArray, int]:
    """Take the ordinate values: their number, the extremes of each variable, then the interleaved values."""
    count = cursor.count("the number of ordinate values")
    if variables == 0 or count % variables:
        cursor.fail(f"{count} ordinate values do not go round among {variables} variables")
    start = cursor.at
    cursor.take(2 * variables)
    for at in range(2 * variables):
        _read_value(cursor, start + at)
    first_line = cursor.at + 1
    texts = cursor.take(count)
    try:
        values = np.array(texts, dtype=np.float64) if count else np.empty(0)
    except ValueError:  # a decimal comma, or a damaged line to be named
        values = np.array([_read_value(cursor, first_line - 1 + at) for at in range(count)])
    with np.errstate(invalid="ignore"):
        values = np.where(np.abs(values) < MISSING / 10, values, np.nan)
    return values.reshape(-1, variables), first_line


def _read_value(cursor: Cursor, at: int) -> float:
    """Read the value on line `at` + 1."""
    text = cursor.source.lines[at].strip()
    if not text or not is_number(text):
        cursor.at = at + 1
        cursor.fail(f"{text[:30]!r} stands where an ordinate value should")
    return float(text.replace(",", "."))
