"""Is a spectrum direct or differential, and if differential, is it the right way up?"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ..spectrum import FloatArray, Spectrum, Window


def settle_kind(spectrum: Spectrum) -> tuple[Spectrum, tuple[str, ...]]:
    """Decide the kind where it is "auto" and turn a differential recorded upside down; say what was done."""
    notes: list[str] = []
    kind = spectrum.kind
    if kind == "auto":
        votes = [(_looks_derivative(window.intensity), window.energy_ev.size) for window in spectrum.windows]
        derivative = sum(size for yes, size in votes if yes) > sum(size for yes, size in votes if not yes)
        kind = "derivative" if derivative else "direct"
    windows = spectrum.windows
    if kind == "derivative" and _upside_down(windows):
        windows = tuple(Window(energy_ev=w.energy_ev, intensity=-w.intensity) for w in windows)
        notes.append("the differential spectrum was recorded upside down and has been turned over")
    return replace(spectrum, kind=kind, windows=windows), tuple(notes)


def _looks_derivative(values: FloatArray) -> bool:
    """Differential data swing about a level; direct data stand above zero."""
    low, tenth, middle, ninetieth, high = np.percentile(values, [0.5, 10.0, 50.0, 90.0, 99.5])
    span = high - low
    if span <= 0:
        return False
    if np.count_nonzero(values < 0) > 0.05 * values.size:
        return True
    band = (ninetieth - tenth) / span
    return bool(band < 0.25 and middle - low > 0.3 * span)


def _upside_down(windows: tuple[Window, ...]) -> bool:
    """Under a line the curve rises, then falls deeper: with energy the positive lobe comes first."""
    right = wrong = 0.0
    for window in windows:
        values = window.intensity - np.median(window.intensity)
        energy = window.energy_ev
        keep = energy > min(45.0, float(energy[0]) + 0.3 * float(energy[-1] - energy[0]))
        values, energy = values[keep], energy[keep]
        if values.size < 12:
            continue
        step = float(np.median(np.diff(energy)))
        half = max(2, round(4.0 / step))
        lag = max(1, round(half * 0.8))
        smooth = np.convolve(values, np.ones(max(1, half // 2)) / max(1, half // 2), mode="same")
        pair = smooth[:-lag] - smooth[lag:]  # positive lobe below, negative lobe above
        size = np.sort(np.abs(pair))[::-1][: max(4, pair.size // 40)].min()
        # depth against lobe tells the two apart where a steep background does not
        low, high = smooth[:-lag], smooth[lag:]
        right += float(np.sum(np.clip(pair - size, 0, None) * np.clip(-high - 0.5 * low, 0, None)))
        wrong += float(np.sum(np.clip(-pair - size, 0, None) * np.clip(low - 0.5 * np.abs(high), 0, None)))
        right += float(np.sum(np.clip(-values, 0, None) ** 3))
        wrong += float(np.sum(np.clip(values, 0, None) ** 3))
    edge = _edge_slope(windows)
    return edge > 0 if edge else wrong > 1.5 * right


def _edge_slope(windows: tuple[Window, ...]) -> int:
    """Sign of the differential at the foot of the secondary edge, where N(E) always falls; 0 when not scanned."""
    energy, values = windows[0].energy_ev, windows[0].intensity
    foot = (energy < 60.0) & (energy < energy[0] + 15.0)
    rest = (energy > 90.0) & (energy < 250.0)
    if np.count_nonzero(foot) < 6 or np.count_nonzero(rest) < 20:
        return 0
    level = float(np.median(values[rest]))
    swing = 1.4826 * float(np.median(np.abs(values[rest] - level)))
    rise = float(np.median(values[foot])) - level
    return int(np.sign(rise)) if abs(rise) > 4.0 * swing else 0
