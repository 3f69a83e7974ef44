"""Families of transitions, and how far published lines lie from the formula of Chung and Jenkins."""

from __future__ import annotations

import re
from dataclasses import dataclass

from ..physics.energies import chung_jenkins_ev
from ..physics.levels import fermi_from_handbook
from ..tables import PublishedLine, families, published_lines
from .shells import GROUPS, level


@dataclass(frozen=True, kw_only=True)
class Residual:
    """A published line less the formula."""

    symbol: str
    z: int
    label: str
    family: str
    shell: str  # of the vacancy
    value_ev: float
    sure: bool  # of normal confidence


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
    return "P23" if z <= 86 else "V"


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


def residual_rows() -> list[Residual]:
    """Published handbook minima less formula, of every line whose levels are known."""
    out = []
    for row in published_lines():
        parts = levels_of(row.transition, row.z)
        if row.form != "derivative" or row.reference_level != "handbook" or parts is None:
            continue
        value = formula_ev(row.z, parts)
        if value is not None:
            out.append(
                Residual(
                    symbol=row.symbol,
                    z=row.z,
                    label=row.transition,
                    family=family_name(parts, row.z),
                    shell=parts[0][0],
                    value_ev=published_minimum_ev(row) - value,
                    sure=row.confidence == "normal",
                )
            )
    return out


def residuals(name: str) -> list[tuple[str, int, float]]:
    """Published minus formula for the rows a family is fitted to: symbol, Z, eV."""
    left_out = set(families()[name].left_out.split())
    return [
        (row.symbol, row.z, row.value_ev)
        for row in residual_rows()
        if row.family == name and row.sure and row.symbol not in left_out
    ]


__all__ = ["GROUPS", "Residual", "family_name", "formula_ev", "levels_of", "residual_rows", "residuals"]
