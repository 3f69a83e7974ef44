"""From scans to spectra: what every format shares once the numbers are out of the file."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import replace

from ..spectrum import Header, Kind, Ordinate, Spectrum, Window, format_ranges
from .checks import check_energies, check_ordinate, keep_usable, warn_of_steps
from .scans import Scan, split_scan, sum_repeats
from .source import Source


def to_windows(scans: Sequence[Scan], source: Source) -> list[Scan]:
    """Check recordings and cut them into ascending windows, in the order of the file."""
    windows = []
    for scan in scans:
        check_energies(scan, source)
        check_ordinate(scan, source)
        windows += split_scan(scan, source)
    return windows


def build_spectrum(
    windows: Sequence[Scan],
    source: Source,
    *,
    kind: Kind,
    ordinate: Ordinate,
    counts: bool | None,
    header: Header,
    warnings: Sequence[str] = (),
) -> Spectrum:
    """Make one spectrum of ascending windows: repeats of a range are summed, the rest ordered by energy.

    Raises
    ------
    InputError
        When too few points are left, or the signal is constant.
    """
    kept, dropped = keep_usable(list(windows), source)
    merged = sorted(sum_repeats(kept), key=lambda scan: (scan.energy_ev[0], scan.energy_ev[-1]))
    sweeps = max(scan.sweeps for scan in merged)
    said = [*warnings, *dropped, *_say_sums(kept, merged), *warn_of_steps(merged), *_say_overlaps(merged)]
    if sweeps > 1 and len(kept) > len(merged):
        header = replace(header, sweeps=sweeps * header.sweeps if header.sweeps else sweeps)
    return Spectrum(
        windows=tuple(Window(energy_ev=scan.energy_ev, intensity=scan.intensity) for scan in merged),
        kind=kind,
        ordinate=ordinate,
        counts=counts,
        name=source.name,
        sha256=source.sha256,
        header=header,
        warnings=tuple(said),
    )


def number_names(spectra: Sequence[Spectrum], source: Source, *, from_first: bool) -> tuple[Spectrum, ...]:
    """Name the spectra of one file: "file", "file#2", ...; with `from_first`, "file#1", "file#2", ..."""
    if len(spectra) < 2:
        return tuple(spectra)
    return tuple(
        replace(spectrum, name=source.name if at == 1 and not from_first else f"{source.name}#{at}")
        for at, spectrum in enumerate(spectra, start=1)
    )


def _say_sums(before: Sequence[Scan], after: Sequence[Scan]) -> list[str]:
    """Say which ranges were summed."""
    if len(before) == len(after):
        return []
    return [
        f"{scan.sweeps} recordings of {format_ranges(((scan.energy_ev[0], scan.energy_ev[-1]),))} "
        "were summed; --separate reads each by itself"
        for scan in after
        if scan.sweeps > 1
    ]


def _say_overlaps(windows: Sequence[Scan]) -> list[str]:
    """Say which windows overlap: a line in both is seen twice."""
    said = []
    for one, other in itertools.pairwise(windows):
        low, high = other.energy_ev[0], min(one.energy_ev[-1], other.energy_ev[-1])
        if high > low:
            said.append(f"windows overlap from {low:g} to {high:g} eV: a line there is seen twice")
    return said
