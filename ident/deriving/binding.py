"""Binding energies: a published compilation, valence levels of solids put in where the free atom's are wrong."""

from __future__ import annotations

from .writing import Cells, number

# Elements whose valence levels in the compilation are those of free atoms and off by more than 2 eV in the
# solid: the weighted centre of the valence band below the Fermi level, to 1 eV (from memory).
SOLID_LEVELS: dict[str, dict[str, tuple[float, str]]] = {
    "Li": {"L1": (2.0, "metal")},
    "Be": {"L1": (4.0, "metal")},
    "B": {"L1": (9.0, "element"), "L23": (4.0, "element")},
    "C": {"L1": (13.0, "graphite"), "L23": (4.0, "graphite")},
    "N": {"L1": (18.0, "nitride"), "L23": (9.0, "nitride")},
    "P": {"L2": (130.9, "element"), "L3": (130.0, "element"), "M1": (10.0, "element")},
    "S": {"M1": (13.0, "sulphide"), "M23": (5.0, "sulphide")},
    "Cl": {"M1": (16.0, "chloride"), "M23": (6.0, "chloride")},
}
COMPILED_SIGMA_EV, SOLID_SIGMA_EV = 0.7, 2.0
HIGHEST_Z = 93  # neptunium, since the lines of uranium need its levels


def binding_rows() -> list[Cells]:
    """Rows of binding_energies.csv, from the compilation that xraydb carries."""
    import xraydb

    rows: list[Cells] = []
    for z in range(3, HIGHEST_Z + 1):
        symbol = xraydb.atomic_symbol(z)
        solid = _expanded(SOLID_LEVELS.get(symbol, {}))
        for level, edge in xraydb.xray_edges(symbol).items():
            energy, state = solid.get(level, (float(edge.energy), ""))
            replaced = level in solid
            sigma = SOLID_SIGMA_EV if replaced else max(COMPILED_SIGMA_EV, 0.0005 * energy)
            rows.append(
                [symbol, str(z), level, number(energy, 2), number(sigma, 2), "recalled" if replaced else "compiled",
                 f"solid ({state}), free atom {edge.energy:g} eV" if replaced else "as compiled",
                 "memory" if replaced else "elam2002"]
            )  # fmt: skip
    return rows


def _expanded(levels: dict[str, tuple[float, str]]) -> dict[str, tuple[float, str]]:
    from .shells import GROUPS

    return {part: value for name, value in levels.items() for part in GROUPS.get(name, (name,))}
