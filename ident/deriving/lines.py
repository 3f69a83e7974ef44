"""The compact table of lines that the matcher uses: published lines, and derived ones worth expecting."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from statistics import median

from .transitions import Transition, transitions_of

LEAST_HEIGHT = 0.02
MERGED_EV = 1.5
# A calculated line is not taken for stronger than this part of the strongest published one, less the more lines of
# its shell have been published: what is not in the lists is weak.
MOST_DERIVED = (0.5, 0.4, 0.25, 0.15)
ACROSS_SHELLS = 0.4  # lines of a shell without any published line are scaled down by this
PUBLISHED_LOG_SIGMA, SAME_SHELL_LOG_SIGMA, OTHER_LOG_SIGMA = 0.45, 0.8, 1.0
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
    overall = median(scale.values()) if scale else 1.0
    count = Counter(t.vacancy[0] for t in every if t.published is not None)
    out: list[Weighted] = []
    for transition in every:
        row = transition.published
        if row is not None and row.relative_height is not None:
            out.append(_weighted(transition, row.relative_height, PUBLISHED_LOG_SIGMA, "published"))
        elif transition.vacancy[0] in scale:
            if transition.valence:
                continue  # one valence band, one line
            height = transition.strength * scale[transition.vacancy[0]]
            cap = MOST_DERIVED[min(count[transition.vacancy[0]], len(MOST_DERIVED) - 1)]
            out.append(_weighted(transition, min(height, cap), SAME_SHELL_LOG_SIGMA, "computed"))
        else:
            factor = overall * (ACROSS_SHELLS if scale else 1.0)
            cap = MOST_DERIVED[0] if scale else float("inf")
            out.append(_weighted(transition, min(transition.strength * factor, cap), OTHER_LOG_SIGMA, "computed"))
    return _trimmed(_merged(out))


def _weighted(transition: Transition, height: float, log_sigma: float, kind: str) -> Weighted:
    return Weighted(transition=transition, height=height, log_sigma=log_sigma, kind=kind)


def _scales(every: tuple[Transition, ...]) -> dict[str, float]:
    """Published height over computed strength, for every shell with published lines."""
    ratios: dict[str, list[float]] = {}
    for transition in every:
        row = transition.published
        if row is not None and row.relative_height and transition.strength > 0:
            ratios.setdefault(transition.vacancy[0], []).append(row.relative_height / transition.strength)
    return {shell: median(values) for shell, values in ratios.items()}


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
