"""Worked values of published formulae, computed independently of ident from the stated inputs."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from ident.physics.freepath import (
    atom_size_nm,
    plasmon_energy_ev,
    seah_dench_compound_nm,
    seah_dench_nm,
    tpp2m_nm,
)
from ident.physics.ionisation import casnati_cm2, gryzinski_cm2

HERE = Path(__file__).parent
Row = dict[str, str]


def _rows(name: str) -> list[Row]:
    with (HERE / name).open(encoding="utf-8", newline="") as stream:
        return list(csv.DictReader(stream))


@pytest.mark.parametrize("row", _rows("ionisation_worked.csv"), ids=lambda row: f"{row['shell']} {row['E0_eV']}")
def test_ionisation_worked(row: Row) -> None:
    """Gryzinski (1965, from memory) and Casnati et al. (1982)."""
    inputs = (float(row["I_eV"]), int(row["n_electrons"]), float(row["E0_eV"]))
    assert gryzinski_cm2(*inputs) == pytest.approx(float(row["Gryzinski_cm2"]), rel=2e-3)
    assert casnati_cm2(*inputs) == pytest.approx(float(row["Casnati_cm2"]), rel=2e-3)


@pytest.mark.parametrize("row", _rows("imfp_worked.csv"), ids=lambda row: f"{row['material']} {row['E_eV']}")
def test_mean_free_path_worked(row: Row) -> None:
    """TPP-2M (Tanuma, Powell, Penn 1994) and Seah and Dench (1979); of a compound, the size of its mean atom counts."""
    energy, density, mass = float(row["E_eV"]), float(row["rho_g_cm3"]), float(row["M"])
    path = tpp2m_nm(energy, float(row["Nv"]), density, mass, float(row["Eg_eV"]))
    assert path == pytest.approx(float(row["TPP2M_nm"]), rel=3e-3, abs=1e-3)
    size, atoms = float(row["a_nm"]), int(row["atoms"])
    assert atom_size_nm(density, mass, atoms) == pytest.approx(size, rel=2e-3)
    seah_dench = seah_dench_nm if atoms == 1 else seah_dench_compound_nm
    assert seah_dench(energy, size) == pytest.approx(float(row["SeahDench_nm"]), rel=3e-3)


def test_atom_size_against_lattice_constants() -> None:
    """Edge of the cube from lattice constants of crystallography (common values, no source).

    Copper is face-centred with four atoms in a cell of 0.3615 nm, silicon has eight in one of 0.5431 nm,
    sodium chloride eight in one of 0.5640 nm.
    """
    assert atom_size_nm(8.96, 63.546) == pytest.approx(0.3615 / 4 ** (1 / 3), rel=2e-3)
    assert atom_size_nm(2.329, 28.085) == pytest.approx(0.5431 / 8 ** (1 / 3), rel=2e-3)
    assert atom_size_nm(2.165, 58.443, 2) == pytest.approx(0.5640 / 8 ** (1 / 3), rel=2e-3)


def test_no_ionisation_below_threshold() -> None:
    """A level is not ionised by electrons of less than its binding energy (conservation of energy)."""
    assert gryzinski_cm2(1559.6, 2, 1500.0) == 0.0
    assert casnati_cm2(1559.6, 2, 1559.6) == 0.0


@pytest.mark.parametrize(("name", "inputs", "known"), [("Al", (3, 2.70, 26.98), 15.3), ("Mg", (2, 1.738, 24.305), 10.6),
                                                       ("Si", (4, 2.33, 28.086), 16.7)])  # fmt: skip
def test_plasmons_of_free_electron_solids(name: str, inputs: tuple[int, float, float], known: float) -> None:
    """Measured bulk plasmons (H. Raether, Springer Tracts in Modern Physics 88 (1980), from memory)."""
    assert plasmon_energy_ev(*inputs) == pytest.approx(known, abs=0.6), name
