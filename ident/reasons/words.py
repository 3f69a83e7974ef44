"""Turns of phrase that several rules share."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ..matching.evidence import LineEvidence


def joined(parts: Sequence[str], *, last: str = "and") -> str:
    """Say a list: "a", "a and b", "a, b and c"."""
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} {last} {parts[-1]}"


def line_named(line: LineEvidence) -> str:
    """Name a line by where it should stand: "418 eV (L3M23V)"."""
    return f"{line.expected_ev:.0f} eV ({line.transition})"


def meeting(line: LineEvidence) -> str:
    """Say how a line met its minimum: "418.0 eV (L3M23V) met at 417.6, 0.3 sd"."""
    found = line.expected_ev if line.found_ev is None else line.found_ev
    off = abs(found - line.expected_ev) / line.sigma_ev if line.sigma_ev > 0 else 0.0
    return f"{line.expected_ev:.1f} eV ({line.transition}) met at {found:.1f}, {off:.1f} sd"


def times(ratio: float) -> str:
    """Say a ratio with two figures: "0.88", "14"."""
    return f"{ratio:.0f}" if ratio >= 10 else f"{ratio:.2g}"


def distinct(lines: Sequence[LineEvidence]) -> list[LineEvidence]:
    """Keep the first (strongest) of the lines that met one and the same minimum."""
    seen: dict[float | None, LineEvidence] = {}
    for line in lines:
        seen.setdefault(line.found_ev, line)
    return list(seen.values())
