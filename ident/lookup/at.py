"""What could be at an energy: elements with a line near, and what else must then be seen."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

from .. import tables
from ..errors import SettingError
from ..physics.scales import EnergyScale
from ..reasons.reason import Reason
from .energies import HANDBOOK, stated_ev, stated_sigma_ev

AXIS_SIGMA_EV = 3.0  # how far axes of real instruments stand from the tables
SHIFTED_WEIGHT = 0.3  # a line that needs the shift of a known state, against one that needs none
UNKNOWN_SHIFT_WEIGHT = 0.08  # and one that needs another shift, within what chemistry may do
MOST_BEYOND_SD = 4.0  # beyond what chemistry may do, a line is no candidate
LEAST_WEIGHT = 0.005  # of the whole
RARE = 0.01  # no element counts as rarer than that: a lookup is asked about odd things too
LIMITS_EV = (10.0, 3500.0)
CLEARLY_DEEPER = 1.3  # heights are known to about 30 % at best
NEEDED_HEIGHT = 0.4  # against the line looked up, from which another line must be seen
MOST_NEEDED = 4
LOOKUP_CODES = ("line-near", "needs-shift", "common-on-surfaces", "minor-line", "no-second-line")


@dataclass(frozen=True, kw_only=True)
class Need:
    """Another line of the element that must then be seen."""

    transition: str
    energy_ev: float
    relative_height: float  # of the strongest line of the element


@dataclass(frozen=True, kw_only=True)
class Candidate:
    """An element that could explain a minimum at an energy."""

    element: str
    transition: str
    expected_ev: float  # on the scale asked for
    sigma_ev: float  # of that energy, the conversion included, without the axis
    deviation_ev: float  # given minus expected
    relative_height: float
    weight: float  # part of 1 over all candidates
    needs: tuple[Need, ...]
    reasons: tuple[Reason, ...]


def candidates_at(
    energy_ev: float, *, within: float | None = None, scale: EnergyScale = HANDBOOK
) -> tuple[Candidate, ...]:
    """Find the elements that could explain a minimum, likeliest first.

    Parameters
    ----------
    energy_ev : float
        Energy of the feature in eV, as read on `scale`.
    within : float, optional
        Only lines at most this many eV away. By default as far as axis errors and chemical shifts reach.
    scale : EnergyScale, optional
        How the energy was read, and how the answer states energies; by default as derivative minima on the
        handbooks' scale.

    Returns
    -------
    tuple of Candidate
        One per element, with the best of its lines. The weight is height x nearness x commonness, scaled to 1
        over all candidates; it ranks, and is no probability.

    Raises
    ------
    SettingError
        When the energy is not between 10 and 3500 eV, or `within` is not positive.
    """
    if not (math.isfinite(energy_ev) and LIMITS_EV[0] <= energy_ev <= LIMITS_EV[1]):
        raise SettingError(f"{energy_ev:g} eV is outside the tables; kinetic energies of {_limits()} can be looked up")
    if within is not None and not within > 0:
        raise SettingError(f"within {within:g} eV is no reach; give a positive number of eV")
    best: dict[str, tuple[float, tables.Line]] = {}
    for line in tables.read_lines():
        deviation = energy_ev - stated_ev(line, scale)
        if within is not None and abs(deviation) > within:
            continue
        weight = _weight(line, deviation)
        if weight > best.get(line.symbol, (0.0, line))[0]:
            best[line.symbol] = (weight, line)
    total = sum(weight for weight, _ in best.values())
    ranked = sorted(best.values(), key=lambda pair: -pair[0])
    return tuple(_candidate(energy_ev, line, w / total, scale) for w, line in ranked if w >= LEAST_WEIGHT * total)


def _limits() -> str:
    return f"{LIMITS_EV[0]:.0f} to {LIMITS_EV[1]:.0f} eV"


def _weight(line: tables.Line, deviation_ev: float) -> float:
    """Height x nearness x commonness; chemistry may move a line, at a price."""
    sigma = math.hypot(line.sigma_ev, AXIS_SIGMA_EV)
    low, high = tables.shift_range(line.symbol, line.valence)
    beyond = max(low - deviation_ev, deviation_ev - high, 0.0) / sigma
    if beyond > MOST_BEYOND_SD:
        return 0.0
    near = max(bell(deviation_ev / sigma), UNKNOWN_SHIFT_WEIGHT * bell(beyond))
    state = _state_near(line, deviation_ev)
    if state is not None:
        near = max(near, SHIFTED_WEIGHT * bell((deviation_ev - state.shift_ev) / math.hypot(sigma, state.sigma_ev)))
    return line.relative_height * near * max(tables.commonness().get(line.symbol, 0.0), RARE)


def _state_near(line: tables.Line, deviation_ev: float) -> tables.ChemicalShift | None:
    """The known state whose shift of this class of lines is nearest to a deviation."""
    states = [row for row in tables.chemical_shifts(line.symbol) if row.valence == line.valence]
    return min(states, key=lambda row: abs(row.shift_ev - deviation_ev), default=None)


def bell(deviations: float) -> float:
    """Likelihood of so many standard deviations, one at none."""
    return math.exp(-0.5 * deviations**2)


def _candidate(energy_ev: float, line: tables.Line, weight: float, scale: EnergyScale) -> Candidate:
    expected = stated_ev(line, scale)
    deviation = energy_ev - expected
    needs = _needs(line, scale)
    return Candidate(
        element=line.symbol,
        transition=line.transition,
        expected_ev=expected,
        sigma_ev=stated_sigma_ev(line, scale),
        deviation_ev=deviation,
        relative_height=line.relative_height,
        weight=weight,
        needs=needs,
        reasons=tuple(_reasons(line, expected, deviation, needs)),
    )


def _needs(line: tables.Line, scale: EnergyScale) -> tuple[Need, ...]:
    others = sorted(tables.lines_of(line.symbol), key=lambda other: -other.relative_height)
    least = NEEDED_HEIGHT * line.relative_height
    needed = [other for other in others if other is not line and other.relative_height >= least]
    return tuple(
        Need(transition=n.transition, energy_ev=stated_ev(n, scale), relative_height=n.relative_height)
        for n in needed[:MOST_NEEDED]
        if n.transition != line.transition
    )


def _reasons(line: tables.Line, expected: float, deviation: float, needs: tuple[Need, ...]) -> Iterable[Reason]:
    sigma = math.hypot(line.sigma_ev, AXIS_SIGMA_EV)
    off = abs(deviation) / sigma
    told = f"{line.transition} stands at {expected:.0f} eV, {off:.1f} sd away (axis of {AXIS_SIGMA_EV:g} eV included)"
    if off <= 2.0:
        yield Reason(code="line-near", side="for", text=told)
    else:
        state = _state_near(line, deviation)
        fits = state is not None and abs(deviation - state.shift_ev) < 2.0 * math.hypot(sigma, state.sigma_ev)
        like = f"; {state.state} shifts it by {state.shift_ev:+.1f} eV" if state is not None and fits else ""
        yield Reason(code="needs-shift", side="against", text=f"{told}: needs a shift of {deviation:+.0f} eV{like}")
    common = tables.commonness().get(line.symbol, 0.0)
    if common >= 0.5:
        yield Reason(code="common-on-surfaces", side="for", text="found on nearly every surface that has seen air")
    if needs and needs[0].relative_height > CLEARLY_DEEPER * line.relative_height:
        text = (
            f"not its strongest line: {needs[0].transition} at {needs[0].energy_ev:.0f} eV is "
            f"{needs[0].relative_height / line.relative_height:.1f} times as deep"
        )
        yield Reason(code="minor-line", side="against", text=text)
    if not needs:
        yield Reason(code="no-second-line", side="untested", text="has no second line of this strength to confirm it")
