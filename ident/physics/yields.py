"""What becomes of a vacancy: fluorescence, Coster-Kronig transfer within its shell, Auger decay.

Yields are parts of one. For an inner vacancy fluorescence + transfer + Auger = 1.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
# Lowest power of Z first.
BAMBYNEK_K = (0.0370, 0.03112, 5.44e-5, -1.25e-6)
COHEN_L = (0.17765, 0.00298937, 8.91297e-5, -2.67184e-7)


def fluorescence_yield_k(z: ArrayLike) -> FloatArray:
    """Fluorescence yield of the K shell; W. Bambynek (1984), as in Hubbell et al. (1994), coefficients from memory.

    [w / (1 - w)]^(1/4) = 0.0370 + 0.03112 Z + 5.44e-5 Z^2 - 1.25e-6 Z^3; J. H. Hubbell et al., J. Phys. Chem. Ref.
    Data 23 (1994) 339, doi 10.1063/1.555955. Within 5 % from Z = 20 up, 10 to 50 % below.

    >>> round(float(fluorescence_yield_k(29)), 2)  # M. O. Krause (1979) has 0.440
    0.45
    """
    return _from_root(np.polynomial.polynomial.polyval(np.asarray(z, dtype=float), BAMBYNEK_K))


def fluorescence_yield_l(z: ArrayLike) -> FloatArray:
    """Mean fluorescence yield of the L shell, D. D. Cohen (1987), as in Hubbell et al. (1994), from memory.

    [w / (1 - w)]^(1/4) = 0.17765 + 0.00298937 Z + 8.91297e-5 Z^2 - 2.67184e-7 Z^3. For 28 <= Z <= 96.

    >>> round(float(fluorescence_yield_l(79)), 2)  # M. O. Krause (1979), L3 of gold: 0.32
    0.33
    """
    return _from_root(np.polynomial.polynomial.polyval(np.asarray(z, dtype=float), COHEN_L))


def fluorescence_yield_m(z: ArrayLike) -> FloatArray:
    """Mean fluorescence yield of the M shell, 1.29e-9 (Z - 13)^4; Hubbell et al. (1994), from memory.

    Fitted for 19 <= Z <= 100; the yield is below 1 % before Z = 66.

    >>> round(float(fluorescence_yield_m(79)), 3)  # evaluated M5 of gold: 0.026
    0.024
    """
    return 1.29e-9 * np.maximum(np.asarray(z, dtype=float) - 13.0, 0.0) ** 4


def _from_root(root: ArrayLike) -> FloatArray:
    ratio = np.asarray(root, dtype=float) ** 4
    out: FloatArray = ratio / (1.0 + ratio)
    return out


def auger_yield(fluorescence: ArrayLike, transfer: ArrayLike = 0.0) -> FloatArray:
    """Part of the vacancies that decay by an Auger transition to outer shells: 1 - fluorescence - transfer.

    Parameters
    ----------
    fluorescence, transfer : array_like
        Fluorescence yield, and sum of the Coster-Kronig probabilities out of the level. Sums above one are an error.

    >>> round(float(auger_yield(0.0117, 0.0)), 4)
    0.9883
    """
    left = 1.0 - np.asarray(fluorescence, dtype=float) - np.asarray(transfer, dtype=float)
    if np.any(left < -1e-9):
        raise ValueError("fluorescence yield and Coster-Kronig probabilities add up to more than one")
    return np.maximum(left, 0.0)


def with_transfer(made: ArrayLike, transfer: Mapping[tuple[int, int], float]) -> FloatArray:
    """Vacancies of the subshells of a shell after Coster-Kronig transfer, each counted where it was and will be.

    n_i = made_i + sum over j < i of f_ji n_j: L3 gets f23 of what L2 has, L2 f12 of what L1 has, L3 f13 of that too.
    Every vacancy is counted once in each subshell that it passes; those that stay are n_i (1 - sum of f_ij), and
    their sum is that of `made`.

    Parameters
    ----------
    made : array_like, shape (n,) or (n, m)
        Vacancies made by ionisation, innermost subshell first.
    transfer : mapping
        Probabilities by places (from, to), from < to.

    >>> [round(float(n), 3) for n in with_transfer([1.0, 1.0, 2.0], {(0, 1): 0.3, (0, 2): 0.5, (1, 2): 0.1})]
    [1.0, 1.3, 2.63]
    """
    out = np.array(made, dtype=float)
    for (source, target), part in sorted(transfer.items()):
        if not 0 <= source < target < len(out):
            raise ValueError(f"transfer {source} to {target}: must go to an outer one of {len(out)} subshells")
        out[target] += part * out[source]
    return out
