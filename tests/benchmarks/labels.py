"""Labels with seeded errors, and how many `recheck` finds: `python -m tests.benchmarks.labels`.

Each survey is labelled as a careful person would: every element that has to be seen, at the minimum of its strongest
line, read to half an eV. Then one label in three is spoilt in one of five ways.
"""

from __future__ import annotations

import argparse
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace

import numpy as np

from ident import recheck
from ident.names import name_of

from .forward import Case, make_case
from .overlaps import PAIRS
from .published import PublishedLine, published_lines
from .shapes import PLASMON_EV

COUNT = 200
FIRST_SEED = 3000  # of those to tune on; the reported figures start at 500000
LADDER = ("Sc", "Ti", "V", "Cr", "Mn", "Fe", "Co", "Ni", "Cu", "Zn")
READ_SIGMA_EV = 0.8
OVERLAP_EV, LOSS_REACH_EV, OFF_EV = 18.0, 15.0, (12.0, 30.0)
CLEAR_EV = 8.0  # of the minima that somebody else's label stands at
STRONG = 0.3  # relative height
FLAGGED = ("disagrees", "undecided", "impossible")
DISPUTED = ("disagrees", "impossible")


@dataclass(frozen=True, kw_only=True)
class Given:
    """One label, and what is wrong with it."""

    element: str  # whose line it is at; for a missed one, the element left out
    energy_ev: float
    text: str
    error: str = ""  # kind of error; empty when it is right


Spoiler = Callable[[np.random.Generator, Case, Given], Given | None]


@dataclass(frozen=True, kw_only=True)
class Tally:
    """What became of labels of one kind."""

    labels: int
    flagged: int  # disagrees, undecided, impossible or missed
    disputed: int  # disagrees, impossible or missed
    undecided: int


def labelled(seed: int) -> tuple[Case, tuple[Given, ...]]:
    """Make one survey and its labels, one in three spoilt."""
    case = make_case("surveys", seed)
    rng = np.random.default_rng([55, seed])
    labels = [_right(rng, case, element) for element in sorted(case.must) if element in case.strongest_ev]
    spoilt: list[Given] = []
    for _ in range(max(1, round(len(labels) / 3))):
        wrong = _spoil(rng, case, labels)
        if wrong is not None:
            spoilt.append(wrong)
    kept = [label for label in labels if not label.error]
    # what is named below a strong line stands beside the right label of that line
    kept += [_right(rng, case, wrong.element) for wrong in spoilt if wrong.error == "loss peak named"]
    return case, (*kept, *spoilt)


def _right(rng: np.random.Generator, case: Case, element: str) -> Given:
    energy = round(2 * (case.strongest_ev[element] + rng.normal(0.0, READ_SIGMA_EV))) / 2
    return Given(element=element, energy_ev=energy, text=_written(rng, element))


def _written(rng: np.random.Generator, element: str) -> str:
    """Write an element in one of the usual ways."""
    way = rng.integers(3)
    if way == 0:
        return element
    return name_of(element) if way == 1 else f"{element.upper() if len(element) == 1 else element} peak"


def _spoil(rng: np.random.Generator, case: Case, labels: list[Given]) -> Given | None:
    """Draw a kind of error and a label that it can be done to; mark that label."""
    for kind in rng.permutation(len(SPOILERS)):
        for at in rng.permutation(len(labels)):
            wrong = None if labels[at].error else SPOILERS[kind](rng, case, labels[at])
            if wrong is not None:
                labels[at] = replace(labels[at], error="spoilt")
                return wrong
    return None


def _swap(rng: np.random.Generator, case: Case, label: Given) -> Given | None:
    """Name the other one of a pair whose lines overlap here."""
    partners = [b if a == label.element else a for a, b in (p.split("/") for p in PAIRS) if label.element in (a, b)]
    near = [p for p in partners if p not in case.truth and _nearest(p, label.energy_ev) <= OVERLAP_EV]
    return _renamed(rng, label, near, "swapped overlap pair")


def _ladder(rng: np.random.Generator, case: Case, label: Given) -> Given | None:
    """Name the neighbour in the 3d series."""
    if label.element not in LADDER:
        return None
    at = LADDER.index(label.element)
    beside = [LADDER[i] for i in (at - 1, at + 1) if 0 <= i < len(LADDER) and LADDER[i] not in case.truth]
    return _renamed(rng, label, beside, "neighbour in the 3d ladder")


def _loss(rng: np.random.Generator, case: Case, label: Given) -> Given | None:
    """Name an element at the loss peak below a strong line."""
    if case.truth[label.element] < STRONG:
        return None
    energy = label.energy_ev - (PLASMON_EV.get(label.element) or rng.uniform(12.0, 26.0))
    taken = [minimum for element, minimum in case.strongest_ev.items() if element != label.element]
    if energy < 40 or any(abs(energy - minimum) < CLEAR_EV for minimum in taken):
        return None
    absent = [e for e in published_lines() if e not in case.truth and _nearest(e, energy) <= LOSS_REACH_EV]
    wrong = _renamed(rng, label, absent, "loss peak named")
    return replace(wrong, energy_ev=round(2 * energy) / 2) if wrong else None


def _missed(rng: np.random.Generator, case: Case, label: Given) -> Given | None:
    """Leave out an element that is not the strongest."""
    if case.truth[label.element] >= 0.5 * max(case.truth.values()):
        return None
    return replace(label, text="", error="missed minor")


def _shifted(rng: np.random.Generator, case: Case, label: Given) -> Given | None:
    """Put the label where no line of its element is."""
    low, high = case.spectrum.ranges_ev[0]
    for _ in range(10):
        energy = label.energy_ev + rng.choice([-1.0, 1.0]) * rng.uniform(*OFF_EV)
        if low < energy < high and _nearest(label.element, energy, least=0.05) > 0.8 * OFF_EV[0]:
            return replace(label, energy_ev=round(2 * energy) / 2, error="shifted label")
    return None


SPOILERS: tuple[Spoiler, ...] = (_swap, _ladder, _loss, _missed, _shifted)


def _nearest(element: str, energy_ev: float, least: float = STRONG) -> float:
    lines: tuple[PublishedLine, ...] = published_lines().get(element, ())
    return min((abs(x.energy_ev - energy_ev) for x in lines if x.relative_height >= least), default=np.inf)


def _renamed(rng: np.random.Generator, label: Given, names: list[str], error: str) -> Given | None:
    return replace(label, text=str(rng.choice(sorted(names))), error=error) if names else None


def verdicts(seed: int) -> Iterator[tuple[Given, str]]:
    """Give each label of one survey with the verdict on it; "missed" or "-" for one left out."""
    case, labels = labelled(seed)
    shown = [label for label in labels if label.text]
    answer = recheck(case.spectrum, [(label.energy_ev, label.text) for label in shown])
    for label, opinion in zip(shown, answer.labels, strict=True):
        yield label, opinion.verdict
    missed = {item.element for item in answer.missed}
    for label in labels:
        if not label.text:
            yield label, "missed" if label.element in missed else "-"


def measure(seeds: range) -> dict[str, Tally]:
    """Count by kind of error; "" are the right labels."""
    said: dict[str, list[str]] = {}
    for seed in seeds:
        for label, verdict in verdicts(seed):
            said.setdefault(label.error, []).append(verdict)
    return {
        kind: Tally(
            labels=len(found),
            flagged=sum(verdict in (*FLAGGED, "missed") for verdict in found),
            disputed=sum(verdict in (*DISPUTED, "missed") for verdict in found),
            undecided=found.count("undecided"),
        )
        for kind, found in said.items()
    }


def total(tallies: dict[str, Tally]) -> Tally:
    """Put all kinds of errors together."""
    wrong = [tally for kind, tally in tallies.items() if kind]
    return Tally(
        labels=sum(tally.labels for tally in wrong),
        flagged=sum(tally.flagged for tally in wrong),
        disputed=sum(tally.disputed for tally in wrong),
        undecided=sum(tally.undecided for tally in wrong),
    )


def main(arguments: list[str] | None = None) -> None:
    """Print the table of README.md."""
    parser = argparse.ArgumentParser(prog="python -m tests.benchmarks.labels", description=__doc__)
    parser.add_argument("--count", type=int, default=COUNT)
    parser.add_argument("--first", type=int, default=FIRST_SEED)
    parser.add_argument("--wrong", action="store_true", help="list errors not flagged and right labels disputed")
    given = parser.parse_args(arguments)
    seeds = range(given.first, given.first + given.count)
    if given.wrong:
        for seed in seeds:
            for label, verdict in verdicts(seed):
                if (verdict in DISPUTED) if not label.error else (verdict in ("agrees", "-")):
                    kind = label.error or "right"
                    print(f"{seed} {kind}: {label.text or '-'} at {label.energy_ev} for {label.element}: {verdict}")
    tallies = measure(seeds)
    for kind, tally in [*sorted(tallies.items()), ("all errors", total(tallies))]:
        shares = [100 * part / max(tally.labels, 1) for part in (tally.flagged, tally.disputed, tally.undecided)]
        print(f"| {kind or 'right'} | {tally.labels} | " + " | ".join(f"{share:.1f} %" for share in shares) + " |")


if __name__ == "__main__":
    main()
