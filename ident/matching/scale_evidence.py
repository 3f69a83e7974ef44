"""What the settled axis says of itself: offset, slope, and whether the sample charges."""

from __future__ import annotations

import math

from ..scale import CHARGING_FROM_EV
from .evidence import Charging, ScaleEvidence
from .problem import Problem
from .solve import Solution

FEW_LINES = 3


def scale_evidence(problem: Problem, solution: Solution) -> ScaleEvidence:
    """Offset and slope with standard deviations, and a verdict on charging."""
    fit = solution.fit
    offset_sigma = math.sqrt(float(fit.covariance[0, 0]))
    used = int(sum((solution.options.met[m] >= 0).sum() for m in solution.members))
    return ScaleEvidence(
        offset_ev=fit.offset_ev,
        offset_sigma_ev=offset_sigma,
        slope=fit.slope,
        slope_sigma=math.sqrt(float(fit.covariance[1, 1])),
        charging=_charging(fit.offset_ev, offset_sigma, used),
        lines_used=used,
    )


def _charging(offset_ev: float, sigma_ev: float, used: int) -> Charging:
    if used < FEW_LINES or sigma_ev > 0.5 * CHARGING_FROM_EV:
        return "cannot tell"
    if abs(offset_ev) - 2.0 * sigma_ev > CHARGING_FROM_EV:
        return "yes"
    return "no" if abs(offset_ev) + sigma_ev < CHARGING_FROM_EV else "cannot tell"
