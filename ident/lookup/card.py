"""The reference card of an element: its lines, what stands near them, the line that decides, shifts, sources."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from .. import tables
from ..names import name_of, symbol_from_name
from ..physics.scales import EnergyScale
from .depths import CardEscape, escape_of, line_depth_nm, line_free_path
from .energies import HANDBOOK, stated_ev, stated_sigma_ev
from .rivalry import CardRival, Decider, decision_on, rivals_by_line

SHOWN_HEIGHT = 0.02


@dataclass(frozen=True, kw_only=True)
class CardLine:
    """One line of the card."""

    transition: str
    energy_ev: float  # on the scale asked for
    sigma_ev: float
    energy_kind: str  # measured, compiled, calculated, ...
    relative_height: float
    height_kind: str
    state: str  # the state that the energy refers to
    source: str
    mean_free_path_nm: float  # in the element itself
    mean_free_path_factor: float  # one standard deviation, multiplicative
    mean_free_path_formula: str
    depth_nm: float  # 95 % of the signal comes from no deeper
    rivals: tuple[CardRival, ...]  # of lines of 20 % and more, likeliest first


@dataclass(frozen=True, kw_only=True)
class CardShift:
    """How far a line moves in a chemical state."""

    transition: str
    state: str
    state_class: str  # oxide, sulphide and so on
    shift_ev: float
    sigma_ev: float
    origin: str  # read, from memory, or estimated from electronegativity and oxidation state
    source: str


@dataclass(frozen=True, kw_only=True)
class CardSource:
    """Where numbers of the card come from."""

    key: str
    text: str
    doi: str


@dataclass(frozen=True, kw_only=True)
class ElementCard:
    """The reference card of an element."""

    element: str
    name: str
    z: int
    reference: str  # level that the energies count from
    kind: str  # derivative or direct
    scale: EnergyScale
    lines: tuple[CardLine, ...]  # strongest first
    deciding: Decider | None  # the clearest of its lines
    decided_by: str | None  # its transition; None when a rival can cover every strong line
    undecided_beside: tuple[str, ...]  # those rivals
    decision: str  # the same in words
    escape: CardEscape | None  # how depths were worked out
    shifts: tuple[CardShift, ...]  # of known states, or of those expected where none is known
    sources: tuple[CardSource, ...]
    untestable: str | None  # why no line can be given, if none can


def element_card(name: str, *, scale: EnergyScale = HANDBOOK, emission_deg: float = 0.0) -> ElementCard:
    """Put the reference card of an element together.

    Parameters
    ----------
    name : str
        Symbol or name; small misspellings are forgiven.
    scale : EnergyScale, optional
        How energies are stated; by default as derivative minima on the handbooks' scale.
    emission_deg : float, optional
        Angle between the surface normal and the direction in which electrons are collected.

    Raises
    ------
    UnknownNameError
        When the name is that of no element.
    SettingError
        When the angle is not between 0 and 80 degrees.
    """
    symbol = symbol_from_name(name)
    lines = sorted(tables.lines_of(symbol), key=lambda line: -line.relative_height)
    escape = escape_of(symbol, emission_deg) if lines else None
    rivals = rivals_by_line(symbol, scale)
    shown = tuple(
        _card_line(line, scale, emission_deg, rivals.get(line.transition, ()))
        for line in lines
        if line.relative_height >= SHOWN_HEIGHT
    )
    decision = decision_on(symbol, scale)
    shifts = _known_shifts(symbol) or _expected_shifts(symbol)
    return ElementCard(
        element=symbol,
        name=name_of(symbol),
        z=tables.atomic_number(symbol),
        reference=scale.reference,
        kind=scale.kind,
        scale=scale,
        lines=shown,
        deciding=decision.deciding,
        decided_by=decision.decided_by,
        undecided_beside=decision.beside,
        decision=decision.text,
        escape=escape,
        shifts=shifts,
        sources=_cited(
            [*(line.source for line in shown), *(s.source for s in shifts), *([escape.source] if escape else [])]
        ),
        untestable=None if shown else _why_no_line(symbol),
    )


def _cited(keys: Iterable[str]) -> tuple[CardSource, ...]:
    """What the source keys stand for, each once."""
    known = tables.sources()
    split = dict.fromkeys(key for text in keys for key in text.split())
    return tuple(
        CardSource(key=key, text=known[key].text if key in known else "", doi=known[key].doi if key in known else "")
        for key in split
    )


def _card_line(line: tables.Line, scale: EnergyScale, emission_deg: float, rivals: tuple[CardRival, ...]) -> CardLine:
    path = line_free_path(line)
    return CardLine(
        transition=line.transition,
        energy_ev=stated_ev(line, scale),
        sigma_ev=stated_sigma_ev(line, scale),
        energy_kind=line.energy_kind,
        relative_height=line.relative_height,
        height_kind=line.height_kind,
        state=line.state,
        source=line.source,
        mean_free_path_nm=path.nm,
        mean_free_path_factor=path.factor,
        mean_free_path_formula=path.formula,
        depth_nm=line_depth_nm(path, emission_deg),
        rivals=rivals,
    )


def _known_shifts(symbol: str) -> tuple[CardShift, ...]:
    return tuple(
        CardShift(
            transition=row.transition,
            state=row.state,
            state_class=row.state_class,
            shift_ev=row.shift_ev,
            sigma_ev=row.sigma_ev,
            origin=row.status,
            source=row.source,
        )
        for row in tables.chemical_shifts(symbol)
    )


ROMAN = ("0", "I", "II", "III", "IV", "V", "VI", "VII", "VIII")


def _expected_shifts(symbol: str) -> tuple[CardShift, ...]:
    """What the usual compounds should do where no shift is known, at the strongest line of each class."""
    strongest = {line.valence: line.transition for line in reversed(tables.lines_of(symbol))}
    return tuple(
        CardShift(
            transition=strongest[row.valence],
            state=f"{symbol}({ROMAN[row.oxidation_state]}) {row.state_class}",
            state_class=row.state_class,
            shift_ev=row.shift_ev,
            sigma_ev=row.sigma_ev,
            origin="estimated",
            source=row.source,
        )
        for row in tables.shift_priors(symbol)
    )


def _why_no_line(symbol: str) -> str:
    if symbol in ("H", "He"):
        return "too few electrons for an Auger transition"
    return "the tables hold no line of it between 20 and 3200 eV"
