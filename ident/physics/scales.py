"""Energies as a user states them, to and from the absolute scale.

The absolute scale is the one of `physics`: derivative minimum, Fermi level, analyser resolution of 0.5 %. A user's
number differs from it in three ways, undone in this order: the level that his axis counts from (`levels`), whether
he reads the maximum of the direct line or the minimum of the differentiated one, and how far recording and smoothing
have broadened the line, since the minimum stands one standard deviation of the recorded line above its maximum.

Limits: lines are taken for Gaussian. The minimum of a Lorentzian stands 0.289 of its full width above its maximum
instead of 0.425, so that a lifetime-broadened line of 2.5 eV is off by 0.3 eV. A steep background, as below 100 eV,
moves both features by up to an eV (common practice, no source).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from ..errors import SettingError
from .levels import (
    FWHM_PER_SIGMA,
    RESOLUTION,
    VACUUM_ABOVE_FERMI_EV,
    fermi_from_handbook,
    handbook_from_fermi,
)

Reference = Literal["absolute", "fermi", "vacuum", "handbook"]
Kind = Literal["derivative", "direct"]

# Standard error of the straight line that ties the handbooks' scale to the absolute one (least squares over the
# anchors named in `levels`): at the centre of the anchors, and of the slope away from it.
HANDBOOK_PIVOT_EV, HANDBOOK_CENTRE_SIGMA_EV, HANDBOOK_SLOPE_SIGMA = 889.0, 0.25, 5.0e-4

MOST_RESOLUTION = 0.2  # of the energy: a retarding grid is no worse
MOST_BROADENING_EV = 50.0


def modulation_sigma_ev(peak_to_peak_ev: float) -> float:
    """Standard deviation that a sinusoidal modulation of so many eV, peak to peak, adds to a differentiated line.

    The first harmonic of N(E + k sin wt) is k/2 times dN/dE seen through a window (2/(pi k)) (1 - x^2/k^2)^0.5 of
    half width k: integrate the Fourier coefficient by parts. The variance of that semicircle is k^2/4; k is half
    of the peak-to-peak amplitude.

    >>> modulation_sigma_ev(6.0)
    1.5
    """
    return peak_to_peak_ev / 4.0


def smoothing_sigma_ev(window_ev: float) -> float:
    """Standard deviation that a least-squares derivative over a window of so many eV adds to a line.

    The slope of a line or parabola fitted to 2m+1 points (A. Savitzky, M. J. E. Golay, Anal. Chem. 36 (1964) 1627,
    doi 10.1021/ac60214a047) is dN/dE seen through a window proportional to 1 - x^2/h^2 of half width h, whose
    variance is h^2/5 for many points; the window is 2h. Good to 0.1 eV while the window is no wider than the line;
    half as wide again, and the minimum stands 0.25 eV further up.

    >>> round(smoothing_sigma_ev(10.0), 2)
    2.24
    """
    return window_ev / (2.0 * math.sqrt(5.0))


def fwhm_from_separation_ev(separation_ev: float) -> float:
    """Full width of a line, in eV, from how far apart maximum and minimum of its derivative stand: two sigmas.

    >>> round(fwhm_from_separation_ev(2.0), 4)  # 2 (2 ln 2)^0.5 = 2.3548
    2.3548
    """
    return separation_ev * FWHM_PER_SIGMA / 2.0


def handbook_term_sigma_ev(energy_ev: float) -> float:
    """Standard error of the term between the handbooks' scale and the absolute one, in eV.

    Single handbook energies scatter about that term by another 0.9 eV (`levels.HANDBOOK_SCATTER_EV`), which the
    uncertainty of each line includes.

    >>> round(handbook_term_sigma_ev(2024.0), 1)
    0.6
    """
    return math.hypot(HANDBOOK_CENTRE_SIGMA_EV, HANDBOOK_SLOPE_SIGMA * (energy_ev - HANDBOOK_PIVOT_EV))


def minimum_ev(maximum_ev: float, natural_ev: float, relative: float, added_sigma_ev: float = 0.0) -> float:
    """Derivative minimum of a line whose direct maximum is given, in eV.

    maximum + [ (natural^2 + (relative maximum)^2) / 2.3548^2 + added^2 ]^0.5

    Parameters
    ----------
    maximum_ev : float
        Maximum of the direct line.
    natural_ev : float
        Its natural full width at half maximum.
    relative : float
        Resolution of the analyser over the energy, full width; 0 where it is constant.
    added_sigma_ev : float
        Everything else that broadens, as a standard deviation: constant resolution, modulation, smoothing.

    >>> round(minimum_ev(918.6, 2.5, 0.005) - 4.5, 1)  # Cu L3M45M45, vacuum level: 916.3 eV
    916.3
    """
    return maximum_ev + math.hypot(natural_ev / FWHM_PER_SIGMA, relative * maximum_ev / FWHM_PER_SIGMA, added_sigma_ev)


def maximum_ev(minimum: float, natural_ev: float, relative: float, added_sigma_ev: float = 0.0) -> float:
    """Direct maximum of a line from its derivative minimum, in eV; undoes `minimum_ev` exactly."""
    k = relative / FWHM_PER_SIGMA
    constant = (natural_ev / FWHM_PER_SIGMA) ** 2 + added_sigma_ev**2
    # (minimum - x)^2 = constant + k^2 x^2, of which the lower root is the maximum
    root = math.sqrt(k**2 * minimum**2 + (1.0 - k**2) * constant)
    return (minimum - root) / (1.0 - k**2)


@dataclass(frozen=True, kw_only=True, slots=True)
class EnergyScale:
    """How a user's energies are to be read: level, feature, and what broadens the recorded line."""

    reference: Reference = "handbook"  # level that the axis counts from; absolute is the Fermi level
    kind: Kind = "derivative"  # minimum of the differentiated line, or maximum of the direct one
    resolution: float = RESOLUTION  # of the analyser, full width over energy
    resolution_ev: float = 0.0  # constant part, full width
    modulation_ev: float = 0.0  # peak to peak
    smoothing_ev: float = 0.0  # window of the least-squares derivative
    separation_ev: float | None = None  # between maximum and minimum of the line; overrides what broadens
    work_function_ev: float = VACUUM_ABOVE_FERMI_EV  # of the analyser, for the vacuum level

    def __post_init__(self) -> None:
        _check("resolution", self.resolution, MOST_RESOLUTION, "a part of the energy such as 0.005")
        for name in ("resolution_ev", "modulation_ev", "smoothing_ev"):
            _check(name, getattr(self, name), MOST_BROADENING_EV, "eV such as 2")
        if self.separation_ev is not None:
            _check("separation_ev", self.separation_ev, MOST_BROADENING_EV, "eV such as 5")
        _check("work_function_ev", self.work_function_ev, 10.0, "eV such as 4.5")

    @property
    def added_sigma_ev(self) -> float:
        """Standard deviation of all constant broadening together, in eV."""
        constant = self.resolution_ev / FWHM_PER_SIGMA
        return math.hypot(constant, modulation_sigma_ev(self.modulation_ev), smoothing_sigma_ev(self.smoothing_ev))

    @property
    def needs_width(self) -> bool:
        """Whether the natural width of a line matters: not for minima recorded as the absolute scale has them."""
        same = self.separation_ev is None and self.resolution == RESOLUTION and self.added_sigma_ev == 0.0
        return not (self.kind == "derivative" and same)


def _check(name: str, value: float, most: float, wanted: str) -> None:
    if not 0.0 <= value <= most:
        said = name.removesuffix("_ev").replace("_", " ")
        raise SettingError(f"{said} {value:g} must lie between 0 and {most:g}; give {wanted}")


def stated_from_absolute(energy_ev: float, natural_ev: float, scale: EnergyScale) -> float:
    """Energy that a user reads for a line, in eV, from its energy on the absolute scale.

    Parameters
    ----------
    energy_ev : float
        Derivative minimum, Fermi level, 0.5 %.
    natural_ev : float
        Natural full width at half maximum of the line, see `widths`.
    scale : EnergyScale
        How the user states energies.

    Raises
    ------
    SettingError
        From `EnergyScale`, when a setting is out of its range.

    >>> gold = EnergyScale(reference="vacuum")
    >>> round(stated_from_absolute(2020.3, 2.5, gold), 1)  # Au M5N67N67, vacuum level: 2015.8 eV
    2015.8
    """
    feature = energy_ev
    if scale.needs_width:
        feature = maximum_ev(energy_ev, natural_ev, RESOLUTION)
        if scale.kind == "derivative":
            feature = _minimum_seen(feature, natural_ev, scale)
    return _on_level(feature, scale)


def absolute_from_stated(energy_ev: float, natural_ev: float, scale: EnergyScale) -> float:
    """Energy of a line on the absolute scale, in eV, from what a user reads; undoes `stated_from_absolute`.

    >>> metal = EnergyScale(reference="fermi", kind="direct")
    >>> round(absolute_from_stated(1393.0, 3.5, metal), 1)  # Al KL23L23, doi 10.1002/sia.1316: direct, Fermi level
    1396.3
    """
    feature = _from_level(energy_ev, scale)
    if not scale.needs_width:
        return feature
    if scale.kind == "derivative":
        if scale.separation_ev is not None:
            feature -= 0.5 * scale.separation_ev
        else:
            feature = maximum_ev(feature, natural_ev, scale.resolution, scale.added_sigma_ev)
    return minimum_ev(feature, natural_ev, RESOLUTION)


def conversion_sigma_ev(energy_ev: float, scale: EnergyScale) -> float:
    """Standard error of the conversion itself, in eV: nothing on the handbooks' scale, whose rows most lines are.

    The lines were brought from the handbooks' scale to the absolute one, so any other level carries the error of
    that fitted term.
    """
    return 0.0 if scale.reference == "handbook" else handbook_term_sigma_ev(energy_ev)


def _minimum_seen(maximum: float, natural_ev: float, scale: EnergyScale) -> float:
    if scale.separation_ev is not None:
        return maximum + 0.5 * scale.separation_ev
    return minimum_ev(maximum, natural_ev, scale.resolution, scale.added_sigma_ev)


def _on_level(energy_ev: float, scale: EnergyScale) -> float:
    if scale.reference == "handbook":
        return handbook_from_fermi(energy_ev)
    return energy_ev - scale.work_function_ev if scale.reference == "vacuum" else energy_ev


def _from_level(energy_ev: float, scale: EnergyScale) -> float:
    if scale.reference == "handbook":
        return fermi_from_handbook(energy_ev)
    return energy_ev + scale.work_function_ev if scale.reference == "vacuum" else energy_ev
