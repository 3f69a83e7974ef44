"""Names and symbols of elements: IUPAC names, spellings in use, misspellings, and what is none."""

from __future__ import annotations

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from ident.errors import UnknownNameError
from ident.lookup import element_card
from ident.names import NAMES, SYMBOLS, name_of, read_element, symbol_from_name
from ident.tables import atomic_number, lines_of

# British spellings (IUPAC allows both) where mendeleev writes otherwise.
BRITISH = {"Al": "aluminium", "S": "sulphur", "Cs": "caesium"}
AMERICAN = {"aluminum": "Al", "sulfur": "S", "cesium": "Cs"}


@pytest.fixture(scope="module")
def of_mendeleev() -> dict[int, tuple[str, str]]:
    """Symbol and name by atomic number from the package mendeleev."""
    from mendeleev.fetch import fetch_table

    table = fetch_table("elements")
    columns = (table["atomic_number"], table["symbol"], table["name"])
    return {int(z): (str(symbol), str(name)) for z, symbol, name in zip(*columns, strict=True)}


def test_symbols_names_and_numbers_against_mendeleev(of_mendeleev: dict[int, tuple[str, str]]) -> None:
    assert len(SYMBOLS) == len(NAMES) == 92
    for z in range(1, 93):
        symbol, name = of_mendeleev[z]
        assert SYMBOLS[z - 1] == symbol
        assert atomic_number(symbol) == z
        assert name_of(symbol) == BRITISH.get(symbol, name.lower())
        assert symbol_from_name(symbol) == symbol
        assert read_element(name).symbol == symbol  # in the spelling of mendeleev, whichever that is
        assert not read_element(name).corrected


def test_no_element_is_commonly_called_after_another() -> None:
    assert len(set(SYMBOLS)) == len(set(NAMES)) == 92


@pytest.mark.parametrize(("text", "symbol"), [*AMERICAN.items(), *((name, symbol) for symbol, name in BRITISH.items())])
def test_british_and_american_spelling(text: str, symbol: str) -> None:
    """Both are in use (IUPAC, Nomenclature of Inorganic Chemistry 2005, table I)."""
    reading = read_element(text)
    assert (reading.symbol, reading.corrected) == (symbol, False)


@pytest.mark.parametrize(
    ("text", "symbol"), [("wolfram", "W"), ("natrium", "Na"), ("kalium", "K"), ("columbium", "Nb")]
)
def test_names_that_the_symbols_come_from(text: str, symbol: str) -> None:
    """Older names (IUPAC, Nomenclature of Inorganic Chemistry 2005)."""
    assert symbol_from_name(text) == symbol


@pytest.mark.parametrize("text", ["Ti", "ti", "TI", " Ti\t", "titanium", "Titanium", "TITANIUM", "  titanium \n"])
def test_case_and_blanks_do_not_matter(text: str) -> None:
    reading = read_element(text)
    assert (reading.symbol, reading.corrected) == ("Ti", False)


@pytest.mark.parametrize(
    ("text", "symbol"),
    [
        ("titanum", "Ti"),
        ("alumnium", "Al"),
        ("aluminim", "Al"),
        ("sulfer", "S"),
        ("phosporus", "P"),
        ("molybdenium", "Mo"),
        ("zirkonium", "Zr"),
        ("nickle", "Ni"),
        ("chromum", "Cr"),
        ("berylium", "Be"),
        ("flourine", "F"),
        ("tungston", "W"),
        ("magnesum", "Mg"),
        ("germaniun", "Ge"),
    ],
)
def test_misspellings_are_read_and_said_to_be(text: str, symbol: str) -> None:
    """Slips that people make (common practice, no source)."""
    reading = read_element(text)
    assert (reading.symbol, reading.corrected) == (symbol, True)


@pytest.mark.parametrize(
    "text", ["", " ", "22", "X", "Xx", "Fe2O3", "ir0n", "steel", "unobtainium", "?", "Np", "Pu", "α"]
)
def test_what_is_no_element_is_refused_in_one_line(text: str) -> None:
    """Neptunium and plutonium lie beyond the tables; numbers and formulae are no names."""
    with pytest.raises(UnknownNameError) as caught:
        symbol_from_name(text)
    told = str(caught.value)
    assert text.strip() in told
    assert "\n" not in told
    assert "write a symbol such as" in told or "did you mean one of" in told


@pytest.mark.parametrize(
    ("text", "nearest"),
    [
        ("thullium", ("thulium (Tm)", "thallium (Tl)")),
        ("yterbium", ("ytterbium (Yb)", "terbium (Tb)", "erbium (Er)")),
        ("rhenodium", ("rhenium (Re)", "rhodium (Rh)")),  # as near to one as to the other
        ("steelium", ()),
    ],
)
def test_a_name_between_two_is_asked_back(text: str, nearest: tuple[str, ...]) -> None:
    """Guessing between manganese and magnesium would be a quiet wrong answer."""
    with pytest.raises(UnknownNameError, match="did you mean one of") as caught:
        read_element(text)
    assert all(name in str(caught.value) for name in nearest)


@pytest.mark.parametrize(("text", "symbol"), [("H", "H"), ("hydrogen", "H"), ("he", "He"), ("Helium", "He")])
def test_hydrogen_and_helium_are_known_and_have_no_auger_lines(text: str, symbol: str) -> None:
    """An Auger transition needs three electrons (textbook fact): the card says so and gives no line."""
    assert symbol_from_name(text) == symbol
    assert lines_of(symbol) == ()
    card = element_card(text)
    assert card.lines == ()
    assert card.deciding is None
    assert card.untestable is not None
    assert "few electrons" in card.untestable


@given(
    st.sampled_from(range(92)), st.booleans(), st.sampled_from(["lower", "upper", "title"]), st.sampled_from(["", " "])
)
def test_every_name_and_symbol_reads_back(index: int, by_name: bool, case: str, blank: str) -> None:
    word = (NAMES if by_name else SYMBOLS)[index]
    reading = read_element(blank + getattr(word, case)() + blank)
    assert (reading.symbol, reading.corrected) == (SYMBOLS[index], False)


@given(st.sampled_from([name for name in NAMES if len(name) > 6]), st.data())
def test_a_letter_left_out_never_gives_another_element(name: str, data: st.DataObject) -> None:
    """A slip may be asked back, but it is never read as another element."""
    place = data.draw(st.integers(min_value=0, max_value=len(name) - 1))
    left = name[:place] + name[place + 1 :]
    assume(left not in NAMES)  # terbium without its t is erbium: no slip that anyone could see
    try:
        symbol = symbol_from_name(left)
    except UnknownNameError as error:
        assert name in str(error)
    else:
        assert name_of(symbol) == name


@given(st.text(max_size=20))
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        assert symbol_from_name(text) in SYMBOLS
    except UnknownNameError as error:
        assert "\n" not in str(error)
