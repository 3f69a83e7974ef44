"""How vacancies decay: yields, Coster-Kronig transfer and decay rates of the X-ray library, checked before use.

What the library lacks or has wrong is replaced from a stated source; `doubtful_yields` lists every replacement.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from ..physics.yields import fluorescence_yield_m

SUBSHELLS = {"K": ("K",), "L": ("L1", "L2", "L3"), "M": ("M1", "M2", "M3", "M4", "M5")}
SUBSHELLS["N"] = ("N1", "N2", "N3", "N4", "N5", "N6", "N7")
SUBSHELLS["O"] = ("O1", "O2", "O3", "O4", "O5")
CHECKED = ("L2", "L3", "M2", "M3", "M4", "M5")
# A yield is not smooth when it lies off the run of its neighbours in Z by more than this (ln) and this (absolute).
OFF_LOG, OFF_ABSOLUTE, NEIGHBOURS = 0.08, 0.01, 7
# M5 yields of the library rise from zero at Z = 57 where M4 has no such edge, and are blank below: from Z = 64 on they
# agree with M4 and with the law for the whole shell.
M5_GOOD_FROM_Z = 64
M_LAW, RUN = "Hubbell 1994, law for the M shell", "run of its neighbours in Z"
# Below Z = 67 the library has no M transfer, and from 67 to 70 more leaves M1 than there is (1.10 to 1.00); above, it
# hardly changes with Z (M4 to M5 apart): carried down, 20 %.
M_TRANSFER_FROM_Z = 71
M_TRANSFER = {
    ("M1", "M2"): 0.17, ("M1", "M3"): 0.62, ("M1", "M4"): 0.08, ("M1", "M5"): 0.11, ("M2", "M3"): 0.10,
    ("M2", "M4"): 0.70, ("M2", "M5"): 0.13, ("M3", "M4"): 0.14, ("M3", "M5"): 0.75, ("M4", "M5"): 0.04,
}  # fmt: skip
# In solids N, O and F have six 2p electrons, not the three to five of the atoms that the library's rates are for: as
# neon, measured (M. O. Krause, T. A. Carlson, W. E. Moddeman, J. Phys. (Paris) 32 C4 (1971) 139, from memory).
NEON_LIKE = {("L1", "L1"): 0.061, ("L1", "L2"): 0.079, ("L1", "L3"): 0.157, ("L2", "L3"): 0.42, ("L3", "L3"): 0.26,
             ("L2", "L2"): 0.023}  # fmt: skip
NEON_LIKE_Z = range(7, 11)
MOST_M4_TO_M5 = 0.1  # Yb has 0.42 between 0.04 and 0.04
# N and O shells as the M shell, by analogy (no source); 4f and 5d final states take part as lines of their own.
N_TRANSFER = {(f"N{a[1]}", f"N{b[1]}"): part for (a, b), part in M_TRANSFER.items() if a != "M4"}


@dataclass(frozen=True, kw_only=True)
class Doubt:
    """A yield of the library that is not used."""

    z: int
    level: str
    found: float | None  # None: blank
    used: float
    source: str


@cache
def library_yield(z: int, level: str) -> float | None:
    """Fluorescence yield as the library has it, None where blank."""
    import xraylib

    try:
        return float(xraylib.FluorYield(z, getattr(xraylib, f"{level}_SHELL")))
    except ValueError:
        return None


@cache
def fluorescence(z: int, level: str) -> float:
    """Fluorescence yield of a subshell: the library's, or what replaces it; zero beyond the M shell."""
    doubt = _doubts().get((z, level))
    if doubt is not None:
        return doubt.used
    return library_yield(z, level) or 0.0


def doubtful_yields() -> tuple[Doubt, ...]:
    """Every yield that is blank or not smooth in Z, with what is used instead and why."""
    return tuple(_doubts().values())


@cache
def _doubts() -> dict[tuple[int, str], Doubt]:
    out = {}
    for level in CHECKED:
        values = {z: found for z in range(11, 93) if (found := library_yield(z, level))}
        inner = sorted(values)[3:-3]  # the ends have no neighbours on one side
        for z in range(30 if level == "M5" else 93, M5_GOOD_FROM_Z):
            law = round(float(fluorescence_yield_m(z)), 5)
            out[z, level] = Doubt(z=z, level=level, found=values.pop(z, None), used=law, source=M_LAW)
        for z in (z for z in inner if z in values):
            found, run = values[z], smooth_value(values, z)
            if abs(found - run) > OFF_ABSOLUTE and abs(math.log(found / run)) > OFF_LOG:
                out[z, level] = Doubt(z=z, level=level, found=found, used=round(run, 4), source=RUN)
    return out


def smooth_value(values: Mapping[int, float], z: int) -> float:
    """What the neighbours in Z say: straight line in ln Z and ln value through medians, the value itself left out."""
    near = sorted((other for other in values if other != z), key=lambda other: (abs(other - z), other))[
        : 2 * NEIGHBOURS
    ]
    points = sorted((math.log(other / z), math.log(values[other])) for other in near)
    slopes = sorted((b[1] - a[1]) / (b[0] - a[0]) for i, a in enumerate(points) for b in points[i + 1 :])
    slope = slopes[len(slopes) // 2]
    rest = sorted(y - slope * x for x, y in points)
    return math.exp((rest[(len(rest) - 1) // 2] + rest[len(rest) // 2]) / 2)


@cache
def transfer(z: int, shell: str) -> dict[tuple[str, str], float]:
    """Coster-Kronig probabilities within a shell, by levels from and to."""
    if shell == "L":
        found = {("L1", target): _library_transfer(z, "L1", target) for target in ("L2", "L3")}
        found["L2", "L3"] = _from_l2_to_l3(z)
        return {pair: part for pair, part in found.items() if part}
    if shell == "M":
        return {pair: _m_transfer(z, pair) for pair in M_TRANSFER}
    return dict(N_TRANSFER) if shell == "N" else {}


def _from_l2_to_l3(z: int) -> float:
    """L2 to L3 after Elam et al. (2002): xraylib lacks the 3d metals, where it is large, and lags by one Z after them.

    Copper has 0.47 there and 0.028 in xraylib; its L2M45M45 line, a sixth of L3M45M45 where electrons alone would make
    it half, speaks for the former.
    """
    import xraydb

    return float(xraydb.ck_probability(xraydb.atomic_symbol(z), "L2", "L3", False))


def _m_transfer(z: int, pair: tuple[str, str]) -> float:
    found = _library_transfer(z, *pair) if z >= M_TRANSFER_FROM_Z else None
    if found is None or (pair == ("M4", "M5") and found > MOST_M4_TO_M5):
        return M_TRANSFER[pair]
    return found


def _library_transfer(z: int, source: str, target: str) -> float | None:
    import xraylib

    try:
        return float(xraylib.CosKronTransProb(z, getattr(xraylib, f"F{source}{target[1]}_TRANS")))
    except ValueError:
        return None


@cache
def transferred(z: int, level: str) -> float:
    """Part of the vacancies of a subshell that moves on within its shell."""
    return sum(part for (source, _), part in transfer(z, level[0]).items() if source == level)


@cache
def auger_part(z: int, level: str) -> float:
    """Part of the vacancies of a subshell that decays by Auger transitions to outer shells."""
    return max(1.0 - fluorescence(z, level) - transferred(z, level), 0.0)


@cache
def library_rates(z: int, level: str) -> dict[tuple[str, str], float]:
    """Rates of a K or L vacancy by pairs of subshells, adding up to one; empty where the library has none."""
    import xraylib

    if level == "K" and z in NEON_LIKE_Z:
        return dict(NEON_LIKE)
    found: dict[tuple[str, str], float] = {}
    for name, macro in _rate_names(level):
        try:
            rate = float(xraylib.AugerRate(z, macro))
        except ValueError:
            continue
        if rate > 0:
            first, second = sorted((name[:2], name[2:]))
            found[first, second] = found.get((first, second), 0.0) + rate
    total = sum(found.values())
    return {pair: rate / total for pair, rate in found.items()}


@cache
def _rate_names(level: str) -> tuple[tuple[str, int], ...]:
    import xraylib

    head, tail = f"{level}_", "_AUGER"
    names = [name for name in dir(xraylib) if name.startswith(head) and name.endswith(tail)]
    return tuple((name[len(head) : -len(tail)], int(getattr(xraylib, name))) for name in names)
