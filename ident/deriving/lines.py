"""The compact table of lines that the matcher uses: published lines, and derived ones worth expecting."""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import dataclass
from statistics import median

from .learning import learned
from .transitions import Transition, transitions_of

LEAST_HEIGHT = 0.05
MERGED_EV = 1.5
# A calculated line is not taken for stronger than this part of the strongest published one, less the more lines of
# its shell have been published: what is not in the lists is weak.
MOST_DERIVED = (0.5, 0.4, 0.25, 0.1)
LEAST_LOG_SIGMA = 0.45
LEAST_LISTED = 0.1  # what a list leaves out may be as strong as this
PUBLISHED_LOG_SIGMA = 0.45
LOW_EV, LOW_LEAST_HEIGHT = 60.0, 0.05


@dataclass(frozen=True, kw_only=True)
class Weighted:
    """A transition with its height relative to others of its element, and how sure that is."""

    transition: Transition
    height: float
    log_sigma: float
    kind: str


def weighted_lines(z: int, symbol: str) -> list[Weighted]:
    """Lines of an element, strongest first, the strongest of height one."""
    every = transitions_of(z, symbol)
    scale = _scales(every)
    overall = median(value for key, value in scale.items() if len(key) == 1) if scale else 1.0
    count = Counter(t.vacancy[0] for t in every if t.published is not None)
    heights = [t.published.relative_height for t in every if t.published is not None and t.published.relative_height]
    weakest = max(min(heights, default=1.0), LEAST_LISTED)
    out: list[Weighted] = []
    for transition in every:
        row = transition.published
        if row is not None and row.relative_height is not None:
            out.append(_weighted(transition, row.relative_height, PUBLISHED_LOG_SIGMA, "published"))
        elif transition.strength <= 0:
            continue
        elif transition.vacancy[0] in scale:
            if transition.one_band:
                continue  # one valence band, one line
            most = min(MOST_DERIVED[min(count[transition.vacancy[0]], len(MOST_DERIVED) - 1)], weakest)
            own = scale.get(transition.vacancy, scale[transition.vacancy[0]])
            out.append(_unlisted(transition, own, learned().same_shell_log_sigma, most))
        else:
            most = min(MOST_DERIVED[0], weakest) if scale else float("inf")
            out.append(_unlisted(transition, overall, learned().other_shell_log_sigma, most))
    return _trimmed(_merged(out))


def _weighted(transition: Transition, height: float, log_sigma: float, kind: str) -> Weighted:
    return Weighted(transition=transition, height=height, log_sigma=log_sigma, kind=kind)


def _unlisted(transition: Transition, scale: float, log_sigma: float, most: float) -> Weighted:
    """A line that is not in the lists: its calculated height, knowing that it lies below what would be listed."""
    mean, sigma = below(math.log(transition.strength * scale), log_sigma, math.log(most))
    return _weighted(transition, math.exp(mean), max(sigma, LEAST_LOG_SIGMA), "computed")


def below(mean: float, sigma: float, most: float) -> tuple[float, float]:
    """Mean and standard deviation of a normal distribution cut off above `most` (textbook formula).

    >>> [round(x, 3) for x in below(0.0, 1.0, 0.0)]  # half-normal: -(2 / pi)^0.5 and (1 - 2 / pi)^0.5
    [-0.798, 0.603]
    """
    at = (most - mean) / sigma
    if at > 8.0:
        return mean, sigma
    if at < -8.0:  # far beyond: as near to the edge as the tail is long
        return most + sigma / at, sigma / -at
    hazard = math.exp(-0.5 * at**2) / math.sqrt(2.0 * math.pi) / (0.5 * math.erfc(-at / math.sqrt(2.0)))
    return mean - sigma * hazard, sigma * math.sqrt(max(1.0 - at * hazard - hazard**2, 0.0))


def _scales(every: tuple[Transition, ...]) -> dict[str, float]:
    """Published height over computed strength, for every shell and every vacancy with published lines."""
    ratios: dict[str, list[float]] = {}
    for transition in every:
        row = transition.published
        if row is not None and row.relative_height and transition.strength > 0:
            for key in {transition.vacancy[0], transition.vacancy}:
                ratios.setdefault(key, []).append(row.relative_height / transition.strength)
    return {key: median(values) for key, values in ratios.items()}


def _merged(lines: list[Weighted]) -> list[Weighted]:
    """Put derived lines that fall on a stronger or a published one of their element into it."""
    kept: list[Weighted] = []
    for line in sorted(lines, key=lambda item: (item.kind != "published", -item.height)):
        twin = next(
            (k for k, other in enumerate(kept) if _together(line, other)),
            None,
        )
        if twin is None:
            kept.append(line)
        elif kept[twin].kind == "computed" and line.kind == "computed":
            other = kept[twin]
            kept[twin] = _weighted(other.transition, max(other.height, line.height), other.log_sigma, other.kind)
    return sorted(kept, key=lambda item: (-item.height, item.transition.label))


def _together(line: Weighted, other: Weighted) -> bool:
    if line.kind == "published":
        return False
    reach = MERGED_EV if other.kind == "computed" else max(MERGED_EV, 0.7 * line.transition.sigma_ev)
    return abs(line.transition.energy_ev - other.transition.energy_ev) < reach


def _trimmed(lines: list[Weighted]) -> list[Weighted]:
    top = max((line.height for line in lines), default=1.0)
    out = []
    for line in lines:
        height = line.height / top
        least = LOW_LEAST_HEIGHT if line.transition.energy_ev < LOW_EV else LEAST_HEIGHT
        if line.kind == "published" or height >= least:
            out.append(_weighted(line.transition, height, line.log_sigma, line.kind))
    return out
