"""What every reader refuses or warns of: axes that are not kinetic energies in eV, signals that are none."""

from __future__ import annotations

import re

import numpy as np

from .scans import MIN_POINTS, Scan
from .source import Source

MIN_TOTAL = 20  # points of a spectrum
COARSE_STEP_EV = 3.0
MAX_EV = 3500.0
MAX_KEV = 5.0  # an axis that ends below this is in keV
MAX_ORDINATE = 1e30  # 1E37 is the mark of a missing number; nothing that was measured comes near

BINDING = re.compile(r"\bbinding\b|\bb\.?\s?e\.?(?=\s*[\[(/,]|$)", re.IGNORECASE)
KILO = re.compile(r"\bk(?:ilo)?\s?e(?:lectron\s?)?v(?:olts?)?\b", re.IGNORECASE)
BINDING_REMEDY = (
    "give kinetic energies (photon energy minus binding energy minus work function, for X-ray excited lines)"
)
LOWEST_EV = 2.0
KEV_REMEDY = "multiply the energies by 1000 so that they are in eV"
NO_AXIS_REMEDY = "give kinetic energies between 0 and 3500 eV as the first column"


def check_axis_name(name: str, source: Source, *, line: int | None = None) -> None:
    """Refuse an axis that its own name calls binding energy or keV."""
    if BINDING.search(name):
        source.fail(f"the axis is a binding energy ({name!r})", line=line, remedy=BINDING_REMEDY)
    if KILO.search(name):
        source.fail(f"the energies are in keV ({name!r})", line=line, remedy=KEV_REMEDY)


def check_energies(scan: Scan, source: Source) -> None:
    """Refuse energies that cannot be kinetic energies in eV; the points are in the order of the file."""
    energy = scan.energy_ev
    if not energy.size:
        return
    negative = np.flatnonzero(energy < 0)
    if negative.size:
        at = int(negative[0])
        source.fail(
            f"an energy is negative ({energy[at]:g}), as on a binding-energy axis",
            line=int(scan.line[at]),
            remedy=BINDING_REMEDY,
        )
    top = float(energy.max())
    if top < MAX_KEV:
        source.fail(
            f"the energies end at {top:g}, so they seem to be in keV",
            line=int(scan.line[0]),
            remedy=KEV_REMEDY,
        )
    if top > MAX_EV:
        at = int(np.flatnonzero(energy > MAX_EV)[0])
        source.fail(
            f"the energy {energy[at]:g} eV lies beyond 0 to {MAX_EV:g} eV",
            line=int(scan.line[at]),
            remedy="cut what lies outside, and check that the first column holds kinetic energies in eV",
        )


def check_ordinate(scan: Scan, source: Source) -> None:
    """Refuse ordinates that no instrument gives."""
    huge = np.flatnonzero(np.abs(scan.intensity) > MAX_ORDINATE)
    if huge.size:
        at = int(huge[0])
        source.fail(
            f"the ordinate {scan.intensity[at]:g} is more than any detector gives",
            line=int(scan.line[at]),
            remedy="remove the row, or the rows that hold a mark for missing values",
        )


def keep_usable(windows: list[Scan], source: Source) -> tuple[list[Scan], list[str]]:
    """Leave out windows without signal or of a few points, with a warning each; refuse when none is left.

    Raises
    ------
    InputError
        When fewer than 20 points remain, or when the signal is constant everywhere.
    """
    windows, warnings = _above_zero(windows)
    long_enough = []
    for window in windows:
        if len(window) < MIN_POINTS:
            warnings.append(f"{_place(window)} left out: {_points(len(window))}, too few for a window")
        else:
            long_enough.append(window)
    total = sum(len(window) for window in (long_enough or windows))
    if total < MIN_TOTAL:
        source.fail(
            f"has only {_points(total)}",
            line=_first_line(windows),
            remedy=f"a spectrum needs at least {MIN_TOTAL} points, better several hundred",
        )
    kept = [window for window in long_enough if not _is_constant(window)]
    if not kept:
        source.fail(
            f"the signal is constant ({long_enough[0].intensity[0]:g})",
            line=_first_line(long_enough),
            remedy="choose another column with --column, or record the spectrum again",
        )
    flat = [window for window in long_enough if _is_constant(window)]
    warnings += [f"{_place(window)} left out: the signal is constant there" for window in flat]
    return kept, warnings


def _above_zero(windows: list[Scan]) -> tuple[list[Scan], list[str]]:
    """Leave out points at 0 eV, where electrons do not arrive and slopes have no meaning, with a warning."""
    kept = [window[int(np.searchsorted(window.energy_ev, LOWEST_EV)) :] for window in windows]
    dropped = sum(len(window) for window in windows) - sum(len(window) for window in kept)
    said = [f"{_points(dropped)} below {LOWEST_EV:g} eV left out"] if dropped else []
    return [window for window in kept if len(window)] or windows, said


def warn_of_steps(windows: list[Scan]) -> list[str]:
    """Warn of steps too coarse for narrow lines."""
    steps = [float(np.median(np.diff(window.energy_ev))) for window in windows]
    return [
        f"{_place(window)}: a step of {step:.3g} eV is coarser than {COARSE_STEP_EV:g} eV: "
        f"narrow lines, and doublets closer than {2 * step:.3g} eV, can be missed"
        for window, step in zip(windows, steps, strict=True)
        if step > COARSE_STEP_EV * 1.0001
    ]


def _is_constant(window: Scan) -> bool:
    """Tell whether a window carries no signal at all, rounding aside."""
    largest = float(np.abs(window.intensity).max())
    return bool(largest < 1 / MAX_ORDINATE or np.ptp(window.intensity) <= 1e-12 * largest)


def _place(window: Scan) -> str:
    low, high = window.energy_ev.min(), window.energy_ev.max()
    return f"{low:g} eV (line {window.line[0]})" if low == high else f"{low:g} to {high:g} eV"


def _points(count: int) -> str:
    return "1 point" if count == 1 else f"{count} points"


def _first_line(windows: list[Scan]) -> int | None:
    return min((int(window.line.min()) for window in windows if len(window)), default=None)
