"""Densities, molar masses, valence electrons and gaps of the elements, for mean free paths."""

from __future__ import annotations

from .writing import Cells, number

# Gases at room temperature: density of the liquid at its boiling point, g/cm3 (from memory, hence 20 %).
LIQUIDS = {"N": 0.81, "O": 1.14, "F": 1.50, "Ne": 1.21, "Cl": 1.56, "Ar": 1.40, "Kr": 2.41, "Xe": 2.94, "Rn": 4.4}
# Gaps in eV (from memory; the mean free path hardly depends on them: 1 eV moves it by less than 2 %).
GAPS = {"B": 1.5, "Si": 1.1, "P": 2.0, "S": 2.8, "Ge": 0.7, "Se": 1.8, "Br": 3.0, "Te": 0.3, "I": 1.3}
# Forms of different density (graphite and diamond, white and red phosphorus, ...): the surface may be any of them.
FORMS = {"B", "C", "P", "S", "As", "Se", "Sn", "Mn"}
ESTIMATED = {"Po", "At", "Fr", "Ra", "Ac", "Pa", "Pm", "Tc"}  # radioactive: few measurements or none
SOLID, SEVERAL, UNSURE = 0.02, 0.10, 0.20  # relative standard deviation of the density


def valence_electrons(z: int) -> int:
    """Valence electrons an atom, as the mean free path formula counts them.

    S. Tanuma, C. J. Powell, D. R. Penn, Surf. Interface Anal. 35 (2003) 268 (rule from memory): s, p and d electrons
    outside closed shells; a filled d or f shell under p electrons is core; of the lanthanides 5p6 and three more.

    >>> [valence_electrons(z) for z in (6, 13, 26, 29, 47, 64, 79)]  # C, Al, Fe, Cu, Ag, Gd, Au
    [4, 3, 8, 11, 11, 9, 11]
    """
    if 57 <= z <= 71:
        return 9
    after_noble_gas = z - max(core for core in (0, 2, 10, 18, 36, 54, 86) if core < z)
    if 71 < z <= 86:
        after_noble_gas -= 14
    if z > 18 and after_noble_gas > 12:
        after_noble_gas -= 10
    return after_noble_gas


def material_rows() -> list[Cells]:
    """One row an element from Li to U."""
    from mendeleev.fetch import fetch_table

    table = fetch_table("elements").set_index("atomic_number")
    return [_row(z, str(table.symbol[z]), float(table.density[z]), float(table.atomic_weight[z])) for z in range(3, 93)]


def _row(z: int, symbol: str, density: float, mass: float) -> Cells:
    liquid = LIQUIDS.get(symbol)
    relative = SEVERAL if symbol in FORMS else SOLID
    if liquid is not None or symbol in ESTIMATED:
        relative = UNSURE
    kept = liquid if liquid is not None else density
    return [
        *(symbol, str(z), str(valence_electrons(z)), number(kept, 3), number(kept * relative, 3), number(mass, 3)),
        *(number(GAPS.get(symbol, 0.0), 1), "recalled" if liquid is not None else "compiled"),
        *("liquid at its boiling point" if liquid is not None else "element", _source(symbol)),
    ]


def _source(symbol: str) -> str:
    keys = ["mendeleev", "tanuma2003"]
    return " ".join([*keys, "memory"] if symbol in LIQUIDS or symbol in GAPS else keys)
