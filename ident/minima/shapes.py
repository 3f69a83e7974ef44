"""The filters that look for differential lines."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ..signal.lines import ASYMMETRY, line_shape
from ..spectrum import FloatArray

SIGMAS_EV = (0.85, 1.15, 1.55, 2.1, 2.8, 3.75, 5.0, 6.7, 9.0)


@dataclass(frozen=True, kw_only=True, eq=False)
class Bank:
    """Filters of several widths for one step; all have 2 * half + 1 channels."""

    sigmas_ev: FloatArray  # (w,)
    shapes: FloatArray  # (w, m) the lines themselves
    filters: FloatArray  # (w, m), orthogonal to a background, correlation gives the depth
    half: int
    overlap: FloatArray  # (w, w, 2 m - 1): what a line of width i leaves in filter j at each lag


@lru_cache(maxsize=32)
def filter_bank(step_ev: float, channels: int, parabola: bool) -> Bank:
    """Filters for a step (eV) in a window of so many channels; steep backgrounds need the parabola."""
    widest = max(0.12 * channels * step_ev, 1.6 * step_ev)
    sigmas = np.array([s for s in SIGMAS_EV if 0.62 * step_ev <= s <= widest] or [max(step_ev, SIGMAS_EV[0])])
    reach = [_support(s, step_ev) for s in sigmas]
    half = max(max(-low, high) for low, high in reach)
    x = np.arange(-half, half + 1) * step_ev
    shapes = np.stack([line_shape(x, float(s)) for s in sigmas])
    filters = np.zeros_like(shapes)
    for k, (low, high) in enumerate(reach):
        inside = slice(half + low, half + high + 1)
        powers = np.stack([np.linspace(-1.0, 1.0, high - low + 1) ** p for p in range(3 if parabola else 2)])
        base, _ = np.linalg.qr(powers.T)
        part = shapes[k, inside]
        part = part - base @ (base.T @ part)
        filters[k, inside] = part / float(part @ part)
    m = 2 * half + 1
    overlap = np.zeros((sigmas.size, sigmas.size, 2 * m - 1))
    for i in range(sigmas.size):
        for j in range(sigmas.size):
            overlap[i, j] = np.convolve(shapes[i], filters[j][::-1])
    return Bank(sigmas_ev=sigmas, shapes=shapes, filters=filters, half=half, overlap=overlap)


def _support(sigma_ev: float, step_ev: float) -> tuple[int, int]:
    low = -int(np.ceil((3.1 * ASYMMETRY + 1.0) * sigma_ev * 0.8 / step_ev))
    high = int(np.ceil(2.4 * sigma_ev / step_ev))
    return min(low, -3), max(high, 3)
