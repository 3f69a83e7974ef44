"""Questions put to the tables alone, without a spectrum: what could be at an energy, and the card of an element.

Energies here are on the handbook scale, the one analysts know (Ti 418, Fe 651, Al 1396). Neither this module nor
what it imports loads numpy: such a question should cost next to nothing.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import asdict, dataclass
from functools import lru_cache
from typing import Literal

from . import tables
from .errors import SettingError
from .names import name_of, symbol_from_name
from .physics.levels import handbook_from_fermi
from .reasons.reason import Reason

AXIS_SIGMA_EV = 3.0  # how far axes of real instruments stand from the tables
SHIFTED_WEIGHT = 0.3  # a line that needs a chemical shift, against one that does not
LEAST_WEIGHT = 0.005  # of the whole
HANDLED_ONLY = 0.001  # below: elements met only where they are handled, such as astatine
RARE = 0.01  # no element counts as rarer than that: a lookup is asked about odd things too
LIMITS_EV = (10.0, 3500.0)
CLEARLY_DEEPER = 1.3  # heights are known to about 30 % at best
NEEDED_HEIGHT = 0.4  # against the line looked up, from which another line must be seen
MOST_NEEDED = 4
RIVAL_REACH_EV = 8.0
RIVAL_HEIGHT = 0.15
SHOWN_HEIGHT = 0.02
LOOKUP_CODES = ("line-near", "needs-shift", "common-on-surfaces", "minor-line", "no-second-line")


@dataclass(frozen=True, kw_only=True)
class Need:
    """Another line of the element that must then be seen."""

    transition: str
    energy_ev: float
    relative_height: float  # of the strongest line of the element


@dataclass(frozen=True, kw_only=True)
class Candidate:
    """An element that could explain a minimum at an energy."""

    element: str
    transition: str
    expected_ev: float  # handbook scale
    sigma_ev: float  # of the line's energy, without the axis
    deviation_ev: float  # given minus expected
    relative_height: float
    weight: float  # part of 1 over all candidates
    needs: tuple[Need, ...]
    reasons: tuple[Reason, ...]


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
    energy_ev: float  # handbook scale, derivative minimum
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
    reference: Literal["handbook"] = "handbook"
    lines: tuple[CardLine, ...]  # strongest first
    deciding: Decider | None
    shifts: tuple[CardShift, ...]
    sources: tuple[CardSource, ...]
    untestable: str | None  # why no line can be given, if none can


def candidates_at(energy_ev: float, *, within: float | None = None) -> tuple[Candidate, ...]:
    """Find the elements that could explain a minimum, likeliest first.

    Parameters
    ----------
    energy_ev : float
        Energy of the derivative minimum in eV, on the handbook scale.
    within : float, optional
        Only lines at most this many eV away. By default as far as axis errors and chemical shifts reach.

    Returns
    -------
    tuple of Candidate
        One per element, with the best of its lines. The weight is height x nearness x commonness, scaled to 1
        over all candidates; it ranks, and is no probability.

    Raises
    ------
    SettingError
        When the energy is not between 10 and 3500 eV, or `within` is not positive.
    """
    if not (math.isfinite(energy_ev) and LIMITS_EV[0] <= energy_ev <= LIMITS_EV[1]):
        raise SettingError(f"{energy_ev:g} eV is outside the tables; kinetic energies of {_limits()} can be looked up")
    if within is not None and not within > 0:
        raise SettingError(f"within {within:g} eV is no reach; give a positive number of eV")
    best: dict[str, tuple[float, tables.Line]] = {}
    for line in tables.read_lines():
        deviation = energy_ev - handbook_ev(line)
        if within is not None and abs(deviation) > within:
            continue
        weight = _weight(line, deviation)
        if weight > best.get(line.symbol, (0.0, line))[0]:
            best[line.symbol] = (weight, line)
    total = sum(weight for weight, _ in best.values())
    ranked = sorted(best.values(), key=lambda pair: -pair[0])
    return tuple(_candidate(energy_ev, line, w / total) for w, line in ranked if w >= LEAST_WEIGHT * total)


def element_card(name: str) -> ElementCard:
    """Put the reference card of an element together.

    Parameters
    ----------
    name : str
        Symbol or name; small misspellings are forgiven.

    Raises
    ------
    UnknownNameError
        When the name is that of no element.
    """
    symbol = symbol_from_name(name)
    lines = sorted(tables.lines_of(symbol), key=lambda line: -line.relative_height)
    shown = tuple(_card_line(line) for line in lines if line.relative_height >= SHOWN_HEIGHT)
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


@lru_cache(maxsize=8192)
def _handbook(energy_ev: float) -> float:
    return float(handbook_from_fermi(energy_ev))


def handbook_ev(line: tables.Line) -> float:
    """Energy of a line on the handbook scale, eV."""
    return _handbook(line.energy_ev)


def _limits() -> str:
    return f"{LIMITS_EV[0]:.0f} to {LIMITS_EV[1]:.0f} eV"


def _weight(line: tables.Line, deviation_ev: float) -> float:
    """Height x nearness x commonness; chemistry may move a line, at a price."""
    sigma = math.hypot(line.sigma_ev, AXIS_SIGMA_EV)
    low, high = tables.shift_range(line.symbol, line.valence)
    beyond = max(low - deviation_ev, deviation_ev - high, 0.0)
    near = max(_bell(deviation_ev / sigma), SHIFTED_WEIGHT * _bell(beyond / sigma))
    return line.relative_height * near * max(tables.commonness().get(line.symbol, 0.0), RARE)


def _bell(deviations: float) -> float:
    return math.exp(-0.5 * deviations**2)


def _candidate(energy_ev: float, line: tables.Line, weight: float) -> Candidate:
    expected = handbook_ev(line)
    deviation = energy_ev - expected
    needs = _needs(line)
    return Candidate(
        element=line.symbol,
        transition=line.transition,
        expected_ev=expected,
        sigma_ev=line.sigma_ev,
        deviation_ev=deviation,
        relative_height=line.relative_height,
        weight=weight,
        needs=needs,
        reasons=tuple(_reasons(line, expected, deviation, needs)),
    )


def _needs(line: tables.Line) -> tuple[Need, ...]:
    others = sorted(tables.lines_of(line.symbol), key=lambda other: -other.relative_height)
    least = NEEDED_HEIGHT * line.relative_height
    needed = [other for other in others if other is not line and other.relative_height >= least]
    return tuple(
        Need(transition=n.transition, energy_ev=handbook_ev(n), relative_height=n.relative_height)
        for n in needed[:MOST_NEEDED]
        if n.transition != line.transition
    )


def _reasons(line: tables.Line, expected: float, deviation: float, needs: tuple[Need, ...]) -> Iterable[Reason]:
    sigma = math.hypot(line.sigma_ev, AXIS_SIGMA_EV)
    off = abs(deviation) / sigma
    told = f"{line.transition} stands at {expected:.0f} eV, {off:.1f} sd away (axis of {AXIS_SIGMA_EV:g} eV included)"
    if off <= 2.0:
        yield Reason(code="line-near", side="for", text=told)
    else:
        yield Reason(code="needs-shift", side="against", text=f"{told}: needs a shift of {deviation:+.0f} eV")
    common = tables.commonness().get(line.symbol, 0.0)
    if common >= 0.5:
        yield Reason(code="common-on-surfaces", side="for", text="found on nearly every surface that has seen air")
    if needs and needs[0].relative_height > CLEARLY_DEEPER * line.relative_height:
        text = (
            f"not its strongest line: {needs[0].transition} at {needs[0].energy_ev:.0f} eV is "
            f"{needs[0].relative_height / line.relative_height:.1f} times as deep"
        )
        yield Reason(code="minor-line", side="against", text=text)
    if not needs:
        yield Reason(code="no-second-line", side="untested", text="has no second line of this strength to confirm it")


def _card_line(line: tables.Line) -> CardLine:
    return CardLine(
        transition=line.transition,
        energy_ev=handbook_ev(line),
        sigma_ev=line.sigma_ev,
        energy_kind=line.energy_kind,
        relative_height=line.relative_height,
        height_kind=line.height_kind,
        state=line.state,
        source=line.source,
        rivals=_rivals(line),
    )


def _rivals(line: tables.Line) -> tuple[CardRival, ...]:
    """Lines of other elements within reach, those most often met first, one an element."""
    common = tables.commonness()
    near: dict[str, tuple[float, tables.Line]] = {}
    for other in tables.read_lines():
        away = abs(other.energy_ev - line.energy_ev)
        if other.symbol == line.symbol or away > RIVAL_REACH_EV or other.relative_height < RIVAL_HEIGHT:
            continue
        if common.get(other.symbol, 0.0) < HANDLED_ONLY:
            continue
        weight = other.relative_height * _bell(away / AXIS_SIGMA_EV) * max(common.get(other.symbol, 0.0), RARE)
        if weight > near.get(other.symbol, (0.0, other))[0]:
            near[other.symbol] = (weight, other)
    ranked = sorted(near.values(), key=lambda pair: -pair[0])[:MOST_NEEDED]
    return tuple(
        CardRival(
            element=other.symbol,
            transition=other.transition,
            energy_ev=handbook_ev(other),
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


def at_answer(energy_ev: float, candidates: tuple[Candidate, ...]) -> dict[str, object]:
    """Give the answer to `ident at` as plain data for JSON."""
    return {
        "energy_ev": energy_ev,
        "reference": "handbook",
        "edition": tables.edition(),
        "candidates": [_plain(candidate) for candidate in candidates],
    }


def card_answer(card: ElementCard) -> dict[str, object]:
    """Give the answer to `ident element` as plain data for JSON."""
    return {**_plain(card), "edition": tables.edition()}


def _plain(record: Candidate | ElementCard) -> dict[str, object]:
    return asdict(record, dict_factory=_rounded)


def _rounded(pairs: list[tuple[str, object]]) -> dict[str, object]:
    """Keep six digits; no more are known."""
    return {key: float(f"{value:.6g}") if isinstance(value, float) else value for key, value in pairs}
