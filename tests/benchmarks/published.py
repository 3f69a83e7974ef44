"""The published derivative minima that the forward model is built from; never the project's derived table."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path

FILE = Path(__file__).with_name("published_lines.csv")


@dataclass(frozen=True, kw_only=True)
class PublishedLine:
    """One row of `published_lines.csv`: a derivative minimum as the handbooks give it."""

    element: str
    z: int
    energy_ev: float
    transition: str
    relative_height: float  # depth relative to the element's strongest line
    width_ev: float  # full width at half height without the analyser, see `natural_width_ev`
    valence: bool  # a valence level takes part: chemistry moves and widens it


@cache
def published_lines() -> dict[str, tuple[PublishedLine, ...]]:
    """Return the lines of every element, strongest first."""
    lines: dict[str, list[PublishedLine]] = {}
    with FILE.open(encoding="utf-8", newline="") as handle:
        for row in csv.DictReader(handle):
            line = PublishedLine(
                element=row["symbol"],
                z=int(row["z"]),
                energy_ev=float(row["energy_ev"]),
                transition=row["transition"],
                relative_height=float(row["relative_height"]),
                width_ev=natural_width_ev(int(row["z"]), row["transition"]),
                valence=is_valence(int(row["z"]), row["transition"]),
            )
            lines.setdefault(line.element, []).append(line)
    return {symbol: tuple(sorted(rows, key=lambda row: -row.relative_height)) for symbol, rows in lines.items()}


def is_valence(z: int, transition: str) -> bool:
    """Say whether a valence level takes part, also where the label does not say V (O and F: KLL)."""
    return "V" in transition or z in (8, 9)


_WIDTHS_EV = {
    "KVV": 8.0, "L23VV": 7.0, "L3VV": 6.0, "M45VV": 6.0, "M23VV": 6.0, "N67VV": 7.0, "N7VV": 7.0,
    "KL23L23": 2.4, "KL1L23": 4.0, "L23M23M23": 4.0, "L3M23M23": 5.0, "L3M23M45": 4.5, "L3M23V": 5.5,
    "L3M45M45": 2.5, "L2M45M45": 3.0, "M23M45M45": 4.5, "M5N67N67": 4.0, "N7O45O45": 4.0,
    "N5N67N67": 5.0, "N4N67N67": 5.0, "N45N67N67": 5.0, "M5N45N67": 6.0, "M45N23V": 5.5,
}  # fmt: skip


def natural_width_ev(z: int, transition: str) -> float:
    """Return a rough full width at half height in eV, by class of transition (common practice, no source).

    Core-core-core lines are 1.5 to 4 eV wide, lines with a valence level 5 to 10 eV.
    """
    if z in (8, 9):
        return 6.0
    if transition in ("M5N45N45", "M4N45N45"):
        return 2.2 if z < 57 else 5.0  # multiplets of the open 4f shell
    return _WIDTHS_EV.get(transition, 6.0 if "V" in transition else 4.0)
