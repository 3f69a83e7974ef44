"""Reference levels, and the minimum of a differential line against the maximum of the direct one.

All functions take a float or an array of eV and give the same back.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, TypeVar

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

T = TypeVar("T", float, "NDArray[np.floating[Any]]")

# IUPAC, Pure Appl. Chem. 92 (2020) 1781: the standard vacuum level lies 4.500 eV above the Fermi level.
VACUUM_ABOVE_FERMI_EV = 4.500

# Handbook derivative minima share a scale of their own. A straight line through the anchors (Ni, Cu, Zn, Ga, Ge,
# Ag, Cd, In, Sn, Te, Al, Si, Au: direct Fermi-referenced maxima plus half a width) ties it to the absolute one;
# a parabola fits no better. Na, Mg and F are left out: their handbook samples were compounds.
HANDBOOK_OFFSET_EV = 3.62
HANDBOOK_SLOPE = -2.91e-3
HANDBOOK_SCATTER_EV = 0.9

FWHM_PER_SIGMA = 2.3548
RESOLUTION = 0.005


def fermi_from_handbook(energy_ev: T) -> T:
    """Absolute energy of a derivative minimum that a handbook gives, in eV.

    >>> round(fermi_from_handbook(920.0), 1)  # Cu L3M45M45: direct 918.6 eV plus half a width is 920.7
    920.9
    """
    return energy_ev + HANDBOOK_OFFSET_EV + HANDBOOK_SLOPE * energy_ev


def handbook_from_fermi(energy_ev: T) -> T:
    """Handbook energy of a derivative minimum on the absolute scale, in eV; undoes `fermi_from_handbook`."""
    return (energy_ev - HANDBOOK_OFFSET_EV) / (1.0 + HANDBOOK_SLOPE)


def vacuum_from_fermi(energy_ev: T) -> T:
    """Energy referenced to the standard vacuum level, in eV (IUPAC 2020).

    >>> vacuum_from_fermi(918.6)  # Cu L3M45M45
    914.1
    """
    return energy_ev - VACUUM_ABOVE_FERMI_EV


def fermi_from_vacuum(energy_ev: T) -> T:
    """Energy referenced to the Fermi level, in eV (IUPAC 2020)."""
    return energy_ev + VACUUM_ABOVE_FERMI_EV


def line_fwhm_ev(energy_ev: float, natural_ev: float, resolution: float = RESOLUTION) -> float:
    """Full width at half maximum of a line as measured, in eV: natural width and analyser in quadrature."""
    return (natural_ev**2 + (resolution * energy_ev) ** 2) ** 0.5


def minimum_from_maximum(energy_ev: float, fwhm_ev: float) -> float:
    """Derivative minimum of a direct line: a Gaussian falls steepest one standard deviation above its maximum."""
    return energy_ev + fwhm_ev / FWHM_PER_SIGMA


def maximum_from_minimum(energy_ev: float, fwhm_ev: float) -> float:
    """Direct maximum of a line from its derivative minimum; undoes `minimum_from_maximum`."""
    return energy_ev - fwhm_ev / FWHM_PER_SIGMA
