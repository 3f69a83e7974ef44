"""Strengths of all transitions of all elements at a beam energy, from factors worked out once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .strengths import BEAM_EV, MODEL, members, vacancies_of_shell
from .transitions import Transition, transitions_of

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True, eq=False)
class WholeTable:
    """Every transition, and its strength a vacancy made; only the vacancies depend on the beam."""

    transitions: tuple[Transition, ...]
    vacancies: tuple[tuple[int, str], ...]  # Z and level
    place: NDArray[np.int64]  # (n,) of each transition's vacancy
    each: FloatArray  # (n,)

    def at(self, beam_ev: float, model: str = MODEL) -> FloatArray:
        """Strengths (n,) at a beam energy in eV, in the unit of transitions.csv."""
        out: FloatArray = self.each * _made(self.vacancies, beam_ev, model)[self.place]
        return out


def _made(vacancies: Sequence[tuple[int, str]], beam_ev: float, model: str) -> FloatArray:
    """Vacancies in levels given by Z and name; every shell is worked out once."""
    shells: dict[tuple[int, str], FloatArray] = {}
    out = np.zeros(len(vacancies))
    for index, (z, name) in enumerate(vacancies):
        shell = (z, name[0])
        if shell not in shells:
            shells[shell] = vacancies_of_shell(z, name[0], beam_ev, model)[:, 0]
        out[index] = shells[shell][members(z, name)].sum()
    return out


def whole_table(elements: Sequence[tuple[int, str]]) -> WholeTable:
    """The table of the elements given by Z and symbol."""
    every = tuple(t for z, symbol in elements for t in transitions_of(z, symbol) if t.strength > 0)
    vacancies = tuple(dict.fromkeys((t.z, t.parts[0]) for t in every))
    place = {vacancy: index for index, vacancy in enumerate(vacancies)}
    made = _made(vacancies, BEAM_EV, MODEL)
    index = np.array([place[t.z, t.parts[0]] for t in every])
    each = np.array([t.strength for t in every]) / made[index]
    return WholeTable(transitions=every, vacancies=vacancies, place=index, each=each)
