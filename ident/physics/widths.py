"""Natural widths of Auger lines by class, what decides the class, and where losses and satellites stand beside a line.

A line is as wide as the holes it starts from and ends with live short (`lifetimes`), and as its final state is
spread: over the multiplet of two core holes, over the band of valence electrons, or over the band folded with
itself for two valence holes, unless these stay on one atom.
"""

from __future__ import annotations

import math
import re

from .lifetimes import level_width_ev

# Full widths at half maximum in eV of the final states, satellites unresolved (common practice, no source).
SP_BAND_EV, ANION_EV, MULTIPLET_EV, ATOM_LIKE_EV, OUTER_EV = 7.5, 6.0, 3.5, 3.2, 4.0
LEAST_BAND_EV, MOST_BAND_EV = 4.5, 6.0
# Widths of d bands in eV, W. A. Harrison, Electronic Structure and the Properties of Solids (1980), from memory; of a
# wide band that is not full, the occupied part counts: hence the limits.
D_BAND_EV = {
    21: 5.1, 22: 6.1, 23: 6.8, 24: 6.6, 25: 5.6, 26: 4.8, 27: 4.4, 28: 3.8, 29: 2.8, 39: 6.6, 40: 8.4, 41: 9.7,
    42: 10.0, 43: 9.4, 44: 8.4, 45: 6.9, 46: 5.4, 47: 3.6, 71: 7.8, 72: 9.6, 73: 11.1, 74: 11.4, 75: 11.0, 76: 10.3,
    77: 8.7, 78: 7.0, 79: 5.3,
}  # fmt: skip
BAND_OF = {"M45": range(21, 29), "N45": range(39, 47), "O45": range(71, 80)}  # beyond: on one atom
SATELLITE_EV = (6.0, 13.0)  # above the main line: lines of atoms with a second vacancy (common practice, no source)


def natural_width_ev(z: int, vacancy: str, finals: str) -> float:
    """Natural width of a line in eV, from the vacancy (such as L3) and the final levels (such as M23M45).

    Lifetimes add up, as Lorentzians do; a Lorentzian and a Gaussian of widths L and G give together
    0.5346 L + (0.2166 L^2 + G^2)^0.5 (J. J. Olivero, R. L. Longbothum, JQSRT 17 (1977) 233,
    doi 10.1016/0022-4073(77)90161-3).
    """
    parts = re.findall(r"[KLMNOP]\d*|V", finals)
    lifetime = level_width_ev(z, vacancy) + sum(level_width_ev(z, part) for part in parts if not _banded(z, part))
    return joined_width_ev(lifetime, _final_width_ev(z, vacancy, parts))


def joined_width_ev(lorentzian_ev: float, gaussian_ev: float) -> float:
    """Full width of a Lorentzian and a Gaussian folded, to 0.02 % (Olivero and Longbothum 1977).

    >>> round(joined_width_ev(1.0, 1.0), 3)  # numerical folding: 1.638
    1.638
    """
    return 0.5346 * lorentzian_ev + math.sqrt(0.2166 * lorentzian_ev**2 + gaussian_ev**2)


def _final_width_ev(z: int, vacancy: str, parts: list[str]) -> float:
    if (vacancy == "K" and z <= 7) or (vacancy[0] == "L" and z <= 16):
        return SP_BAND_EV
    if vacancy == "K" and z <= 9:
        return ANION_EV
    bands = sum(1 for part in parts if _banded(z, part))
    if bands:
        return min(max(D_BAND_EV.get(z, LEAST_BAND_EV), LEAST_BAND_EV), MOST_BAND_EV)
    if vacancy[0] in "NO":
        return OUTER_EV
    deep = vacancy == "K" or (len(parts) == 2 and all(part[-2:] in {"45", "67"} or part == "V" for part in parts))
    return ATOM_LIKE_EV if deep else MULTIPLET_EV


def _banded(z: int, part: str) -> bool:
    """Whether a final level is a band whose holes do not stay on one atom."""
    if part == "V":
        return not any(band.stop <= z < band.stop + 7 for band in BAND_OF.values())
    return part in BAND_OF and z in BAND_OF[part]


def hole_repulsion_ev(vacancy_ev: float, first_ev: float, second_ev: float, kinetic_ev: float) -> float:
    """Repulsion of two holes on one atom, U = E(vacancy) - E(first) - E(second) - E(kinetic), in eV.

    All energies from the Fermi level, of the direct spectrum's maximum; E. Antonides, E. C. Janse, G. A. Sawatzky,
    Phys. Rev. B 15 (1977) 1669, doi 10.1103/PhysRevB.15.1669.

    >>> round(hole_repulsion_ev(932.7, 3.0, 3.0, 918.6), 1)  # Cu L3M45M45; published 8.0
    8.1
    """
    return vacancy_ev - first_ev - second_ev - kinetic_ev


def is_atom_like(repulsion_ev: float, band_ev: float) -> bool:
    """Whether two valence holes stay on their atom and make a narrow line: U > 2 W.

    M. Cini, Solid State Commun. 20 (1976) 605, doi 10.1016/0038-1098(77)90390-4; G. A. Sawatzky, Phys. Rev. Lett. 39
    (1977) 504, doi 10.1103/PhysRevLett.39.504. Between W and 2 W both parts are seen.

    >>> is_atom_like(8.0, 2.8), is_atom_like(2.5, 3.8)  # copper, nickel
    (True, False)
    """
    return repulsion_ev > 2.0 * band_ev


def plasmon_losses_ev(
    valence_electrons: float, density_g_cm3: float, molar_mass: float, gap_ev: float = 0.0
) -> tuple[float, float]:
    """How far below a line its bulk and its surface plasmon losses stand, in eV.

    Bulk: (Ep^2 + Eg^2)^0.5 with Ep of free electrons, 28.8 (Nv rho / M)^0.5; surface: Ep / 2^0.5 (R. H. Ritchie,
    Phys. Rev. 106 (1957) 874, doi 10.1103/PhysRev.106.874). Good to 1 eV for Na, Mg, Al, Si and Be; transition and
    noble metals have no sharp plasmon.

    >>> [round(loss, 1) for loss in plasmon_losses_ev(3, 2.70, 26.98)]  # aluminium: 15.3 and 10.3 measured
    [15.8, 11.2]
    """
    free = 28.8 * math.sqrt(valence_electrons * density_g_cm3 / molar_mass)
    return math.hypot(free, gap_ev), free / math.sqrt(2.0)


def measured_width_ev(natural_ev: float, energy_ev: float, resolution: float, step_ev: float = 0.0) -> float:
    """Width of a line as recorded, in eV: natural width, analyser and step in quadrature."""
    return math.sqrt(natural_ev**2 + (resolution * energy_ev) ** 2 + (1.5 * step_ev) ** 2)
