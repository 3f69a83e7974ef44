"""Noise, spikes and kind, on curves whose truth is known because the test made them."""

from __future__ import annotations

import numpy as np
import pytest

from ident.signal import differentiate, estimate_noise, find_spikes, settle_kind
from ident.spectrum import Spectrum, Window

ENERGY = np.arange(100.0, 1100.0, 1.0)


def background(energy_ev: np.ndarray) -> np.ndarray:
    return 2e4 * (energy_ev / 100.0) ** -0.8 + 3e3


def counted(seed: int, gain: float = 1.0) -> np.ndarray:
    return np.random.default_rng(seed).poisson(background(ENERGY)) * gain


def peak(energy_ev: np.ndarray, centre_ev: float, sigma_ev: float) -> np.ndarray:
    return np.exp(-0.5 * ((energy_ev - centre_ev) / sigma_ev) ** 2)


@pytest.mark.parametrize("gain", [1.0, 0.02, 35.0])
def test_counting_noise_is_found_whatever_the_gain(gain: float) -> None:
    """Poisson statistics: the variance of counts is their mean (textbook)."""
    noise = estimate_noise(ENERGY, counted(1, gain), derivative=False)
    truth = gain * np.sqrt(background(ENERGY))
    assert np.quantile(np.abs(np.log(noise.sigma / truth)), 0.95) < 0.25
    assert noise.kernel.size == 1


def test_lines_do_not_count_as_noise() -> None:
    clean = background(ENERGY)
    lines = sum(3000.0 * peak(ENERGY, at, 2.5) for at in (200.0, 272.0, 510.0, 703.0))
    values = np.random.default_rng(2).poisson(clean + lines).astype(float)
    noise = estimate_noise(ENERGY, values, derivative=False)
    assert np.median(noise.sigma / np.sqrt(clean)) == pytest.approx(1.0, abs=0.15)


@pytest.mark.parametrize("span", [5, 9])
def test_smoothed_noise_is_known_for_correlated(span: int) -> None:
    """A moving mean over m channels lowers the noise of a wide filter by nothing: sigma of a mean over many
    channels stays sigma / sqrt(n) of the raw data (textbook).
    """
    raw = np.random.default_rng(3).normal(0.0, 50.0, 3000)
    smooth = np.convolve(raw, np.ones(span) / span, mode="valid")
    energy = 100.0 + 0.5 * np.arange(smooth.size)
    noise = estimate_noise(energy, smooth + 1e4, derivative=False)
    wide = np.ones(60) / 60.0
    expected = 50.0 / np.sqrt(60.0)
    assert float(np.median(noise.sigma)) * noise.gain_of(wide) == pytest.approx(expected, rel=0.45)


def test_single_and_double_spikes_are_set_aside_and_lines_are_not() -> None:
    values = counted(4) + 6000.0 * peak(ENERGY, 400.0, 1.6)
    values[650] += 9000.0
    values[750:752] += 9000.0
    noise = estimate_noise(ENERGY, values, derivative=False)
    spikes, cleaned = find_spikes(ENERGY, values, noise.sigma)
    assert [(s.index, s.channels) for s in spikes] == [(650, 1), (750, 2)]
    assert np.all(np.abs(cleaned[[650, 750, 751]] - background(ENERGY)[[650, 750, 751]]) < 1000.0)
    assert cleaned[300] == values[300]


def test_a_dead_point_is_set_aside() -> None:
    values = counted(5)
    values[500] = 0.0
    noise = estimate_noise(ENERGY, values, derivative=False)
    spikes, _ = find_spikes(ENERGY, values, noise.sigma)
    assert [(s.index, s.up) for s in spikes] == [(500, False)]


def differential() -> np.ndarray:
    """A differential survey: positive lobe first, then the deeper minimum (ASTM E984: largest negative excursion)."""
    curve = background(ENERGY) * 0.2
    for at, height in ((272.0, 4000.0), (418.0, 3000.0), (510.0, 5000.0), (703.0, 3500.0)):
        low_side = at > ENERGY
        curve = curve + height * np.where(low_side, peak(ENERGY, at, 4.5), peak(ENERGY, at, 2.6))
    return np.gradient(curve, ENERGY) + np.random.default_rng(6).normal(0.0, 5.0, ENERGY.size)


def kind_of(values: np.ndarray) -> tuple[str, bool]:
    settled, notes = settle_kind(Spectrum.from_arrays(ENERGY, values))
    return settled.kind, any("upside down" in note for note in notes)


def test_direct_and_differential_data_are_told_apart() -> None:
    assert kind_of(counted(7)) == ("direct", False)
    assert kind_of(counted(7) / 2e4) == ("direct", False)
    assert kind_of(differential()) == ("derivative", False)
    assert kind_of(-differential()) == ("derivative", True)


def test_differential_data_are_never_differentiated_again() -> None:
    values = differential()
    result = differentiate(Window(energy_ev=ENERGY, intensity=values), derivative=True)
    assert np.array_equal(result.derivative, values)


def test_the_slope_of_a_straight_line_is_its_slope() -> None:
    """Savitzky and Golay, Anal. Chem. 36 (1964) 1627: a polynomial is differentiated exactly."""
    noise = np.random.default_rng(8).normal(0.0, 1e-3, ENERGY.size)
    result = differentiate(Window(energy_ev=ENERGY, intensity=5.0 * ENERGY + noise), derivative=False)
    assert np.allclose(result.derivative, 5.0, atol=0.01)
