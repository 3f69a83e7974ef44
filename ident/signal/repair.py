"""Points that were never measured: put in between by interpolation, or standing at one value for a stretch."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..spectrum import Window

MOST_BETWEEN = 20  # points put in between two measured ones, plus one
KNOTS_HOLD = 0.9  # of all bends of a curve that is straight from knot to knot
FEWEST_LEFT = 40  # points that must be left for interpolation to be undone
LONGEST_RUN = 8  # equal points in a row that noise does not make
NOISY_STEPS = 5.0  # smallest steps of the ordinate by which neighbours differ, where they do
MARGIN = 3  # points beside a flat stretch that its edge bends


@dataclass(frozen=True, kw_only=True)
class FlatStretch:
    """A stretch of equal points, eV and units of the ordinate."""

    low_ev: float
    high_ev: float
    level: float


def undo_interpolation(window: Window) -> tuple[Window, int]:
    """Give the points that were measured, and how many steps of the file each of theirs holds (1: nothing was done).

    Linear interpolation bends at the measured points alone. Points between hold no noise of their own, so that what
    is taken for noise would be far too small.
    """
    energy, values = window.energy_ev, window.intensity
    bends = np.abs(np.diff(values, 2))
    total = float(bends.sum())
    if total <= 0:
        return window, 1
    for every in range(MOST_BETWEEN, 1, -1):
        if values.size < every * FEWEST_LEFT:
            continue
        held = np.array([bends[start::every].sum() for start in range(every)])
        if held.max() >= KNOTS_HOLD * total:
            first = (int(np.argmax(held)) + 1) % every
            return replace(window, energy_ev=energy[first::every], intensity=values[first::every]), every
    return window, 1


def cut_flat(window: Window, *, fewest: int) -> tuple[tuple[Window, ...], tuple[FlatStretch, ...]]:
    """Leave out stretches of equal points; the pieces that hold `fewest` points or more, and what was left out.

    Data that are no noisier than their own rounding are left as they are: there, equal points mean nothing.
    """
    energy, values = window.energy_ev, window.intensity
    steps = np.abs(np.diff(values))
    moving = steps[steps > 0]
    if moving.size < LONGEST_RUN or np.median(moving) < NOISY_STEPS * np.min(moving):
        return (window,), ()
    flat = np.zeros(values.size, dtype=bool)
    stretches = []
    for start, end in _runs(steps == 0):
        if end - start + 1 >= LONGEST_RUN:
            stretches.append(
                FlatStretch(low_ev=float(energy[start]), high_ev=float(energy[end]), level=float(values[start]))
            )
            flat[max(0, start - MARGIN) : end + 1 + MARGIN] = True
    if not stretches:
        return (window,), ()
    pieces = tuple(
        replace(window, energy_ev=energy[start : end + 1], intensity=values[start : end + 1])
        for start, end in _runs(~flat[:-1] & ~flat[1:])
        if end - start + 1 >= fewest
    )
    return pieces, tuple(stretches)


def _runs(same: NDArray[np.bool_]) -> list[tuple[int, int]]:
    """First and last point of every run of joined neighbours; `same` (n - 1,) says which are joined."""
    edges = np.flatnonzero(np.diff(np.r_[False, same, False].astype(np.int8)))
    return [(int(start), int(end)) for start, end in zip(edges[::2], edges[1::2], strict=True)]


def repair(
    windows: Sequence[Window], *, fewest: int
) -> tuple[tuple[Window, ...], tuple[FlatStretch, ...], tuple[str, ...]]:
    """Undo interpolation and leave out flat stretches, window by window; what was left out, and warnings."""
    kept: list[Window] = []
    flat: list[FlatStretch] = []
    notes = []
    for window in windows:
        measured, every = undo_interpolation(window)
        if every > 1:
            notes.append(
                f"points every {window.step_ev:.3g} eV were interpolated between measured ones; taken back to every "
                f"{measured.step_ev:.3g} eV"
            )
        pieces, stretches = cut_flat(measured, fewest=fewest)
        kept.extend(pieces)
        flat.extend(stretches)
    return tuple(kept), tuple(flat), tuple(dict.fromkeys(notes))


__all__ = ["FlatStretch", "cut_flat", "repair", "undo_interpolation"]
