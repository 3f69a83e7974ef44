"""Kinetic energies of Auger electrons from binding energies."""

from __future__ import annotations


def chung_jenkins_ev(
    vacancy_ev: float, first_ev: float, first_next_ev: float, second_ev: float, second_next_ev: float
) -> float:
    """Kinetic energy of a transition WXY, Fermi-referenced, in eV.

    E(WXY; Z) = E_W(Z) - 1/2 [E_X(Z) + E_X(Z+1)] - 1/2 [E_Y(Z) + E_Y(Z+1)]

    M. F. Chung and L. H. Jenkins, Surf. Sci. 22 (1970) 479; their work function is left out here, since binding
    energies of solids and the answer are both referenced to the Fermi level. Atomic relaxation beyond the mean
    of Z and Z+1 is not in it: solids lie several eV higher.

    Parameters
    ----------
    vacancy_ev : float
        Binding energy of the level W of the initial vacancy, element Z.
    first_ev, first_next_ev, second_ev, second_next_ev : float
        Binding energies of X and Y, each of element Z and of Z+1.
    """
    return vacancy_ev - 0.5 * (first_ev + first_next_ev) - 0.5 * (second_ev + second_next_ev)
