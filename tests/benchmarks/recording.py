"""How a spectrum is recorded: counts, dwell, blemishes, and the differential kinds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from scipy.signal import oaconvolve

from .shapes import FloatArray

Mode = Literal["direct", "modulated", "difference"]


@dataclass(frozen=True, kw_only=True)
class Recording:
    """What the operator and his instrument did."""

    resolution: float  # of the analyser, relative
    mode: Mode
    times_energy: bool  # E·N(E) rather than N(E)
    unit: Literal["counts", "per second", "normalised"]
    signal_to_noise: float  # strongest line's height over the noise of one channel
    dwell_s: float
    modulation_ev: float  # width of the differential filter, standard deviation
    upside_down: bool
    gains: tuple[float, ...]  # relative dwell, one a window
    spikes: int
    dead: int


@dataclass(frozen=True, kw_only=True, eq=False)
class Taken:
    """What came out, and what it would have been without noise."""

    values: tuple[FloatArray, ...]  # one a window
    shapes: FloatArray  # (lines, n): each line alone, as recorded before noise
    cores: FloatArray  # (lines, n): the same without losses
    noise: FloatArray  # (n,) standard deviation of independent noise on the same scale
    notes: tuple[str, ...]


def draw_recording(rng: np.random.Generator, *, windows: int, blemishes: bool) -> Recording:
    """Draw a recording, from good surveys to poor short scans."""
    mode: Mode = "direct"
    if rng.random() < 0.25:
        mode = "modulated" if rng.random() < 0.5 else "difference"
    unit: Literal["counts", "per second", "normalised"] = "counts"
    if rng.random() < 0.55:
        unit = "per second" if rng.random() < 0.6 else "normalised"
    return Recording(
        resolution=rng.uniform(0.003, 0.008),
        mode=mode,
        times_energy=rng.random() < (0.5 if mode == "direct" else 0.8),
        unit=unit,
        signal_to_noise=np.exp(rng.uniform(np.log(12.0), np.log(300.0))),
        dwell_s=rng.choice([0.02, 0.05, 0.1, 0.2, 0.5]),
        modulation_ev=rng.uniform(1.2, 2.5),
        upside_down=mode != "direct" and rng.random() < 0.25,
        gains=tuple(np.exp(rng.normal(0.0, 0.4, windows))) if windows > 1 else (1.0,),
        spikes=int(rng.integers(1, 4)) if blemishes and rng.random() < 0.35 else 0,
        dead=int(rng.integers(1, 3)) if blemishes and rng.random() < 0.15 else 0,
    )


def record(
    rng: np.random.Generator,
    axes_ev: tuple[FloatArray, ...],
    how: Recording,
    *,
    base: FloatArray,
    shapes: FloatArray,
    cores: FloatArray,
) -> Taken:
    """Record background and lines (both in E·N(E)); `base` is (n,), `shapes` and `cores` (lines, n)."""
    energy = np.concatenate(axes_ev)
    gain = np.concatenate([np.full(axis.size, factor) for axis, factor in zip(axes_ev, how.gains, strict=True)])
    if not how.times_energy:
        gain = gain * 500.0 / energy
    gain = gain * _counts_per_unit(rng, energy, base, shapes, how)
    expected = (base + shapes.sum(axis=0)) * gain
    noise = np.sqrt(np.maximum(expected, 1.0))
    notes = [how.mode, "E·N(E)" if how.times_energy else "N(E)", how.unit]
    shapes, cores = shapes * gain, cores * gain
    if how.mode == "modulated":
        shapes, cores, expected = (_modulate(part, axes_ev, how.modulation_ev) for part in (shapes, cores, expected))
        # the lock-in sees the counting noise of its channels over the modulation width
        step = float(np.median(np.diff(axes_ev[0])))
        noise = noise / (how.modulation_ev * np.sqrt(2.0 * how.modulation_ev / step))
        joined = expected + _blemish(rng, rng.normal(0.0, noise), noise, how, notes)
    else:
        counts = rng.poisson(expected).astype(np.float64)
        joined = np.maximum(np.round(_blemish(rng, counts, noise, how, notes)), 0.0)
    values = _differentiate(_split(joined, axes_ev), axes_ev, how)
    if how.upside_down:
        notes.append("upside down")
        values = [-part for part in values]
    return Taken(values=_in_units(values, how), shapes=shapes, cores=cores, noise=noise, notes=tuple(notes))


def _split(values: FloatArray, axes_ev: tuple[FloatArray, ...]) -> list[FloatArray]:
    """Cut along the last axis into windows."""
    return np.split(values, np.cumsum([axis.size for axis in axes_ev])[:-1], axis=-1)


def _differentiate(values: list[FloatArray], axes_ev: tuple[FloatArray, ...], how: Recording) -> list[FloatArray]:
    if how.mode == "difference":
        return [_difference(part, axis, how.modulation_ev) for part, axis in zip(values, axes_ev, strict=True)]
    if how.mode == "modulated":
        return [_time_constant(part) for part in values]
    return values


def _counts_per_unit(
    rng: np.random.Generator, energy: FloatArray, base: FloatArray, shapes: FloatArray, how: Recording
) -> float:
    """Return the counts per unit that give the strongest line its signal-to-noise."""
    if not shapes.size:
        return float(np.exp(rng.uniform(np.log(30.0), np.log(3e5))) / np.median(base))
    weight = 1.0 if how.times_energy else 500.0 / energy
    best = float(np.max(shapes * np.sqrt(weight / (base + shapes.sum(axis=0)))))
    return (how.signal_to_noise / max(best, 1e-6)) ** 2


def _modulate(values: FloatArray, axes_ev: tuple[FloatArray, ...], sigma_ev: float) -> FloatArray:
    """Differentiate along the last axis with a Gaussian window; window edges are continued straight."""
    if not values.size:
        return values
    rows = np.atleast_2d(values)
    parts = []
    for part, axis in zip(_split(rows, axes_ev), axes_ev, strict=True):
        step = float(axis[1] - axis[0])
        reach = int(np.ceil(4 * sigma_ev / step))
        x = np.arange(-reach, reach + 1) * step
        kernel = x * np.exp(-0.5 * (x / sigma_ev) ** 2)
        kernel = kernel[::-1] / (kernel * x).sum()
        left = 2 * part[:, :1] - part[:, reach:0:-1]
        right = 2 * part[:, -1:] - part[:, -2 : -reach - 2 : -1]
        parts.append(oaconvolve(np.concatenate([left, part, right], axis=1), kernel[None], mode="valid", axes=1))
    return np.concatenate(parts, axis=1).reshape(values.shape)


def _time_constant(values: FloatArray) -> FloatArray:
    """Smear along the scan as a lock-in does: half a channel of time constant; neighbours then correlate."""
    return np.convolve(np.concatenate([values[:2], values, values[-1:]]), [0.05, 0.65, 0.25, 0.05], mode="valid")


def _difference(values: FloatArray, axis: FloatArray, sigma_ev: float) -> FloatArray:
    """Differentiate by the least-squares line over a few points, as a recording program does."""
    step = float(axis[1] - axis[0])
    half = max(1, round(1.2 * sigma_ev / step))
    x = np.arange(-half, half + 1) * step
    weights = x / (x**2).sum()
    left, right = 2 * values[0] - values[half:0:-1], 2 * values[-1] - values[-2 : -half - 2 : -1]
    padded = np.concatenate([left, values, right])
    return np.convolve(padded, weights[::-1], mode="valid")


def _blemish(
    rng: np.random.Generator, values: FloatArray, noise: FloatArray, how: Recording, notes: list[str]
) -> FloatArray:
    """Add spikes of one channel and dead points of one or two."""
    out = values.copy()
    for _ in range(how.spikes):
        at = int(rng.integers(3, values.size - 3))
        out[at] += rng.uniform(10.0, 60.0) * noise[at] * (1.0 if rng.random() < 0.8 else -1.0)
        notes.append(f"spike at point {at}")
    for _ in range(how.dead):
        at, wide = int(rng.integers(3, values.size - 3)), int(rng.integers(1, 3))
        out[at : at + wide] = 0.0
        notes.append(f"dead at point {at}")
    return out


def _in_units(values: list[FloatArray], how: Recording) -> tuple[FloatArray, ...]:
    if how.unit == "per second":
        return tuple(part / how.dwell_s for part in values)
    if how.unit == "normalised":
        top = max(float(np.abs(part).max()) for part in values) or 1.0
        return tuple(part / top for part in values)
    return tuple(values)
