"""What calculated strengths get wrong, learned from published heights and sensitivities, and how wrong they stay.

Two terms, each with a reason, fitted together to both (ridge regression, all numbers natural logarithms). How well
they predict is measured by leaving out one element at a time.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from statistics import median

import numpy as np
from numpy.typing import NDArray

from ..tables import materials, published_sensitivities
from .shells import D_BANDS, level
from .strengths import BEAM_EV, branching, parts_of_line, recorded_part, vacancies_made

FloatArray = NDArray[np.float64]
LOW_EV = 150.0
TERMS = (
    "low energy",  # ln(150 eV / energy) below 150 eV: shorter paths than TPP-2M, less collected, wider lines
    "empty band",  # part of the d band that is empty: in the solid s and p electrons are there, too, not in the atom
)
SENSITIVITIES = "sensitivities"
NEIGHBOUR_Z, NEIGHBOUR_PRIOR = 2.0, 1.0  # reach of a neighbour's error in Z, and what it is held against
RIDGE = 1.0
LOW_CONFIDENCE_WEIGHT = 0.5
SENSITIVITY_BEAM_EV = 3000.0  # of the published ones


@dataclass(frozen=True, kw_only=True)
class Observation:
    """A published number over the calculated one."""

    symbol: str
    z: int
    label: str
    group: str  # numbers of one group share an unknown factor: heights of an element, or all sensitivities
    log_ratio: float
    terms: tuple[float, ...]
    weight: float


@dataclass(frozen=True, kw_only=True)
class Learned:
    """Coefficients of the terms, and what scatter is left: natural logarithms, each number predicted from others."""

    coefficients: tuple[float, ...]
    height_log_sigma: float  # among the lines of an element that was not seen
    same_shell_log_sigma: float  # of a line whose element has published lines of the same shell
    other_shell_log_sigma: float  # whose element has published lines of other shells only
    sensitivity_log_sigma: float  # of an element that was not seen, its neighbours were
    left_out: tuple[tuple[Observation, float], ...]  # with the error of its prediction from other elements


LeftOut = Sequence[tuple[Observation, float]]


def terms(z: int, parts: tuple[str, str, str], energy_ev: float) -> tuple[float, ...]:
    """Terms of the correction for a transition, in the order of `TERMS`."""
    empty = 0.0
    for name in parts[1:]:
        own = level(z, name)
        if own is not None and parts[0][0] == "L" and z in D_BANDS.get(name, ()):
            empty += 1.0 - own.electrons / 10.0
    return (max(float(np.log(LOW_EV / energy_ev)), 0.0), empty)


def correction(z: int, parts: tuple[str, str, str], energy_ev: float) -> float:
    """Factor by which a calculated strength is multiplied."""
    return float(np.exp(np.dot(terms(z, parts, energy_ev), learned().coefficients)))


def line_strength(z: int, parts: tuple[str, str, str], energy_ev: float, beam_ev: float = BEAM_EV) -> float:
    """Depth of a line from the pure element before correction, all transitions of one valence band together."""
    share = sum(branching(z, other) for other in parts_of_line(z, parts))
    return float(vacancies_made(z, parts[0], beam_ev)[0]) * share * float(recorded_part(z, parts, energy_ev)[0])


@cache
def observations() -> tuple[Observation, ...]:
    """Published heights and sensitivities over calculated ones."""
    from .transitions import published_transitions

    out = []
    known = {(row.symbol, row.transition): row for row in published_sensitivities()}
    atoms = {row.symbol: row.density_g_cm3 / row.molar_mass for row in materials().values()}
    for symbol, z, parts, energy_ev, row in published_transitions():
        features = terms(z, parts, energy_ev)
        weight = 1.0 if row.confidence == "normal" else LOW_CONFIDENCE_WEIGHT
        made = line_strength(z, parts, energy_ev)
        if row.relative_height and made > 0:
            ratio = float(np.log(row.relative_height / made))
            out.append(_observation(symbol, z, row.transition, symbol, ratio, features, weight))
        held = known.get((symbol, row.transition))
        made = line_strength(z, parts, energy_ev, SENSITIVITY_BEAM_EV) * atoms[symbol]
        if held is not None and made > 0:
            weight = 1.0 if held.confidence == "normal" else LOW_CONFIDENCE_WEIGHT
            ratio = float(np.log(held.sensitivity / made))
            out.append(_observation(symbol, z, row.transition, SENSITIVITIES, ratio, features, weight))
    return tuple(out)


def _observation(
    symbol: str, z: int, label: str, group: str, ratio: float, features: tuple[float, ...], weight: float
) -> Observation:
    return Observation(symbol=symbol, z=z, label=label, group=group, log_ratio=ratio, terms=features, weight=weight)


@cache
def learned() -> Learned:
    """Fit all, and every element from the others."""
    rows = observations()
    errors = leave_elements_out(rows)
    kept = tuple((row, error) for row, error in zip(rows, errors, strict=True))
    same, other = _anchored(kept)
    return Learned(
        coefficients=tuple(round(float(c), 3) for c in fit(rows).tolist()),
        height_log_sigma=spread(kept),
        same_shell_log_sigma=_root_mean_square(same),
        other_shell_log_sigma=_root_mean_square(other),
        sensitivity_log_sigma=_root_mean_square(
            [error - neighbours_say(kept, row.z, row.label[0], but=row.symbol) for row, error in _held(kept)]
        ),
        left_out=kept,
    )


def fit(rows: Sequence[Observation]) -> FloatArray:
    """Coefficients of the terms; every group has a free factor of its own."""
    x, y, w = _centred(rows)
    a = x * np.sqrt(w)[:, None]
    return np.asarray(np.linalg.solve(a.T @ a + RIDGE * np.eye(a.shape[1]), a.T @ (y * np.sqrt(w))), dtype=np.float64)


def leave_elements_out(rows: Sequence[Observation]) -> FloatArray:
    """Error of each number when its element takes no part in the fit; the factor of its group is not predicted."""
    out = np.zeros(len(rows))
    symbols = np.array([row.symbol for row in rows])
    x, y, _ = _centred(rows)
    for symbol in set(symbols.tolist()):
        own = symbols == symbol
        others = fit([row for row, mine in zip(rows, own, strict=True) if not mine])
        out[own] = y[own] - x[own] @ others
    return out


def _centred(rows: Sequence[Observation]) -> tuple[FloatArray, FloatArray, FloatArray]:
    x = np.array([row.terms for row in rows])
    y = np.array([row.log_ratio for row in rows])
    w = np.array([row.weight for row in rows])
    groups = np.array([row.group for row in rows])
    for group in set(groups.tolist()):
        own = groups == group
        x[own] -= np.average(x[own], axis=0, weights=w[own])
        y[own] -= np.average(y[own], weights=w[own])
    return x, y, w


def spread(left_out: LeftOut) -> float:
    """Root mean square error of heights among the lines of an element, one degree of freedom an element taken off."""
    sizes = Counter(row.group for row, _ in left_out)
    rows = [(row, error) for row, error in left_out if row.group != SENSITIVITIES and sizes[row.group] > 1]
    free = sum(1.0 - 1.0 / sizes[row.group] for row, _ in rows)
    return float((sum(error**2 for _, error in rows) / free) ** 0.5)


def _held(left_out: LeftOut) -> list[tuple[Observation, float]]:
    return [(row, error) for row, error in left_out if row.group == SENSITIVITIES]


def _anchored(left_out: LeftOut) -> tuple[list[float], list[float]]:
    """Errors of each height predicted from the others of its element: of the same shell, or of others only."""
    same, other = [], []
    rows = [(row, error) for row, error in left_out if row.group != SENSITIVITIES]
    for row, error in rows:
        rest = [(o.label[0], e) for o, e in rows if o.symbol == row.symbol and o.label != row.label]
        near = [e for shell, e in rest if shell == row.label[0]]
        if near:
            same.append(error - median(near))
        elif rest:
            other.append(error - median(e for _, e in rest))
    return same, other


def neighbours_say(left_out: LeftOut, z: int, shell: str, *, but: str = "") -> float:
    """How far (ln) published sensitivities lie above the corrected ones at the neighbours in Z, same shell."""
    near = [
        (row.weight * float(np.exp(-abs(row.z - z) / NEIGHBOUR_Z)), error)
        for row, error in _held(left_out)
        if row.symbol != but and row.label[0] == shell
    ]
    return sum(weight * error for weight, error in near) / (sum(weight for weight, _ in near) + NEIGHBOUR_PRIOR)


def _root_mean_square(values: Sequence[float]) -> float:
    return float(np.sqrt(np.mean(np.square(values))))
