"""How far published lines lie from the formula, and how sure a line is that was never published.

Published less formula, in eV, is learned in three steps. A family of transitions has a polynomial in Z. Its scatter is
that of its own rows and of the rows of all families together, the latter counting as `PRIOR_ROWS` rows: a few rows
that agree by luck claim too much. A transition of no fitted family has the mean of the families of its shell, as
uncertain as these differ among each other. Elements that stand apart (salts, gases, open 4f shells: binding energies
and published lines are not of the same matter, or there is no sharp level) are moved by what their own rows say. Every
deviation is tested by leaving rows, families and elements out (`tests/line_uncertainty`).
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..tables import cached, families
from .families import Residual, residual_rows

FloatArray = NDArray[np.floating[Any]]
LEAST_FITTED = 3
PRIOR_ROWS = 8.0  # what the scatter of all families counts beside that of one; 4 to 8 do as well, left out
PRIOR_FAMILIES = 4.0  # what the spread of all shells' families counts beside that of one shell
GROWTH_EV = 0.8  # for every Z outside the fit: fits to part of a family miss the rest by 2.1 eV at 1 Z, 2.8 at 3
OWN_PRIOR = 0.5  # rows that say an element is not apart; 0.25 to 1 do as well
OPEN_4F, OPEN_SHELLS = range(58, 72), "MNO"


@dataclass(frozen=True, kw_only=True)
class Correction:
    """Correction of a family: polynomial in (Z - centre) / 10, scatter, and where it was fitted."""

    coefficients: tuple[float, ...]  # highest power first
    centre: float
    lowest_z: int
    highest_z: int
    sigma_ev: float  # of its rows about the fit
    leave_one_out_ev: float
    scatter_ev: float  # of a row, seen together with all families
    inverse: tuple[tuple[float, ...], ...]  # of the normal matrix: how sure the polynomial is
    rows: tuple[str, ...]

    def _x(self, z: int) -> float:
        return (min(max(z, self.lowest_z), self.highest_z) - self.centre) / 10.0

    def at(self, z: int) -> float:
        """Correction in eV; beyond the fitted range it stays what it is at its end."""
        return float(np.polyval(self.coefficients, self._x(z)))

    def spread_at(self, z: int) -> float:
        """Standard deviation in eV of a line: scatter, the polynomial's own uncertainty, distance from the fit."""
        powers = np.vander([self._x(z)], len(self.coefficients))[0]
        leverage = float(powers @ np.array(self.inverse) @ powers)
        outside = max(self.lowest_z - z, z - self.highest_z, 0)
        return math.hypot(self.scatter_ev * math.sqrt(1.0 + leverage), GROWTH_EV * outside)


@dataclass(frozen=True, kw_only=True)
class Expected:
    """What is to be added to the formula, and how sure the sum is."""

    offset_ev: float
    sigma_ev: float
    kind: str  # family or formula


@dataclass(frozen=True, kw_only=True)
class Deviations:
    """All that was learned from some published rows."""

    corrections: Mapping[str, Correction]
    shells: Mapping[str, tuple[float, float]]  # offset and deviation of the formula, by the shell of the vacancy
    other_shells: tuple[float, float]
    own: Mapping[tuple[str, str], float]  # what rows of an element apart say of its others, by symbol and shell
    apart_ev: tuple[float, float] = (0.0, 0.0)  # deviation of an element apart: with own rows in the shell, without

    def expected(self, symbol: str, z: int, family: str, shell: str) -> Expected:
        """Offset and deviation of a transition of this element, family and shell (first letter of the vacancy)."""
        plain = self.plain(z, family, shell)
        if not stands_apart(symbol, z, shell):
            return plain
        moved = self.own.get((symbol, shell))
        least = self.apart_ev[1] if moved is None else self.apart_ev[0]
        return Expected(
            offset_ev=plain.offset_ev + (moved or 0.0), sigma_ev=max(plain.sigma_ev, least), kind=plain.kind
        )

    def plain(self, z: int, family: str, shell: str) -> Expected:
        """The same for an element that does not stand apart."""
        offset, sigma = self.shells.get(shell, self.other_shells)
        correction = self.corrections.get(family)
        if correction is None or correction.spread_at(z) > sigma:  # far from its rows a family knows no better
            return Expected(offset_ev=offset, sigma_ev=sigma, kind="formula")
        return Expected(offset_ev=correction.at(z), sigma_ev=correction.spread_at(z), kind="family")


@cached
def deviations() -> Deviations:
    """What all published rows teach."""
    return learn(residual_rows())


def corrections() -> Mapping[str, Correction]:
    """The families that could be fitted."""
    return deviations().corrections


def stands_apart(symbol: str, z: int, shell: str) -> bool:
    """Whether an element is left out of a family of this shell, or has an open 4f shell that its lines end in."""
    return symbol in _left_out().get(shell, frozenset()) or (z in OPEN_4F and shell in OPEN_SHELLS)


@cached
def _left_out() -> dict[str, frozenset[str]]:
    out: dict[str, frozenset[str]] = {}
    for name, family in families().items():
        out[name[0]] = out.get(name[0], frozenset()) | frozenset(family.left_out.split())
    return out


def learn(rows: Sequence[Residual]) -> Deviations:
    """Fit families, formula and elements apart to published rows."""
    fits = {name: fit for name in families() if (fit := _polynomial(name, rows)) is not None}
    scatter = _pooled(fits)
    shells, other = _formula([row for row in rows if row.sure and not _apart(row)])
    base = Deviations(
        corrections={name: _correction(fit, scatter) for name, fit in fits.items()},
        shells=shells,
        other_shells=other,
        own={},
    )
    off = [(row, row.value_ev - base.plain(row.z, row.family, row.shell).offset_ev) for row in rows if _apart(row)]
    by_own: dict[tuple[str, str], list[float]] = {}
    for row, away in off:
        by_own.setdefault((row.symbol, row.shell), []).append(away)
    return Deviations(
        corrections=base.corrections,
        shells=shells,
        other_shells=other,
        own={key: sum(values) / (len(values) + OWN_PRIOR) for key, values in by_own.items()},
        apart_ev=_apart_sigma(by_own),
    )


def _apart(row: Residual) -> bool:
    return stands_apart(row.symbol, row.z, row.shell)


def _apart_sigma(by_own: Mapping[tuple[str, str], Sequence[float]]) -> tuple[float, float]:
    """Root mean square of what elements apart are off: predicted from their other rows, and not at all."""
    every = [away for values in by_own.values() for away in values]
    left = [
        away - (sum(values) - away) / (len(values) - 1 + OWN_PRIOR)
        for values in by_own.values()
        for away in values
        if len(values) > 1
    ]
    return _root_mean_square(left), _root_mean_square(every)


@dataclass(frozen=True, kw_only=True, eq=False)
class _Polynomial:
    centre: float
    z: FloatArray
    coefficients: FloatArray
    inverse: FloatArray
    misfit: FloatArray
    left_out: FloatArray
    rows: tuple[str, ...]


def _polynomial(name: str, rows: Sequence[Residual]) -> _Polynomial | None:
    family = families()[name]
    left_out = set(family.left_out.split())
    own = [row for row in rows if row.family == name and row.sure and row.symbol not in left_out]
    if len(own) < LEAST_FITTED:
        return None
    degree = min(family.degree, len(own) - 2)
    z = np.array([row.z for row in own], dtype=float)
    y = np.array([row.value_ev for row in own])
    centre = float(np.round(np.mean(z)))
    design = np.vander((z - centre) / 10.0, degree + 1)
    inverse = np.linalg.pinv(design.T @ design)
    coefficients = inverse @ design.T @ y
    misfit = y - design @ coefficients
    leverage = np.einsum("ij,jk,ik->i", design, inverse, design)
    return _Polynomial(
        centre=centre,
        z=z,
        coefficients=coefficients,
        inverse=inverse,
        misfit=misfit,
        left_out=misfit / (1.0 - leverage),
        rows=tuple(row.symbol for row in own),
    )


def _freedom(fit: _Polynomial) -> int:
    return fit.z.size - fit.coefficients.size


def _pooled(fits: Mapping[str, _Polynomial]) -> float:
    """Mean square of the scatter in all families together, in eV squared."""
    squares = sum(float(fit.misfit @ fit.misfit) for fit in fits.values())
    return squares / max(sum(_freedom(fit) for fit in fits.values()), 1)


def _correction(fit: _Polynomial, pooled: float) -> Correction:
    squares, freedom = PRIOR_ROWS * pooled + float(fit.misfit @ fit.misfit), PRIOR_ROWS + _freedom(fit)
    scatter = squares / (freedom - 2.0)  # a scatter known from few rows: Student's t, whose variance this is
    return Correction(
        coefficients=tuple(round(float(c), 4) for c in fit.coefficients),
        centre=fit.centre,
        lowest_z=int(fit.z.min()),
        highest_z=int(fit.z.max()),
        sigma_ev=float(np.std(fit.misfit)),
        leave_one_out_ev=_root_mean_square(fit.left_out),
        scatter_ev=math.sqrt(scatter),
        inverse=tuple(tuple(float(x) for x in row) for row in fit.inverse),
        rows=fit.rows,
    )


def _formula(rows: Sequence[Residual]) -> tuple[dict[str, tuple[float, float]], tuple[float, float]]:
    """Offset and deviation of the formula by shell, and of a shell without published lines.

    The deviation is of a family that was never seen: between families, within one, and of the mean itself.
    """
    grouped: dict[str, dict[str, list[float]]] = {}
    for row in rows:
        grouped.setdefault(row.shell, {}).setdefault(row.family, []).append(row.value_ev)
    means = {shell: np.array([np.mean(v) for v in found.values()]) for shell, found in grouped.items()}
    within = _squares([np.array(v) for found in grouped.values() for v in found.values()])
    between = _squares(list(means.values()))
    out = {}
    for shell, values in means.items():
        inside = _squares([np.array(v) for v in grouped[shell].values()], prior=(PRIOR_FAMILIES, within))
        among = _squares([values], prior=(PRIOR_FAMILIES, between))
        out[shell] = (float(np.mean(values)), math.sqrt(inside + among * (1.0 + 1.0 / values.size)))
    every = np.concatenate(list(means.values())) if means else np.zeros(1)
    return out, (float(np.mean(every)), math.sqrt(within + between + float(np.var(every))))


def _squares(groups: Sequence[FloatArray], prior: tuple[float, float] = (0.0, 0.0)) -> float:
    """Mean square about the mean of each group; a prior counts as so many degrees of freedom of so much."""
    squares = sum(float(np.sum((values - values.mean()) ** 2)) for values in groups)
    freedom = sum(values.size - 1 for values in groups)
    return (prior[0] * prior[1] + squares) / max(prior[0] + freedom, 1.0)


def _root_mean_square(values: Sequence[float] | FloatArray) -> float:
    return float(np.sqrt(np.mean(np.square(values)))) if len(values) else 0.0
