"""Rivals of an element's strong lines, the line that decides, and whether any does."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from .. import tables
from ..physics.scales import EnergyScale
from .at import RARE, bell
from .energies import stated_ev

LOW_EV, LOW_WORTH = 110.0, 0.25  # below, nearly every heavy element has a line
RIVALRY = 5.0  # how much a rival of equal height and commonness one takes from a line
MOST_NAMED = 4


@dataclass(frozen=True, kw_only=True)
class CardRival:
    """A line of another element that could be taken for this one, and what tells the two apart."""

    element: str
    transition: str
    energy_ev: float
    relative_height: float
    decided_by: str | None  # line of the card's element clear of every strong one of the rival
    weakly_by: str | None  # the same among lines of 5 to 20 %
    ruled_out_by: str | None  # line of the rival clear of every strong one of the card's element


@dataclass(frozen=True, kw_only=True)
class Decider:
    """The line that decides whether the element is there, and why that one."""

    transition: str
    energy_ev: float
    why: str


@dataclass(frozen=True, kw_only=True)
class Decision:
    """Whether one scan decides on an element by the places of its lines."""

    deciding: Decider | None  # the clearest line, if there is any
    decided_by: str | None  # its transition; None when a rival that is met can cover every strong line
    beside: tuple[str, ...]  # those rivals, most often met first
    text: str


def rivals_by_line(symbol: str, scale: EnergyScale) -> dict[str, tuple[CardRival, ...]]:
    """Rivals of each strong line of an element, likeliest first."""
    grouped: dict[str, list[tuple[float, CardRival]]] = {}
    for row in tables.rivals_of(symbol):
        line = _line(row.rival, row.rival_transition)
        grouped.setdefault(row.transition, []).append((_threat(row, line), _card_rival(row, line, scale)))
    return {
        transition: tuple(rival for _, rival in sorted(pairs, key=lambda pair: -pair[0]))
        for transition, pairs in grouped.items()
    }


def decision_on(symbol: str, scale: EnergyScale) -> Decision:
    """Find the line that decides on an element, and the rivals beside which none does."""
    rows = tables.rivals_of(symbol)
    strong = [line for line in tables.lines_of(symbol) if line.relative_height >= tables.STRONG_HEIGHT]
    if not strong:
        return Decision(deciding=None, decided_by=None, beside=(), text="no line of it is in the tables")
    best = max(strong, key=lambda line: _clearness(line, rows))
    deciding = Decider(transition=best.transition, energy_ev=stated_ev(best, scale), why=_why(best, rows, scale))
    common = tables.commonness()
    covering = {row.rival: row for row in rows if not row.decided_by and common[row.rival] >= RARE}
    beside = tuple(sorted(covering, key=lambda rival: -common[rival]))
    if beside:
        text = _undecided([covering[rival] for rival in beside], scale)
        return Decision(deciding=deciding, decided_by=None, beside=beside, text=text)
    return Decision(deciding=deciding, decided_by=best.transition, beside=(), text=_decided(best, rows, scale))


def _line(symbol: str, transition: str) -> tables.Line:
    return next(line for line in tables.lines_of(symbol) if line.transition == transition)


def _card_rival(row: tables.Rival, line: tables.Line, scale: EnergyScale) -> CardRival:
    return CardRival(
        element=row.rival,
        transition=row.rival_transition,
        energy_ev=stated_ev(line, scale),
        relative_height=line.relative_height,
        decided_by=row.decided_by or None,
        weakly_by=row.weakly_by or None,
        ruled_out_by=row.ruled_out_by or None,
    )


def _threat(row: tables.Rival, line: tables.Line) -> float:
    """Height x nearness x commonness of a rival."""
    common = max(tables.commonness()[row.rival], RARE)
    return common * line.relative_height * bell(2.0 * row.away_ev / row.reach_ev)


def _clearness(line: tables.Line, rows: Iterable[tables.Rival]) -> float:
    """Height of a line, divided among it and its rivals."""
    mine = [row for row in rows if row.transition == line.transition]
    rivalry = sum(_threat(row, _line(row.rival, row.rival_transition)) for row in mine)
    worth = LOW_WORTH if line.energy_ev < LOW_EV else 1.0
    return worth * line.relative_height / (1.0 + RIVALRY * rivalry)


def _why(line: tables.Line, rows: Iterable[tables.Rival], scale: EnergyScale) -> str:
    mine = [(row, _line(row.rival, row.rival_transition)) for row in rows if row.transition == line.transition]
    if not mine:
        return "no strong line of another element is within reach"
    likeliest = sorted(mine, key=lambda pair: -_threat(*pair))
    names = ", ".join(f"{row.rival} {stated_ev(other, scale):.0f}" for row, other in likeliest[:MOST_NAMED])
    return f"the clearest of its lines, though {names} eV {'stand' if len(mine) > 1 else 'stands'} near"


def _decided(line: tables.Line, rows: Iterable[tables.Rival], scale: EnergyScale) -> str:
    """Say which line decides beside the rivals of the clearest one that are met."""
    common = tables.commonness()
    by_line: dict[str, list[str]] = {}
    for row in rows:
        if row.transition == line.transition and common[row.rival] >= RARE:
            by_line.setdefault(row.decided_by, []).append(row.rival)
    told = [
        f"beside {', '.join(sorted(rivals, key=lambda rival: -common[rival]))}: {transition} at "
        f"{stated_ev(_line(line.symbol, transition), scale):.0f} eV"
        for transition, rivals in by_line.items()
    ]
    no_rival = f"{line.transition} alone: nothing within reach of it is met on one surface in a hundred"
    return "; ".join(told) if told else no_rival


def _undecided(rows: list[tables.Rival], scale: EnergyScale) -> str:
    """Say beside which rivals no scan decides, what a weak line can do, and how the rivals are ruled out."""
    names = ", ".join(row.rival for row in rows)
    parts = [f"not by one scan beside {names}: each of its strong lines is within reach of one of theirs"]
    weak = dict.fromkeys((row.symbol, row.weakly_by) for row in rows if row.weakly_by)
    for symbol, transition in weak:
        line = _line(symbol, transition)
        beside = ", ".join(row.rival for row in rows if row.weakly_by == transition)
        depth = f"{100 * line.relative_height:.0f} % as deep"
        parts.append(f"its {transition} at {stated_ev(line, scale):.0f} eV ({depth}) is clear of {beside}")
    absent = [
        f"{row.rival} {stated_ev(_line(row.rival, row.ruled_out_by), scale):.0f}" for row in rows if row.ruled_out_by
    ]
    if absent:
        parts.append(f"a rival is ruled out when its own line is absent: {', '.join(absent)} eV")
    alike = [row.rival for row in rows if not row.ruled_out_by]
    if alike:
        parts.append(f"{', '.join(alike)} cannot be ruled out either")
    return "; ".join(parts)
