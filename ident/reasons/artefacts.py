"""What minima are that are no lines of elements, in words."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ..matching.evidence import ArtefactEvidence

SHAPE_EV = 8.0  # nearer to a line than most losses: the line itself, split or shouldered
PLASMONS = ("surface plasmon", "plasmon", "twice the plasmon", "three times the plasmon")


def explain_artefact(artefact: ArtefactEvidence) -> str:
    """Say what a minimum is likely to be."""
    if artefact.kind == "elastic peak":
        return f"elastic peak of the beam ({artefact.expected_ev:.0f} eV)"
    if artefact.kind == "above the beam":
        return f"above the beam energy ({artefact.expected_ev:.0f} eV), where no electron of the sample can be"
    if artefact.kind == "ionisation loss":
        return f"ionisation loss of {artefact.element} {artefact.level}: it follows the beam energy, unlike a line"
    if artefact.kind == "secondaries":
        return "edge of the secondary electrons"
    line = f"{artefact.element} {artefact.transition} at {artefact.of_ev:.0f} eV"
    away = abs(artefact.away_ev or 0.0)
    if artefact.kind == "plasmon loss":
        return f"{PLASMONS[artefact.order]} loss of {line} ({away:.1f} eV below)"
    if artefact.kind == "loss tail" and away < SHAPE_EV:
        return f"likely the shape of {line} ({away:.0f} eV below)"
    if artefact.kind == "loss tail":
        return f"likely a loss of {line} ({away:.0f} eV below)"
    return f"likely a satellite of {line} ({away:.0f} eV above)"
