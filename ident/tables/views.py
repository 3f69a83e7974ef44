"""The tables as the rest of the program asks for them; each file is read once."""

from __future__ import annotations

from ..errors import UnknownNameError
from .files import own_tables, read_rows
from .own import cached
from .rows import (
    BindingEnergy,
    ChemicalShift,
    Commonness,
    Family,
    Line,
    Material,
    PublishedLine,
    PublishedSensitivity,
    Residue,
    Rival,
    ScaleLine,
    Sensitivity,
    ShiftPrior,
    ShiftRange,
    Source,
)

PRIOR_PART = 0.5  # of its deviation that an expected shift may go below itself
HIGH_STATE = 6  # oxidation states beyond are met in solutions more than on surfaces


@cached
def read_lines() -> tuple[Line, ...]:
    """Every line of every element, by atomic number, then falling height."""
    rows = read_rows("lines.csv", Line)
    return rows if own_tables() is None else tuple(sorted(rows, key=lambda line: (line.z, -line.relative_height)))


@cached
def _by_symbol() -> dict[str, tuple[Line, ...]]:
    grouped: dict[str, list[Line]] = {}
    for line in read_lines():
        grouped.setdefault(line.symbol, []).append(line)
    return {symbol: tuple(lines) for symbol, lines in grouped.items()}


def lines_of(symbol: str) -> tuple[Line, ...]:
    """Lines of an element, strongest first; none for hydrogen and helium."""
    return _by_symbol().get(symbol, ())


@cached
def _numbers() -> dict[str, int]:
    return {row.symbol: row.z for row in read_rows("commonness.csv", Commonness)}


def atomic_number(symbol: str) -> int:
    """Atomic number of an element of the tables."""
    special = {"H": 1, "He": 2}
    number = special.get(symbol) or _numbers().get(symbol)
    if number is None:
        raise UnknownNameError(f"'{symbol}' is no element from H to U; write a symbol such as Fe")
    return number


@cached
def commonness() -> dict[str, float]:
    """Probability that an element is on a technical surface, by symbol."""
    return {row.symbol: row.probability for row in read_rows("commonness.csv", Commonness)}


@cached
def _shifts() -> dict[str, tuple[ChemicalShift, ...]]:
    grouped: dict[str, list[ChemicalShift]] = {}
    for row in read_rows("chemical_shifts.csv", ChemicalShift):
        grouped.setdefault(row.symbol, []).append(row)
    return {symbol: tuple(rows) for symbol, rows in grouped.items()}


def chemical_shifts(symbol: str) -> tuple[ChemicalShift, ...]:
    """Known shifts of an element's lines by state; empty when none is in the table."""
    return _shifts().get(symbol, ())


@cached
def _priors() -> dict[str, tuple[ShiftPrior, ...]]:
    grouped: dict[str, list[ShiftPrior]] = {}
    for row in read_rows("shift_priors.csv", ShiftPrior):
        grouped.setdefault(row.symbol, []).append(row)
    return {symbol: tuple(rows) for symbol, rows in grouped.items()}


def shift_priors(symbol: str) -> tuple[ShiftPrior, ...]:
    """Shifts expected of an element's usual compounds; empty when its lines do not refer to the element itself."""
    return _priors().get(symbol, ())


@cached
def _ranges() -> dict[tuple[str, bool], tuple[float, float]]:
    rows = read_rows("shift_ranges.csv", ShiftRange)
    return {(row.symbol, row.valence): (row.lowest_ev, row.highest_ev) for row in rows}


def _usual_oxides(symbol: str, valence: bool) -> list[ShiftPrior]:
    oxides = [row for row in shift_priors(symbol) if row.state_class == "oxide" and row.valence == valence]
    return [row for row in oxides if row.oxidation_state <= HIGH_STATE]


@cached
def shift_range(symbol: str, valence: bool) -> tuple[float, float]:
    """How far down and up chemistry may move an element's core or valence lines, in eV.

    By judgement where shift_ranges.csv names the element; else what it gives for all elements, and as far down as
    known states, or the oxide that is expected, lie below that.
    """
    ranges = _ranges()
    named = ranges.get((symbol, valence))
    if named is not None:
        return named
    low, high = ranges[("*", valence)]
    known = [row.shift_ev - row.sigma_ev for row in chemical_shifts(symbol) if row.valence == valence]
    expected = [] if known else [row.shift_ev - PRIOR_PART * row.sigma_ev for row in _usual_oxides(symbol, valence)]
    return min([low, *known, *expected]), high


@cached
def sensitivities() -> dict[str, Sensitivity]:
    """Rough sensitivity of every element, by symbol."""
    return {row.symbol: row for row in read_rows("sensitivities.csv", Sensitivity)}


@cached
def published_sensitivities() -> tuple[PublishedSensitivity, ...]:
    """Sensitivities as handbooks give them."""
    return read_rows("published_sensitivities.csv", PublishedSensitivity)


@cached
def binding_energies() -> dict[tuple[str, str], BindingEnergy]:
    """Binding energies by symbol and level."""
    return {(row.symbol, row.level): row for row in read_rows("binding_energies.csv", BindingEnergy)}


@cached
def materials() -> dict[str, Material]:
    """What mean free paths in the elements are worked out from, by symbol."""
    return {row.symbol: row for row in read_rows("materials.csv", Material)}


@cached
def _rivals() -> dict[str, tuple[Rival, ...]]:
    grouped: dict[str, list[Rival]] = {}
    for row in read_rows("rivals.csv", Rival):
        grouped.setdefault(row.symbol, []).append(row)
    return {symbol: tuple(rows) for symbol, rows in grouped.items()}


def rivals_of(symbol: str) -> tuple[Rival, ...]:
    """Rivals of every strong line of an element; none for hydrogen and helium."""
    return _rivals().get(symbol, ())


@cached
def published_lines() -> tuple[PublishedLine, ...]:
    """Published line energies as their sources state them."""
    return read_rows("published_lines.csv", PublishedLine)


@cached
def scale_lines() -> tuple[ScaleLine, ...]:
    """Lines of the reference metals by which an energy scale is set."""
    return read_rows("scale_lines.csv", ScaleLine)


@cached
def families() -> dict[str, Family]:
    """The families of transitions by name."""
    return {row.family: row for row in read_rows("families.csv", Family)}


@cached
def sources() -> dict[str, Source]:
    """What every source key stands for."""
    return {row.key: row for row in read_rows("sources.csv", Source)}


@cached
def residues() -> tuple[Residue, ...]:
    """Residues and the elements they bring."""
    return read_rows("residues.csv", Residue)
