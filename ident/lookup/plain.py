"""Answers as plain data for JSON."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import asdict

from .. import tables
from ..physics.scales import EnergyScale
from .at import Candidate
from .card import ElementCard
from .energies import HANDBOOK


def at_answer(energy_ev: float, candidates: Sequence[Candidate], *, scale: EnergyScale = HANDBOOK) -> dict[str, object]:
    """Give the answer to `ident at` as plain data for JSON."""
    return {
        "energy_ev": energy_ev,
        "reference": scale.reference,
        "kind": scale.kind,
        "scale": _plain(scale),
        "edition": tables.edition(),
        "own_tables": tables.own_tables_told(),
        "candidates": [_plain(candidate) for candidate in candidates],
    }


def card_answer(card: ElementCard) -> dict[str, object]:
    """Give the answer to `ident element` as plain data for JSON."""
    return {**_plain(card), "edition": tables.edition(), "own_tables": tables.own_tables_told()}


def _plain(record: Candidate | ElementCard | EnergyScale) -> dict[str, object]:
    return asdict(record, dict_factory=_rounded)


def _rounded(pairs: list[tuple[str, object]]) -> dict[str, object]:
    """Keep six digits; no more are known."""
    return {key: float(f"{value:.6g}") if isinstance(value, float) else value for key, value in pairs}
