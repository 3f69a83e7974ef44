"""Residues whose elements are the ones that differ: hints, that elements alone cannot prove."""

from __future__ import annotations

from collections.abc import Collection

from .. import tables
from ..reasons.words import joined
from .answer import Hint

MOST_HINTS = 6
HELP_WORTH, CONTRARY_WORTH = 0.5, 0.6


def find_hints(new: Collection[str], present: Collection[str], untested: Collection[str]) -> tuple[Hint, ...]:
    """Residues that the elements which are new or enriched would make, the best fitting first.

    Parameters
    ----------
    new : collection of str
        Elements only on the suspect spot, or enriched there.
    present : collection of str
        All elements called on it.
    untested : collection of str
        Elements that could not be compared.
    """
    scored = []
    for row in tables.residues():
        needs, helps, against = row.needs.split(), row.helps.split(), row.against.split()
        if not set(needs) <= set(new) or set(against) & set(new):
            continue
        helping = [symbol for symbol in helps if symbol in new]
        contrary = [symbol for symbol in against if symbol in present]
        score = len(needs) + HELP_WORTH * len(helping) - CONTRARY_WORTH * len(contrary)
        scored.append((-score, row.pattern, _hint(row, needs + helping, contrary, untested)))
    return tuple(hint for _, _, hint in sorted(scored, key=lambda item: item[:2])[:MOST_HINTS])


def _hint(row: tables.Residue, speaking: list[str], contrary: list[str], untested: Collection[str]) -> Hint:
    parts = [f"{joined(speaking)} would fit {row.text}"]
    if contrary:
        parts.append(f"{joined(contrary)}, which {'is' if len(contrary) == 1 else 'are'} there, would not")
    open_ones = [symbol for symbol in row.helps.split() if symbol in untested]
    if open_ones:
        parts.append(f"{joined(open_ones)} could not be tested")
    parts.append(f"elements alone cannot prove it; {row.test} could")
    return Hint(pattern=row.pattern, text="; ".join(parts), elements=tuple(speaking), test=row.test, source=row.source)
