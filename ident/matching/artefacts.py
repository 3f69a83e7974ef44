"""Minima that no element explains, and what they are instead: losses, satellites, the elastic peak, secondaries."""

from __future__ import annotations

from collections.abc import Iterator
from functools import partial

import numpy as np

from .. import tables
from ..physics.widths import SATELLITE_EV
from .context import Context
from .evidence import ArtefactEvidence
from .losses import ELASTIC_REACH_EV, ELASTIC_SHARE, PLASMON_PART, nearest_loss, plasmons_of
from .problem import Problem
from .search import left_over

NEAR_PLASMON_EV = 2.0
TAIL_EV, TAIL_PART = 30.0, 0.5  # below a line, and how deep against it
SATELLITE_PART = 0.15
EDGE_LEVELS, EDGE_SIGMA_EV = ("K", "L3", "M5", "N5"), 6.0
LEAST_EDGE_EV = 50.0  # shallower levels lose no more than plasmons do
SECONDARY_EV = 25.0  # the edge of the secondaries lies below
CALLED = 0.5
# What takes a minimum off the list of the unexplained; a tail or a satellite is only what it may be.
SURE_ARTEFACTS = frozenset({"elastic peak", "above the beam", "ionisation loss", "plasmon loss"})


def find_artefacts(context: Context) -> tuple[ArtefactEvidence, ...]:
    """Minima that no element explains and that something else does, rising in energy."""
    left = np.flatnonzero(left_over(context.problem, context.sums))
    found = [named for at in left if (named := _named(context, int(at))) is not None]
    return tuple(found)


def _named(context: Context, at: int) -> ArtefactEvidence | None:
    """What a minimum is: the elastic peak, an edge below it, a plasmon loss, a satellite, a tail, secondaries."""
    energy = float(context.problem.energy_ev[at])
    for candidate in (*_of_the_beam(context, energy), *_beside_lines(context, at)):
        return candidate
    if energy < SECONDARY_EV:
        return ArtefactEvidence(energy_ev=energy, kind="secondaries")
    return None


def _of_the_beam(context: Context, energy_ev: float) -> Iterator[ArtefactEvidence]:
    beam = beam_ev(context.problem)
    if beam is None:
        return
    if abs(energy_ev - beam) < ELASTIC_REACH_EV + ELASTIC_SHARE * beam:
        yield ArtefactEvidence(energy_ev=energy_ev, kind="elastic peak", expected_ev=beam)
    elif energy_ev > beam:
        yield ArtefactEvidence(energy_ev=energy_ev, kind="above the beam", expected_ev=beam)
    for symbol in _called(context):
        for level in EDGE_LEVELS:
            row = tables.binding_energies().get((symbol, level))
            if row is None or row.energy_ev < LEAST_EDGE_EV:
                continue
            if abs(beam - row.energy_ev - energy_ev) < EDGE_SIGMA_EV + 0.001 * beam:
                yield ArtefactEvidence(
                    energy_ev=energy_ev,
                    kind="ionisation loss",
                    element=symbol,
                    level=level,
                    expected_ev=beam - row.energy_ev,
                )


def _beside_lines(context: Context, at: int) -> Iterator[ArtefactEvidence]:
    """Losses and satellites of the lines of called elements, the nearest deep one first."""
    problem = context.problem
    energy, depth = float(problem.energy_ev[at]), float(problem.depth[at])
    lines = sorted(_strong_lines(context), key=lambda line: abs(line[0] - energy))
    for place, line_depth, element, transition in lines:
        below, symbol = place - energy, problem.patterns.symbols[element]
        about = partial(
            ArtefactEvidence, energy_ev=energy, element=symbol, transition=transition, away_ev=-below, of_ev=place
        )
        losses = plasmons_of(symbol)
        if losses is not None and below > 0 and depth < PLASMON_PART * line_depth:
            which, away = nearest_loss(np.array(below), losses)
            if abs(float(away)) < NEAR_PLASMON_EV:
                yield about(kind="plasmon loss", order=int(which), expected_ev=energy + float(away))
        if 0 < below < TAIL_EV and depth < TAIL_PART * line_depth:
            yield about(kind="loss tail")
        if SATELLITE_EV[0] - 2.0 < -below < SATELLITE_EV[1] + 2.0 and depth < SATELLITE_PART * line_depth:
            yield about(kind="satellite")


def _strong_lines(context: Context) -> Iterator[tuple[float, float, int, str]]:
    """Minima of the called elements: energy, depth, element, transition."""
    problem, options = context.problem, context.options
    for member in context.solution.members:
        element = int(options.element[member])
        if context.posterior.probability[element] < CALLED:
            continue
        for column in np.flatnonzero(options.met[member] >= 0):
            met = int(options.met[member, column])
            if problem.patterns.firm[element, column]:
                transition = problem.patterns.transitions[element][column]
                yield float(problem.energy_ev[met]), float(problem.depth[met]), element, transition


def _called(context: Context) -> list[str]:
    names = context.problem.patterns.symbols
    return [names[e] for e in np.flatnonzero(context.posterior.probability >= CALLED)]


def beam_ev(problem: Problem) -> float | None:
    """Where the elastic peak stands on the axis, eV, when the beam energy is known and its peak may be in the scan."""
    beam = problem.settings.beam_kev
    if beam is None or problem.ranges_ev[-1][1] < 1000.0 * beam - ELASTIC_REACH_EV:
        return None
    return 1000.0 * beam
