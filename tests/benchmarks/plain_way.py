"""The plain way, to compare with: each derivative minimum is the element whose principal line is nearest."""

from __future__ import annotations

import numpy as np
from scipy.ndimage import median_filter
from scipy.signal import savgol_coeffs, savgol_filter

from ident.spectrum import Spectrum, Window

from .published import published_lines
from .shapes import FloatArray

NOISE_WIDTHS = 6.0
WITHIN_EV = 5.0
SMOOTH_EV = 6.0  # width of the Savitzky-Golay parabola
BASELINE_EV = 60.0  # running median that the depth is counted from
PRINCIPAL = 0.9  # relative height from which a line is a principal one (0.5 gives a lower F1)


def call_plainly(spectrum: Spectrum) -> dict[str, float]:
    """Return the elements called, each with probability 1."""
    called = {}
    for window in spectrum.windows:
        for energy in find_plain_minima(window):
            element = nearest_principal(energy)
            if element is not None:
                called[element] = 1.0
    return called


def find_plain_minima(window: Window) -> FloatArray:
    """Return the energies in eV of the minima deeper than six noise widths."""
    energy, values = window.energy_ev, window.intensity
    if energy.size < 20:
        return np.empty(0)
    points = max(5, 2 * round(SMOOTH_EV / window.step_ev / 2) + 1)
    if np.count_nonzero(values < 0) > 2:  # counts are never negative: recorded as a derivative
        slope, noise = values, np.full(values.size, _spread(np.diff(values, 2)) / np.sqrt(6.0))
    else:
        smooth = savgol_filter(values, points, 2)
        slope = savgol_filter(values, points, 2, deriv=1, delta=window.step_ev)
        root = np.sqrt(np.maximum(smooth, 1e-3 * smooth.max()))
        gain = _spread((values - smooth) / root)
        noise = gain * root * np.linalg.norm(savgol_coeffs(points, 2, deriv=1, delta=window.step_ev))
    depth = median_filter(slope, size=round(BASELINE_EV / window.step_ev) | 1, mode="nearest") - slope
    middle = depth[1:-1]
    peak = (middle >= depth[:-2]) & (middle > depth[2:]) & (middle > NOISE_WIDTHS * noise[1:-1])
    return energy[1:-1][peak]


def nearest_principal(energy_ev: float) -> str | None:
    """Return the element with the nearest principal published line within 5 eV."""
    nearest = min(
        (abs(line.energy_ev - energy_ev), element)
        for element, lines in published_lines().items()
        for line in lines
        if line.relative_height >= PRINCIPAL
    )
    return nearest[1] if nearest[0] <= WITHIN_EV else None


def _spread(values: FloatArray) -> float:
    """Return a robust standard deviation."""
    return float(1.4826 * np.median(np.abs(values - np.median(values)))) or 1e-12
