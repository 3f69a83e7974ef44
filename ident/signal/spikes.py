"""Spikes and dead points: one or two channels too sharp to be any line that the analyser passes."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..spectrum import FloatArray
from .widths import narrowest_sigma_ev

THRESHOLD = 8.0  # noise widths
LEAST_FOLLOW = 0.15  # part of a line's height that its neighbour channel keeps; less cannot be told from a spike


@dataclass(frozen=True, kw_only=True)
class Spike:
    """Channels set aside: index of the first, how many, and whether up or down."""

    index: int
    channels: int
    up: bool


def find_spikes(
    energy_ev: FloatArray,
    intensity: FloatArray,
    sigma: FloatArray,
    resolution: float | None = None,
    *,
    derivative: bool = False,
) -> tuple[tuple[Spike, ...], FloatArray]:
    """Find spikes in one evenly stepped window, (n,) each; give them and a copy bridged across them.

    A channel is a spike when it stands out of the line through its further neighbours by more than the noise
    and its nearest neighbours do not follow as they would have to under the narrowest line possible there.
    """
    cleaned = np.array(intensity)
    if intensity.size < 12:
        return (), cleaned
    found: list[Spike] = []
    step = float(np.median(np.diff(energy_ev)))
    narrow = narrowest_sigma_ev(energy_ev, resolution)
    for channels in (2, 1):
        for index in _outliers(cleaned, sigma, step, narrow, channels, derivative):
            up = bool(cleaned[index] > cleaned[index - 2])
            left, right = index - 1, index + channels
            inside = np.arange(index, index + channels)
            cleaned[inside] = np.interp(inside, [left, right], [cleaned[left], cleaned[right]])
            found.append(Spike(index=index, channels=channels, up=up))
    return tuple(sorted(found, key=lambda spike: spike.index)), cleaned


def _outliers(
    values: FloatArray, sigma: FloatArray, step: float, narrow: FloatArray, channels: int, derivative: bool
) -> list[int]:
    """Indices of the first channel of every spike of so many channels."""
    n, c = values.size, channels
    index = np.arange(4, n - 4 - c)
    # the line through the third and fourth neighbour on either side, at the spike and beside it
    left, right = values[index - 3], values[index + c + 2]
    slope = (right - left) / (c + 5)
    excess = np.stack([values[index + k] - (left + slope * (3 + k)) for k in range(-2, c + 2)])
    inner, beside = excess[2 : 2 + c], excess[[1, 2 + c]]
    height = np.min(np.abs(inner), axis=0)
    same_side = np.abs(np.sum(np.sign(inner), axis=0)) == c
    # under the narrowest line the neighbour of the outermost of c channels keeps this part of the height
    half = 0.5 * (c - 1)
    follow = np.exp(-0.5 * ((half + 1) * step / narrow[index]) ** 2 + 0.5 * (half * step / narrow[index]) ** 2)
    swing = np.max(np.abs(np.stack([excess[0], excess[-1]])), axis=0)
    allowed = 0.35 * follow * height + 2.5 * sigma[index]
    sharp = (np.max(np.abs(beside), axis=0) < allowed) & (swing < 0.2 * height + 2.5 * sigma[index])
    # no line goes down in direct data; upward, the step must be fine enough to see a line's neighbours follow
    down = (inner[0] < 0) & (not derivative)
    hit = same_side & sharp & (height > THRESHOLD * sigma[index]) & (down | (follow > LEAST_FOLLOW))
    chosen: list[int] = []
    for k in np.flatnonzero(hit):
        if not chosen or index[k] - chosen[-1] > c + 1:
            chosen.append(int(index[k]))
    return chosen
