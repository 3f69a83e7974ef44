"""Reasons of a comparison, in words."""

from __future__ import annotations

import math
from collections.abc import Iterator

from ..reasons import Reason
from ..reasons.words import joined, times
from .compare import DEFAULT_SCATTER, Comparison
from .measure import CALLED

CONTRAST_CODES = (
    "compared-lines",
    "beyond-scatter",
    "within-scatter",
    "one-clean-spectrum",
    "below-noise",
    "not-called-there",
)


def explain(
    comparison: Comparison, probability: float, probability_clean: float, clean: int, relative_to: str
) -> tuple[Reason, ...]:
    """Why an element is said to differ or not."""
    return tuple(_reasons(comparison, probability, probability_clean, clean, relative_to))


def _reasons(
    comparison: Comparison, probability: float, probability_clean: float, clean: int, relative_to: str
) -> Iterator[Reason]:
    lines = joined(comparison.lines)
    basis = "all that was found" if relative_to == "total" else relative_to
    if comparison.log_ratio is None or comparison.log_sigma is None:
        yield from _one_sided(comparison, lines)
    else:
        ratio, factor = math.exp(comparison.log_ratio), math.exp(comparison.log_sigma)
        text = f"{times(ratio)} times as strong, within a factor {times(factor)}, on {lines} relative to {basis}"
        yield Reason(code="compared-lines", side="for", text=text)
        yield from _scatter(comparison, comparison.log_ratio, clean)
    for seen, said, where in (
        (comparison.seen, probability, "the suspect spot"),
        (comparison.seen_clean, probability_clean, "a clean one"),
    ):
        if seen and said < CALLED:
            text = f"something stands at its lines on {where}, but it is called there with {said:.2f} only"
            yield Reason(code="not-called-there", side="against", text=text)


def _one_sided(comparison: Comparison, lines: str) -> Iterator[Reason]:
    where = "the clean ones" if comparison.seen else "the suspect spot"
    text = f"nothing of it beyond the noise and what others explain at {lines} on {where}"
    if comparison.limit is not None:
        bound = f"at least {times(comparison.limit)}" if comparison.seen else f"at most {times(comparison.limit)}"
        text += f": {bound} times as strong on the suspect spot"
    yield Reason(code="below-noise", side="for", text=text)


def _scatter(comparison: Comparison, log_ratio: float, clean: int) -> Iterator[Reason]:
    if clean < 2 or comparison.scatter is None:
        taken = f"a factor {math.exp(DEFAULT_SCATTER):.2f} is taken"
        text = f"one clean spectrum does not tell how much spots differ; {taken}"
        yield Reason(code="one-clean-spectrum", side="untested", text=text)
        return
    factor = f"a factor {math.exp(comparison.scatter):.2f} among themselves"
    if abs(log_ratio) > 2.0 * comparison.scatter:
        yield Reason(code="beyond-scatter", side="for", text=f"more than the clean ones differ ({factor})")
    else:
        yield Reason(code="within-scatter", side="against", text=f"no more than the clean ones differ ({factor})")
