"""Spikes that were there before software differentiated or a time constant smeared them.

In such data a spike of one channel shows as the response of the filter to one channel, which is also what the
noise is made of, so the noise kernel is its shape.
"""

from __future__ import annotations

import numpy as np

from ..spectrum import FloatArray
from .lines import line_shape
from .noise import NoiseModel

THRESHOLD = 9.0  # noise widths of the response
LIKENESS = 0.9  # part of the local curve that the response must account for
BETTER = 0.5  # and leave over at most this part of what the best line leaves over
ROUNDS = 12


def remove_bursts(
    energy_ev: FloatArray, derivative: FloatArray, noise: NoiseModel
) -> tuple[tuple[int, ...], FloatArray]:
    """Find responses to single channels in one window, (n,) each; give their channels and the curve without."""
    kernel = noise.kernel[: int(np.flatnonzero(np.abs(noise.kernel) > 0.02 * np.max(np.abs(noise.kernel)))[-1]) + 1]
    if not 2 <= kernel.size <= derivative.size // 4:
        return (), derivative
    cleaned = derivative.copy()
    found: list[int] = []
    for _ in range(ROUNDS):
        hit = _strongest(cleaned, noise.sigma, kernel)
        if hit is None:
            break
        at, amplitude = hit
        cleaned[at : at + kernel.size] -= amplitude * kernel
        found.append(at + kernel.size // 2)
    return tuple(found), cleaned


def _strongest(derivative: FloatArray, sigma: FloatArray, kernel: FloatArray) -> tuple[int, float] | None:
    """Start and amplitude of the clearest response, None when there is none."""
    m = kernel.size
    pad = max(2, m // 2)
    windows = np.lib.stride_tricks.sliding_window_view(derivative, m + 2 * pad)
    shape = np.pad(kernel, pad)
    level = windows - np.median(windows, axis=1, keepdims=True)
    amplitude = level @ shape
    local = sigma[pad : pad + windows.shape[0]]
    energy = np.maximum(np.sum(level**2, axis=1), 1e-300)
    # one channel of white noise enters with sigma; the response to a spike of height h is h times the kernel
    strong = (np.abs(amplitude) > THRESHOLD * local) & (amplitude**2 > LIKENESS * energy)
    for at in np.flatnonzero(strong)[np.argsort(-np.abs(amplitude[strong]))][:3]:
        rest = energy[at] - amplitude[at] ** 2
        if rest < BETTER * _best_line_rest(level[at], pad, m):
            return int(at) + pad, float(amplitude[at])
    return None


def _best_line_rest(level: FloatArray, pad: int, m: int) -> float:
    """What the best asymmetric differential line leaves over of a stretch; a line falls deeper than it rises."""
    x = np.arange(level.size, dtype=float)
    best = float(level @ level)
    for sigma in (0.8, 1.2, 1.7, 2.4, 3.4, 4.8):
        for centre in np.arange(pad, pad + m, 0.5):
            line = line_shape(x - centre, sigma)
            product = float(line @ level)
            if product > 0:
                best = min(best, float(level @ level) - product**2 / float(line @ line))
    return best
