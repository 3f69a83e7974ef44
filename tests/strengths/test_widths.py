"""Widths by lifetime, by band, and the criterion between atom-like and band-like lines."""

from __future__ import annotations

import doctest
import math
from types import ModuleType

import numpy as np
import pytest
import xraydb
import xraylib

from ident.physics import lifetimes, widths
from ident.physics.lifetimes import LIFETIMES, level_width_ev
from ident.physics.widths import hole_repulsion_ev, is_atom_like, joined_width_ev, natural_width_ev, plasmon_losses_ev

SUBSHELL = {"M23": "M3", "M45": "M5", "N23": "N3", "N45": "N5", "N67": "N7"}


@pytest.mark.parametrize("module", [lifetimes, widths], ids=lambda module: module.__name__)
def test_examples_in_the_docstrings(module: ModuleType) -> None:
    result = doctest.testmod(module)
    assert result.attempted > 0
    assert result.failed == 0


@pytest.mark.parametrize("name", list(LIFETIMES))
def test_lifetimes_follow_the_library(name: str) -> None:
    """Campbell and Papp (2001) in xraylib: the polynomial, fitted anew by numpy, and its scatter as stated."""
    lowest, highest, coefficients, factor = LIFETIMES[name]
    z, log_width = [], []
    for number in range(lowest, highest + 1):
        try:
            width = 1e3 * xraylib.AtomicLevelWidth(number, getattr(xraylib, f"{SUBSHELL.get(name, name)}_SHELL"))
        except ValueError:
            continue
        z.append(number)
        log_width.append(math.log(width))
    x = np.log(np.array(z) / 50.0)
    fresh = np.polyfit(x, log_width, len(coefficients) - 1)
    assert coefficients == pytest.approx(fresh, abs=2e-3)
    assert np.std(log_width - np.polyval(fresh, x)) == pytest.approx(math.log(factor), abs=0.05)


@pytest.mark.parametrize(("name", "tolerance"), [("K", 0.1), ("L3", 0.3), ("M45", 0.3)])
def test_lifetimes_against_a_second_library(name: str, tolerance: float) -> None:
    """Level widths of xraydb (Krause and Oliver 1979 and others), median over Z = 36 to 89."""
    own = [level_width_ev(z, name) for z in range(36, 90)]
    other = [xraydb.core_width(xraydb.atomic_symbol(z))[SUBSHELL.get(name, name)] for z in range(36, 90)]
    assert np.median(np.abs(np.log(np.array(own) / other))) < tolerance


@pytest.mark.parametrize("lorentzian", [0.2, 1.0, 3.0])
def test_folded_width_by_numerics(lorentzian: float) -> None:
    """A Voigt profile from scipy, its half width found on a grid."""
    from scipy.special import voigt_profile

    x = np.linspace(0.0, 10.0, 200001)
    shape = voigt_profile(x, 1.0 / 2.354820045, lorentzian / 2.0)
    half = x[np.argmin(np.abs(shape - shape[0] / 2.0))]
    assert joined_width_ev(lorentzian, 1.0) == pytest.approx(2.0 * half, rel=1e-3)


# L3 and d band binding energies and direct maxima from the Fermi level, d band widths: from memory.
@pytest.mark.parametrize(
    ("z", "vacancy_ev", "band_ev", "kinetic_ev", "published_u", "width_ev", "atom_like"),
    [
        (28, 852.7, 2.0, 846.2, 2.5, 3.8, False),
        (29, 932.7, 3.0, 918.6, 8.0, 2.8, True),
        (30, 1021.8, 10.1, 992.1, 9.5, 1.3, True),
    ],
)
def test_criterion_for_atom_like_lines(
    z: int,
    vacancy_ev: float,
    band_ev: float,
    kinetic_ev: float,
    published_u: float,
    width_ev: float,
    atom_like: bool,
) -> None:
    """Nickel, copper, zinc: repulsion of Antonides et al. (1977, from memory) to 0.5 eV, and class of the width."""
    repulsion = hole_repulsion_ev(vacancy_ev, band_ev, band_ev, kinetic_ev)
    assert repulsion == pytest.approx(published_u, abs=0.5)
    assert is_atom_like(repulsion, width_ev) is atom_like
    assert (natural_width_ev(z, "L3", "M45M45") < 4.0) is atom_like


def test_silver_stands_at_the_limit() -> None:
    """U = 374.0 - 2 * 5.2 - 357.8 = 5.8 eV (memory) lies between W and 2 W; measured lines are sharp."""
    repulsion = hole_repulsion_ev(374.0, 5.2, 5.2, 357.8)
    assert widths.D_BAND_EV[47] < repulsion < 2.0 * widths.D_BAND_EV[47]
    assert natural_width_ev(47, "M5", "N45N45") < 4.5


@pytest.mark.parametrize(
    ("name", "solid", "bulk_ev", "surface_ev"),
    [
        ("Al", (3, 2.70, 26.98, 0.0), 15.3, 10.6),
        ("Mg", (2, 1.738, 24.305, 0.0), 10.6, 7.1),
        ("Si", (4, 2.33, 28.086, 1.1), 16.9, 11.3),
        ("Na", (1, 0.97, 22.99, 0.0), 5.8, 3.9),
        ("Be", (2, 1.85, 9.012, 0.0), 18.7, 12.8),
    ],
)
def test_plasmon_losses(name: str, solid: tuple[float, float, float, float], bulk_ev: float, surface_ev: float) -> None:
    """Measured losses (H. Raether 1980, from memory), to 1.2 eV."""
    assert plasmon_losses_ev(*solid) == pytest.approx((bulk_ev, surface_ev), abs=1.2), name


def test_holes_that_live_short_make_broad_lines() -> None:
    """Coster-Kronig widths of 3s and 4p holes of several eV (Campbell and Papp): core lines with them are broader."""
    copper = [natural_width_ev(29, "L3", finals) for finals in ("M1M1", "M23M23", "M45M45")]
    assert copper == sorted(copper, reverse=True)
    assert natural_width_ev(47, "M45", "N1N45") > natural_width_ev(47, "M5", "N45N45") + 1.5
