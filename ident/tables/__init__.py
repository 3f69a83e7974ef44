"""The open tables: find them, read them strictly, give rows with their sources."""

from __future__ import annotations

from .files import edition, list_tables, reference_folder
from .rows import (
    BindingEnergy,
    ChemicalShift,
    Commonness,
    Family,
    Line,
    Material,
    PublishedLine,
    Rival,
    Sensitivity,
    ShiftPrior,
    Source,
)
from .views import (
    atomic_number,
    binding_energies,
    chemical_shifts,
    commonness,
    families,
    lines_of,
    materials,
    published_lines,
    read_lines,
    rivals_of,
    sensitivities,
    shift_range,
    sources,
)

__all__ = [
    "BindingEnergy",
    "ChemicalShift",
    "Commonness",
    "Family",
    "Line",
    "Material",
    "PublishedLine",
    "Rival",
    "Sensitivity",
    "ShiftPrior",
    "Source",
    "atomic_number",
    "binding_energies",
    "chemical_shifts",
    "commonness",
    "edition",
    "families",
    "lines_of",
    "list_tables",
    "materials",
    "published_lines",
    "read_lines",
    "reference_folder",
    "rivals_of",
    "sensitivities",
    "shift_range",
    "sources",
]
