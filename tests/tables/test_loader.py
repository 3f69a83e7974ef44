"""A damaged table is refused with file, line, column and value: no row is skipped, none is mended.

What counts as damage follows from what the tables promise (reference/README.md); that a loader must point at the
cell is common practice, no source.
"""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

from ident import tables
from ident.errors import IdentError, TableError
from ident.tables.files import read_rows

KINDS = {
    "binding_energies.csv": tables.BindingEnergy,
    "chemical_shifts.csv": tables.ChemicalShift,
    "commonness.csv": tables.Commonness,
    "families.csv": tables.Family,
    "lines.csv": tables.Line,
    "materials.csv": tables.Material,
    "published_lines.csv": tables.PublishedLine,
    "published_sensitivities.csv": tables.PublishedSensitivity,
    "residues.csv": tables.Residue,
    "rivals.csv": tables.Rival,
    "scale_lines.csv": tables.ScaleLine,
    "sensitivities.csv": tables.Sensitivity,
    "shift_priors.csv": tables.ShiftPrior,
    "shift_ranges.csv": tables.ShiftRange,
    "sources.csv": tables.Source,
}
BERYLLIUM = "Be,4,0.02,special,recalled,crust"  # line 3 of commonness.csv


def damage(folder: Path, change: Callable[[str], str], name: str = "commonness.csv") -> None:
    path = folder / name
    before = path.read_text(encoding="utf-8")
    after = change(before)
    assert after != before, "the damage did nothing"
    path.write_text(after, encoding="utf-8")


@pytest.mark.parametrize("name", KINDS)
def test_every_table_reads(name: str) -> None:
    text = (tables.reference_folder() / name).read_text(encoding="utf-8")
    assert len(read_rows(name, KINDS[name])) == text.count("\n") - 1  # no row of ours has a line break inside


def test_no_table_is_forgotten() -> None:
    """Every CSV file has a reader here, but for the one that only a rebuild and a reader of CSV files use."""
    assert {table.name for table in tables.list_tables()} - set(KINDS) == {"transitions.csv"}


CELLS = {
    "a cell is missing": ("Be,4,0.02,special,recalled", None, "has 5 cells, not 6"),
    "a cell too many": (BERYLLIUM + ",crust", None, "has 7 cells, not 6"),
    "blank line": ("", None, "has 0 cells, not 6"),
    "text for a number": ("Be,4,seldom,special,recalled,crust", "probability", "is not a number"),
    "no number": ("Be,4,nan,special,recalled,crust", "probability", "is not a finite number"),
    "empty number": ("Be,4,,special,recalled,crust", "probability", "is not a number"),
    "out of range": ("Be,4,1.5,special,recalled,crust", "probability", "must lie between 0 and 1"),
    "a broken whole number": ("Be,4.0,0.02,special,recalled,crust", "z", "is not a whole number"),
    "unknown element": ("Bx,4,0.02,special,recalled,crust", "symbol", "is no element"),
    "hydrogen": ("H,1,0.02,special,recalled,crust", "symbol", "is no element from Li"),
    "helium": ("He,2,0.02,special,recalled,crust", "symbol", "is no element from Li"),
    "another's atomic number": ("Be,5,0.02,special,recalled,crust", "z", "is not the atomic number of Be"),
    "unknown source": ("Be,4,0.02,special,recalled,hearsay", "source", "is no key of sources.csv"),
    "no source": ("Be,4,0.02,special,recalled,", "source", "is no key of sources.csv"),
    "duplicate": ("Li,3,0.02,special,recalled,crust", "symbol", "stands in line 2 already"),
}


@pytest.mark.parametrize("what", CELLS)
def test_a_damaged_row_is_pointed_at(folder: Path, what: str) -> None:
    row, column, told = CELLS[what]
    damage(folder, lambda text: text.replace(BERYLLIUM, row))
    with pytest.raises(TableError) as caught:
        read_rows("commonness.csv", tables.Commonness, folder)
    error = caught.value
    assert (error.file, error.line, error.column) == ("commonness.csv", 3, column)
    assert told in str(error)
    assert str(error).startswith("commonness.csv, line 3")
    assert "\n" not in str(error)
    if column is not None:
        assert f"column {column}" in str(error)
        assert repr(error.value) in str(error)


@pytest.mark.parametrize(
    ("name", "old", "new", "column"),
    [
        ("lines.csv", "Be,4,KVV,KVV,107.3,1.5,published", "Be,4,KVV,KVV,107.3,1.5,guessed", "energy_kind"),
        ("lines.csv", "Be,4,KVV,KVV,107.3,1.5,", "Be,4,KVV,KVV,107.3,0,", "sigma_ev"),
        ("lines.csv", "Be,4,KVV,KVV,107.3,", "Be,4,KVV,KVV,10.3,", "energy_ev"),
        ("published_lines.csv", ",1.0,derivative,handbook", ",1.0,integral,handbook", "form"),
        ("published_lines.csv", "handbook,from memory", "handbok,from memory", "reference_level"),
        ("published_lines.csv", "handbook,from memory", "handbook,hearsay", "status"),
        ("published_lines.csv", "from memory,normal", "from memory,high", "confidence"),
        ("commonness.csv", "recalled,crust", "guessed,crust", "kind"),
        ("sensitivities.csv", "calculated,computed", "guessed,computed", "kind"),
        ("materials.csv", "O,8,6,1.14,", "O,8,6,0.0014,", "density_g_cm3"),
        ("materials.csv", "O,8,6,1.14,", "O,8,0,1.14,", "valence_electrons"),
        ("residues.csv", "Na Cl,K S C N", "Na Ql,K S C N", "needs"),
        ("residues.csv", "Na Cl,K S C N,,", "Na Cl,K S C N,Na,", "against"),
        ("rivals.csv", "B,5,KVV,Cl,", "B,5,KVV,He,", "rival"),
        ("rivals.csv", "B,5,KVV,Cl,", "B,5,KVV,B,", "rival"),
        ("sensitivities.csv", ",calculated,computed", "e-9,calculated,computed", "factor"),
        ("published_sensitivities.csv", "Ag,47,M5N45N45,1,", "Ag,47,M5N45N45,-1,", "sensitivity"),
        ("families.csv", "calculated,chung1970", "guessed,chung1970", "kind"),
        ("shift_ranges.csv", "Li,1,-12,9", "Li,1,12,9", "highest_ev"),
        ("shift_ranges.csv", "Li,1,-12", "Li,yes,-12", "valence"),
        ("shift_ranges.csv", "Li,1,-12", "?,1,-12", "symbol"),
        ("shift_priors.csv", "Ti,22,0,oxide", "Ti,22,0,rust", "state_class"),
        ("chemical_shifts.csv", "recalled,memory", "guessed,memory", "kind"),
        ("chemical_shifts.csv", "Li,3,KVV", "*,3,KVV", "symbol"),
        ("binding_energies.csv", "Li,3,K,54.7", "Li,3,K,-54.7", "energy_ev"),
    ],
)
def test_each_table_checks_its_own_columns(folder: Path, name: str, old: str, new: str, column: str) -> None:
    damage(folder, lambda text: text.replace(old, new, 1), name)
    with pytest.raises(TableError) as caught:
        read_rows(name, KINDS[name], folder)
    assert (caught.value.file, caught.value.column) == (name, column)


@pytest.mark.parametrize(
    "change",
    [
        lambda text: text.replace("symbol,z,probability", "symbol,probability,z"),
        lambda text: text.replace("symbol,z,", "symbol,", 1),
        lambda text: text.partition("\n")[2],
        lambda text: "",
    ],
    ids=["columns swapped", "column missing", "header missing", "empty file"],
)
def test_a_damaged_header_is_pointed_at(folder: Path, change: Callable[[str], str]) -> None:
    damage(folder, change)
    with pytest.raises(TableError, match=r"^commonness\.csv, line 1: columns must be symbol,z,probability"):
        read_rows("commonness.csv", tables.Commonness, folder)


def test_a_file_that_is_no_text(folder: Path) -> None:
    (folder / "commonness.csv").write_bytes(b"symbol,z,probability,group,kind,source\nBe,4,0.02,sp\xe9cial\xff,r,c\n")
    with pytest.raises(TableError, match=r"^commonness\.csv: is no CSV text in UTF-8"):
        read_rows("commonness.csv", tables.Commonness, folder)


def test_a_missing_table(folder: Path) -> None:
    (folder / "commonness.csv").unlink()
    with pytest.raises(IdentError, match=r"^commonness\.csv: cannot be read"):
        read_rows("commonness.csv", tables.Commonness, folder)


def test_the_edition_is_the_first_heading() -> None:
    """Editions are called YEAR.MONTH (reference/EDITIONS.md)."""
    text = (tables.reference_folder() / "EDITIONS.md").read_text(encoding="utf-8")
    assert f"## {tables.edition()}\n" in text
    year, month = tables.edition().split(".")
    assert 2024 < int(year) < 2100
    assert 1 <= int(month) <= 12


@pytest.mark.parametrize("module", ["ident.tables", "ident.names", "ident.lookup"])
def test_reading_tables_is_light(module: str) -> None:
    """A question put to the tables must cost next to nothing: heavy packages stay out of it."""
    heavy = ["numpy", "scipy", "pandas", "mendeleev", "xraylib", "xraydb", "matplotlib", "rapidfuzz", "ident.deriving"]
    code = f"""
import sys, importlib
module = importlib.import_module({module!r})
from ident import tables
tables.read_lines(), tables.sources(), tables.commonness(), tables.atomic_number("Fe")
print([name for name in {heavy!r} if name in sys.modules])
"""
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == "[]"
