"""Numbers for the answer: per element its lines, what met them, what is missing, who else could be there."""

from __future__ import annotations

import math

import numpy as np

from ..patterns import tilted
from ..spectrum import FloatArray
from .amounts import find_abundances, find_limits
from .artefacts import SURE_ARTEFACTS, find_artefacts
from .context import Context
from .doubts import find_inseparable, find_unexplained, find_untestable
from .evidence import (
    AskedEvidence,
    ElementEvidence,
    Evidence,
    LimitEvidence,
    LineEvidence,
    RivalEvidence,
)
from .options import LOW_LINE_EV
from .posterior import Posterior
from .problem import FROM_AIR, Problem, prior_log_odds
from .scale_evidence import scale_evidence
from .search import Sums, minimum_costs, sums_of
from .solve import Solution
from .states import weigh_states

SHOWN_HEIGHT = 0.08  # weaker lines are listed only when met
MOST_LINES = 10
LEAST_PROBABILITY = 0.01


def assemble(problem: Problem, solution: Solution, posterior: Posterior) -> Evidence:
    """Put the whole answer together."""
    sums = sums_of(problem, solution.options, solution.members)
    abundances = find_abundances(problem, solution)
    context = Context(problem=problem, solution=solution, posterior=posterior, sums=sums, abundances=abundances)
    shown = [e for e in np.argsort(-posterior.probability) if posterior.probability[e] >= LEAST_PROBABILITY]
    shown = [int(e) for e in shown if posterior.best_option[e] >= 0]
    limits = find_limits(problem, solution, posterior.probability)
    artefacts = find_artefacts(context)
    named = {artefact.energy_ev for artefact in artefacts if artefact.kind in SURE_ARTEFACTS}
    return Evidence(
        scale=scale_evidence(problem, solution),
        elements=tuple(_element(context, e) for e in shown),
        unexplained=tuple(one for one in find_unexplained(context) if one.energy_ev not in named),
        artefacts=artefacts,
        inseparable=find_inseparable(context, shown),
        untestable=find_untestable(context),
        limits=limits,
        asked=tuple(_asked(context, symbol, limits) for symbol in problem.settings.why_not),
    )


def _asked(context: Context, symbol: str, limits: tuple[LimitEvidence, ...]) -> AskedEvidence:
    """Everything known of an element that the analyst asked about."""
    problem, axis, names = context.problem, context.solution.axis, context.problem.patterns.symbols
    if symbol not in names:
        return AskedEvidence(element=symbol, probability=0.0, weighed=None)
    element = names.index(symbol)
    place = problem.patterns.energy_ev[element] * (1 + axis.slope) + axis.offset_ev
    usable = problem.patterns.real[element] & problem.patterns.firm[element] & problem.in_range(place)
    line = int(np.argmax(np.where(usable, problem.patterns.height[element], -1.0))) if np.any(usable) else None
    expected = float(place[line]) if line is not None else None
    near = None
    if expected is not None and problem.energy_ev.size:
        near = problem.energy_ev[np.argmin(np.abs(problem.energy_ev - expected))]
    return AskedEvidence(
        element=symbol,
        probability=float(context.posterior.probability[element]),
        weighed=_element(context, element) if context.posterior.best_option[element] >= 0 else None,
        transition=problem.patterns.transitions[element][line] if line is not None else None,
        expected_ev=expected,
        nearest_ev=float(near) if near is not None else None,
        limit=next((limit for limit in limits if limit.element == symbol), None),
        ruled_out=symbol in problem.settings.rule_out,
    )


def _element(context: Context, element: int) -> ElementEvidence:
    problem, options = context.problem, context.options
    index = int(context.posterior.best_option[element])
    others = [m for m in context.solution.members if int(options.element[m]) != element]
    own = [m for m in context.solution.members if int(options.element[m]) == element] or [index]
    sums = sums_of(problem, options, [*others, *own])
    lines = _lines(context, element, index, others, sums)
    met = [line for line in lines if line.status == "met"]
    symbol = problem.patterns.symbols[element]
    shift = float(options.shift_core_ev[index] or options.shift_valence_ev[index])
    strongest = max((float(options.depth[index, m]) for m in options.met[index] if m >= 0), default=0.0)
    return ElementEvidence(
        element=symbol,
        z=int(problem.patterns.z[element]),
        probability=float(context.posterior.probability[element]),
        log_odds=float(context.posterior.log_odds[element]),
        lines=lines,
        shift_ev=shift,
        shift_sigma_ev=float(np.hypot(1.0, context.solution.axis.sigma_ev)),
        state=weigh_states(context, element, own),
        strength=strongest,
        prior_log_odds=float(prior_log_odds(problem.patterns, problem.settings)[element]),
        common=symbol in FROM_AIR and problem.settings.sputtered is None,
        sputter_gas=symbol == problem.settings.sputtered,
        single_low_line=len(met) == 1 and met[0].table_ev < LOW_LINE_EV,
        rivals=_rivals(context, element, met),
        abundance=context.abundances.get(element),
    )


def _lines(context: Context, element: int, index: int, others: list[int], sums: Sums) -> tuple[LineEvidence, ...]:
    problem, options, axis = context.problem, context.options, context.solution.axis
    pattern = problem.patterns
    before = sums_of(problem, options, others)
    change = minimum_costs(problem, before) - minimum_costs(problem, sums)
    heights = tilted(pattern.height[element], pattern.energy_ev[element], axis.tilt)
    out: list[LineEvidence] = []
    for column in np.flatnonzero(pattern.real[element]):
        met = int(options.met[index, column])
        # a derived line that is not met says nothing: its energy and height are too uncertain
        if met < 0 and (pattern.height[element, column] < SHOWN_HEIGHT or not pattern.firm[element, column]):
            continue
        core = not pattern.valence[element, column]
        shift = float(options.shift_core_ev[index] if core else options.shift_valence_ev[index])
        expected = float(pattern.energy_ev[element, column]) * (1 + axis.slope) + axis.offset_ev + shift
        depth = float(options.strength[index] * heights[column])
        out.append(_line(context, element, int(column), expected, depth, met, others, sums, change))
    return tuple(out[:MOST_LINES])


def _line(
    context: Context,
    element: int,
    column: int,
    expected_ev: float,
    depth: float,
    met: int,
    others: list[int],
    sums: Sums,
    change: FloatArray,
) -> LineEvidence:
    problem, pattern = context.problem, context.problem.patterns
    sigma = float(np.hypot(pattern.sigma_ev[element, column], context.solution.axis.sigma_ev))
    noise = float(problem.noise_at(np.array(expected_ev)))
    inside = bool(problem.in_range(np.array(expected_ev)))
    common = {
        "transition": pattern.transitions[element][column],
        "table_ev": float(pattern.energy_ev[element, column]),
        "expected_ev": expected_ev,
        "relative_height": float(pattern.height[element, column]),
    }
    if met >= 0:
        total = float(sums.depth[met]) or depth  # a derived line alone explains it
        spread = float(sums.predicted[2, met]) / total or float(pattern.height_log_sigma[element, column])
        return LineEvidence(
            **common,  # type: ignore[arg-type]
            sigma_ev=float(np.hypot(sigma, problem.sigma_ev[met])),
            status="met",
            found_ev=float(problem.energy_ev[met]),
            found_sigma_ev=float(problem.sigma_ev[met]),
            share=min(1.0, depth / total),
            shared_with=_sharers(context, others, met, total),
            expected_significance=depth / noise,
            found_significance=float(problem.significance[met]),
            depth_ratio=float(problem.depth[met]) / total,
            depth_ratio_factor=math.exp(min(max(spread, 0.4), 3.0)),
            log_odds=float(change[met]) * min(1.0, depth / total),
        )
    status, hidden_by, odds = _absence(context, element, column, expected_ev, depth, inside, others)
    return LineEvidence(
        **common,  # type: ignore[arg-type]
        sigma_ev=sigma,
        status=status,  # type: ignore[arg-type]
        expected_significance=depth / noise if inside else None,
        hidden_by=hidden_by,
        log_odds=odds,
    )


def _absence(
    context: Context, element: int, column: int, expected_ev: float, depth: float, inside: bool, others: list[int]
) -> tuple[str, tuple[str, ...], float]:
    """Why a line was not met: out of range, hidden, or missing; with what that costs."""
    from .options import missing_price

    problem = context.problem
    if not inside:
        return "out of range", (), 0.0
    where = np.array([expected_ev])
    price = float(
        missing_price(
            problem, where, np.array([depth]), problem.patterns.height_log_sigma[element, column : column + 1]
        )[0]
    )
    noise, swallowed = float(problem.noise_at(where)[0]), float(problem.hidden_at(where)[0])
    if depth > 4.5 * noise and swallowed < 0.8 * depth:
        return "missing", (), -price
    near = int(np.argmin(np.abs(problem.energy_ev - expected_ev)))
    hidden: tuple[str, ...] = ()
    if swallowed > 4.5 * noise:
        total = float(context.sums.depth[near])
        hidden = _sharers(context, others, near, total) if total > 0 else ()
    return "hidden", hidden, -price


def _sharers(context: Context, others: list[int], minimum: int, total: float) -> tuple[str, ...]:
    options = context.options
    parts = [(float(options.depth[m, minimum]), int(options.element[m])) for m in others]
    names = context.problem.patterns.symbols
    return tuple(names[e] for part, e in sorted(parts, reverse=True) if part >= 0.1 * total)


def _rivals(context: Context, element: int, met: list[LineEvidence]) -> tuple[RivalEvidence, ...]:
    """Elements that could stand at a minimum this one claims, and why they do not, likeliest first."""
    out: list[RivalEvidence] = []
    for other, _ in context.posterior.replacements.get(element, ()):
        index = int(context.posterior.best_option[other])
        if index < 0 or other == element:
            continue
        rival = _rival(context, other, index, met)
        if rival is not None:
            out.append(rival)
    return tuple(out[:3])


def _rival(context: Context, other: int, index: int, met: list[LineEvidence]) -> RivalEvidence | None:
    problem, options, axis = context.problem, context.options, context.solution.axis
    pattern = problem.patterns
    for line in met:
        at = int(np.argmin(np.abs(problem.energy_ev - (line.found_ev or 0.0))))
        columns = np.flatnonzero(options.met[index] == at)
        if not columns.size:
            continue
        column = int(columns[0])
        place = pattern.energy_ev[other] * (1 + axis.slope) + axis.offset_ev + options.shift_core_ev[index]
        depth = options.strength[index] * tilted(pattern.height[other], pattern.energy_ev[other], axis.tilt)
        absent = pattern.firm[other] & pattern.real[other] & (options.met[index] < 0) & problem.in_range(place)
        significance = depth / problem.noise_at(place)
        seen = absent & (significance > 4.5) & (problem.hidden_at(place) < 0.8 * depth)
        missing = tuple(
            (pattern.transitions[other][c], float(place[c]), float(significance[c])) for c in np.flatnonzero(seen)[:3]
        )
        return RivalEvidence(
            element=pattern.symbols[other],
            transition=pattern.transitions[other][column],
            at_ev=float(problem.energy_ev[at]),
            deviation_sd=float(options.moment[index, at] / max(float(options.depth[index, at]), 1e-300)),
            missing=missing,
            probability=float(context.posterior.probability[other]),
        )
    return None
