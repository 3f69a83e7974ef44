"""Inelastic mean free paths of electrons in solids, in nm, for energies in eV above the Fermi level."""

from __future__ import annotations

import math

AVOGADRO = 6.02214e23  # CODATA


def plasmon_energy_ev(valence_electrons: float, density_g_cm3: float, molar_mass: float) -> float:
    """Energy of the free-electron plasmon, 28.8 (Nv rho / M)^0.5, in eV."""
    return 28.8 * math.sqrt(valence_electrons * density_g_cm3 / molar_mass)


def tpp2m_nm(
    energy_ev: float, valence_electrons: float, density_g_cm3: float, molar_mass: float, gap_ev: float = 0.0
) -> float:
    """Mean free path by TPP-2M, in nm; S. Tanuma, C. J. Powell, D. R. Penn, Surf. Interface Anal. 21 (1994) 165.

    lambda[A] = E / {Ep^2 [beta ln(gamma E) - C/E + D/E^2]} with Ep the plasmon energy,
    beta = -0.10 + 0.944/(Ep^2 + Eg^2)^0.5 + 0.069 rho^0.1, gamma = 0.191 rho^-0.5, C = 1.97 - 0.91 U,
    D = 53.4 - 20.8 U, U = Nv rho/M. Made for 50 to 2000 eV; at 50 eV it is at its limit.

    Parameters
    ----------
    energy_ev : float
        Kinetic energy.
    valence_electrons : float
        Valence electrons an atom or formula unit.
    density_g_cm3, molar_mass : float
        Density, and molar mass in g/mol.
    gap_ev : float
        Band gap; zero for a metal.
    """
    u = valence_electrons * density_g_cm3 / molar_mass
    plasmon = plasmon_energy_ev(valence_electrons, density_g_cm3, molar_mass)
    beta = -0.10 + 0.944 / math.hypot(plasmon, gap_ev) + 0.069 * density_g_cm3**0.1
    gamma = 0.191 / math.sqrt(density_g_cm3)
    c, d = 1.97 - 0.91 * u, 53.4 - 20.8 * u
    bracket = beta * math.log(gamma * energy_ev) - c / energy_ev + d / energy_ev**2
    return 0.1 * energy_ev / (plasmon**2 * bracket)


def atom_size_nm(density_g_cm3: float, molar_mass: float, atoms: int = 1) -> float:
    """Edge of the cube that an atom takes up on average, in nm.

    Parameters
    ----------
    density_g_cm3, molar_mass : float
        Density, and molar mass in g/mol of an atom or a formula unit.
    atoms : int
        Atoms in the formula unit: three for SiO2.
    """
    return float((molar_mass / (atoms * density_g_cm3 * AVOGADRO)) ** (1 / 3) * 1e7)


def seah_dench_nm(energy_ev: float, size_nm: float) -> float:
    """Mean free path in an element, in nm; M. P. Seah and W. A. Dench, Surf. Interface Anal. 1 (1979) 2.

    In monolayers 538 E^-2 + 0.41 (a E)^0.5, a in nm; good to a factor of about 1.4. For 1 eV to 10 keV.

    Parameters
    ----------
    energy_ev : float
        Kinetic energy.
    size_nm : float
        Edge of the cube that an atom takes up, see `atom_size_nm`.
    """
    return size_nm * (538 / energy_ev**2 + 0.41 * math.sqrt(size_nm * energy_ev))


def seah_dench_compound_nm(energy_ev: float, size_nm: float) -> float:
    """Mean free path in an inorganic compound, in nm; Seah and Dench as for elements.

    In monolayers 2170 E^-2 + 0.72 (a E)^0.5, a in nm.

    Parameters
    ----------
    energy_ev : float
        Kinetic energy.
    size_nm : float
        Edge of the cube that an atom takes up on average, see `atom_size_nm`.
    """
    return size_nm * (2170 / energy_ev**2 + 0.72 * math.sqrt(size_nm * energy_ev))
