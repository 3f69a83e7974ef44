"""What the spectrum shows, arranged for looking at one energy and one element at a time."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from .. import tables
from ..errors import SettingError
from ..lookup import candidates_at
from ..physics.levels import handbook_from_fermi

if TYPE_CHECKING:
    from ..identification import Examination
    from ..matching.evidence import AskedEvidence, ElementEvidence, LineEvidence
    from ..minima import Minimum

LEAST_REACH_EV = 4.0
# A label may stand at the maximum of the direct line, which is about 0.42 of the width below the minimum.
REACH_BELOW, REACH_ABOVE = 0.6, 0.3  # in widths
WORTH = 0.05  # relative height from which a line can bear a label
AXIS_SLACK_EV = 5.0
EDGE_EV = 3.0
LIKELY, POSSIBLE = 0.5, 0.05
MAIN_SHARE, SOME_SHARE = 0.25, 0.1
LOSS_EV = (3.0, 30.0)  # how far below a strong line energy losses leave their mark
LOSS_LEAST_DEPTH = 3.0  # times as deep as what it leaves
MOST_BETTER = 3
LOOKUP_WEIGHT = 0.1


@dataclass(frozen=True, kw_only=True)
class Claim:
    """An element that explains a part of a minimum."""

    element: str
    probability: float
    line: LineEvidence

    @property
    def share(self) -> float:
        """Part of the minimum's depth, 0 to 1."""
        return self.line.share or 0.0


@dataclass(frozen=True, eq=False)
class Scene:
    """An examined spectrum."""

    examined: Examination

    @cached_property
    def weighed(self) -> dict[str, ElementEvidence]:
        """Evidence by symbol: of all elements of the answer, and of those that the labels name."""
        evidence = self.examined.evidence
        asked = {item.element: item.weighed for item in evidence.asked if item.weighed is not None}
        return {**asked, **{element.element: element for element in evidence.elements}}

    @cached_property
    def asked(self) -> dict[str, AskedEvidence]:
        """What can be said of each element that the labels name."""
        return {item.element: item for item in self.examined.evidence.asked}

    def probability(self, symbol: str) -> float:
        """Probability of an element, 0 to 1."""
        if symbol in self.weighed:
            return self.weighed[symbol].probability
        return self.asked[symbol].probability if symbol in self.asked else 0.0

    def in_range(self, energy_ev: float) -> bool:
        """Whether an energy was scanned, or lies at the edge of what was."""
        ranges = self.examined.analysis.spectrum.ranges_ev
        return any(low - EDGE_EV <= energy_ev <= high + EDGE_EV for low, high in ranges)

    def on_axis(self, energy_ev: float) -> float:
        """Place of an energy of the tables on the spectrum's axis, eV."""
        scale = self.examined.evidence.scale
        return energy_ev * (1.0 + scale.slope) + scale.offset_ev

    def minimum_at(self, energy_ev: float, symbol: str = "") -> Minimum | None:
        """The minimum that a label at an energy means, or None: one that its element explains, else the nearest."""
        near = [m for m in self.examined.analysis.minima if self._reaches(energy_ev - m.energy_ev, m.width_ev)]
        return min(near, key=lambda m: (not self._is_of(m, symbol), abs(energy_ev - m.energy_ev)), default=None)

    def _is_of(self, minimum: Minimum, symbol: str) -> bool:
        claims = (claim for claim in self.claims_on(minimum) if claim.element == symbol)
        return any(claim.probability >= LIKELY and claim.share >= MAIN_SHARE for claim in claims)

    @staticmethod
    def _reaches(away_ev: float, width_ev: float) -> bool:
        below, above = max(LEAST_REACH_EV, REACH_BELOW * width_ev), max(LEAST_REACH_EV, REACH_ABOVE * width_ev)
        return -below <= away_ev <= above

    @cached_property
    def claims(self) -> tuple[Claim, ...]:
        """Every line of a possible element that met a minimum, weightiest share first."""
        found = [
            Claim(element=element.element, probability=element.probability, line=line)
            for element in self.examined.evidence.elements
            if element.probability >= POSSIBLE
            for line in element.lines
            if line.status == "met" and line.found_ev is not None
        ]
        return tuple(sorted(found, key=lambda claim: -claim.share * claim.probability))

    def claims_on(self, minimum: Minimum) -> tuple[Claim, ...]:
        """Claims on one minimum, weightiest first, one an element."""
        best: dict[str, Claim] = {}
        for claim in self.claims:
            if abs((claim.line.found_ev or 0.0) - minimum.energy_ev) < 0.5:
                best.setdefault(claim.element, claim)
        return tuple(best.values())

    def away_ev(self, symbol: str, energy_ev: float) -> float | None:
        """How far an energy is from where chemistry and axis let a line of the element stand; None without lines."""
        sigma = self.examined.evidence.scale.offset_sigma_ev
        away = []
        for line in tables.lines_of(symbol):
            if line.relative_height < WORTH:
                continue
            low, high = tables.shift_range(symbol, line.valence)
            slack = AXIS_SLACK_EV + 2.0 * math.hypot(line.sigma_ev, sigma)
            off = energy_ev - self.on_axis(line.energy_ev)
            away.append(max(low - slack - off, off - high - slack, 0.0))
        return min(away, default=None)

    def loss_of(self, energy_ev: float, depth: float) -> Claim | None:
        """The strong line whose electrons, having lost energy, leave what stands at an energy; None without one."""
        low, high = LOSS_EV
        depths = {m.energy_ev: m.depth for m in self.examined.analysis.minima}
        near = [
            claim
            for claim in self.claims
            if claim.probability >= LIKELY
            and claim.share >= MAIN_SHARE
            and low <= (claim.line.found_ev or 0.0) - energy_ev <= high
            and depths.get(claim.line.found_ev or 0.0, 0.0) >= LOSS_LEAST_DEPTH * depth
        ]
        return max(near, key=lambda claim: depths[claim.line.found_ev or 0.0], default=None)

    def better(self, energy_ev: float, minimum: Minimum | None, not_these: tuple[str, ...]) -> tuple[str, ...]:
        """Elements that fit a minimum better than those named: the answer's, else what the tables offer there."""
        if minimum is None:
            return ()
        claims = [c for c in self.claims_on(minimum) if c.element not in not_these and c.share >= SOME_SHARE]
        likely = [c.element for c in claims if c.probability >= LIKELY]
        found = likely or [c.element for c in claims]
        if not found:
            for item in self.examined.evidence.unexplained:
                if abs(item.energy_ev - minimum.energy_ev) < 0.5:
                    found = [symbol for symbol in item.candidates if symbol not in not_these]
        return tuple(dict.fromkeys(found))[:MOST_BETTER]

    def is_unexplained(self, minimum: Minimum) -> bool:
        """Whether the answer leaves a minimum without an element."""
        return any(abs(u.energy_ev - minimum.energy_ev) < 0.5 for u in self.examined.evidence.unexplained)

    def looked_up(self, energy_ev: float) -> tuple[str, ...]:
        """What the tables alone have at an energy of the spectrum's axis, likeliest first."""
        scale = self.examined.evidence.scale
        absolute = (energy_ev - scale.offset_ev) / (1.0 + scale.slope)
        try:
            found = candidates_at(handbook_from_fermi(absolute))
        except SettingError:
            return ()
        return tuple(c.element for c in found if c.weight >= LOOKUP_WEIGHT)[:MOST_BETTER]

    def inseparable_from(self, symbol: str) -> tuple[str, ...]:
        """Elements that the scan cannot tell from this one."""
        pairs = [pair.elements for pair in self.examined.evidence.inseparable if symbol in pair.elements]
        return tuple(dict.fromkeys(other for pair in pairs for other in pair if other != symbol))
