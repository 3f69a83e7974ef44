"""Cross-sections for ionisation of a level by electrons.

Energies are in eV, cross-sections in cm2. An overvoltage U = beam / binding of one or less ionises nothing.
"""

from __future__ import annotations

import math

RYDBERG_EV = 13.6057  # CODATA
BOHR_CM = 0.529177e-8  # CODATA
ELECTRON_REST_EV = 510_999.0  # CODATA
GRYZINSKI_CM2_EV2 = 6.51e-14


def gryzinski_shape(overvoltage: float) -> float:
    """Gryzinski's g(U), without unit; zero at U of one or less."""
    u = overvoltage
    if u <= 1.0:
        return 0.0
    return (1 / u) * ((u - 1) / (u + 1)) ** 1.5 * (1 + (2 / 3) * (1 - 1 / (2 * u)) * math.log(2.7 + math.sqrt(u - 1)))


def gryzinski_cm2(binding_ev: float, electrons: int, beam_ev: float) -> float:
    """Cross-section of a level after M. Gryzinski, Phys. Rev. 138 (1965) A336 (formula from memory), in cm2.

    sigma = n 6.51e-14 cm2 eV2 / I^2 g(U), g = (1/U) [(U-1)/(U+1)]^1.5 {1 + 2/3 (1 - 1/(2U)) ln[2.7 + (U-1)^0.5]}

    Classical; good to perhaps a factor of 1.5 above U = 1.5.

    Parameters
    ----------
    binding_ev : float
        Binding energy of the level, above zero.
    electrons : int
        Electrons in it.
    beam_ev : float
        Energy of the primary electrons.
    """
    return electrons * GRYZINSKI_CM2_EV2 / binding_ev**2 * gryzinski_shape(beam_ev / binding_ev)


def casnati_cm2(binding_ev: float, electrons: int, beam_ev: float) -> float:
    """Cross-section of a level after Casnati, Tartari and Baraldi, J. Phys. B 15 (1982) 155, in cm2.

    sigma = n a0^2 R (Ry/I)^2 psi phi ln(U)/U, phi = 10.57 exp(-1.736/U + 0.317/U^2),
    psi = (I/Ry)^(-0.0318 + 0.3160/U - 0.1135/U^2), R the relativistic factor of Gryzinski in J = mc^2/I.

    Fitted to K shells: for other shells it is an extrapolation.

    Parameters
    ----------
    binding_ev : float
        Binding energy of the level, above zero.
    electrons : int
        Electrons in it.
    beam_ev : float
        Energy of the primary electrons.
    """
    u = beam_ev / binding_ev
    if u <= 1.0:
        return 0.0
    phi = 10.57 * math.exp(-1.736 / u + 0.317 / u**2)
    psi = (binding_ev / RYDBERG_EV) ** (-0.0318 + 0.3160 / u - 0.1135 / u**2)
    factor = _relativistic(u, ELECTRON_REST_EV / binding_ev)
    return electrons * BOHR_CM**2 * factor * (RYDBERG_EV / binding_ev) ** 2 * psi * phi * math.log(u) / u


def _relativistic(u: float, j: float) -> float:
    above = (1 + u) * (u + 2 * j) * (1 + j) ** 2
    below = j**2 * (1 + 2 * j) + u * (u + 2 * j) * (1 + j) ** 2
    return (1 + 2 * j) / (u + 2 * j) * ((u + j) / (1 + j)) ** 2 * (above / below) ** 1.5
