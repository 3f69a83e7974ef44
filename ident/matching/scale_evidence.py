"""What the settled axis says of itself: offset, slope, and whether the sample charges."""

from __future__ import annotations

import math

import numpy as np

from ..physics.levels import fermi_from_handbook
from ..scale import CHARGING_FROM_EV, AxisFit
from .evidence import Charging, ScaleEvidence
from .problem import Problem
from .solve import Solution

FEW_LINES = 3
READ_AT_EV = (100.0, 200.0, 300.0, 500.0, 700.0, 1000.0)


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
        charging=_charging(fit.offset_ev - _expected_offset_ev(problem), offset_sigma, used),
        covariance=tuple((float(row[0]), float(row[1])) for row in fit.covariance),
        lines_used=used,
        readings=tuple(_reading(fit, energy_ev) for energy_ev in _places(problem)) if used else (),
    )


def _expected_offset_ev(problem: Problem) -> float:
    """Offset that the axis has when nothing charges."""
    calibration = problem.settings.scale
    return 0.0 if calibration is None else calibration.prior().offset_ev


def _places(problem: Problem) -> list[float]:
    """Two round handbook energies near the ends of the scan, up to where the lines are."""
    low, high = problem.ranges_ev[0][0], problem.ranges_ev[-1][1]
    inside = [place for place in READ_AT_EV if low <= place <= high]
    return inside if len(inside) < 2 else [inside[0], inside[-1]]


def _reading(fit: AxisFit, handbook_ev: float) -> tuple[float, float, float]:
    """How far too high this axis reads a handbook energy, with its standard deviation."""
    absolute = float(fermi_from_handbook(handbook_ev))
    here = absolute + fit.offset_ev + fit.slope * absolute
    leverage = np.array([1.0, absolute])
    return handbook_ev, here - handbook_ev, math.sqrt(float(leverage @ fit.covariance @ leverage))


def _charging(offset_ev: float, sigma_ev: float, used: int) -> Charging:
    if used < FEW_LINES or sigma_ev > 0.5 * CHARGING_FROM_EV:
        return "cannot tell"
    if abs(offset_ev) - 2.0 * sigma_ev > CHARGING_FROM_EV:
        return "yes"
    return "no" if abs(offset_ev) + sigma_ev < CHARGING_FROM_EV else "cannot tell"
