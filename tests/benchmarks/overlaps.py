"""Overlapping elements, one at a time: `python -m tests.benchmarks.overlaps`.

For each pair a guest whose main line stands under or beside a line of its host: the host alone, the guest alone, and
both. Carbon and oxygen lie on top unless they are of the pair. Good direct surveys; everything else as in `forward.py`.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from ident import identify

from .forward import Case, build_case, draw_setup
from .samples import Constituent

# Pairs that analysts know to be mistaken for each other; common practice, no source.
PAIRS = (
    *("N/Ti", "F/Fe", "Na/Zn", "O/Cr", "O/V", "O/Sb", "O/Te", "B/Cl", "B/Nb", "S/Mo", "S/Zr", "S/Au", "P/Pt", "P/Zr"),
    *("P/Mo", "Si/Pb", "Si/Zr", "Al/Au", "Al/Pt", "Al/Ba", "C/Ru", "C/K", "C/Ca", "C/Pd", "Ag/Pd", "Ag/Rh", "Cd/In"),
    *("In/Sn", "Sn/Sb", "Sb/Te", "Mn/Fe", "Fe/Co", "Co/Ni", "Ni/Cu", "Cu/Zn", "Cr/Mn"),
)
HOST, GUEST, ON_TOP = 0.7, 0.35, {"C": 0.25, "O": 0.2}
SIGNAL_TO_NOISE = 120.0
FIRST_SEED = 600_000


@dataclass(frozen=True, kw_only=True)
class Share:
    """Of the spectra of one make: in how many guest and host were called, and called `present`."""

    guest: float
    guest_present: float
    host: float
    host_present: float


def overlap_case(guest: str, host: str, *, with_guest: bool, with_host: bool, seed: int) -> Case:
    """Make one survey of a pair."""
    rng = np.random.default_rng([77, seed])
    sample = [Constituent(element=host, strength=HOST)] if with_host else []
    sample += [Constituent(element=guest, strength=GUEST)] if with_guest else []
    sample += [Constituent(element=e, strength=s) for e, s in ON_TOP.items() if e not in (guest, host)]
    setup = draw_setup(rng, "surveys", tuple(sample))
    plain = replace(setup.recording, signal_to_noise=SIGNAL_TO_NOISE, mode="direct", upside_down=False)
    setup = replace(setup, recording=plain, film_nm=0.0)
    return build_case(rng, setup, tuple(sample), kind="surveys", seed=seed, recipe=f"{guest}/{host}")


def share_called(pair: str, *, with_guest: bool, with_host: bool, count: int) -> Share:
    """Call one make of a pair on so many seeds."""
    guest, host = pair.split("/")
    said: list[tuple[float, float]] = []
    for seed in range(FIRST_SEED, FIRST_SEED + count):
        case = overlap_case(guest, host, with_guest=with_guest, with_host=with_host, seed=seed)
        answer = {a.element: a.probability for a in identify(case.spectrum).assignments}
        said.append((answer.get(guest, 0.0), answer.get(host, 0.0)))
    table = np.array(said)
    called, present = np.mean(table >= 0.5, axis=0), np.mean(table >= 0.95, axis=0)
    return Share(
        guest=float(called[0]),
        guest_present=float(present[0]),
        host=float(called[1]),
        host_present=float(present[1]),
    )


def rows(count: int) -> Iterator[str]:
    """Write the table of README.md, pair by pair."""
    yield "| guest/host | host alone: guest (`present`), host | both: guest, host | guest alone: guest, host |"
    yield "|---|---|---|---|"
    for pair in PAIRS:
        alone = share_called(pair, with_guest=False, with_host=True, count=count)
        both = share_called(pair, with_guest=True, with_host=True, count=count)
        guest = share_called(pair, with_guest=True, with_host=False, count=count)
        first = f"{alone.guest:.2f} ({alone.guest_present:.2f}), {alone.host:.2f}"
        yield f"| {pair} | {first} | {both.guest:.2f}, {both.host:.2f} | {guest.guest:.2f}, {guest.host:.2f} |"


if __name__ == "__main__":
    for line in rows(20):
        print(line, flush=True)
