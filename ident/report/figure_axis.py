"""How energies and depths become places on paper: gaps between windows made short, weak parts magnified."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from ..spectrum import FloatArray

if TYPE_CHECKING:
    from ..minima import Analysis, Minimum

GAP_PART = 0.03  # of all that was scanned: how wide a gap between windows is drawn
GAINS = (100.0, 50.0, 20.0, 10.0, 5.0, 3.0)
WEAK = 0.22  # part of the deepest minimum below which a stretch is magnified
FILLED = 0.75  # how deep its deepest minimum may then be
NOISE_PART = 0.05  # noise of a channel may grow to this part of the deepest minimum
LEAST_STRETCH = 0.07  # part of the axis; narrower stretches are not magnified by themselves
MOST_STRETCHES = 3  # in one window


@dataclass(frozen=True, kw_only=True)
class Stretch:
    """A stretch of the differential spectrum drawn at one gain."""

    low_ev: float
    high_ev: float
    gain: float
    window: int


def merged(ranges_ev: Sequence[tuple[float, float]]) -> list[tuple[float, float]]:
    """Join ranges that overlap or touch."""
    out: list[tuple[float, float]] = []
    for low, high in sorted(ranges_ev):
        if out and low <= out[-1][1]:
            out[-1] = (out[-1][0], max(high, out[-1][1]))
        else:
            out.append((low, high))
    return out


def place_knots(ranges_ev: Sequence[tuple[float, float]]) -> tuple[FloatArray, FloatArray]:
    """Energies (k,) and where on the axis they stand (k,): scanned ranges to scale, gaps short."""
    ranges = merged(ranges_ev)
    gap = GAP_PART * sum(high - low for low, high in ranges)
    energies, places = [ranges[0][0]], [0.0]
    for at, (low, high) in enumerate(ranges):
        if at:
            energies.append(low)
            places.append(places[-1] + min(gap, low - ranges[at - 1][1]))
        energies.append(high)
        places.append(places[-1] + high - low)
    return np.array(energies), np.array(places)


def transforms(
    ranges_ev: Sequence[tuple[float, float]],
) -> tuple[Callable[[FloatArray], FloatArray], Callable[[FloatArray], FloatArray]]:
    """Energy to place and back; straight on beyond the ends."""
    energies, places = place_knots(ranges_ev)
    far = 1e4
    energies = np.concatenate([[energies[0] - far], energies, [energies[-1] + far]])
    places = np.concatenate([[places[0] - far], places, [places[-1] + far]])

    def forward(energy_ev: FloatArray) -> FloatArray:
        return np.asarray(np.interp(energy_ev, energies, places))

    def back(place: FloatArray) -> FloatArray:
        return np.asarray(np.interp(place, places, energies))

    return forward, back


def ticks_of(ranges_ev: Sequence[tuple[float, float]], about: int = 12) -> list[float]:
    """Round energies for the axis, inside the ranges only."""
    ranges = merged(ranges_ev)
    total = sum(high - low for low, high in ranges)
    step = next((s for s in (5, 10, 20, 50, 100, 200, 500) if total / s <= about), 1000)
    return [float(e) for low, high in ranges for e in np.arange(np.ceil(low / step) * step, high + 1e-6, step)]


def stretches_of(analysis: Analysis) -> tuple[Stretch, ...]:
    """Choose what is magnified, so that weak minima are seen beside strong ones."""
    deepest = max((m.depth for m in analysis.minima), default=0.0)
    whole = sum(d.energy_ev[-1] - d.energy_ev[0] for d in analysis.differentials)
    out: list[Stretch] = []
    for number, differential in enumerate(analysis.differentials):
        minima = [m for m in analysis.minima if m.window == number]
        noise = float(np.median(differential.sigma)) * differential.filter_gain(np.ones(1))
        cuts = _cuts(minima, deepest, LEAST_STRETCH * whole, float(differential.energy_ev[-1]))
        edges = [float(differential.energy_ev[0]), *cuts, float(differential.energy_ev[-1])]
        for low, high in pairwise(edges):
            own = max((m.depth for m in minima if low <= m.energy_ev <= high), default=0.0)
            out.append(Stretch(low_ev=low, high_ev=high, gain=_gain(own, deepest, noise), window=number))
    return tuple(_joined(out))


def _cuts(minima: Sequence[Minimum], deepest: float, least_ev: float, top_ev: float) -> list[float]:
    """Energies above which all minima are much weaker than those below."""
    cuts: list[float] = []
    limit = WEAK * deepest
    for at in range(1, len(minima)):
        rest = max(m.depth for m in minima[at:])
        cut = 0.5 * (minima[at - 1].energy_ev + minima[at].energy_ev)
        apart = minima[at].energy_ev - minima[at - 1].energy_ev > 3.0 * minima[at].width_ev
        if rest <= limit and apart and top_ev - cut >= least_ev and len(cuts) < MOST_STRETCHES - 1:
            cuts.append(cut)
            limit = WEAK * rest
    return cuts


def _gain(own: float, deepest: float, noise: float) -> float:
    if own <= 0.0:
        return 1.0
    for gain in GAINS:
        if gain * own <= FILLED * deepest and gain * noise <= NOISE_PART * deepest:
            return gain
    return 1.0


def _joined(stretches: list[Stretch]) -> list[Stretch]:
    """Join neighbours of one window that have one gain after all."""
    out: list[Stretch] = []
    for stretch in stretches:
        last = out[-1] if out else None
        if last and last.window == stretch.window and last.gain == stretch.gain:
            out[-1] = replace(last, high_ev=stretch.high_ev)
        else:
            out.append(stretch)
    return out
