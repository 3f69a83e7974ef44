"""The open tables: find them, read them strictly, give rows with their sources."""

from __future__ import annotations

from .files import edition, list_tables, reference_folder
from .rows import (
    BindingEnergy,
    ChemicalShift,
    Commonness,
    Family,
    Line,
    PublishedLine,
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
    published_lines,
    read_lines,
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
    "PublishedLine",
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
    "published_lines",
    "read_lines",
    "reference_folder",
    "sensitivities",
    "shift_range",
    "sources",
]
