"""Windows, gaps, sweeps: what is one spectrum. The files are made here, so the answer is known beforehand."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from reader_files import axis, curve, rows, write

from ident.readers import read_spectra, read_spectrum
from ident.readers.scans import Scan, split_scan
from ident.readers.source import Source

LOW, MIDDLE, HIGH = axis(40, 80, 0.5), axis(250, 300, 0.5), axis(900, 950, 1.0)
RANGES = ((40.0, 80.0), (250.0, 300.0), (900.0, 950.0))


def table(*energies: np.ndarray, between: str = "", scale: float = 1.0) -> str:
    """Windows one after the other, each at a level of its own."""
    return between.join(rows(each, curve(each, scale * (1 + at))) for at, each in enumerate(energies))


@pytest.mark.parametrize(
    "between", ["", "\n", "\n\n", "# next\n", "Region 2\n", "\nRegion 2\nEnergy Counts\n", "----\n"]
)
def test_windows_with_gaps(tmp_path: Path, between: str) -> None:
    spectrum = read_spectrum(write(tmp_path, table(LOW, MIDDLE, HIGH, between=between)))
    assert spectrum.ranges_ev == RANGES
    np.testing.assert_array_equal(spectrum.windows[2].intensity, curve(HIGH, 3))
    assert spectrum.warnings == ()


def test_windows_in_any_order_ascend(tmp_path: Path) -> None:
    spectrum = read_spectrum(write(tmp_path, table(HIGH, LOW, MIDDLE)))
    assert spectrum.ranges_ev == RANGES


def test_descending_windows(tmp_path: Path) -> None:
    spectrum = read_spectrum(write(tmp_path, table(HIGH[::-1], MIDDLE[::-1], LOW[::-1])))
    assert spectrum.ranges_ev == RANGES
    np.testing.assert_array_equal(spectrum.windows[0].intensity, curve(LOW, 3))


def test_separate(tmp_path: Path) -> None:
    path = write(tmp_path, table(LOW, MIDDLE, HIGH))
    spectra = read_spectra(path, separate=True)
    assert [spectrum.name for spectrum in spectra] == [f"{path}#1", f"{path}#2", f"{path}#3"]
    assert [spectrum.ranges_ev[0] for spectrum in spectra] == list(RANGES)
    first = read_spectrum(path, separate=True)
    assert first.ranges_ev == RANGES[:1] and "holds 3 spectra" in first.warnings[-1]


def test_steps_that_change_part_windows(tmp_path: Path) -> None:
    """Two windows that touch but were recorded with different steps (common practice, no source)."""
    text = rows(axis(100, 150, 1), curve(axis(100, 150, 1))) + rows(axis(150.2, 170, 0.2), curve(axis(150.2, 170, 0.2)))
    spectrum = read_spectrum(write(tmp_path, text))
    assert [window.step_ev for window in spectrum.windows] == pytest.approx([1.0, 0.2])


def test_a_lost_row_is_no_gap(tmp_path: Path) -> None:
    energy = np.delete(axis(100, 150, 0.5), 40)
    assert len(read_spectrum(write(tmp_path, rows(energy, curve(energy)))).windows) == 1


def test_steps_that_grow_are_one_window(tmp_path: Path) -> None:
    """A retarding analyser at constant ratio may step in proportion to the energy."""
    energy = 50 * 1.01 ** np.arange(200)
    assert len(read_spectrum(write(tmp_path, rows(energy, curve(energy)))).windows) == 1


def test_rounded_energies_are_one_window(tmp_path: Path) -> None:
    energy = np.round(100 + 0.15 * np.arange(300), 1)
    assert len(read_spectrum(write(tmp_path, rows(energy, curve(energy)))).windows) == 1


@pytest.mark.parametrize("between", ["\n", "# sweep\n", ""])
def test_repeated_sweeps_are_summed(tmp_path: Path, between: str) -> None:
    path = write(tmp_path, table(MIDDLE, MIDDLE, MIDDLE, between=between))
    spectrum = read_spectrum(path)
    assert spectrum.ranges_ev == ((250.0, 300.0),)
    np.testing.assert_array_equal(spectrum.windows[0].intensity, curve(MIDDLE, 1) + curve(MIDDLE, 2) + curve(MIDDLE, 3))
    assert "3 recordings of 250 to 300 eV were summed" in spectrum.warnings[0]
    assert spectrum.header.sweeps == 3
    assert len(read_spectra(path, separate=True)) == 3


def test_sweeps_there_and_back(tmp_path: Path) -> None:
    text = rows(MIDDLE, curve(MIDDLE)) + "\n" + rows(MIDDLE[::-1], curve(MIDDLE)[::-1])
    np.testing.assert_array_equal(read_spectrum(write(tmp_path, text)).windows[0].intensity, 2 * curve(MIDDLE))


def test_overlapping_windows_are_said(tmp_path: Path) -> None:
    other = axis(290, 340, 0.5)
    spectrum = read_spectrum(write(tmp_path, table(MIDDLE, other)))
    assert spectrum.ranges_ev == ((250.0, 300.0), (290.0, 340.0))
    assert "overlap from 290 to 300 eV" in spectrum.warnings[0]


def test_a_stray_point_is_left_out_and_said(tmp_path: Path) -> None:
    spectrum = read_spectrum(write(tmp_path, "12 34\n" + rows(MIDDLE, curve(MIDDLE))))
    assert spectrum.ranges_ev == ((250.0, 300.0),)
    assert "12 eV (line 1) left out: 1 point" in spectrum.warnings[0]


def test_a_constant_window_is_left_out_and_said(tmp_path: Path) -> None:
    text = rows(LOW, LOW * 0 + 65535) + rows(MIDDLE, curve(MIDDLE))
    spectrum = read_spectrum(write(tmp_path, text))
    assert spectrum.ranges_ev == ((250.0, 300.0),)
    assert "40 to 80 eV left out: the signal is constant" in spectrum.warnings[0]


def test_separate_leaves_out_short_windows(tmp_path: Path) -> None:
    path = write(tmp_path, table(LOW, axis(100, 105, 0.5), MIDDLE))
    assert len(read_spectrum(path).windows) == 3
    spectra = read_spectra(path, separate=True)
    assert len(spectra) == 2 and "fewer than 20 points" in spectra[0].warnings[0]


@pytest.mark.parametrize(("step", "warned"), [(1.0, False), (3.0, False), (3.5, True), (5.0, True)])
def test_coarse_steps_are_warned_of(tmp_path: Path, step: float, warned: bool) -> None:
    energy = axis(50, 50 + 200 * step, step)
    spectrum = read_spectrum(write(tmp_path, rows(energy, curve(energy))))
    said = [text for text in spectrum.warnings if "coarser than 3 eV" in text]
    assert bool(said) is warned
    if warned:
        assert f"closer than {2 * step:g} eV" in said[0] and "missed" in said[0]


@given(
    st.lists(st.tuples(st.integers(8, 40), st.sampled_from([0.1, 0.25, 0.5, 1.0, 2.0])), min_size=1, max_size=5),
    st.booleans(),
)
@settings(deadline=None, max_examples=60)
def test_splitting_finds_the_windows_it_was_given(layout: list[tuple[int, float]], descending: bool) -> None:
    """Windows far apart come out as they went in, whatever their steps and the direction of recording."""
    windows, start = [], 30.0
    for points, step in layout:
        windows.append(start + step * np.arange(points))
        start = windows[-1][-1] + 25.0
    energy = np.concatenate(windows)
    recorded = energy[::-1] if descending else energy
    scan = Scan(energy_ev=recorded, intensity=recorded * 2, line=np.arange(recorded.size, dtype=np.int64))
    pieces = split_scan(scan, Source(name="x", sha256="", lines=()))
    assert [len(piece) for piece in pieces] == [points for points, _ in layout]
    np.testing.assert_array_equal(np.concatenate([piece.energy_ev for piece in pieces]), energy)
    np.testing.assert_array_equal(recorded * 2, scan.intensity)  # the input is not altered
