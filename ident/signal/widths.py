"""How narrow and how wide a line can be at an energy; widths are Gaussian standard deviations in eV.

The minimum of a differential line stands one such width above the maximum of the direct line.
"""

from __future__ import annotations

import numpy as np

from ..spectrum import FloatArray

FWHM_PER_SIGMA = 2.3548
# Analysers of scanning microprobes resolve 0.3 to 0.9 % of the energy (common practice, no source).
BEST_RESOLUTION, USUAL_RESOLUTION, WORST_RESOLUTION = 0.0025, 0.006, 0.0095
NATURAL_NARROW_EV, NATURAL_USUAL_EV, NATURAL_BROAD_EV = 0.7, 1.7, 4.2


def narrowest_sigma_ev(energy_ev: FloatArray, resolution: float | None = None) -> FloatArray:
    """Standard deviation of the narrowest line that an analyser passes; (n,) eV in, (n,) eV out."""
    part = (BEST_RESOLUTION if resolution is None else 0.8 * resolution) / FWHM_PER_SIGMA
    return np.hypot(part * energy_ev, NATURAL_NARROW_EV)


def usual_sigma_ev(energy_ev: FloatArray, resolution: float | None = None) -> FloatArray:
    """Standard deviation of an ordinary line; (n,) eV in, (n,) eV out."""
    part = (USUAL_RESOLUTION if resolution is None else resolution) / FWHM_PER_SIGMA
    return np.hypot(part * energy_ev, NATURAL_USUAL_EV)


def widest_sigma_ev(energy_ev: FloatArray, resolution: float | None = None) -> FloatArray:
    """Standard deviation of the widest line still taken for one; (n,) eV in, (n,) eV out."""
    part = (WORST_RESOLUTION if resolution is None else 1.3 * resolution) / FWHM_PER_SIGMA
    return np.hypot(part * energy_ev, NATURAL_BROAD_EV)
