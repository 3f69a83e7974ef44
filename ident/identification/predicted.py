"""What the elements named should look like in the differential spectrum, to be drawn beside what was measured."""

from __future__ import annotations

from collections.abc import Collection
from typing import TYPE_CHECKING

import numpy as np

from ..physics.widths import measured_width_ev
from ..spectrum import FloatArray

if TYPE_CHECKING:
    from ..matching.evidence import ElementEvidence
    from ..signal import Differential
    from .build import Examination

USUAL_RESOLUTION = 0.0055  # as the matcher takes it where nobody says better
REACH = 4.5  # widths to either side of a line within which anything is predicted
BACKGROUND_EV = 120.0  # wider than any group of lines is dense
LEAST_PART = 0.02  # lines weaker than this part of the deepest are not drawn


def predict_curves(examination: Examination, elements: Collection[str]) -> tuple[FloatArray, ...]:
    """Predict the differential spectrum of some elements, at the strength, tilt and axis that were settled.

    Parameters
    ----------
    examination : Examination
        What `examine` gave.
    elements : collection of str
        Symbols; those that were not weighed add nothing.

    Returns
    -------
    tuple of (n,) arrays
        One for each of `analysis.differentials`, on its energies and in its units, above `background_slope`;
        NaN where no line of these elements is near. Line shapes are those of the search, widths natural and
        instrumental in quadrature: depths are good to about a factor 1.6, as the tables are.
    """
    from ..signal.lines import ASYMMETRY, line_shape

    analysis = examination.analysis
    resolution = examination.answer.settings.get("resolution") or USUAL_RESOLUTION
    lines = [line for e in examination.evidence.elements if e.element in elements for line in _lines(e, examination)]
    deepest = max((depth for _, depth, _ in lines), default=0.0)
    curves = []
    for differential in analysis.differentials:
        energy = differential.energy_ev
        total, near = np.zeros_like(energy), np.zeros(energy.size, dtype=bool)
        for line_ev, depth, natural_ev in lines:
            if depth < LEAST_PART * deepest:
                continue
            sigma = measured_width_ev(natural_ev, line_ev, resolution, differential.step_ev) / 2.3548
            away = energy - line_ev
            total += depth * line_shape(away, sigma)
            near |= (away > -REACH * ASYMMETRY * sigma) & (away < REACH * sigma)
        curves.append(np.where(near, total, np.nan))
    return tuple(curves)


def background_slope(differential: Differential) -> FloatArray:
    """Give what of a differential spectrum (n,) is no line, in its units.

    The steep part near the secondary edge as the search fits it, and the median far and wide of what that leaves.
    """
    from scipy.ndimage import median_filter

    from ..signal.baseline import slope_baseline

    noise = differential.sigma * differential.filter_gain(np.ones(1))
    steep = slope_baseline(differential.energy_ev, differential.derivative, noise)
    channels = max(3, round(BACKGROUND_EV / differential.step_ev))
    rest: FloatArray = median_filter(differential.derivative - steep, size=channels, mode="nearest")
    return steep + rest


def _lines(element: ElementEvidence, examination: Examination) -> list[tuple[float, float, float]]:
    """Energy, depth and natural width of each line that was expected inside the scan."""
    from ..patterns import all_patterns

    patterns = all_patterns()
    row = patterns.symbols.index(element.element)
    place = {transition: at for at, transition in enumerate(patterns.transitions[row])}
    noises = examination.analysis.depth_noise
    grid = np.concatenate([noise.energy_ev for noise in noises])
    order = np.argsort(grid, kind="stable")
    values = np.concatenate([noise.noise for noise in noises])[order]
    return [
        (
            line.expected_ev,
            line.expected_significance * float(np.interp(line.expected_ev, grid[order], values)),
            float(patterns.width_ev[row, place[line.transition]]),
        )
        for line in element.lines
        if line.expected_significance is not None and line.transition in place
    ]
