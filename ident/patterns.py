"""What an element looks like: its lines on an axis, their depths under a tilt, padded to arrays."""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from . import tables
from .physics.widths import natural_width_ev
from .spectrum import FloatArray

IntArray = NDArray[np.int64]
TILT_PIVOT_EV = 400.0
FIRM_HEIGHT = 0.3  # where an element has no published line, its derived lines this strong stand in for them


@dataclass(frozen=True, kw_only=True, eq=False)
class Patterns:
    """Lines of all elements as padded arrays (elements, lines); `real` says which places hold a line."""

    symbols: tuple[str, ...]
    z: IntArray
    transitions: tuple[tuple[str, ...], ...]
    energy_ev: FloatArray
    sigma_ev: FloatArray
    height: FloatArray
    height_log_sigma: FloatArray
    valence: NDArray[np.bool_]
    real: NDArray[np.bool_]
    firm: NDArray[np.bool_]  # published, or the best there is for its element
    shift_low_ev: FloatArray  # (elements, lines): how far down and up chemistry may move the line
    shift_high_ev: FloatArray
    prior_log_odds: FloatArray  # (elements,) of being on a technical surface
    width_ev: FloatArray  # (elements, lines): natural width
    state_shift_ev: FloatArray  # (elements, 2, states): shifts of known states, core lines then valence lines
    state_sigma_ev: FloatArray  # their standard deviations; infinite where there is no state
    state_partner: IntArray  # which element the state is with (index), -1 for none or its own


@tables.cached
def all_patterns() -> Patterns:
    """The patterns of every element in the table of lines."""
    common = tables.commonness()
    grouped: dict[str, list[tables.Line]] = {}
    for line in tables.read_lines():
        grouped.setdefault(line.symbol, []).append(line)
    symbols = tuple(sorted(grouped, key=lambda symbol: grouped[symbol][0].z))
    most = max(len(lines) for lines in grouped.values())
    shape = (len(symbols), most)
    arrays = {name: np.zeros(shape) for name in ("energy", "sigma", "height", "log_sigma", "low", "high", "width")}
    arrays["sigma"][:] = arrays["log_sigma"][:] = 1.0
    valence, real, firm = (np.zeros(shape, dtype=bool) for _ in range(3))
    names = []
    for row, symbol in enumerate(symbols):
        lines = sorted(grouped[symbol], key=lambda line: -line.relative_height)
        published = any(line.energy_kind == "published" for line in lines)
        names.append(tuple(line.transition for line in lines))
        for column, line in enumerate(lines):
            place = (row, column)
            arrays["energy"][place], arrays["sigma"][place] = line.energy_ev, line.sigma_ev
            arrays["height"][place], arrays["log_sigma"][place] = line.relative_height, line.height_log_sigma
            valence[place], real[place] = bool(line.valence), True
            firm[place] = line.energy_kind == "published" or (not published and line.relative_height >= FIRM_HEIGHT)
            arrays["width"][place] = natural_width_ev(line.z, *_split(line.transition))
            arrays["low"][place], arrays["high"][place] = tables.shift_range(symbol, bool(line.valence))
    probability = np.clip(np.array([common[symbol] for symbol in symbols]), 1e-5, 1 - 1e-5)
    state_shift, state_sigma, state_partner = _states(symbols)
    return Patterns(
        symbols=symbols,
        z=np.array([grouped[symbol][0].z for symbol in symbols]),
        transitions=tuple(names),
        energy_ev=arrays["energy"],
        sigma_ev=arrays["sigma"],
        height=arrays["height"],
        height_log_sigma=arrays["log_sigma"],
        valence=valence,
        real=real,
        firm=firm,
        shift_low_ev=arrays["low"],
        shift_high_ev=arrays["high"],
        width_ev=arrays["width"],
        prior_log_odds=np.log(probability / (1 - probability)),
        state_shift_ev=state_shift,
        state_sigma_ev=state_sigma,
        state_partner=state_partner,
    )


def _split(transition: str) -> tuple[str, str]:
    """Vacancy and final levels of a transition's label."""
    match = re.match(r"[KLMNOP]\d*", transition)
    end = match.end() if match else 1
    return transition[:end], transition[end:]


def _states(symbols: tuple[str, ...]) -> tuple[FloatArray, FloatArray, IntArray]:
    """Shifts of the tabulated states, padded, and their partners; the state that a line's energy refers to first."""
    rows: dict[tuple[int, int], list[tuple[float, float, int]]] = {}
    place = {symbol: index for index, symbol in enumerate(symbols)}
    for index, symbol in enumerate(symbols):
        for row in tables.chemical_shifts(symbol):
            partner = place.get(row.partner, -1)
            rows.setdefault((index, int(row.valence)), []).append((row.shift_ev, row.sigma_ev, partner))
    most = 1 + max((len(states) for states in rows.values()), default=0)
    shift = np.zeros((len(symbols), 2, most))
    sigma = np.full((len(symbols), 2, most), np.inf)
    partner_of = np.full((len(symbols), 2, most), -1)
    for (index, valence), states in rows.items():
        for column, (shift_ev, sigma_ev, partner) in enumerate(states, start=1):
            at = (index, valence, column)
            shift[at], sigma[at], partner_of[at] = shift_ev, sigma_ev, partner
    return shift, sigma, partner_of


def tilted(height: FloatArray, energy_ev: FloatArray, tilt: float) -> FloatArray:
    """Heights under a tilt of all depths together: transmission, beam energy, a film on top."""
    return height * (np.maximum(energy_ev, 15.0) / TILT_PIVOT_EV) ** tilt
