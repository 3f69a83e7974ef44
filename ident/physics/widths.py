"""Natural widths of Auger lines by class: how wide the differential line of a transition is."""

from __future__ import annotations

import math

# Full widths at half maximum in eV, lifetime, multiplets and band together (common practice, no source): two
# holes in a wide valence band fold it with itself; two holes in a narrow d band stay on one atom and give an
# atom-like, narrow line (Cini, Solid State Commun. 20 (1976) 605; Antonides et al., Phys. Rev. B 15 (1977) 1669,
# who place Cu, Zn, Ag and later elements on the atom-like side).
BAND_BAND_EV, CORE_BAND_EV, MULTIPLET_EV, ATOM_LIKE_EV, HEAVY_N_EV = 7.5, 6.5, 4.5, 3.5, 5.0
ATOM_LIKE_3D_Z, ATOM_LIKE_4D_Z = 29, 47


def natural_width_ev(z: int, vacancy: str, finals: str) -> float:
    """Natural width of a line in eV, from the vacancy (such as L3) and the final levels (such as M23M45)."""
    shell = vacancy[0]
    if shell == "K":
        return BAND_BAND_EV if z <= 9 else ATOM_LIKE_EV
    if shell == "L":
        return _l_width(z, finals)
    if shell == "M":
        if finals.count("N45") + finals.count("V") == 0 or z >= ATOM_LIKE_4D_Z:
            return ATOM_LIKE_EV if z >= ATOM_LIKE_4D_Z else MULTIPLET_EV
        return CORE_BAND_EV
    return HEAVY_N_EV


def _l_width(z: int, finals: str) -> float:
    if z <= 16:
        return BAND_BAND_EV
    if z <= 20:
        return MULTIPLET_EV
    bands = finals.count("M45") + finals.count("V")
    if z >= ATOM_LIKE_3D_Z:
        return ATOM_LIKE_EV if bands == 2 or "VV" in finals else MULTIPLET_EV
    return (MULTIPLET_EV, CORE_BAND_EV, CORE_BAND_EV)[min(bands, 2)]


def measured_width_ev(natural_ev: float, energy_ev: float, resolution: float, step_ev: float = 0.0) -> float:
    """Width of a line as recorded, in eV: natural width, analyser and step in quadrature."""
    return math.sqrt(natural_ev**2 + (resolution * energy_ev) ** 2 + (1.5 * step_ev) ** 2)
