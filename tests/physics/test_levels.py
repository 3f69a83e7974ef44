"""Reference levels: the absolute scale, the handbooks' own, the vacuum level, and minimum against maximum."""

from __future__ import annotations

import csv
import doctest
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ident.physics import levels

ENERGIES = st.floats(min_value=10.0, max_value=3500.0)
NATURAL_EV = 2.5  # width of atom-like lines at half height (common practice, no source)


def anchors() -> tuple[list[str], np.ndarray, np.ndarray]:
    """Direct, Fermi-referenced maxima beside handbook minima: status of each number in the file."""
    with Path(__file__).with_name("scale_anchors.csv").open(encoding="utf-8", newline="") as stream:
        rows = list(csv.DictReader(stream))
    direct = np.array([float(row["direct_fermi_ev"]) for row in rows])
    return [row["symbol"] for row in rows], direct, np.array([float(row["handbook_ev"]) for row in rows])


def test_the_handbook_line_fitted_anew() -> None:
    """Direct maximum plus one standard deviation of the line at 0.5 % resolution, less the handbook's minimum.

    Worked out here from the numbers of scale_anchors.csv alone: sigma = sqrt(2.5^2 + (0.005 E)^2) / 2.3548.
    """
    _, direct, handbook = anchors()
    sigma = np.sqrt(NATURAL_EV**2 + (0.005 * direct) ** 2) / 2.3548
    away = direct + sigma - handbook
    (slope, offset), spread = np.polyfit(handbook, away, 1, cov=True)
    error_slope, error_offset = np.sqrt(np.diag(spread))
    assert abs(offset - levels.HANDBOOK_OFFSET_EV) < error_offset < 0.6
    assert abs(slope - levels.HANDBOOK_SLOPE) < error_slope < 6e-4
    scatter = np.sqrt(np.sum((away - np.polyval([slope, offset], handbook)) ** 2) / (len(away) - 2))
    assert scatter == pytest.approx(levels.HANDBOOK_SCATTER_EV, abs=0.1)
    assert np.sqrt(np.mean((levels.fermi_from_handbook(handbook) - direct - sigma) ** 2)) < 1.0


def test_a_parabola_fits_the_handbook_scale_no_better() -> None:
    """As the comment on the line claims: the curvature is not two standard errors away from none."""
    _, direct, handbook = anchors()
    away = direct + np.sqrt(NATURAL_EV**2 + (0.005 * direct) ** 2) / 2.3548 - handbook
    curve, spread = np.polyfit(handbook / 1000.0, away, 2, cov=True)
    assert abs(curve[0]) < 2.0 * np.sqrt(spread[0, 0])


@pytest.mark.parametrize(("name", "handbook_ev", "direct_ev"), [("Cu M23VV", 60.0, 62.5), ("Au N67VV", 69.0, 70.5)])
def test_low_lines_that_the_fit_has_not_seen(name: str, handbook_ev: float, direct_ev: float) -> None:
    """Direct maxima 62 to 63 and 70 to 71 eV (from memory), minima 60 and 69 (read, Surf. Sci. 1983); widths 4 eV."""
    minimum = levels.fermi_from_handbook(handbook_ev)
    assert levels.maximum_from_minimum(minimum, 4.0) == pytest.approx(direct_ev, abs=1.5), name


@pytest.mark.parametrize(
    ("handbook_ev", "fermi_ev"),
    [
        (60.0, 63.445),  # 60 + 3.62 - 0.1746
        (920.0, 920.943),  # 920 + 3.62 - 2.6772
        (1396.0, 1395.558),  # 1396 + 3.62 - 4.0624
        (2024.0, 2021.730),  # 2024 + 3.62 - 5.8898
    ],
)
def test_handbook_to_fermi_by_hand(handbook_ev: float, fermi_ev: float) -> None:
    """Absolute = handbook + 3.62 - 2.91e-3 handbook, worked by hand."""
    assert levels.fermi_from_handbook(handbook_ev) == pytest.approx(fermi_ev, abs=1e-3)
    assert levels.handbook_from_fermi(fermi_ev) == pytest.approx(handbook_ev, abs=1e-3)


@pytest.mark.parametrize(
    ("name", "fermi_ev", "vacuum_ev"),
    [
        ("Cu L3M45M45", 918.6, 914.1),
        ("Ag M4N45N45", 357.8, 353.3),
        ("Al KL23L23", 1393.1, 1388.6),
        ("Au M5N67N67", 2015.8, 2011.3),
    ],
)
def test_standard_vacuum_level(name: str, fermi_ev: float, vacuum_ev: float) -> None:
    """IUPAC, Pure Appl. Chem. 92 (2020) 1781: the standard vacuum level lies 4.500 eV above the Fermi level."""
    assert levels.vacuum_from_fermi(fermi_ev) == pytest.approx(vacuum_ev, abs=1e-9), name
    assert levels.fermi_from_vacuum(vacuum_ev) == pytest.approx(fermi_ev, abs=1e-9), name


@pytest.mark.parametrize(
    ("name", "direct_fermi_ev", "minimum_vacuum_ev"),
    [("Cu L3M45M45", 918.6, 916.3), ("Al KL23L23", 1393.1, 1391.6), ("Au M5N67N67", 2015.8, 2015.8)],
)
def test_vacuum_referenced_minima(name: str, direct_fermi_ev: float, minimum_vacuum_ev: float) -> None:
    """Worked values at 0.5 % resolution: 914.1 + 2.2, 1388.6 + 3.0 and 2011.3 + 4.5 eV (direct maxima from memory)."""
    fwhm = levels.line_fwhm_ev(direct_fermi_ev, NATURAL_EV)
    minimum = levels.minimum_from_maximum(levels.vacuum_from_fermi(direct_fermi_ev), fwhm)
    assert minimum == pytest.approx(minimum_vacuum_ev, abs=0.2), name


@pytest.mark.parametrize(("centre", "fwhm"), [(100.0, 4.0), (1396.0, 7.4)])
def test_the_minimum_of_a_sampled_gaussian(centre: float, fwhm: float) -> None:
    """Against a numerical derivative: the minimum stands FWHM / (2 sqrt(2 ln 2)) above the maximum."""
    energy = np.arange(centre - 4 * fwhm, centre + 4 * fwhm, 0.002)
    line = np.exp(-4.0 * np.log(2.0) * ((energy - centre) / fwhm) ** 2)
    minimum = energy[np.argmin(np.gradient(line, energy))]
    assert levels.minimum_from_maximum(centre, fwhm) == pytest.approx(minimum, abs=0.005)
    assert levels.maximum_from_minimum(minimum, fwhm) == pytest.approx(centre, abs=0.005)


@given(ENERGIES)
def test_conversions_undo_each_other(energy: float) -> None:
    assert levels.handbook_from_fermi(levels.fermi_from_handbook(energy)) == pytest.approx(energy, abs=1e-9)
    assert levels.fermi_from_vacuum(levels.vacuum_from_fermi(energy)) == pytest.approx(energy, abs=1e-9)
    assert levels.maximum_from_minimum(levels.minimum_from_maximum(energy, 5.0), 5.0) == pytest.approx(energy, abs=1e-9)


@given(ENERGIES, ENERGIES)
def test_conversions_keep_the_order_of_lines(first: float, second: float) -> None:
    low, high = sorted((first, second))
    assert levels.fermi_from_handbook(low) <= levels.fermi_from_handbook(high)


def test_conversions_take_arrays() -> None:
    energies = np.array([60.0, 920.0, 2024.0])
    given_before = energies.copy()
    assert levels.fermi_from_handbook(energies) == pytest.approx([63.445, 920.943, 2021.730], abs=1e-3)
    assert levels.vacuum_from_fermi(energies) == pytest.approx([55.5, 915.5, 2019.5])
    assert np.array_equal(energies, given_before)


def test_examples_of_the_docstrings() -> None:
    result = doctest.testmod(levels)
    assert result.attempted >= 2
    assert result.failed == 0
