"""What the scan leaves open: minima unexplained, elements it cannot separate, elements it says nothing on."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from .context import Context
from .evidence import InseparableEvidence, UnexplainedEvidence, UntestableEvidence
from .problem import unexplained_price
from .search import left_over
from .settling import settling_scans

LEAST_OPEN, MOST_OPEN = 0.05, 0.95  # probabilities between which an element is not decided
MAIN_PART = 0.3  # of an element's deepest prediction, for a minimum to be one that it rests on
LOSS_PART = 0.5  # cheaper than this part of its full price, a minimum is likely a loss or a satellite
LEAST_RIVAL = 0.1  # probability from which an element is a rival worth another scan


def find_unexplained(context: Context) -> tuple[UnexplainedEvidence, ...]:
    """Minima that ask for an element and got none, most significant first; losses and satellites left out."""
    problem, axis = context.problem, context.solution.axis
    pattern = problem.patterns
    full = unexplained_price(problem.energy_ev, problem.depth, problem.significance, np.zeros_like(problem.depth))
    left = left_over(problem, context.sums) & (problem.price > 3.0) & (problem.price > LOSS_PART * full)
    likely = [
        int(e) for e in np.flatnonzero(context.posterior.probability >= 0.5) if context.posterior.best_option[e] >= 0
    ]
    for element in likely:  # not in the best set, yet called: its minima are not left over
        left &= context.options.depth[int(context.posterior.best_option[element])] <= 0
    place = pattern.energy_ev * (1 + axis.slope) + axis.offset_ev
    out = []
    for at in np.flatnonzero(left):
        off = problem.energy_ev[at] - place
        sigma = np.hypot(pattern.sigma_ev, 1.5)
        near = pattern.real & (off > pattern.shift_low_ev - sigma) & (off < pattern.shift_high_ev + sigma)
        near &= pattern.height >= 0.2
        weight = np.max(np.where(near, np.log(pattern.height + 1e-9) - 0.5 * (off / sigma) ** 2, -np.inf), axis=1)
        weight = weight + 0.5 * pattern.prior_log_odds
        best = [int(e) for e in np.argsort(-weight)[:4] if np.isfinite(weight[e])]
        out.append(
            UnexplainedEvidence(
                energy_ev=float(problem.energy_ev[at]),
                significance=float(problem.significance[at]),
                candidates=tuple(pattern.symbols[e] for e in best),
            )
        )
    return tuple(sorted(out, key=lambda item: -item.significance))


def find_inseparable(context: Context, shown: list[int]) -> tuple[InseparableEvidence, ...]:
    """Groups of elements of which one or another stands at a minimum, and the scan does not say which."""
    groups: dict[int, dict[int, None]] = {}
    for element, other, shared in _open_pairs(context, shown):
        groups.setdefault(shared, {}).update({element: None, other: None})
    probability, names = context.posterior.probability, context.problem.patterns.symbols
    out = []
    for shared, members in groups.items():
        elements = tuple(sorted(members, key=lambda e: -probability[e]))
        out.append(
            InseparableEvidence(
                elements=tuple(names[e] for e in elements),
                at_ev=float(context.problem.energy_ev[shared]),
                scans=settling_scans(context, elements),
            )
        )
    return tuple(sorted(out, key=lambda group: group.at_ev))


def _open_pairs(context: Context, shown: list[int]) -> Iterator[tuple[int, int, int]]:
    """Pairs that could take each other's place, and the minimum at which."""
    posterior = context.posterior
    for element, exchanged in posterior.replacements.items():
        if not LEAST_OPEN <= posterior.probability[element] < MOST_OPEN:
            continue
        for other, _ in exchanged:
            if other not in shown or posterior.probability[other] < LEAST_RIVAL:
                continue
            shared = _shared_minimum(context, element, other)
            if shared is not None:
                yield element, other, shared


def _shared_minimum(context: Context, first: int, second: int) -> int | None:
    """The minimum that is the strongest of one element and could be a strong line of the other as well."""
    one, two = (context.options.depth[int(context.posterior.best_option[e])] for e in (first, second))
    for main, other in ((one, two), (two, one)):
        at = int(np.argmax(main))
        if main[at] > 0 and other[at] > MAIN_PART * float(np.max(other)):
            return at
    return None


def find_untestable(context: Context) -> tuple[UntestableEvidence, ...]:
    """Elements none of whose strong lines lies in the scan."""
    problem, axis = context.problem, context.solution.axis
    pattern = problem.patterns
    place = pattern.energy_ev * (1 + axis.slope) + axis.offset_ev
    strong = pattern.real & (pattern.height >= 0.15)
    tested = np.any(strong & problem.in_range(place), axis=1)
    out = []
    for element in np.flatnonzero(~tested):
        strongest = float(pattern.energy_ev[element, int(np.argmax(pattern.height[element]))])
        out.append(UntestableEvidence(element=pattern.symbols[element], cause="out of range", nearest_ev=strongest))
    return tuple(out)
