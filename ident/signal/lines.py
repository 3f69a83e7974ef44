"""The shape of a differential line.

A line is an asymmetric peak: a Gaussian of standard deviation sigma on its high-energy side, a wider one
on its low-energy side where losses are. Its derivative has a shallow positive lobe, then a deep minimum one
sigma above the peak. Shapes here have their minimum at zero and depth one.
"""

from __future__ import annotations

import numpy as np

from ..spectrum import FloatArray

ASYMMETRY = 1.6  # low-energy over high-energy width; common practice, no source


def line_shape(offset_ev: FloatArray, sigma_ev: FloatArray | float, lean: FloatArray | float = ASYMMETRY) -> FloatArray:
    """Differential line of depth one with its minimum at zero; eV from the minimum in, shape out.

    `lean` is the width on the low-energy side over that on the high-energy side.
    """
    u = (offset_ev + sigma_ev) / sigma_ev
    low = u < 0
    v = np.where(low, u / lean, u)
    lobe = np.where(low, 1.0 / lean, 1.0)
    shape: FloatArray = -lobe * v * np.exp(0.5 - 0.5 * v * v)
    return shape
