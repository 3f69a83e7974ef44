"""Chemical states: which one the places of an element's lines speak for, and how strongly over the next."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .. import tables
from ..spectrum import FloatArray
from .context import Context
from .evidence import StateEvidence
from .solve import LEAST_SHARE

# Core lines, then valence lines. Where a state's own shift of a class is not in the tables, chemistry may do this much.
UNKNOWN_SIGMA_EV = (4.0, 7.0)
REFERENCE_SIGMA_EV = (0.8, 1.2)  # the state of the lines' own energies, from sample to sample
LINE_SIGMA_EV = 1.0  # errors of an element's handbook lines that its lines share, so that more lines do not help
OTHER_PRIOR = 0.3  # that it is a state of which no shift is tabulated, beside one that has
LONELY_PRIOR = 0.1  # for a state whose partner is not on the surface
PARTNER_FROM, TRIED_FROM = 0.3, 0.02  # probabilities of the partner
FAR_SD = 3.0  # a state whose shift is this far off what is seen is not one to name


@dataclass(frozen=True, kw_only=True)
class State:
    """What a state says of the shift of core and valence lines, (2,) each, in eV; its partner's symbol or nothing."""

    name: str
    shift_ev: FloatArray
    sigma_ev: FloatArray
    partner: str
    known: NDArray[np.bool_]  # whether the tables have the class


@dataclass(frozen=True, kw_only=True)
class Seen:
    """Where an element's lines stand against its tabulated state: core and valence, (2,), and their covariance."""

    there: NDArray[np.bool_]
    deviation_ev: FloatArray
    covariance: FloatArray


def states_of(symbol: str) -> tuple[State, ...]:
    """States of an element: the one that its lines' energies refer to, then those with known or expected shifts."""
    rows: dict[str, list[tables.ChemicalShift]] = {}
    for row in tables.chemical_shifts(symbol):
        rows.setdefault(row.state, []).append(row)
    lines = tables.lines_of(symbol)
    reference = State(
        name=lines[0].state if lines else "element",
        shift_ev=np.zeros(2),
        sigma_ev=np.array(REFERENCE_SIGMA_EV),
        partner="",
        known=np.ones(2, dtype=bool),
    )
    if not rows:
        return (reference, *_estimated(symbol))
    return (reference, *(_state(name, members) for name, members in rows.items()))


def _estimated(symbol: str) -> Iterator[State]:
    """States of an element of which no shift is known, one a class of compounds, from electronegativities."""
    rows: dict[str, list[tables.ShiftPrior]] = {}
    for row in tables.shift_priors(symbol):
        rows.setdefault(row.state_class, []).append(row)
    for name, members in rows.items():
        shift, sigma, known = np.zeros(2), np.array(UNKNOWN_SIGMA_EV), np.zeros(2, dtype=bool)
        for place in {int(row.valence) for row in members}:
            own = [row for row in members if int(row.valence) == place]
            shifts = [row.shift_ev for row in own]
            shift[place], known[place] = float(np.mean(shifts)), True
            sigma[place] = math.hypot(own[0].sigma_ev, float(np.std(shifts)))
        yield State(name=f"{name} (estimated)", shift_ev=shift, sigma_ev=sigma, partner=members[0].partner, known=known)


def _state(name: str, rows: Sequence[tables.ChemicalShift]) -> State:
    shift, sigma, known = np.zeros(2), np.array(UNKNOWN_SIGMA_EV), np.zeros(2, dtype=bool)
    for place in (0, 1):
        own = [row for row in rows if int(row.valence) == place]
        if own:
            shift[place] = float(np.mean([row.shift_ev for row in own]))
            sigma[place] = float(np.mean([row.sigma_ev for row in own]))
            known[place] = True
    return State(name=name, shift_ev=shift, sigma_ev=sigma, partner=rows[0].partner, known=known)


def weigh_states(context: Context, element: int, own: list[int]) -> StateEvidence | None:
    """State of an element from its options in the set, two when it stands there in two states at once."""
    symbol = context.problem.patterns.symbols[element]
    states = states_of(symbol)
    if len(states) < 2:
        return None
    told = [state for index in own if (state := _weigh(context, element, index, states)) is not None]
    if not told:
        return None
    first, second = told[0], next((other for other in told[1:] if other.name != told[0].name), None)
    if second is None:
        return first
    return StateEvidence(
        name=first.name,
        shift_ev=first.shift_ev,
        next_name=first.next_name,
        log_odds=first.log_odds,
        over_reference=first.over_reference,
        second_name=second.name,
        second_shift_ev=second.shift_ev,
    )


def _weigh(context: Context, element: int, index: int, states: tuple[State, ...]) -> StateEvidence | None:
    seen = _seen(context, element, index)
    if not np.any(seen.there):
        return None
    weights = np.array([_log_evidence(seen, state) + math.log(_prior(context, state)) for state in states])
    wide = State(
        name="", shift_ev=np.zeros(2), sigma_ev=np.array(UNKNOWN_SIGMA_EV), partner="", known=np.ones(2, dtype=bool)
    )
    other = _log_evidence(seen, wide) + math.log(OTHER_PRIOR)
    order = np.argsort(-weights)
    best = states[order[0]]
    place = 1 if seen.there[1] and best.known[1] else 0
    if weights[order[0]] < other or not seen.there[place] or _off_sd(seen, best, place) > FAR_SD:
        return None
    return StateEvidence(
        name=best.name,
        shift_ev=float(best.shift_ev[place]),
        next_name=states[order[1]].name,
        log_odds=float(weights[order[0]] - weights[order[1]]),
        over_reference=float(weights[order[0]] - weights[0]),
        reference=bool(order[0] == 0),
        seen_ev=float(seen.deviation_ev[place]),
        seen_sigma_ev=math.sqrt(float(seen.covariance[place, place])),
    )


def _off_sd(seen: Seen, state: State, place: int) -> float:
    away = float(seen.deviation_ev[place] - state.shift_ev[place])
    return abs(away) / math.hypot(float(state.sigma_ev[place]), math.sqrt(float(seen.covariance[place, place])))


def _prior(context: Context, state: State) -> float:
    """How likely a state is before its shift is looked at: an oxide on a surface without oxygen hardly is one."""
    names = context.problem.patterns.symbols
    if state.partner not in names:
        return 1.0
    element = names.index(state.partner)
    pattern, problem = context.problem.patterns, context.problem
    strongest = int(np.argmax(np.where(pattern.real[element], pattern.height[element], -1.0)))
    if not bool(problem.in_range(pattern.energy_ev[element, strongest])):
        return 1.0
    probability = float(context.posterior.probability[element])
    if probability >= PARTNER_FROM:
        return 1.0
    return LONELY_PRIOR + (1.0 - LONELY_PRIOR) * max(0.0, probability - TRIED_FROM) / PARTNER_FROM


def _seen(context: Context, element: int, index: int) -> Seen:
    """Mean deviations of the element's met lines, by class, with what the axis leaves open common to both."""
    problem, options, fit = context.problem, context.options, context.solution.fit
    pattern = problem.patterns
    met = options.met[index]
    own = (met >= 0) & (options.depth[index, met] >= LEAST_SHARE * context.sums.depth[met]) & pattern.firm[element]
    there, deviation = np.zeros(2, dtype=bool), np.zeros(2)
    variance, energy = np.ones(2), np.ones(2)
    for place in (0, 1):
        columns = np.flatnonzero(own & (pattern.valence[element] == bool(place)))
        if columns.size == 0:
            continue
        absolute, minimum = pattern.energy_ev[element, columns], met[columns]
        weight = 1.0 / (pattern.sigma_ev[element, columns] ** 2 + problem.sigma_ev[minimum] ** 2)
        off = problem.energy_ev[minimum] - absolute * (1.0 + fit.slope) - fit.offset_ev
        there[place], deviation[place] = True, np.average(off, weights=weight)
        variance[place] = 1.0 / np.sum(weight) + LINE_SIGMA_EV**2
        energy[place] = np.average(absolute, weights=weight)
    lever = np.stack([np.ones(2), energy], axis=1)
    return Seen(there=there, deviation_ev=deviation, covariance=lever @ fit.covariance @ lever.T + np.diag(variance))


def _log_evidence(seen: Seen, state: State) -> float:
    """Natural log of the density of what is seen in this state."""
    keep = seen.there
    off = (seen.deviation_ev - state.shift_ev)[keep]
    spread = (seen.covariance + np.diag(state.sigma_ev**2))[np.ix_(keep, keep)]
    _, volume = np.linalg.slogdet(2.0 * math.pi * spread)
    return float(-0.5 * (off @ np.linalg.solve(spread, off) + volume))
