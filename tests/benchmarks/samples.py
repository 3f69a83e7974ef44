"""What lies on the surfaces of the benchmark: technical samples, contamination, random mixtures."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from .published import published_lines

State = Literal["element", "oxide", "both"]
Part = tuple[str, float, float, State]  # element, lowest and highest strength, state
Maybe = tuple[str, float, float, float, State]  # element, chance, lowest and highest strength, state


@dataclass(frozen=True, kw_only=True)
class Recipe:
    """A kind of sample. Strength: depth of the strongest line, 1 being a pure strong element."""

    name: str
    parts: tuple[Part, ...]
    maybe: tuple[Maybe, ...] = ()
    insulator: bool = False


@dataclass(frozen=True, kw_only=True)
class Constituent:
    """One element on one surface."""

    element: str
    strength: float
    state: State = "element"


def _recipe(name: str, parts: str, maybe: str = "", insulator: bool = False) -> Recipe:
    """Read `Fe 0.5-1 oxide` and `Mo 0.3: 0.02-0.1` lists, separated by semicolons."""
    fixed, chances = [], []
    for text in filter(None, (piece.strip() for piece in parts.split(";"))):
        element, strengths, *state = text.split()
        low, high = (float(value) for value in strengths.split("-"))
        fixed.append((element, low, high, _state(state)))
    for text in filter(None, (piece.strip() for piece in maybe.split(";"))):
        element, chance, strengths, *state = text.split()
        low, high = (float(value) for value in strengths.split("-"))
        chances.append((element, float(chance.rstrip(":")), low, high, _state(state)))
    return Recipe(name=name, parts=tuple(fixed), maybe=tuple(chances), insulator=insulator)


def _state(words: list[str]) -> State:
    word = words[0] if words else "element"
    if word not in ("element", "oxide", "both"):
        raise ValueError(f"no such state: {word}")
    return word  # type: ignore[return-value]


RECIPES: tuple[Recipe, ...] = (
    _recipe(
        "stainless steel",
        "Fe 0.4-0.9; Cr 0.15-0.5; Ni 0.05-0.2",
        "Mo 0.4 0.02-0.08; Mn 0.5 0.02-0.08; Si 0.3 0.02-0.1 oxide; N 0.2 0.02-0.06",
    ),
    _recipe(
        "stainless steel, oxidised",
        "Fe 0.2-0.6 oxide; Cr 0.2-0.6 oxide; O 0.4-0.9",
        "Ni 0.6 0.02-0.1; Mn 0.4 0.03-0.1 oxide; Mo 0.3 0.02-0.08 oxide",
    ),
    _recipe("carbon steel", "Fe 0.5-1 both", "Mn 0.4 0.01-0.05; Si 0.3 0.01-0.06 oxide; P 0.2 0.02-0.1"),
    _recipe("nickel contact", "Ni 0.5-1", "P 0.5 0.03-0.3; B 0.1 0.03-0.1; Fe 0.1 0.02-0.1"),
    _recipe("copper contact", "Cu 0.5-1", "Ni 0.2 0.02-0.2; Zn 0.2 0.05-0.3; Sn 0.2 0.02-0.2; Be 0.1 0.02-0.1"),
    _recipe("brass", "Cu 0.4-0.8; Zn 0.2-0.6", "Pb 0.4 0.03-0.2; Sn 0.2 0.02-0.08; Ni 0.1 0.02-0.1"),
    _recipe("silver contact", "Ag 0.5-1", "Cu 0.4 0.03-0.3; S 0.5 0.05-0.4; Cd 0.15 0.05-0.2; In 0.1 0.05-0.2"),
    _recipe("gold pad", "Au 0.2-0.8", "Ni 0.4 0.02-0.2; Cu 0.3 0.02-0.2; Tl 0.1 0.02-0.1; Co 0.2 0.01-0.05"),
    _recipe("palladium finish", "Pd 0.4-1", "Ni 0.4 0.03-0.3; Au 0.4 0.03-0.2; Ag 0.2 0.05-0.3; Cu 0.2 0.02-0.2"),
    _recipe("platinum electrode", "Pt 0.2-0.8", "Ir 0.2 0.05-0.2; Rh 0.2 0.05-0.2; Ti 0.2 0.02-0.1"),
    _recipe("rhodium finish", "Rh 0.4-1", "Ni 0.3 0.03-0.2; Ag 0.2 0.05-0.3"),
    _recipe("ruthenium electrode", "Ru 0.4-0.9; O 0.1-0.4", "Ir 0.3 0.05-0.2; Ti 0.4 0.05-0.3 oxide"),
    _recipe("tin finish", "Sn 0.4-0.9 both", "Cu 0.4 0.03-0.3; Ni 0.2 0.03-0.2; Pb 0.2 0.05-0.3"),
    _recipe("tin-lead solder", "Sn 0.3-0.8; Pb 0.2-0.8", "Sb 0.2 0.05-0.15; Cu 0.3 0.02-0.2; Bi 0.1 0.05-0.3"),
    _recipe("lead-free solder", "Sn 0.4-0.9; Ag 0.05-0.2", "Cu 0.6 0.02-0.15; Bi 0.2 0.05-0.3; In 0.2 0.05-0.3"),
    _recipe("indium seal", "In 0.5-1 both", "Cu 0.2 0.05-0.2; Sn 0.2 0.1-0.3"),
    _recipe("bismuth alloy", "Bi 0.4-0.9; Sn 0.2-0.6", "Pb 0.2 0.1-0.4; Cd 0.3 0.1-0.4"),
    _recipe("zinc plating", "Zn 0.5-1 both", "Fe 0.3 0.03-0.2; Cr 0.5 0.03-0.2 oxide; Ni 0.1 0.03-0.1"),
    _recipe("cadmium plating", "Cd 0.4-1", "Cr 0.4 0.03-0.2 oxide; Fe 0.2 0.03-0.2"),
    _recipe("chromium plating", "Cr 0.5-1 both", "Ni 0.4 0.03-0.2; Fe 0.2 0.03-0.2; F 0.1 0.05-0.2"),
    _recipe(
        "aluminium alloy",
        "Al 0.4-1 both; O 0.2-0.7",
        "Mg 0.5 0.05-0.4 oxide; Cu 0.3 0.02-0.15; Zn 0.2 0.02-0.15; Si 0.3 0.03-0.2; Li 0.05 0.05-0.2",
    ),
    _recipe(
        "bond pad",
        "Al 0.5-1 both; O 0.2-0.5",
        "F 0.4 0.05-0.4; Si 0.3 0.03-0.2; Cu 0.3 0.02-0.1; Au 0.3 0.05-0.3; Cl 0.2 0.05-0.3",
    ),
    _recipe("titanium alloy", "Ti 0.5-1 both; Al 0.03-0.15", "V 0.6 0.03-0.1; N 0.2 0.05-0.2; Sn 0.1 0.05-0.1"),
    _recipe(
        "magnesium alloy",
        "Mg 0.4-1 both; O 0.2-0.7",
        "Al 0.6 0.05-0.3 oxide; Zn 0.4 0.02-0.1; Mn 0.2 0.02-0.06",
    ),
    _recipe(
        "nickel superalloy",
        "Ni 0.4-0.8; Cr 0.1-0.3",
        "Co 0.6 0.05-0.2; Mo 0.5 0.02-0.1; W 0.3 0.02-0.1; Ta 0.2 0.02-0.1; Nb 0.3 0.02-0.1;"
        "Al 0.5 0.03-0.15; Ti 0.5 0.02-0.1; Fe 0.4 0.03-0.3; Hf 0.1 0.02-0.08",
    ),
    _recipe("cobalt alloy", "Co 0.4-0.9; Cr 0.2-0.5", "Mo 0.5 0.03-0.15; W 0.3 0.03-0.15; Ni 0.3 0.03-0.2"),
    _recipe("hard metal", "W 0.3-0.8; C 0.3-0.7; Co 0.1-0.4", "Ti 0.3 0.03-0.2; Ta 0.3 0.03-0.2; Nb 0.1 0.03-0.1"),
    _recipe(
        "magnet",
        "Fe 0.4-0.8; Nd 0.1-0.4",
        "Dy 0.4 0.03-0.15; Pr 0.5 0.05-0.2; B 0.5 0.02-0.1; Co 0.3 0.03-0.1",
    ),
    _recipe("zirconium tube", "Zr 0.4-0.9 both", "Sn 0.4 0.03-0.1; Nb 0.3 0.05-0.2; Fe 0.3 0.02-0.1"),
    _recipe("niobium cavity", "Nb 0.4-0.9 both; O 0.2-0.5", "Ta 0.2 0.05-0.2; F 0.3 0.03-0.15; Ti 0.2 0.03-0.15"),
    _recipe("molybdenum grid", "Mo 0.4-0.9", "Re 0.2 0.05-0.3; K 0.2 0.03-0.2"),
    _recipe("tungsten wire", "W 0.4-0.9", "Th 0.2 0.05-0.2; K 0.3 0.03-0.2; Re 0.2 0.05-0.3"),
    _recipe("tantalum foil", "Ta 0.4-0.9 both", "Nb 0.2 0.03-0.1; W 0.2 0.03-0.1"),
    _recipe(
        "silicon device",
        "Si 0.4-1 both; O 0.1-0.6",
        "P 0.15 0.03-0.1; As 0.2 0.03-0.15; B 0.1 0.03-0.1; N 0.2 0.05-0.4",
    ),
    _recipe("silicide", "Si 0.3-0.7; Ti 0.1-0.5", "N 0.3 0.05-0.3; W 0.3 0.05-0.3; Co 0.2 0.05-0.3"),
    _recipe(
        "gallium arsenide",
        "Ga 0.3-0.7; As 0.3-0.7",
        "Al 0.3 0.1-0.4; In 0.3 0.1-0.4; Au 0.2 0.05-0.3; Ge 0.2 0.05-0.3",
    ),
    _recipe("indium phosphide", "In 0.4-0.9; P 0.3-0.8", "Ga 0.3 0.1-0.3; As 0.3 0.1-0.3; Zn 0.1 0.03-0.1"),
    _recipe("gallium nitride", "Ga 0.3-0.7; N 0.3-0.7", "Al 0.3 0.05-0.3; In 0.2 0.05-0.3; Mg 0.1 0.03-0.1"),
    _recipe("detector crystal", "Cd 0.3-0.8; Te 0.3-0.8", "Zn 0.4 0.05-0.2; Cl 0.2 0.03-0.1; Hg 0.2 0.1-0.3"),
    _recipe("germanium window", "Ge 0.4-0.9 both", "Sb 0.1 0.03-0.1; Se 0.2 0.1-0.4; As 0.2 0.1-0.4"),
    _recipe("nitride coating", "Ti 0.4-0.9; N 0.2-0.7", "Al 0.4 0.1-0.4; Fe 0.2 0.03-0.2; Cr 0.2 0.03-0.2"),
    _recipe("chromium nitride coating", "Cr 0.4-0.9; N 0.2-0.6", "Al 0.2 0.1-0.4; Fe 0.2 0.03-0.2"),
    _recipe("zirconium nitride coating", "Zr 0.4-0.9; N 0.2-0.6", "Ti 0.2 0.05-0.3; Hf 0.2 0.03-0.1"),
    _recipe("carbide coating", "Ti 0.4-0.9; C 0.3-0.8", "W 0.2 0.05-0.2; N 0.3 0.1-0.4"),
    _recipe("hard carbon coating", "C 0.6-1", "W 0.3 0.03-0.2; Si 0.3 0.03-0.2; Cr 0.3 0.03-0.2; Ar 0.3 0.02-0.1"),
    _recipe("boride coating", "Ti 0.3-0.7; B 0.3-0.7", "Zr 0.2 0.1-0.3; N 0.2 0.1-0.3"),
    _recipe(
        "rare-earth film",
        "La 0.3-0.8 oxide; Ce 0.1-0.5 oxide; O 0.3-0.7",
        "Y 0.3 0.1-0.3 oxide; Gd 0.3 0.1-0.3 oxide",
    ),
    _recipe("getter", "Ba 0.4-0.9 oxide; O 0.2-0.6", "Al 0.4 0.1-0.3; Ti 0.3 0.05-0.3; Sr 0.3 0.1-0.3 oxide"),
    _recipe("photocathode", "Sb 0.3-0.7; Cs 0.2-0.6", "K 0.5 0.1-0.4; Na 0.3 0.1-0.4"),
    _recipe(
        "implanted titanium bone screw",
        "Ti 0.4-0.9 oxide; O 0.4-0.9; P 0.1-0.4 oxide; Ca 0.1-0.4",
        "Na 0.3 0.03-0.15",
    ),
    _recipe(
        "implanted silicon",
        "Si 0.4-1; Ar 0.03-0.2",
        "F 0.3 0.05-0.2; In 0.2 0.03-0.2; Xe 0.1 0.03-0.2; Kr 0.05 0.05-0.2",
    ),
    _recipe(
        "soda glass",
        "Si 0.3-0.7 oxide; O 0.5-1; Na 0.03-0.2; Ca 0.03-0.15",
        "Mg 0.4 0.03-0.1 oxide; Al 0.4 0.03-0.1 oxide; K 0.3 0.03-0.15; Sn 0.1 0.03-0.1",
        insulator=True,
    ),
    _recipe(
        "borosilicate glass",
        "Si 0.3-0.7 oxide; O 0.5-1; B 0.05-0.2 oxide",
        "Na 0.6 0.03-0.15; Al 0.6 0.03-0.1 oxide; K 0.3 0.03-0.1; Ba 0.2 0.05-0.2",
        insulator=True,
    ),
    _recipe(
        "lead glass",
        "Si 0.3-0.6 oxide; O 0.5-0.9; Pb 0.1-0.5 oxide",
        "K 0.7 0.05-0.2; Na 0.3 0.03-0.1",
        insulator=True,
    ),
    _recipe(
        "alumina ceramic",
        "Al 0.4-0.8 oxide; O 0.5-1",
        "Si 0.4 0.03-0.15 oxide; Mg 0.3 0.03-0.1 oxide; Ca 0.3 0.03-0.1; Y 0.1 0.03-0.1 oxide",
        insulator=True,
    ),
    _recipe(
        "zirconia ceramic",
        "Zr 0.3-0.6 oxide; O 0.5-1",
        "Y 0.7 0.05-0.2 oxide; Hf 0.2 0.03-0.1 oxide; Al 0.2 0.05-0.2 oxide",
        insulator=True,
    ),
    _recipe(
        "titanate ceramic",
        "Ba 0.2-0.5 oxide; Ti 0.3-0.7 oxide; O 0.5-0.9",
        "Sr 0.4 0.1-0.3 oxide; Zr 0.2 0.05-0.2 oxide",
        insulator=True,
    ),
    _recipe(
        "piezo ceramic",
        "Pb 0.3-0.7 oxide; Zr 0.1-0.3 oxide; Ti 0.1-0.4 oxide; O 0.4-0.8",
        "Nb 0.2 0.03-0.1 oxide; La 0.2 0.03-0.1 oxide",
        insulator=True,
    ),
    _recipe(
        "silicon nitride ceramic",
        "Si 0.4-0.8 oxide; N 0.3-0.8; O 0.1-0.4",
        "Y 0.5 0.03-0.2 oxide; Al 0.4 0.03-0.15 oxide",
        insulator=True,
    ),
    _recipe("boron nitride", "B 0.4-0.9; N 0.3-0.8", "O 0.5 0.05-0.2; Ca 0.2 0.03-0.1", insulator=True),
    _recipe("fluoride window", "Mg 0.2-0.6 oxide; F 0.5-1", "Ca 0.3 0.1-0.4; O 0.5 0.03-0.2", insulator=True),
    _recipe("fluoropolymer", "F 0.5-1; C 0.4-0.8", "O 0.3 0.03-0.1; Si 0.2 0.03-0.1 oxide", insulator=True),
    _recipe(
        "salt crust",
        "Na 0.2-0.5; Cl 0.4-1",
        "K 0.5 0.05-0.3; Ca 0.4 0.05-0.3; Mg 0.3 0.05-0.3 oxide; Br 0.2 0.03-0.1; S 0.3 0.05-0.2 oxide",
        insulator=True,
    ),
    _recipe(
        "phosphate layer",
        "Zn 0.2-0.5 oxide; P 0.2-0.5 oxide; O 0.5-0.9",
        "Fe 0.5 0.05-0.3 oxide; Mn 0.3 0.05-0.2 oxide; Ca 0.3 0.05-0.2",
        insulator=True,
    ),
)

CONTAMINATION: tuple[Maybe, ...] = (
    ("C", 0.90, 0.05, 0.80, "element"),
    ("O", 0.88, 0.05, 0.60, "element"),
    ("S", 0.15, 0.03, 0.25, "element"),
    ("Cl", 0.16, 0.03, 0.30, "element"),
    ("N", 0.10, 0.02, 0.15, "element"),
    ("Na", 0.10, 0.02, 0.12, "element"),
    ("Ca", 0.10, 0.02, 0.15, "element"),
    ("K", 0.08, 0.02, 0.20, "element"),
    ("F", 0.08, 0.03, 0.20, "element"),
    ("P", 0.06, 0.02, 0.15, "oxide"),
    ("Si", 0.10, 0.02, 0.15, "oxide"),
)


def draw_technical(rng: np.random.Generator, *, insulating: bool = False) -> tuple[str, tuple[Constituent, ...]]:
    """Draw a technical sample with what the air, hands and baths leave on it."""
    pool = [recipe for recipe in RECIPES if recipe.insulator or not insulating]
    recipe = pool[rng.integers(len(pool))]
    drawn: dict[str, Constituent] = {}
    for element, low, high, state in recipe.parts:
        drawn[element] = Constituent(element=element, strength=_between(rng, low, high), state=state)
    for element, chance, low, high, state in (*recipe.maybe, *CONTAMINATION):
        if rng.random() < chance and element not in drawn:
            drawn[element] = Constituent(element=element, strength=_between(rng, low, high), state=state)
    if rng.random() < 0.2:  # a trace of something that nobody expects
        element = _any_element(rng)
        if element not in drawn:
            drawn[element] = Constituent(element=element, strength=_between(rng, 0.01, 0.2))
    return recipe.name, tuple(drawn.values())


def draw_random(rng: np.random.Generator) -> tuple[str, tuple[Constituent, ...]]:
    """Draw two to seven elements of any kind, majors to traces; carbon and oxygen are not favoured."""
    count = int(rng.integers(2, 8))
    elements = {_any_element(rng) for _ in range(count)}
    drawn = [
        Constituent(element=element, strength=_between(rng, 0.2, 1.0) if index < 2 else _between(rng, 0.01, 1.0))
        for index, element in enumerate(sorted(elements, key=lambda _: rng.random()))
    ]
    return "random mixture", tuple(drawn)


def _any_element(rng: np.random.Generator) -> str:
    symbols = sorted(published_lines())
    return symbols[rng.integers(len(symbols))]


def _between(rng: np.random.Generator, low: float, high: float) -> float:
    """Draw log-uniformly."""
    return float(np.exp(rng.uniform(np.log(low), np.log(high))))
