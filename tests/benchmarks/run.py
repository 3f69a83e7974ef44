"""Run the benchmark: `python -m tests.benchmarks.run --set all --count 150 --seeds reported`."""

from __future__ import annotations

import argparse
import json
import time
from collections.abc import Callable, Mapping
from dataclasses import asdict, dataclass
from typing import Any

from ident.spectrum import Spectrum

from .forward import KINDS, Case, make_case
from .plain_way import call_plainly
from .scoring import CALLED, CONFIDENT, Summary, score_case, summarise
from .seeds import NAMED

Caller = Callable[[Spectrum], Mapping[str, float]]


@dataclass(frozen=True, kw_only=True)
class Outcome:
    """One way of calling on one set."""

    way: str
    summary: Summary
    ms_per_spectrum: float


@dataclass(frozen=True, kw_only=True)
class BackgroundOutcome:
    """Calls on smooth backgrounds with noise only."""

    way: str
    spectra: int
    present: tuple[tuple[int, str, float], ...]  # seed, element, probability >= 0.95
    likely: tuple[tuple[int, str, float], ...]  # probability >= 0.5, `present` not counted again
    ms_per_spectrum: float


def ident_caller(*, insulator: bool = False) -> Caller:
    """Return the project's own way; imported here so that the plain way runs without it."""
    from ident import identify

    def call(spectrum: Spectrum) -> Mapping[str, float]:
        answer = identify(spectrum, insulator=True) if insulator else identify(spectrum)
        return {assignment.element: assignment.probability for assignment in answer.assignments}

    return call


def cases_of(kind: str, count: int, seeds: str) -> list[Case]:
    """Make the first `count` cases of a set."""
    chosen = NAMED[seeds]
    if count > len(chosen):
        raise SystemExit(f"the {seeds} seeds are {len(chosen)}; ask for fewer")
    return [make_case(kind, seed) for seed in chosen[:count]]


def run_cases(way: str, call: Caller, cases: list[Case]) -> Outcome:
    """Call every case and score it."""
    started = time.perf_counter()
    calls = [call(case.spectrum) for case in cases]
    spent = time.perf_counter() - started
    scores = [score_case(case, called) for case, called in zip(cases, calls, strict=True)]
    return Outcome(way=way, summary=summarise(scores), ms_per_spectrum=1e3 * spent / max(len(cases), 1))


def run_backgrounds(way: str, call: Caller, cases: list[Case]) -> BackgroundOutcome:
    """Call backgrounds: every element is a false one."""
    started = time.perf_counter()
    called = [(case.seed, element, p) for case in cases for element, p in call(case.spectrum).items()]
    spent = time.perf_counter() - started
    return BackgroundOutcome(
        way=way,
        spectra=len(cases),
        present=tuple(row for row in called if row[2] >= CONFIDENT),
        likely=tuple(row for row in called if CALLED <= row[2] < CONFIDENT),
        ms_per_spectrum=1e3 * spent / max(len(cases), 1),
    )


def describe(outcome: Outcome) -> str:
    """Say an outcome in a few lines."""
    s = outcome.summary
    low, high = s.calibration_error_range
    lines = [
        f"{outcome.way}: F1 {s.f1_mean:.3f} +- {s.f1_mean_sd:.3f} (pooled {s.f1_pooled:.3f}), all right"
        f" {s.all_right:.2f}, right {s.right}, false {s.false}, missed {s.missed},"
        f" confident false {len(s.confident_false)} of {s.confident_calls},"
        f" {outcome.ms_per_spectrum:.0f} ms a spectrum",
        f"  calibration error {s.calibration_error:.3f} ({low:.3f} to {high:.3f}), log loss {s.log_loss:.3f}; said/is: "
        + " ".join(f"{part.probability:.2f}/{part.present:.2f}" for part in s.calibration),
        "  missed most: " + (" ".join(f"{e} {n}" for e, n in s.missed_most) or "none"),
        "  false most: " + (" ".join(f"{e} {n}" for e, n in s.false_most) or "none"),
    ]
    return "\n".join(lines)


def describe_background(outcome: BackgroundOutcome) -> str:
    """Say an outcome on backgrounds in one line, with the calls."""
    shown = " ".join(f"{seed}:{e} {p:.2f}" for seed, e, p in (*outcome.present, *outcome.likely)[:20])
    return (
        f"{outcome.way}: {outcome.spectra} backgrounds, present {len(outcome.present)}, likely"
        f" {len(outcome.likely)}, {outcome.ms_per_spectrum:.0f} ms a spectrum" + (f"\n  {shown}" if shown else "")
    )


def show_wrong(cases: list[Case], call: Caller) -> None:
    """Print every spectrum that was not all right, for the one who mends it."""
    for case in cases:
        calls = call(case.spectrum)
        score = score_case(case, calls)
        if not score.all_right:
            there = " ".join(
                f"{e}({case.significance[e]:.0f} at {case.strongest_ev.get(e, 0.0):.0f})" for e in case.truth
            )
            false = " ".join(f"{e} {calls[e]:.2f}" for e in sorted(score.false)) or "-"
            missed = " ".join(f"{e} {calls.get(e, 0.0):.2f}" for e in sorted(score.missed)) or "-"
            print(f"{case.kind} {case.seed} {case.recipe}: there {there} | false {false} | missed {missed}")
            print(f"    {'; '.join(case.notes)}")


def main(arguments: list[str] | None = None) -> None:
    """Run from the command line."""
    parser = argparse.ArgumentParser(prog="python -m tests.benchmarks.run", description=__doc__)
    parser.add_argument("--set", dest="kind", choices=(*KINDS, "all"), default="surveys")
    parser.add_argument("--count", type=int, default=150)
    parser.add_argument("--seeds", choices=sorted(NAMED), default="tuning")
    parser.add_argument("--insulator", action="store_true", help="tell ident that the sample may charge")
    parser.add_argument("--plain-only", action="store_true", help="leave ident out")
    parser.add_argument("--wrong", action="store_true", help="list the spectra that were not all right")
    parser.add_argument("--json", action="store_true")
    given = parser.parse_args(arguments)
    for kind in KINDS if given.kind == "all" else (given.kind,):
        one = argparse.Namespace(**vars(given))
        one.kind, one.insulator = kind, given.insulator or (given.kind == "all" and kind == "charging")
        run_set(one)


def run_set(given: argparse.Namespace) -> None:
    """Run one set; of all sets, charging is called with what the analyst knows, that the sample may charge."""
    cases = cases_of(given.kind, given.count, given.seeds)
    ways: dict[str, Caller] = {} if given.plain_only else {"ident": ident_caller(insulator=given.insulator)}
    ways["plain way"] = call_plainly
    print_outcomes(given, cases, ways)
    if given.wrong:
        show_wrong(cases, next(iter(ways.values())))


def print_outcomes(given: argparse.Namespace, cases: list[Case], ways: dict[str, Caller]) -> None:
    """Run every way on the same cases and print."""
    results: list[dict[str, Any]] = []
    if not given.json:
        print(f"{given.kind}, {len(cases)} spectra, {given.seeds} seeds")
    for way, call in ways.items():
        outcome: Outcome | BackgroundOutcome
        if given.kind == "background":
            outcome = run_backgrounds(way, call, cases)
            text = describe_background(outcome)
        else:
            outcome = run_cases(way, call, cases)
            text = describe(outcome)
        results.append(asdict(outcome))
        if not given.json:
            print(text, flush=True)
    if given.json:
        print(json.dumps({"set": given.kind, "seeds": given.seeds, "count": len(cases), "ways": results}))


if __name__ == "__main__":
    main()
