"""What the parts of the answer look at: the question, its best explanation, and what is known of every element."""

from __future__ import annotations

from dataclasses import dataclass

from .evidence import AbundanceEvidence
from .options import Options
from .posterior import Posterior
from .problem import Problem
from .search import Sums
from .solve import Solution


@dataclass(frozen=True, kw_only=True, eq=False)
class Context:
    """All that the parts below look at."""

    problem: Problem
    solution: Solution
    posterior: Posterior
    sums: Sums  # of the best set
    abundances: dict[int, AbundanceEvidence]

    @property
    def options(self) -> Options:
        """The options of the settled axis."""
        return self.solution.options
