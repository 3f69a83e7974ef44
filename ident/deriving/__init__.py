"""The derived tables from their inputs; the only place that imports the X-ray libraries.

Inputs, kept by hand: published_lines.csv, published_sensitivities.csv, families.csv, chemical_shifts.csv,
shift_ranges.csv, commonness.csv, sources.csv. Derived from them: binding_energies.csv, transitions.csv, lines.csv,
sensitivities.csv, materials.csv, shift_priors.csv, rivals.csv.
"""

from __future__ import annotations

from collections.abc import Callable
from difflib import unified_diff

from ..tables import forget_tables, reference_folder
from .writing import Cells, number, rendered

__all__ = ["check_tables", "derived_tables", "rebuild_tables"]

MOST_ROUNDS = 4

LINE_COLUMNS = [
    "symbol",
    "z",
    "transition",
    "family",
    "energy_ev",
    "sigma_ev",
    "energy_kind",
    "relative_height",
    "height_log_sigma",
    "height_kind",
    "valence",
    "state",
    "source",
]
TRANSITION_COLUMNS = [
    "symbol",
    "z",
    "transition",
    "family",
    "energy_ev",
    "sigma_ev",
    "energy_kind",
    "strength",
    "kind",
    "state",
    "source",
]
SENSITIVITY_COLUMNS = [
    "symbol",
    "z",
    "transition",
    "sensitivity",
    "sensitivity_10kev",
    "factor",
    "kind",
    "source",
]
BINDING_COLUMNS = ["symbol", "z", "level", "energy_ev", "sigma_ev", "kind", "state", "source"]
MATERIAL_COLUMNS = [
    "symbol",
    "z",
    "valence_electrons",
    "density_g_cm3",
    "density_sigma_g_cm3",
    "molar_mass",
    "gap_ev",
    "kind",
    "state",
    "source",
]
PRIOR_COLUMNS = [
    "symbol",
    "z",
    "valence",
    "state_class",
    "partner",
    "oxidation_state",
    "shift_ev",
    "sigma_ev",
    "kind",
    "source",
]
RIVAL_COLUMNS = [
    "symbol",
    "z",
    "transition",
    "rival",
    "rival_transition",
    "away_ev",
    "reach_ev",
    "decided_by",
    "weakly_by",
    "ruled_out_by",
    "kind",
    "source",
]


def derived_tables() -> dict[str, str]:
    """Text of every derived table, made anew from the inputs."""
    from .binding import binding_rows
    from .materials import material_rows
    from .rivals import rival_rows
    from .sensitivity import sensitivity_rows
    from .shifts import prior_rows

    made: dict[str, Callable[[], str]] = {
        "binding_energies.csv": lambda: rendered(BINDING_COLUMNS, binding_rows()),
        "transitions.csv": lambda: rendered(TRANSITION_COLUMNS, _transition_rows()),
        "lines.csv": lambda: rendered(LINE_COLUMNS, _line_rows()),
        "sensitivities.csv": lambda: rendered(SENSITIVITY_COLUMNS, sensitivity_rows(_elements())),
        "materials.csv": lambda: rendered(MATERIAL_COLUMNS, material_rows()),
        "shift_priors.csv": lambda: rendered(PRIOR_COLUMNS, prior_rows()),
        "rivals.csv": lambda: rendered(RIVAL_COLUMNS, rival_rows(_elements())),
    }
    return {name: make() for name, make in made.items()}


def check_tables() -> list[str]:
    """Differences between the derived tables and what their inputs make, one a line; none when they agree."""
    folder = reference_folder()
    out: list[str] = []
    for name, text in derived_tables().items():
        path = folder / name
        kept = path.read_text(encoding="utf-8") if path.is_file() else ""
        if kept == text:
            continue
        changes = unified_diff(kept.splitlines(), text.splitlines(), lineterm="", n=0)
        out.extend(f"{name}: {change}" for change in changes if change[:3] not in {"---", "+++"} and change[:2] != "@@")
    return out


def rebuild_tables() -> list[str]:
    """Write the derived tables anew; give the names of those that changed."""
    folder = reference_folder()
    changed: dict[str, None] = {}
    for _ in range(MOST_ROUNDS):  # some derived tables are made from others: until nothing changes any more
        fresh = False
        for name, text in derived_tables().items():
            path = folder / name
            if not path.is_file() or path.read_text(encoding="utf-8") != text:
                path.write_text(text, encoding="utf-8")
                changed[name], fresh = None, True
        if not fresh:
            break
        forget_tables()
    return list(changed)


def _elements() -> list[tuple[int, str]]:
    import xraydb

    return [(z, str(xraydb.atomic_symbol(z))) for z in range(3, 93)]


def _transition_rows() -> list[Cells]:
    from .transitions import transitions_of

    rows: list[Cells] = []
    for z, symbol in _elements():
        for t in transitions_of(z, symbol):
            row = t.published
            kind = "recalled" if row is not None and "memory" in row.status else "calculated"
            rows.append(
                [symbol, str(z), t.label, t.family, number(t.energy_ev, 1), number(t.sigma_ev, 1), t.energy_kind,
                 f"{t.strength:.3g}", kind, row.state if row else "element", row.source if row else "computed"]
            )  # fmt: skip
    return rows


def _line_rows() -> list[Cells]:
    from .lines import weighted_lines

    rows: list[Cells] = []
    for z, symbol in _elements():
        for line in weighted_lines(z, symbol):
            t = line.transition
            row = t.published
            rows.append(
                [symbol, str(z), t.label, t.family, number(t.energy_ev, 1), number(t.sigma_ev, 1), t.energy_kind,
                 number(line.height, 3), number(line.log_sigma, 2), line.kind, str(int(t.valence)),
                 row.state if row else "element", row.source if row else "computed"]
            )  # fmt: skip
    return rows
