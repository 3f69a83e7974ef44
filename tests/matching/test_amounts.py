"""Atomic per cent, and from what amount an absent element would have been called."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from ident import Spectrum, identify, read_spectrum, tables
from ident.identification import Identification
from tests.benchmarks.forward import Case, build_case, draw_setup
from tests.benchmarks.samples import Constituent, draw_technical

DEMO = Path(__file__).parents[2] / "demo_spectra"
SEEDS = range(4_000, 4_020)


def _case(seed: int, extra: tuple[Constituent, ...] = ()) -> Case:
    """A survey, the same sample and setting for a seed, with something more on it."""
    rng = np.random.default_rng(seed)
    recipe, sample = draw_technical(rng)
    setup = draw_setup(rng, "surveys", sample)
    return build_case(rng, setup, sample + extra, kind="surveys", seed=seed, recipe=recipe)


def _strength_at_limit(case: Case, answer: Identification, element: str, percent: float) -> float | None:
    """The forward model's strength for that many atomic per cent beside the strongest of what is there."""
    known = tables.sensitivities()
    there = {a.element: a.abundance.atomic_percent for a in answer.assignments if a.abundance}
    measured = [e for e in case.truth if e in there]
    if not measured:
        return None
    host = max(measured, key=lambda e: there[e])
    ratio = percent / (100.0 - percent) * 100.0 * known[element].sensitivity / known[host].sensitivity / there[host]
    return case.truth[host] * ratio


@pytest.mark.slow
def test_what_is_put_in_at_its_limit_is_called() -> None:
    # Truth: the forward model's own. The limit is meant for 95 of 100 cases; over the 40 or so cases here anything
    # below 80 would be far outside chance.
    found = []
    for seed in SEEDS:
        case = _case(seed)
        answer = identify(case.spectrum)
        limits = [x for x in answer.limits if x.usual and x.atomic_percent < 60 and x.element not in case.truth]
        for limit in limits[:: max(1, len(limits) // 2)]:
            strength = _strength_at_limit(case, answer, limit.element, limit.atomic_percent)
            if strength is None:
                continue
            added = _case(seed, (Constituent(element=limit.element, strength=strength),))
            said = {a.element: a.probability for a in identify(added.spectrum).assignments}
            found.append(said.get(limit.element, 0.0) >= 0.5)
    assert len(found) > 25
    assert np.mean(found) >= 0.8


def test_atomic_per_cents_of_what_is_there_add_up() -> None:
    answer = identify(read_spectrum(DEMO / "bracket_stain.csv", column="sum"))
    amounts = [a.abundance for a in answer.assignments if a.abundance]
    assert sum(amount.atomic_percent for amount in amounts) == pytest.approx(100.0)
    # a factor of two is what published sensitivities promise without a standard; common practice, no source
    assert all(1.3 < amount.factor < 5.0 for amount in amounts)


def test_longer_dwell_sees_less_of_everything() -> None:
    # Ten times the counts: noise falls by the root of ten against the lines; counting statistics.
    energy = np.arange(30.0, 1000.0)
    shape = 4e3 * np.exp(-energy / 400.0) + 400.0 * np.exp(-0.5 * ((energy - 503.0) / 3.0) ** 2)
    limits = []
    for factor in (1.0, 10.0):
        counts = np.random.default_rng(3).poisson(shape * factor).astype(float)
        found = identify(Spectrum.from_arrays(energy, counts)).limits
        limits.append({x.element: x.atomic_percent / (100.0 - x.atomic_percent) for x in found})
    both = limits[0].keys() & limits[1].keys()
    assert len(both) > 20
    assert np.median([limits[1][e] / limits[0][e] for e in both]) < 0.7


def test_what_is_there_or_ruled_out_has_no_limit() -> None:
    answer = identify(read_spectrum(DEMO / "bracket_stain.csv", column="sum"), rule_out=("Mn",))
    named = {a.element for a in answer.assignments if a.probability >= 0.05}
    limited = {x.element for x in answer.limits}
    assert not named & limited
    assert "Mn" not in limited
    assert not limited & {item.element for item in answer.untestable}
