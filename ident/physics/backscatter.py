"""Ionisation by electrons that the solid scatters back: the factor by which it adds to that by the beam.

Without unit; one means no backscattering. Functions take numbers or arrays that broadcast against each other.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
# Angle of incidence in degrees: factor = 1 + (a + b Z^m) U^-n + c Z^m + d.
SHIMIZU = {
    0: (2.34, -2.10, 0.14, 0.35, 2.58, -2.98),
    30: (0.462, -0.777, 0.20, 0.32, 1.15, -1.05),
    45: (1.21, -1.39, 0.13, 0.33, 1.94, -1.88),
}


def shimizu_factor(z: ArrayLike, overvoltage: ArrayLike, incidence_deg: int = 30) -> FloatArray:
    """Backscattering factor after R. Shimizu, Jpn. J. Appl. Phys. 22 (1983) 1631 (coefficients from memory).

    At 30 degrees 1 + (0.462 - 0.777 Z^0.20) U^-0.32 + 1.15 Z^0.20 - 1.05, at 0 and 45 degrees in the same form;
    doi 10.1143/JJAP.22.1631. Fitted to Monte Carlo runs of S. Ichimura and R. Shimizu (Surf. Sci. 112 (1981) 386)
    for beams of 3 to 10 keV; good to about 10 %. Never less than one: where the fit falls below that (light elements
    near threshold) it has no meaning.

    Parameters
    ----------
    z : array_like
        Atomic number of the solid, a mean for compounds.
    overvoltage : array_like
        Beam energy over binding energy; one where it is one or less.
    incidence_deg : int
        Angle of the beam to the surface normal: 0, 30 or 45.

    >>> round(float(shimizu_factor(29, 5.36, 0)), 1)  # Cu L3 at 5 keV; published calculations give 1.5 to 1.7
    1.6
    """
    a, b, m, n, c, d = SHIMIZU[incidence_deg]
    u = np.asarray(overvoltage, dtype=float)
    power = np.asarray(z, dtype=float) ** m
    factor = 1 + (a + b * power) * np.maximum(u, 1.0) ** -n + c * power + d
    return np.where(u > 1.0, np.maximum(factor, 1.0), 1.0)


def reuter_factor(z: ArrayLike, overvoltage: ArrayLike) -> FloatArray:
    """Backscattering factor after W. Reuter (Proc. 6th Int. Conf. X-ray Optics, 1972, 121), formula from memory.

    1 + 2.8 (1 - 0.9/U) eta with eta the backscattering coefficient, see `reuter_coefficient`. Older and simpler than
    Shimizu's, kept to compare with it. Parameters as for `shimizu_factor`.
    """
    u = np.asarray(overvoltage, dtype=float)
    return np.where(u > 1.0, 1 + 2.8 * (1 - 0.9 / np.maximum(u, 1.0)) * reuter_coefficient(z), 1.0)


def reuter_coefficient(z: ArrayLike) -> FloatArray:
    """Part of 10 to 100 keV electrons that a solid sends back; -0.0254 + 0.016 Z - 1.86e-4 Z^2 + 8.3e-7 Z^3.

    >>> round(float(reuter_coefficient(79)), 2)  # gold: 0.48 to 0.52 measured
    0.49
    """
    n = np.asarray(z, dtype=float)
    return -0.0254 + 0.016 * n - 1.86e-4 * n**2 + 8.3e-7 * n**3
