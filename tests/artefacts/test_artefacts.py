"""Losses, satellites and the elastic peak are named for what they are, and no element is called on them.

Aluminium's bulk plasmon is measured at 15.3 eV, magnesium's at 10.6 eV, silicon's at 16.9 eV (textbooks, from memory);
KL23L23 minima on the handbooks' scale: Al 1396, Mg 1186, Si 1619 (handbook practice, from memory).
"""

from __future__ import annotations

import numpy as np
import pytest

from ident import Spectrum, identify
from ident.identification import Identification

METALS = {"Al": (1396.0, 68.0, 15.3), "Mg": (1186.0, 45.0, 10.6), "Si": (1619.0, 92.0, 16.9)}
FWHM = 2.3548


def peak(energy: np.ndarray, minimum_ev: float, height: float, natural_ev: float = 2.5) -> np.ndarray:
    """A Gaussian line of the direct spectrum whose derivative has its minimum at an energy, and its step."""
    sigma = float(np.hypot(natural_ev, 0.005 * minimum_ev)) / FWHM
    centre = minimum_ev - sigma
    step = 0.15 / (1.0 + np.exp(np.clip((energy - centre) / sigma, -50, 50)))
    return height * (np.exp(-0.5 * ((energy - centre) / sigma) ** 2) + step)


def spectrum_of(
    metal: str, *, highest_ev: float = 2000.0, beam_ev: float | None = None, plasmons: int = 2, seed: int = 1
) -> Spectrum:
    """A clean metal with a trace of carbon and oxygen, its plasmon series, and the elastic peak when in range."""
    high, low, plasmon = METALS[metal]
    energy = np.arange(30.0, highest_ev, 1.0)
    counts = 30_000.0 * (energy / 300.0) ** 0.2
    counts = counts + peak(energy, high, 20_000) + peak(energy, low, 25_000, natural_ev=7.0)
    for order in range(1, plasmons + 1):
        counts = counts + peak(energy, high - order * plasmon, 20_000 * 0.30**order, natural_ev=4.0)
    counts = counts + peak(energy, 272.0, 3_000, natural_ev=8.0) + peak(energy, 505.0, 3_000, natural_ev=6.0)
    if beam_ev is not None:
        counts = np.where(energy > beam_ev + 8.0, 200.0, counts) + peak(energy, beam_ev, 400_000)
    noisy = np.random.default_rng(seed).poisson(counts).astype(float)
    return Spectrum.from_arrays(energy, noisy, kind="direct", name=f"{metal}")


def artefacts_near(answer: Identification, energy_ev: float, within_ev: float = 3.0) -> list[str]:
    return [note.what for note in answer.artefacts if abs(note.energy_ev - energy_ev) < within_ev]


@pytest.mark.parametrize("metal", METALS)
def test_plasmon_losses_are_named_and_nothing_is_called_on_them(metal: str) -> None:
    high, _, plasmon = METALS[metal]
    answer = identify(spectrum_of(metal))
    assert set(answer.called) == {metal, "C", "O"}
    told = artefacts_near(answer, high - plasmon)
    assert told
    assert f"plasmon loss of {metal} KL23L23" in told[0]
    assert not [one for one in answer.unexplained if abs(one.energy_ev - (high - plasmon)) < 3.0]


def test_the_elastic_peak_is_no_line() -> None:
    answer = identify(spectrum_of("Al", highest_ev=2100.0, beam_ev=2000.0), beam_kev=2.0)
    assert any("elastic peak" in what for what in artefacts_near(answer, 2000.0, 15.0))
    assert set(answer.called) == {"Al", "C", "O"}


def test_ionisation_losses_follow_the_beam() -> None:
    """Carbon K lies 284 eV deep: its edge stands 284 eV below the beam, wherever that is (from memory)."""
    beam = 2000.0
    plain = spectrum_of("Al", highest_ev=2100.0, beam_ev=beam, seed=3)
    window = plain.windows[0]
    edge = window.intensity + peak(window.energy_ev, beam - 284.0, 6_000, natural_ev=8.0)
    answer = identify(Spectrum.from_arrays(window.energy_ev, edge, kind="direct", name="edge"), beam_kev=beam / 1000.0)
    told = artefacts_near(answer, beam - 284.0, 8.0)
    assert any("ionisation loss of C K" in what for what in told)


def test_a_beam_out_of_the_scan_changes_nothing() -> None:
    spectrum = spectrum_of("Al")
    one, other = identify(spectrum, beam_kev=5.0), identify(spectrum, beam_kev=10.0)
    assert one.called == other.called
    assert not any("elastic" in note.what for note in one.artefacts)


def test_artefacts_are_in_order_and_do_not_repeat_a_line() -> None:
    answer = identify(spectrum_of("Mg"))
    energies = [note.energy_ev for note in answer.artefacts]
    assert energies == sorted(energies)
    met = {line.found_ev for a in answer.assignments if a.probability >= 0.5 for line in a.lines if line.found_ev}
    assert not met & set(energies)


def test_a_detector_at_its_ceiling_is_said() -> None:
    """Counts cut off at a level over a strong line; the same scan below that level says nothing of the kind."""
    plain = spectrum_of("Al").windows[0]
    level = float(np.quantile(plain.intensity, 0.995))
    cut = np.minimum(plain.intensity, level)
    told = [note.what for note in identify(Spectrum.from_arrays(plain.energy_ev, cut, kind="direct")).artefacts]
    assert any("saturation" in what and f"{level:g}" in what for what in told)
    assert not any("saturation" in note.what for note in identify(spectrum_of("Al")).artefacts)


def test_few_counts_that_happen_to_be_equal_are_no_ceiling() -> None:
    energy = np.arange(100.0, 700.0)
    counts = np.random.default_rng(5).poisson(2.0, energy.size).astype(float)
    counts[200:206] = counts.max()
    answer = identify(Spectrum.from_arrays(energy, counts, kind="direct"))
    assert not any("saturation" in note.what for note in answer.artefacts)
