"""Binding energies: a published compilation, valence levels of solids put in where the free atom's are wrong."""

from __future__ import annotations

from collections.abc import Mapping

from .writing import Cells, number

# Elements whose levels in the compilation are those of free atoms or gases and off by more than 2 eV in the solid:
# core levels as photoemission has them, else the weighted centre of the band, both below the Fermi level (from memory).
# N, O and F are as in nitrides, oxides and fluorides (K 396 to 399, 529 to 533 and 684 to 688 eV).
SOLID_LEVELS: dict[str, dict[str, tuple[float, str]]] = {
    "Li": {"L1": (2.0, "metal")},
    "Be": {"L1": (4.0, "metal")},
    "B": {"L1": (9.0, "element"), "L23": (4.0, "element")},
    "C": {"L1": (13.0, "graphite"), "L23": (4.0, "graphite")},
    "N": {"K": (397.5, "nitride"), "L1": (18.0, "nitride"), "L23": (6.0, "nitride")},
    "O": {"K": (531.0, "oxide"), "L1": (22.5, "oxide"), "L23": (6.5, "oxide")},
    "F": {"K": (685.0, "fluoride"), "L1": (30.0, "fluoride"), "L23": (9.5, "fluoride")},
    "P": {"L2": (130.9, "element"), "L3": (130.0, "element"), "M1": (10.0, "element")},
    "S": {"M1": (13.0, "sulphide"), "M23": (5.0, "sulphide")},
    "Cl": {"M1": (16.0, "chloride"), "M23": (6.0, "chloride")},
}
COMPILED_SIGMA_EV, SOLID_SIGMA_EV = 0.7, 2.0
HIGHEST_Z = 93  # neptunium, since the lines of uranium need its levels
# A level is off the run of its neighbours in Z when it is so by more than this; shallower ones have bands about them.
RUN_FROM_EV, RUN_REACH, OFF_RUN_EV, OFF_RUN_PART = 100.0, 4, 4.0, 0.01


def binding_rows() -> list[Cells]:
    """Rows of binding_energies.csv, from the compilation that xraydb carries."""
    import xraydb

    edges = {z: xraydb.xray_edges(xraydb.atomic_symbol(z)) for z in range(3, HIGHEST_Z + 1)}
    solid = {z: _expanded(SOLID_LEVELS.get(str(xraydb.atomic_symbol(z)), {})) for z in edges}
    used: dict[str, dict[int, float]] = {}
    for z, levels in edges.items():
        for level, edge in levels.items():
            used.setdefault(level, {})[z] = solid[z][level][0] if level in solid[z] else float(edge.energy)
    rows: list[Cells] = []
    for z, levels in edges.items():
        symbol = str(xraydb.atomic_symbol(z))
        for level, edge in levels.items():
            found = used[level][z]
            if level in solid[z]:
                state = f"solid ({solid[z][level][1]}), free atom or molecule {edge.energy:g} eV"
                told = [number(SOLID_SIGMA_EV, 2), "recalled", state, "memory"]
            else:
                told = _compiled(used[level], z)
            rows.append([symbol, str(z), level, number(found, 2), *told])
    return rows


def _compiled(energies: Mapping[int, float], z: int) -> Cells:
    """Deviation, kind, state and source of a compiled level; one that its neighbours speak against says so."""
    away = off_run_ev(energies, z)
    sigma, state = max(COMPILED_SIGMA_EV, 0.0005 * energies[z]), "as compiled"
    if abs(away) > max(OFF_RUN_EV, OFF_RUN_PART * energies[z]):
        sigma, state = abs(away), f"as compiled, {away:+.0f} eV off the run of its neighbours in Z"
    return [number(sigma, 2), "compiled", state, "elam2002"]


def off_run_ev(energies: Mapping[int, float], z: int) -> float:
    """How far a level lies from the run of its neighbours in Z; zero for shallow levels and where a shell begins.

    Parabolas through the roots of the neighbours' energies (Moseley: nearly straight), each neighbour left out in
    turn, and the median of what they give, so that one bad neighbour does not decide.
    """
    import numpy as np

    near = [other for other in energies if 0 < abs(other - z) <= RUN_REACH]
    if energies[z] < RUN_FROM_EV or len(near) < RUN_REACH + 2:
        return 0.0
    x = np.array(near, dtype=float) - z
    y = np.sqrt([energies[other] for other in near])
    kept = [np.arange(x.size) != left_out for left_out in range(x.size)]
    given = [float(np.polyval(np.polyfit(x[keep], y[keep], 2), 0.0)) for keep in kept]
    return energies[z] - float(np.median(given)) ** 2


def _expanded(levels: dict[str, tuple[float, str]]) -> dict[str, tuple[float, str]]:
    from .shells import GROUPS

    return {part: value for name, value in levels.items() for part in GROUPS.get(name, (name,))}
