"""Rules on the element as a whole: chemistry, commonness, rivals, how much it rests on."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import TYPE_CHECKING

from .reason import Rule, Side, Subject, Weighed
from .words import joined, times

if TYPE_CHECKING:
    from ..matching.evidence import ElementEvidence, RivalEvidence, StateEvidence

LARGE_SHIFT_EV = 5.0
MOST_LOG_ODDS = 12.0
MOST_ODDS = 6.9  # a thousand to one, natural log
MOST_RIVALS = 2
LEAST_TOLD = 0.01  # probability below which a rival is none
LEAST_STATE_ODDS = 1.1  # three to one, natural log
RARE_LOG_ODDS = -4.6  # one surface in a hundred
SURE, CALLED = 0.95, 0.5


def state_to_tell(element: ElementEvidence) -> StateEvidence | None:
    """Give the state of an element that is called, when it beats the next three to one or two are there at once."""
    state = element.state
    if (
        state is None
        or element.probability < CALLED
        or (state.log_odds < LEAST_STATE_ODDS and state.second_name is None)
    ):
        return None
    return state


class ShiftFitsState(Rule):
    """The lines stand where they do in a known chemical state."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        state = state_to_tell(subject.element)
        if state is None:
            return
        if state.second_name is not None:
            yield 1.0, f"it stands there in two states at once: as {_shifted(state)} and as {_second(state)}"
            return
        over = f", {_odds(state.log_odds)} over {state.next_name}" if state.next_name else ""
        seen = f"shifted by {state.seen_ev:+.1f} +- {state.seen_sigma_ev:.1f} eV"
        if state.reference:
            yield 0.3, f"its lines stand where they do in the state '{state.name}' ({seen}{over})"
        else:
            yield state.log_odds, f"its lines are {seen}; {state.name} shifts them by {state.shift_ev:+.1f} eV{over}"


class StatesAlike(Rule):
    """The lines are shifted, and two known chemical states fit that alike."""

    side: Side = "untested"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        state = subject.element.state
        if state is None or subject.element.probability < CALLED or state_to_tell(subject.element) is not None:
            return
        if state.over_reference < LEAST_STATE_ODDS:
            return
        yield (
            0.4,
            f"its lines are shifted by {state.seen_ev:+.1f} +- {state.seen_sigma_ev:.1f} eV, which fits {state.name} "
            f"and {state.next_name} ({_odds(state.log_odds)})",
        )


class ShiftLarge(Rule):
    """The lines must be shifted far, and no tabulated state does that."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        element = subject.element
        if state_to_tell(element) is None and abs(element.shift_ev) >= LARGE_SHIFT_EV:
            yield (
                0.3 * abs(element.shift_ev),
                f"needs a chemical shift of {element.shift_ev:+.1f} eV, and no state in the tables gives that",
            )


class CommonOnSurfaces(Rule):
    """The element is on nearly every surface that has seen air."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        if subject.element.common:
            odds = subject.element.prior_log_odds
            told = f" (odds {times(math.exp(odds))} to 1 before looking)" if 0 < odds < MOST_LOG_ODDS else ""
            yield max(0.1, odds), f"found on nearly every surface that has seen air{told}"


class SputterGas(Rule):
    """The surface was sputtered with the element, and some of it stays."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        if subject.element.sputter_gas:
            yield 1.0, "the surface was sputtered with it, which leaves some of it implanted: it need not be the part's"


class RareOnSurfaces(Rule):
    """The element is seldom met, so that it takes more to believe it."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        odds = subject.element.prior_log_odds
        if odds < RARE_LOG_ODDS:
            told = f"odds 1 to {math.exp(-max(odds, -MOST_LOG_ODDS)):.0f} before looking"
            yield 0.3 * abs(odds), f"seldom met on technical surfaces ({told}), so it takes more evidence than most"


class OneLowLine(Rule):
    """The element rests on one line below 110 eV, where nearly every heavy element has one."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        if subject.element.single_low_line and subject.met:
            found = subject.met[0].found_ev or subject.met[0].expected_ev
            yield 2.0, f"rests on one line at {found:.0f} eV alone; below 110 eV many elements have one"


class RestsOnOneLine(Rule):
    """One line alone speaks for the element."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        if len(subject.met) == 1 and not subject.element.single_low_line and len(subject.element.lines) > 1:
            line = subject.met[0]
            yield 0.8, f"one line alone speaks for it ({line.transition} at {line.found_ev or line.expected_ev:.0f} eV)"


class RivalLessLikely(Rule):
    """Another element could stand at one of the minima, but what it needs besides is not there."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        for rival in subject.element.rivals[:MOST_RIVALS]:
            if _refuted(rival) and rival.probability < subject.element.probability:
                why = f"but {_lacks(rival.missing)}" if rival.missing else "but nothing else supports it"
                yield 0.6, f"{rival.element} {rival.transition} could stand at {rival.at_ev:.1f} eV, {why}"


class RivalOpen(Rule):
    """Another element could stand at one of the minima too, though it is less likely."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        for rival in subject.element.rivals[:MOST_RIVALS]:
            if not _refuted(rival) and rival.probability < subject.element.probability:
                yield (
                    rival.probability,
                    f"{rival.element} {rival.transition} could stand at {rival.at_ev:.1f} eV instead or as well "
                    f"(probability {rival.probability:.2f})",
                )


class RivalLikelier(Rule):
    """Another element explains one of the minima better."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        for rival in subject.element.rivals:
            if rival.probability >= subject.element.probability and subject.element.probability < SURE:
                yield (
                    1.5,
                    f"{rival.element} {rival.transition} explains {rival.at_ev:.1f} eV as well or better "
                    f"(probability {rival.probability:.2f})",
                )


class OnlyCandidate(Rule):
    """No other element in the tables explains the strongest of these minima as well."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        own = subject.own
        if own and not subject.element.rivals and subject.element.probability >= 0.5 and own[0].found_ev is not None:
            yield 0.5, f"no other element explains the minimum at {own[0].found_ev:.1f} eV as well"


class CannotBeSeparated(Rule):
    """The scan cannot tell the element from another one."""

    side: Side = "untested"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        symbol = subject.element.element
        for pair in subject.evidence.inseparable:
            if symbol in pair.elements:
                others = joined([element for element in pair.elements if element != symbol], last="or")
                yield 1.2, f"at {pair.at_ev:.1f} eV this scan cannot tell it from {others}"


def _odds(log_odds: float) -> str:
    return f"odds {times(math.exp(log_odds))} to 1" if log_odds < MOST_ODDS else "odds beyond 1000 to 1"


def _shifted(state: StateEvidence) -> str:
    return state.name if state.reference else f"{state.name} ({state.shift_ev:+.1f} eV)"


def _second(state: StateEvidence) -> str:
    return f"{state.second_name} ({state.second_shift_ev or 0.0:+.1f} eV)"


def _refuted(rival: RivalEvidence) -> bool:
    """Whether a line that the rival must show is missing, or nothing speaks for it at all."""
    return bool(rival.missing) or rival.probability < LEAST_TOLD


def _lacks(missing: tuple[tuple[str, float, float], ...]) -> str:
    transition, energy_ev, strength = missing[0]
    return f"then {energy_ev:.0f} eV ({transition}) would be {times(strength)} times the noise, and is not there"


WHOLE_RULES: tuple[type[Rule], ...] = (
    ShiftFitsState,
    StatesAlike,
    ShiftLarge,
    CommonOnSurfaces,
    SputterGas,
    RareOnSurfaces,
    OneLowLine,
    RestsOnOneLine,
    RivalLessLikely,
    RivalOpen,
    RivalLikelier,
    OnlyCandidate,
    CannotBeSeparated,
)
