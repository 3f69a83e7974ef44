"""Which minimum is which line of the reference metals: by pattern, several lines of all metals on one axis."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from .. import tables
from ..minima import Minimum
from ..names import parse_transition
from ..physics.levels import FWHM_PER_SIGMA, fermi_from_handbook
from ..physics.scales import handbook_term_sigma_ev, minimum_ev
from ..physics.widths import natural_width_ev
from ..spectrum import FloatArray
from .axis import usual_axis

LEAST_SIGNIFICANCE = 4.5
OFFSETS_EV, SLOPES = np.arange(-12.0, 12.1, 0.5), np.arange(-0.006, 0.0081, 0.0005)
SEARCH_OFFSET_EV, SEARCH_SLOPE = 6.0, 0.003  # how far from the usual axis one is thought of, standard deviations
GRID_EV = 0.7
WORTH = {"sharp": 9.0, "low": 4.0, "minor": 3.0}  # natural logarithm of odds that a line met speaks for an axis
NEIGHBOURS_EV = 20.0  # the line of a reference metal is the deepest or nearly so among its neighbours
WIDTH_TRUST = 0.1  # relative error of a width, as far as it moves the minimum
SHAPE_EV = 0.15  # lines are no Gaussians
OXIDE_EV, OXIDE_PART = (4.0, 11.0), 0.15  # an aluminium line with such a one above it is that of the oxide
FAR = 3.5  # standard deviations


@dataclass(frozen=True, kw_only=True)
class Reference:
    """A reference line on the absolute scale of `physics`."""

    row: tables.ScaleLine
    minimum_ev: float  # at 0.5 %
    maximum_ev: float | None  # of the direct line, where that is what is known
    sigma_ev: float

    @property
    def metal(self) -> str:
        """Symbol of the metal."""
        return self.row.symbol


@dataclass(frozen=True, kw_only=True)
class Pair:
    """A reference line and the minimum taken for it."""

    reference: Reference
    minimum: Minimum
    transition: str
    expected_ev: float  # as wide as recorded, or at 0.5 % where the row is a minimum
    widened_ev: float  # by which the recorded width moved that
    sigma_ev: float


@tables.cached
def references(metal: str) -> tuple[Reference, ...]:
    """Give the reference lines of a metal, as the table has them."""
    return tuple(_reference(row) for row in tables.scale_lines() if row.symbol == metal)


def _reference(row: tables.ScaleLine) -> Reference:
    if row.form == "derivative":
        sigma = float(np.hypot(row.sigma_ev, handbook_term_sigma_ev(row.energy_ev)))
        return Reference(row=row, minimum_ev=fermi_from_handbook(row.energy_ev), maximum_ev=None, sigma_ev=sigma)
    name = parse_transition(row.transition)
    natural = natural_width_ev(row.z, name.vacancy, name.first + name.second)
    return Reference(
        row=row,
        minimum_ev=minimum_ev(row.energy_ev, natural, 0.005),
        maximum_ev=row.energy_ev,
        sigma_ev=row.sigma_ev,
    )


def first_axis(minima: Mapping[str, Sequence[Minimum]]) -> tuple[float, float]:
    """Offset and slope, on a grid, at which most lines of all metals meet a minimum that is worth it."""
    offset, slope = np.meshgrid(OFFSETS_EV, SLOPES, indexing="ij")
    usual = usual_axis()
    away, turned = (offset - usual.offset_ev) / SEARCH_OFFSET_EV, (slope - usual.slope) / SEARCH_SLOPE
    score = -0.5 * (away**2 + turned**2)
    for metal, found in minima.items():
        energy, worth = _worth(found)
        if not energy.size:
            continue
        for reference in references(metal):
            fit = worth * _clear_of_oxide(metal, found)
            here = _expected_ev(reference, found) * (1.0 + slope[..., None]) + offset[..., None]
            sigma = np.hypot(min(reference.sigma_ev, 2.0), GRID_EV)
            near = np.exp(-0.5 * ((energy - here) / sigma) ** 2) * fit
            score = score + WORTH[reference.row.role] * near.max(axis=-1)
    best = np.unravel_index(int(np.argmax(score)), score.shape)
    return float(offset[best]), float(slope[best])


def _expected_ev(reference: Reference, found: Sequence[Minimum]) -> FloatArray:
    """Where the line should stand for each minimum that may be it: further above the maximum the wider it is; eV."""
    if reference.maximum_ev is None:
        return np.full(len(found), reference.minimum_ev)
    return reference.maximum_ev + np.array([m.width_ev for m in found]) / FWHM_PER_SIGMA


def _worth(found: Sequence[Minimum]) -> tuple[FloatArray, FloatArray]:
    """Energies, and how fit each minimum is to be a line of the metal itself, 0 to 1."""
    energy = np.array([m.energy_ev for m in found])
    depth = np.array([m.depth for m in found])
    significance = np.array([m.significance for m in found])
    if not energy.size:
        return energy, depth
    near = np.abs(energy[:, None] - energy[None, :]) <= NEIGHBOURS_EV
    deepest = np.max(np.where(near, depth[None, :], 0.0), axis=1)
    return energy, np.sqrt(depth / deepest) * (0.4 + 0.6 * np.minimum(1.0, significance / 15.0))


def _clear_of_oxide(metal: str, found: Sequence[Minimum]) -> FloatArray:
    """0 for the minima that are an oxide's line below the metal's, else 1; aluminium is never without an oxide."""
    energy, depth = np.array([m.energy_ev for m in found]), np.array([m.depth for m in found])
    if metal != "Al":
        return np.ones(energy.size)
    above = energy[None, :] - energy[:, None]
    metallic = (above > OXIDE_EV[0]) & (above < OXIDE_EV[1]) & (depth[None, :] > OXIDE_PART * depth[:, None])
    return np.where(np.any(metallic & (energy[:, None] > 1000.0), axis=1), 0.0, 1.0)


def pair_lines(minima: Mapping[str, Sequence[Minimum]], offset_ev: float, slope: float, loose_ev: float) -> list[Pair]:
    """Pair every line with the minimum nearest to it on an axis that is good to `loose_ev`; no minimum serves twice."""
    pairs: list[Pair] = []
    for metal, found in minima.items():
        energy, worth = _worth(found)
        fit = worth * _clear_of_oxide(metal, found)
        taken: set[int] = set()
        for reference in sorted(references(metal), key=lambda r: r.sigma_ev):
            here = _expected_ev(reference, found) * (1.0 + slope) + offset_ev
            away = np.abs(energy - here) / np.hypot(min(reference.sigma_ev, 2.5), loose_ev)
            close = [int(j) for j in np.flatnonzero((away < FAR) & (fit > 0.1)) if int(j) not in taken]
            if close:
                best = max(close, key=lambda j: fit[j] * float(np.exp(-0.5 * away[j] ** 2)))
                taken.add(best)
                pairs.append(_pair(reference, found[best]))
    return _one_silver_line(pairs)


def _pair(reference: Reference, minimum: Minimum) -> Pair:
    half_ev = minimum.width_ev / FWHM_PER_SIGMA
    widened, width_error = 0.0, 0.0
    if reference.maximum_ev is not None:
        widened = reference.maximum_ev + half_ev - reference.minimum_ev
        width_error = WIDTH_TRUST * half_ev
    sigma = float(np.sqrt(reference.sigma_ev**2 + minimum.sigma_ev**2 + width_error**2 + SHAPE_EV**2))
    return Pair(
        reference=reference,
        minimum=minimum,
        transition=reference.row.transition,
        expected_ev=reference.minimum_ev + widened,
        widened_ev=widened,
        sigma_ev=sigma,
    )


def _one_silver_line(pairs: list[Pair]) -> list[Pair]:
    """Take a single minimum of silver's sharp pair for both lines unresolved, somewhere between them."""
    sharp = [pair for pair in pairs if pair.reference.metal == "Ag" and pair.reference.row.role == "sharp"]
    if len(sharp) != 1:
        return pairs
    both = [r.minimum_ev for r in references("Ag") if r.row.role == "sharp"]
    merged = Pair(
        reference=sharp[0].reference,
        minimum=sharp[0].minimum,
        transition="M45N45N45",
        expected_ev=float(np.mean(both)),
        widened_ev=0.0,
        sigma_ev=float(np.hypot(sharp[0].sigma_ev, 0.5 * (max(both) - min(both)))),
    )
    return [merged if pair is sharp[0] else pair for pair in pairs]
