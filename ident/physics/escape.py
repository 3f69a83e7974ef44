"""How deep Auger electrons come from: mean free path by the formula that holds at their energy, and depth seen."""

from __future__ import annotations

import math
from dataclasses import dataclass

from .freepath import atom_size_nm, seah_dench_compound_nm, seah_dench_nm, tpp2m_nm

TPP2M_FROM_EV = 50.0
# Stated accuracy: TPP-2M about 10 % rms against mean free paths from optical data, elements from 200 eV up
# (S. Tanuma, C. J. Powell, D. R. Penn, Surf. Interface Anal. 35 (2003) 268, from memory, hence doubled; worse below
# 200 eV and for caesium, graphite and diamond; without meaning in liquid neon, where it turns negative). Seah and
# Dench: a factor of about 1.4 about their curve.
TPP2M_FACTOR, SEAH_DENCH_FACTOR = 1.2, 1.4
DEPTHS = 3.0  # in units of the escape depth: 1 - exp(-3), 95 % of the signal, comes from there


@dataclass(frozen=True, kw_only=True, slots=True)
class FreePath:
    """Inelastic mean free path of an electron in a material."""

    nm: float
    factor: float  # one standard deviation, multiplicative
    formula: str  # TPP-2M, Seah-Dench, or Seah-Dench for compounds


def free_path(
    energy_ev: float,
    valence_electrons: float,
    density_g_cm3: float,
    molar_mass: float,
    gap_ev: float = 0.0,
    *,
    density_sigma_g_cm3: float = 0.0,
) -> FreePath:
    """Mean free path in an element: TPP-2M from 50 eV, where it begins to hold, Seah and Dench below.

    Formulas and DOIs in `freepath`. TPP-2M was fitted up to 2000 eV; up to 3200 eV relativity changes it by less
    than 1 %. The two differ by up to a factor of two where they meet (graphite), which is what they are worth there.

    Parameters
    ----------
    energy_ev : float
        Kinetic energy above the Fermi level.
    valence_electrons, density_g_cm3, molar_mass, gap_ev : float
        Of the element, see `freepath.tpp2m_nm`.
    density_sigma_g_cm3 : float
        Standard deviation of the density; the mean free path is taken to go as its inverse.

    >>> round(free_path(272.0, 4, 2.26, 12.011).nm, 2)  # C KVV in graphite
    1.07
    """
    unsure = density_sigma_g_cm3 / density_g_cm3
    if energy_ev >= TPP2M_FROM_EV:
        nm = tpp2m_nm(energy_ev, valence_electrons, density_g_cm3, molar_mass, gap_ev)
        return FreePath(nm=nm, factor=_with(TPP2M_FACTOR, unsure), formula="TPP-2M")
    nm = seah_dench_nm(energy_ev, atom_size_nm(density_g_cm3, molar_mass))
    return FreePath(nm=nm, factor=_with(SEAH_DENCH_FACTOR, unsure), formula="Seah-Dench")


def free_path_in_compound(
    energy_ev: float, density_g_cm3: float, molar_mass: float, *, density_sigma_g_cm3: float = 0.0
) -> FreePath:
    """Mean free path for an element met only in compounds or implanted: Seah and Dench for inorganic compounds.

    The atom's size is taken from the density given; parameters as for `free_path`.

    >>> round(free_path_in_compound(503.0, 1.14, 15.999).nm, 1)  # O KL23L23; silica has 1.8 to 2.0 nm there
    2.5
    """
    nm = seah_dench_compound_nm(energy_ev, atom_size_nm(density_g_cm3, molar_mass))
    factor = _with(SEAH_DENCH_FACTOR, density_sigma_g_cm3 / density_g_cm3)
    return FreePath(nm=nm, factor=factor, formula="Seah-Dench for compounds")


def _with(factor: float, relative: float) -> float:
    return math.exp(math.hypot(math.log(factor), relative))


def depth_seen_nm(free_path_nm: float, emission_deg: float = 0.0) -> float:
    """Depth that 95 % of a line's signal comes from, 3 lambda cos(theta), in nm (common practice, ISO 18115-1 terms).

    Elastic scattering is left out: it shortens the depth by up to a fifth (common practice, no source).

    Parameters
    ----------
    free_path_nm : float
        Inelastic mean free path.
    emission_deg : float
        Angle between the surface normal and the direction in which electrons are collected.

    >>> round(depth_seen_nm(1.0, 60.0), 2)
    1.5
    """
    return DEPTHS * free_path_nm * math.cos(math.radians(emission_deg))
