"""Conversions between what a user reads and the absolute scale, against worked values and independent numerics."""

from __future__ import annotations

import csv
import doctest
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from ident.errors import SettingError
from ident.physics import scales
from ident.physics.scales import EnergyScale, absolute_from_stated, stated_from_absolute

ATOM_LIKE_EV = 2.5  # natural width of lines such as Cu L3M45M45 (common practice, no source)
ANCHORS = list(
    csv.DictReader(
        (Path(__file__).resolve().parents[1] / "physics" / "scale_anchors.csv").read_text(encoding="utf-8").splitlines()
    )
)

SCALES = st.builds(
    EnergyScale,
    reference=st.sampled_from(["absolute", "fermi", "vacuum", "handbook"]),
    kind=st.sampled_from(["derivative", "direct"]),
    resolution=st.floats(0.0, 0.05),
    resolution_ev=st.floats(0.0, 10.0),
    modulation_ev=st.floats(0.0, 12.0),
    smoothing_ev=st.floats(0.0, 20.0),
    separation_ev=st.none() | st.floats(0.5, 20.0),
    work_function_ev=st.floats(3.5, 6.0),
)
ENERGIES = st.floats(30.0, 3200.0)
WIDTHS = st.floats(0.5, 12.0)


@given(ENERGIES, WIDTHS, SCALES)
def test_there_and_back(energy: float, width: float, scale: EnergyScale) -> None:
    stated = stated_from_absolute(energy, width, scale)
    assert absolute_from_stated(stated, width, scale) == pytest.approx(energy, abs=1e-6)


@given(ENERGIES, WIDTHS, SCALES, SCALES)
def test_one_scale_to_another_through_the_absolute_one(
    energy: float, width: float, first: EnergyScale, second: EnergyScale
) -> None:
    onward = stated_from_absolute(absolute_from_stated(energy, width, first), width, second)
    back = stated_from_absolute(absolute_from_stated(onward, width, second), width, first)
    assert back == pytest.approx(energy, abs=1e-6)


@given(ENERGIES, ENERGIES, WIDTHS, SCALES)
def test_the_order_of_lines_is_kept(one: float, other: float, width: float, scale: EnergyScale) -> None:
    assume(abs(one - other) > 1e-6)
    low, high = sorted((one, other))
    assert stated_from_absolute(low, width, scale) < stated_from_absolute(high, width, scale)


@given(ENERGIES, WIDTHS)
def test_the_minimum_stands_above_the_maximum_and_moves_up_with_broadening(energy: float, width: float) -> None:
    """The steepest fall is on the high-energy side; the broader the line, the further up (ASTM E984 tells the two)."""
    direct = stated_from_absolute(energy, width, EnergyScale(reference="fermi", kind="direct"))
    sharp = stated_from_absolute(energy, width, EnergyScale(reference="fermi", resolution=0.0))
    broad = stated_from_absolute(energy, width, EnergyScale(reference="fermi", modulation_ev=6.0))
    assert direct < sharp < broad


@given(ENERGIES, WIDTHS, st.floats(0.0, 12.0), st.floats(0.0, 0.05))
def test_a_direct_maximum_does_not_move_with_broadening(
    energy: float, width: float, modulation: float, resolution: float
) -> None:
    plain = EnergyScale(reference="fermi", kind="direct")
    broad = EnergyScale(reference="fermi", kind="direct", modulation_ev=modulation, resolution=resolution)
    assert stated_from_absolute(energy, width, broad) == stated_from_absolute(energy, width, plain)


@pytest.mark.parametrize(
    ("name", "direct_fermi_ev", "minimum_vacuum_ev"),
    [("Cu L3M45M45", 918.6, 916.3), ("Al KL23L23", 1393.1, 1391.6), ("Au M5N67N67", 2015.8, 2015.8)],
)
def test_direct_maximum_to_vacuum_minimum(name: str, direct_fermi_ev: float, minimum_vacuum_ev: float) -> None:
    """Direct maxima from memory; at 0.5 % worked by hand: 914.1 + 2.2, 1388.6 + 3.0, 2011.3 + 4.5 (IUPAC: 4.500)."""
    read = EnergyScale(reference="fermi", kind="direct")
    absolute = absolute_from_stated(direct_fermi_ev, ATOM_LIKE_EV, read)
    vacuum = stated_from_absolute(absolute, ATOM_LIKE_EV, EnergyScale(reference="vacuum"))
    assert vacuum == pytest.approx(minimum_vacuum_ev, abs=0.15), name


@pytest.mark.parametrize("row", ANCHORS, ids=lambda row: row["symbol"])
def test_direct_maximum_to_the_handbooks_minimum(row: dict[str, str]) -> None:
    """Both ends as scale_anchors.csv gives them, status of each there; the handbooks scatter by 0.9 eV, so 2.5 sd."""
    absolute = absolute_from_stated(
        float(row["direct_fermi_ev"]), ATOM_LIKE_EV, EnergyScale(reference="fermi", kind="direct")
    )
    assert stated_from_absolute(absolute, ATOM_LIKE_EV, EnergyScale()) == pytest.approx(
        float(row["handbook_ev"]), abs=2.5 * 0.95
    )


def test_the_error_of_the_handbook_term_fitted_anew() -> None:
    """Least squares over the anchors (numpy.polyfit): the error of the line itself at low, middle and high energy."""
    direct = np.array([float(row["direct_fermi_ev"]) for row in ANCHORS])
    handbook = np.array([float(row["handbook_ev"]) for row in ANCHORS])
    away = direct + np.hypot(ATOM_LIKE_EV, 0.005 * direct) / 2.3548 - handbook
    _, spread = np.polyfit(handbook, away, 1, cov=True)
    for energy in (60.0, 500.0, 889.0, 1396.0, 2024.0):
        step = np.array([energy, 1.0])
        assert scales.handbook_term_sigma_ev(energy) == pytest.approx(math.sqrt(step @ spread @ step), rel=0.05)


def gaussian(energy: np.ndarray, centre: float, fwhm: float) -> np.ndarray:
    return np.exp(-4.0 * np.log(2.0) * ((energy - centre) / fwhm) ** 2)


@pytest.mark.parametrize("peak_to_peak", [1.0, 3.0, 6.0])
def test_modulation_against_the_first_harmonic_itself(peak_to_peak: float) -> None:
    """Fourier coefficient of N(E + k sin wt) worked out numerically; its minimum is where the formula puts it."""
    fwhm, energy = 6.0, np.arange(-12.0, 12.0, 0.005)
    phase = (np.arange(720) + 0.5) * 2 * np.pi / 720
    shift = 0.5 * peak_to_peak * np.sin(phase)
    harmonic = sum(gaussian(energy + s, 0.0, fwhm) * np.sin(p) for s, p in zip(shift, phase, strict=True))
    seen = energy[np.argmin(harmonic)]
    sigma = fwhm / 2.3548
    assert seen == pytest.approx(math.hypot(sigma, scales.modulation_sigma_ev(peak_to_peak)), abs=0.1)
    assert scales.minimum_ev(100.0, fwhm, 0.0, scales.modulation_sigma_ev(peak_to_peak)) == pytest.approx(
        100.0 + seen, abs=0.1
    )


@pytest.mark.parametrize("window", [2.0, 4.0, 6.0])
def test_smoothing_against_a_published_filter(window: float) -> None:
    """scipy.signal.savgol_filter, second order, first derivative (Savitzky and Golay 1964)."""
    from scipy.signal import savgol_filter

    step, fwhm = 0.01, 6.0
    energy = np.arange(-15.0, 15.0, step)
    points = 2 * round(0.5 * window / step) + 1
    derivative = savgol_filter(gaussian(energy, 0.0, fwhm), points, 2, deriv=1, delta=step)
    seen = energy[np.argmin(derivative)]
    assert seen == pytest.approx(math.hypot(fwhm / 2.3548, scales.smoothing_sigma_ev(window)), abs=0.1)
    assert seen > fwhm / 2.3548 + 0.02  # the filter does move it


def test_relative_resolution_against_a_convolution() -> None:
    """A line of 4 eV at 1000 eV through an analyser of 0.6 %: widths add in quadrature, and so does the minimum."""
    energy = np.arange(960.0, 1040.0, 0.01)
    blur = gaussian(np.arange(-20.0, 20.0, 0.01), 0.0, 6.0)
    recorded = np.convolve(gaussian(energy, 1000.0, 4.0), blur, mode="same")
    seen = energy[np.argmin(np.gradient(recorded))]
    assert scales.minimum_ev(1000.0, 4.0, 0.006) == pytest.approx(seen, abs=0.03)


@pytest.mark.parametrize("fwhm", [3.0, 6.5])
def test_a_width_inferred_from_maximum_and_minimum(fwhm: float) -> None:
    energy = np.arange(-20.0, 20.0, 0.002)
    slope = np.gradient(gaussian(energy, 0.0, fwhm))
    apart = energy[np.argmin(slope)] - energy[np.argmax(slope)]
    assert scales.fwhm_from_separation_ev(apart) == pytest.approx(fwhm, abs=0.01)
    measured = EnergyScale(reference="fermi", separation_ev=apart)
    assert absolute_from_stated(energy[np.argmin(slope)] + 500.0, 2.0, measured) == pytest.approx(
        scales.minimum_ev(500.0, 2.0, 0.005), abs=0.01
    )


def test_the_stated_limit_for_lorentzians() -> None:
    """The derivative of a Lorentzian is lowest at FWHM / (2 sqrt 3) = 0.289 FWHM: by calculus."""
    energy = np.arange(0.0, 10.0, 0.0005)
    lowest = energy[np.argmin(np.gradient(1.0 / (1.0 + (energy / 1.25) ** 2)))]
    assert lowest == pytest.approx(0.289 * 2.5, abs=0.002)
    assert scales.minimum_ev(100.0, 2.5, 0.0) - 100.0 - lowest == pytest.approx(0.34, abs=0.01)


def test_the_work_function_can_be_set() -> None:
    """A spectrometer whose work function is 4.3 eV reads 0.2 eV more than one at the standard level of 4.500 eV."""
    standard = stated_from_absolute(920.8, 2.5, EnergyScale(reference="vacuum"))
    other = stated_from_absolute(920.8, 2.5, EnergyScale(reference="vacuum", work_function_ev=4.3))
    assert standard == pytest.approx(916.3)
    assert other - standard == pytest.approx(0.2)


@pytest.mark.parametrize(
    ("name", "value"),
    [
        ("resolution", 0.5),
        ("resolution", -0.001),
        ("resolution_ev", math.nan),
        ("modulation_ev", math.inf),
        ("smoothing_ev", -1.0),
        ("separation_ev", 1e6),
        ("work_function_ev", 45.0),
    ],
)
def test_impossible_settings_are_refused(name: str, value: float) -> None:
    with pytest.raises(SettingError, match=name.removesuffix("_ev").replace("_", " ")) as refused:
        EnergyScale(**{name: value})  # type: ignore[arg-type]
    assert "\n" not in str(refused.value)
    assert "give" in str(refused.value)


def test_examples_of_the_docstrings() -> None:
    result = doctest.testmod(scales)
    assert result.attempted >= 8
    assert result.failed == 0
