"""Spectra of one sitting share the axis: what the others say of it becomes the prior of each."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..spectrum import FloatArray
from .axis import AxisPrior

DRIFT_EV, DRIFT_SLOPE = 0.3, 1e-4  # between spectra of one sitting (common practice, no source)
WIDENING = 2.0  # of every fit's variances: a fit does not know whether it paired the right lines
MOST_AWAY = 4.0  # standard deviations beyond which a spectrum does not belong to the sitting
LEAST_LINES = 3  # fewer lines place no axis


@dataclass(frozen=True, kw_only=True, eq=False)
class FittedAxis:
    """Axis of one spectrum as it was inferred on its own."""

    name: str
    offset_ev: float
    slope: float
    covariance: FloatArray  # (2, 2) of offset in eV and slope, the prior included
    lines: int  # that it rests on


@dataclass(frozen=True, kw_only=True)
class Sitting:
    """What the other spectra of a sitting say of the axis of one."""

    offset_ev: float
    offset_sigma_ev: float
    slope: float
    slope_sigma: float
    correlation: float  # of offset and slope
    spectra: tuple[str, ...]  # the others, by name

    def prior(self) -> AxisPrior:
        """Give it as the prior of the spectrum's axis."""
        shared = self.correlation * self.offset_sigma_ev * self.slope_sigma
        covariance = np.array([[self.offset_sigma_ev**2, shared], [shared, self.slope_sigma**2]])
        return AxisPrior(offset_ev=self.offset_ev, slope=self.slope, covariance=covariance)

    def summary(self) -> str:
        """Say in a few words what it is."""
        count = len(self.spectra)
        return f"shared with {count} other {'spectrum' if count == 1 else 'spectra'} of the sitting"


def find_sittings(fits: Sequence[FittedAxis | None], prior: AxisPrior) -> tuple[Sitting | None, ...]:
    """What the others say of each axis (n,); None for one without a fit, or one that the others contradict.

    Each fit is the product of the prior and what its spectrum says; the prior is taken out of every one and put
    in once. A spectrum that stands more than four standard deviations from the others is left out by all.
    """
    trusted = [fit is not None and fit.lines >= LEAST_LINES for fit in fits]
    for _ in range(len(fits)):
        away = [_away(fits, place, trusted, prior) if trusted[place] else 0.0 for place in range(len(fits))]
        worst = int(np.argmax(away)) if away else 0
        if not away or away[worst] <= MOST_AWAY or sum(trusted) < 3:
            break
        trusted[worst] = False
    return tuple(_sitting(fits, place, trusted, prior) for place in range(len(fits)))


def _others(
    fits: Sequence[FittedAxis | None], place: int, trusted: Sequence[bool], prior: AxisPrior
) -> tuple[FloatArray, FloatArray, tuple[str, ...]] | None:
    """Mean and covariance from all trusted spectra but one, and their names."""
    known = np.linalg.inv(prior.covariance)
    information = known.copy()
    weighed = known @ np.array([prior.offset_ev, prior.slope])
    names = []
    for other, fit in enumerate(fits):
        if fit is None or other == place or not trusted[other]:
            continue
        total = np.linalg.inv(fit.covariance)
        said = total - known
        information += said / WIDENING
        centre = total @ np.array([fit.offset_ev, fit.slope]) - known @ np.array([prior.offset_ev, prior.slope])
        weighed += centre / WIDENING
        names.append(fit.name)
    if not names:
        return None
    covariance = np.linalg.inv(information)
    return covariance @ weighed, covariance + np.diag([DRIFT_EV**2, DRIFT_SLOPE**2]), tuple(names)


def _away(fits: Sequence[FittedAxis | None], place: int, trusted: Sequence[bool], prior: AxisPrior) -> float:
    """How far a fit stands from what the others say, in standard deviations."""
    fit, others = fits[place], _others(fits, place, trusted, prior)
    if fit is None or others is None:
        return 0.0
    centre, covariance, _ = others
    away = np.array([fit.offset_ev, fit.slope]) - centre
    return math.sqrt(float(away @ np.linalg.solve(covariance + WIDENING * fit.covariance, away)))


def _sitting(
    fits: Sequence[FittedAxis | None], place: int, trusted: Sequence[bool], prior: AxisPrior
) -> Sitting | None:
    fit, others = fits[place], _others(fits, place, trusted, prior)
    if fit is None or others is None:
        return None
    if not trusted[place] and fit.lines >= LEAST_LINES and _away(fits, place, trusted, prior) > MOST_AWAY:
        return None
    centre, covariance, names = others
    offset_sigma, slope_sigma = math.sqrt(float(covariance[0, 0])), math.sqrt(float(covariance[1, 1]))
    return Sitting(
        offset_ev=float(centre[0]),
        offset_sigma_ev=offset_sigma,
        slope=float(centre[1]),
        slope_sigma=slope_sigma,
        correlation=float(covariance[0, 1]) / (offset_sigma * slope_sigma),
        spectra=names,
    )
