"""What every row of every table owes: a source that is known, a kind, an uncertainty, and a state."""

from __future__ import annotations

import pytest

from ident import tables
from ident.tables.rows import KINDS

Cells = dict[str, list[dict[str, str]]]
NAMES = [table.name for table in tables.list_tables()]
# The column that says how uncertain a row is; families get theirs from the fit, and so into every line they give.
UNCERTAINTY = {
    "binding_energies.csv": ("sigma_ev",),
    "chemical_shifts.csv": ("sigma_ev",),
    "lines.csv": ("sigma_ev", "height_log_sigma"),
    "materials.csv": ("density_sigma_g_cm3",),
    "published_lines.csv": ("sigma_ev",),
    "published_sensitivities.csv": ("factor",),
    "rivals.csv": ("reach_ev",),
    "scale_lines.csv": ("sigma_ev",),
    "sensitivities.csv": ("factor",),
    "shift_priors.csv": ("sigma_ev",),
    "transitions.csv": ("sigma_ev",),
}
STATE = (
    *("binding_energies.csv", "chemical_shifts.csv", "lines.csv", "materials.csv", "published_lines.csv"),
    *("published_sensitivities.csv", "scale_lines.csv", "transitions.csv"),
)
JUDGEMENTS = {
    "commonness.csv",
    "families.csv",
    "residues.csv",
    "shift_ranges.csv",
    "sources.csv",
}  # no energies, or a range


@pytest.mark.parametrize("name", NAMES)
def test_every_row_names_a_source(name: str, cells: Cells) -> None:
    known = {row["key"] for row in cells["sources.csv"]}
    assert cells[name]
    for row in cells[name]:
        if name != "sources.csv":
            assert row["source"], row
            assert set(row["source"].split(" ")) <= known, row


def test_every_source_is_used_and_described(cells: Cells) -> None:
    used = {key for name in NAMES if name != "sources.csv" for row in cells[name] for key in row["source"].split(" ")}
    for row in cells["sources.csv"]:
        assert row["text"], row
        assert not row["doi"] or row["doi"].startswith("10."), row
    assert {row["key"] for row in cells["sources.csv"]} == used


@pytest.mark.parametrize("name", [name for name in NAMES if name != "sources.csv"])
def test_every_row_has_a_kind(name: str, cells: Cells) -> None:
    column = "energy_kind" if name == "lines.csv" else "kind"
    kinds = {"published", "family", "formula"} if name == "lines.csv" else KINDS
    assert {row[column] for row in cells[name]} <= kinds


@pytest.mark.parametrize("name", NAMES)
def test_every_row_has_an_uncertainty(name: str, cells: Cells) -> None:
    assert (name in UNCERTAINTY) != (name in JUDGEMENTS)
    for row in cells[name]:
        for column in UNCERTAINTY.get(name, ()):
            assert float(row[column]) > (1.0 if column == "factor" else 0.0), row


@pytest.mark.parametrize("name", STATE)
def test_every_energy_says_to_which_state_it_refers(name: str, cells: Cells) -> None:
    assert all(row["state"] for row in cells[name])


def test_energies_refer_to_the_states_that_handbooks_measured(cells: Cells) -> None:
    """Handbook samples of these were compounds or gases (known; sodium of a salt stands 4 eV below the metal)."""
    states = {(row["symbol"], row["transition"]): row["state"] for row in cells["lines.csv"]}
    assert states["Na", "KL23L23"] == "salt"
    assert states["F", "KL23L23"] == "fluoride"
    assert states["O", "KL23L23"] == "oxide"
    assert states["Cl", "L23M23M23"] == "chloride"
    assert "oxid" in states["Li", "KVV"]
    assert states["Al", "KL23L23"] == states["Ti", "L3M23V"] == "element"


def test_published_lines_are_surer_than_derived_ones(cells: Cells) -> None:
    """A measured line counts for more than a calculated one."""
    spread: dict[str, list[float]] = {}
    for row in cells["lines.csv"]:
        spread.setdefault(row["energy_kind"], []).append(float(row["sigma_ev"]))
    mean = {kind: sum(values) / len(values) for kind, values in spread.items()}
    assert mean["published"] < mean["family"] < mean["formula"]


@pytest.mark.parametrize("name", NAMES)
def test_no_row_is_ragged(name: str, cells: Cells) -> None:
    for row in cells[name]:
        assert None not in row, row
        assert None not in row.values(), row


def test_shifts_lie_within_the_ranges() -> None:
    """A shift that is in the table must be in the range that the matcher allows, within two of its sigmas."""
    outside = set()
    for symbol in {line.symbol for line in tables.read_lines()}:
        for row in tables.chemical_shifts(symbol):
            low, high = tables.shift_range(symbol, row.valence)
            if not low - 2.0 * row.sigma_ev <= row.shift_ev <= high + 2.0 * row.sigma_ev:
                outside.add((symbol, row.state))
    assert not outside


def test_oxides_and_nitrides_shift_down() -> None:
    """Known of Auger lines of solids: oxidation moves an element's own lines down by 1 to 17 eV (O and N apart)."""
    for symbol in ("Al", "Si", "Mg", "Be", "Ti", "Cr", "Cu", "Zn", "Ge", "Sn", "In"):
        oxides = [row for row in tables.chemical_shifts(symbol) if row.state.endswith(("O", "O2", "O3"))]
        assert oxides, symbol
        assert all(-18.0 < row.shift_ev < 0.0 for row in oxides)


def test_commonness_orders_elements_as_everyone_meets_them() -> None:
    """Common practice, no source: carbon and oxygen are on all that has seen air; astatine is never met."""
    common = tables.commonness()
    assert set(common) == {line.symbol for line in tables.read_lines()}
    assert min(common["C"], common["O"]) > 0.8 > common["Fe"] > common["Tm"] > common["At"]
