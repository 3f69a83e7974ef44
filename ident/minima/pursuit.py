"""Find minima strongest first: several widths at once, the width settled by local least squares."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..signal.differential import Differential
from ..signal.lines import ASYMMETRY
from ..signal.widths import narrowest_sigma_ev, widest_sigma_ev
from ..spectrum import FloatArray
from .shapes import Bank, filter_bank

BoolArray = NDArray[np.bool_]

PARABOLA_BELOW_EV = 160.0
EDGE_EV = 8.0
SHAPE_TOLERANCE = 0.07  # part of a strong line's depth that its unknown shape may leave beside it
TOLERANCE_REACH = 18.0  # line widths beyond which nothing of that rest is left
SMEAR = 0.7  # part of the step that adds to a line's width
MOST = 110
FEWEST_DIRECT, FEWEST_RECORDED = 100, 40
LEAST_EXCESS_RECORDED = 1.12
SPAN_OF_WIDTHS, MOST_EXCESS, MOST_EXCESS_SHORT = 40.0, 4.0, 2.2
NORMAL_QUIET = 0.3853  # 30 % quantile of |x| for a standard normal


@dataclass(frozen=True, kw_only=True)
class Feature:
    """A minimum as first found: energy, depth and width, before refinement."""

    energy_ev: float
    depth: float
    sigma_ev: float
    significance: float = 0.0  # when it was taken
    lean: float = ASYMMETRY  # low-energy over high-energy width


@dataclass(frozen=True, kw_only=True, eq=False)
class Field:
    """Filter outputs over one window: depth and noise of that depth for every width and channel, (w, n)."""

    bank: Bank
    low_bank: Bank  # the same widths with the filters used below 160 eV
    low_end: int  # first channel above 160 eV
    depth: FloatArray
    noise: FloatArray
    allowed: BoolArray  # (w, n) bool: widths a line may have there


def filter_field(
    differential: Differential, derivative: FloatArray, resolution: float | None, trust: FloatArray
) -> Field:
    """Run the bank over a window; below 160 eV with filters that a steep background does not fool."""
    energy, step = differential.energy_ev, differential.step_ev
    bank = filter_bank(round(step, 4), energy.size, False)
    low_bank = filter_bank(round(step, 4), energy.size, True)
    low_end = int(np.count_nonzero(energy < PARABOLA_BELOW_EV))
    depth = np.stack([_correlate(derivative, f) for f in bank.filters])
    gain = np.array([differential.filter_gain(f[::-1]) for f in bank.filters])
    noise = gain[:, None] * differential.sigma
    if low_end:
        part = derivative[: min(energy.size, low_end + bank.half)]
        depth[:, :low_end] = np.stack([_correlate(part, f)[:low_end] for f in low_bank.filters])
        low_gain = np.array([differential.filter_gain(f[::-1]) for f in low_bank.filters])
        noise[:, :low_end] = low_gain[:, None] * differential.sigma[:low_end]
    allowed = _allowed(differential, bank, resolution)
    telling = _telling(differential, bank, allowed) | differential.recorded  # recorded noise is known least
    most = np.where(telling, MOST_EXCESS, MOST_EXCESS_SHORT)
    fewest = FEWEST_RECORDED if differential.recorded else FEWEST_DIRECT
    least = LEAST_EXCESS_RECORDED if differential.recorded else 1.0
    excess = np.clip(_excess(depth, noise, allowed, fewest), least, most)
    noise = np.hypot(noise * excess[:, None], trust)
    return Field(bank=bank, low_bank=low_bank, low_end=low_end, depth=depth, noise=noise, allowed=allowed)


def _telling(differential: Differential, bank: Bank, allowed: BoolArray) -> BoolArray:
    """Whether the window is so much wider than each filter that a line in it leaves most outputs quiet; (w,)."""
    span_ev = np.count_nonzero(np.any(allowed, axis=0)) * differential.step_ev
    return span_ev > SPAN_OF_WIDTHS * bank.sigmas_ev


def _excess(depth: FloatArray, noise: FloatArray, allowed: BoolArray, fewest: int) -> FloatArray:
    """How much noisier each filter's output is than the noise model says, from where it is quiet; (w,), never below 1.

    The model may be wrong where data were treated in ways it does not know; the output itself tells.
    """
    inside = np.any(allowed, axis=0)
    if np.count_nonzero(inside) < fewest:
        return np.ones(depth.shape[0])
    quiet = np.quantile(np.abs(depth[:, inside] / noise[:, inside]), 0.3, axis=1) / NORMAL_QUIET
    return np.clip(quiet, 1.0, MOST_EXCESS)


def _correlate(values: FloatArray, weights: FloatArray) -> FloatArray:
    """Correlation with reflected-and-inverted ends, which carry a slope on without inventing a line."""
    half = weights.size // 2
    if values.size <= half + 1:
        padded = np.pad(values, half, mode="edge")
    else:
        padded = np.pad(values, half, mode="reflect", reflect_type="odd")
    return np.convolve(padded, weights[::-1], mode="valid")


def _allowed(differential: Differential, bank: Bank, resolution: float | None) -> BoolArray:
    energy = differential.energy_ev
    low = np.hypot(0.8 * narrowest_sigma_ev(energy, resolution), 0.3 * SMEAR * differential.step_ev)
    high = widest_here_ev(differential, energy, resolution)
    sigma = bank.sigmas_ev[:, None]
    allowed = (sigma >= low) & (sigma <= high)
    allowed[int(np.argmin(np.abs(np.log(bank.sigmas_ev / float(np.median(low))))))] |= ~np.any(allowed, axis=0)
    edge = min(EDGE_EV, 0.12 * float(energy[-1] - energy[0]))
    clear = np.minimum(2.2 * sigma, 0.25 * float(energy[-1] - energy[0]))
    allowed &= (energy <= energy[-1] - np.maximum(edge, clear)) & (energy >= energy[0] + np.maximum(0.5 * edge, clear))
    return allowed


def widest_here_ev(differential: Differential, energy_ev: FloatArray, resolution: float | None) -> FloatArray:
    """Standard deviation of the widest line taken for one at this step; any number of energies, eV in, eV out."""
    widest: FloatArray = np.hypot(widest_sigma_ev(energy_ev, resolution), SMEAR * differential.step_ev)
    return widest


def pursue(
    differential: Differential,
    derivative: FloatArray,
    field: Field,
    *,
    threshold: float,
    part: float = 0.0,
    known: tuple[Feature, ...] = (),
) -> tuple[Feature, ...]:
    """Take minima one after another, strongest first, each time removing its shape from what is left.

    Stops at `threshold` noise widths, or at this `part` of the most significant one if that is more.
    """
    bank, energy = field.bank, differential.energy_ev
    left = derivative.copy()
    depth = field.depth.copy()
    floor = tolerance(energy, known)
    found: list[Feature] = []
    significance = np.where(field.allowed, depth / field.noise, 0.0)
    threshold = max(threshold, part * float(np.max(significance)))
    for _ in range(MOST):
        flat = int(np.argmax(significance))
        width, at = divmod(flat, energy.size)
        if significance[width, at] < threshold:
            break
        width, at = _settle_width(left, field, width, at)
        amplitude = float(depth[width, at])
        if amplitude < floor[at] or amplitude <= 0 or significance[width, at] < 0.7 * threshold:
            near = slice(max(0, at - 1), at + 2)
            significance[:, near] = 0.0
            field.allowed[:, near] = False
            continue
        found.append(
            Feature(
                energy_ev=float(energy[at]),
                depth=amplitude,
                sigma_ev=float(bank.sigmas_ev[width]),
                significance=float(significance[width, at]),
            )
        )
        _remove(left, depth, field, width, at, amplitude)
        floor = np.maximum(floor, tolerance(energy, (found[-1],)))
        low, high = max(0, at - 2 * bank.half), min(energy.size, at + 2 * bank.half + 1)
        near = slice(low, high)
        significance[:, near] = np.where(field.allowed[:, near], depth[:, near] / field.noise[:, near], 0.0)
    return tuple(found)


def _settle_width(left: FloatArray, field: Field, width: int, at: int) -> tuple[int, int]:
    """Width and channel that leave least of the local curve over, over one common stretch."""
    bank = field.bank
    step = bank.sigmas_ev[width] / _channels(bank, width)
    low = max(0, at - int(np.ceil(2.6 * ASYMMETRY * bank.sigmas_ev[width] / step)))
    high = min(left.size, at + int(np.ceil(2.2 * bank.sigmas_ev[width] / step)) + 1)
    patch = left[low:high] - np.mean(left[low:high])
    best, gained = (width, at), -np.inf
    for shift in range(-2, 3):
        centre = at + shift
        if not 0 <= centre < left.size:
            continue
        start = low - centre + bank.half
        if start < 0 or start + patch.size > bank.shapes.shape[1]:
            continue
        shapes = bank.shapes[:, start : start + patch.size]
        shapes = shapes - shapes.mean(axis=1, keepdims=True)
        product = shapes @ patch
        gain = np.where(field.allowed[:, centre] & (product > 0), product**2 / np.sum(shapes**2, axis=1), -np.inf)
        top = int(np.argmax(gain))
        if gain[top] > gained:
            best, gained = (top, centre), float(gain[top])
    return best


def _channels(bank: Bank, width: int) -> float:
    """Channels that one sigma spans: from where the shape has its minimum to where it crosses zero."""
    shape = bank.shapes[width]
    zero = np.flatnonzero(shape[: bank.half] > 0)
    return float(max(bank.half - zero[-1], 1)) if zero.size else 1.0


def _remove(left: FloatArray, depth: FloatArray, field: Field, width: int, at: int, amplitude: float) -> None:
    bank, n = field.bank, left.size
    half = bank.half
    low, high = max(0, at - half), min(n, at + half + 1)
    left[low:high] -= amplitude * bank.shapes[width, low - at + half : high - at + half]
    reach = 2 * half
    low, high = max(0, at - reach), min(n, at + reach + 1)
    border = int(np.clip(field.low_end, low, high))
    for part, overlap in (((low, border), field.low_bank.overlap), ((border, high), bank.overlap)):
        start, stop = part
        depth[:, start:stop] -= amplitude * overlap[width, :, start - at + reach : stop - at + reach]


def tolerance(energy: FloatArray, features: tuple[Feature, ...]) -> FloatArray:
    """How deep a feature must be beside strong lines not to be taken for the rest of their shape."""
    floor = np.zeros_like(energy)
    for feature in features:
        reach_ev = TOLERANCE_REACH * feature.sigma_ev
        near = slice(*np.searchsorted(energy, (feature.energy_ev - reach_ev, feature.energy_ev + reach_ev)))
        away = (energy[near] - feature.energy_ev) / feature.sigma_ev
        reach = np.exp(-0.5 * (away / np.where(away < 0, 4.5, 3.5)) ** 2)
        inner = 0.35 * np.exp(-0.5 * (away / 1.1) ** 2)
        floor[near] = np.maximum(floor[near], feature.depth * np.maximum(SHAPE_TOLERANCE * reach, inner))
    return floor
