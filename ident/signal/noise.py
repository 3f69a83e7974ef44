"""Noise of a window: how large at each energy, and how neighbouring channels hang together.

Counting noise grows with the ordinate, with an unknown gain when the ordinate is not counts. What was smoothed
or differentiated by software has correlated noise: differences over one channel then look too small, so the
noise is measured by third differences over several spacings and the kernel that explains them is kept.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

from ..spectrum import FloatArray

THIRD_DIFFERENCE = np.array([-1.0, 3.0, -3.0, 1.0])
SPACINGS = (1, 2, 3, 4, 6, 9)
NORMAL_MEDIAN = 0.6745  # median of |x| for a standard normal
BLOCK = 32
IndexArray = NDArray[np.int64]


@dataclass(frozen=True, kw_only=True, eq=False)
class NoiseModel:
    """Noise of one window: channel noise (n,) and the kernel that white noise went through."""

    sigma: FloatArray  # standard deviation of each channel, units of the ordinate
    kernel: FloatArray  # normalised so that its squares sum to one; [1] for white noise

    def gain_of(self, weights: FloatArray) -> float:
        """Noise of a filter's output per unit of channel noise; `weights` are the filter's, (m,)."""
        return float(np.sqrt(np.sum(np.convolve(weights, self.kernel) ** 2)))


def estimate_noise(energy_ev: FloatArray, intensity: FloatArray, *, derivative: bool) -> NoiseModel:
    """Estimate noise and its correlation for one evenly stepped window; (n,) eV and (n,) ordinates."""
    shape = _variance_columns(energy_ev, intensity, derivative=derivative)
    first = np.abs(_third_difference(intensity, 1))
    block = min(BLOCK, max(8, first.size // 4))
    count = first.size // block
    blocked = first[: count * block].reshape(count, block)
    variance = (np.median(blocked, axis=1) / NORMAL_MEDIAN) ** 2 / 20.0
    centre = np.arange(count) * block + block // 2 + 1
    weights = _fit_variance(variance, [column[centre] for column in shape])
    model = np.sum([w * column for w, column in zip(weights, shape, strict=True)], axis=0)
    model = np.maximum(model, 1e-4 * float(np.max(model)) + _smallest(intensity))
    kernel, factor = _correlation(intensity, np.sqrt(model), derivative=derivative)
    excess = _local_excess(variance, model[centre], intensity.size, centre)
    return NoiseModel(sigma=np.sqrt(model * excess) * factor, kernel=kernel)


def _smallest(intensity: FloatArray) -> float:
    span = float(np.max(np.abs(intensity)))
    return (1e-7 * span) ** 2 + 1e-300


def _third_difference(values: FloatArray, spacing: int) -> FloatArray:
    s = spacing
    return values[3 * s :] - 3.0 * values[2 * s : -s] + 3.0 * values[s : -2 * s] - values[: -3 * s]


def _variance_columns(energy_ev: FloatArray, intensity: FloatArray, *, derivative: bool) -> list[FloatArray]:
    """What the variance may be proportional to: a constant, the ordinate, the ordinate over energy."""
    if derivative:
        curve = np.cumsum(intensity - np.median(intensity)) * (energy_ev[1] - energy_ev[0])
        curve = curve - np.min(curve)
    else:
        curve = np.convolve(np.pad(intensity, 4, mode="edge"), np.ones(9) / 9.0, mode="valid")
        curve = np.maximum(curve, 0.0)
    top = float(np.max(curve))
    level = np.maximum(curve, 1e-3 * top) / top if top > 0 else np.ones_like(curve)
    slanted = level / energy_ev
    return [np.ones_like(level), level, slanted / float(np.max(slanted))]


def _fit_variance(variance: FloatArray, columns: list[FloatArray]) -> FloatArray:
    """Non-negative weights of the columns, least squares in relative error, blocks full of lines left out."""
    keep = np.ones(variance.size, dtype=bool)
    best = np.zeros(len(columns))
    best[0] = float(np.median(variance))
    floor = 1e-12 * float(np.max(variance)) + 1e-300
    for _ in range(3):
        scale = np.maximum(variance, floor)
        best = _best_subset(variance, columns, keep, scale)
        fitted = np.sum([w * c for w, c in zip(best, columns, strict=True)], axis=0)
        ratio = variance / np.maximum(fitted, floor)
        keep = (ratio < 2.5 * max(1.0, float(np.median(ratio)))) & (ratio > 0.1)
        if np.count_nonzero(keep) < 3:
            break
    return best


def _best_subset(variance: FloatArray, columns: list[FloatArray], keep: np.ndarray, scale: FloatArray) -> FloatArray:
    best, lowest = np.zeros(len(columns)), np.inf
    for size in (1, 2):
        for subset in combinations(range(len(columns)), size):
            if np.count_nonzero(keep) < 2 * size:
                continue
            design = np.stack([columns[k][keep] / scale[keep] for k in subset], axis=1)
            weights, *_ = np.linalg.lstsq(design, variance[keep] / scale[keep], rcond=None)
            if np.any(weights < 0):
                continue
            misfit = float(np.sum(np.abs(design @ weights - variance[keep] / scale[keep]))) * (1.0 + 0.05 * size)
            if misfit < lowest:
                lowest = misfit
                best = np.zeros(len(columns))
                best[list(subset)] = weights
    if not np.isfinite(lowest):
        best[0] = float(np.median(variance))
    return best


def _local_excess(variance: FloatArray, model: FloatArray, size: int, centre: IndexArray) -> FloatArray:
    """Where blocks are noisier than the model over some width, believe the blocks (up to twice the noise)."""
    ratio = np.clip(variance / model, 1.0, 4.0)
    if ratio.size >= 3:
        padded = np.pad(ratio, 1, mode="edge")
        ratio = np.sort(np.stack([padded[:-2], padded[1:-1], padded[2:]]), axis=0)[0]
    excess: FloatArray = np.interp(np.arange(size), centre, ratio)
    return np.where(excess > 1.6, excess, 1.0)


def _correlation(values: FloatArray, sigma: FloatArray, *, derivative: bool) -> tuple[FloatArray, float]:
    """Kernel of the noise, and channel noise over what third differences of spacing one suggest."""
    normal = values / sigma
    seen = []
    for spacing in SPACINGS:
        if 3 * spacing + 12 > normal.size:
            break
        seen.append(float(np.median(np.abs(_third_difference(normal, spacing)))) / NORMAL_MEDIAN / np.sqrt(20.0))
    if len(seen) < 3 or seen[0] <= 0 or seen[1] < 1.25 * seen[0]:
        return np.ones(1), 1.0
    observed = np.log(np.array(seen) / seen[0])
    best, lowest = (np.ones(1), 1.0), np.inf
    for kernel, spread, factor in _kernels(derivative):
        gap = observed - spread[: observed.size]
        # Lines add to what wide spacings show, so an excess is forgiven more than a lack.
        misfit = float(np.sum(np.where(gap < 0, 3.0 * gap**2, np.minimum(gap**2, 0.5))))
        if misfit < lowest:
            best, lowest = (kernel, factor), misfit
    return best


@cache
def _kernels(derivative: bool) -> tuple[tuple[FloatArray, FloatArray, float], ...]:
    raw = [np.ones(1), np.array([1.0, 2.0, 1.0]), np.ones(3), np.array([1.0, 4.0, 6.0, 4.0, 1.0]), np.ones(5)]
    raw.extend(part ** np.arange(40.0) for part in (0.15, 0.25, 0.35, 0.45, 0.55, 0.65, 0.75, 0.85))  # time constant
    for half in range(2, 13):
        x = np.arange(-half, half + 1, dtype=float)
        raw.append(1.0 - x**2 * 5.0 / (3.0 * half**2 + 3.0 * half - 1.0))  # Savitzky-Golay, smoothing, parabola
        if derivative:
            raw.append(x)  # Savitzky-Golay, slope
            raw.append(x * np.exp(-0.5 * (2.5 * x / half) ** 2))
    if derivative:
        raw.append(np.array([1.0, 0.0, -1.0]))
        raw.append(np.array([1.0, -1.0]))
    out = []
    for weights in raw:
        kernel = weights / np.sqrt(np.sum(weights**2))
        spread = []
        for spacing in SPACINGS:
            difference = np.zeros(3 * spacing + 1)
            difference[::spacing] = THIRD_DIFFERENCE
            spread.append(np.sqrt(np.sum(np.convolve(kernel, difference) ** 2) / 20.0))
        out.append((kernel, np.log(np.array(spread) / spread[0]), 1.0 / spread[0]))
    return tuple(out)
