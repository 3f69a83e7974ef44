"""Points that were never measured are not taken for measured ones: a truth made here, resampled and cut off."""

from __future__ import annotations

import numpy as np
import pytest

from ident import Spectrum, identify
from ident.signal.repair import cut_flat, undo_interpolation
from ident.spectrum import Window

# minimum (eV), height (counts), natural width (eV)
LINES = ((920, 6000, 3.0), (848, 2200, 5.0), (776, 1600, 5.0), (272, 3000, 8.0), (503, 2500, 6.0))


def copper(step_ev: float = 1.0, seed: int = 2) -> tuple[np.ndarray, np.ndarray]:
    """Copper with carbon and oxygen (920, 848, 776, 272, 503 eV: handbook minima, from memory), counted."""
    energy = np.arange(30.0, 1100.0, step_ev)
    counts = 12_000.0 * (energy / 300.0) ** 0.3
    for minimum, height, width in (
        (920, 6000, 3.0),
        (848, 2200, 5.0),
        (776, 1600, 5.0),
        (272, 3000, 8.0),
        (503, 2500, 6.0),
    ):
        sigma = np.hypot(width, 0.005 * minimum) / 2.3548
        counts = counts + height * np.exp(-0.5 * ((energy - minimum + sigma) / sigma) ** 2)
    return energy, np.random.default_rng(seed).poisson(counts).astype(float)


@pytest.mark.parametrize("every", [2, 4, 5, 10])
def test_linear_interpolation_is_undone_and_said(every: int) -> None:
    energy, counts = copper()
    fine = np.arange(energy[0], energy[-1], 1.0 / every)
    between = np.interp(fine, energy, counts)
    window, found = undo_interpolation(Window(energy_ev=fine, intensity=between))
    assert found == every
    assert np.allclose(window.intensity, np.interp(window.energy_ev, energy, counts))
    answer = identify(Spectrum.from_arrays(fine, between))
    assert set(answer.called) == {"Cu", "C", "O"}
    assert any("interpolated" in text for text in answer.warnings)


def test_measured_data_are_left_as_they_are() -> None:
    for step in (0.25, 0.5, 1.0):
        energy, counts = copper(step)
        window = Window(energy_ev=energy, intensity=counts)
        assert undo_interpolation(window)[1] == 1
        assert cut_flat(window, fewest=20) == ((window,), ())
    few = Window(energy_ev=energy, intensity=np.random.default_rng(1).poisson(0.3, energy.size).astype(float))
    assert cut_flat(few, fewest=20)[1] == ()


@pytest.mark.parametrize(("low", "high", "level"), [(30.0, 560.0, 9000.0), (30.0, 150.0, 0.0), (30.0, 120.0, 65535.0)])
def test_flat_stretches_are_left_out_and_named(low: float, high: float, level: float) -> None:
    energy, counts = copper()
    cut = np.where((energy >= low) & (energy <= high), level, counts)
    answer = identify(Spectrum.from_arrays(energy, cut, kind="direct"))
    assert set(answer.called) <= {"Cu", "C", "O"}
    assert "Cu" in answer.called
    assert any(note.kind == "flat stretch" and f"{level:g}" in note.what for note in answer.artefacts)


@pytest.mark.parametrize("values", ["line", "power", "rounded"])
def test_rounding_is_no_line(values: str) -> None:
    energy, counts = copper()
    smooth = {"line": 3.0 * energy + 100.0, "power": np.round(1e4 * energy**0.3, 2)}
    ordinate = smooth.get(values, np.round(counts / counts.max(), 2))
    answer = identify(Spectrum.from_arrays(energy, ordinate, kind="direct"))
    assert set(answer.called) <= ({"Cu", "C", "O"} if values == "rounded" else set())
