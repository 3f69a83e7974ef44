"""Counts that stand at a ceiling: the detector had no more to give, and lines there are cut off."""

from __future__ import annotations

import numpy as np

from ..spectrum import FloatArray

LEAST_RUN = 5  # points in a row at the very top; noise makes two or three equal, seldom more
LEAST_NOISE_STEPS = (
    5.0  # of the smallest step of the ordinate: where noise is finer than that, equal points mean nothing
)


def find_saturation(energy_ev: FloatArray, intensity: FloatArray) -> tuple[tuple[float, float, float], ...]:
    """Stretches (lowest energy, highest energy, level) in which a direct ordinate (n,) stands at its ceiling.

    A ceiling is the highest value, taken at five or more points in a row, in data that are noisier elsewhere.
    """
    top = float(np.max(intensity))
    at_top = np.flatnonzero(intensity == top)
    if at_top.size < LEAST_RUN or not _noisy(intensity):
        return ()
    runs = np.split(at_top, np.flatnonzero(np.diff(at_top) > 1) + 1)
    return tuple((float(energy_ev[run[0]]), float(energy_ev[run[-1]]), top) for run in runs if run.size >= LEAST_RUN)


def _noisy(intensity: FloatArray) -> bool:
    """Whether neighbours differ, as a rule, by several of the smallest steps there are."""
    change = np.abs(np.diff(intensity))
    steps = change[change > 0]
    return bool(steps.size > LEAST_RUN and np.median(change) > LEAST_NOISE_STEPS * np.min(steps))
