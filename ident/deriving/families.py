"""Families of transitions and their corrections: what Chung and Jenkins leave out, smooth in Z."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from functools import cache

from ..physics.energies import chung_jenkins_ev
from ..physics.levels import fermi_from_handbook
from ..tables import PublishedLine, families, published_lines
from .shells import GROUPS, level

# The formula alone: what it leaves out, and how far published lines stand from it, by the shell of the vacancy. For
# the O shell two lines of thorium and uranium stand 17 and 19 eV off, which is no more than a hint of a deviation.
OTHER_OFFSET_EV = 3.0
OTHER_SIGMA_EV = {"K": 6.0, "L": 3.0, "M": 5.5, "N": 6.0, "O": 12.0}
LEAST_FITTED = 3
LEAST_SIGMA_EV = 1.0
GROWTH_EV = 0.4  # for every Z outside the fit
ROW_SIGMA_EV = 1.2  # of a published row, which the scatter of a small family may miss by luck


@dataclass(frozen=True, kw_only=True)
class Correction:
    """Correction of a family: polynomial in (Z - centre) / 10, scatter, and where it was fitted."""

    coefficients: tuple[float, ...]  # highest power first
    centre: float
    lowest_z: int
    highest_z: int
    sigma_ev: float
    leave_one_out_ev: float
    least_sigma_ev: float
    rows: tuple[str, ...]

    def at(self, z: int) -> float:
        """Correction in eV; beyond the fitted range it stays what it is at its end."""
        x = (min(max(z, self.lowest_z), self.highest_z) - self.centre) / 10.0
        value = 0.0
        for coefficient in self.coefficients:
            value = value * x + coefficient
        return value

    def spread_at(self, z: int) -> float:
        """Standard deviation in eV, growing outside the fitted range."""
        outside = max(self.lowest_z - z, z - self.highest_z, 0)
        scatter = math.hypot(max(self.leave_one_out_ev, LEAST_SIGMA_EV), ROW_SIGMA_EV)
        return math.hypot(max(scatter, self.least_sigma_ev), GROWTH_EV * outside)


def formula_ev(z: int, parts: tuple[str, str, str]) -> float | None:
    """Chung and Jenkins for a transition of three levels or groups, None where a level is missing."""
    vacancy = level(z, parts[0])
    finals = [(level(z, name), level(z + 1, name)) for name in parts[1:]]
    if vacancy is None or any(own is None for own, _ in finals):
        return None
    values = [(own.energy_ev, (following or own).energy_ev) for own, following in finals if own is not None]
    return chung_jenkins_ev(vacancy.energy_ev, *values[0], *values[1])


def valence_group(z: int) -> str:
    """The group that V in a published label stands for."""
    for top, name in ((10, "L23"), (12, "M1"), (18, "M23"), (30, "M45"), (36, "N23"), (48, "N45"), (54, "O23"),
                      (71, "V"), (80, "O45")):  # fmt: skip
        if z <= top:
            return name
    return "P23"


def levels_of(label: str, z: int) -> tuple[str, str, str] | None:
    """Levels of a published label such as L3M23V; None when it names only shells."""
    parts = re.findall(r"[KLMNOP]\d*|V", label)
    if len(parts) != 3 or any(len(part) == 1 and part not in "KV" for part in parts):
        return None
    named = [valence_group(z) if part == "V" else part for part in parts]
    widened = {"N7": "N67", "N6": "N67"}
    return (widened.get(named[0], named[0]), named[1], named[2])


def family_name(parts: tuple[str, str, str], z: int) -> str:
    """Family of a transition: its levels, light elements with valence finals apart."""
    vacancy, first, second = parts
    if vacancy == "K" and z < 8:
        return "KVV"
    if vacancy == "L23" and z < 17:
        return "L23VV" if {first, second} <= {"M1", "M23"} else "".join(parts)
    if vacancy in {"N4", "N5"}:
        return f"N4 or N5, {first}{second}"
    return "".join(parts)


def published_minimum_ev(row: PublishedLine) -> float:
    """A published derivative minimum on the absolute scale."""
    return fermi_from_handbook(row.energy_ev) if row.reference_level == "handbook" else row.energy_ev


@cache
def corrections() -> dict[str, Correction]:
    """Fit every family of the table to the rows chosen for it."""
    return {name: fitted for name in families() if (fitted := _fit(name)) is not None}


def residuals(name: str) -> list[tuple[str, int, float]]:
    """Published minus formula for the rows a family is fitted to: symbol, Z, eV."""
    family = families()[name]
    left_out = set(family.left_out.split())
    out = []
    for row in published_lines():
        parts = levels_of(row.transition, row.z)
        if row.form != "derivative" or row.reference_level != "handbook" or parts is None:
            continue
        if family_name(parts, row.z) != name or row.symbol in left_out or row.confidence == "low":
            continue
        value = formula_ev(row.z, parts)
        if value is not None:
            out.append((row.symbol, row.z, published_minimum_ev(row) - value))
    return out


def _fit(name: str) -> Correction | None:
    import numpy as np

    rows = residuals(name)
    if len(rows) < LEAST_FITTED:
        return None
    degree = min(families()[name].degree, len(rows) - 2)
    z = np.array([row[1] for row in rows], dtype=float)
    y = np.array([row[2] for row in rows])
    centre = float(np.round(np.mean(z)))
    design = np.vander((z - centre) / 10.0, degree + 1)
    coefficients, *_ = np.linalg.lstsq(design, y, rcond=None)
    misfit = y - design @ coefficients
    leverage = np.einsum("ij,ji->i", design, np.linalg.pinv(design))
    left = misfit / (1.0 - leverage)
    return Correction(
        coefficients=tuple(round(float(c), 4) for c in coefficients),
        centre=centre,
        lowest_z=int(z.min()),
        highest_z=int(z.max()),
        sigma_ev=float(np.std(misfit)),
        leave_one_out_ev=float(np.sqrt(np.mean(left**2))),
        least_sigma_ev=families()[name].least_sigma_ev,
        rows=tuple(row[0] for row in rows),
    )


__all__ = ["GROUPS", "Correction", "corrections", "family_name", "formula_ev", "levels_of", "residuals"]
