"""The slope of the background under the lines, steep near the secondary edge, flat above."""

from __future__ import annotations

import numpy as np

from ..spectrum import FloatArray

STEEP_BELOW_EV = 250.0
ROUNDS = 8


def slope_baseline(energy_ev: FloatArray, derivative: FloatArray, noise: FloatArray) -> FloatArray:
    """Background of a differential spectrum: a power series in 1/E that lines do not pull; (n,) each.

    Only the steep part, up to 250 eV, is fitted; above it the background is left in, since a line's filter
    sees through a constant and a line. Windows that start above 130 eV or are shorter than 40 eV get zero.
    """
    baseline = np.zeros_like(derivative)
    top = int(np.searchsorted(energy_ev, STEEP_BELOW_EV))
    if energy_ev[0] > 130.0 or top < 30 or energy_ev[top - 1] - energy_ev[0] < 40.0:
        return baseline
    start = int(np.searchsorted(energy_ev, energy_ev[0] + 2.0))
    x = energy_ev[start:top] / energy_ev[start]
    y = derivative[start:top]
    powers = 5 if energy_ev[0] < 70.0 else 3
    design = np.stack([x ** (-1.0 * k) for k in range(powers)], axis=1)
    rest = np.maximum(noise[start:top], 1e-300)
    scale = np.hypot(rest, 0.02 * np.abs(y))
    weight = 1.0 / scale
    fit = y
    for _ in range(ROUNDS):
        weights, *_ = np.linalg.lstsq(design * weight[:, None], y * weight, rcond=None)
        fit = design @ weights
        scale = np.hypot(rest, 0.01 * np.abs(fit))
        off = (y - fit) / scale
        spread = max(1.0, float(np.median(np.abs(off))) / 0.6745)
        weight = 1.0 / scale / (1.0 + (off / (2.0 * spread)) ** 2)
    baseline[start:top] = fit
    baseline[:start] = fit[0]
    # fade out so that no step is left where the fit ends
    width = energy_ev[top - 1] - energy_ev[start]
    fade = np.clip((energy_ev[top - 1] - energy_ev[:top]) / (0.4 * width), 0.0, 1.0)
    baseline[:top] *= fade * fade * (3.0 - 2.0 * fade)
    return baseline
