"""The minima of a differential spectrum: where, how deep, how sure, before any element is named."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..errors import InputError
from ..signal import Differential, differentiate, find_saturation, noise_kernels, settle_kind
from ..signal.baseline import slope_baseline
from ..signal.repair import FlatStretch, repair
from ..signal.widths import FWHM_PER_SIGMA, usual_sigma_ev
from ..spectrum import FloatArray, Spectrum, Window
from .pursuit import Feature, filter_field, pursue
from .refine import prune, refine, rendered

THRESHOLD = 3.9  # noise widths
FEWEST_POINTS = 20
# Minima are sought in rounds, each down to this part of the most significant one left, and refined in between, so
# that what a strong line leaves over is not taken for weak ones.
TIERS = (0.3, 0.1, 0.03, 0.0)
SLOPE_TRUST = 0.01  # part of the background's slope that its model may leave behind

__all__ = ["Analysis", "Artefact", "DepthNoise", "Minimum", "analyse"]


@dataclass(frozen=True, kw_only=True)
class Minimum:
    """One minimum of the differential spectrum."""

    energy_ev: float
    sigma_ev: float  # standard deviation of the energy
    depth: float  # below the local level, ordinate per eV; always positive
    peak_to_peak: float  # from the positive lobe below to the minimum
    width_ev: float  # full width at half maximum of the direct line behind it, were it symmetric as above its maximum
    significance: float  # depth over the noise of that depth
    window: int  # which window it was found in, from 0


@dataclass(frozen=True, kw_only=True)
class Artefact:
    """Something in the data that is no line, and what it is."""

    energy_ev: float
    kind: str  # spike, dead point, flat stretch or saturation
    what: str


@dataclass(frozen=True, kw_only=True, eq=False)
class DepthNoise:
    """Noise of the depth of an ordinary line, over one window."""

    energy_ev: FloatArray
    noise: FloatArray


@dataclass(frozen=True, kw_only=True, eq=False)
class Analysis:
    """A spectrum after its minima were found."""

    spectrum: Spectrum
    minima: tuple[Minimum, ...]  # rising in energy
    artefacts: tuple[Artefact, ...]
    warnings: tuple[str, ...]
    differentials: tuple[Differential, ...]
    depth_noise: tuple[DepthNoise, ...]


def analyse(spectrum: Spectrum, *, resolution: float | None = None) -> Analysis:
    """Find the minima of a spectrum of one or more windows.

    Parameters
    ----------
    spectrum : Spectrum
        Direct or differential; told apart when its kind is "auto".
    resolution : float, optional
        Relative resolution of the analyser (0.005 for 0.5 %), when known.

    Raises
    ------
    InputError
        When no window has at least 20 points, or all of them are constant.
    """
    settled, notes = settle_kind(spectrum)
    measured, flat, repairs = repair(settled.windows, fewest=FEWEST_POINTS)
    windows = [w for w in measured if w.energy_ev.size >= FEWEST_POINTS and np.ptp(w.intensity) > 0]
    if not windows:
        raise InputError(
            "no window has 20 points or more that are not all equal",
            source=spectrum.name,
            remedy="a scan of 20 points or more, over 30 eV at least, can be searched",
        )
    settled = replace(settled, windows=tuple(windows))
    minima: list[Minimum] = []
    artefacts: list[Artefact] = [_flat_note(stretch) for stretch in flat]
    differentials, noises = [], []
    derivative = settled.kind == "derivative"
    kernels = noise_kernels(settled.windows, derivative=derivative) if len(windows) > 1 else {}
    for number, window in enumerate(settled.windows):
        kernel = kernels.get(round(window.step_ev, 2))
        differential = differentiate(window, derivative=derivative, resolution=resolution, kernel=kernel)
        found, noise = _search(differential, number, resolution)
        minima.extend(found)
        noises.append(noise)
        differentials.append(differential)
        artefacts.extend(_spike_notes(differential))
        if not derivative:
            artefacts.extend(_saturation_notes(window))
    return Analysis(
        spectrum=settled,
        minima=tuple(sorted(minima, key=lambda m: m.energy_ev)),
        artefacts=tuple(artefacts),
        warnings=spectrum.warnings + notes + repairs,
        differentials=tuple(differentials),
        depth_noise=tuple(noises),
    )


def _search(differential: Differential, number: int, resolution: float | None) -> tuple[list[Minimum], DepthNoise]:
    """Strongest first, refine, then again on what is left over."""
    channel_noise = differential.sigma * differential.filter_gain(np.ones(1))
    baseline = slope_baseline(differential.energy_ev, differential.derivative, channel_noise)
    derivative = differential.derivative - baseline
    trust = SLOPE_TRUST * np.abs(baseline)
    refined: tuple[tuple[Feature, float], ...] = ()
    rest = derivative
    for part in TIERS:
        field = filter_field(differential, rest, resolution, trust)
        noise = field.noise
        kept = tuple(feature for feature, _ in refined)
        more = pursue(differential, rest, field, threshold=THRESHOLD, part=part, known=kept)
        if more:
            refined = _refined(differential, derivative, kept + more, refined, resolution)
            rest = derivative - rendered(differential.energy_ev, tuple(feature for feature, _ in refined))
    usual = usual_sigma_ev(differential.energy_ev, resolution)
    usual_noise = _noise_at_width(noise, field.bank.sigmas_ev, usual)
    minima = [_minimum(f, s, noise, field.bank.sigmas_ev, differential, number) for f, s in refined]
    depth_noise = DepthNoise(energy_ev=differential.energy_ev, noise=usual_noise)
    return [m for m in minima if m.significance >= THRESHOLD], depth_noise


def _refined(
    differential: Differential,
    derivative: FloatArray,
    features: tuple[Feature, ...],
    done: tuple[tuple[Feature, float], ...],
    resolution: float | None,
) -> tuple[tuple[Feature, float], ...]:
    """Refine, merge what came together, and refine once more where something was merged."""
    refined = refine(differential, derivative, features, done, resolution)
    pruned = prune(refined)
    if len(pruned) == len(refined):
        return refined
    known = set(refined)
    settled = tuple(pair for pair in pruned if pair in known)
    return refine(differential, derivative, tuple(feature for feature, _ in pruned), settled, resolution)


def _noise_at_width(noise: FloatArray, sigmas_ev: FloatArray, wanted_ev: FloatArray) -> FloatArray:
    """Noise (w, n) at the width wanted in each channel (n,), interpolated in ln width."""
    if sigmas_ev.size == 1:
        return noise[0]
    place = np.interp(np.log(wanted_ev), np.log(sigmas_ev), np.arange(sigmas_ev.size))
    low = np.minimum(place.astype(int), sigmas_ev.size - 2)
    part = place - low
    index = np.arange(noise.shape[1])
    return noise[low, index] ** (1 - part) * noise[low + 1, index] ** part


def _minimum(
    feature: Feature,
    spread_ev: float,
    noise: FloatArray,
    sigmas_ev: FloatArray,
    differential: Differential,
    number: int,
) -> Minimum:
    energy = differential.energy_ev
    at = int(np.clip(np.searchsorted(energy, feature.energy_ev), 0, energy.size - 1))
    local = float(_noise_at_width(noise[:, at : at + 1], sigmas_ev, np.array([feature.sigma_ev]))[0])
    return Minimum(
        energy_ev=feature.energy_ev,
        sigma_ev=float(np.hypot(spread_ev, 0.05 * feature.sigma_ev)),
        depth=feature.depth,
        peak_to_peak=feature.depth * (1.0 + 1.0 / feature.lean),
        width_ev=feature.sigma_ev * FWHM_PER_SIGMA,
        significance=min(feature.depth / local, 1.3 * feature.significance),
        window=number,
    )


def _flat_note(stretch: FlatStretch) -> Artefact:
    what = (
        f"flat stretch: the ordinate stands at {stretch.level:g} from {stretch.low_ev:.0f} to {stretch.high_ev:.0f} eV "
        "(saturated, cut off or not recorded), which was left out: nothing can be said there"
    )
    return Artefact(energy_ev=0.5 * (stretch.low_ev + stretch.high_ev), kind="flat stretch", what=what)


def _saturation_notes(window: Window) -> list[Artefact]:
    return [
        Artefact(
            energy_ev=0.5 * (low + high),
            kind="saturation",
            what=f"saturation: counts stand at {level:g} from {low:.0f} to {high:.0f} eV, where no line can be judged",
        )
        for low, high, level in find_saturation(window.energy_ev, window.intensity)
    ]


def _spike_notes(differential: Differential) -> list[Artefact]:
    notes = []
    for spike in differential.spikes:
        energy = float(np.mean(differential.energy_ev[spike.index : spike.index + spike.channels]))
        width = "one channel" if spike.channels == 1 else f"{spike.channels} channels"
        kind = "spike" if spike.up or differential.recorded else "dead point"
        notes.append(Artefact(energy_ev=energy, kind=kind, what=f"{kind} of {width}"))
    return notes
