"""How much of each element there is, in atomic per cent, and how much of the absent ones would have been called.

Both take a homogeneous surface: every element's strength over its sensitivity, shared out over all that are there.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from .. import tables
from ..patterns import IntArray, tilted
from ..spectrum import FloatArray
from .evidence import AbundanceEvidence, LimitEvidence
from .options import ANCHOR_HEIGHT, LOW_LINE_EV, LOWEST_LINE_EV, low_alone_price, missing_price
from .posterior import TEMPERATURE
from .problem import Problem, aside_depth, unexplained_price
from .solve import Solution

STRENGTH_LOG_SIGMA = 0.35  # of a strength found on a few lines
EFFICIENCY = 0.7  # part of a line's ideal significance that the search of minima finds
SEEN = 4.0  # noise widths from which a line shows as a minimum
USUAL_COST = 1.3  # what a line that is met costs on average
RIVAL_REACH = 2.0  # standard deviations within which another element's line could stand for the same minimum
# From what is called in half of the cases to what is called in 95 of 100: found in simulation, larger at low energies,
# where rivals and shifts are many.
MARGIN, MARGIN_GROWS_BELOW_EV = 4.5, 300.0
STEPS, STEP = 24, 1.35
USUAL_LOG_ODDS = math.log(0.1)  # met on one technical surface in eleven or more
MOST_PERCENT, ABSENT_BELOW = 99.5, 0.05


def find_abundances(problem: Problem, solution: Solution) -> dict[int, AbundanceEvidence]:
    """Atomic per cent of every element of the best set, by its index; empty when nothing is there."""
    parts = _parts(problem, solution)
    total = sum(parts.values())
    names, known = problem.patterns.symbols, tables.sensitivities()
    return {
        element: AbundanceEvidence(
            atomic_percent=100.0 * part / total,
            factor=math.exp(math.hypot(math.log(known[names[element]].factor), STRENGTH_LOG_SIGMA)),
        )
        for element, part in parts.items()
    }


def _parts(problem: Problem, solution: Solution) -> dict[int, float]:
    """Strength over sensitivity of every element of the best set, its states added."""
    known, names = tables.sensitivities(), problem.patterns.symbols
    parts: dict[int, float] = {}
    for member in solution.members:
        element = int(solution.options.element[member])
        part = float(solution.options.strength[member]) / known[names[element]].sensitivity
        parts[element] = parts.get(element, 0.0) + part
    return parts


@dataclass(frozen=True, kw_only=True, eq=False)
class _Trials:
    """Every element tried at rising strengths; the lines of all that could be met, one after the other (n,)."""

    element: IntArray  # (n,)
    column: IntArray  # (n,) place of the line in its element's pattern
    place_ev: FloatArray  # (n,)
    height: FloatArray  # (n,)
    strength: FloatArray  # (e, s)
    depth: FloatArray  # (n, s)
    gain: FloatArray  # (n, s) what a minimum there would speak for its element


def find_limits(problem: Problem, solution: Solution, probability: FloatArray) -> tuple[LimitEvidence, ...]:
    """For every testable element that is not there: how much of it would have been called in 95 of 100 cases.

    The element's lines are laid over this spectrum's own noise and minima at rising strength until they speak for
    it more than its price, and more than for every rival whose line stands near and whose other lines would be
    hidden. Elements that no amount would settle are left out.
    """
    trials = _lay_over(problem, solution)
    called = _odds(problem, trials) > 0
    absent = problem.testable & (probability < ABSENT_BELOW) & np.any(called, axis=1)
    parts = sum(_parts(problem, solution).values())
    known, names = tables.sensitivities(), problem.patterns.symbols
    limits = []
    for element in np.flatnonzero(absent).tolist():
        at = int(np.argmax(called[element]))
        mine = np.flatnonzero(trials.element == element)
        place = float(trials.place_ev[mine[np.argmax(trials.gain[mine, at])]])
        margin = MARGIN * max(1.0, MARGIN_GROWS_BELOW_EV / place)
        own = margin * float(trials.strength[element, at]) / known[names[element]].sensitivity
        percent = 100.0 * own / (parts + own)
        if percent < MOST_PERCENT:
            usual = bool(problem.patterns.prior_log_odds[element] > USUAL_LOG_ODDS)
            limits.append(LimitEvidence(element=names[element], atomic_percent=percent, line_ev=place, usual=usual))
    return tuple(sorted(limits, key=lambda limit: limit.atomic_percent))


def _lay_over(problem: Problem, solution: Solution) -> _Trials:
    pattern, axis = problem.patterns, solution.axis
    every = pattern.energy_ev * (1.0 + axis.slope) + axis.offset_ev
    element, column = np.nonzero(pattern.real & pattern.firm & problem.in_range(every))
    place = every[element, column]
    height = tilted(pattern.height[element, column], pattern.energy_ev[element, column], axis.tilt)
    noise = problem.noise_at(place)
    least = np.full(len(pattern.symbols), np.inf)
    np.minimum.at(least, element, SEEN * noise / (EFFICIENCY * height))
    strength = np.where(np.isfinite(least), least, 0.0)[:, None] * STEP ** np.arange(STEPS)
    depth = strength[element] * height[:, None]
    significance = EFFICIENCY * depth / noise[:, None]
    aside = aside_depth(place, problem.energy_ev, problem.depth)
    price = unexplained_price(place[:, None], depth, significance, aside[:, None])
    seen = (depth > problem.hidden_at(place)[:, None]) & (significance > SEEN)
    return _Trials(
        element=element,
        column=column,
        place_ev=place,
        height=height,
        strength=strength,
        depth=depth,
        gain=np.where(seen, np.maximum(price - USUAL_COST, 0.0), 0.0),
    )


def _odds(problem: Problem, trials: _Trials) -> FloatArray:
    """Ln odds of each element at each strength (e, s), rivals weighed in."""
    gain = _summed(trials, trials.gain)
    above = [
        _summed(trials, trials.gain * (trials.place_ev > edge)[:, None]) > 0 for edge in (LOW_LINE_EV, LOWEST_LINE_EV)
    ]
    low_price = low_alone_price(problem.patterns.z[:, None], *above)
    against = gain - problem.element_price[:, None] - low_price
    weight = np.exp(-np.clip(against / TEMPERATURE, -30.0, 30.0))
    line, rival = _near(problem, trials)
    np.add.at(weight, trials.element[line], _rival_weights(problem, trials, gain, line, rival))
    odds: FloatArray = -np.log(weight)
    return odds


def _summed(trials: _Trials, values: FloatArray) -> FloatArray:
    """Sum over the lines of each element: (n, s) to (e, s)."""
    out = np.zeros(trials.strength.shape)
    np.add.at(out, trials.element, values)
    return out


def _near(problem: Problem, trials: _Trials) -> tuple[IntArray, IntArray]:
    """Pairs of lines of different elements, both strong, that one minimum could be."""
    pattern = problem.patterns
    strong = np.flatnonzero(pattern.height[trials.element, trials.column] >= ANCHOR_HEIGHT)
    place, element = trials.place_ev[strong], trials.element[strong]
    sigma = pattern.sigma_ev[element, trials.column[strong]]
    reach = RIVAL_REACH * np.hypot(sigma[:, None], sigma)
    one, two = np.nonzero((np.abs(place[:, None] - place) < reach) & (element[:, None] != element))
    return strong[one], strong[two]


def _rival_weights(problem: Problem, trials: _Trials, gain: FloatArray, line: IntArray, rival: IntArray) -> FloatArray:
    """Weight of each rival standing for one line of an element, whose other lines are left unexplained; (p, s)."""
    pattern = problem.patterns
    element, other = trials.element[line], trials.element[rival]
    sigma = np.hypot(pattern.sigma_ev[element, trials.column[line]], pattern.sigma_ev[other, trials.column[rival]])
    off = (trials.place_ev[line] - trials.place_ev[rival]) / sigma
    missing = np.zeros((line.size, STEPS))
    pair, theirs = np.nonzero((other[:, None] == trials.element) & (rival[:, None] != np.arange(trials.element.size)))
    depth = (trials.height[theirs] / trials.height[rival[pair]])[:, None] * trials.depth[line[pair]]
    where = np.broadcast_to(trials.place_ev[theirs][:, None], depth.shape)
    log_sigma = pattern.height_log_sigma[trials.element[theirs], trials.column[theirs]]
    np.add.at(missing, pair, missing_price(problem, where, depth, np.broadcast_to(log_sigma[:, None], depth.shape)))
    dearer = (problem.element_price[other] - problem.element_price[element] + 0.5 * off**2)[:, None]
    worse = dearer + missing + gain[element] - trials.gain[line]
    weights: FloatArray = np.where(trials.gain[line] > 0, np.exp(-np.clip(worse / TEMPERATURE, -30.0, 30.0)), 0.0)
    return weights
