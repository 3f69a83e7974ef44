"""Rough strengths: how many vacancies, which way they decay, how deep the differential line stands.

Heights are those of E N(E) as a cylindrical mirror records it at 5 keV, like the published ones. Rates of K and L
vacancies are a registry library's evaluated ones; for M, N and O vacancies no complete set exists there, so the
final pair is shared out by electrons, outer shells first (a stated rule, common practice, no source).
"""

from __future__ import annotations

import math
from functools import cache

from .shells import GROUPS, level

BEAM_EV = 5000.0
KEPT_FROM_COSTER_KRONIG = {"L1": 0.15, "L2": 0.4, "M1": 0.05, "M23": 0.25, "N1": 0.05, "N23": 0.1, "O1": 0.1}
SHELL_ORDER = "KLMNOPQ"


@cache
def strength(z: int, parts: tuple[str, str, str], energy_ev: float) -> float:
    """Rough depth of a transition's differential line, arbitrary but common units."""
    return vacancies_made(z, parts[0]) * branching(z, parts) * _shape_factor(z, parts, energy_ev)


def vacancies_made(z: int, vacancy: str) -> float:
    """Ionisations by the beam and by what comes back, Gryzinski (1965), with Coster-Kronig transfer, a.u."""
    own = level(z, vacancy)
    if own is None:
        return 0.0
    total = own.electrons * gryzinski(own.energy_ev)
    shell = vacancy[0]
    if shell in "LMN" and vacancy not in {f"{shell}1"}:
        for other in (f"{shell}1", f"{shell}23"):
            above = level(z, other)
            if above is not None and other != vacancy and other[1:] < vacancy[1:] and len(other) > 1:
                part = own.electrons / _electrons_of_shell(z, shell, below=other)
                total += 0.6 * part * above.electrons * gryzinski(above.energy_ev)
    return total * KEPT_FROM_COSTER_KRONIG.get(vacancy, 1.0)


def gryzinski(binding_ev: float, beam_ev: float = BEAM_EV) -> float:
    """Gryzinski's ionisation cross-section an electron of a shell, in units of 6.51e-14 cm2 eV2 / eV2."""
    u = beam_ev / max(binding_ev, 5.0)
    if u <= 1.0:
        return 0.0
    g = (1 / u) * ((u - 1) / (u + 1)) ** 1.5 * (1 + (2 / 3) * (1 - 1 / (2 * u)) * math.log(2.7 + math.sqrt(u - 1)))
    return g / max(binding_ev, 5.0) ** 2


def _electrons_of_shell(z: int, shell: str, *, below: str) -> float:
    names = [name for name in (f"{shell}23", f"{shell}45", f"{shell}67") if name > below]
    return float(sum(own.electrons for name in names if (own := level(z, name)) is not None)) or 1.0


@cache
def branching(z: int, parts: tuple[str, str, str]) -> float:
    """Part of the vacancies that decay by a transition, fluorescence taken off."""
    if parts[0] in {"K", "L1", "L2", "L3", "L23"}:
        rate = _library_rate(z, parts)
        if rate is not None:
            return rate
    return _shared_rate(z, parts)


def _library_rate(z: int, parts: tuple[str, str, str]) -> float | None:
    import xraylib

    initial = list(GROUPS.get(parts[0], (parts[0],)))
    total, found = 0.0, False
    for vacancy in initial:
        auger = _yield(z, vacancy)
        for first in GROUPS.get(parts[1], (parts[1],)):
            for second in GROUPS.get(parts[2], (parts[2],)):
                for pair in {(first, second), (second, first)}:
                    name = f"{vacancy}_{pair[0]}{pair[1]}_AUGER"
                    macro = getattr(xraylib, name, None)
                    if macro is None:
                        continue
                    try:
                        rate = float(xraylib.AugerRate(z, macro))
                    except ValueError:
                        continue
                    if rate > 0:
                        found = True
                        total += rate * auger / len(initial) * (0.5 if pair[0] == pair[1] and first != second else 1)
    return total if found else None


def _yield(z: int, vacancy: str) -> float:
    import xraylib

    try:
        return float(xraylib.AugerYield(z, getattr(xraylib, f"{vacancy}_SHELL")))
    except ValueError:
        return 1.0


@cache
def _shared_rate(z: int, parts: tuple[str, str, str]) -> float:
    weights = {pair: _pair_weight(z, parts[0], pair) for pair in _pairs(z, parts[0])}
    total = sum(weights.values())
    return weights.get((parts[1], parts[2]), 0.0) / total if total else 0.0


@cache
def _pairs(z: int, vacancy: str) -> tuple[tuple[str, str], ...]:
    from .transitions import final_pairs

    return final_pairs(z, vacancy)


def _pair_weight(z: int, vacancy: str, pair: tuple[str, str]) -> float:
    """Electrons of both levels; within the next shell most, further out less, the outer subshells most."""
    shell = SHELL_ORDER.index(vacancy[0])
    weight = 1.0
    for name in pair:
        own = level(z, name)
        if own is None:
            return 0.0
        away = (SHELL_ORDER.index(name[0]) if name != "V" else shell + 2) - shell
        weight *= own.electrons * {0: 1.0, 1: 1.0, 2: 0.2}.get(away, 0.03)
        weight *= {"1": 0.4, "2": 0.7}.get(name[1:2], 1.0)
    own = level(z, pair[0])
    return weight * (0.5 if pair[0] == pair[1] and own is not None else 1.0)


def _shape_factor(z: int, parts: tuple[str, str, str], energy_ev: float) -> float:
    """E N(E) transmission, mean free path as E^0.7 above 75 eV, and width of the differential line squared."""
    bands = sum(1 for name in parts[1:] if (own := level(z, name)) is not None and own.band)
    natural = (2.0, 3.5, 5.0)[bands]
    if {"M1", "M23", "N1", "N23"} & set(parts[1:]):
        natural += 1.5  # such holes live short
    if {"M1", "N1"} & set(parts[1:]):
        natural += 2.0
    width = math.hypot(natural, 0.005 * energy_ev)
    return energy_ev * max(energy_ev, 75.0) ** 0.7 / width**2
