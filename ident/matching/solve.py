"""Find the axis and the element set together: several starts, then fit and search in turn."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..scale import AxisFit, AxisPrior, fit_axis, usual_axis
from ..spectrum import FloatArray
from .options import Axis, Options, build_options
from .problem import Problem
from .search import search, sums_of, with_known_minors

STARTS_EV = (-7.0, -3.5, 0.0, 3.5, 7.0)
CALIBRATED_STARTS_EV = (-1.5, 0.0, 1.5)
START_SIGMA_EV = 2.0
FITTED_SIGMA_EV = 0.4
# The tables' heights are of E N(E), as a cylindrical mirror records it; N(E) tilts them by the power -1 of energy.
TILT_CENTRES = {"en": (0.0,), "n": (-1.0,), "auto": (0.0, -1.0)}
TILT_SIGMA = 0.5
SETTLED, WORTH_SETTLING = 3, 7.0
LEAST_SHARE = 0.4
UNMOVED_EV = 0.15


@dataclass(frozen=True, kw_only=True, eq=False)
class Solution:
    """One explanation: the axis, and the set found on it. `cost` counts the axis too."""

    problem: Problem  # with the prices of minima as the surest elements left them
    axis: Axis
    fit: AxisFit
    options: Options
    members: list[int]
    cost: float


def solve(problem: Problem) -> list[Solution]:
    """Search from several axes, settle the promising ones, and give the explanations, cheapest first."""
    prior = axis_prior(problem)
    starts = _starts_ev(problem)
    tried = []
    for tilt in TILT_CENTRES[problem.ordinate]:
        for start in starts:
            offset = prior.offset_ev + float(start)
            axis = Axis(offset_ev=offset, slope=prior.slope, sigma_ev=START_SIGMA_EV, tilt=tilt)
            options = build_options(problem, axis)
            members, cost = search(problem, options, passes=0)
            tried.append((cost + prior.price(offset, prior.slope), members, options, axis))
    tried.sort(key=lambda trial: trial[0])
    settled: list[Solution] = []
    for cost, members, options, axis in tried[:SETTLED]:
        if cost <= tried[0][0] + WORTH_SETTLING:
            settled.append(_settle(problem, axis, options, members, tilt_centre=axis.tilt))
    return _distinct(sorted(settled, key=lambda solution: solution.cost))


def _starts_ev(problem: Problem) -> FloatArray:
    """Offsets from the prior's to search from; few where a calibration says where the axis is."""
    if problem.settings.insulator:
        return np.arange(-60.0, 61.0, 4.0)
    placed = problem.settings.scale is not None or problem.settings.sitting is not None
    return np.array(CALIBRATED_STARTS_EV if placed else STARTS_EV)


def _distinct(solutions: list[Solution]) -> list[Solution]:
    """Leave out explanations that arrived at the same elements on nearly the same axis."""
    kept: list[Solution] = []
    for solution in solutions:
        elements = set(solution.options.element[solution.members].tolist())
        same = any(
            elements == set(other.options.element[other.members].tolist())
            and abs(solution.axis.offset_ev - other.axis.offset_ev) < 1.5
            for other in kept
        )
        if not same:
            kept.append(solution)
    return kept


def axis_prior(problem: Problem) -> AxisPrior:
    """What is known of the axis beforehand."""
    calibration = problem.settings.scale
    prior = usual_axis() if calibration is None else calibration.prior()
    if problem.settings.sitting is not None:
        prior = problem.settings.sitting.prior()
    return prior.of_insulator() if problem.settings.insulator else prior


def _settle(problem: Problem, axis: Axis, options: Options, members: list[int], *, tilt_centre: float) -> Solution:
    fit = _fit(problem, options, members)
    cost, known = np.inf, problem
    for _ in range(2):
        axis = Axis(
            offset_ev=fit.offset_ev,
            slope=fit.slope,
            sigma_ev=FITTED_SIGMA_EV,
            tilt=_tilt(problem, options, members, tilt_centre),
        )
        options = build_options(problem, axis)
        members, _ = search(problem, options)
        known = with_known_minors(problem, options, members)
        members, cost = search(known, options)
        fit = _fit(problem, options, members)
        if _moved_ev(axis, fit) < UNMOVED_EV:
            break
    cost += axis_prior(problem).price(fit.offset_ev, fit.slope) + 0.5 * ((axis.tilt - tilt_centre) / TILT_SIGMA) ** 2
    return Solution(problem=known, axis=axis, fit=fit, options=options, members=members, cost=cost)


def _moved_ev(axis: Axis, fit: AxisFit) -> float:
    """How far the fit has left the axis, at the worse end of where most lines are."""
    away = [fit.offset_ev - axis.offset_ev + (fit.slope - axis.slope) * energy_ev for energy_ev in (100.0, 1000.0)]
    return max(abs(part) for part in away)


def _pairs(
    problem: Problem, options: Options, members: list[int]
) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Lines of the members that carry most of a minimum: member's place, element, line, minimum."""
    sums = sums_of(problem, options, members)
    place, element, line, minimum = [], [], [], []
    for number, member in enumerate(members):
        for column in np.flatnonzero(options.met[member] >= 0):
            at = int(options.met[member, column])
            if options.depth[member, at] > LEAST_SHARE * sums.depth[at]:
                place.append(number)
                element.append(int(options.element[member]))
                line.append(int(column))
                minimum.append(at)
    return np.array(place, int), np.array(element, int), np.array(line, int), np.array(minimum, int)


def _fit(problem: Problem, options: Options, members: list[int]) -> AxisFit:
    place, element, line, minimum = _pairs(problem, options, members)
    pattern = problem.patterns
    absolute = pattern.energy_ev[element, line]
    # a shift beyond the usual is chemistry of that element and no news of the axis
    chemistry = np.where(
        pattern.valence[element, line],
        options.shift_valence_ev[np.array(members, int)][place] if place.size else 0.0,
        options.shift_core_ev[np.array(members, int)][place] if place.size else 0.0,
    )
    sigma = np.hypot(pattern.sigma_ev[element, line], problem.sigma_ev[minimum])
    sigma = np.hypot(sigma, 0.7 * np.abs(chemistry))
    sigma = np.where(pattern.valence[element, line], np.hypot(sigma, 2.5), sigma)
    deviation = problem.energy_ev[minimum] - absolute
    return fit_axis(absolute, deviation, sigma, place, len(members), prior=axis_prior(problem))


def _tilt(problem: Problem, options: Options, members: list[int], centre: float) -> float:
    """Common tilt of ln depth with ln energy, strengths free, with a prior about `centre`."""
    place, element, line, minimum = _pairs(problem, options, members)
    if place.size < 2:
        return centre
    pattern = problem.patterns
    x = np.log(np.maximum(pattern.energy_ev[element, line], 15.0) / 400.0)
    y = np.log(problem.depth[minimum] / pattern.height[element, line]) - centre * x
    weight = pattern.height_log_sigma[element, line] ** -2
    design = np.zeros((place.size, 1 + len(members)))
    design[:, 0] = x
    design[np.arange(place.size), 1 + place] = 1.0
    prior = np.r_[TILT_SIGMA**-2, np.full(len(members), 1e-3)]
    solution = np.linalg.solve(design.T @ (design * weight[:, None]) + np.diag(prior), design.T @ (weight * y))
    return centre + float(np.clip(solution[0], -0.8, 0.8))
