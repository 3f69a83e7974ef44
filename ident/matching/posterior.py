"""From weighed hypotheses to a probability per element."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..spectrum import FloatArray
from .options import Options
from .problem import Problem
from .search import costs_with_each, total_cost

# Hypotheses differ in more than the costs know (shapes, unlisted lines), so odds are tempered; the
# temperature and the curve were fitted to the benchmark's tuning spectra: doubt is less than tempered odds say, but
# near certainty hardly, where a wrong word costs most.
TEMPERATURE = 1.6
CURVE_SLOPE, MOST_RISE = 1.35, 0.3


@dataclass(frozen=True, kw_only=True, eq=False)
class Posterior:
    """Log odds and probability of every element (e,), and the rivals that could replace each member."""

    log_odds: FloatArray
    probability: FloatArray
    best_option: FloatArray  # (e,) index of the element's best option given the others, -1 for none
    replacements: dict[int, tuple[tuple[int, float], ...]]  # member element -> (element, cost above the best set)


def weigh_sets(problem: Problem, options: Options, members: list[int], cost: float) -> Posterior:
    """Weigh the best set against all sets one change away: one out, one in, one exchanged.

    For a member, odds are the best set against every set without it; for another element, all sets with it
    against the best set. Costs are natural logs, divided by the temperature.
    """
    count = len(problem.patterns.symbols)
    with_it = np.zeros(count)  # weight of sets with the element, the best set weighing one
    without = np.full(count, 1.0)
    best_option = np.full(count, -1)
    best_cost = np.full(count, np.inf)
    replacements: dict[int, tuple[tuple[int, float], ...]] = {}
    joined = costs_with_each(problem, options, members)
    _note_best(options, joined, best_option, best_cost)
    for element, value in _lowest(options, joined):
        with_it[element] += _weight(value - cost)
    for element in dict.fromkeys(options.element[members].tolist()):
        member = next(m for m in members if options.element[m] == element)
        rest = [m for m in members if options.element[m] != element]
        out = total_cost(problem, options, rest)
        weight = _weight(out - cost)
        costs = costs_with_each(problem, options, rest)
        same = options.element == element
        exchanged = [(e, v) for e, v in _lowest(options, np.where(same, np.inf, costs)) if v < cost + 25.0]
        for other, value in exchanged:
            weight += _weight(value - cost)
            with_it[other] += _weight(value - cost)
        _note_best(options, np.where(same, np.inf, costs), best_option, best_cost)
        without[element] = weight
        best_option[element] = member
        replacements[element] = tuple(sorted(exchanged, key=lambda pair: pair[1])[:4])
    inside = np.isin(np.arange(count), options.element[members])
    odds = np.where(inside, -np.log(np.maximum(without, 1e-30)), np.log(np.maximum(with_it, 1e-30)))
    return Posterior(
        log_odds=odds,
        probability=1.0 / (1.0 + np.exp(-np.clip(np.minimum(CURVE_SLOPE * odds, odds + MOST_RISE), -60.0, 60.0))),
        best_option=best_option,
        replacements=replacements,
    )


def mix(posteriors: list[Posterior], costs: list[float]) -> FloatArray:
    """Probability of every element (e,) over several explanations, weighed by their costs."""
    weight = np.array([_weight(cost - min(costs)) for cost in costs])
    weight = weight / weight.sum()
    return np.sum([w * posterior.probability for w, posterior in zip(weight, posteriors, strict=True)], axis=0)


def _weight(above: float) -> float:
    return float(np.exp(-max(above, -30.0) / TEMPERATURE))


def _lowest(options: Options, costs: FloatArray) -> list[tuple[int, float]]:
    """Cheapest option of each element: element, cost."""
    out: dict[int, float] = {}
    for element, cost in zip(options.element.tolist(), costs.tolist(), strict=True):
        if cost < out.get(element, np.inf):
            out[element] = cost
    return list(out.items())


def _note_best(options: Options, costs: FloatArray, best_option: FloatArray, best_cost: FloatArray) -> None:
    for index in np.flatnonzero(np.isfinite(costs)):
        element = int(options.element[index])
        if costs[index] < best_cost[element]:
            best_cost[element], best_option[element] = costs[index], index
