"""From electrons that leave the solid to what is recorded: film on top, analyser, depth of the derivative minimum.

Functions take numbers or arrays that broadcast against each other.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
FWHM_OF_SIGMA = 2.0 * math.sqrt(2.0 * math.log(2.0))
TRANSMISSION_POWER = {"constant ratio": 1.0, "constant pass energy": -0.5, "ideal": 0.0}
CYLINDRICAL_MIRROR_DEG = 42.3  # emission along the axis of the mirror, P. W. Palmberg et al. (1969), common practice


def film_transmission(thickness_nm: ArrayLike, free_path_nm: ArrayLike, emission_deg: ArrayLike = 0.0) -> FloatArray:
    """Part of a line's electrons that pass a film on top without loss: exp(-d / (lambda cos theta)).

    Straight lines, no elastic scattering (ISO 18115-1 terms, common practice); angles below 60 degrees.

    Parameters
    ----------
    thickness_nm, free_path_nm : array_like
        Thickness of the film, and inelastic mean free path in it at the line's energy.
    emission_deg : array_like
        Angle between the surface normal and the direction in which electrons are collected.

    >>> round(float(film_transmission(1.0, 1.0)), 3)  # 1/e
    0.368
    """
    cosine = np.cos(np.radians(np.asarray(emission_deg, dtype=float)))
    return np.exp(-np.asarray(thickness_nm, dtype=float) / (np.asarray(free_path_nm, dtype=float) * cosine))


def analyser_transmission(energy_ev: ArrayLike, mode: str = "constant ratio") -> FloatArray:
    """Relative transmission of an analyser, one at 1000 eV.

    `constant ratio` (delta E / E fixed, cylindrical mirror): the window and so the counts grow as E, E N(E) being
    recorded. `constant pass energy` (hemispherical): falls about as E^-0.5. `ideal`: one. Common practice, no
    source; a real analyser deviates from any of them by a smooth function, up to a factor of 2 from 50 to 2000 eV.

    >>> [round(float(x), 2) for x in analyser_transmission([100.0, 2000.0])]  # proportional to energy
    [0.1, 2.0]
    """
    return (np.asarray(energy_ev, dtype=float) / 1000.0) ** TRANSMISSION_POWER[mode]


def recorded_width_ev(natural_ev: ArrayLike, energy_ev: ArrayLike, resolution: float = 0.005) -> FloatArray:
    """Full width at half maximum as recorded, in eV: natural width and analyser in quadrature (Gaussians)."""
    return np.hypot(np.asarray(natural_ev, dtype=float), resolution * np.asarray(energy_ev, dtype=float))


def derivative_depth(area: ArrayLike, width_ev: ArrayLike) -> FloatArray:
    """Depth of the derivative minimum of a Gaussian line of some area and full width, in area units an eV^2.

    exp(-1/2) / (2 pi)^0.5 / s^2 with s = width / 2.3548: halving the width makes it four times as deep.

    >>> round(float(derivative_depth(1.0, 2.3548)), 4)  # s = 1 eV: exp(-1/2) / (2 pi)^0.5
    0.242
    """
    sigma = np.asarray(width_ev, dtype=float) / FWHM_OF_SIGMA
    out: FloatArray = np.asarray(area, dtype=float) * math.exp(-0.5) / math.sqrt(2.0 * math.pi) / sigma**2
    return out
