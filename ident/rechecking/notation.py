"""What a peak label says: element or elements and transition, read forgivingly, never guessed quietly."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from functools import lru_cache

from ..errors import UnknownNameError
from ..names import TransitionName, name_of, parse_transition, read_element
from ..tables.elements import SYMBOLS

SUBSCRIPTS = str.maketrans("₀₁₂₃₄₅₆₇₈₉", "0123456789")
MINUS_SIGNS = str.maketrans({"−": "-", "–": "-", "—": "-", "‐": "-", "‑": "-"})
COMMA_IN_LEVELS = re.compile(r"(?<=[KLMNOP])(\d),(\d)(?!\d)|(?<=[KLMNOP]\d,)(\d),(\d)(?!\d)")
TRANSITION = r"[KLMNOP]\d{0,2}[- ]?[KLMNOPV]\d{0,2}[- ]?[KLMNOPV]\d{0,2}"
WITH_TRANSITION = re.compile(rf"(?P<element>[A-Za-z]{{1,2}}?)[\s_:(\[-]*(?P<transition>{TRANSITION})(?![A-Za-z0-9])")
SEPARATORS = re.compile(r"\s*(?:[/+&|,;]|\band\b|\bund\b|\bet\b|\bwith\b)\s*", re.IGNORECASE)
EITHER = re.compile(r"\s*(?:\bor\b|\boder\b|\bou\b)\s*", re.IGNORECASE)
FILLERS = {"peak", "line", "element", "minimum", "auger", "signal", "probably", "maybe", "likely", "the", "of"}
NOBODY = {"unknown", "unassigned", "unidentified", "unlabelled", "unlabeled", "none", "nothing", "nan", "null"}
WORD = re.compile(r"[^\W\d_]+")
FORMULA = re.compile(r"(?:[A-Z][a-z]?\d{0,2}){2,}")
PART = re.compile(r"([A-Z][a-z]?)\d{0,2}")
SHELLS = ("K", "L", "M", "N", "O", "P")
LONGEST = 200  # characters of a label


@dataclass(frozen=True, kw_only=True)
class Part:
    """One element that a label names."""

    symbol: str
    transition: TransitionName | None = None
    corrected_from: str | None = None  # the misspelt word


@dataclass(frozen=True, kw_only=True)
class LabelReading:
    """What a label says; more than one of `ways` when it can be read in several."""

    ways: tuple[tuple[Part, ...], ...] = ()  # empty when it cannot be read
    either: bool = False  # "Fe or Co": one of them, not both
    choices: tuple[str, ...] = ()  # symbols that a word which is no element may stand for
    problem: str = ""  # why it cannot be read

    @property
    def clear(self) -> bool:
        """Whether there is one way to read it."""
        return len(self.ways) == 1


def levels_joined(text: str) -> str:
    """Take the comma out of levels such as L2,3, so that it parts nothing."""
    before = None
    while before != text:
        before, text = text, COMMA_IN_LEVELS.sub(r"\1\2\3\4", text)
    return text


@lru_cache(maxsize=4096)
def read_label(text: str) -> LabelReading:
    """Read a label.

    Understood are symbols, names in either spelling, misspellings with one clear correction, an element with its
    transition (Ti L3M23V, Ti-LMM, TiLMM, Ti L3-M2,3-V, Ti(LMM)), several elements (N/Ti, Fe + Cr, SiO2, "Fe or Co");
    what follows is left out. A label that can be read in more than one way has several `ways`.
    """
    tidy = " ".join(levels_joined(text.translate(SUBSCRIPTS).translate(MINUS_SIGNS)).split())[:LONGEST]
    tidy = tidy.strip(" \"'.:;,*?!#<>")
    if not WORD.search(tidy) or "".join(WORD.findall(tidy)).lower() in NOBODY:
        return LabelReading(problem="names no element")
    alternatives = [piece for piece in EITHER.split(tidy) if piece]
    pieces = [piece for group in alternatives for piece in SEPARATORS.split(group) if WORD.search(piece)]
    either = len(alternatives) > 1
    read: list[LabelReading] = []
    for place, piece in enumerate(pieces):
        reading = _read_piece(piece)
        if not reading.ways and place > 0 and not reading.choices:
            break  # a remark after the element
        if not reading.ways:
            return reading
        read.append(reading)
    return _combined(read, either)


def _combined(readings: list[LabelReading], either: bool) -> LabelReading:
    """Put the pieces of a label together: every way of one with every way of the others."""
    ways: list[tuple[Part, ...]] = [()]
    for reading in readings:
        ways = [(*before, *way) for before in ways for way in reading.ways]
    distinct = list(dict.fromkeys(tuple(_without_repeats(way)) for way in ways))
    return LabelReading(ways=tuple(distinct), either=either)


def _without_repeats(way: tuple[Part, ...]) -> list[Part]:
    seen: dict[str, Part] = {}
    for part in way:
        seen.setdefault(part.symbol, part)
    return list(seen.values())


def _read_piece(piece: str) -> LabelReading:
    """Read what stands between separators."""
    words = piece.split()
    while len(words) > 1 and words[0].strip(":").lower() in FILLERS:
        words.pop(0)
    piece = " ".join(words)
    glued = _with_transition(piece)
    if glued is not None:
        return glued
    first, *rest = re.split(r"[\s_:(\[\-]+", piece)
    reading = _read_word(first)
    if not reading.ways or not rest:
        return reading
    return _with_rest(reading, [word.strip("()[]{}.,?!") for word in rest])


def _with_transition(piece: str) -> LabelReading | None:
    """Read "Ti LMM", "TiL3M23V" or "kl23l23 of" at the beginning; None when it is not written so."""
    match = WITH_TRANSITION.match(piece) or WITH_TRANSITION.match(piece[:2] + piece[2:].upper())
    if match is None:
        match = WITH_TRANSITION.match(piece.upper()) if " " in piece or "-" in piece else None
    if match is None or match["element"].capitalize() not in SYMBOLS:
        return None
    try:
        transition = parse_transition(match["transition"])
    except UnknownNameError:
        return None
    return LabelReading(ways=((Part(symbol=match["element"].capitalize(), transition=transition),),))


def _read_word(word: str) -> LabelReading:
    """Read one word: a symbol with whatever number behind it, a name, a formula."""
    bare = word.strip("()[]{}.,?!*'\"")
    numbered = re.fullmatch(r"([A-Za-z]{1,2})\d*", bare)
    if numbered and numbered[1].capitalize() in SYMBOLS:
        return _symbol_or_two(numbered[1], bare)
    if FORMULA.fullmatch(bare):
        symbols = PART.findall(bare)
        if all(symbol in SYMBOLS for symbol in symbols):
            return LabelReading(ways=(tuple(Part(symbol=symbol) for symbol in dict.fromkeys(symbols)),))
    try:
        parse_transition(bare.upper())
        return LabelReading(problem=f"'{bare}' is a transition and names no element")
    except UnknownNameError:
        pass
    try:
        found = read_element(bare)
    except UnknownNameError as unknown:
        return LabelReading(problem=str(unknown), choices=unknown.choices)
    return LabelReading(ways=((Part(symbol=found.symbol, corrected_from=bare if found.corrected else None),),))


def _symbol_or_two(letters: str, bare: str) -> LabelReading:
    """CO in capitals may be cobalt, or carbon and oxygen; Co is cobalt."""
    one = (Part(symbol=letters.capitalize()),)
    if len(letters) == 2 and bare.isupper() and all(letter in SYMBOLS for letter in letters):
        return LabelReading(ways=(one, tuple(Part(symbol=letter) for letter in letters)))
    return LabelReading(ways=(one,))


def _with_rest(reading: LabelReading, rest: list[str]) -> LabelReading:
    """Look at what follows an element: a transition, more elements, a shell or potassium, or a remark."""
    after = _transition_in(rest)
    if after is not None:
        return LabelReading(ways=tuple((*way[:-1], replace(way[-1], transition=after)) for way in reading.ways))
    words = [word for word in rest if word]
    if words and all(_is_element(word) for word in words) and reading.clear:
        others = tuple(Part(symbol=read_element(word).symbol) for word in words)
        together = (*reading.ways[0], *others)
        if len(words) == 1 and words[0] in SHELLS:
            return LabelReading(ways=(reading.ways[0], together))  # "C K": carbon's K line, or carbon and potassium
        return LabelReading(ways=(together,))
    return reading


def _transition_in(rest: list[str]) -> TransitionName | None:
    for words in (rest[:1], rest[:3]):
        try:
            return parse_transition("-".join(words).upper())
        except UnknownNameError:
            continue
    return None


def _is_element(word: str) -> bool:
    """Tell whether a word is a symbol as it is written, or a name: "in", "as" and "no" in a remark are not."""
    if word in SYMBOLS:
        return True
    try:
        return len(word) > 3 and not read_element(word).corrected
    except UnknownNameError:
        return False


def said(way: tuple[Part, ...], either: bool = False) -> str:
    """Say a reading: "Ti L3M23V", "N and Ti"."""
    told = [f"{part.symbol} {part.transition}" if part.transition else part.symbol for part in way]
    return (" or " if either else " and ").join(told)


def said_in_names(way: tuple[Part, ...]) -> str:
    """Say a reading with names, where it must not be mistaken: "Co (cobalt)", "C (carbon) and O (oxygen)"."""
    return " and ".join(f"{part.symbol} ({name_of(part.symbol)})" for part in way)
