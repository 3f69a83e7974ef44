"""The prior of the energy axis, and its fit. Axis = absolute + offset + slope * absolute, in eV."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..spectrum import FloatArray

# Axes are set by handbook minima more often than by the Fermi level; the prior sits between, nearer the handbooks
# (see physics.levels for the line that ties the two).
OFFSET_CENTRE_EV, SLOPE_CENTRE = -2.4, 0.0019
OFFSET_SIGMA_EV = 3.0
SLOPE_SIGMA = 0.003
INSULATOR_SIGMA_EV = 30.0
ELEMENT_SIGMA_EV = 1.5  # what chemistry moves an element's core lines by, before any state is known
CHARGING_FROM_EV = 8.0  # an offset beyond this is charging rather than calibration
SLACK_EV = 1.0  # by which an offset may leave the prior before it costs, since the fit shares it with chemistry


@dataclass(frozen=True, kw_only=True, eq=False)
class AxisPrior:
    """What is known of an axis before its spectrum is looked at: offset and slope, with their covariance (2, 2)."""

    offset_ev: float
    slope: float
    covariance: FloatArray  # of offset in eV and slope

    def price(self, offset_ev: float, slope: float) -> float:
        """What an axis costs that is away from the prior, natural logarithm of odds."""
        away = np.array([offset_ev - self.offset_ev, slope - self.slope])
        loosened = self.covariance + np.diag([SLACK_EV**2, 0.0])
        return 0.5 * float(away @ np.linalg.solve(loosened, away))

    def of_insulator(self) -> AxisPrior:
        """Give the same axis for a sample that may charge: its offset is open, its slope is not."""
        open_offset = max(INSULATOR_SIGMA_EV**2 - self.covariance[0, 0], 0.0)
        return replace(self, covariance=self.covariance + np.diag([open_offset, 0.0]))


def usual_axis() -> AxisPrior:
    """Give the prior of an axis of which nothing is known."""
    covariance = np.diag([OFFSET_SIGMA_EV**2, SLOPE_SIGMA**2])
    return AxisPrior(offset_ev=OFFSET_CENTRE_EV, slope=SLOPE_CENTRE, covariance=covariance)


@dataclass(frozen=True, kw_only=True, eq=False)
class AxisFit:
    """Offset, slope and one shift per element, with the covariance of offset and slope (2, 2)."""

    offset_ev: float
    slope: float
    covariance: FloatArray
    shifts_ev: FloatArray  # (elements,)
    shift_sigmas_ev: FloatArray


def fit_axis(
    absolute_ev: FloatArray,
    deviation_ev: FloatArray,
    sigma_ev: FloatArray,
    element: np.ndarray,
    elements: int,
    *,
    prior: AxisPrior,
) -> AxisFit:
    """Fit offset, slope and element shifts to deviations (n,) of minima from absolute lines (n,), with priors.

    Least squares with Gaussian priors on all parameters, that of the axis being `prior`; deviations beyond three
    sigma are weighed down, so that one wrong pairing does not carry the axis away.
    """
    count = absolute_ev.size
    design = np.zeros((count, 2 + elements))
    design[:, 0] = 1.0
    design[:, 1] = absolute_ev / 1000.0
    if elements:
        design[np.arange(count), 2 + element] = 1.0
    unit = np.diag([1.0, 1e-3])
    known = np.zeros((2 + elements, 2 + elements))
    known[2:, 2:] = np.eye(elements) * ELEMENT_SIGMA_EV**-2
    known[:2, :2] = unit @ np.linalg.inv(prior.covariance) @ unit
    centre = np.concatenate([[prior.offset_ev, 1000.0 * prior.slope], np.zeros(elements)])
    weight = sigma_ev**-2
    information = known
    solution = np.zeros(2 + elements)
    for _ in range(4):
        information = design.T @ (design * weight[:, None]) + known
        solution = np.linalg.solve(information, design.T @ (weight * deviation_ev) + known @ centre)
        off = (deviation_ev - design @ solution) / sigma_ev
        weight = sigma_ev**-2 / np.maximum(1.0, (off / 2.5) ** 2)
    covariance = np.linalg.inv(information)
    return AxisFit(
        offset_ev=float(solution[0]),
        slope=float(solution[1]) / 1000.0,
        covariance=unit @ covariance[:2, :2] @ unit,
        shifts_ev=solution[2:],
        shift_sigmas_ev=np.sqrt(np.diag(covariance)[2:]),
    )
