"""The energy axis: its priors and its fit. Axis = absolute + offset + slope * absolute, in eV."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .spectrum import FloatArray

# Axes are set by handbook minima more often than by the Fermi level; the prior sits between, nearer the handbooks
# (see physics.levels for the line that ties the two).
OFFSET_CENTRE_EV, SLOPE_CENTRE = -2.4, 0.0019
OFFSET_SIGMA_EV = 3.0
SLOPE_SIGMA = 0.003
INSULATOR_SIGMA_EV = 30.0
ELEMENT_SIGMA_EV = 1.5  # what chemistry moves an element's core lines by, before any state is known
CHARGING_FROM_EV = 8.0  # an offset beyond this is charging rather than calibration


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
    offset_sigma_ev: float = OFFSET_SIGMA_EV,
    slope_sigma: float = SLOPE_SIGMA,
) -> AxisFit:
    """Fit offset, slope and element shifts to deviations (n,) of minima from absolute lines (n,), with priors.

    Least squares with Gaussian priors on all parameters; deviations beyond three sigma are weighed down, so
    that one wrong pairing does not carry the axis away.
    """
    count = absolute_ev.size
    design = np.zeros((count, 2 + elements))
    design[:, 0] = 1.0
    design[:, 1] = absolute_ev / 1000.0
    design[np.arange(count), 2 + element] = 1.0
    prior = np.concatenate(
        [[offset_sigma_ev**-2, (1000.0 * slope_sigma) ** -2], np.full(elements, ELEMENT_SIGMA_EV**-2)]
    )
    centre = np.concatenate([[OFFSET_CENTRE_EV, 1000.0 * SLOPE_CENTRE], np.zeros(elements)])
    weight = sigma_ev**-2
    information = np.diag(prior)
    solution = np.zeros(2 + elements)
    for _ in range(4):
        information = design.T @ (design * weight[:, None]) + np.diag(prior)
        solution = np.linalg.solve(information, design.T @ (weight * deviation_ev) + prior * centre)
        off = (deviation_ev - design @ solution) / sigma_ev
        weight = sigma_ev**-2 / np.maximum(1.0, (off / 2.5) ** 2)
    covariance = np.linalg.inv(information)
    unit = np.diag([1.0, 1e-3])
    return AxisFit(
        offset_ev=float(solution[0]),
        slope=float(solution[1]) / 1000.0,
        covariance=unit @ covariance[:2, :2] @ unit,
        shifts_ev=solution[2:],
        shift_sigmas_ev=np.sqrt(np.diag(covariance)[2:]),
    )
