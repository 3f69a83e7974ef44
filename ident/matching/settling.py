"""Which further scan would tell apart elements that this one cannot, and how long it must dwell."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from ..patterns import tilted
from .context import Context
from .evidence import ScanEvidence
from .options import LOW_LINE_EV

SETTLING_HEIGHT = 0.03  # a line that settles a case is as high as this, and above the crowded energies
CLEAR_EV = 20.0  # from every line of the others
SEEN_AT = 8.0  # noise widths at which a line is surely seen
SHORTEST_DWELL, LONGEST_DWELL = 0.25, 50.0  # against this scan; a longer one nobody makes
LEAST_HALF_EV, HALF_WIDTHS = 15.0, 2.0  # of the window: to have a background on both sides
HIGHEST_EV, OVERVOLTAGE = 2600.0, 1.3  # how far analysers usually go; the beam must ionise
MOST_SCANS = 3
LEAST_BITS = 0.25  # of an element that is not as good as decided


def settling_scans(context: Context, elements: tuple[int, ...]) -> tuple[ScanEvidence, ...]:
    """Windows that would decide between elements, likeliest first, by the information they promise for their time.

    A window holds a line of one of them that no other one has anything near. It tells whether that element is there:
    so many bits as its probability leaves open, if the line is dwelt on until it would be seen at eight noise widths
    even when it is weaker than expected by one standard deviation. What tells of the two likeliest comes first.
    """
    scans = [scan for element in elements for scan in _scans_for(context, element, elements)]
    scans.sort(key=lambda scan: (-round(scan.information_bits, 2), scan.dwell * (scan.high_ev - scan.low_ev)))
    best: dict[str, ScanEvidence] = {}
    for scan in scans:
        best.setdefault(scan.element, scan)
    leading = {context.problem.patterns.symbols[element] for element in elements[:2]}
    return tuple(sorted(best.values(), key=lambda scan: (scan.element not in leading, -_worth(scan))))[:MOST_SCANS]


def _worth(scan: ScanEvidence) -> float:
    """Information for the time, a quarter of the usual window being for setting up."""
    return scan.information_bits / (scan.dwell * (scan.high_ev - scan.low_ev) + 10.0)


def _scans_for(context: Context, element: int, elements: tuple[int, ...]) -> Iterator[ScanEvidence]:
    problem, axis, posterior = context.problem, context.solution.axis, context.posterior
    pattern = problem.patterns
    option = int(posterior.best_option[element])
    if option < 0:
        return
    others = [e for e in elements if e != element]
    theirs = np.concatenate([pattern.energy_ev[e][pattern.real[e]] for e in others])
    present = [int(context.options.element[m]) for m in context.solution.members]
    heights = tilted(pattern.height[element], pattern.energy_ev[element], axis.tilt)
    information = _bits(float(posterior.probability[element]))
    if information < LEAST_BITS:
        return  # that it is there, or not, is known: its lines tell nothing of the others
    for column in np.flatnonzero(pattern.real[element] & (pattern.height[element] >= SETTLING_HEIGHT)):
        energy = float(pattern.energy_ev[element, column])
        if energy < LOW_LINE_EV or np.min(np.abs(theirs - energy)) < CLEAR_EV or not _within_reach(context, energy):
            continue
        place = energy * (1 + axis.slope) + axis.offset_ev
        depth = float(context.options.strength[option] * heights[column])
        dwell = _dwell(context, place, depth, float(pattern.height_log_sigma[element, column]))
        if dwell > LONGEST_DWELL:
            continue
        half = max(LEAST_HALF_EV, HALF_WIDTHS * float(problem.line_width_ev[element, column])) + axis.sigma_ev
        yield ScanEvidence(
            element=pattern.symbols[element],
            transition=pattern.transitions[element][column],
            line_ev=place,
            low_ev=place - half,
            high_ev=place + half,
            dwell=dwell,
            information_bits=information * (1.0 - 0.5 * _covered(context, energy, element, present)),
            in_range=bool(problem.in_range(np.array(place))),
        )


def _within_reach(context: Context, energy_ev: float) -> bool:
    """Whether the analyser goes there, and the beam with enough to spare."""
    beam = context.problem.settings.beam_kev
    highest = max(HIGHEST_EV, context.problem.ranges_ev[-1][1])
    return energy_ev < highest and (beam is None or OVERVOLTAGE * energy_ev < 1000.0 * beam)


def _covered(context: Context, energy_ev: float, element: int, present: list[int]) -> float:
    """One when a strong line of another element that is there stands on the line, less beside it, zero when clear."""
    pattern = context.problem.patterns
    near = 0.0
    for other in present:
        if other != element:
            strong = pattern.real[other] & (pattern.height[other] >= 0.1)
            away = np.abs(pattern.energy_ev[other][strong] - energy_ev)
            near = max(near, float(np.max(np.exp(-0.5 * (away / 6.0) ** 2), initial=0.0)))
    return near


def _dwell(context: Context, place_ev: float, depth: float, log_sigma: float) -> float:
    """Dwell against this scan's at which a line is surely seen; noise falls as the root of the time."""
    problem = context.problem
    low, high = problem.ranges_ev[0][0], problem.ranges_ev[-1][1]
    noise = float(problem.noise_at(np.array(min(max(place_ev, low), high))))
    cautious = depth * math.exp(-log_sigma)
    return max(SHORTEST_DWELL, (SEEN_AT * noise / max(cautious, 1e-300)) ** 2)


def _bits(probability: float) -> float:
    p = min(max(probability, 1e-6), 1 - 1e-6)
    return -(p * math.log2(p) + (1 - p) * math.log2(1 - p))
