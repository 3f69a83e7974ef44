"""A measured spectrum: one or more windows, what kind of data they hold, and what is known of them."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import Any, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .errors import InputError

Kind = Literal["auto", "direct", "derivative"]
Ordinate = Literal["auto", "n", "en"]
FloatArray = NDArray[np.floating[Any]]


@dataclass(frozen=True, kw_only=True)
class Header:
    """What the file says of the measurement; None where it says nothing."""

    sample: str | None = None
    location: str | None = None
    acquired: str | None = None  # ISO 8601
    institution: str | None = None
    instrument: str | None = None
    operator: str | None = None
    experiment: str | None = None
    technique: str | None = None
    beam_kev: float | None = None
    analyser_mode: str | None = None
    pass_energy: float | None = None  # eV, or retard ratio, as the analyser mode says
    dwell_s: float | None = None  # collection time a point and sweep
    sweeps: int | None = None
    comments: tuple[str, ...] = ()


@dataclass(frozen=True, kw_only=True, eq=False)
class Window:
    """One contiguous scan.

    Parameters
    ----------
    energy_ev : (n,) array
        Kinetic energy in eV, strictly ascending, step need not be constant.
    intensity : (n,) array
        The ordinate: counts, counts per second or arbitrary units; for derivative data per eV or arbitrary.
    """

    energy_ev: FloatArray
    intensity: FloatArray

    def __post_init__(self) -> None:
        energy = np.array(self.energy_ev, dtype=np.float64)
        intensity = np.array(self.intensity, dtype=np.float64)
        if energy.ndim != 1 or energy.shape != intensity.shape:
            raise InputError(
                f"energies {energy.shape} and ordinates {intensity.shape} do not pair up",
                remedy="give two arrays of one dimension and one length",
            )
        if energy.size and not (np.all(np.isfinite(energy)) and np.all(np.diff(energy) > 0)):
            raise InputError("the energies of a window must be finite and strictly ascending")
        energy.setflags(write=False)
        intensity.setflags(write=False)
        object.__setattr__(self, "energy_ev", energy)
        object.__setattr__(self, "intensity", intensity)

    @property
    def range_ev(self) -> tuple[float, float]:
        """Lowest and highest energy in eV."""
        return float(self.energy_ev[0]), float(self.energy_ev[-1])

    @property
    def step_ev(self) -> float:
        """Median step in eV."""
        return float(np.median(np.diff(self.energy_ev)))


@dataclass(frozen=True, kw_only=True, eq=False)
class Spectrum:
    """One spectrum, immutable. `windows` ascend in energy; `kind` may still be "auto"."""

    windows: tuple[Window, ...]
    kind: Kind = "auto"
    ordinate: Ordinate = "auto"
    counts: bool | None = None  # True when the ordinate is raw counts, None when not known
    name: str = "arrays"
    sha256: str | None = None
    header: Header = field(default_factory=Header)
    warnings: tuple[str, ...] = ()

    @classmethod
    def from_arrays(
        cls,
        energy_ev: ArrayLike,
        intensity: ArrayLike,
        *,
        kind: Kind = "auto",
        ordinate: Ordinate = "auto",
        name: str = "arrays",
        header: Header | None = None,
    ) -> Spectrum:
        """Make a spectrum of one window from arrays of energies (eV) and ordinates, ascending or descending."""
        energy = np.asarray(energy_ev, dtype=np.float64)
        values = np.asarray(intensity, dtype=np.float64)
        if energy.ndim == 1 and energy.size > 1 and energy[0] > energy[-1]:
            energy, values = energy[::-1], values[::-1]
        window = Window(energy_ev=energy, intensity=values)
        return cls(windows=(window,), kind=kind, ordinate=ordinate, name=name, header=header or Header())

    @property
    def ranges_ev(self) -> tuple[tuple[float, float], ...]:
        """Lowest and highest energy of every window, in eV."""
        return tuple(window.range_ev for window in self.windows)

    def crop(self, low_ev: float, high_ev: float) -> Spectrum:
        """Keep what lies between two energies; windows left with fewer than two points go."""
        kept = []
        for window in self.windows:
            inside = (window.energy_ev >= low_ev) & (window.energy_ev <= high_ev)
            if np.count_nonzero(inside) > 1:
                kept.append(Window(energy_ev=window.energy_ev[inside], intensity=window.intensity[inside]))
        if not kept:
            raise InputError(
                f"nothing was recorded between {low_ev:g} and {high_ev:g} eV",
                source=self.name,
                remedy=f"the spectrum covers {format_ranges(self.ranges_ev)}",
            )
        return replace(self, windows=tuple(kept))


def format_ranges(ranges_ev: tuple[tuple[float, float], ...]) -> str:
    """Say the ranges of a spectrum in words, in eV."""
    return ", ".join(f"{low:.0f} to {high:.0f} eV" for low, high in ranges_ev)
