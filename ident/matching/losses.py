"""Losses that lines and the beam bring with them: plasmons, and the elastic peak."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from .. import tables
from ..physics.widths import plasmon_losses_ev
from ..spectrum import FloatArray

if TYPE_CHECKING:
    from .options import Options
    from .problem import Problem

# Free-electron-like: elsewhere losses are broad (common practice, no source).
SHARP_PLASMONS = ("Be", "Na", "Mg", "Al", "Si", "K")
MOST_PLASMONS, PLASMON_PART, PLASMON_SIGMA_EV, PLASMON_PRICE = 3, 0.5, 1.5, 1.5
ELASTIC_REACH_EV, ELASTIC_SHARE = 12.0, 0.006  # about the beam energy, which supplies state to half a per cent
ELASTIC_PRICE = 0.2


def plasmons_of(symbol: str) -> tuple[float, float] | None:
    """Bulk and surface loss of an element with sharp plasmons, eV; None for the others."""
    if symbol not in SHARP_PLASMONS:
        return None
    row = tables.materials()[symbol]
    return plasmon_losses_ev(row.valence_electrons, row.density_g_cm3, row.molar_mass, row.gap_ev)


def plasmon_cost(problem: Problem, options: Options, member: int) -> FloatArray:
    """What each minimum costs as a plasmon loss of the member's lines, (f,); infinite where it is none."""
    out = np.full(problem.energy_ev.size, np.inf)
    losses = plasmons_of(problem.patterns.symbols[int(options.element[member])])
    if losses is None:
        return out
    for line in np.unique(options.met[member][options.met[member] >= 0]):
        _, away = nearest_loss(problem.energy_ev[line] - problem.energy_ev, losses)
        fits = (np.abs(away) < 3.0 * PLASMON_SIGMA_EV) & (problem.depth < PLASMON_PART * problem.depth[line])
        out = np.where(fits, np.minimum(out, PLASMON_PRICE + 0.5 * (away / PLASMON_SIGMA_EV) ** 2), out)
    return out


def nearest_loss(below_ev: FloatArray, losses: tuple[float, float]) -> tuple[NDArray[np.int64], FloatArray]:
    """Which loss is nearest (0 for the surface plasmon, 1 to 3 for bulk ones) and how far it is away, eV."""
    bulk, surface = losses
    places = np.array([surface, *(bulk * (n + 1) for n in range(MOST_PLASMONS))])
    away = below_ev[..., None] - places
    best = np.argmin(np.abs(away), axis=-1)
    return best, np.take_along_axis(away, best[..., None], axis=-1)[..., 0]


def elastic_price(energy_ev: FloatArray, price: FloatArray, beam_kev: float | None) -> FloatArray:
    """Prices with those of minima at the elastic peak and above it taken away: no element is needed there."""
    if beam_kev is None:
        return price
    beam = 1000.0 * beam_kev
    near = energy_ev > beam - ELASTIC_REACH_EV - ELASTIC_SHARE * beam
    return np.where(near, np.minimum(price, ELASTIC_PRICE), price)
