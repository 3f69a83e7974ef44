"""The compact table of lines that the matcher uses: published lines, and derived ones worth expecting."""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import dataclass, replace
from statistics import median

from ..physics.recording import recorded_width_ev
from ..physics.widths import natural_width_ev
from .learning import learned
from .transitions import Transition, transitions_of

LEAST_HEIGHT = 0.05
LEAST_OF_SHELL, LEAST_AT_ALL = 0.2, 0.02  # a scan may hold the lines of one shell only: its own strong ones are kept
MERGED_EV, MERGED_WIDTH = 1.5, 0.5  # two lines nearer than half their recorded width make one minimum
# A calculated line is not taken for stronger than this part of the strongest published one, less the more lines of
# its shell have been published: what is not in the lists is weak.
MOST_DERIVED = (0.5, 0.4, 0.25, 0.1)
LEAST_LOG_SIGMA = 0.45
LEAST_LISTED = 0.1  # what a list leaves out may be as strong as this
PUBLISHED_LOG_SIGMA = 0.45
# Lists end somewhere: of a line further below the lowest one named they say only that it is not the strongest.
BELOW_LIST_EV = 5.0


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
    listed = _listed(every)
    seen: list[Weighted] = []
    found: list[_Computed] = []
    for transition in every:
        row, shell = transition.published, transition.vacancy[0]
        if row is not None and row.relative_height is not None:
            seen.append(_weighted(transition, row.relative_height, PUBLISHED_LOG_SIGMA, "published"))
        elif transition.strength <= 0 or (transition.one_band and shell in scale):
            continue  # one valence band, one line
        else:
            near = shell in scale
            own = scale.get(transition.vacancy, scale[shell]) if near else overall
            sigma = learned().same_shell_log_sigma if near else learned().other_shell_log_sigma
            most = _most(transition, listed) if scale else float("inf")
            found.append(_Computed(transition=transition, raw=transition.strength * own, log_sigma=sigma, most=most))
    return _trimmed([*seen, *(_unlisted(line) for line in _merged(found, seen))])


@dataclass(frozen=True, kw_only=True)
class _Computed:
    """A line that no list has: its calculated height, and what it hardly exceeds."""

    transition: Transition
    raw: float
    log_sigma: float
    most: float


@dataclass(frozen=True, kw_only=True)
class _Listed:
    """What the published lines of an element say of lines that are not among them."""

    lowest_ev: float
    weakest: float
    shells: Counter[str]


def _listed(every: tuple[Transition, ...]) -> _Listed:
    named = [(t, t.published) for t in every if t.published is not None]
    heights = [row.relative_height for _, row in named if row.relative_height]
    return _Listed(
        lowest_ev=min((t.energy_ev for t, _ in named), default=0.0),
        weakest=max(min(heights, default=1.0), LEAST_LISTED),
        shells=Counter(t.vacancy[0] for t, _ in named),
    )


def _most(transition: Transition, listed: _Listed) -> float:
    """What a line that is not in the list hardly exceeds, the strongest being 1."""
    if transition.energy_ev < listed.lowest_ev - BELOW_LIST_EV and not listed.shells[transition.vacancy[0]]:
        return 1.0
    return min(MOST_DERIVED[min(listed.shells[transition.vacancy[0]], len(MOST_DERIVED) - 1)], listed.weakest)


def _weighted(transition: Transition, height: float, log_sigma: float, kind: str) -> Weighted:
    return Weighted(transition=transition, height=height, log_sigma=log_sigma, kind=kind)


def _unlisted(line: _Computed) -> Weighted:
    """A line that is not in the lists: its calculated height, knowing that it lies below what would be listed."""
    mean, sigma = below(math.log(line.raw), line.log_sigma, math.log(line.most))
    return _weighted(line.transition, math.exp(mean), max(sigma, LEAST_LOG_SIGMA), "computed")


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


def _merged(found: list[_Computed], seen: list[Weighted]) -> list[_Computed]:
    """Add up lines that make one minimum, strongest first; what falls on a published line is part of it."""
    kept: list[_Computed] = []
    for line in sorted(found, key=lambda item: (-item.raw, item.transition.label)):
        own = 0.7 * line.transition.sigma_ev
        if any(_apart(line.transition, other.transition) < max(own, _one_minimum(other.transition)) for other in seen):
            continue
        twin = next(
            (k for k, o in enumerate(kept) if _apart(line.transition, o.transition) < _one_minimum(o.transition)), None
        )
        if twin is None:
            kept.append(line)
        else:
            kept[twin] = _sum(kept[twin], line)
    return kept


def _apart(one: Transition, other: Transition) -> float:
    return abs(one.energy_ev - other.energy_ev)


def _one_minimum(transition: Transition) -> float:
    """How near another line makes one minimum with this one, in eV."""
    natural = natural_width_ev(transition.z, transition.parts[0], transition.parts[1] + transition.parts[2])
    return max(MERGED_EV, MERGED_WIDTH * float(recorded_width_ev(natural, transition.energy_ev)))


def _sum(one: _Computed, other: _Computed) -> _Computed:
    """Two lines as one, called after the stronger and standing between both."""
    raw = one.raw + other.raw
    energy = (one.raw * one.transition.energy_ev + other.raw * other.transition.energy_ev) / raw
    return replace(one, transition=replace(one.transition, energy_ev=energy), raw=raw)


def _trimmed(lines: list[Weighted]) -> list[Weighted]:
    """The lines worth expecting, strongest first: of some height beside the strongest of all, or of their shell."""
    top = max((line.height for line in lines), default=1.0)
    shells: dict[str, float] = {}
    for line in lines:
        shell = line.transition.vacancy[0]
        shells[shell] = max(shells.get(shell, 0.0), line.height / top)
    out = []
    for line in lines:
        height = line.height / top
        least = min(LEAST_HEIGHT, max(LEAST_OF_SHELL * shells[line.transition.vacancy[0]], LEAST_AT_ALL))
        if line.kind == "published" or height >= least:
            out.append(_weighted(line.transition, height, line.log_sigma, line.kind))
    return sorted(out, key=lambda line: (-line.height, line.transition.label))
