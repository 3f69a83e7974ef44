"""Shapes on the energy axis: one Auger line with its losses, the background, the states that move lines.

Everything here is E·N(E), in units in which a pure strong element's derivative minimum is 1 deep per eV at
the handbooks' resolution (0.5 %). The numbers are common practice or rough recall, no source, unless a line
says otherwise: the point is variety of the right kind, not any one instrument.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

FloatArray = NDArray[np.float64]

FWHM = 2.3548  # full width at half height of a Gaussian, in standard deviations
HANDBOOK_RESOLUTION = 0.005  # cylindrical mirror analyser of the handbooks
FIELDS = 4  # attenuation lengths after which a tail is left out

# Bulk plasmon energies in eV (textbook values, from memory); others are drawn between 12 and 26 eV.
PLASMON_EV = {
    "Li": 7.1, "Be": 18.7, "Na": 5.7, "Mg": 10.6, "Al": 15.3, "Si": 16.7, "K": 3.7, "Ge": 16.2, "Sn": 13.7,
    "In": 11.5, "Ga": 13.8, "Sb": 15.3, "Bi": 14.2, "Pb": 13.5, "Zn": 17.0, "Cd": 15.0, "Ti": 17.7, "C": 25.0,
}  # fmt: skip

# Shift in eV of (core, valence) lines from the state of the published row to the oxide or another oxidised
# state; sizes as compiled in the literature (direct and derivative values mixed, rounded).
OXIDE_SHIFT_EV = {
    "Li": (-6.0, -7.0), "Be": (-9.0, -10.0), "B": (-9.0, -10.0), "Mg": (-5.5, -13.0), "Al": (-6.5, -17.0),
    "Si": (-8.0, -16.0), "P": (-7.0, -12.0), "S": (-7.0, -12.0), "Ti": (-3.5, -3.5), "V": (-3.0, -3.0),
    "Cr": (-3.0, -3.5), "Mn": (-2.5, -3.0), "Fe": (-2.5, -2.5), "Co": (-2.0, -2.0), "Ni": (-1.5, -2.0),
    "Cu": (-1.8, -1.5), "Zn": (-3.8, -3.8), "Ga": (-5.5, -5.5), "Ge": (-7.5, -7.0), "As": (-6.2, -6.0),
    "Ag": (-1.2, -1.2), "Cd": (-1.6, -1.6), "In": (-3.8, -3.8), "Sn": (-4.6, -4.6), "Te": (-5.1, -5.0),
    "Ba": (-1.0, -4.0),
}  # fmt: skip
OTHER_SHIFT_EV = (-3.0, -3.0)


@dataclass(frozen=True, kw_only=True)
class Losses:
    """What an element's electrons lose on the way out; fractions of the line's height."""

    step: float
    step_length_ev: float
    tail: float
    tail_length_ev: float
    plasmon: float
    plasmon_ev: float
    satellite: float
    satellite_ev: float  # above the line


def draw_losses(rng: np.random.Generator, element: str) -> Losses:
    """Draw one element's losses: step, exponential tail and plasmon companions of 5 to 25 % each."""
    step, tail, plasmon = rng.uniform(0.05, 0.25, 3)
    return Losses(
        step=step,
        step_length_ev=rng.uniform(120, 400),
        tail=tail,
        tail_length_ev=rng.uniform(6, 16),
        plasmon=plasmon if element in PLASMON_EV else 0.5 * plasmon,
        plasmon_ev=PLASMON_EV.get(element) or rng.uniform(12, 26),
        satellite=rng.uniform(0.02, 0.06) if rng.random() < 0.5 else 0.0,
        satellite_ev=rng.uniform(6, 13),
    )


@dataclass(frozen=True, kw_only=True)
class Emission:
    """One line as emitted, on the spectrum's own axis."""

    element: str
    name: str  # transition, or "unlisted"
    peak_ev: float  # maximum of E·N(E)
    sigma_ev: float  # Gaussian standard deviation on the high-energy side
    sigma_low_ev: float  # and on the low-energy side
    height: float
    losses: Losses

    @property
    def minimum_ev(self) -> float:
        """Energy of the derivative minimum in eV."""
        return self.peak_ev + self.sigma_ev


def line_core(energy_ev: FloatArray, line: Emission) -> FloatArray:
    """Return the line without losses and satellite: the part that stands up as a minimum; shape (n,)."""
    x = energy_ev - line.peak_ev
    return line.height * np.exp(-0.5 * (x / np.where(x > 0, line.sigma_ev, line.sigma_low_ev)) ** 2)


def line_shape(energy_ev: FloatArray, line: Emission) -> FloatArray:
    """Return one line with its losses, satellite included, in E·N(E); shape (n,)."""
    loss, out = line.losses, np.zeros_like(energy_ev)
    reach = FIELDS * loss.step_length_ev
    first, last = np.searchsorted(energy_ev, [line.peak_ev - reach, line.peak_ev + 7 * line.sigma_ev + 20])
    x = energy_ev[first:last] - line.peak_ev
    sigma = np.where(x > 0, line.sigma_ev, line.sigma_low_ev)
    shape = np.exp(-0.5 * (x / sigma) ** 2)
    below = np.minimum(x, 0.0)
    shape += ndtr(-x / line.sigma_ev) * (
        loss.step * np.exp(below / loss.step_length_ev) + loss.tail * np.exp(below / loss.tail_length_ev)
    )
    for order, part in ((1, loss.plasmon), (2, 0.4 * loss.plasmon)):
        width = np.hypot(line.sigma_low_ev, 0.15 * loss.plasmon_ev * order)
        shape += part * np.exp(-0.5 * ((x + order * loss.plasmon_ev) / width) ** 2)
    if loss.satellite:
        shape += loss.satellite * np.exp(-0.5 * ((x - loss.satellite_ev) / (1.2 * line.sigma_ev)) ** 2)
    out[first:last] = line.height * shape
    return out


@dataclass(frozen=True, kw_only=True)
class Background:
    """Secondary cascade, its power-law tail and backscattered electrons, in E·N(E)."""

    level: float  # at 500 eV
    power_part: float  # of the level at 500 eV
    power: float
    scattered_power: float
    cascade: float  # height of the secondary cascade at 20 eV, in levels
    cascade_ev: float  # work-function-like constant of the cascade


def draw_background(rng: np.random.Generator) -> Background:
    """Draw a background on which a pure element's line stands 10 to 60 % high."""
    line = 3.6  # E·N(E) of a line 1 deep, 5 eV wide
    return Background(
        level=line / np.exp(rng.uniform(np.log(0.1), np.log(0.6))),
        power_part=rng.uniform(0.2, 0.7),
        power=rng.uniform(0.1, 0.5),
        scattered_power=rng.uniform(0.4, 1.1),
        cascade=rng.uniform(1.5, 7.0),
        cascade_ev=rng.uniform(3.5, 6.0),
    )


def background_shape(energy_ev: FloatArray, back: Background) -> FloatArray:
    """Return the background in E·N(E); steep below 50 eV, rising again at high energy."""
    energy = np.logaddexp(energy_ev / 4.0, 3.0) * 4.0  # levels off below 12 eV, the top of the cascade
    cascade = energy**2 / (energy + back.cascade_ev) ** 4
    at_20 = 20.0**2 / (20.0 + back.cascade_ev) ** 4
    smooth = back.power_part * (energy / 500.0) ** -back.power
    smooth += (1 - back.power_part) * (energy / 500.0) ** back.scattered_power
    return back.level * (smooth + back.cascade * cascade / at_20)


def attenuation(energy_ev: FloatArray | float, film_nm: float, cosine: float = 0.74) -> FloatArray:
    """Return what a film lets through: exp(-d / (lambda cos)).

    Mean free path: Seah and Dench, Surf. Interface Anal. 1 (1979) 2, elements, monolayers of 0.25 nm.
    """
    energy = np.maximum(np.asarray(energy_ev, dtype=np.float64), 20.0)
    length_nm = 0.25 * (538.0 / energy**2 + 0.41 * np.sqrt(0.25 * energy))
    let_through: FloatArray = np.exp(-film_nm / (length_nm * cosine))
    return let_through
