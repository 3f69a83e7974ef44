"""Mean free paths on arrays: `freepath.tpp2m_nm` for many energies and materials at once.

Apart from `freepath` because looking up one energy must not wait for numpy.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
LOWEST_EV = 50.0


def tpp2m_paths_nm(
    energy_ev: ArrayLike,
    valence_electrons: ArrayLike,
    density_g_cm3: ArrayLike,
    molar_mass: ArrayLike,
    gap_ev: ArrayLike = 0.0,
) -> FloatArray:
    """Mean free paths by TPP-2M in nm, formula, limits and doi in `freepath.tpp2m_nm`; all broadcast together.

    >>> [round(float(x), 2) for x in tpp2m_paths_nm([272.0, 1000.0], 4, 2.26, 12.011)]  # worked: 1.074 and 2.669
    [1.07, 2.67]
    """
    energy, density = np.asarray(energy_ev, dtype=float), np.asarray(density_g_cm3, dtype=float)
    u = np.asarray(valence_electrons, dtype=float) * density / np.asarray(molar_mass, dtype=float)
    plasmon = 28.8 * np.sqrt(u)
    beta = -0.10 + 0.944 / np.hypot(plasmon, gap_ev) + 0.069 * density**0.1
    c, d = 1.97 - 0.91 * u, 53.4 - 20.8 * u
    bracket = beta * np.log(0.191 / np.sqrt(density) * energy) - c / energy + d / energy**2
    out: FloatArray = 0.1 * energy / (plasmon**2 * bracket)
    return out


def average_path_nm(energy_ev: ArrayLike) -> FloatArray:
    """Mean free path in an average solid in nm, 0.00241 (E^0.946 + 148) above 50 eV, and as at 50 eV below.

    Drawn through the medians of TPP-2M over the elements that are solid (a test compares them, to 8 %); single
    materials lie a factor of 1.4 about it, more than twice as much for alkali metals. For a matrix not known.

    >>> round(float(average_path_nm(1000.0)), 1)  # TPP-2M: 1.2 (Au) to 2.7 (graphite)
    2.0
    """
    energy = np.maximum(np.asarray(energy_ev, dtype=float), LOWEST_EV)
    out: FloatArray = 0.00241 * (energy**0.946 + 148.0)
    return out
