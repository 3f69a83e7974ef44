"""What had to be seen: a line's height over the noise once all that others could imitate is taken out."""

from __future__ import annotations

import numpy as np

from .recording import Taken
from .shapes import Emission, FloatArray

DEGREE = 3  # of the local background polynomial
FREE_HEIGHT = 3.0  # standard deviation of another line's height, in its heights: as good as free
FREE_SHIFT_EV = 3.0  # standard deviation of another line's small shift


def line_significance(
    axes_ev: tuple[FloatArray, ...], lines: list[Emission], taken: Taken
) -> dict[str, tuple[float, float]]:
    """Return, for every element, significance and minimum (eV) of its strongest line in range.

    The line, without its losses, is divided by the noise; what a local cubic background, free heights of
    every line of the other elements and small shifts of these (their energy derivatives) can make is taken
    out; the length of what is left is its height in noise widths.
    """
    shapes, cores, noise = taken.shapes, taken.cores, taken.noise
    energy = np.concatenate(axes_ev)
    starts = np.cumsum([0, *(axis.size for axis in axes_ev)])
    groups = _same_line(lines)
    best: dict[str, tuple[float, list[int], slice]] = {}
    for members in groups:
        where = _around(lines, members, axes_ev, starts)
        if where is None:
            continue
        element = lines[members[0]].element
        alone = _left_over(energy[where], cores[members][:, where].sum(axis=0) / noise[where], [])
        if alone > best.get(element, (0.0,))[0]:
            best[element] = (alone, members, where)
    found = {}
    for element, (_, members, where) in best.items():
        target = cores[members][:, where].sum(axis=0) / noise[where]
        others = _imitations(energy[where], lines, shapes[:, where], noise[where], element)
        strongest = max((lines[index] for index in members), key=lambda line: line.height / line.sigma_ev)
        found[element] = (_left_over(energy[where], target, others), strongest.minimum_ev)
    return found


def _same_line(lines: list[Emission]) -> list[list[int]]:
    """Group the two states of one line; they are one line to be seen."""
    groups: dict[tuple[str, str], list[int]] = {}
    for index, line in enumerate(lines):
        if line.name != "unlisted":  # nobody could be asked to know it
            groups.setdefault((line.element, line.name), []).append(index)
    return list(groups.values())


def _around(
    lines: list[Emission], members: list[int], axes_ev: tuple[FloatArray, ...], starts: FloatArray
) -> slice | None:
    """Return the points around a line within its own window; None where its minimum was not scanned."""
    strongest = max((lines[index] for index in members), key=lambda line: line.height / line.sigma_ev)
    reach = max(20.0, 8.0 * strongest.sigma_ev)
    for axis, start in zip(axes_ev, starts, strict=False):
        if axis[0] + 3.0 <= strongest.minimum_ev <= axis[-1] - 2.0 * strongest.sigma_ev:
            low, high = np.searchsorted(axis, [strongest.peak_ev - reach, strongest.peak_ev + reach])
            return slice(int(start + low), int(start + high))
    return None


def _imitations(
    energy: FloatArray, lines: list[Emission], shapes: FloatArray, noise: FloatArray, element: str
) -> list[FloatArray]:
    """Return what the other elements' heights and shifts can do within their freedom, over the noise."""
    out = []
    for line, shape in zip(lines, shapes, strict=True):
        if line.element == element or np.ptp(shape / noise) < 0.3:
            continue
        out += [FREE_HEIGHT * shape / noise, FREE_SHIFT_EV * np.gradient(shape, energy) / noise]
    return out


def _left_over(energy: FloatArray, target: FloatArray, others: list[FloatArray]) -> float:
    """Return the length of `target` that a cubic background and the others cannot make.

    Generalised least squares: the others' freedom is added to the noise as its covariance 1 + C C', so that
    a line far under the noise imitates nothing.
    """
    x = 2.0 * (energy - energy.mean()) / max(float(np.ptp(energy)), 1e-9)
    smooth, _ = np.linalg.qr(np.array([x**power for power in range(DEGREE + 1)]).T)
    target = target - smooth @ (smooth.T @ target)
    square = float(target @ target)
    if others:
        columns = np.array(others).T
        columns = columns - smooth @ (smooth.T @ columns)
        seen = columns.T @ target
        square -= float(seen @ np.linalg.solve(np.eye(seen.size) + columns.T @ columns, seen))
    return float(np.sqrt(max(square, 0.0)))
