"""Weigh element sets against the minima of a spectrum; numbers in, numbers out."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from ..minima import Analysis
from .evidence import Evidence
from .settings import Settings

if TYPE_CHECKING:
    from .solve import Solution

__all__ = ["Evidence", "Settings", "weigh"]

# A sample that nobody called an insulator may charge all the same: tried when much is left unexplained, at this price.
MUCH_UNEXPLAINED, CHARGING_PRICE, WORTH_EXPLAINING = 12.0, 5.0, 5.0


def weigh(analysis: Analysis, settings: Settings) -> Evidence:
    """Weigh element sets against the minima of an analysed spectrum."""
    from .assemble import assemble
    from .posterior import mix, weigh_sets
    from .search import total_cost

    solutions = _solutions(analysis, settings)
    posteriors = []
    for solution in solutions:
        cost = total_cost(solution.problem, solution.options, solution.members)
        posteriors.append(weigh_sets(solution.problem, solution.options, solution.members, cost))
    mixed = mix(posteriors, [solution.cost for solution in solutions])
    evidence = assemble(solutions[0].problem, solutions[0], replace(posteriors[0], probability=mixed))
    if evidence.scale.charging == "no" and _unexplained(solutions[0]) >= MUCH_UNEXPLAINED:
        return replace(evidence, scale=replace(evidence.scale, charging="cannot tell"))
    return evidence


def _solutions(analysis: Analysis, settings: Settings) -> list[Solution]:
    """Explanations, cheapest first; on an axis moved far by charging where the usual one leaves much unexplained."""
    from .problem import pose
    from .solve import solve

    usual = solve(pose(analysis, settings))
    if settings.insulator or _unexplained(usual[0]) < MUCH_UNEXPLAINED:
        return usual
    charged = solve(pose(analysis, replace(settings, insulator=True)))
    return charged if charged[0].cost + CHARGING_PRICE < usual[0].cost else usual


def _unexplained(solution: Solution) -> float:
    """What the strong minima cost that no element explains."""
    from .search import left_over, minimum_costs, sums_of

    problem = solution.problem
    sums = sums_of(problem, solution.options, solution.members)
    left = left_over(problem, sums) & (problem.price > WORTH_EXPLAINING)
    return float(np.sum(minimum_costs(problem, sums)[left]))
