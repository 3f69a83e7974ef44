"""Energies of lines as the user states them."""

from __future__ import annotations

import math
from functools import lru_cache

from .. import tables
from ..names import parse_transition
from ..physics.scales import EnergyScale, conversion_sigma_ev, stated_from_absolute
from ..physics.widths import natural_width_ev

HANDBOOK = EnergyScale()  # derivative minima on the handbooks' scale, the ones analysts know


@lru_cache(maxsize=4096)
def natural_ev(z: int, transition: str) -> float:
    """Natural width of a line, eV."""
    name = parse_transition(transition)
    return natural_width_ev(z, name.vacancy, name.first + name.second)


@lru_cache(maxsize=8192)
def _stated(energy_ev: float, natural: float, scale: EnergyScale) -> float:
    return float(stated_from_absolute(energy_ev, natural, scale))


def stated_ev(line: tables.Line, scale: EnergyScale = HANDBOOK) -> float:
    """Energy of a line, eV, as read on a scale."""
    return _stated(line.energy_ev, natural_ev(line.z, line.transition) if scale.needs_width else 0.0, scale)


def stated_sigma_ev(line: tables.Line, scale: EnergyScale) -> float:
    """Standard deviation of that energy, eV: the line's own and the conversion's, without the axis."""
    return math.hypot(line.sigma_ev, conversion_sigma_ev(line.energy_ev, scale))
