"""The table of rivals against published overlaps, and against the lines worked through one by one."""

from __future__ import annotations

import json
import re
import subprocess
import sys
from typing import Any

import pytest

from ident import tables
from ident.lookup import element_card
from ident.names import parse_transition
from ident.physics.widths import natural_width_ev

ELEMENTS = sorted({line.symbol for line in tables.read_lines()})

# Overlaps that analysts know, a and b with the energies that meet. Read: N/Ti (Shew and Huang, Surf. Coat. Technol. 71
# (1995) 66; Dawson and Tzatzov, Surf. Sci. 171 (1986) 239), Al/Au (Surf. Sci. 1983), Al/Ga (Ogiwara and Tanuma, Hyomen
# Kagaku 13 (1992) 606). The rest from memory.
KNOWN = (
    *(("N", 379, "Ti", 387), ("N", 379, "Cd", 382), ("F", 647, "Fe", 651), ("F", 647, "Co", 656)),
    *(("Na", 990, "Zn", 994), ("O", 503, "I", 511), ("O", 483, "Te", 483)),
    *(("B", 179, "Cl", 181), ("B", 179, "Nb", 167), ("B", 179, "W", 179), ("Cl", 181, "Mo", 186)),
    *(("P", 120, "Zr", 116), ("P", 120, "Mo", 120), ("Si", 92, "Pb", 94), ("Si", 92, "Zr", 92)),
    *(("Al", 68, "Au", 69), ("Al", 68, "Ga", 55), ("Al", 68, "Pt", 64), ("C", 272, "Ru", 273)),
    *(("C", 272, "Pd", 279), ("K", 252, "Rh", 256), ("Mn", 589, "Ba", 584)),
    *(("Fe", 598, "Ba", 600), ("Fe", 703, "Pr", 699), ("Co", 775, "Cu", 776), ("Co", 716, "Ni", 716)),
    *(("Ni", 848, "Cu", 849), ("Ni", 783, "Co", 775), ("Fe", 651, "Co", 656), ("Cr", 489, "Te", 491)),
)


@pytest.mark.parametrize(("first", "first_ev", "second", "second_ev"), KNOWN)
def test_a_known_overlap_is_in_the_table(first: str, first_ev: int, second: str, second_ev: int) -> None:
    """Both ways: each is listed as the other's rival. Overlaps with lines under 20 % (O on V 510) are left out."""
    lines = {symbol: element_card(symbol).lines for symbol in (first, second)}
    near = {
        symbol: [line for line in lines[symbol] if abs(line.energy_ev - energy) < 2.5]
        for symbol, energy in ((first, first_ev), (second, second_ev))
    }
    strong = {symbol: [line for line in found if line.relative_height >= 0.2] for symbol, found in near.items()}
    assert all(strong.values())
    for own, other in ((first, second), (second, first)):
        rivals = {rival.element for line in strong[own] for rival in line.rivals}
        assert other in rivals


# What analysts let decide (from memory unless said): rival, element, the element's line that is clear of the rival,
# or None where there is none among strong lines.
@pytest.mark.parametrize(
    ("element", "rival", "energy_ev"),
    [
        ("F", "Fe", 620),
        ("Na", "Zn", 951),
        ("Ti", "N", 418),  # read: Shew and Huang 1995; without 418 nitrogen needs no titanium
        ("Co", "Ni", 656),  # the published minima of nickel are 61, 716, 783 and 848
        ("Ni", "Cu", 716),  # those of copper 60, 776, 849 and 920
        ("Cu", "Ni", 920),
        ("Si", "Pb", 1619),
        ("Fe", "Co", 703),
        ("N", "Ti", None),
        ("B", "Cl", None),
        ("Cl", "B", None),
        ("C", "Ru", None),
        ("P", "Zr", None),
    ],
)
def test_the_line_that_decides(element: str, rival: str, energy_ev: int | None) -> None:
    rows = [row for row in tables.rivals_of(element) if row.rival == rival]
    assert rows
    (decided_by,) = {row.decided_by for row in rows}
    if energy_ev is None:
        assert decided_by == ""
    else:
        card = element_card(element)
        stands = next(line.energy_ev for line in card.lines if line.transition == decided_by)
        assert stands == pytest.approx(energy_ev, abs=1.5), f"{element} beside {rival}: {decided_by} at {stands:.0f}"


def natural_ev(line: tables.Line) -> float:
    name = parse_transition(line.transition)
    return natural_width_ev(line.z, name.vacancy, name.first + name.second)


def reach(own: tables.Line, other: tables.Line) -> tuple[float, float]:
    """Where a rival's line may stand against one's own and be taken for it: worked out here from the definition."""
    (low, high), (other_low, other_high) = (tables.shift_range(x.symbol, x.valence) for x in (own, other))
    squares = [natural_ev(line) ** 2 + (0.005 * line.energy_ev) ** 2 for line in (own, other)]
    recorded = (sum(squares) / 2) ** 0.5
    terms = (own.sigma_ev, other.sigma_ev, (high - low) / 2, (other_high - other_low) / 2, 3.0, 2 * recorded / 2.3548)
    wide = sum(term**2 for term in terms) ** 0.5
    middle = (low + high) / 2 - (other_low + other_high) / 2
    return middle - wide, middle + wide


def within(own: tables.Line, other: tables.Line) -> bool:
    low, high = reach(own, other)
    return low <= other.energy_ev - own.energy_ev <= high


@pytest.mark.parametrize("symbol", ["Ti", "Cl", "Cu", "B", "Au", "Fe", "S", "Yb"])
def test_every_rival_is_there_and_no_other(symbol: str) -> None:
    """The definition in reference/README.md applied line by line, without the arrays of the rebuild."""
    rows = {(row.transition, row.rival) for row in tables.rivals_of(symbol)}
    wanted = set()
    for own in tables.lines_of(symbol):
        if own.relative_height >= 0.2:
            others = (line for line in tables.read_lines() if line.symbol != symbol and line.relative_height >= 0.2)
            wanted |= {(own.transition, line.symbol) for line in others if within(own, line)}
    assert rows == wanted


@pytest.mark.parametrize("symbol", ["Ti", "Cl", "Cu", "F", "Fe", "Pb"])
def test_deciding_lines_are_clear_and_others_are_not(symbol: str) -> None:
    lines = {line.transition: line for line in tables.lines_of(symbol)}
    for row in tables.rivals_of(symbol):
        strong = [line for line in tables.lines_of(row.rival) if line.relative_height >= 0.2]
        clear = [
            line
            for line in lines.values()
            if line.relative_height >= 0.2
            and line.height_kind == "published"
            and not any(within(line, other) for other in strong)
        ]
        assert (row.decided_by == "") == (not clear), row
        if clear:
            assert lines[row.decided_by] in clear
        theirs = {line.transition: line for line in tables.lines_of(row.rival)}
        if row.ruled_out_by:
            own = [line for line in lines.values() if line.relative_height >= 0.2]
            assert theirs[row.ruled_out_by].relative_height >= 0.2
            assert not any(within(theirs[row.ruled_out_by], line) for line in own)


def test_every_strong_line_has_been_looked_at() -> None:
    for symbol in ELEMENTS:
        listed = {row.transition for row in tables.rivals_of(symbol)}
        strong = {line.transition for line in tables.lines_of(symbol) if line.relative_height >= 0.2}
        assert listed <= strong


def element_json(name: str) -> dict[str, Any]:
    words = [sys.executable, "-m", "ident", "element", name, "--format", "json"]
    read: dict[str, Any] = json.loads(subprocess.run(words, capture_output=True, text=True, check=True).stdout)
    return read


def test_an_undecidable_element_says_so() -> None:
    """Boron beside chlorine and chlorine beside boron: no strong line of either stands clear (from memory)."""
    for own, other in (("B", "Cl"), ("Cl", "B")):
        card = element_json(own)
        assert card["decided_by"] is None
        assert other in card["undecided_beside"]
        assert other in card["decision"]
        assert "one scan" in card["decision"]
    assert "2378" in element_json("Cl")["decision"]  # its KLL line, when the scan reaches it (from memory)


def test_a_decidable_element_names_its_line() -> None:
    card = element_json("Ti")
    assert card["decided_by"] == card["deciding"]["transition"] == "L3M23V"
    assert card["undecided_beside"] == []


def test_the_description_names_the_undecided_elements() -> None:
    text = (tables.reference_folder() / "README.md").read_text(encoding="utf-8")
    found = re.search(r"one surface in a hundred bears, these are: ([A-Za-z,\s]+)\.", text)
    assert found
    named = re.split(r",\s+", found[1])
    undecided = [symbol for symbol in ELEMENTS if tables.lines_of(symbol) and element_card(symbol).decided_by is None]
    assert sorted(named) == sorted(undecided)
    # What analysts often cannot determine (from memory).
    assert {"Li", "Be", "B", "Cl", "K", "Ar"} <= set(undecided)
    assert not {"Ti", "Fe", "Ni", "Cu", "Zn", "Cr", "Si", "Na", "F"} & set(undecided)


def test_a_card_loads_nothing_heavy() -> None:
    code = (
        "import sys\nfrom ident.cli import main\n"
        "try:\n    main(['element', 'Ti'])\nexcept SystemExit as end:\n    assert end.code == 0, end.code\n"
        "print('MODULES', *sys.modules)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    shown, _, loaded = done.stdout.partition("MODULES")
    assert "418" in shown
    assert not {"numpy", "scipy", "pandas", "mendeleev", "matplotlib"} & set(loaded.split())
