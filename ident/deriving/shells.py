"""Levels of an element: groups of subshells, electrons in them, binding energies of valence bands."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from ..tables import binding_energies

DEGENERACY = {
    "K": 2, "L1": 2, "L2": 2, "L3": 4, "M1": 2, "M2": 2, "M3": 4, "M4": 4, "M5": 6, "N1": 2, "N2": 2, "N3": 4,
    "N4": 4, "N5": 6, "N6": 6, "N7": 8, "O1": 2, "O2": 2, "O3": 4, "O4": 4, "O5": 6, "P1": 2, "P2": 2, "P3": 4,
}  # fmt: skip
GROUPS = {
    "L23": ("L2", "L3"), "M23": ("M2", "M3"), "M45": ("M4", "M5"), "N23": ("N2", "N3"), "N45": ("N4", "N5"),
    "N67": ("N6", "N7"), "O23": ("O2", "O3"), "O45": ("O4", "O5"), "P23": ("P2", "P3"),
}  # fmt: skip
VACANCIES = (
    "K", "L1", "L2", "L3", "L23", "M1", "M23", "M4", "M5", "M45", "N1", "N23", "N4", "N5", "N45", "N67", "O1",
    "O2", "O3", "O23", "O45",
)  # fmt: skip
FINALS = ("L1", "L23", "M1", "M23", "M45", "N1", "N23", "N45", "N67", "O1", "O23", "O45", "P1", "P23", "V")
# Partly filled d bands that the compilation leaves out lie within a few eV of the Fermi level.
L_APART_FROM_Z, M_APART_FROM_Z, N_APART_FROM_Z, O_APART_FROM_Z = 20, 47, 73, 72
BAND_EV = 2.0
LANTHANUM_Z, RADON_Z, ACTINIUM_Z = 57, 86, 89
D_BANDS = {"M45": range(20, 31), "N45": range(38, 49), "O45": range(71, 81)}


@dataclass(frozen=True, kw_only=True)
class Level:
    """A level or a group of them: mean binding energy and electrons."""

    energy_ev: float
    electrons: int
    band: bool = False


@cache
def _table() -> dict[int, dict[str, float]]:
    out: dict[int, dict[str, float]] = {}
    for (_, level), row in binding_energies().items():
        out.setdefault(row.z, {})[level] = row.energy_ev
    return out


@cache
def level(z: int, name: str) -> Level | None:
    """A level of an element, None where it has none; V is a band of s electrons, in actinides of d and f ones, too."""
    own = _table().get(z, {})
    parts = [part for part in GROUPS.get(name, (name,)) if part in own]
    if parts:
        count = sum(DEGENERACY[part] for part in parts)
        mean = sum(DEGENERACY[part] * own[part] for part in parts) / count
        return Level(energy_ev=mean, electrons=min(count, _filled(z, name)), band=mean < 12.0)
    if name == "V":
        return Level(energy_ev=BAND_EV, electrons=z - RADON_Z if z >= ACTINIUM_Z else 2, band=True)
    if name in D_BANDS and z in D_BANDS[name]:
        return Level(energy_ev=BAND_EV, electrons=_filled(z, name), band=True)
    return None


def _filled(z: int, name: str) -> int:
    """Electrons in a d or f shell that fills up at this Z; more than any level holds where none does."""
    if name in D_BANDS and z in D_BANDS[name]:
        return min(10, z - D_BANDS[name].start + 1)
    return z - LANTHANUM_Z if name == "N67" and LANTHANUM_Z < z <= LANTHANUM_Z + 14 else 99


def vacancies(z: int) -> tuple[str, ...]:
    """Levels in which an initial vacancy is considered; spin-orbit partners apart where lines tell them apart."""
    joined = {"L23": z < L_APART_FROM_Z, "M45": z < M_APART_FROM_Z, "N45": z < N_APART_FROM_Z,
              "O23": z < O_APART_FROM_Z}  # fmt: skip
    out = []
    for name in VACANCIES:
        group = next((g for g in joined if name == g or name in GROUPS[g]), None)
        if level(z, name) is None or (group is not None and joined[group] != (name == group)):
            continue
        out.append(name)
    return tuple(out)
