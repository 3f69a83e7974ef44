"""Widths of levels by the lifetime of a hole in them, as smooth functions of the atomic number.

Numbers only, so that a width costs no library and no table. The polynomials were fitted to the level widths of
J. L. Campbell and T. Papp, At. Data Nucl. Data Tables 77 (2001) 1, doi 10.1006/adnd.2000.0848, as the registry
library xraylib 4.3 carries them (tests/strengths fits them anew and compares with xraydb, too).
"""

from __future__ import annotations

import math

# Level: lowest and highest Z of the fit, coefficients of ln(width / eV) in ln(Z / 50), highest power first, and the
# scatter about the fit as a factor.
LIFETIMES: dict[str, tuple[int, int, tuple[float, ...], float]] = {
    "K": (10, 92, (0.041, 0.946, 3.535, 2.128), 1.06),
    "L1": (11, 92, (2.653, 2.890, 0.219, 1.114), 1.3),
    "L2": (10, 92, (0.630, -0.141, 1.708, 0.939), 1.2),
    "L3": (10, 92, (0.157, -0.486, 2.125, 0.860), 1.1),
    "M1": (22, 92, (-0.680, 1.647, 2.114), 1.2),
    "M23": (20, 92, (-1.721, -0.407, 2.177, 1.345), 1.25),
    "M45": (32, 92, (-1.681, -0.800, 4.800, -1.068), 1.2),
    "N1": (40, 92, (1.841, 1.242), 1.25),
    "N23": (43, 92, (0.714, 1.225), 1.8),
    "N45": (58, 92, (-19.309, 18.408, -2.876), 1.2),
    "N67": (76, 92, (-1.530,), 1.35),
}
VALENCE_BELOW_Z = {"M1": 19, "M23": 21, "N1": 37, "N23": 39, "M45": 30, "N45": 48, "N67": 71}
GROUP = {
    "L23": "L3", "M2": "M23", "M3": "M23", "M4": "M45", "M5": "M45", "N2": "N23", "N3": "N23", "N4": "N45", "N5": "N45",
    "N6": "N67", "N7": "N67",
}  # fmt: skip


def level_width_ev(z: int, level: str) -> float:
    """Full width at half maximum (Lorentzian) of a level or group of levels by its lifetime, in eV.

    Beyond the Z of a fit its end holds; where the level is a valence level, and further out than N67, the lifetime
    does not show: 0.

    >>> round(level_width_ev(29, "L3"), 2)  # Campbell and Papp: 0.56 (xraylib has 0.61)
    0.63
    """
    name = level if level in LIFETIMES else GROUP.get(level, "")
    if name not in LIFETIMES or z < VALENCE_BELOW_Z.get(name, 0):
        return 0.0
    lowest, highest, coefficients, _ = LIFETIMES[name]
    x = math.log(min(max(z, lowest), highest) / 50.0)
    value = 0.0
    for coefficient in coefficients:
        value = value * x + coefficient
    return math.exp(value)
