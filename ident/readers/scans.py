"""From points in the order of recording to ascending windows: restarts, gaps, changes of step, repeats."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..spectrum import FloatArray
from .source import Source

MIN_POINTS = 5  # a shorter piece holds no minimum that could be told from noise
GAP_STEPS = 3.0  # a step this many times the local one is a gap between windows
STEP_CHANGE = 1.5  # a lasting change of step by this factor starts another window
LOCAL = 5  # steps looked at on each side
SORT_THEM = (
    "sort the rows by energy, put a blank line between windows, "
    "and check that the energies are in the first column or named so"
)
NOT_TWICE = "remove the duplicates, or put a blank line between sweeps of the same range"


@dataclass(frozen=True, kw_only=True, eq=False)
class Scan:
    """Points as they stand in the file.

    Parameters
    ----------
    energy_ev, intensity : (n,) arrays
        In the order of the file until `split_scan`, ascending after it.
    line : (n,) array of int
        Line of the file each point stands on.
    sweeps : int
        How many recordings were summed in it.
    """

    energy_ev: FloatArray
    intensity: FloatArray
    line: NDArray[np.int64]
    sweeps: int = 1

    def __getitem__(self, part: slice) -> Scan:
        return replace(self, energy_ev=self.energy_ev[part], intensity=self.intensity[part], line=self.line[part])

    def __len__(self) -> int:
        return int(self.energy_ev.size)


def split_scan(scan: Scan, source: Source) -> list[Scan]:
    """Cut a recording into ascending windows, at restarts, gaps and lasting changes of the step.

    Raises
    ------
    InputError
        When an energy is repeated, or when the energies are in no order.
    """
    if len(scan) < 2:
        return [scan]
    pieces = []
    for run in _split_restarts(scan, source):
        ascending = run if len(run) < 2 or run.energy_ev[0] < run.energy_ev[-1] else run[::-1]
        pieces.extend(_split_gaps(ascending))
    return pieces


def _split_restarts(scan: Scan, source: Source) -> list[Scan]:
    """Cut where the energy turns back; runs stay in the order of the file."""
    steps = np.diff(scan.energy_ev)
    same = np.flatnonzero(steps == 0)
    if same.size:
        at = int(same[0]) + 1
        source.fail(f"the energy {scan.energy_ev[at]:g} eV is repeated", line=int(scan.line[at]), remedy=NOT_TWICE)
    direction = 1.0 if np.count_nonzero(steps > 0) * 2 >= steps.size else -1.0
    cuts = np.flatnonzero(steps * direction < 0) + 1
    _refuse_strays(scan, cuts, direction, source)
    bounds = [0, *cuts.tolist(), len(scan)]
    lengths = np.diff(bounds)
    if len(lengths) > 1 and lengths.min() < MIN_POINTS:
        at = bounds[max(1, int(np.argmin(lengths)))]
        source.fail(
            f"the energies are in no order ({scan.energy_ev[at]:g} eV after {scan.energy_ev[at - 1]:g} eV)",
            line=int(scan.line[at]),
            remedy=SORT_THEM,
        )
    return [scan[low:high] for low, high in itertools.pairwise(bounds)]


def _refuse_strays(scan: Scan, cuts: NDArray[np.int64], direction: float, source: Source) -> None:
    """Refuse a point out of order: without it the energies would go on as if nothing had been."""
    energy = scan.energy_ev
    usual = GAP_STEPS * float(np.median(np.abs(np.diff(energy))))
    for cut in cuts.tolist():
        for stray in (cut - 1, cut):
            if 1 <= stray < energy.size - 1:
                across = (energy[stray + 1] - energy[stray - 1]) * direction
                if 0 < across <= usual:
                    source.fail(
                        f"the energy {energy[stray]:g} eV is out of order",
                        line=int(scan.line[stray]),
                        remedy=SORT_THEM,
                    )


def _split_gaps(run: Scan) -> list[Scan]:
    """Cut an ascending run at gaps and at lasting changes of the step."""
    if len(run) < 3:
        return [run]
    steps = np.diff(run.energy_ev)
    before, after = _local_steps(steps)
    local, finer = np.fmax(before, after), np.fmin(before, after)
    gap = steps > GAP_STEPS * local
    gap |= (steps > STEP_CHANGE * local) & (local > STEP_CHANGE * finer)  # a small one between unlike windows
    cuts = set((np.flatnonzero(gap) + 1).tolist()) | _step_changes(steps, gap)
    bounds = [0, *sorted(cuts), len(run)]
    return [run[low:high] for low, high in itertools.pairwise(bounds)]


def _local_steps(steps: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Median of the steps just before and just after each step, itself left out; NaN where there is none."""
    padded = np.concatenate([np.full(LOCAL, np.nan), steps, np.full(LOCAL, np.nan)])
    views = np.lib.stride_tricks.sliding_window_view(padded, LOCAL)
    n = steps.size
    return _nanmedian(views[:n]), _nanmedian(views[LOCAL + 1 : LOCAL + 1 + n])


def _nanmedian(rows: FloatArray) -> FloatArray:
    """Median along the last axis without NaN; NaN where a row holds nothing else, and no warning."""
    ordered = np.sort(rows, axis=1)  # NaN sorts last
    count = np.count_nonzero(np.isfinite(rows), axis=1)
    index = np.arange(len(rows))
    result: FloatArray = 0.5 * (ordered[index, np.maximum(count - 1, 0) // 2] + ordered[index, count // 2])
    return result


def _step_changes(steps: FloatArray, gap: NDArray[np.bool_]) -> set[int]:
    """Points at which a steady step gives way to another steady one."""
    reach = 2 * LOCAL
    if steps.size < 2 * reach:
        return set()
    views = np.lib.stride_tricks.sliding_window_view(np.where(gap, np.nan, steps), reach)
    middle, low, high = views[:, LOCAL], views.min(axis=1), views.max(axis=1)
    with np.errstate(invalid="ignore"):
        steady = high - low <= 0.2 * middle
        left, right = middle[:-reach], middle[reach:]
        changed = np.fmax(left, right) > STEP_CHANGE * np.fmin(left, right)
        hits = np.flatnonzero(steady[:-reach] & steady[reach:] & changed) + reach
    return set(hits.tolist())


def sum_repeats(scans: Sequence[Scan]) -> list[Scan]:
    """Sum scans over the same energies; the others stay. The order of first appearance is kept."""
    kept: list[Scan] = []
    for scan in scans:
        for index, earlier in enumerate(kept):
            if same_energies(earlier, scan):
                kept[index] = replace(
                    earlier, intensity=earlier.intensity + scan.intensity, sweeps=earlier.sweeps + scan.sweeps
                )
                break
        else:
            kept.append(scan)
    return kept


def same_energies(one: Scan, other: Scan) -> bool:
    """Tell whether two ascending scans were taken at the same energies, within a hundredth of a step."""
    if (
        len(one) != len(other)
        or len(one) < 2
        or abs(one.energy_ev[0] - other.energy_ev[0]) > one.energy_ev[1] - one.energy_ev[0]
    ):
        return False
    tolerance = 0.01 * float(np.median(np.diff(one.energy_ev)))
    return bool(np.all(np.abs(one.energy_ev - other.energy_ev) <= tolerance))
