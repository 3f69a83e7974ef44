"""Chemical shifts: known values against publications, and the estimate for the rest, elements left out."""

from __future__ import annotations

import csv
import math
from pathlib import Path

import numpy as np
import pytest

from ident import element_card, tables
from ident.deriving.shifts import electronegativities, fit_shifts, fitted_rows, predict_left_out
from ident.errors import TableError
from ident.tables import ChemicalShift, reference_folder
from ident.tables.files import read_rows

# element, line, state, shift in eV, tolerance, where it is stated
STATED = (
    ("Al", "KL23L23", "Al2O3", 1386.5 - 1393.0, 0.5, "energies cited in Surf. Interface Anal. 2002, 10.1002/sia.1316"),
    ("Zn", "L3M45M45", "ZnO", 988.6 - 992.1, 0.5, "Iaiche et al., J. Spectroscopy 2015, 836859; the metal from memory"),
    ("Zn", "L3M45M45", "ZnAl2O4", 987.5 - 992.1, 0.5, "the same"),
    (
        "Sn",
        "M4N45N45",
        "SnO2",
        -1.09 * 4,
        0.5,
        "Choi et al., J. Korean Phys. Soc. 31 (1997) 369, a valency",
    ),
    ("Sn", "M4N45N45", "SnO", -1.09 * 2, 0.5, "the same"),
    ("Ba", "N45O23V", "BaO", 68.0 - 73.0, 0.5, "Haas, Marrian, Shih, Appl. Surf. Sci. 16 (1983) 125"),
)
# Auger parameter less binding energy gives the Auger line: both from memory, metal to oxide, in eV.
PARAMETERS = (
    ("Mg", "KL23L23", "MgO", -5.6 + 0.4),  # Auger parameter: Bouvier et al., Surf. Coat. Technol. 180 (2004) 169
    ("Al", "KL23L23", "Al2O3", (1461.9 - 74.3) - (1466.1 - 72.9)),
    ("Si", "KL23L23", "SiO2", (1712.0 - 103.5) - (1716.1 - 99.4)),
    ("Cu", "L3M45M45", "Cu2O", (1849.2 - 932.4) - (1851.2 - 932.6)),
    ("Zn", "L3M45M45", "ZnO", (2010.2 - 1022.1) - (2013.8 - 1021.7)),
)


def known(symbol: str, transition: str, state: str) -> ChemicalShift:
    rows = [row for row in tables.chemical_shifts(symbol) if (row.transition, row.state) == (transition, state)]
    assert len(rows) == 1
    return rows[0]


@pytest.mark.parametrize(("symbol", "transition", "state", "shift_ev", "within_ev", "source"), STATED)
def test_published_shifts(
    symbol: str, transition: str, state: str, shift_ev: float, within_ev: float, source: str
) -> None:
    assert source
    assert known(symbol, transition, state).shift_ev == pytest.approx(shift_ev, abs=within_ev)


@pytest.mark.parametrize(("symbol", "transition", "state", "shift_ev"), PARAMETERS)
def test_auger_parameters_and_binding_energies_say_the_same(
    symbol: str, transition: str, state: str, shift_ev: float
) -> None:
    assert known(symbol, transition, state).shift_ev == pytest.approx(shift_ev, abs=max(0.6, 0.2 * abs(shift_ev)))


def test_what_is_from_memory_says_so_and_claims_no_more_than_memory_can() -> None:
    """0.5 eV is what two handbooks differ by at sharp lines (from memory); recalled rows never claim less."""
    rows = read_rows("chemical_shifts.csv", ChemicalShift)
    for row in rows:
        recalled = "memory" in row.source.split()
        assert (row.status == "from memory") == (row.kind == "recalled")
        if recalled:
            assert row.status == "from memory"
            assert row.sigma_ev >= 0.5


def test_the_states_an_analyst_meets_are_there() -> None:
    """The classes that the table promises, each with several elements but for carbon's own."""
    rows = read_rows("chemical_shifts.csv", ChemicalShift)
    classes = {row.state_class for row in rows}
    named = "oxide nitride carbide sulphide sulphate phosphate fluoride organic element hydroxide chloride carbonate"
    assert set(named.split()) <= classes
    assert {row.valence for row in rows} == {True, False}


# A normal deviate lies within one, two and three deviations so often.
NORMAL = {1: 0.683, 2: 0.954, 3: 0.9973}


@pytest.mark.parametrize("valence", [False, True])
def test_elements_left_out_lie_within_what_is_claimed_for_them(valence: bool) -> None:
    """All rows of an element are left out at once; bounds are two standard deviations of a binomial count."""
    rows, chi = fitted_rows(valence), electronegativities()
    model = fit_shifts(rows, chi)
    predicted = predict_left_out(rows, chi)
    shift = np.array([row.shift_ev for row in rows])
    claimed = np.hypot(model.sigma_ev, [row.sigma_ev for row in rows])
    off = np.abs(shift - predicted) / claimed
    for k, share in NORMAL.items():
        spread = 2.0 * math.sqrt(share * (1.0 - share) / len(rows)) + 1.0 / len(rows)
        assert np.mean(off < k) >= share - spread
        if k == 1:  # nor may it be much too wide
            assert np.mean(off < k) <= share + spread


@pytest.mark.parametrize("valence", [False, True])
def test_the_estimate_beats_no_shift_and_the_mean_shift(valence: bool) -> None:
    rows, chi = fitted_rows(valence), electronegativities()
    shift = np.array([row.shift_ev for row in rows])
    symbols = np.array([row.symbol for row in rows])
    mean = np.array([shift[symbols != symbol].mean() for symbol in symbols])
    off = shift - predict_left_out(rows, chi)
    assert np.sqrt(np.mean(off**2)) < 0.8 * np.sqrt(np.mean((shift - mean) ** 2))
    assert np.sqrt(np.mean(off**2)) < 0.5 * np.sqrt(np.mean(shift**2))


def test_oxides_go_down_and_more_oxidised_ones_further() -> None:
    """Charge taken away lowers Auger lines (common practice, no source)."""
    for symbol in ("Ti", "Fe", "Mn", "W", "Hf", "La"):
        oxides = [row for row in tables.shift_priors(symbol) if row.state_class == "oxide" and not row.valence]
        assert oxides
        assert all(row.shift_ev < 0 for row in oxides)
        assert [row.shift_ev for row in oxides] == sorted((row.shift_ev for row in oxides), reverse=True)


def test_electronegativities_are_paulings() -> None:
    """O 3.44, F 3.98, Al 1.61, Cu 1.90: Pauling's scale as textbooks print it (from memory)."""
    chi = electronegativities()
    for symbol, value in {"O": 3.44, "F": 3.98, "Al": 1.61, "Cu": 1.90}.items():
        assert chi[symbol] == pytest.approx(value, abs=0.01)


def test_ranges_reach_known_oxides_and_stay_narrow_for_noble_metals() -> None:
    low, _ = tables.shift_range("Ge", valence=False)
    assert low < -7.5  # GeO2, from memory
    for symbol in ("Au", "Pt", "Ag"):
        low, high = tables.shift_range(symbol, valence=False)
        assert high - low <= 6.0  # they hardly oxidise (common practice, no source)


def test_the_card_tells_known_shifts_or_says_that_they_are_estimated() -> None:
    assert {shift.origin for shift in element_card("Si").shifts} <= {"read", "from memory"}
    hafnium = element_card("Hf").shifts
    assert {shift.origin for shift in hafnium} == {"estimated"}
    assert any(shift.state == "Hf(IV) oxide" for shift in hafnium)


@pytest.mark.parametrize(
    ("column", "value"), [("state_class", "rust"), ("partner", "Xx"), ("shift_ev", "-400"), ("status", "seen")]
)
def test_a_malformed_row_is_refused_with_line_and_column(column: str, value: str, tmp_path: Path) -> None:
    with (reference_folder() / "chemical_shifts.csv").open(encoding="utf-8", newline="") as stream:
        rows = list(csv.reader(stream))
    rows[3][rows[0].index(column)] = value
    with (tmp_path / "chemical_shifts.csv").open("w", encoding="utf-8", newline="") as stream:
        csv.writer(stream, lineterminator="\n").writerows(rows)
    (tmp_path / "sources.csv").write_bytes((reference_folder() / "sources.csv").read_bytes())
    with pytest.raises(TableError) as refused:
        read_rows("chemical_shifts.csv", ChemicalShift, tmp_path)
    for part in ("chemical_shifts.csv", "line 4", column):
        assert part in str(refused.value)
