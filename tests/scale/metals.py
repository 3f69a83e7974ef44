"""Synthetic spectra of reference metals on an axis that is known, from published energies and not from the tables.

Direct maxima from the Fermi level: Al KL23L23 1393.0 (Surf. Interface Anal. 33/34 (2002), doi 10.1002/sia.1316), Cu
L3M45M45 918.6, Ag M4N45N45 357.8 and M5N45N45 351.9, Au M5N67N67 2015.8 (from memory; binding energies plus Auger
parameters agree). Minima on the handbooks' scale: Cu 60, Au 69 and 239 (Surf. Sci. 1983), the rest from memory.
Contaminants C 272 and O 503, handbook practice, from memory.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ident.spectrum import Spectrum, Window
from tests.benchmarks.recording import Recording, record
from tests.benchmarks.shapes import (
    Emission,
    background_shape,
    draw_background,
    draw_losses,
    line_core,
    line_shape,
)

# metal: (energy, direct maximum from the Fermi level?, natural width, relative height, scatter between sources); eV
LINES = {
    "Al": ((1393.0, True, 2.5, 0.4, 0.2), (68.0, False, 7.0, 1.0, 1.5)),
    "Cu": (
        (918.6, True, 2.5, 1.0, 0.1),
        (849.0, False, 4.5, 0.35, 1.5),
        (776.0, False, 5.0, 0.25, 1.5),
        (940.0, False, 3.0, 0.15, 1.5),
        (60.0, False, 4.5, 0.9, 1.5),
    ),
    "Ag": ((357.8, True, 2.0, 0.9, 0.1), (351.9, True, 2.0, 0.9, 0.2), (304.0, False, 5.5, 0.15, 1.5)),
    "Au": ((2015.8, True, 3.0, 0.25, 0.2), (69.0, False, 7.0, 1.0, 1.5), (239.0, False, 6.0, 0.15, 1.5)),
}
CONTAMINANTS = ((272.0, False, 8.0, 0.15, 1.5), (503.0, False, 6.0, 0.1, 1.5))
SIGMAS_PER_FWHM = 1.0 / 2.3548
# Handbook minimum and direct Fermi-referenced maximum of the same line, from memory.
ANCHORS = ((356.0, 357.8), (920.0, 918.6), (1396.0, 1393.0), (2024.0, 2015.8))


@dataclass(frozen=True, kw_only=True)
class Axis:
    """The spectrum's axis: own = true + offset + slope * true."""

    offset_ev: float = 0.0
    slope: float = 0.0

    def place(self, energy_ev: float) -> float:
        return energy_ev * (1.0 + self.slope) + self.offset_ev


def half_width_ev(maximum_ev: float, natural_ev: float, resolution: float) -> float:
    """One standard deviation of a line as recorded: so far the derivative minimum stands above the maximum."""
    return math.hypot(natural_ev, resolution * maximum_ev) * SIGMAS_PER_FWHM


def fermi_minimum_ev(handbook_ev: float) -> float:
    """Minimum above the Fermi level of a line for which a handbook is all there is: a straight line by anchors."""
    handbook = np.array([anchor[0] for anchor in ANCHORS])
    minima = np.array([top + half_width_ev(top, 2.5, 0.005) for _, top in ANCHORS])
    slope, offset = np.polyfit(handbook, minima - handbook, 1)
    return float(handbook_ev + offset + slope * handbook_ev)


def metal_spectrum(
    metal: str,
    axis: Axis,
    seed: int,
    *,
    range_ev: tuple[float, float] = (30.0, 2100.0),
    resolution: float = 0.005,
    signal_to_noise: float = 120.0,
    mode: str = "direct",
    dirt: float = 1.0,
) -> Spectrum:
    """Record a metal with some carbon and oxygen on it."""
    rng = np.random.default_rng([ord(metal[0]), ord(metal[1]), seed])
    energy = np.arange(*range_ev, 0.5 if range_ev[1] - range_ev[0] < 400 else 1.0)
    rows = [*LINES[metal], *((e, d, w, dirt * h, s) for e, d, w, h, s in CONTAMINANTS)]
    losses = draw_losses(rng, metal)
    emitted = []
    for stated, direct, natural, height, scatter in rows:
        moved = stated + rng.normal(0.0, scatter)
        top = moved if direct else fermi_minimum_ev(moved) - half_width_ev(stated, natural, 0.005)
        sigma, usual = half_width_ev(top, natural, resolution), half_width_ev(top, natural, 0.005)
        emitted.append(
            Emission(
                element=metal,
                name=f"{stated:g}",
                peak_ev=axis.place(top),
                sigma_ev=sigma,
                sigma_low_ev=1.25 * sigma,
                height=height * math.exp(rng.normal(0.0, 0.2) + 0.5) * usual**2 / sigma,
                losses=losses,
            )
        )
    how = Recording(
        resolution=resolution,
        mode=mode,  # type: ignore[arg-type]
        times_energy=True,
        unit="counts",
        signal_to_noise=signal_to_noise,
        dwell_s=0.1,
        modulation_ev=1.5,
        upside_down=False,
        gains=(1.0,),
        spikes=0,
        dead=0,
    )
    shapes = np.array([line_shape(energy, line) for line in emitted])
    cores = np.array([line_core(energy, line) for line in emitted])
    base = background_shape(energy - axis.offset_ev, draw_background(rng))
    taken = record(rng, (energy,), how, base=base, shapes=shapes, cores=cores)
    window = Window(energy_ev=energy, intensity=taken.values[0])
    return Spectrum(windows=(window,), name=f"{metal}, made up")
