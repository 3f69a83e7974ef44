"""When an energy axis cannot be calibrated: which line is not there, and what would work."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from ..errors import InputError
from ..minima import Analysis
from ..names import name_of
from ..spectrum import format_ranges
from .pairing import Pair, Reference, references

REACH_EV = 12.0  # how far off an axis may be for a line to be looked for
EDGE_EV = (4.0, 8.0)  # lower and upper end of a window, where a minimum is not found
# A line of a clean metal is at least so deep, over its relative height, against the deepest minimum: a sharp line
# against those above 100 eV, a low one that is all there is against any.
FEEBLE, LOW_EV = {"sharp": 0.1, "low": 0.3}, 100.0


def refuse_out_of_range(analyses: Mapping[str, Sequence[Analysis]]) -> None:
    """Refuse a metal none of whose lines that a scale may rest on is scanned."""
    for metal, several in analyses.items():
        needed = [r for r in references(metal) if r.row.role != "minor"]
        if not any(_scanned(several, r.minimum_ev, REACH_EV) for r in needed):
            ranges = tuple(r for analysis in several for r in analysis.spectrum.ranges_ev)
            raise InputError(
                f"covers {format_ranges(ranges)}, which has none of the lines of {name_of(metal)} that a scale needs",
                source=several[0].spectrum.name,
                remedy=f"scan {_where(needed)}",
            )


def refuse_without_lines(
    analyses: Mapping[str, Sequence[Analysis]], pairs: Sequence[Pair], offset_ev: float, slope: float
) -> None:
    """Refuse a metal whose sharp lines, or else low ones, are in range and not there."""
    for metal, several in analyses.items():
        for role in ("sharp", "low"):
            needed = [r for r in references(metal) if r.row.role == role]
            met = any(p.reference.metal == metal and p.reference.row.role == role for p in pairs)
            inside = [r for r in needed if _scanned(several, r.minimum_ev * (1.0 + slope) + offset_ev, -1.0)]
            if met:
                break
            if inside or role == "low":
                raise InputError(
                    f"shows no {name_of(metal)}: nothing stands above the noise at {_where(inside or needed)}, on an "
                    "axis up to 10 eV off",
                    source=several[0].spectrum.name,
                    remedy="scan it longer, sputter the metal clean, or leave it out",
                )


def refuse_feeble(analyses: Mapping[str, Sequence[Analysis]], pairs: Sequence[Pair]) -> None:
    """Refuse a metal whose lines are much weaker than what else is there: a neighbour's structure, or dirt."""
    for metal, several in analyses.items():
        own = [p for p in pairs if p.reference.metal == metal]
        telling = [p for p in own if p.reference.row.role == "sharp"] or [
            p for p in own if p.reference.row.role == "low"
        ]
        if not any(_leads(pair, analysis) for pair in telling for analysis in several):
            best = max(telling, key=lambda pair: pair.minimum.depth)
            raise InputError(
                f"shows hardly any {name_of(metal)}: the minimum at {best.minimum.energy_ev:.0f} eV is far weaker than "
                "those of something else",
                source=several[0].spectrum.name,
                remedy="give a spectrum of the clean metal",
            )


def _leads(pair: Pair, analysis: Analysis) -> bool:
    """Whether a line is about as deep as it is when nothing but its metal is there."""
    if pair.minimum not in analysis.minima:
        return False
    row = pair.reference.row
    rivals = [m.depth for m in analysis.minima if row.role == "low" or m.energy_ev > LOW_EV]
    return pair.minimum.depth >= FEEBLE[row.role] * row.relative_height * max(rivals)


def _scanned(several: Sequence[Analysis], energy_ev: float, reach_ev: float) -> bool:
    """Whether a minimum there is in a window: within reach of it, or clear of its ends when the reach is negative."""
    low, high = (-EDGE_EV[0], EDGE_EV[1]) if reach_ev < 0 else (reach_ev, -reach_ev)
    return any(
        start - low <= energy_ev <= end - high for analysis in several for start, end in analysis.spectrum.ranges_ev
    )


def _where(lines: Sequence[Reference]) -> str:
    """Lines and their energies in words."""
    return " and ".join(f"{r.row.transition} ({r.minimum_ev:.0f} eV)" for r in lines)
