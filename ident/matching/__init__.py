"""Weigh element sets against the minima of a spectrum; numbers in, numbers out."""

from __future__ import annotations

from dataclasses import replace

from ..minima import Analysis
from .evidence import Evidence
from .settings import Settings

__all__ = ["Evidence", "Settings", "weigh"]


def weigh(analysis: Analysis, settings: Settings) -> Evidence:
    """Weigh element sets against the minima of an analysed spectrum."""
    from .assemble import assemble
    from .posterior import mix, weigh_sets
    from .problem import pose
    from .search import total_cost
    from .solve import solve

    problem = pose(analysis, settings)
    solutions = solve(problem)
    posteriors = []
    for solution in solutions:
        cost = total_cost(solution.problem, solution.options, solution.members)
        posteriors.append(weigh_sets(solution.problem, solution.options, solution.members, cost))
    mixed = mix(posteriors, [solution.cost for solution in solutions])
    return assemble(solutions[0].problem, solutions[0], replace(posteriors[0], probability=mixed))
