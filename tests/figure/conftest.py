"""Examinations to draw: real files, and a crowd of labels that no real answer would have."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from pathlib import Path

import numpy as np
import pytest

from ident.identification import ArtefactNote, Assignment, Examination, LineNote, Unexplained, examine, verdict_of
from ident.readers import read_spectrum

ROOT = Path(__file__).resolve().parents[2]
DEMO = ROOT / "demo_spectra"
PLATINUM = ROOT / "tests" / "data" / "pt111_derivative.vms"
NAMES = ("slip_ring_dead.csv", "bond_pad_lifted.txt", "bracket_stain.csv", "connector_pin_derivative.txt",
         "terminal_windows.csv", "solder_short_scan.csv", "feedthrough_bead.vms", "pt111_derivative.vms")  # fmt: skip


@cache
def examined(name: str) -> Examination:
    """Examine one of the demo files, or the measured platinum."""
    return examine(read_spectrum(PLATINUM if name == PLATINUM.name else DEMO / name))


def invented(symbol: str, probability: float, energies: list[float], share: float = 1.0) -> Assignment:
    """An element with a line at each energy, weaker and weaker; the transitions are only there to be long."""
    lines = tuple(
        LineNote(
            transition=f"M{1 + at % 5}N23N45", expected_ev=energy, sigma_ev=1.0, found_ev=energy, share=share,
            status="met", relative_height=1.0 / (1 + at),
        )
        for at, energy in enumerate(energies)
    )  # fmt: skip
    return Assignment(
        element=symbol, z=40, probability=probability, verdict=verdict_of(probability), lines=lines, state=None,
        reasons=(), rivals=(),
    )  # fmt: skip


@pytest.fixture(scope="session")
def crowd() -> Examination:
    """A hundred and twenty minima claimed, many within a volt or two of each other: more than there is room for."""
    base = examined("bracket_stain.csv")
    rng = np.random.default_rng(11)
    bunched = np.concatenate([rng.normal(centre, 6.0, 22) for centre in (40.0, 300.0, 310.0, 990.0)])
    energies = np.sort(np.clip(np.concatenate([bunched, rng.uniform(31.0, 999.0, 32)]), 31.0, 999.0))
    parts = [[float(e) for e in part] for part in np.array_split(rng.permutation(energies), 12)]
    symbols = ("Zr", "Nb", "Mo", "Ru", "Rh", "Pd", "Ag", "Cd", "In", "Sn", "Sb", "Te")
    chances = np.linspace(0.99, 0.4, len(symbols))
    assignments = [invented(s, float(c), part) for s, c, part in zip(symbols, chances, parts, strict=True)]
    assignments.append(invented("Y", 0.97, parts[0][:4], share=0.4))
    answer = replace(
        base.answer,
        assignments=tuple(assignments),
        unexplained=tuple(Unexplained(energy_ev=e, significance=9.0, candidates=()) for e in (305.5, 640.0)),
        artefacts=(ArtefactNote(energy_ev=700.0, what="spike of one channel", kind="spike"),),
    )
    return replace(base, answer=answer)
