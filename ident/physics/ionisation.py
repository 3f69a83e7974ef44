"""Cross-sections for ionisation of a level by electrons.

Energies are in eV, cross-sections in cm2. An overvoltage U = beam / binding of one or less ionises nothing. All
functions take numbers or arrays that broadcast against each other and give an array of the common shape.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

RYDBERG_EV = 13.6057  # CODATA
BOHR_CM = 0.529177e-8  # CODATA
ELECTRON_REST_EV = 510_999.0  # CODATA
GRYZINSKI_CM2_EV2 = 6.51e-14
FloatArray = NDArray[np.float64]


def gryzinski_shape(overvoltage: ArrayLike) -> FloatArray:
    """Gryzinski's g(U), without unit; zero at U of one or less."""
    u = np.asarray(overvoltage, dtype=float)
    v = np.where(u > 1.0, u, 2.0)
    g = (1 / v) * ((v - 1) / (v + 1)) ** 1.5 * (1 + (2 / 3) * (1 - 1 / (2 * v)) * np.log(2.7 + np.sqrt(v - 1)))
    return np.where(u > 1.0, g, 0.0)


def gryzinski_cm2(binding_ev: ArrayLike, electrons: ArrayLike, beam_ev: ArrayLike) -> FloatArray:
    """Cross-section of a level after M. Gryzinski, Phys. Rev. 138 (1965) A336 (formula from memory), in cm2.

    sigma = n 6.51e-14 cm2 eV2 / I^2 g(U), g = (1/U) [(U-1)/(U+1)]^1.5 {1 + 2/3 (1 - 1/(2U)) ln[2.7 + (U-1)^0.5]};
    doi 10.1103/PhysRev.138.A336. Classical; good to perhaps a factor of 1.5 above U = 1.5.

    Parameters
    ----------
    binding_ev : array_like
        Binding energy of the level, above zero.
    electrons : array_like
        Electrons in it.
    beam_ev : array_like
        Energy of the primary electrons.

    >>> f"{gryzinski_cm2(284.2, 2, 5000.0):.2e}"  # C K, worked from the formula: 1.730e-19
    '1.73e-19'
    """
    binding = np.asarray(binding_ev, dtype=float)
    shape = gryzinski_shape(np.asarray(beam_ev, dtype=float) / binding)
    out: FloatArray = np.asarray(electrons) * GRYZINSKI_CM2_EV2 / binding**2 * shape
    return out


def casnati_cm2(binding_ev: ArrayLike, electrons: ArrayLike, beam_ev: ArrayLike) -> FloatArray:
    """Cross-section of a level after E. Casnati, A. Tartari, C. Baraldi, J. Phys. B 15 (1982) 155, in cm2.

    sigma = n a0^2 R (Ry/I)^2 psi phi ln(U)/U, phi = 10.57 exp(-1.736/U + 0.317/U^2),
    psi = (I/Ry)^(-0.0318 + 0.3160/U - 0.1135/U^2), R the relativistic factor of Gryzinski in J = mc^2/I;
    doi 10.1088/0022-3700/15/1/022. Fitted to K shells, U up to 20: for other shells it is an extrapolation.

    Parameters
    ----------
    binding_ev : array_like
        Binding energy of the level, above zero.
    electrons : array_like
        Electrons in it.
    beam_ev : array_like
        Energy of the primary electrons.

    >>> f"{casnati_cm2(1559.6, 2, 10000.0):.2e}"  # Al K, worked from the formula: 1.106e-20
    '1.11e-20'
    """
    binding = np.asarray(binding_ev, dtype=float)
    over = np.asarray(beam_ev, dtype=float) / binding
    u = np.where(over > 1.0, over, 2.0)
    phi = 10.57 * np.exp(-1.736 / u + 0.317 / u**2)
    psi = (binding / RYDBERG_EV) ** (-0.0318 + 0.3160 / u - 0.1135 / u**2)
    factor = _relativistic(u, ELECTRON_REST_EV / binding)
    size = np.asarray(electrons) * BOHR_CM**2 * factor * (RYDBERG_EV / binding) ** 2
    return np.where(over > 1.0, size * psi * phi * np.log(u) / u, 0.0)


def _relativistic(u: FloatArray, j: FloatArray) -> FloatArray:
    above = (1 + u) * (u + 2 * j) * (1 + j) ** 2
    below = j**2 * (1 + 2 * j) + u * (u + 2 * j) * (1 + j) ** 2
    out: FloatArray = (1 + 2 * j) / (u + 2 * j) * ((u + j) / (1 + j)) ** 2 * (above / below) ** 1.5
    return out


CrossSection = Callable[[ArrayLike, ArrayLike, ArrayLike], FloatArray]
MODELS: dict[str, CrossSection] = {"gryzinski": gryzinski_cm2, "casnati": casnati_cm2}
