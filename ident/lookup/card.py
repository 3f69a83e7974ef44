"""The reference card of an element: its lines, what stands near them, the line that decides, shifts, sources."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from .. import tables
from ..names import name_of, symbol_from_name
from ..physics.scales import EnergyScale
from .at import AXIS_SIGMA_EV, MOST_NEEDED, RARE, bell
from .energies import HANDBOOK, stated_ev, stated_sigma_ev

HANDLED_ONLY = 0.001  # below: elements met only where they are handled, such as astatine
RIVAL_REACH_EV = 8.0
RIVAL_HEIGHT = 0.15
SHOWN_HEIGHT = 0.02


@dataclass(frozen=True, kw_only=True)
class CardRival:
    """A line of another element that could be taken for this one."""

    element: str
    transition: str
    energy_ev: float
    relative_height: float


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
    rivals: tuple[CardRival, ...]


@dataclass(frozen=True, kw_only=True)
class CardShift:
    """How far a line moves in a chemical state."""

    transition: str
    state: str
    shift_ev: float
    sigma_ev: float
    source: str


@dataclass(frozen=True, kw_only=True)
class CardSource:
    """Where numbers of the card come from."""

    key: str
    text: str
    doi: str


@dataclass(frozen=True, kw_only=True)
class Decider:
    """The line that decides whether the element is there, and why that one."""

    transition: str
    energy_ev: float
    why: str


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
    deciding: Decider | None
    shifts: tuple[CardShift, ...]
    sources: tuple[CardSource, ...]
    untestable: str | None  # why no line can be given, if none can


def element_card(name: str, *, scale: EnergyScale = HANDBOOK) -> ElementCard:
    """Put the reference card of an element together.

    Parameters
    ----------
    name : str
        Symbol or name; small misspellings are forgiven.
    scale : EnergyScale, optional
        How energies are stated; by default as derivative minima on the handbooks' scale.

    Raises
    ------
    UnknownNameError
        When the name is that of no element.
    """
    symbol = symbol_from_name(name)
    lines = sorted(tables.lines_of(symbol), key=lambda line: -line.relative_height)
    shown = tuple(_card_line(line, scale) for line in lines if line.relative_height >= SHOWN_HEIGHT)
    shifts = tuple(
        CardShift(
            transition=row.transition, state=row.state, shift_ev=row.shift_ev, sigma_ev=row.sigma_ev, source=row.source
        )
        for row in tables.chemical_shifts(symbol)
    )
    return ElementCard(
        element=symbol,
        name=name_of(symbol),
        z=tables.atomic_number(symbol),
        reference=scale.reference,
        kind=scale.kind,
        scale=scale,
        lines=shown,
        deciding=_decider(shown),
        shifts=shifts,
        sources=_cited([*(line.source for line in shown), *(shift.source for shift in shifts)]),
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


def _card_line(line: tables.Line, scale: EnergyScale) -> CardLine:
    return CardLine(
        transition=line.transition,
        energy_ev=stated_ev(line, scale),
        sigma_ev=stated_sigma_ev(line, scale),
        energy_kind=line.energy_kind,
        relative_height=line.relative_height,
        height_kind=line.height_kind,
        state=line.state,
        source=line.source,
        rivals=_rivals(line, scale),
    )


def _rivals(line: tables.Line, scale: EnergyScale) -> tuple[CardRival, ...]:
    """Lines of other elements within reach, those most often met first, one an element."""
    common = tables.commonness()
    near: dict[str, tuple[float, tables.Line]] = {}
    for other in tables.read_lines():
        away = abs(other.energy_ev - line.energy_ev)
        if other.symbol == line.symbol or away > RIVAL_REACH_EV or other.relative_height < RIVAL_HEIGHT:
            continue
        if common.get(other.symbol, 0.0) < HANDLED_ONLY:
            continue
        weight = other.relative_height * bell(away / AXIS_SIGMA_EV) * max(common.get(other.symbol, 0.0), RARE)
        if weight > near.get(other.symbol, (0.0, other))[0]:
            near[other.symbol] = (weight, other)
    ranked = sorted(near.values(), key=lambda pair: -pair[0])[:MOST_NEEDED]
    return tuple(
        CardRival(
            element=other.symbol,
            transition=other.transition,
            energy_ev=stated_ev(other, scale),
            relative_height=other.relative_height,
        )
        for _, other in ranked
    )


def _decider(lines: tuple[CardLine, ...]) -> Decider | None:
    """The line whose height, divided among it and its rivals, is largest."""
    if not lines:
        return None
    best = max(lines, key=_clearness)
    if not best.rivals:
        why = f"nothing else in the tables stands within {RIVAL_REACH_EV:g} eV"
    else:
        names = ", ".join(f"{rival.element} {rival.energy_ev:.0f}" for rival in best.rivals)
        why = f"the clearest of its lines, though {names} eV stand near"
    return Decider(transition=best.transition, energy_ev=best.energy_ev, why=why)


def _clearness(line: CardLine) -> float:
    common = tables.commonness()
    rivalry = sum(rival.relative_height * max(common.get(rival.element, 0.0), RARE) for rival in line.rivals)
    low = 0.25 if line.energy_ev < 110.0 else 1.0  # where nearly every heavy element has a line
    return low * line.relative_height / (1.0 + 5.0 * rivalry)


def _why_no_line(symbol: str) -> str:
    if symbol in ("H", "He"):
        return "too few electrons for an Auger transition"
    return "the tables hold no line of it between 20 and 3200 eV"
