"""From strengths to ratios and verdicts; numbers only."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from .. import tables
from .measure import CALLED, Strength

DEFAULT_SCATTER = 0.25  # ln; from spot to spot on one part, where one clean spectrum alone says nothing of it
SCATTER_WORTH = 2.0  # clean spectra that the default counts for
SEEN_SD, LIMIT_SD = 3.0, 2.0  # noise widths: seen at all; what may be there unseen
CHANGED_SD, LEAST_CHANGE = 2.0, math.log(1.25)


@dataclass(frozen=True, kw_only=True)
class Comparison:
    """One element, suspect against clean."""

    element: str
    lines: tuple[str, ...]
    seen: bool  # on the suspect spot
    seen_clean: bool  # on the clean ones
    log_ratio: float | None
    log_sigma: float | None
    limit: float | None  # ratio at least or at most
    scatter: float | None  # ln, of the clean ones among themselves, as measured


def totals(measured: Mapping[str, Sequence[Strength]], relative_to: str | None) -> list[float]:
    """What strengths are divided by in each spectrum: one element's strength, or all of them over sensitivities."""
    if relative_to is not None:
        return [strength.value for strength in measured[relative_to]]
    known = tables.sensitivities()
    count = len(next(iter(measured.values())))
    return [
        sum(max(strengths[place].value, 0.0) / known[symbol].sensitivity for symbol, strengths in measured.items())
        for place in range(count)
    ]


def compare(
    element: str,
    lines: tuple[str, ...],
    strengths: Sequence[Strength],
    total: Sequence[float],
    probabilities: Sequence[float],
) -> Comparison:
    """Compare the first spectrum, the suspect's, with the others; probabilities are the element's in each."""
    parts = [Strength(value=s.value / t, sigma=s.sigma / t) for s, t in zip(strengths, total, strict=True)]
    shown = [_shown(part, probability) for part, probability in zip(parts, probabilities, strict=True)]
    suspect, clean, seen = parts[0], parts[1:], shown[0]
    there = [part for part, one in zip(clean, shown[1:], strict=True) if one]
    seen_clean = len(there) * 2 >= len(clean)
    base = {"element": element, "lines": lines, "seen": seen, "seen_clean": seen_clean}
    if seen and seen_clean:
        logs = np.log([part.value for part in there])
        scatter = float(np.std(logs, ddof=1)) if len(there) > 1 else None
        spread = _spread(scatter, len(there))
        noise = math.hypot(
            suspect.sigma / suspect.value, math.sqrt(sum((p.sigma / p.value) ** 2 for p in there)) / len(there)
        )
        return Comparison(
            **base,  # type: ignore[arg-type]
            log_ratio=math.log(suspect.value) - float(np.mean(logs)),
            log_sigma=math.hypot(noise, spread * math.sqrt(1.0 + 1.0 / len(there))),
            limit=None,
            scatter=scatter,
        )
    limit = None
    if seen:
        most = max(part.value + LIMIT_SD * part.sigma for part in clean)
        limit = suspect.value / most if most > 0 else None
    elif there:
        limit = (suspect.value + LIMIT_SD * suspect.sigma) / float(np.exp(np.mean(np.log([p.value for p in there]))))
    return Comparison(**base, log_ratio=None, log_sigma=None, limit=limit, scatter=None)  # type: ignore[arg-type]


def _shown(part: Strength, probability: float) -> bool:
    """Whether an element is seen: clear of the noise, or called though its share of a minimum is not known well."""
    return part.value > SEEN_SD * part.sigma or (probability >= CALLED and part.value > 0)


def _spread(scatter: float | None, count: int) -> float:
    """Scatter from spot to spot, the default counting for a few spectra."""
    if scatter is None:
        return DEFAULT_SCATTER
    degrees = count - 1
    return math.sqrt((degrees * scatter**2 + SCATTER_WORTH * DEFAULT_SCATTER**2) / (degrees + SCATTER_WORTH))


def verdict_of(comparison: Comparison, probability: float, probability_clean: float) -> str | None:
    """What to say of an element; None when it is neither called where it is seen nor different."""
    on_suspect = comparison.seen and probability >= CALLED
    on_clean = comparison.seen_clean and probability_clean >= CALLED
    if comparison.log_ratio is None or comparison.log_sigma is None:
        limit = comparison.limit if comparison.limit is not None else 0.0
        if on_suspect and not comparison.seen_clean and limit > math.exp(LEAST_CHANGE):
            return "only on suspect"
        if on_clean and not comparison.seen and 0 < limit < math.exp(-LEAST_CHANGE):
            return "only on clean"
        return None
    changed = abs(comparison.log_ratio) > max(CHANGED_SD * comparison.log_sigma, LEAST_CHANGE)
    if not (on_suspect or on_clean):
        return None
    if not changed:
        return "unchanged"
    return "enriched" if comparison.log_ratio > 0 else "depleted"
