"""Noise of a window: how large at each energy, and how neighbouring channels hang together.

Counting noise grows with the ordinate, with an unknown gain when the ordinate is not counts. What was smoothed
or differentiated by software has correlated noise: differences over one channel then look too small, so the
noise is measured by third differences over several spacings and the kernel that explains them is kept.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

from ..spectrum import FloatArray

THIRD_DIFFERENCE = np.array([-1.0, 3.0, -3.0, 1.0])
SPACINGS = (1, 2, 3, 4, 6, 9)
NORMAL_MEDIAN = 0.6745  # median of |x| for a standard normal
BLOCK = 24
OTHER_COLUMN = 0.1
LEAST_NOISE = 1e-5  # of the largest ordinate: nobody counts more than 1e10 electrons a channel
COARSE, FEW_STEPS = 0.6, 20.0  # of its noise to its smallest step; below so many steps, counts are few, not rounded
SHORT = 150  # channels; a window this short may be mostly line
NORMAL_THIRD = 0.3853  # 30 % quantile of |x| for a standard normal
IndexArray = NDArray[np.int64]


@dataclass(frozen=True, kw_only=True, eq=False)
class NoiseModel:
    """Noise of one window: channel noise (n,) and the kernel that white noise went through."""

    sigma: FloatArray  # standard deviation of each channel, units of the ordinate
    kernel: FloatArray  # normalised so that its squares sum to one; [1] for white noise

    def gain_of(self, weights: FloatArray) -> float:
        """Noise of a filter's output per unit of channel noise; `weights` are the filter's, (m,)."""
        return float(np.sqrt(np.sum(np.convolve(weights, self.kernel) ** 2)))


@dataclass(frozen=True, kw_only=True, eq=False)
class NoiseKernel:
    """What white noise went through: weights whose squares sum to one, and channel noise over what third
    differences of neighbouring channels suggest.
    """

    weights: FloatArray
    factor: float


WHITE = NoiseKernel(weights=np.ones(1), factor=1.0)


def estimate_noise(
    energy_ev: FloatArray, intensity: FloatArray, *, derivative: bool, kernel: NoiseKernel | None = None
) -> NoiseModel:
    """Estimate noise and its correlation for one evenly stepped window; (n,) eV and (n,) ordinates.

    The kernel is found from this window when none is given.
    """
    shape = _variance_columns(energy_ev, intensity, derivative=derivative)
    first = np.abs(_third_difference(intensity, 1))
    block = min(BLOCK, max(8, first.size // 4))
    count = first.size // block
    blocked = first[: count * block].reshape(count, block)
    # the quiet part of each block: a line's slopes must not count as noise
    part, normal = (0.5, NORMAL_MEDIAN) if first.size > SHORT else (0.3, NORMAL_THIRD)
    variance = (np.quantile(blocked, part, axis=1) / normal) ** 2 / 20.0
    centre = np.arange(count) * block + block // 2 + 1
    weights = _fit_variance(variance, [column[centre] for column in shape])
    model = np.sum([w * column for w, column in zip(weights, shape, strict=True)], axis=0)
    model = np.maximum(model, 1e-4 * float(np.max(model)) + _smallest(intensity))
    if kernel is None:
        kernel = shared_kernel([intensity], [np.sqrt(model)], derivative=derivative)
    excess = _local_excess(variance, model[centre], intensity.size, centre)
    sigma = np.sqrt(model * excess) * kernel.factor
    return NoiseModel(sigma=np.maximum(sigma, _rounding(intensity, sigma)), kernel=kernel.weights)


def _smallest(intensity: FloatArray) -> float:
    span = float(np.max(np.abs(intensity)))
    return (LEAST_NOISE * span) ** 2 + 1e-300


def _rounding(intensity: FloatArray, sigma: FloatArray) -> float:
    """Least noise of data rounded more coarsely than they are noisy: their steps would pass for lines otherwise."""
    moves = np.abs(np.diff(intensity))
    step = float(np.min(moves[moves > 0], initial=np.inf))
    coarse = np.isfinite(step) and np.median(sigma) < COARSE * step
    return step if coarse and float(np.max(np.abs(intensity))) > FEW_STEPS * step else 0.0


def _third_difference(values: FloatArray, spacing: int) -> FloatArray:
    s = spacing
    return values[3 * s :] - 3.0 * values[2 * s : -s] + 3.0 * values[s : -2 * s] - values[: -3 * s]


def _variance_columns(energy_ev: FloatArray, intensity: FloatArray, *, derivative: bool) -> list[FloatArray]:
    """What the variance may be proportional to, likeliest first: the ordinate, a constant, the ordinate over energy.

    A differential is integrated back for it, with and without an offset taken off; where that fails, a power of
    the energy stands in for the foot of the secondary edge.
    """
    if not derivative:
        curve = np.convolve(np.pad(intensity, 4, mode="edge"), np.ones(9) / 9.0, mode="valid")
        level = _level(np.maximum(curve, 0.0))
        slanted = level / energy_ev
        return [level, np.ones_like(level), slanted / float(np.max(slanted))]
    step = float(energy_ev[1] - energy_ev[0])
    offsets = (0.0, float(np.median(intensity)))
    curves = [np.cumsum(intensity - offset) * step for offset in offsets]
    foot = (float(energy_ev[0]) / energy_ev) ** 2.5
    return [*(_level(curve - float(np.min(curve))) for curve in curves), np.ones_like(foot), foot]


def _level(curve: FloatArray) -> FloatArray:
    top = float(np.max(curve))
    return np.maximum(curve, 1e-3 * top) / top if top > 0 else np.ones_like(curve)


def _fit_variance(variance: FloatArray, columns: list[FloatArray]) -> FloatArray:
    """Non-negative weights of the columns, least squares in relative error, blocks full of lines left out."""
    keep = np.ones(variance.size, dtype=bool)
    best: FloatArray = np.zeros(len(columns))
    best[0] = float(np.median(variance))
    floor = 1e-12 * float(np.max(variance)) + 1e-300
    scale = np.maximum(_smoothed(variance), floor)
    for _ in range(3):
        best = _best_subset(variance, columns, keep, scale)
        fitted = np.sum([w * c for w, c in zip(best, columns, strict=True)], axis=0)
        ratio = variance / np.maximum(fitted, floor)
        # weights come from the fit and not from the blocks: dividing by scattered values would pull it down
        scale = np.maximum(fitted, floor)
        best = best * float(np.median(ratio[keep]))
        keep = (ratio < 2.5 * max(1.0, float(np.median(ratio)))) & (ratio > 0.1)
        if np.count_nonzero(keep) < 3:
            break
    return best


def _smoothed(variance: FloatArray) -> FloatArray:
    """Medians of five blocks, so that a block on a line does not count."""
    if variance.size < 5:
        return np.full(variance.size, float(np.median(variance)))
    padded = np.pad(variance, 2, mode="edge")
    return np.median(np.stack([padded[k : k + variance.size] for k in range(5)]), axis=0)


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
            misfit = float(np.sum(np.abs(design @ weights - variance[keep] / scale[keep])))
            misfit *= 1.0 + OTHER_COLUMN * sum(k > 0 for k in subset)  # counting noise unless the data speak against it
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
        padded = np.pad(ratio, 1, mode="reflect")
        ratio = np.median(np.stack([padded[:-2], padded[1:-1], padded[2:]]), axis=0)
    excess: FloatArray = np.interp(np.arange(size), centre, ratio)
    return np.where(excess > 2.2, excess, 1.0)


def shared_kernel(
    windows: Sequence[FloatArray], sigmas: Sequence[FloatArray] | None = None, *, derivative: bool
) -> NoiseKernel:
    """Kernel that the noise of windows (n,) of one step went through, each window evenly stepped.

    `sigmas` are the channels' noises, up to a factor, where they are known already.

    Lines add to what third differences over wide spacings show, and never take from it, so of several windows
    the one that shows least counts, and in each the quiet quarter of its channels.
    """
    scales = sigmas if sigmas is not None else [np.ones_like(values) for values in windows]
    pairs = zip(windows, scales, strict=True)
    ratios = [ratio for ratio in (_spreads(values, sigma) for values, sigma in pairs) if ratio is not None]
    if not ratios:
        return WHITE
    most = max(ratio.size for ratio in ratios)
    observed = np.min(np.stack([np.pad(r, (0, most - r.size), constant_values=np.inf) for r in ratios]), axis=0)
    if observed[1] < np.log(1.25):
        return WHITE
    best, lowest = WHITE, np.inf
    for kernel, spread, factor in _kernels(derivative):
        gap = observed - spread[: observed.size]
        misfit = float(np.sum(np.where(gap < 0, 3.0 * gap**2, np.minimum(gap**2, 0.5))))
        if misfit < lowest:
            best, lowest = NoiseKernel(weights=kernel, factor=factor), misfit
    return best


def _spreads(values: FloatArray, sigma: FloatArray) -> FloatArray | None:
    """Ln of what third differences over each spacing show, relative to spacing one; None if too short."""
    seen = []
    for spacing in SPACINGS:
        difference = np.abs(_third_difference(values, spacing))
        difference = difference / sigma[3 * spacing // 2 :][: difference.size]
        if difference.size < 24:
            break
        seen.append(float(np.quantile(difference, 0.25)))
    if len(seen) < 3 or min(seen) <= 0:
        return None
    return np.log(np.array(seen) / seen[0])


@cache
def _kernels(derivative: bool) -> tuple[tuple[FloatArray, FloatArray, float], ...]:
    raw = [np.ones(1), np.array([1.0, 2.0, 1.0]), np.ones(3), np.array([1.0, 4.0, 6.0, 4.0, 1.0])]
    raw.extend(np.ones(span) for span in (5, 7, 9, 13))
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
