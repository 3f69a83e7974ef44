"""Search over element sets: add what gains most, then let every member be exchanged, until nothing gains."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..spectrum import FloatArray
from .losses import plasmon_cost
from .options import Options
from .problem import Problem

OVERSHOOT_CAP = 5.0
MOST_MEMBERS = 18
HEIGHT_FLOOR = 0.4
SURE_GAIN = 8.0
# Heavy elements have weak lines below 400 eV that are in no table (common practice, no source).
UNLISTED_ABOVE_Z, UNLISTED_EV = 36, (40.0, 400.0)
UNLISTED_PRICE, UNLISTED_PART, UNLISTED_LOG_SIGMA = 3.2, 0.1, 0.5
SECOND_STATE_PRICE, STATES_APART_EV = 2.0, 3.0  # an element and its oxide at the same time


@dataclass(frozen=True, kw_only=True, eq=False)
class Sums:
    """What sets of options predict at each minimum, (4, f) or (4, o, f): depth, and depth times three things.

    Those are the deviation in standard deviations, the log-sigma of the height, and how much less a line says than a
    published one of the right width would.
    """

    predicted: FloatArray

    @property
    def depth(self) -> FloatArray:
        """Predicted depth, (f,) or (o, f)."""
        return self.predicted[0]

    def plus(self, options: Options) -> Sums:
        """The same with each option added in turn."""
        return Sums(predicted=self.predicted[:, None, :] + options.predicted)


def minimum_costs(problem: Problem, sums: Sums) -> FloatArray:
    """Cost of every minimum under a prediction: how far off, how deep against expected, at most unexplained."""
    met = sums.depth > 0
    depth = np.where(met, sums.depth, problem.depth)
    off, spread, loose = sums.predicted[1:] / depth
    ratio = np.log(problem.depth / depth) / np.maximum(spread, HEIGHT_FLOOR)
    cost = 0.5 * off * off + np.minimum(0.5 * ratio * ratio, OVERSHOOT_CAP) + loose
    price = problem.price
    # deeper than predicted: the rest may be something else's, so it never costs more than the unexplained
    most = price + np.where(ratio > 0, 0.0, OVERSHOOT_CAP)
    return np.where(met, np.minimum(cost, most), price)


def left_over(problem: Problem, sums: Sums) -> NDArray[np.bool_]:
    """Which minima no element of a set explains better than nothing would, (f,)."""
    left: NDArray[np.bool_] = minimum_costs(problem, sums) >= problem.price - 0.5
    return left


def empty_sums(problem: Problem) -> Sums:
    """The prediction of no element at all."""
    return Sums(predicted=np.zeros((4, problem.energy_ev.size)))


def alone(problem: Problem, options: Options) -> FloatArray:
    """What each option gains by itself over explaining nothing, (o,)."""
    sums = empty_sums(problem).plus(options)
    return float(np.sum(problem.price)) - np.sum(minimum_costs(problem, sums), axis=1) - options.price


def sums_of(problem: Problem, options: Options, members: list[int]) -> Sums:
    """What the members predict together."""
    if not members:
        return empty_sums(problem)
    return Sums(predicted=options.predicted[:, members].sum(axis=1))


def total_cost(problem: Problem, options: Options, members: list[int]) -> float:
    """Cost of a set of options, natural log units."""
    return float(np.sum(minimum_costs(problem, sums_of(problem, options, members))) + np.sum(options.price[members]))


def costs_with_each(problem: Problem, options: Options, members: list[int]) -> FloatArray:
    """Cost of the set with each option added, (o,); an element already there may come once more in another state."""
    sums = sums_of(problem, options, members).plus(options)
    cost = np.sum(minimum_costs(problem, sums), axis=1) + options.price + float(np.sum(options.price[members]))
    return cost + _again_price(problem, options, members)


def _again_price(problem: Problem, options: Options, members: list[int]) -> FloatArray:
    """What it costs more that an element is in the set already: it may be there in a second state, once."""
    size = problem.element_price.size
    count = np.bincount(options.element[members], minlength=size)
    there = np.zeros(size)
    there[options.element[members]] = options.shift_valence_ev[members]
    apart = np.abs(options.shift_valence_ev - there[options.element]) > STATES_APART_EV
    again = SECOND_STATE_PRICE - problem.element_price[options.element]
    times = count[options.element]
    return np.where(times == 0, 0.0, np.where((times == 1) & apart, again, np.inf))


def with_known_minors(problem: Problem, options: Options, members: list[int]) -> Problem:
    """The problem with minima made cheap where derived lines of the surest members stand.

    A sure element brings its whole pattern with it, the lines that no list of published ones holds included; what
    stands there asks for no further element. An element that is not sure gains nothing by such lines.
    """
    cost = total_cost(problem, options, members)
    price = problem.price
    for member in members:
        rest = [m for m in members if m != member]
        if total_cost(problem, options, rest) - cost > SURE_GAIN:
            price = np.minimum(price, np.minimum(options.soft[member], _unlisted_cost(problem, options, member)))
            price = np.minimum(price, plasmon_cost(problem, options, member))
    return replace(problem, price=price)


def _unlisted_cost(problem: Problem, options: Options, member: int) -> FloatArray:
    """What a minimum costs as a weak line of a heavy element that no table has, (f,); there are a few of them each."""
    if problem.patterns.z[options.element[member]] <= UNLISTED_ABOVE_Z:
        return np.full(problem.energy_ev.size, np.inf)
    usual = UNLISTED_PART * float(np.max(options.depth[member], initial=0.0))
    over = np.log(np.maximum(problem.depth / max(usual, 1e-300), 1.0)) / UNLISTED_LOG_SIGMA
    inside = (problem.energy_ev > UNLISTED_EV[0]) & (problem.energy_ev < UNLISTED_EV[1])
    return np.where(inside, UNLISTED_PRICE + 0.5 * over**2, np.inf)


def search(problem: Problem, options: Options, *, passes: int = 3) -> tuple[list[int], float]:
    """Best set of options found, as indices, and its cost."""
    members: list[int] = []
    cost = total_cost(problem, options, members)
    if not options.element.size:
        return members, cost
    members, cost = _grow(problem, options, members, cost)
    for _ in range(passes):
        members, better = _exchange(problem, options, members, cost)
        members, better = _grow(problem, options, members, better)
        if better > cost - 1e-6:
            break
        cost = better
    return members, cost


def _grow(problem: Problem, options: Options, members: list[int], cost: float) -> tuple[list[int], float]:
    while len(members) < MOST_MEMBERS:
        costs = costs_with_each(problem, options, members)
        best = int(np.argmin(costs))
        if not costs[best] < cost - 1e-6:
            break
        members, cost = [*members, best], float(costs[best])
    return members, cost


def _exchange(problem: Problem, options: Options, members: list[int], cost: float) -> tuple[list[int], float]:
    """Take each member out in turn and put the best of everything, or nothing, in its place."""
    for member in list(members):
        rest = [m for m in members if m != member]
        without = total_cost(problem, options, rest)
        costs = costs_with_each(problem, options, rest)
        best = int(np.argmin(costs))
        if min(without, costs[best]) < cost - 1e-6:
            members, cost = (rest, without) if without <= costs[best] else ([*rest, best], float(costs[best]))
    return members, cost
