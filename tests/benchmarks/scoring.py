"""Scores of calls against the truth of a case: F1, spectra all right, calibration, confident wrong calls."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from .forward import Case

CALLED = 0.5  # probability from which an element counts as called
OPEN = (0.02, 0.98)  # probabilities between which a judgement is an open one
CONFIDENT = 0.95  # from which a wrong call is a confident one


@dataclass(frozen=True, kw_only=True)
class CaseScore:
    """One spectrum: what was called rightly, wrongly and not at all."""

    seed: int
    recipe: str
    right: frozenset[str]
    false: frozenset[str]
    missed: frozenset[str]
    confident_false: tuple[tuple[str, float], ...]  # element and its probability
    judged: tuple[tuple[float, bool], ...]  # probability and truth of every scored element

    @property
    def f1(self) -> float | None:
        """F1 of this spectrum; None where there was nothing to call and nothing was called."""
        wrong = len(self.false) + len(self.missed)
        return 2 * len(self.right) / (2 * len(self.right) + wrong) if self.right or wrong else None

    @property
    def all_right(self) -> bool:
        """Every element that had to be called, and none that is absent."""
        return not self.false and not self.missed


@dataclass(frozen=True, kw_only=True)
class CalibrationBin:
    """Elements of about the same probability."""

    count: int
    probability: float  # mean of what was said
    present: float  # share that is there


@dataclass(frozen=True, kw_only=True)
class Summary:
    """The figures of a set."""

    spectra: int
    right: int
    false: int
    missed: int
    f1_mean: float  # mean of the spectra's F1
    f1_mean_sd: float  # standard error of that mean
    f1_pooled: float  # of all elements of all spectra together
    all_right: float  # share of spectra
    calibration: tuple[CalibrationBin, ...]
    log_loss: float  # of judgements between 0.02 and 0.98
    confident_calls: int  # at 0.95 or more
    calibration_error: float  # mean distance of probability and share over the bins, weighed by count
    calibration_error_range: tuple[float, float]  # 5th and 95th percentile over resampled spectra
    confident_false: tuple[tuple[int, str, float], ...]  # seed, element, probability
    missed_most: tuple[tuple[str, int], ...]
    false_most: tuple[tuple[str, int], ...]


def score_case(case: Case, calls: Mapping[str, float]) -> CaseScore:
    """Score one answer; `calls` maps elements to probabilities (0 to 1), elements left out have 0."""
    called = {element for element, probability in calls.items() if probability >= CALLED}
    judged = [
        (probability, element in case.must)
        for element, probability in sorted(calls.items())
        if element not in case.unscored
    ]
    judged += [(0.0, True) for element in sorted(case.must) if element not in calls]
    absent = {element: p for element, p in sorted(calls.items()) if element not in case.truth}
    return CaseScore(
        seed=case.seed,
        recipe=case.recipe,
        right=case.must & called,
        false=frozenset(called & set(absent)),
        missed=case.must - called,
        confident_false=tuple((element, p) for element, p in absent.items() if p >= CONFIDENT),
        judged=tuple(judged),
    )


def summarise(scores: Sequence[CaseScore]) -> Summary:
    """Put the scores of a set together."""
    right, false, missed = (sum(len(getattr(score, part)) for score in scores) for part in ("right", "false", "missed"))
    each = np.array([score.f1 for score in scores if score.f1 is not None])
    return Summary(
        spectra=len(scores),
        right=right,
        false=false,
        missed=missed,
        f1_mean=float(each.mean()) if each.size else 0.0,
        f1_mean_sd=float(each.std(ddof=1) / np.sqrt(each.size)) if each.size > 1 else 0.0,
        f1_pooled=2 * right / max(2 * right + false + missed, 1),
        all_right=float(np.mean([score.all_right for score in scores])) if scores else 0.0,
        calibration=calibration_table(_open(scores)),
        calibration_error=calibration_error(_open(scores)),
        calibration_error_range=_error_range(scores),
        log_loss=log_loss(scores),
        confident_calls=sum(p >= CONFIDENT for score in scores for p, _ in score.judged),
        confident_false=tuple((score.seed, *pair) for score in scores for pair in score.confident_false),
        missed_most=tuple(Counter(e for score in scores for e in score.missed).most_common(12)),
        false_most=tuple(Counter(e for score in scores for e in score.false).most_common(12)),
    )


def calibration_table(judged: Sequence[tuple[float, bool]], bins: int = 10) -> tuple[CalibrationBin, ...]:
    """Cut the judged elements, sorted by probability, into bins of equal count."""
    if not judged:
        return ()
    pairs = np.array(sorted(judged), dtype=np.float64)
    return tuple(
        CalibrationBin(count=len(part), probability=float(part[:, 0].mean()), present=float(part[:, 1].mean()))
        for part in np.array_split(pairs, min(bins, len(pairs)))
    )


def calibration_error(judged: Sequence[tuple[float, bool]], bins: int = 10) -> float:
    """Return the mean distance of what was said and what is, over bins of equal count."""
    table = calibration_table(judged, bins)
    total = sum(part.count for part in table)
    return sum(part.count * abs(part.probability - part.present) for part in table) / max(total, 1)


def _open(scores: Sequence[CaseScore]) -> list[tuple[float, bool]]:
    """Judgements that are neither given up nor certain: where calibration matters, and is not won by the obvious."""
    low, high = OPEN
    return [pair for score in scores for pair in score.judged if low < pair[0] < high]


def log_loss(scores: Sequence[CaseScore]) -> float:
    """Mean of -ln of the probability given to what is true, over open judgements."""
    pairs = _open(scores)
    return float(-np.mean([np.log(p if true else 1.0 - p) for p, true in pairs])) if pairs else 0.0


def _error_range(scores: Sequence[CaseScore], resamples: int = 200) -> tuple[float, float]:
    if not scores:
        return 0.0, 0.0
    rng = np.random.default_rng(0)
    errors = []
    for _ in range(resamples):
        drawn = rng.integers(len(scores), size=len(scores))
        errors.append(calibration_error(_open([scores[index] for index in drawn])))
    low, high = np.percentile(errors, [5, 95])
    return float(low), float(high)
