"""Element names and symbols, read forgivingly; transition notation."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import cache

from .errors import UnknownNameError
from .tables.elements import SYMBOLS

# IUPAC names in British spelling, by atomic number from 1 (IUPAC Red Book, table of the elements).
NAMES = (
    "hydrogen helium lithium beryllium boron carbon nitrogen oxygen fluorine neon sodium magnesium aluminium "
    "silicon phosphorus sulphur chlorine argon potassium calcium scandium titanium vanadium chromium manganese "
    "iron cobalt nickel copper zinc gallium germanium arsenic selenium bromine krypton rubidium strontium yttrium "
    "zirconium niobium molybdenum technetium ruthenium rhodium palladium silver cadmium indium tin antimony "
    "tellurium iodine xenon caesium barium lanthanum cerium praseodymium neodymium promethium samarium europium "
    "gadolinium terbium dysprosium holmium erbium thulium ytterbium lutetium hafnium tantalum tungsten rhenium "
    "osmium iridium platinum gold mercury thallium lead bismuth polonium astatine radon francium radium actinium "
    "thorium protactinium uranium"
).split()
OTHER_SPELLINGS = {
    "aluminum": "Al", "sulfur": "S", "cesium": "Cs", "phosphor": "P", "wolfram": "W", "natrium": "Na", "kalium": "K",
    "columbium": "Nb",
}  # fmt: skip
CLEAR, LEAD = 78.0, 6.0  # likeness in percent that a misspelling needs, and its lead over the next name

_TRANSITION = re.compile(r"([KLMNOP]\d{0,2})[- ]?([KLMNOPV]\d{0,2})[- ]?([KLMNOPV]\d{0,2})$")
_SUBSHELLS = {"K": "", "L": "123", "M": "12345", "N": "1234567", "O": "12345", "P": "123", "V": ""}


@dataclass(frozen=True, kw_only=True)
class Reading:
    """An element as read, and whether it had to be corrected."""

    symbol: str
    corrected: bool = False


@dataclass(frozen=True, kw_only=True)
class TransitionName:
    """A transition: the vacancy and the two levels left empty, such as L3, M23, V."""

    vacancy: str
    first: str
    second: str

    def __str__(self) -> str:
        return self.vacancy + self.first + self.second

    @property
    def shells(self) -> str:
        """The shells only, as a spectroscopist says them: LMM for L3M23V of titanium is LMV."""
        return self.vacancy[0] + self.first[0] + self.second[0]


@cache
def _by_name() -> dict[str, str]:
    return dict(zip(NAMES, SYMBOLS, strict=True)) | OTHER_SPELLINGS


def name_of(symbol: str) -> str:
    """IUPAC name of an element, British spelling."""
    return NAMES[SYMBOLS.index(symbol)]


def symbol_from_name(text: str) -> str:
    """Symbol of an element given by symbol, name in either spelling, or a misspelling of it.

    Raises
    ------
    UnknownNameError
        When nothing is near enough, or two names are equally near; it lists the nearest.
    """
    return read_element(text).symbol


def read_element(text: str) -> Reading:
    """Read an element's symbol or name, and say whether a misspelling was corrected."""
    word = text.strip()
    if word.capitalize() in SYMBOLS and len(word) <= 2:
        return Reading(symbol=word.capitalize())
    known = _by_name().get(word.lower())
    if known is not None:
        return Reading(symbol=known)
    if len(word) < 4 or not word.isalpha():
        raise UnknownNameError(f"'{word}' is no element; write a symbol such as Fe or a name such as iron")
    return Reading(symbol=_nearest(word), corrected=True)


def _nearest(word: str) -> str:
    from rapidfuzz import fuzz, process

    found = process.extract(word.lower(), list(_by_name()), scorer=fuzz.ratio, limit=4)
    best: dict[str, float] = {}
    for name, score, _ in found:
        symbol = _by_name()[name]
        best[symbol] = max(best.get(symbol, 0.0), float(score))
    ranked = sorted(best.items(), key=lambda pair: -pair[1])
    (symbol, score), *rest = ranked
    if score >= CLEAR and (not rest or score - rest[0][1] >= LEAD):
        return symbol
    choices = ", ".join(f"{name_of(other)} ({other})" for other, _ in ranked[:3])
    symbols = tuple(other for other, _ in ranked[:3])
    raise UnknownNameError(f"'{word}' is no element; did you mean one of {choices}?", choices=symbols)


def parse_transition(text: str) -> TransitionName:
    """Read a transition: L3M23V, L3-M23-V, LMM, KL23L23; V is the valence band.

    Raises
    ------
    UnknownNameError
        When it is no transition of levels that exist.
    """
    match = _TRANSITION.match(text.strip().replace("−", "-").replace("₁", "1").replace("₂", "2").replace("₃", "3"))
    if match is None:
        raise UnknownNameError(f"'{text}' is no Auger transition; write it as KL23L23, L3M45M45 or LMM")
    for part in match.groups():
        if any(digit not in _SUBSHELLS[part[0]] for digit in part[1:]):
            raise UnknownNameError(f"'{part}' in '{text}' is no level; {part[0]} has {_SUBSHELLS[part[0]] or 'none'}")
    return TransitionName(vacancy=match[1], first=match[2], second=match[3])
