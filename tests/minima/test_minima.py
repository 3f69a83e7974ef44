"""Minima of curves whose lines the test put there itself."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ident.errors import InputError
from ident.minima import Analysis, analyse
from ident.spectrum import Spectrum

STEP_EV = 0.5
ENERGY = np.arange(200.0, 800.0, STEP_EV)


def survey(lines: list[tuple[float, float, float]], seed: int = 0, energy_ev: np.ndarray = ENERGY) -> np.ndarray:
    """Counts with asymmetric lines given as (minimum of the derivative in eV, height, sigma in eV)."""
    clean = 3e5 * (energy_ev / 200.0) ** -0.7
    for minimum_ev, height, sigma_ev in lines:
        offset = energy_ev - (minimum_ev - sigma_ev)
        clean = clean + height * np.exp(-0.5 * (offset / np.where(offset < 0, 1.6 * sigma_ev, sigma_ev)) ** 2)
    return np.random.default_rng(seed).poisson(clean).astype(float)


def found(values: np.ndarray, energy_ev: np.ndarray = ENERGY) -> Analysis:
    return analyse(Spectrum.from_arrays(energy_ev, values))


def test_a_line_is_found_below_the_step_with_an_honest_uncertainty() -> None:
    pulls = []
    for seed in range(25):
        minimum = max(found(survey([(418.3, 2e4, 2.4)], seed)).minima, key=lambda m: m.significance)
        assert minimum.energy_ev == pytest.approx(418.3, abs=0.5)
        pulls.append((minimum.energy_ev - 418.3) / minimum.sigma_ev)
    assert np.std(pulls) < 2.0


def test_depth_width_and_peak_to_peak_of_a_known_line() -> None:
    """A Gaussian of height h falls steepest one sigma out, by h / sigma * exp(-1/2) (textbook)."""
    (minimum,) = found(survey([(500.0, 5e4, 3.0)])).minima
    assert minimum.depth == pytest.approx(5e4 / 3.0 * np.exp(-0.5), rel=0.25)
    assert minimum.width_ev == pytest.approx(2.3548 * 3.0, rel=0.25)
    assert minimum.peak_to_peak > minimum.depth
    assert minimum.significance > 20


@pytest.mark.parametrize(("low_ev", "high_ev"), [(351.0, 356.0), (404.0, 410.0)])
def test_doublets_of_silver_and_indium_are_resolved(low_ev: float, high_ev: float) -> None:
    """Ag M5N45N45 and M4N45N45 at 351 and 356 eV, In at 404 and 410 eV (handbook values, from memory)."""
    minima = found(survey([(low_ev, 6e4, 1.5), (high_ev, 5e4, 1.5)])).minima
    strong = [m for m in minima if m.depth > 0.3 * max(n.depth for n in minima)]
    assert [m.energy_ev for m in strong] == [
        pytest.approx(low_ev, abs=0.7),
        pytest.approx(high_ev, abs=0.7),
    ]


@given(shift_ev=st.floats(-40.0, 40.0))
@settings(max_examples=20, deadline=None)
def test_shifting_the_axis_shifts_the_minima(shift_ev: float) -> None:
    values = survey([(350.0, 3e4, 2.0), (600.0, 3e4, 2.5)])
    here = found(values).minima
    there = found(values, ENERGY + shift_ev).minima
    assert len(here) == len(there)
    for one, other in zip(here, there, strict=True):
        assert other.energy_ev - one.energy_ev == pytest.approx(shift_ev, abs=0.35)


@given(scale=st.floats(1e-4, 1e4))
@settings(max_examples=20, deadline=None)
def test_scaling_the_counts_changes_no_minimum(scale: float) -> None:
    values = survey([(350.0, 3e4, 2.0), (600.0, 3e4, 2.5)])
    here, there = found(values).minima, found(values * scale).minima
    assert [m.energy_ev for m in here] == pytest.approx([m.energy_ev for m in there], abs=0.05)
    assert [m.depth * scale for m in here] == pytest.approx([m.depth for m in there], rel=0.02)


def test_a_smooth_background_has_hardly_a_minimum() -> None:
    """Pure counting noise: fewer than one minimum a spectrum above 4.5 noise widths (common practice, no source)."""
    count = sum(len(found(survey([], seed)).minima) for seed in range(40))
    assert count < 20


def test_the_secondary_edge_is_no_minimum() -> None:
    energy = np.arange(20.0, 320.0, 1.0)
    clean = 4e7 * (energy / 20.0) ** -2.4 + 1e5
    values = np.random.default_rng(1).poisson(clean).astype(float)
    assert [m for m in found(values, energy).minima if m.significance > 8] == []


def test_the_spike_of_the_measured_survey_is_an_artefact() -> None:
    from pathlib import Path

    from ident.readers import read_spectrum

    path = Path(__file__).parents[1] / "data" / "pt111_derivative.vms"
    analysis = analyse(read_spectrum(str(path)))
    assert any(abs(a.energy_ev - 1636.7) < 1.0 for a in analysis.artefacts)
    assert not any(abs(m.energy_ev - 1636.7) < 5.0 for m in analysis.minima)


def test_inputs_are_not_altered() -> None:
    values = survey([(418.3, 2e4, 2.4)])
    values[300] += 1e6
    before = values.copy()
    found(values)
    assert np.array_equal(values, before)


def test_constant_and_short_windows_are_refused() -> None:
    with pytest.raises(InputError, match="20 points"):
        found(np.full(100, 7.0), ENERGY[:100])
    with pytest.raises(InputError, match="20 points"):
        found(np.arange(15.0), ENERGY[:15])


@pytest.mark.parametrize("lean", [1.0, 1.3, 1.6, 2.2])
@pytest.mark.parametrize("step_ev", [0.5, 1.0])
def test_a_line_of_any_lean_is_one_minimum(lean: float, step_ev: float) -> None:
    # Truth: four well separated lines put in; a good instrument's noise shows every fault of the shape.
    energy = np.arange(30.0, 1100.0, step_ev)
    curve = 4e5 * (0.3 + 0.9 * np.exp(-energy / 250.0))
    lines = {60.0: 0.25, 776.0: 0.12, 848.0: 0.15, 920.0: 0.4}
    for at, height in lines.items():
        sigma = np.hypot(1.5, 0.005 * at / 2.355)
        away = energy - at
        curve += 4e5 * height * np.exp(-0.5 * (away / np.where(away < 0, lean * sigma, sigma)) ** 2)
    counts = np.random.default_rng(5).poisson(curve).astype(float)
    found = analyse(Spectrum.from_arrays(energy, counts)).minima
    for at in lines:
        assert len([m for m in found if abs(m.energy_ev - at) < 12.0]) == 1, at
