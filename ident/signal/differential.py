"""The differential spectrum of one window on an even grid, with its noise."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..spectrum import FloatArray, Window
from .bursts import remove_bursts
from .noise import NoiseKernel, NoiseModel, estimate_noise, shared_kernel
from .spikes import Spike, find_spikes
from .widths import usual_sigma_ev


@dataclass(frozen=True, kw_only=True, eq=False)
class Differential:
    """dN/dE of one window, evenly stepped; noise of any filter on it by `filter_noise`."""

    energy_ev: FloatArray  # (n,)
    derivative: FloatArray  # (n,), ordinate per eV; a recorded differential in its own units
    sigma: FloatArray  # (n,) noise of the ordinate the kernel below was applied to
    kernel: FloatArray  # from the white noise of that ordinate to `derivative`
    step_ev: float
    spikes: tuple[Spike, ...] = ()
    resampled: bool = False
    recorded: bool = False  # True when the data came differentiated

    def filter_gain(self, weights: FloatArray) -> float:
        """Noise of a filter's output per unit of `sigma`; `weights` (m,) act on `derivative`."""
        return float(np.sqrt(np.sum(np.convolve(weights, self.kernel) ** 2)))


def noise_kernels(windows: tuple[Window, ...], *, derivative: bool) -> dict[float, NoiseKernel]:
    """Kernel of the noise for every step among the windows, the step rounded to 0.01 eV."""
    grouped: dict[float, list[FloatArray]] = {}
    for window in windows:
        energy, values, _ = _even(window)
        grouped.setdefault(round(float(energy[1] - energy[0]), 2), []).append(values)
    return {step: shared_kernel(values, derivative=derivative) for step, values in grouped.items()}


def differentiate(
    window: Window, *, derivative: bool, resolution: float | None = None, kernel: NoiseKernel | None = None
) -> Differential:
    """Differentiate a window once; recorded differential data are only put on an even grid.

    The Savitzky-Golay slope (parabola) spans about one narrow line, and never fewer than three channels, so
    it follows the resolution and the step; what smoothing the search needs comes from its own line shapes.
    """
    energy, values, resampled = _even(window)
    step = float(energy[1] - energy[0])
    noise = estimate_noise(energy, values, derivative=derivative, kernel=kernel)
    spikes, values = find_spikes(energy, values, noise.sigma, resolution, derivative=derivative)
    if spikes:
        noise = estimate_noise(energy, values, derivative=derivative, kernel=kernel)
    if derivative:
        bursts, values = remove_bursts(energy, values, noise)
        if bursts:
            spikes += tuple(Spike(index=at, channels=1, up=True) for at in bursts)
            noise = estimate_noise(energy, values, derivative=True, kernel=kernel)
        return Differential(
            energy_ev=energy, derivative=values, sigma=noise.sigma, kernel=noise.kernel,
            step_ev=step, spikes=spikes, resampled=resampled, recorded=True,
        )  # fmt: skip
    weights = slope_weights(_half_width(energy, step, resolution)) / step
    return Differential(
        energy_ev=energy, derivative=apply_slope(values, weights), sigma=noise.sigma,
        kernel=_combined(noise, weights), step_ev=step, spikes=spikes, resampled=resampled,
    )  # fmt: skip


def _even(window: Window) -> tuple[FloatArray, FloatArray, bool]:
    """The window on an even grid of its median step."""
    energy = window.energy_ev
    steps = np.diff(energy)
    step = float(np.median(steps))
    if float(np.max(np.abs(steps - step))) < 0.02 * step + 1e-6:
        grid = np.linspace(energy[0], energy[-1], energy.size)
        return grid, np.array(window.intensity), False
    count = int((energy[-1] - energy[0]) / step + 1e-9) + 1
    grid = energy[0] + step * np.arange(count)
    return grid, np.interp(grid, energy, window.intensity), True


def _half_width(energy_ev: FloatArray, step_ev: float, resolution: float | None) -> int:
    sigma = float(usual_sigma_ev(energy_ev[:1], resolution)[0])
    return int(np.clip(round(1.2 * sigma / step_ev), 1, 12))


def slope_weights(half: int) -> FloatArray:
    """Weights of the Savitzky-Golay slope of a parabola over 2 half + 1 channels, per channel, for correlation."""
    x = np.arange(-half, half + 1, dtype=np.float64)
    return x / float(np.sum(x**2))


def apply_slope(values: FloatArray, weights: FloatArray) -> FloatArray:
    """Correlate with slope weights; the ends take the slope of a line, never padded values."""
    half = weights.size // 2
    inner = np.convolve(values, weights[::-1], mode="valid")
    out = np.empty_like(values)
    out[half:-half] = inner
    out[:half] = inner[0]
    out[-half:] = inner[-1]
    return out


def _combined(noise: NoiseModel, weights: FloatArray) -> FloatArray:
    return np.convolve(noise.kernel, weights)
