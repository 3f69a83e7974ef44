"""Shifts of states that no row of chemical_shifts.csv gives, from electronegativity and oxidation state.

An atom in a compound has lost charge to its partners; its Auger lines then stand lower by the potential of what is
left and by the screening that it lacks. Both grow with the difference in electronegativity and with the number of
bonds, and more so where the ion is small. The model is the simplest that says this,

    shift = -(a + b light) dchi sqrt(n)

with Pauling's electronegativities, n the oxidation state and light 1 up to argon; a and b are fitted to the known rows,
core and valence lines apart. Its standard deviation is that of elements left out, all their rows at once. It was
chosen among a dozen such forms by the same figure, so that the figure is a little kind.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from .. import tables
from ..tables import ChemicalShift
from ..tables.elements import NUMBERS
from .writing import Cells, number

FloatArray = NDArray[np.float64]
LIGHT_Z = 18
LEAST_SIGMA_EV = 1.0  # of a known shift, in the fit: values for one compound scatter by as much between laboratories
THROUGH_OXYGEN = frozenset({"oxide", "hydroxide", "sulphate", "phosphate", "carbonate", "organic"})
CLASSES = (("oxide", "O"), ("nitride", "N"), ("sulphide", "S"), ("fluoride", "F"), ("chloride", "Cl"))


@dataclass(frozen=True, kw_only=True, eq=False)
class ShiftModel:
    """Fitted model of one class of lines, core or valence."""

    coefficients: FloatArray  # (2,) a and b, eV
    sigma_ev: float  # of elements left out, the rows' own uncertainty taken off

    def shift_ev(self, chi_difference: float, oxidation_state: int, z: int) -> float:
        """Shift of a line of element z against the element's own, in eV."""
        return -float(_features(chi_difference, oxidation_state, z) @ self.coefficients)


def _features(chi_difference: float, oxidation_state: int, z: int) -> FloatArray:
    size = max(chi_difference, 0.0) * math.sqrt(oxidation_state)
    return np.array([size, size if z <= LIGHT_Z else 0.0])


def fit_shifts(rows: Sequence[ChemicalShift], chi: Mapping[str, float]) -> ShiftModel:
    """Fit the model to rows of one class of lines; `chi` gives electronegativities by symbol."""
    left_out = predict_left_out(rows, chi)
    shift = np.array([row.shift_ev for row in rows])
    own = np.array([row.sigma_ev for row in rows])
    variance = float(np.mean((shift - left_out) ** 2 - own**2))
    return ShiftModel(coefficients=_solve(rows, chi), sigma_ev=math.sqrt(max(variance, LEAST_SIGMA_EV**2)))


def predict_left_out(rows: Sequence[ChemicalShift], chi: Mapping[str, float]) -> FloatArray:
    """Shift of each row (n,) from the rows of the other elements, in eV."""
    out = np.zeros(len(rows))
    for symbol in {row.symbol for row in rows}:
        others = [row for row in rows if row.symbol != symbol]
        model = ShiftModel(coefficients=_solve(others, chi), sigma_ev=0.0)
        for place, row in enumerate(rows):
            if row.symbol == symbol:
                out[place] = model.shift_ev(_difference(row, chi), row.oxidation_state or 0, row.z)
    return out


def _solve(rows: Sequence[ChemicalShift], chi: Mapping[str, float]) -> FloatArray:
    design = np.array([_features(_difference(row, chi), row.oxidation_state or 0, row.z) for row in rows])
    weight = 1.0 / np.hypot([row.sigma_ev for row in rows], LEAST_SIGMA_EV)
    target = -np.array([row.shift_ev for row in rows])
    solution: FloatArray = np.linalg.lstsq(design * weight[:, None], target * weight, rcond=None)[0]
    return solution


def _difference(row: ChemicalShift, chi: Mapping[str, float]) -> float:
    partner = "O" if row.state_class in THROUGH_OXYGEN else row.partner
    return chi[partner] - chi[row.symbol]


def fitted_rows(valence: bool) -> tuple[ChemicalShift, ...]:
    """Rows that the model is about: elements that have lost charge to a partner."""
    rows = [row for z, symbol in _elements() for row in tables.chemical_shifts(symbol)]
    return tuple(
        row
        for row in rows
        if row.valence == valence and row.partner and row.oxidation_state is not None and row.oxidation_state > 0
    )


@cache
def electronegativities() -> dict[str, float]:
    """Pauling's electronegativities, as the registry package mendeleev has them; elements without one are left out."""
    table = _registry()
    return {symbol: float(chi) for symbol, chi in table.en_pauling.items() if np.isfinite(chi)}


@cache
def _registry():  # type: ignore[no-untyped-def]
    from mendeleev.fetch import fetch_table

    return fetch_table("elements").set_index("symbol")


@cache
def usual_oxidation_states() -> dict[str, tuple[int, ...]]:
    """Main positive oxidation states by symbol, rising, as mendeleev has them."""
    from mendeleev.fetch import fetch_table

    table = fetch_table("oxidationstates")
    numbers = {int(z): symbol for symbol, z in _registry().atomic_number.items()}
    main = table[(table.category == "main") & (table.oxidation_state > 0)]
    out: dict[str, list[int]] = {}
    for z, state in zip(main.atomic_number, main.oxidation_state, strict=True):
        out.setdefault(numbers[int(z)], []).append(int(state))
    return {symbol: tuple(sorted(states)) for symbol, states in out.items()}


def _elements() -> list[tuple[int, str]]:
    return [(z, symbol) for symbol, z in sorted(NUMBERS.items(), key=lambda pair: pair[1]) if 3 <= z <= 92]


def prior_rows() -> list[Cells]:
    """Shifts of the usual compounds of every element whose lines refer to the element itself."""
    chi, states = electronegativities(), usual_oxidation_states()
    models = {valence: fit_shifts(fitted_rows(valence), chi) for valence in (False, True)}
    out: list[Cells] = []
    for z, symbol in _elements():
        lines = tables.lines_of(symbol)
        if symbol not in chi or symbol not in states or not lines or lines[0].state != "element":
            continue
        for valence in sorted({line.valence for line in lines}):
            for state_class, partner in CLASSES:
                difference = chi[partner] - chi[symbol]
                if partner == symbol or difference <= 0:
                    continue
                highest = states[symbol][-1]
                for n in states[symbol] if state_class == "oxide" else (highest,):
                    shift = models[valence].shift_ev(difference, n, z)
                    out.append(
                        [symbol, str(z), str(int(valence)), state_class, partner, str(n), number(shift, 1),
                         number(models[valence].sigma_ev, 1), "calculated", "mendeleev computed"]
                    )  # fmt: skip
    return out
