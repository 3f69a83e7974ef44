"""How strong each element is in each spectrum, on lines that all of them hold."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from ..patterns import all_patterns, tilted

if TYPE_CHECKING:
    from ..identification import Examination
    from ..matching.evidence import ElementEvidence, LineEvidence

STRONG_PART = 0.25  # of the strongest line that all spectra hold, from which a line is compared
MOST_LINES = 4
SHARED_SIGMA = 0.3  # of what others carry of a shared minimum
SHAPE_SIGMA = 0.05  # of a minimum's own depth, from one spectrum to the next
CALLED = 0.5
LEAST_TELLING = 3.0  # times as uncertain as the best line, from which a line says nothing more
NEAR_WIDTHS = 0.6  # within which another's minimum hides a line


@dataclass(frozen=True, kw_only=True)
class Strength:
    """Strength of an element in one spectrum, in units of its ordinate's slope, with its standard deviation."""

    value: float
    sigma: float


@dataclass(frozen=True, eq=False)
class Measured:
    """An examined spectrum, asked for the strengths of elements."""

    examined: Examination

    @cached_property
    def weighed(self) -> dict[str, ElementEvidence]:
        """Evidence by symbol: of the elements of the answer, and of those asked about."""
        evidence = self.examined.evidence
        asked = {item.element: item.weighed for item in evidence.asked if item.weighed is not None}
        return {**asked, **{element.element: element for element in evidence.elements}}

    def probability(self, symbol: str) -> float:
        """Probability of an element, 0 to 1."""
        return self.weighed[symbol].probability if symbol in self.weighed else 0.0

    def place_ev(self, energy_ev: float) -> float:
        """Place of an energy of the tables on this spectrum's axis."""
        scale = self.examined.evidence.scale
        return energy_ev * (1.0 + scale.slope) + scale.offset_ev

    def holds(self, energy_ev: float, width_ev: float) -> bool:
        """Whether a line of the tables would be seen whole in this scan."""
        place = self.place_ev(energy_ev)
        ranges = self.examined.analysis.spectrum.ranges_ev
        return any(low + width_ev <= place <= high - width_ev for low, high in ranges)

    def noise(self, energy_ev: float) -> float:
        """Noise of the depth of an ordinary line there."""
        for part in self.examined.analysis.depth_noise:
            if part.energy_ev[0] <= energy_ev <= part.energy_ev[-1]:
                return float(np.interp(energy_ev, part.energy_ev, part.noise))
        nearest = self.examined.analysis.depth_noise[0]
        return float(np.interp(energy_ev, nearest.energy_ev, nearest.noise))

    def depth_of(self, symbol: str, transition: str, energy_ev: float, width_ev: float) -> Strength | None:
        """Depth of one line of an element; None where another element's line hides it."""
        line = self._line(symbol, transition)
        if line is not None and line.status == "met" and line.found_ev is not None:
            return self._met(line, claimed=self._claimed(symbol, line.found_ev))
        place = self.place_ev(energy_ev)
        noise = self.noise(place)
        near = [m for m in self.examined.analysis.minima if abs(m.energy_ev - place) < NEAR_WIDTHS * width_ev]
        if any(m.depth > 8.0 * noise for m in near):
            return None  # something strong stands there, and it is not known how much of it is this element's
        return Strength(value=0.0, sigma=max([noise, *(m.depth for m in near)]))

    def _line(self, symbol: str, transition: str) -> LineEvidence | None:
        element = self.weighed.get(symbol)
        if element is None:
            return None
        return next((line for line in element.lines if line.transition == transition), None)

    def _claimed(self, symbol: str, found_ev: float) -> bool:
        """Whether the minimum is explained by called elements, and this one is none of them."""
        if self.probability(symbol) >= CALLED:
            return False
        others = [e for e in self.examined.evidence.elements if e.probability >= CALLED]
        return any(line.found_ev == found_ev for e in others for line in e.lines)

    def _met(self, line: LineEvidence, *, claimed: bool) -> Strength:
        minimum = min(self.examined.analysis.minima, key=lambda m: abs(m.energy_ev - (line.found_ev or 0.0)))
        if claimed:  # others explain it, as well as their depths are known
            return Strength(value=0.0, sigma=SHARED_SIGMA * minimum.depth)
        share = 1.0 if line.share is None else line.share
        others = SHARED_SIGMA * (1.0 - share) * minimum.depth
        sigma = math.sqrt((minimum.depth / minimum.significance) ** 2 + others**2 + (SHAPE_SIGMA * minimum.depth) ** 2)
        return Strength(value=share * minimum.depth, sigma=sigma)


def common_lines(symbol: str, spectra: Sequence[Measured]) -> list[tuple[str, float, float, float]]:
    """The strong lines of an element that every spectrum holds: transition, energy, height, width; strongest first."""
    patterns = all_patterns()
    if symbol not in patterns.symbols:
        return []
    row = patterns.symbols.index(symbol)
    heights = tilted(patterns.height[row], patterns.energy_ev[row], 0.0)
    held = []
    for column in np.flatnonzero(patterns.real[row] & patterns.firm[row]):
        energy = float(patterns.energy_ev[row, column])
        width = math.hypot(float(patterns.width_ev[row, column]), 0.006 * energy)
        if all(one.holds(energy, width) for one in spectra):
            held.append((patterns.transitions[row][column], energy, float(heights[column]), width))
    strongest = max((height for _, _, height, _ in held), default=0.0)
    return sorted((line for line in held if line[2] >= STRONG_PART * strongest), key=lambda line: -line[2])[:MOST_LINES]


def strengths(symbol: str, spectra: Sequence[Measured]) -> tuple[tuple[str, ...], list[Strength]] | None:
    """Strength of an element in each spectrum on the same lines, and which lines; None when there is no such line.

    Lines that another element hides in any of the spectra are left out in all of them.
    """
    usable = []
    for transition, energy, height, width in common_lines(symbol, spectra):
        depths = [one.depth_of(symbol, transition, energy, width) for one in spectra]
        if all(depth is not None for depth in depths):
            usable.append((transition, height, [depth for depth in depths if depth is not None]))
    if not usable:
        return None
    usable = _telling(usable)
    norm = sum(height**2 for _, height, _ in usable)
    out = []
    for place in range(len(spectra)):
        parts = [(height, depths[place]) for _, height, depths in usable]
        value = sum(height * depth.value for height, depth in parts) / norm
        sigma = math.sqrt(sum((height * depth.sigma) ** 2 for height, depth in parts)) / norm
        out.append(Strength(value=value, sigma=sigma))
    return tuple(transition for transition, _, _ in usable), out


def _telling(lines: list[tuple[str, float, list[Strength]]]) -> list[tuple[str, float, list[Strength]]]:
    """Lines that are known about as well as the best one, in whichever spectrum they are known least."""
    unsure = [
        max(depth.sigma for depth in depths) / max(height * max(depth.value / height for depth in depths), 1e-300)
        for _, height, depths in lines
    ]
    return [line for line, one in zip(lines, unsure, strict=True) if one <= LEAST_TELLING * min(unsure)]


def called_anywhere(spectra: Iterable[Measured]) -> tuple[str, ...]:
    """Elements that are called in any of the spectra, by atomic number."""
    called = {symbol for one in spectra for symbol in one.examined.answer.called}
    order = all_patterns().symbols
    return tuple(sorted(called, key=order.index))
