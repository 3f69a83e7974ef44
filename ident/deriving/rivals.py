"""Which lines of two elements can be taken for one another, and which line tells the elements apart."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..names import parse_transition
from ..physics.levels import FWHM_PER_SIGMA, RESOLUTION
from ..physics.widths import natural_width_ev
from ..tables import STRONG_HEIGHT, shift_range
from .lines import Weighted, weighted_lines
from .writing import Cells, number

AXIS_SIGMA_EV = 3.0  # how far axes of real instruments stand from the tables (common practice, no source)
LOW_EV, LOW_WORTH = 110.0, 0.25  # below, nearly every heavy element has a line: such a line decides only at need
WEAK_HEIGHT = 0.05  # from here a line may help to decide in a scan with little noise

Matrix = NDArray[np.bool_]
Array = NDArray[np.floating[Any]]


@dataclass(frozen=True, kw_only=True, eq=False)
class Lines:
    """The lines of all elements in one row, strongest first within an element."""

    symbols: tuple[str, ...]
    z: tuple[int, ...]
    labels: tuple[str, ...]
    energy_ev: Array
    height: Array
    worth: Array  # of the line as the one that decides; 0 where its height is known by calculation alone
    centre_ev: Array  # of the range in which chemistry moves the line
    spread_sq: Array  # its part of the square of the reach


def rival_rows(elements: list[tuple[int, str]]) -> list[Cells]:
    """One row for each strong line of an element and each other element with a strong line within reach.

    Reach in eV is the square root of the sum of squares of: the standard deviations of both energies, half the range
    of both chemical shifts, 3 eV for the axis, and two standard deviations of a recorded line at 0.5 % resolution
    (root mean square of the two lines), within which two differentiated lines are one. It is centred where the
    middles of the shift ranges meet.
    Lines whose height is calculated can hide others, but decide only for elements that have no published line.
    """
    lines = _gathered(elements)
    reach = np.sqrt(lines.spread_sq[:, None] + lines.spread_sq[None, :])
    away = lines.energy_ev[None, :] - lines.energy_ev[:, None]
    off = np.abs(away - (lines.centre_ev[:, None] - lines.centre_ev[None, :]))
    close = off <= reach
    owner = np.array(lines.symbols)
    members = {symbol: np.flatnonzero(owner == symbol) for _, symbol in elements}
    strong = _deciders(lines, close, members, STRONG_HEIGHT, 2.0)
    weak = _deciders(lines, close, members, WEAK_HEIGHT, STRONG_HEIGHT)
    nearness = lines.height[None, :] * np.exp(-0.5 * (off / reach) ** 2)
    rows: list[Cells] = []
    for i in np.flatnonzero(lines.height >= STRONG_HEIGHT):
        own = lines.symbols[i]
        for _, other in elements:
            near = [j for j in members[other] if close[i, j] and lines.height[j] >= STRONG_HEIGHT]
            if other == own or not near:
                continue
            j = max(near, key=lambda place: float(nearness[i, place]))
            rows.append(
                [own, str(lines.z[i]), lines.labels[i], other, lines.labels[j], number(away[i, j], 1),
                 number(reach[i, j], 1), strong[own, other], weak[own, other], strong[other, own],
                 "calculated", "computed"]
            )  # fmt: skip
    return rows


def _gathered(elements: list[tuple[int, str]]) -> Lines:
    every = [(z, symbol, line) for z, symbol in elements for line in weighted_lines(z, symbol)]
    kept = [item for item in every if round(item[2].height, 3) >= WEAK_HEIGHT]
    ranges = np.array([shift_range(symbol, line.transition.valence) for _, symbol, line in kept])
    energy = np.array([round(line.transition.energy_ev, 1) for *_, line in kept])
    sigma = np.array([round(line.transition.sigma_ev, 1) for *_, line in kept])
    half = 0.5 * (ranges[:, 1] - ranges[:, 0])
    published = {symbol for _, symbol, line in kept if line.kind == "published"}
    firm = np.array([line.kind == "published" or symbol not in published for _, symbol, line in kept])
    height = np.array([round(line.height, 3) for *_, line in kept])
    widths = np.hypot([_natural_ev(z, line) for z, _, line in kept], RESOLUTION * energy)
    return Lines(
        symbols=tuple(symbol for _, symbol, _ in kept),
        z=tuple(z for z, *_ in kept),
        labels=tuple(line.transition.label for *_, line in kept),
        energy_ev=energy,
        height=height,
        worth=height * firm * np.where(energy < LOW_EV, LOW_WORTH, 1.0),
        centre_ev=ranges.mean(axis=1),
        spread_sq=sigma**2 + half**2 + 0.5 * (AXIS_SIGMA_EV**2 + (2.0 * widths / FWHM_PER_SIGMA) ** 2),
    )


def _natural_ev(z: int, line: Weighted) -> float:
    name = parse_transition(line.transition.label)
    return natural_width_ev(z, name.vacancy, name.first + name.second)


def _deciders(
    lines: Lines, close: Matrix, members: dict[str, NDArray[np.int64]], least: float, most: float
) -> dict[tuple[str, str], str]:
    """For each pair of elements the best line of the first, from `least` to `most`, clear of the second's."""
    out: dict[tuple[str, str], str] = {}
    covers = {symbol: [j for j in places if lines.height[j] >= least] for symbol, places in members.items()}
    for own, places in members.items():
        offered = [i for i in places if least <= lines.height[i] < most and lines.worth[i] > 0]
        offered.sort(key=lambda i: -float(lines.worth[i]))
        for other, theirs in covers.items():
            clear = [i for i in offered if not close[i, theirs].any()]
            out[own, other] = lines.labels[clear[0]] if clear else ""
    return out
