"""Sensitivities of the elements: published ones and calculated ones put together, for any beam energy.

Of pure elements, silver M5N45N45 being 1, for the strongest line of each element (height 1 in lines.csv), as
handbooks give them at 3 keV. Calculated: corrected strength times atoms a volume, moved by what published
sensitivities of the neighbours in Z say. Where one is published, the mean (of logarithms) of both.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache

from ..tables import PublishedSensitivity, materials, published_sensitivities
from .learning import correction, learned, line_strength, neighbours_say
from .lines import Weighted, weighted_lines
from .transitions import Transition
from .writing import Cells, number

UNIT = "Ag"
BEAMS_EV = (5000.0, 10000.0)  # columns of the table
LEAST_HEIGHT = 0.3  # of a line that stands for its element


@dataclass(frozen=True, kw_only=True)
class Sensitiveness:
    """Sensitivity of an element at one beam energy, and what it is made of."""

    symbol: str
    z: int
    label: str
    sensitivity: float
    calculated: float  # without the element's own published number
    published: float | None  # moved to the strongest line and this beam energy
    factor: float


@dataclass(frozen=True, kw_only=True)
class _Choice:
    strongest: Weighted
    line: Transition
    height: float
    published: PublishedSensitivity | None


def sensitivities_at(elements: Sequence[tuple[int, str]], beam_ev: float) -> list[Sensitiveness]:
    """Sensitivity of every element at a beam energy (eV); silver must be among them."""
    sigma = learned().sensitivity_log_sigma
    out = []
    unit = next(_calculated(z, symbol, beam_ev) for z, symbol in elements if symbol == UNIT)
    reference = _published_log(*next(pair for pair in elements if pair[1] == UNIT), beam_ev)
    for z, symbol in elements:
        calculated = _calculated(z, symbol, beam_ev) - unit
        held = _published_log(z, symbol, beam_ev)
        known = None if held is None or reference is None else held - reference
        mixed = calculated if known is None else (calculated + known) / 2.0
        apart = abs(mixed - calculated)  # half of the way between both: the mean is not surer than that
        out.append(
            Sensitiveness(
                symbol=symbol,
                z=z,
                label=_choice(z, symbol).strongest.transition.label,
                sensitivity=math.exp(mixed),
                calculated=math.exp(calculated),
                published=None if known is None else math.exp(known),
                factor=math.exp(max(sigma, apart)),
            )
        )
    return out


def sensitivity_rows(elements: Sequence[tuple[int, str]]) -> list[Cells]:
    """Rows of sensitivities.csv."""
    low, high = (sensitivities_at(elements, beam) for beam in BEAMS_EV)
    rows = []
    for at_low, at_high in zip(low, high, strict=True):
        known = at_low.published is not None
        rows.append(
            [at_low.symbol, str(at_low.z), at_low.label, f"{at_low.sensitivity:.3g}", f"{at_high.sensitivity:.3g}",
             number(at_low.factor, 2), "recalled" if known else "calculated",
             "handbook computed" if known else "computed"]
        )  # fmt: skip
    return rows


def _calculated(z: int, symbol: str, beam_ev: float) -> float:
    """Logarithm of the calculated sensitivity of the strongest line, arbitrary unit."""
    choice = _choice(z, symbol)
    line = choice.line
    made = line_strength(z, line.parts, line.energy_ev, beam_ev) * correction(z, line.parts, line.energy_ev)
    near = neighbours_say(learned().left_out, z, line.label[0], but=symbol)
    return math.log(made * _atoms()[symbol] / choice.height) + near


def _published_log(z: int, symbol: str, beam_ev: float) -> float | None:
    """Logarithm of the published sensitivity, moved to the strongest line and to a beam energy."""
    choice = _choice(z, symbol)
    if choice.published is None:
        return None
    moved = (
        line_strength(z, choice.line.parts, choice.line.energy_ev, beam)
        for beam in (beam_ev, 1000.0 * choice.published.beam_kev)
    )
    here, there = moved
    return math.log(choice.published.sensitivity / choice.height * here / there)


@cache
def _choice(z: int, symbol: str) -> _Choice:
    """The line that stands for an element: one of known sensitivity or height before others, the strongest first."""
    lines = weighted_lines(z, symbol)
    held = {row.transition: row for row in published_sensitivities() if row.symbol == symbol}
    usable = [line for line in lines if line.height >= LEAST_HEIGHT and line.transition.strength > 0]
    known = [line for line in usable if line.transition.label in held]
    seen = [line for line in usable if line.kind == "published"]
    chosen = (known or seen or usable or lines)[0]
    return _Choice(
        strongest=chosen if chosen.height == 1.0 else lines[0],
        line=chosen.transition,
        height=chosen.height,
        published=held.get(chosen.transition.label),
    )


@cache
def _atoms() -> dict[str, float]:
    return {row.symbol: row.density_g_cm3 / row.molar_mass for row in materials().values()}
