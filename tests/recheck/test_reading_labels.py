"""Labels are read forgivingly and never guessed at quietly.

Symbols and names are IUPAC's; "aluminum", "sulfur" and "cesium" are the American spellings, "wolfram" and "natrium" the
older names (Red Book). Transitions are written as surface analysts write them: common practice, no source.
"""

from __future__ import annotations

import io
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ident.errors import InputError, SettingError
from ident.names import NAMES, name_of
from ident.rechecking import Label, read_label, read_labels
from ident.rechecking.listing import labels_of
from ident.tables.elements import SYMBOLS


def symbols_of(text: str) -> tuple[str, ...] | None:
    """What a label names, None when it is not clear."""
    reading = read_label(text)
    return tuple(part.symbol for part in reading.ways[0]) if reading.clear else None


def transition_of(text: str) -> str | None:
    (part,) = read_label(text).ways[0]
    return str(part.transition) if part.transition else None


@pytest.mark.parametrize("symbol", SYMBOLS)
def test_every_symbol_and_every_name_is_read(symbol: str) -> None:
    assert symbols_of(symbol) == (symbol,)
    assert symbols_of(symbol.lower()) == (symbol,)
    assert symbols_of(name_of(symbol)) == (symbol,)
    assert symbols_of(name_of(symbol).upper()) == (symbol,)


@pytest.mark.parametrize(
    ("name", "symbol"),
    [("aluminum", "Al"), ("sulfur", "S"), ("cesium", "Cs"), ("Wolfram", "W"), ("natrium", "Na"), ("kalium", "K")],
)
def test_both_spellings_and_older_names_are_read_without_correction(name: str, symbol: str) -> None:
    (part,) = read_label(name).ways[0]
    assert part.symbol == symbol
    assert part.corrected_from is None


@pytest.mark.parametrize(
    ("word", "symbol"),
    [("titanum", "Ti"), ("oxigen", "O"), ("flourine", "F"), ("berylium", "Be"), ("silcon", "Si"), ("thalium", "Tl")],
)
def test_a_misspelling_is_corrected_and_said_so(word: str, symbol: str) -> None:
    (part,) = read_label(word).ways[0]
    assert part.symbol == symbol
    assert part.corrected_from == word


@pytest.mark.parametrize(
    ("text", "symbol", "transition"),
    [
        ("Ti L3M23V", "Ti", "L3M23V"),
        ("Ti-L3M23V", "Ti", "L3M23V"),
        ("Ti L3M2,3V", "Ti", "L3M23V"),
        ("Ti L₃M₂,₃V", "Ti", "L3M23V"),
        ("Ti L3-M23-V", "Ti", "L3M23V"),
        ("TiLMM", "Ti", "LMM"),
        ("Ti(LMM)", "Ti", "LMM"),
        ("ti lmm", "Ti", "LMM"),
        ("Cu_LMM", "Cu", "LMM"),
        ("OKLL", "O", "KLL"),
        ("KLMM", "K", "LMM"),
        ("In MNN", "In", "MNN"),
        ("aluminium KLL", "Al", "KLL"),
        ("Ag M4,5N4,5N4,5", "Ag", "M45N45N45"),
        ("Al KL23L23 (1D2)", "Al", "KL23L23"),
        ("O KLL 503", "O", "KLL"),
    ],
)
def test_transitions_in_the_usual_notations(text: str, symbol: str, transition: str) -> None:
    assert symbols_of(text) == (symbol,)
    assert transition_of(text) == transition


@pytest.mark.parametrize(
    ("text", "symbols"),
    [
        ("Ti1", ("Ti",)),
        ("Fe oxide", ("Fe",)),
        ("C contamination", ("C",)),
        ("C in air", ("C",)),
        ("titanium nitride", ("Ti",)),
        ("peak of Ti", ("Ti",)),
        ("S?", ("S",)),
        ("N/Ti", ("N", "Ti")),
        ("Fe + Cr", ("Fe", "Cr")),
        ("iron and chromium", ("Fe", "Cr")),
        ("Fe, Cr", ("Fe", "Cr")),
        ("Fe-Cr", ("Fe", "Cr")),
        ("SiO2", ("Si", "O")),
        ("NaCl", ("Na", "Cl")),
        ("Co", ("Co",)),
        ("Fe LMM/Mn LMM", ("Fe", "Mn")),
    ],
)
def test_what_follows_is_left_out_and_several_elements_are_read(text: str, symbols: tuple[str, ...]) -> None:
    assert symbols_of(text) == symbols


def test_one_or_the_other_is_told_from_both() -> None:
    assert read_label("Fe or Co").either
    assert not read_label("Fe and Co").either


@pytest.mark.parametrize(
    ("text", "ways"),
    [
        ("CO", {("Co",), ("C", "O")}),
        ("NI", {("Ni",), ("N", "I")}),
        ("C K", {("C",), ("C", "K")}),
    ],
)
def test_what_can_be_read_in_two_ways_keeps_both(text: str, ways: set[tuple[str, ...]]) -> None:
    assert {tuple(part.symbol for part in way) for way in read_label(text).ways} == ways


@pytest.mark.parametrize(("text", "nearest"), [("zirc", {"Zr", "Zn"}), ("irom", {"Fe"}), ("chrome", {"Cr"})])
def test_an_unclear_name_gives_its_choices(text: str, nearest: set[str]) -> None:
    reading = read_label(text)
    assert not reading.ways
    assert nearest <= set(reading.choices)


@pytest.mark.parametrize("text", ["", "?", "-", "unknown", "KLL", "L3M45M45", "xyz", "123", "\x00"])
def test_what_names_no_element_is_not_read(text: str) -> None:
    reading = read_label(text)
    assert not reading.ways
    assert reading.problem


@given(st.text(max_size=40))
def test_reading_any_text_gives_known_elements_or_a_problem(text: str) -> None:
    reading = read_label(text)
    assert bool(reading.ways) != bool(reading.problem)
    assert all(part.symbol in SYMBOLS for way in reading.ways for part in way)


def listed(text: str) -> list[tuple[float | None, str]]:
    return [(label.energy_ev, label.text) for label in read_labels("-", stream=io.BytesIO(text.encode()))]


TWO = [(418.0, "Ti"), (703.0, "Fe")]


@pytest.mark.parametrize(
    "text",
    [
        "418 Ti\n703 Fe\n",
        "Ti 418\nFe 703\n",
        "Ti\t418\nFe\t703\n",
        "418,Ti\n703,Fe\n",
        "418;Ti\r\n703;Fe\r\n",
        "Energy (eV),Label\n418,Ti\n703,Fe\n",
        "label,kinetic energy\nTi,418\nFe,703\n",
        "Name\tPosition\tHeight\nTi\t418\t3000\nFe\t703\t272\n",
        "418 eV Ti\n703 eV Fe\n",
        "Ti (418 eV)\nFe (703 eV)\n",
        "Ti @ 418\nFe @ 703\n",
        "Ti: 418\nFe: 703\n",
        "0.418 keV Ti\n0.703 keV Fe\n",
        "# noted on Monday\n\n418 Ti\n703 Fe\n",
        '"418","Ti"\n"703","Fe"\n',
        "1,Ti,418,0.3\n2,Fe,703,0.2\n",
        "\ufeff418,Ti\n703,Fe\n",
    ],
)
def test_energies_and_labels_in_any_order_with_or_without_heading(text: str) -> None:
    assert listed(text) == TWO


@pytest.mark.parametrize(
    "text", ["418,5;Ti\n703,2;Fe\n", "418,5 Ti\n703,2 Fe\n", "Ti\t418,5\nFe\t703,2\n", '"418,5","Ti"\n"703,2","Fe"\n']
)
def test_decimal_comma(text: str) -> None:
    assert listed(text) == [(418.5, "Ti"), (703.2, "Fe")]


def test_heights_are_not_taken_for_energies() -> None:
    assert listed("label;Energie;Höhe\nTi;418,5;1200\nFe;703,2;800\n") == [(418.5, "Ti"), (703.2, "Fe")]
    assert listed("Ti,1200,418\nFe,800,703\n") == TWO  # lines: Ti near 418, Fe near 703 (handbook practice)


def test_a_transition_in_its_own_column_or_with_a_comma_belongs_to_the_label() -> None:
    assert listed("element,transition,energy\nTi,L3M23V,418\nFe,L3M45M45,703\n") == [
        (418.0, "Ti L3M23V"),
        (703.0, "Fe L3M45M45"),
    ]
    assert listed("L3M23V,Ti,418\nL3M45M45,Fe,703\n")[0] == (418.0, "Ti L3M23V")
    assert listed("Ti L3M2,3V,418\nO KLL,510\n")[0] == (418.0, "Ti L3M23V")


@pytest.mark.parametrize("text", ["Fe\nCr\nNi\n", "Fe, Cr, Ni\n", "Fe;Cr;Ni", "Fe Cr Ni", "elements\nFe\nCr\nNi"])
def test_bare_lists(text: str) -> None:
    assert listed(text) == [(None, "Fe"), (None, "Cr"), (None, "Ni")]


def test_an_empty_label_is_kept_and_a_missing_energy_too() -> None:
    assert listed("418,Ti\n,Fe\n600,\n") == [(418.0, "Ti"), (None, "Fe"), (600.0, "")]


@pytest.mark.parametrize("text", [b"", b"   \n", b"# nothing but a remark\n", b"\x00\x01\x02\x03" * 20, b"%PDF-1.4"])
def test_a_file_without_labels_is_one_line_with_a_remedy(text: bytes) -> None:
    with pytest.raises(InputError) as failed:
        read_labels("-", stream=io.BytesIO(text))
    assert "\n" not in str(failed.value)
    assert failed.value.remedy
    assert failed.value.source == "standard input"


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="no such file"):
        read_labels(tmp_path / "none.csv")


def test_labels_from_python() -> None:
    assert labels_of([(418.0, "Ti"), ("Fe", 703), "O", Label(text="C")]) == (
        Label(text="Ti", energy_ev=418.0),
        Label(text="Fe", energy_ev=703.0),
        Label(text="O"),
        Label(text="C"),
    )
    with pytest.raises(SettingError):
        labels_of([418.0])


@given(st.binary(max_size=120))
def test_any_bytes_are_labels_or_an_error_of_the_family(data: bytes) -> None:
    try:
        found = read_labels("-", stream=io.BytesIO(data))
    except InputError:
        return
    assert found


def test_names_are_those_of_the_standard() -> None:
    assert len(NAMES) == len(SYMBOLS) == 92
