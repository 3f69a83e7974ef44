"""Standard deviations of line energies are honest: lines left out fall inside them as often as they should.

The lines are the published ones (handbook minima from memory, and those read in publications), each predicted by what
would stand in the tables if it were not known. Bounds are two standard deviations of a binomial count.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from ident import tables
from ident.deriving.families import (
    GROWTH_EV,
    LEAST_SIGMA_EV,
    OTHER_OFFSET_EV,
    OTHER_SIGMA_EV,
    ROW_SIGMA_EV,
    formula_ev,
    published_minimum_ev,
    residuals,
)
from ident.deriving.transitions import published_transitions

NORMAL = {1: 0.6827, 2: 0.9545, 3: 0.9973}  # a normal deviate lies within so many deviations
ENOUGH = 4  # rows of a family from which one can be left out and the rest still fitted


def bound(share: float, count: int) -> float:
    """Two standard deviations of the share, and half a count for its being whole."""
    return 2.0 * math.sqrt(share * (1.0 - share) / count) + 0.5 / count


def left_out(name: str) -> list[float]:
    """Deviation of each row of a family from a fit to the others, over the deviation that this fit would claim."""
    family, rows = tables.families()[name], residuals(name)
    out = []
    for place, (_, z, value) in enumerate(rows):
        others = [row for other, row in enumerate(rows) if other != place]
        zs, values = np.array([row[1] for row in others], float), np.array([row[2] for row in others])
        degree, middle = min(family.degree, len(others) - 2), zs.mean()
        fit = np.polyfit(zs - middle, values, degree)
        inside = min(max(z, zs.min()), zs.max())
        again = []
        for one in range(len(others)):
            kept = np.arange(len(others)) != one
            refit = np.polyfit((zs - middle)[kept], values[kept], degree)
            again.append(values[one] - np.polyval(refit, zs[one] - middle))
        scatter = math.hypot(max(float(np.sqrt(np.mean(np.square(again)))), LEAST_SIGMA_EV), ROW_SIGMA_EV)
        claimed = math.hypot(max(scatter, family.least_sigma_ev), GROWTH_EV * abs(z - inside))
        out.append((value - float(np.polyval(fit, inside - middle))) / claimed)
    return out


def test_lines_left_out_of_their_family() -> None:
    off = np.abs(np.concatenate([left_out(name) for name in tables.families() if len(residuals(name)) >= ENOUGH]))
    assert off.size > 100
    for k, share in NORMAL.items():
        assert np.mean(off < k) == pytest.approx(share, abs=bound(share, off.size))
    assert 0.8 < np.sqrt(np.mean(off**2)) < 1.2


def test_lines_predicted_by_the_formula_as_if_no_family_were_known() -> None:
    """The tails are heavier than a normal deviate's (open 4f shells, free atoms), so one deviation is a little wide."""
    off = []
    for _, z, parts, energy_ev, _ in published_transitions():
        value = formula_ev(z, parts)
        if value is not None:
            off.append(abs(energy_ev - value - OTHER_OFFSET_EV) / OTHER_SIGMA_EV[parts[0][0]])
    assert len(off) > 150
    for k, share in NORMAL.items():
        assert np.mean(np.array(off) < k) >= share - bound(share, len(off))
    assert 0.8 < np.sqrt(np.mean(np.square(off))) < 1.2


@pytest.mark.parametrize("shell", ["K", "L", "M", "N"])
def test_the_formula_by_shell(shell: str) -> None:
    off = [
        (energy_ev - value - OTHER_OFFSET_EV) / OTHER_SIGMA_EV[shell]
        for _, z, parts, energy_ev, _ in published_transitions()
        if parts[0][0] == shell and (value := formula_ev(z, parts)) is not None
    ]
    assert 0.6 < np.sqrt(np.mean(np.square(off))) < 1.3


# Published lines of these stand apart for what they are, not for an error: oxygen at 510 eV in iron oxide against
# 503 eV in magnesia, neon implanted or free. chemical_shifts.csv and published_lines.csv say so.
OTHER_STATES = {"O", "Ne"}


def test_lines_read_in_publications_against_the_handbooks_rows() -> None:
    handbook = [row for row in tables.published_lines() if row.reference_level == "handbook"]
    off = []
    for row in tables.published_lines():
        if row.status != "read" or row.form == "direct" or row.symbol in OTHER_STATES or "minor" in row.transition:
            continue
        near = min(
            (other for other in handbook if other.symbol == row.symbol), key=lambda o: abs(o.energy_ev - row.energy_ev)
        )
        off.append(abs(near.energy_ev - row.energy_ev) / math.hypot(near.sigma_ev, row.sigma_ev))
    assert len(off) >= 20
    for k, share in NORMAL.items():
        assert np.mean(np.array(off) < k) >= share - bound(share, len(off))


def test_direct_maxima_from_the_fermi_level_against_the_handbooks_minima() -> None:
    """A minimum stands above the maximum by the line's width over 2.355 (Gaussian); 0.5 % resolution, 3 eV natural."""
    handbook = {
        (row.symbol, row.transition): row for row in tables.published_lines() if row.reference_level == "handbook"
    }
    off = []
    for row in tables.published_lines():
        other = handbook.get((row.symbol, row.transition))
        if row.form == "direct" and row.reference_level == "fermi" and other is not None and row.state == other.state:
            minimum = row.energy_ev + math.hypot(3.0, 0.005 * row.energy_ev) / 2.3548
            off.append((minimum - published_minimum_ev(other)) / math.hypot(other.sigma_ev, 0.9))
    assert len(off) >= 10
    assert np.mean(np.abs(off) < 2) >= 0.9
    assert abs(np.mean(off)) < 1.0


@pytest.mark.parametrize("kind", ["published", "family", "formula"])
def test_lines_of_the_table_claim_what_their_kind_can(kind: str) -> None:
    """Nothing is claimed to better than 1.5 eV: handbooks' editions differ by that much (from memory)."""
    claimed = [line.sigma_ev for line in tables.read_lines() if line.energy_kind == kind]
    assert min(claimed) >= {"published": 1.0, "family": 1.5, "formula": 3.0}[kind]
